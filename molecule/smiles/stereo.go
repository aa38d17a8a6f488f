package smiles

import "shelfward/molecule"

// addCenter turns a mark into a centre of the builder. Marks whose atom has not three or four
// ligands are left out, those of an allene or a shape with more ligands counted so; Build drops those that
// its atom cannot hold.
func (r *reader) addCenter(k *mark) {
	if k.count > 4 || k.count == 2 && r.bondSum(k.atom) == 4 && r.b.Atoms[k.atom].Hydrogens == 0 {
		r.b.LeftOut++
	}
	if k.count == 3 {
		// A lone pair counts as the last ligand, wherever the atom stands.
		k.add(molecule.LigandLonePair)
		if lonePairTurned(k.digits, r.bondSum(k.atom)) {
			k.clockwise = !k.clockwise
		}
	}
	if k.count != 4 {
		return
	}
	c := molecule.Center{Atom: k.atom, Clockwise: k.clockwise}
	copy(c.Ligands[:], k.ligands[:4])
	r.b.Centers = append(r.b.Centers, c)
}

// bondSum adds the bond orders at atom a.
func (r *reader) bondSum(a int32) int {
	sum := 0
	for _, x := range r.b.Bonds {
		if x.A == a || x.B == a {
			sum += int(x.Order)
		}
	}
	return sum
}

// lonePairTurned says that the mark of an atom with three ligands and a lone pair is read the other
// way round. OpenSMILES says nothing about lone pairs; the reference toolkit, whose reading is
// followed, turns the mark where three single bonds and exactly one ring closure meet at the atom
// (found by trying every order of writing; sulfoxides drawn S=O are not turned).
func lonePairTurned(digits, bondSum int) bool { return digits == 1 && bondSum == 3 }

// side is where a marked neighbour of a double bond end lies.
type side struct {
	atom int32
	up   bool
	pos  int32
}

// addDoubleBonds reads the directions around each double bond.
func (r *reader) addDoubleBonds() error {
	sides := map[int32][]side{}
	for i := range r.bonds {
		d := r.bonds[i].dir
		if d == 0 {
			continue
		}
		x := r.b.Bonds[i]
		// Written A then B: '/' puts B above A, and A below B.
		sides[x.A] = append(sides[x.A], side{x.B, d > 0, r.bonds[i].at})
		sides[x.B] = append(sides[x.B], side{x.A, d < 0, r.bonds[i].at})
	}
	for i := range r.b.Bonds {
		x := r.b.Bonds[i]
		if x.Order != 2 {
			continue
		}
		a, b := sides[x.A], sides[x.B]
		if len(a) == 0 || len(b) == 0 {
			continue
		}
		for _, s := range [2][]side{a, b} {
			if len(s) == 2 && s[0].up == s[1].up {
				return r.fail(int(max(s[0].pos, s[1].pos)), "the two marks at one end of the double bond put both neighbours on one side")
			}
		}
		r.b.DoubleBonds = append(r.b.DoubleBonds, molecule.DoubleBond{
			Bond: int32(i), A: a[0].atom, B: b[0].atom, Together: a[0].up == b[0].up})
	}
	return nil
}
