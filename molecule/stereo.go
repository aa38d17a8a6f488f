package molecule

import (
	"fmt"

	"shelfward/molecule/canon"
)

// smallestStereoRing is the smallest ring whose double bonds can be cis or trans (trans-cyclooctene
// is the smallest that is kept in a bottle; common practice).
const smallestStereoRing = 8

// keepStereo copies the marks of b that can mean something to the molecule, then drops those that
// say nothing.
func (p *perceiver) keepStereo(b *Builder) error {
	m := p.m
	for _, c := range b.Centers {
		if p.legalCenter(&c) {
			m.centers = append(m.centers, c)
		}
	}
	for _, d := range b.DoubleBonds {
		if d, ok := p.legalDoubleBond(d); ok {
			m.doubleBonds = append(m.doubleBonds, d)
		}
	}
	if !m.HasStereo() {
		return nil
	}
	p.fillGraph(m, true)
	keepCenter, keepAxis, ok := p.worker.DropVoid(&p.graph)
	if !ok {
		return &Error{-1, -1, fmt.Sprintf("more than %d stereo marks depend on each other", canon.MaxDependent)}
	}
	if keepCenter == nil && keepAxis == nil {
		return nil
	}
	centers := m.centers[:0]
	for i, c := range m.centers {
		if keepCenter[i] {
			centers = append(centers, c)
		}
	}
	m.centers = centers
	marks := m.doubleBonds[:0]
	for i, d := range m.doubleBonds {
		if keepAxis[i] {
			marks = append(marks, d)
		}
	}
	m.doubleBonds = marks
	return nil
}

// legalCenter says that the ligands of c are what its atom has and that the atom can hold a
// configuration: four ligands, or three and a lone pair that does not swing through (sulfur,
// selenium, phosphorus, arsenic; nitrogen only in a three-membered ring or at a bridgehead).
func (p *perceiver) legalCenter(c *Center) bool {
	m := p.m
	if c.Atom < 0 || int(c.Atom) >= len(m.atoms) {
		return false
	}
	a := int(c.Atom)
	x := &m.atoms[a]
	for _, d := range m.centers {
		if d.Atom == c.Atom {
			return false
		}
	}
	real, hydrogens, pairs := 0, 0, 0
	for i, l := range c.Ligands {
		switch {
		case l == LigandHydrogen:
			hydrogens++
		case l == LigandLonePair:
			pairs++
		case l < 0 || int(l) >= len(m.atoms) || m.BondBetween(a, int(l)) < 0:
			return false
		default:
			real++
			for _, k := range c.Ligands[:i] {
				if k == l {
					return false
				}
			}
		}
	}
	if real != m.Degree(a) || hydrogens != int(x.Hydrogens) || hydrogens+pairs > 1 || x.Aromatic {
		return false
	}
	if x.Element == 6 && int(p.sum[a]) > real { // a carbon with a multiple bond is flat
		return false
	}
	if x.Element == 7 && int(p.sum[a]) > real && pairs+hydrogens > 0 {
		return false
	}
	if pairs == 0 {
		return true
	}
	switch x.Element {
	case 15, 33:
		return true
	case 16, 34, 52:
		sum := int(p.sum[a])
		return sum == 4 || sum == 3 && x.Charge == 1
	case 7:
		return x.Charge == 0 && (m.SmallestRing(a) == 3 || p.bridgehead(a))
	}
	return false
}

// bridgehead says that all three bonds of a lie in rings and that no two of them share all their
// small rings with the third: a belongs to three relevant cycles, or to two that share two bonds or more.
func (p *perceiver) bridgehead(a int) bool {
	m := p.m
	nbs := m.Neighbors(a)
	if len(nbs) != 3 {
		return false
	}
	for _, nb := range nbs {
		if !m.bonds[nb.Bond].Ring {
			return false
		}
	}
	var through [][]int32
	for _, r := range p.relevant {
		for _, x := range r {
			if int(x) == a {
				through = append(through, r)
				break
			}
		}
	}
	for i, r := range through {
		for _, s := range through[:i] {
			shared := 0
			for k, x := range r {
				y := r[(k+1)%len(r)]
				for l, u := range s {
					v := s[(l+1)%len(s)]
					if x == u && y == v || x == v && y == u {
						shared++
					}
				}
			}
			if shared > 1 {
				return true
			}
		}
	}
	return false
}

