package pattern

import "shelfward/molecule"

// Hybridisation returns "sp", "sp2" or "sp3" from the bonds of a alone.
func Hybridisation(m *molecule.Molecule, a int) string {
	doubles := 0
	for _, n := range m.Neighbors(a) {
		switch b := m.Bond(int(n.Bond)); {
		case b.Aromatic:
			return "sp2"
		case b.Order == 3:
			return "sp"
		case b.Order == 2:
			doubles++
		}
	}
	switch doubles {
	case 0:
		return "sp3"
	case 1:
		return "sp2"
	}
	return "sp"
}

// Bridgehead says whether a is where two rings that share a path of three or more atoms part, as C1 of
// norbornane: such an atom cannot be flat in a small bicycle.
func Bridgehead(m *molecule.Molecule, a int) bool {
	var mine [][]int32
	for _, r := range m.Rings() {
		if ringHas(r, a) {
			mine = append(mine, r)
		}
	}
	for i := range mine {
		for j := i + 1; j < len(mine); j++ {
			if partAt(m, mine[i], mine[j], a) {
				return true
			}
		}
	}
	return false
}

// partAt says whether rings r and s share more than two atoms and a is an end of the shared path.
func partAt(m *molecule.Molecule, r, s []int32, a int) bool {
	shared, beside := 0, 0
	for _, x := range r {
		if !ringHas(s, int(x)) {
			continue
		}
		shared++
		if m.BondBetween(a, int(x)) >= 0 {
			beside++
		}
	}
	return shared > 2 && beside == 1
}

func ringHas(r []int32, a int) bool {
	for _, x := range r {
		if int(x) == a {
			return true
		}
	}
	return false
}

func atomInRingOf(m *molecule.Molecule, a, lo, hi int) bool {
	for _, r := range m.Rings() {
		if len(r) >= lo && len(r) <= hi && ringHas(r, a) {
			return true
		}
	}
	return false
}
