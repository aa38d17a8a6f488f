package spectra

import "shelfward/molecule"

// Oddity is an arrangement that chemists seldom find in a bottle: it costs likelihood, it never
// excludes.
type Oddity struct {
	Name string
	Cost float32
}

// oddities and their costs (drop in log-likelihood): judgement of ours, common practice.
var (
	oddEnol       = Oddity{"an enol", 3}
	oddHemiacetal = Oddity{"a hemiacetal or its nitrogen or sulfur kin", 2.5}
	oddGemDiol    = Oddity{"two OH on one carbon", 4}
	oddPeroxide   = Oddity{"an O-O bond", 3.5}
	oddHeteroBond = Oddity{"a bond between N, O, S or halogen atoms outside the usual groups", 2}
	oddHypohalite = Oddity{"halogen on O or N", 5}
	oddSmallRing  = Oddity{"a three- or four-membered ring", 0.7}
	oddStrained   = Oddity{"a multiple bond in a small ring", 3.5}
	oddImpossible = Oddity{"a triple bond or cumulated bonds in a ring under eight", 9}
	oddCumulene   = Oddity{"cumulated double bonds", 2}
	oddImidic     = Oddity{"OH or SH on C=N", 4.5}
	oddImineNH    = Oddity{"a C=N-H", 2}
	oddEnamine    = Oddity{"NH on C=C", 1.5}
	oddCarbamic   = Oddity{"a carbonic or carbamic acid", 4.5}
	oddYnol       = Oddity{"OH or NH on C#C", 6}
	oddBicycle    = Oddity{"small rings sharing a bond", 2.5}
	oddBridgehead = Oddity{"a bridgehead double bond", 6}
	oddCyclophane = Oddity{"a short bridge between meta or para places of an aromatic ring", 9}
	oddSystem     = Oddity{"an aromatic ring system without table", 1.2}
	oddThial      = Oddity{"a C=S outside thioamides and their kin", 2.5}
)

// Strangeness sums the oddities of m, which must be the molecule last predicted.
func (p *Predictor) Strangeness(m *molecule.Molecule) float32 {
	sum := float32(0)
	p.eachOddity(m, func(o *Oddity, times int) { sum += o.Cost * float32(times) })
	return sum
}

// Oddities lists them in words.
func Oddities(m *molecule.Molecule) []Oddity {
	p := NewPredictor()
	p.perceive(m)
	var out []Oddity
	p.eachOddity(m, func(o *Oddity, times int) { out = append(out, *o) })
	return out
}

func (p *Predictor) eachOddity(m *molecule.Molecule, yield func(o *Oddity, times int)) {
	if p.m != m {
		p.perceive(m)
	}
	for b := range m.NumBonds() {
		p.bondOddity(b, yield)
	}
	unlisted := false
	for a := range p.n {
		if p.el[a] == carbon {
			p.carbonOddity(a, yield)
			if p.aromatic[a] {
				if _, ok := p.t.system[p.systemCode[a]]; !ok {
					unlisted = true
				}
			}
		}
		if p.el[a] == nitrogen && p.hyd[a] > 0 && p.doubleTo(a, carbon) >= 0 && !p.aromatic[a] {
			yield(&oddImineNH, 1)
		}
	}
	if unlisted {
		yield(&oddSystem, 1)
	}
	small := 0
	for i, r := range p.ringOf {
		if len(r) <= 4 {
			small++
		}
		for _, q := range p.ringOf[:i] {
			if len(r)+len(q) <= 9 && len(r) < 6 && len(q) < 6 && shareBond(r, q) && min(len(r), len(q)) <= 4 {
				yield(&oddBicycle, 1)
			}
		}
	}
	if small > 0 {
		yield(&oddSmallRing, small)
	}
	if p.shortBridge() {
		yield(&oddCyclophane, 1)
	}
	p.bridgeheads(m, yield)
}

// shortBridge reports a ring under fourteen members, not aromatic itself, that runs through three or more
// atoms of one aromatic ring.
func (p *Predictor) shortBridge() bool {
	for _, r := range p.ringOf {
		if len(r) > 13 || p.allAromatic(r) {
			continue
		}
		for _, q := range p.ringOf {
			if !p.allAromatic(q) {
				continue
			}
			shared := 0
			for _, x := range r {
				if inRingList(q, int(x)) {
					shared++
				}
			}
			if shared > 2 {
				return true
			}
		}
	}
	return false
}

func (p *Predictor) allAromatic(r []int32) bool {
	for _, x := range r {
		if !p.aromatic[x] {
			return false
		}
	}
	return true
}

// shareBond reports whether two rings have at least two atoms in common.
func shareBond(r, q []int32) bool {
	n := 0
	for _, x := range r {
		for _, y := range q {
			if x == y {
				n++
			}
		}
	}
	return n >= 2
}

