package route

import (
	"math/bits"

	"shelfward/molecule"
)

// profile counts the bonds of a molecule by the elements, the order and the ring they stand in. Two
// molecules one textbook step apart differ in few of them.
type profile [64]int16

func profileOf(m *molecule.Molecule) *profile {
	p := &profile{}
	for b := range m.NumBonds() {
		x := m.Bond(b)
		e, f := m.Atom(int(x.A)), m.Atom(int(x.B))
		if e.Element > f.Element {
			e, f = f, e
		}
		order := uint32(x.Order)
		if x.Aromatic {
			order = 5
		}
		h := (uint32(e.Element)*131+uint32(f.Element))*8 + order
		p[h*2654435761>>26]++
	}
	for a := range m.NumAtoms() {
		if x := m.Atom(a); x.Element != carbon { // end groups: an OH is no ether
			h := uint32(x.Element)*64 + uint32(x.Hydrogens)*8 + uint32(m.Degree(a))
			p[h*2654435761>>26]++
		}
	}
	return p
}

// apart counts what p has and q has not, and the other way round.
func (p *profile) apart(q *profile) (only, lacks int) {
	for i := range p {
		switch d := int(p[i]) - int(q[i]); {
		case d > 0:
			only += d
		default:
			lacks -= d
		}
	}
	return only, lacks
}

// guesser estimates how far a molecule is from what it could be made from.
type guesser struct {
	shelf []*profile
	owed  []*profile // per set of items owed: the profiles of the items added up
}

func newGuesser(shelf, from []*molecule.Molecule) *guesser {
	g := &guesser{owed: make([]*profile, 1<<len(from))}
	for _, m := range shelf {
		g.shelf = append(g.shelf, profileOf(m))
	}
	for set := 1; set < len(g.owed); set++ {
		sum := *profileOf(from[bits.TrailingZeros(uint(set))])
		if rest := set & (set - 1); rest != 0 {
			for i := range sum {
				sum[i] += g.owed[rest][i]
			}
		}
		g.owed[set] = &sum
	}
	return g
}

// Parts of the estimate, found by trying on published routes: bonds of the molecule that must come
// from elsewhere, and bonds of the start that must go.
const (
	guessMissing = 0.10
	guessSurplus = 0.25
)

// steps estimates the steps between m and what it is made from. It orders the work of the search and
// proves nothing.
func (g *guesser) steps(m *molecule.Molecule, owed uint8) float64 {
	p := profileOf(m)
	if owed != 0 {
		missing, surplus := p.apart(g.owed[owed])
		return 1 + guessMissing*float64(missing) + guessSurplus*float64(surplus)
	}
	least := 1 + 0.15*float64(m.NumBonds())
	for _, q := range g.shelf {
		missing, surplus := p.apart(q)
		least = min(least, 1+guessMissing*float64(missing)+guessSurplus*float64(surplus))
	}
	return least
}