// legalDoubleBond says that d names a double bond that can be cis or trans. The mark returned
// names the ligands as d does.
func (p *perceiver) legalDoubleBond(d DoubleBond) (DoubleBond, bool) {
	m := p.m
	if d.Bond < 0 || int(d.Bond) >= len(m.bonds) {
		return d, false
	}
	x := &m.bonds[d.Bond]
	if x.Order != 2 || x.Aromatic || x.Ring && m.SmallestBondRing(int(d.Bond)) < smallestStereoRing {
		return d, false
	}
	for _, e := range m.doubleBonds {
		if e.Bond == d.Bond {
			return d, false
		}
	}
	if m.BondBetween(int(x.A), int(d.A)) < 0 || m.BondBetween(int(x.B), int(d.B)) < 0 || d.A == x.B || d.B == x.A {
		return d, false
	}
	for _, end := range [2]int32{x.A, x.B} {
		y := &m.atoms[end]
		if deg := m.Degree(int(end)); deg < 2 || deg > 3 || deg == 2 && y.Hydrogens > 1 || int(p.sum[end]) != deg+1 {
			return d, false
		}
	}
	return d, true
}

// fillGraph makes the arrays that the labeller takes.
func (p *perceiver) fillGraph(m *Molecule, stereo bool) {
	g := &p.graph
	g.First, g.Neighbors = m.first, m.neighbors
	g.Colours, g.BondColours = g.Colours[:0], g.BondColours[:0]
	g.Centers, g.Axes = g.Centers[:0], g.Axes[:0]
	for i := range m.bonds {
		x := &m.bonds[i]
		c := x.Order
		if x.Aromatic {
			c = OrderAromatic
		}
		if x.Ring {
			c |= 8
		}
		g.BondColours = append(g.BondColours, c)
	}
	for a := range m.atoms {
		g.Colours = append(g.Colours, atomColour(&m.atoms[a], m.Degree(a)))
	}
	if !stereo {
		return
	}
	for _, c := range m.centers {
		g.Centers = append(g.Centers, canon.Center(c))
	}
	for _, d := range m.doubleBonds {
		x := &m.bonds[d.Bond]
		g.Axes = append(g.Axes, canon.Axis{A: x.A, B: x.B, LigandA: d.A, OtherA: m.third(x.A, x.B, d.A),
			LigandB: d.B, OtherB: m.third(x.B, x.A, d.B), Together: d.Together})
	}
}

// third returns the neighbour of a that is neither b nor c, or -1.
func (m *Molecule) third(a, b, c int32) int32 {
	for _, nb := range m.Neighbors(int(a)) {
		if nb.Atom != b && nb.Atom != c {
			return nb.Atom
		}
	}
	return -1
}

// atomColour packs what makes an atom different, end atoms and carbon first: canonical texts then
// begin where a chemist would.
func atomColour(x *Atom, degree int) uint64 {
	element := uint64(x.Element)
	if x.Element == 6 {
		element = 0
	} else if x.Element == 0 {
		element = 200
	}
	c := uint64(min(degree, 15))
	c = c<<1 | flag(x.Aromatic)
	c = c<<8 | element
	c = c<<8 | uint64(uint8(x.Charge))
	c = c<<8 | uint64(x.Hydrogens)
	return c<<16 | uint64(x.Isotope)
}

func flag(b bool) uint64 {
	if b {
		return 1
	}
	return 0
}
