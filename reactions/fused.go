package reactions

import "shelfward/molecule"

// cisFused marks the one bond that a three-membered ring shares with a ring of four to seven atoms: the
// fusion can only be cis, also where nobody drew it (strain; textbook chemistry). It returns nil where
// there is no such bond, more than one, or any mark already.
func cisFused(m *molecule.Molecule) *molecule.Molecule {
	if !noMarks(m) {
		return nil
	}
	var marks [][2]molecule.Center
	for _, small := range m.Rings() {
		if len(small) != 3 {
			continue
		}
		for k := range small {
			a, b, apex := small[k], small[(k+1)%3], small[(k+2)%3]
			if pair, ok := fusion(m, a, b, apex); ok {
				marks = append(marks, pair)
			}
		}
	}
	if len(marks) != 1 {
		return nil
	}
	b := m.Builder()
	b.Centers = append(b.Centers, marks[0][0], marks[0][1])
	out, err := b.Build()
	if err != nil || len(out.Centers()) != 2 {
		return nil
	}
	return out
}

// fusion gives the marks of a bond a-b that the ring of apex shares with a larger one: the mirror plane
// through the apex and the middle of the bond gives the two ends opposite turns.
func fusion(m *molecule.Molecule, a, b, apex int32) (pair [2]molecule.Center, ok bool) {
	ra, rb, found := ringSides(m, a, b, apex, apex)
	if !found || ra == rb {
		return pair, false
	}
	for i, end := range [2]struct{ at, far, ring int32 }{{a, b, ra}, {b, a, rb}} {
		var rest []int32
		for _, l := range spectators(m, end.at, end.far) {
			if l != apex && l != end.ring {
				rest = append(rest, l)
			}
		}
		if len(rest) != 1 {
			return pair, false
		}
		pair[i] = molecule.Center{Atom: end.at, Ligands: [4]int32{apex, end.far, end.ring, rest[0]}, Clockwise: i == 1}
	}
	return pair, true
}
