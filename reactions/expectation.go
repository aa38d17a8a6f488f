package reactions

import (
	"slices"

	"shelfward/molecule"
)

// expectation is the product that a run is hoped to give, with the place of every material's atoms in it.
// What a proposal was undone from comes out of its edit atom by atom: such a piece is recognised, and need
// not be built, labelled and indexed again.
type expectation struct {
	product *made
	from    []placed
}

// placed gives the atoms of one material their places in the expected product, -1 for those not in it.
type placed struct {
	m  *molecule.Molecule
	at []int32
}

// expect makes the expectation of a draft: its target, whose atoms come from where its origins say.
func (w *workspace) expect(d *draft) *expectation {
	if d.target.M.HasStereo() {
		return nil // marks are compared on molecules built
	}
	x := &expectation{product: w.madeFrom(d.target)}
	for _, r := range d.reactants {
		at := w.atoms.take(r.M.NumAtoms())
		for i := range at {
			at[i] = -1
		}
		x.from = append(x.from, placed{r.M, at})
	}
	for a, o := range d.origins {
		if o.Reactant >= 0 {
			x.from[o.Reactant].at[o.Atom] = int32(a)
		}
	}
	return x
}

// recognise says whether b, whose atoms were the pool atoms from (-1: new), is the expected product; then
// it renumbers from to that of the product. A false answer says nothing.
func (x *expectation) recognise(b *molecule.Builder, from []int32, p *pool, w *workspace) bool {
	want := x.product.m
	if len(b.Atoms) != want.NumAtoms() || len(b.Bonds) != want.NumBonds() || len(b.Centers)+len(b.DoubleBonds) > 0 {
		return false
	}
	to, back := w.atoms.take(len(from)), w.atoms.take(len(from)) // atom of b -> 1 + atom of want, and back
	left := -1
	for a, f := range from {
		t := x.place(p, f)
		switch {
		case t < 0 && left >= 0 || t >= 0 && back[t] > 0:
			return false
		case t < 0:
			left = a
		default:
			to[a], back[t] = t+1, int32(a+1)
		}
	}
	if left >= 0 { // one atom that a reagent brought can only stand in the place left over
		t := slices.Index(back, 0)
		to[left], back[t] = int32(t+1), int32(left+1)
	}
	if !sameBonds(b, want, to) || !sameAtoms(b, want, to) {
		return false
	}
	old := to
	copy(old, from)
	for t, a := range back {
		from[t] = old[a-1]
	}
	return true
}

// place is the atom of the product that pool atom f should become, -1 where that is not known.
func (x *expectation) place(p *pool, f int32) int32 {
	if f < 0 {
		return -1
	}
	which, atom := p.locate(f)
	for i := range x.from {
		if x.from[i].m == p.molecules[which] {
			return x.from[i].at[atom]
		}
	}
	return -1
}

func sameBonds(b *molecule.Builder, m *molecule.Molecule, to []int32) bool {
	for i := range b.Bonds {
		x := &b.Bonds[i]
		k := m.BondBetween(int(to[x.A]-1), int(to[x.B]-1))
		if k < 0 || m.Bond(k).Order != x.Order {
			return false
		}
	}
	return true
}

func sameAtoms(b *molecule.Builder, m *molecule.Molecule, to []int32) bool {
	for a := range b.Atoms {
		x, y := &b.Atoms[a], m.Atom(int(to[a]-1))
		h := x.Hydrogens
		if h == molecule.AutoHydrogens {
			sum := 0
			for i := range b.Bonds {
				if bd := &b.Bonds[i]; int(bd.A) == a || int(bd.B) == a {
					sum += int(bd.Order)
				}
			}
			h = molecule.FilledHydrogens(*x, sum)
		}
		if x.Element != y.Element || x.Charge != y.Charge || x.Isotope != y.Isotope || h != y.Hydrogens {
			return false
		}
	}
	return true
}
