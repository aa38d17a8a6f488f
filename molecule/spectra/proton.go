package spectra

// protonHere predicts the 1H shift of the hydrogens on carbon a. For a terminal =CH2 it is the mean
// of the two; see terminalPair.
func (p *Predictor) protonHere(a int) shift {
	switch {
	case p.sp[a] == arene:
		return p.areneProton(a)
	case p.carbonyl[a] != noCarbonyl:
		return p.acylProton(a)
	case p.sp[a] == single:
		return p.alkylProton(a)
	case p.sp[a] == triple:
		return p.alkyneProton(a)
	case p.doubleTo(a, carbon) >= 0:
		one, two := p.alkeneProton(a)
		d := max(one.mean-two.mean, two.mean-one.mean)
		b := p.doubleTo(a, carbon)
		if p.hyd[a] == 1 && p.hyd[b] == 1 && p.ring[a] == 0 {
			// the group of the far carbon is cis to the hydrogen in the E form, which is the usual one
			return shift{one.mean, one.spread + d/4}
		}
		if p.ring[a] > 0 && p.ring[a] < 8 && p.hyd[b] == 1 {
			return shift{two.mean, two.spread}
		}
		return shift{(one.mean + two.mean) / 2, one.spread + d/2}
	}
	if p.doubleTo(a, nitrogen) >= 0 {
		for _, nb := range p.nb[a] {
			if p.el[nb.Atom] == carbon && p.sp[nb.Atom] == single {
				return shift{7.5, 0.35}
			}
		}
		return shift{8.2, 0.3}
	}
	return shift{6, 2}
}

// alkylProton adds alpha, beta and gamma increments; where two strong groups meet on one carbon the
// mean with the methylene rule is taken, because each alone is off in opposite directions.
func (p *Predictor) alkylProton(a int) shift {
	t := p.t
	h := min(int(p.hyd[a]), 3)
	if h == 0 {
		return shift{1.2, 1}
	}
	sum, shoolery := t.protonBase[h], t.methyleneBase
	strong, oxygens, esters, halogens := 0, 0, 0, 0
	further := float32(0)
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		g := p.groupSeen(a, x)
		sum += t.protonSP3[g][0]
		shoolery += t.methylene[g]
		if t.protonSP3[g][0] > 0 {
			strong++
		}
		switch {
		case p.el[x] == oxygen:
			oxygens++
			if g == OCOR || g == OCOAr || g == NHCOR {
				esters++
			}
		case isHalogen(p.el[x]) || g == NHCOR:
			halogens++
		}
		if g >= Alkyl && g <= RingAlkyl {
			further += p.furtherProton(a, x)
		}
	}
	sum += further
	spread := 0.13 + 0.12*further
	if strong >= 2 && h <= 2 {
		sum = (sum + shoolery) / 2
		spread = 0.25
	}
	if oxygens >= 2 {
		sum -= [4]float32{0, 0.9, 0.55, 0}[h] // acetals; dimethoxymethane 4.58, 1,1-diethoxyethane 4.66, recalled
		spread = 0.35
	}
	if h == 1 && strong == 1 && esters > 0 {
		sum += 0.6 // isopropyl acetate 4.99, recalled
	}
	if h == 1 && strong == 1 && halogens > 0 {
		sum += 0.45 // 2-chloropropane 4.14, 2-bromopropane 4.29, N-isopropylacetamide 4.08, recalled
	}
	if h == 1 {
		spread += 0.08
	}
	if h == 3 {
		sum += p.methylProton(a)
		if strong == 0 {
			spread = 0.07 + 0.22*further
		}
	}
	if p.ring[a] > 0 {
		sum += p.ringProtonEffect(a, strong)
		spread += 0.15
	}
	return shift{sum, spread}
}

