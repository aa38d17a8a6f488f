package spectra

// ringLetters writes the ring around a, starting at a, in the letters of the ring table.
func (p *Predictor) ringLetters(a int, ring []int32, buf []byte) []byte {
	n := len(ring)
	start := 0
	for i, x := range ring {
		if int(x) == a {
			start = i
		}
	}
	for i := range n {
		buf = append(buf, p.ringLetter(int(ring[(start+i)%n])))
	}
	return buf
}

func (p *Predictor) ringLetter(x int) byte {
	switch p.el[x] {
	case oxygen:
		return 'O'
	case nitrogen:
		if p.sp[x] == single {
			return 'N'
		}
		return 'n'
	case sulfur:
		if p.deg[x] == 2 {
			return 'S'
		}
		return 's'
	case carbon:
		switch {
		case p.sp[x] == arene:
			return 'A'
		case p.carbonyl[x] != noCarbonyl:
			return 'K'
		case p.sp[x] == double:
			if y := p.doubleTo(x, carbon); y >= 0 && p.ring[y] == 0 {
				return 'x'
			}
			return 'E'
		case p.sp[x] == single:
			return 'C'
		}
	}
	return '?'
}

// bestRing returns the smallest ring through a that the table knows, else the smallest.
func (p *Predictor) bestRing(a int, table map[string][]float32) (ring []int32, value float32, ok bool) {
	var buf [16]byte
	for _, r := range p.ringOf {
		if len(r) > len(buf) || ring != nil && (ok && len(r) >= len(ring)) {
			continue
		}
		has := false
		for _, x := range r {
			has = has || int(x) == a
		}
		if !has {
			continue
		}
		row, known := table[string(p.ringLetters(a, r, buf[:0]))]
		if known && row[0] != 0 {
			return r, row[0], true
		}
		if ring == nil || len(r) < len(ring) {
			ring = r
		}
	}
	return ring, 0, false
}

func (p *Predictor) ringValue(a int, table map[string][]float32) (float32, bool) {
	_, v, ok := p.bestRing(a, table)
	return v, ok
}

// ringCarbon predicts an sp3 carbon of a ring: parent value plus groups on the ring, or the
// open-chain sum moved by ring size.
func (p *Predictor) ringCarbon(a int) shift {
	ring, v, ok := p.bestRing(a, p.t.ringCarbon)
	if ring == nil {
		return p.chainCarbon(a)
	}
	if !ok {
		c := p.chainCarbon(a)
		size := min(len(ring), 7) - 3
		branch := -p.branchingOf(a) * 0.6
		return shift{c.mean + p.t.openChain[size] + branch, 4.5}
	}
	subs := 0
	mean := v
	n := len(ring)
	at := 0
	for i, x := range ring {
		if int(x) == a {
			at = i
		}
	}
	for i, x := range ring {
		d := (i - at + n) % n
		d = min(d, n-d)
		if d > 2 {
			continue
		}
		first := true
		for _, nb := range p.nb[x] {
			y := int(nb.Atom)
			if inRingList(ring, y) || p.order[nb.Bond] == 2 && p.el[y] == oxygen || p.sp[x] == arene {
				continue
			}
			subs++
			mean += p.onRing(int(x), y, d, first)
			first = false
		}
	}
	mean += p.ringCorrections(a, ring)
	return shift{mean, 1.8 + 0.5*float32(min(subs, 5))}
}

func inRingList(ring []int32, y int) bool {
	for _, x := range ring {
		if int(x) == y {
			return true
		}
	}
	return false
}

