package reactions

import (
	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// saneRings asks strainFree once for each molecule made.
func (x *made) saneRings() bool {
	if x.rings == unknown {
		x.rings = answerOf(strainFree(x.m))
	}
	return x.rings == yes
}

// strainFree refuses what ring strain forbids: a triple bond or cumulated double bonds in a ring under
// eight, and a double bond at the bridgehead of a small bicycle (Bredt's rule).
func strainFree(m *molecule.Molecule) bool {
	for i := 0; i < m.NumBonds(); i++ {
		bd := m.Bond(i)
		if bd.Aromatic || bd.Order < 2 || !bd.Ring {
			continue
		}
		size := m.SmallestBondRing(i)
		if bd.Order == 3 && size < 8 {
			return false
		}
		for _, a := range [2]int{int(bd.A), int(bd.B)} {
			if size < 8 && (m.Atom(a).Element == 6 && pattern.Hybridisation(m, a) == "sp" || pattern.Bridgehead(m, a)) {
				return false
			}
		}
	}
	return true
}