// methylProton corrects methyl groups: on an ether O (dimethoxyethane 3.40, methyl butyl ether 3.33)
// and ortho to an acyl group (2-methylbenzaldehyde 2.67, methyl 2-methylbenzoate 2.60), recalled.
func (p *Predictor) methylProton(a int) float32 {
	x := int(p.nb[a][0].Atom)
	switch p.groupSeen(a, x) {
	case OR:
		return 0.33
	case Aryl:
		for _, nb := range p.nb[x] {
			for _, nb2 := range p.nb[nb.Atom] {
				if p.carbonyl[nb2.Atom] != noCarbonyl && int(nb2.Atom) != x && !p.aromatic[nb2.Atom] && p.aromatic[nb.Atom] {
					return 0.28
				}
			}
		}
	}
	return 0
}

// furtherProton adds beta and gamma increments through the sp3 carbon x.
func (p *Predictor) furtherProton(a, x int) float32 {
	t, sum := p.t, float32(0)
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		if y == a {
			continue
		}
		g := p.groupSeen(x, y)
		sum += t.protonSP3[g][1]
		if g >= Alkyl && g <= RingAlkyl {
			for _, nb2 := range p.nb[y] {
				if z := int(nb2.Atom); z != x && z != a {
					sum += t.protonSP3[p.groupSeen(y, z)][2]
				}
			}
		}
	}
	return sum
}

// ringProtonEffect moves ring hydrogens by ring size. Values from the parent rings (cyclopropane 0.22,
// oxirane 2.54, cyclobutane 1.96, cyclopentane 1.51, cyclohexane 1.43, tetrahydrofuran 3.75), recalled.
func (p *Predictor) ringProtonEffect(a, strong int) float32 {
	switch p.ring[a] {
	case 3:
		if strong > 0 {
			return -0.75 - 0.3*float32(strong-1)
		}
		return -0.9
	case 4:
		return 0.6
	case 5:
		if strong > 0 {
			return 0.2
		}
		return 0.35
	case 6:
		if strong > 0 {
			return 0.1
		}
		return 0.25
	}
	return 0.15
}

// acylProton covers aldehydes, formates and formamides; common practice.
func (p *Predictor) acylProton(a int) shift {
	switch p.carbonyl[a] {
	case arAldehyde:
		for _, nb := range p.nb[a] {
			x := int(nb.Atom)
			for _, nb2 := range p.nb[x] {
				if p.aromatic[x] && p.aromatic[nb2.Atom] && p.deg[nb2.Atom] == 3 && p.ringDegree(int(nb2.Atom)) == 2 {
					return shift{10.2, 0.18} // an ortho group
				}
			}
		}
		return shift{9.97, 0.12}
	case enal:
		return shift{9.6, 0.22}
	case formate:
		return shift{8.07, 0.08}
	case formamide:
		return shift{8.1, 0.25}
	}
	return shift{9.72, 0.1}
}

func (p *Predictor) alkyneProton(a int) shift {
	far := -1
	for _, nb := range p.nb[a] {
		for _, nb2 := range p.nb[nb.Atom] {
			if int(nb2.Atom) != a {
				far = int(nb2.Atom)
			}
		}
	}
	switch {
	case far >= 0 && p.sp[far] == arene:
		return shift{3.06, 0.12}
	case far >= 0 && p.carbonyl[far] != noCarbonyl:
		return shift{3.1, 0.3}
	case far >= 0 && p.bearsHetero(far):
		return shift{2.45, 0.12}
	}
	return shift{1.95, 0.1}
}

// alkeneProton returns the two values that the hydrogens on a can have: with the first group of the
// far carbon cis and the second trans, and the other way round.
func (p *Predictor) alkeneProton(a int) (one, two shift) {
	t := p.t
	b := p.doubleTo(a, carbon)
	base := t.protonAlkeneBase
	for _, nb := range p.nb[a] {
		if y := int(nb.Atom); y != b {
			base += t.protonAlkene[p.alkeneGroup(a, y)][0]
		}
	}
	var cis, trans [2]float32
	i := 0
	for _, nb := range p.nb[b] {
		if y := int(nb.Atom); y != a && i < 2 {
			g := p.alkeneGroup(b, y)
			cis[i], trans[i] = t.protonAlkene[g][1], t.protonAlkene[g][2]
			i++
		}
	}
	spread := float32(0.18)
	if p.ring[a] > 0 && p.ring[a] == p.ring[b] {
		// in a small ring the chain of the ring is cis: the hydrogen is trans to it
		spread = 0.3
	}
	if p.sp[b] == cumulene {
		base -= 0.5
		spread = 0.4
	}
	return shift{base + cis[0] + trans[1], spread}, shift{base + trans[0] + cis[1], spread}
}