// onRing is the effect of group y on ring atom x upon a ring carbon d bonds from x.
func (p *Predictor) onRing(x, y, d int, first bool) float32 {
	g := p.groupSeen(x, y)
	table := &p.t.alkane[g]
	plain := g >= Alkyl && g <= RingAlkyl && g != CF3
	if plain {
		table = &p.t.alkane[Alkyl]
	}
	switch d {
	case 0:
		v := table[0] + p.t.onRing.alpha
		if !first {
			v = table[0] + p.t.onRing.gem
		}
		if p.ring[x] == 3 {
			v = 0.5*table[0] + 2 // propylene oxide, styrene oxide against oxirane, recalled
		}
		if plain || g == OR || g == NR2 {
			for _, nb := range p.nb[y] {
				if z := int(nb.Atom); z != x {
					h := p.groupSeen(y, z)
					if h >= Alkyl && h <= RingAlkyl {
						h = Alkyl
					}
					v += 0.6 * p.t.alkane[h][1]
				}
			}
		}
		return v
	case 1:
		v := table[1] + p.t.onRing.beta
		if plain {
			for _, nb := range p.nb[y] {
				if int(nb.Atom) != x {
					v -= 1.5
				}
			}
		}
		return v
	}
	return table[2] * p.t.onRing.gamma
}

// ringCorrections applies the acetal and aryl corrections for groups outside the ring's own row.
func (p *Predictor) ringCorrections(a int, ring []int32) float32 {
	nO, exoO := 0, 0
	for _, nb := range p.nb[a] {
		if p.el[nb.Atom] == oxygen {
			nO++
			if !inRingList(ring, int(nb.Atom)) {
				exoO++
			}
		}
	}
	if nO >= 2 && exoO > 0 {
		return p.t.correction[twoO] * float32(exoO) * 0.7
	}
	return 0
}

// alkeneCarbon predicts a carbon of C=C.
func (p *Predictor) alkeneCarbon(a int) shift {
	b := p.doubleTo(a, carbon)
	mean, spread := p.t.alkeneBase, float32(3.2)
	if p.ring[a] > 0 {
		if ring, v, ok := p.bestRing(a, p.t.ringCarbon); ok {
			mean = v
			for _, nb := range p.nb[a] {
				if y := int(nb.Atom); y != b && !inRingList(ring, y) {
					mean += p.alkeneSide(a, y, true, 0.75)
				}
			}
			for _, nb := range p.nb[b] {
				if y := int(nb.Atom); y != a && !inRingList(ring, y) {
					mean += p.alkeneSide(b, y, false, 0.8)
				}
			}
			return shift{mean, 3.2}
		}
		spread += 1.5
	}
	near, far, groups := 0, 0, 0
	for _, nb := range p.nb[a] {
		if y := int(nb.Atom); y != b {
			mean += p.alkeneSide(a, y, true, 1)
			if p.sp[y] == single && p.el[y] == carbon {
				near++
			} else {
				groups++
			}
		}
	}
	for _, nb := range p.nb[b] {
		if y := int(nb.Atom); y != a {
			mean += p.alkeneSide(b, y, false, 1)
			if p.sp[y] == single && p.el[y] == carbon {
				far++
			} else {
				groups++
			}
		}
	}
	if near == 2 {
		mean += p.t.steric["two-near"]
	}
	if far == 2 {
		mean += p.t.steric["two-far"]
	}
	if p.sp[b] == cumulene {
		mean -= 47 // allene ends stand near 75 + alkyl increments; common practice
		spread = 5
	}
	if groups > 1 {
		spread += 0.8
	}
	return shift{mean, spread}
}

// alkeneSide is the effect of the group y on x, which is the observed carbon (near) or its partner.
func (p *Predictor) alkeneSide(x, y int, near bool, scale float32) float32 {
	g := p.groupSeen(x, y)
	t := p.t
	if t.alkeneWhole[g] {
		if near {
			return t.alkeneNear[g] * scale
		}
		return t.alkeneFar[g] * scale
	}
	if p.el[y] != carbon || p.sp[y] != single {
		return 0
	}
	inc := &t.chainNear
	if !near {
		inc = &t.chainFar
	}
	sum := inc[0] * scale
	betas := 0
	for _, nb := range p.nb[y] {
		z := int(nb.Atom)
		if z == x {
			continue
		}
		betas++
		if p.el[z] == carbon {
			sum += inc[1] * scale
		}
		for _, nb2 := range p.nb[z] {
			if int(nb2.Atom) != y && p.el[nb2.Atom] == carbon {
				sum += inc[2]
			}
		}
	}
	if near && betas >= 2 {
		sum += t.steric["two-beta"]
	}
	return sum
}
