package spectra

// Coupling is one set of equal couplings of a hydrogen: N partners at JHz, or at AltHz where the
// geometry is open.
type Coupling struct {
	N          uint8
	JHz, AltHz float32
	// Small couplings (long-range, to exchanging hydrogens) may or may not be seen.
	Small bool
}

const maxCouplings = 8

// couplings collects the first-order couplings of the hydrogens on a. Equivalent partners do not
// split. J values are the usual textbook ones.
func (p *Predictor) couplings(a int, out []Coupling) []Coupling {
	out = out[:0]
	for _, nb := range p.nb[a] {
		b := int(nb.Atom)
		if p.el[b] == fluorine {
			out = append(out, Coupling{N: 1, JHz: 48, AltHz: 48})
			continue
		}
		if p.hyd[b] == 0 || p.class[a] == p.class[b] || len(out) >= maxCouplings {
			p.farCouplings(a, b, &out)
			continue
		}
		out = append(out, p.vicinal(a, b))
		p.farCouplings(a, b, &out)
	}
	if p.sp[a] == double && p.hyd[a] == 2 {
		out = append(out, Coupling{N: 1, JHz: 1.5, AltHz: 1.5, Small: true})
	}
	return out
}

func (p *Predictor) vicinal(a, b int) Coupling {
	n := p.hyd[b]
	j, alt, small := float32(7), float32(7), false
	switch {
	case p.el[b] != carbon:
		j, alt, small = 6, 6, true
	case p.sp[a] == arene && p.sp[b] == arene:
		j = p.aromaticJ(a, b)
		alt = j
	case p.sp[a] == double && p.sp[b] == double && p.doubleTo(a, carbon) == b:
		if p.ring[a] > 0 && p.ring[a] == p.ring[b] && p.ring[a] < 8 {
			j = 10
			if p.ring[a] == 5 {
				j = 5.7
			}
			alt = j
			break
		}
		if p.hyd[a] == 2 || p.hyd[b] == 2 {
			// a vinyl group: the two hydrogens of CH2 split differently
			if p.hyd[a] == 2 {
				return Coupling{N: 1, JHz: 17, AltHz: 10.4}
			}
			return Coupling{N: 2, JHz: 17, AltHz: 10.4}
		}
		j, alt = 15.7, 10.8
	case p.carbonyl[a] != noCarbonyl || p.carbonyl[b] != noCarbonyl:
		j, alt = 1.8, 1.8
		if p.sp[a] != single && p.sp[b] != single {
			j, alt = 7.8, 7.8
		} else {
			small = true
		}
	case p.sp[a] == double && p.sp[b] == double:
		j, alt = 10.8, 10.8
	case p.ring[a] == 3 && p.ring[b] == 3:
		j, alt = 4.1, 2.6
	case p.ring[a] > 0 && p.ring[a] <= 6 && p.ring[b] > 0 && p.ring[b] <= 6:
		j, alt = 6, 9
	case p.sp[a] == triple || p.sp[b] == triple:
		j, alt, small = 2.5, 2.5, true
	}
	return Coupling{N: n, JHz: j, AltHz: alt, Small: small}
}

// aromaticJ is the ortho coupling in the ring that holds both atoms.
func (p *Predictor) aromaticJ(a, b int) float32 {
	five, hetero, heteroNext := false, uint8(0), false
	for _, r := range p.ringOf {
		if !inRingList(r, a) || !inRingList(r, b) {
			continue
		}
		five = len(r) == 5
		for _, x := range r {
			if p.el[x] != carbon {
				hetero = p.el[x]
				if p.bonded(a, int(x)) || p.bonded(b, int(x)) {
					heteroNext = true
				}
			}
		}
	}
	switch {
	case five && hetero == oxygen && heteroNext:
		return 1.9
	case five && hetero == oxygen:
		return 3.3
	case five && hetero == sulfur && heteroNext:
		return 5.1
	case five && hetero == sulfur:
		return 3.6
	case five:
		return 3
	case hetero == nitrogen && heteroNext:
		return 5
	}
	return 8
}

func (p *Predictor) bonded(a, b int) bool {
	for _, nb := range p.nb[a] {
		if int(nb.Atom) == b {
			return true
		}
	}
	return false
}

// farCouplings adds what reaches a over b: fluorine three bonds off, meta hydrogens, allylic ones.
func (p *Predictor) farCouplings(a, b int, out *[]Coupling) {
	allylic := p.sp[a] == double && p.sp[b] == double || p.sp[b] == double && p.carbonyl[b] == noCarbonyl
	for _, nb := range p.nb[b] {
		c := int(nb.Atom)
		if c == a || len(*out) >= maxCouplings {
			continue
		}
		switch {
		case p.el[c] == fluorine && p.sp[a] == arene:
			*out = append(*out, Coupling{N: 1, JHz: 8.7, AltHz: 8.7})
		case p.el[c] == fluorine && p.sp[a] == single:
			*out = append(*out, Coupling{N: 1, JHz: 24, AltHz: 10})
		case p.hyd[c] > 0 && p.class[c] != p.class[a] && p.sp[a] == arene && p.sp[b] == arene && p.sp[c] == arene:
			*out = append(*out, Coupling{N: 1, JHz: 2, AltHz: 1.2, Small: true})
		case allylic && p.hyd[c] > 0 && p.class[c] != p.class[a] && p.el[c] == carbon:
			*out = append(*out, Coupling{N: p.hyd[c], JHz: 1.4, AltHz: 0.5, Small: true})
		case p.sp[a] == arene && p.sp[b] == arene && p.el[c] == carbon && p.sp[c] == arene:
			for _, nb2 := range p.nb[c] {
				if d := int(nb2.Atom); d != b && p.el[d] == fluorine && len(*out) < maxCouplings {
					*out = append(*out, Coupling{N: 1, JHz: 5.3, AltHz: 8, Small: true})
				}
			}
		}
	}
}
