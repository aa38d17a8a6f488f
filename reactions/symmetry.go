package reactions

import "shelfward/molecule"

// maxSymmetric bounds the molecules whose symmetry is used, maxTurns the atoms tried for one question.
const (
	maxSymmetric = 100
	maxTurns     = 400
)

// alike says whether some symmetry of the molecule takes site r to site s, part by part and atom by atom:
// then both give the same precursors. A false answer says nothing. Molecules with marks are not looked at.
func (s *subject) alike(r, q site, w *workspace) bool {
	m := s.M
	if n := m.NumAtoms(); n > maxSymmetric || m.HasStereo() {
		return false
	}
	orbit := m.Orbits()
	for part := range r {
		if len(r[part]) != len(q[part]) {
			return false
		}
		for i, a := range r[part] {
			if orbit[a] != orbit[q[part][i]] {
				return false
			}
		}
	}
	x := turn{m: m, orbit: orbit, to: w.atoms.take(m.NumAtoms()), back: w.atoms.take(m.NumAtoms()), order: w.atoms.take(m.NumAtoms())[:0], left: maxTurns}
	for part := range r {
		for i, a := range r[part] {
			if b := q[part][i]; !x.fits(a, b) {
				return false
			} else if x.to[a] == 0 {
				x.put(a, b)
			}
		}
	}
	return x.extend(0, 0)
}

// turn is a symmetry while it is looked for, grown from the atoms placed along the bonds.
type turn struct {
	m        *molecule.Molecule
	orbit    []int32
	to, back []int32 // atom -> 1 + its image, and back
	order    []int32 // atoms placed
	left     int
}

// fits says whether b can be the image of a as far as the atoms placed go.
func (x *turn) fits(a, b int32) bool {
	if x.to[a] != 0 || x.back[b] != 0 {
		return x.to[a] == b+1
	}
	if x.orbit[a] != x.orbit[b] {
		return false
	}
	for _, n := range x.m.Neighbors(int(a)) {
		if x.to[n.Atom] == 0 {
			continue
		}
		k := x.m.BondBetween(int(b), int(x.to[n.Atom]-1))
		if k < 0 || !sameBond(x.m.Bond(int(n.Bond)), x.m.Bond(k)) {
			return false
		}
	}
	return true
}

func sameBond(p, q molecule.Bond) bool {
	return p.Aromatic == q.Aromatic && (p.Aromatic || p.Order == q.Order)
}

func (x *turn) put(a, b int32) {
	x.to[a], x.back[b] = b+1, a+1
	x.order = append(x.order, a)
}

func (x *turn) takeBack() {
	a := x.order[len(x.order)-1]
	x.order = x.order[:len(x.order)-1]
	x.back[x.to[a]-1], x.to[a] = 0, 0
}

// extend places the neighbours of the atoms placed, from neighbour k of the atom at place i on. All atoms
// have then been reached: a molecule is one piece. Its depth is at most maxSymmetric.
func (x *turn) extend(i, k int) bool {
	for ; i < len(x.order); i, k = i+1, 0 {
		nbs := x.m.Neighbors(int(x.order[i]))
		for ; k < len(nbs); k++ {
			a := nbs[k].Atom
			if x.to[a] != 0 {
				continue
			}
			for _, n := range x.m.Neighbors(int(x.to[x.order[i]] - 1)) {
				if x.left--; x.left < 0 {
					return false
				}
				if x.back[n.Atom] != 0 || !x.fits(a, n.Atom) {
					continue
				}
				x.put(a, n.Atom)
				if x.extend(i, k+1) {
					return true
				}
				x.takeBack()
			}
			return false
		}
	}
	return len(x.order) == x.m.NumAtoms()
}
