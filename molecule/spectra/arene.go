package spectra

// relation of an aromatic atom to a group on the same ring system.
const (
	ipso = iota
	ortho
	meta
	para
)

// ringRelation returns how atom b of the aromatic system stands to a: ipso, ortho, meta or para and
// how much of the benzene increment reaches it; 0 where nothing is known to.
func (p *Predictor) ringRelation(a, b int) (rel int, weight float32) {
	if a == b {
		return ipso, 1
	}
	for _, nb := range p.nb[a] {
		if int(nb.Atom) == b && p.aromaticBond(nb) {
			return ortho, 1
		}
	}
	best, bestWeight := -1, float32(0)
	for _, r := range p.ringOf {
		i, j := -1, -1
		for k, x := range r {
			if int(x) == a {
				i = k
			}
			if int(x) == b {
				j = k
			}
		}
		if i < 0 || j < 0 {
			continue
		}
		n := len(r)
		d := (i - j + n) % n
		d = min(d, n-d)
		switch {
		case n == 6 && d == 2:
			best, bestWeight = meta, 1
		case n == 6 && d == 3:
			best, bestWeight = para, 1
		case n == 5 && d == 2:
			best, bestWeight = meta, 1
			if p.el[p.between(r, i, j)] != carbon {
				best, bestWeight = para, 0.6
			}
		}
	}
	return best, bestWeight
}

// between returns the atom of ring r between two places that are two apart.
func (p *Predictor) between(r []int32, i, j int) int {
	n := len(r)
	if (i+2)%n == j {
		return int(r[(i+1)%n])
	}
	return int(r[(j+1)%n])
}

// eachRingGroup calls use for every group on the aromatic system of a that reaches a.
func (p *Predictor) eachRingGroup(a int, use func(g Group, rel int, weight float32, at, x int)) {
	for b := range p.n {
		if !p.aromatic[b] || p.deg[b] < 3 || p.ringDegree(b) != 2 {
			continue
		}
		rel, weight := p.ringRelation(a, b)
		if rel < 0 || weight == 0 {
			continue
		}
		for _, nb := range p.nb[b] {
			x := int(nb.Atom)
			if p.aromaticBond(nb) || p.order[nb.Bond] == 2 && p.el[x] == oxygen {
				continue
			}
			if p.el[b] == nitrogen {
				continue // the table has its own rows for N-substituted parents
			}
			use(p.groupSeen(b, x), rel, weight, b, x)
		}
	}
}

// areneCarbon is the parent's value plus the benzene increments of the groups on the ring.
func (p *Predictor) areneCarbon(a int) shift {
	base, known := p.t.system[p.systemCode[a]]
	mean, spread := base.carbon, float32(1.3)
	if !known || mean == 0 {
		mean, spread = p.unlistedArene(a), 6
	} else if base.system != "benzene" {
		spread = 1.9
	}
	orthos, total := 0, 0
	p.eachRingGroup(a, func(g Group, rel int, weight float32, at, x int) {
		total++
		if rel <= ortho {
			orthos++
		}
		if g == Other {
			spread += 3
		}
		mean += weight * p.t.benzene[g][rel]
		if at == a && rel == ipso {
			mean += p.chelateIpso(a, x)
		}
		if p.ringFused(at, x) {
			mean += p.fusedEffect(rel, at, x)
			spread += 0.5
		}
	})
	if orthos > 1 {
		spread += 0.6 * float32(orthos-1)
	}
	if total > 2 {
		spread += 0.25 * float32(total-2)
	}
	return shift{mean, spread}
}

// chelateIpso moves the two ring carbons between which a hydrogen bridge OH...O=C or NH...O=C stands.
func (p *Predictor) chelateIpso(a, x int) float32 {
	if p.carbonyl[x] != noCarbonyl && !p.aromatic[x] {
		switch p.orthoDonor(a) {
		case oxygen:
			return p.t.chelateOH.acylIpso
		case nitrogen:
			return p.t.chelateNH.acylIpso
		}
		return 0
	}
	if p.hyd[x] == 0 || p.el[x] != oxygen && p.el[x] != nitrogen {
		return 0
	}
	for _, nb := range p.nb[a] {
		for _, nb2 := range p.nb[nb.Atom] {
			if y := int(nb2.Atom); p.aromatic[nb.Atom] && !p.aromatic[y] && p.carbonyl[y] != noCarbonyl {
				if p.el[x] == oxygen {
					return p.t.chelateOH.donorIpso
				}
				return p.t.chelateNH.donorIpso
			}
		}
	}
	return 0
}

// ringFused reports whether the bond from aromatic atom at to x closes a ring fused to the arene.
func (p *Predictor) ringFused(at, x int) bool {
	b := p.m.BondBetween(at, x)
	return b >= 0 && p.m.Bond(b).Ring
}

// fusedEffect moves the carbons of an arene that carries a saturated ring: a five-membered one pulls
// the joining carbon down field and its ortho neighbour up (indane 144.1, 124.4 against o-xylene).
// Values derived from indane, tetralin, benzodioxole and 2,3-dihydrobenzofuran, recalled.
func (p *Predictor) fusedEffect(rel, at, x int) float32 {
	size := p.m.SmallestBondRing(p.m.BondBetween(at, x))
	switch {
	case size == 5 && rel == ipso:
		return 4
	case size == 5 && rel == ortho:
		return -3
	}
	return 0
}

// unlistedArene guesses a ring carbon of a system without rows: benzene plus nitrogen effects.
func (p *Predictor) unlistedArene(a int) float32 {
	if p.carbonyl[a] != noCarbonyl {
		return p.t.carbonyl[p.carbonyl[a]].carbon.mean
	}
	mean := p.t.benzeneBase
	for b := range p.n {
		if b == a || !p.aromatic[b] || p.el[b] == carbon {
			continue
		}
		rel, weight := p.ringRelation(a, b)
		switch {
		case rel < 0:
		case p.el[b] == nitrogen && p.deg[b] == 2 && p.hyd[b] == 0:
			mean += weight * p.t.nitrogen[rel-1]
		case rel == ortho && p.el[b] == oxygen:
			mean += 18
		case rel == meta && p.el[b] != nitrogen:
			mean -= 10
		case rel == meta:
			mean -= 14
		}
	}
	if p.ringDegree(a) == 3 {
		mean += 5
	}
	return mean
}
