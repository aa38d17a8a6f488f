package cip

import (
	"shelfward/molecule"
	"shelfward/molecule/matching"
)

// doublePartners lists for each aromatic atom with a double bond in the Kekulé form kept the atoms
// that it is doubly bonded to in one form or another: a duplicated atom in such a ring counts with the
// mean of their atomic numbers (P-92.1.4).
func doublePartners(m *molecule.Molecule) [][]int32 {
	list := make([][]int32, m.NumAtoms())
	mate, role := filled(m.NumAtoms()), make([]matching.Role, m.NumAtoms())
	usable, first := make([]bool, m.NumBonds()), make([]int32, 1, m.NumAtoms()+1)
	var neighbors []matching.Neighbor
	for b := range usable {
		x := m.Bond(b)
		usable[b] = x.Aromatic
		if x.Aromatic && x.Order == 2 {
			mate[x.A], mate[x.B] = x.B, x.A
			role[x.A], role[x.B] = matching.Required, matching.Required
		}
	}
	for a := range list {
		neighbors = append(neighbors, m.Neighbors(a)...)
		first = append(first, int32(len(neighbors)))
	}
	var w matching.Matcher
	for a := range list {
		free := mate[a]
		if free < 0 {
			continue
		}
		role[a], mate[a], mate[free] = matching.Absent, -1, -1
		reach := w.Reach(first, neighbors, usable, role, mate, free)
		for _, nb := range m.Neighbors(a) {
			if usable[nb.Bond] && role[nb.Atom] != matching.Absent && reach[nb.Atom] {
				list[a] = append(list[a], nb.Atom)
			}
		}
		role[a], mate[a], mate[free] = matching.Required, free, int32(a)
	}
	return list
}