// bridgeheads marks a double bond at an atom of two rings that share three atoms or more, both under
// eight members: it cannot be flat (Bredt).
func (p *Predictor) bridgeheads(m *molecule.Molecule, yield func(o *Oddity, times int)) {
	for i, r := range p.ringOf {
		for _, q := range p.ringOf[:i] {
			if len(r) > 7 || len(q) > 7 {
				continue
			}
			var shared [16]int32
			n := 0
			for _, x := range r {
				if inRingList(q, int(x)) && n < len(shared) {
					shared[n] = x
					n++
				}
			}
			if n < 3 {
				continue
			}
			for _, x := range shared[:n] {
				inside := 0
				for _, nb := range p.nb[x] {
					if inRingList(shared[:n], int(nb.Atom)) {
						inside++
					}
				}
				if inside == 1 && p.sp[x] != single {
					yield(&oddBridgehead, 1)
				}
			}
		}
	}
}

func (p *Predictor) bondOddity(b int, yield func(o *Oddity, times int)) {
	bond := p.m.Bond(b)
	x, y := int(bond.A), int(bond.B)
	ex, ey := p.el[x], p.el[y]
	if bond.Ring && !bond.Aromatic && bond.Order >= 2 {
		size := p.m.SmallestBondRing(b)
		switch {
		case size < 8 && (bond.Order == 3 || p.sp[x] == cumulene || p.sp[y] == cumulene):
			yield(&oddImpossible, 1)
		case size <= 4:
			yield(&oddStrained, 1)
		}
	}
	if ex == carbon || ey == carbon || bond.Aromatic {
		return
	}
	if ex > ey {
		x, y, ex, ey = y, x, ey, ex
	}
	switch {
	case ex == oxygen && ey == oxygen:
		yield(&oddPeroxide, 1)
	case isHalogen(ex) || isHalogen(ey):
		yield(&oddHypohalite, 1)
	case ex == nitrogen && (ey == nitrogen || ey == oxygen):
		if p.usualNitrogen(x, y) {
			return
		}
		yield(&oddHeteroBond, 1)
	case ey == sulfur && (p.doubleTo(y, oxygen) >= 0 || ex == sulfur):
	case ey == sulfur && bond.Order == 2 && ex == oxygen:
	case ey == phosphor || ex == phosphor || ex == silicon || ey == silicon || ex == boron:
	default:
		yield(&oddHeteroBond, 1)
	}
}

// usualNitrogen accepts nitro, N-oxide, azide, azo, oxime, hydrazone and hydrazide bonds.
func (p *Predictor) usualNitrogen(x, y int) bool {
	if p.charge[x] != 0 || p.charge[y] != 0 || p.aromatic[x] || p.aromatic[y] {
		return true
	}
	if p.sp[x] != single || p.sp[y] != single {
		return p.doubleTo(x, carbon) >= 0 || p.doubleTo(y, carbon) >= 0 || p.el[y] == nitrogen && p.doubleTo(x, nitrogen) == y && p.hyd[x]+p.hyd[y] == 0
	}
	return p.el[y] == nitrogen && (p.carbonylBeside(x) || p.carbonylBeside(y) || p.arylBeside(x) || p.arylBeside(y))
}

func (p *Predictor) arylBeside(a int) bool {
	for _, nb := range p.nb[a] {
		if p.sp[nb.Atom] == arene {
			return true
		}
	}
	return false
}

func (p *Predictor) carbonOddity(a int, yield func(o *Oddity, times int)) {
	var free, held, nh int // OH or SH; O, N, S without; NH
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		if p.order[nb.Bond] != 1 {
			continue
		}
		switch p.el[x] {
		case oxygen, sulfur:
			if p.hyd[x] > 0 {
				free++
			} else {
				held++
			}
		case nitrogen:
			if p.hyd[x] > 0 {
				nh++
			} else {
				held++
			}
		}
	}
	switch p.sp[a] {
	case single:
		switch {
		case free >= 2:
			yield(&oddGemDiol, 1)
		case free+nh >= 1 && free+nh+held >= 2:
			if free > 0 || nh > 1 {
				yield(&oddHemiacetal, 1)
			}
		}
		if free+nh > 0 && held == 0 {
			for _, nb := range p.nb[a] {
				if isHalogen(p.el[nb.Atom]) {
					yield(&oddHemiacetal, 1)
					break
				}
			}
		}
	case triple:
		if free+nh > 0 {
			yield(&oddYnol, 1)
		}
	case cumulene:
		if p.doubleTo(a, nitrogen) < 0 {
			yield(&oddCumulene, 1)
		}
		if free+nh > 0 {
			yield(&oddYnol, 1)
		}
	case double:
		switch {
		case p.doubleTo(a, oxygen) >= 0:
			if free > 0 && free+held+nh >= 2 {
				yield(&oddCarbamic, 1)
			}
		case p.doubleTo(a, nitrogen) >= 0:
			if free > 0 {
				yield(&oddImidic, 1)
			}
		case p.doubleTo(a, sulfur) >= 0:
			if held+nh == 0 {
				yield(&oddThial, 1)
			}
			if free > 0 {
				yield(&oddImidic, 1)
			}
		default:
			if free > 0 {
				yield(&oddEnol, 1)
			}
			if nh > 0 {
				yield(&oddEnamine, 1)
			}
		}
	}
}