// alkeneGroup maps a group to its row in the alkene table, where rings have their own alkyl row.
func (p *Predictor) alkeneGroup(x, y int) Group {
	g := p.groupSeen(x, y)
	if g >= Alkyl && g <= CR3 && p.ring[y] > 0 && p.ring[x] > 0 {
		return RingAlkyl
	}
	return g
}

// areneProton is the parent's value plus the benzene increments.
func (p *Predictor) areneProton(a int) shift {
	base, known := p.t.system[p.systemCode[a]]
	mean, spread := base.proton, float32(0.11)
	if !known || mean == 0 {
		mean, spread = 7.4, 0.5
	} else if base.system != "benzene" {
		spread = 0.17
	}
	total := 0
	p.eachRingGroup(a, func(g Group, rel int, weight float32, at, x int) {
		total++
		mean += weight * p.t.protonBenzene[g][rel]
	})
	if total > 1 {
		spread += 0.04 * float32(total-1)
	}
	return shift{mean, spread}
}

// exchange is the usual range of a hydrogen on O, N or S (ppm, CDCl3); common practice.
type exchange struct {
	lo, hi float32
	// seen is how often the signal is listed at all: 1 nearly always, 0 seldom.
	seen float32
}

func (p *Predictor) exchangeRange(a int) exchange {
	switch p.el[a] {
	case oxygen:
		return p.hydroxylRange(a)
	case sulfur:
		for _, nb := range p.nb[a] {
			if p.sp[nb.Atom] == arene {
				return exchange{3.2, 3.7, 0.9}
			}
		}
		return exchange{1.1, 2.1, 0.8}
	}
	return p.aminoRange(a)
}

func (p *Predictor) hydroxylRange(a int) exchange {
	if p.deg[a] == 0 {
		return exchange{1.4, 4.8, 0.3}
	}
	x := int(p.nb[a][0].Atom)
	switch {
	case p.el[x] != carbon:
		return exchange{7, 11, 0.6} // oximes, hydroxamic acids
	case p.carbonyl[x] != noCarbonyl:
		return exchange{9, 13, 0.7}
	case p.sp[x] == arene:
		for _, nb := range p.nb[x] {
			for _, nb2 := range p.nb[nb.Atom] {
				if y := int(nb2.Atom); y != x && p.carbonyl[y] != noCarbonyl && !p.aromatic[y] {
					return exchange{9.5, 12.8, 0.85} // chelated to an ortho carbonyl
				}
			}
		}
		return exchange{4.4, 7.5, 0.75}
	case p.sp[x] == double:
		return exchange{5, 16, 0.6}
	}
	return exchange{0.9, 4, 0.7}
}

func (p *Predictor) aminoRange(a int) exchange {
	if p.aromatic[a] {
		base := p.t.system[p.systemCode[a]].proton
		if base > 0 {
			return exchange{base - 0.6, base + 1.2, 0.85}
		}
		return exchange{8, 13, 0.7}
	}
	acyl, aryl, sulfonyl := 0, 0, 0
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		switch {
		case p.carbonyl[x] != noCarbonyl:
			acyl++
		case p.el[x] == carbon && p.sp[x] == arene:
			aryl++
		case p.el[x] == sulfur:
			sulfonyl++
		}
	}
	switch {
	case acyl >= 2:
		return exchange{7.8, 11, 0.8}
	case acyl == 1 && aryl > 0:
		return exchange{7, 9.6, 0.85}
	case acyl == 1:
		return exchange{5.2, 8, 0.85}
	case sulfonyl > 0:
		return exchange{4.4, 8, 0.8}
	case p.sp[a] == double:
		return exchange{7, 12, 0.5}
	case aryl > 0:
		return exchange{3.2, 5.8, 0.85}
	}
	return exchange{0.8, 3, 0.55}
}
