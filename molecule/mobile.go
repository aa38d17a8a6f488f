package molecule

import "shelfward/molecule/matching"

// Mobile hydrogens. The pi atoms (one double bond each, uncharged) and the N, O and S that carry
// hydrogen make a graph in which the double bonds are a matching. Moving a hydrogen from X to Y
// along a conjugated path X-a=b-...=Y turns it into the matching along that path: X becomes
// covered, Y exposed, and every carbon stays covered, so that no hydrogen ever moves to or from
// carbon. The exposed sets that can be reached form the bases of a matroid; two atoms exchange
// hydrogens exactly when they lie in one connected component of it, and that can be read off from
// any one member (J. Oxley, Matroid Theory, proposition 4.1.2), hence from any tautomer.

// mobile is the outcome for one molecule.
type mobile struct {
	group  []int32 // atom -> group from 1, 0 none
	soft   []bool  // atom of a conjugated piece with a group: its bonds and aromaticity are not fixed
	groups int
	hetero []bool // group -> holds N or S
	hydro  []int  // group -> hydrogens
}

// mobileWork finds the groups.
type mobileWork struct {
	m       *Molecule
	donor   []bool // X-H without a double bond
	pi      []bool
	usable  []bool
	role    []matching.Role
	piece   []int32
	matcher matching.Matcher
}

// findMobile returns nil if no hydrogen of m can move.
func findMobile(m *Molecule) *mobile {
	w := &mobileWork{m: m}
	if !w.classify() {
		return nil
	}
	out := &mobile{group: make([]int32, len(m.atoms)), soft: make([]bool, len(m.atoms)), hetero: []bool{false}, hydro: []int{0}}
	w.pieces()
	leader := make([]int32, len(m.atoms)) // union-find
	for a := range leader {
		leader[a] = int32(a)
	}
	find := func(a int32) int32 {
		for leader[a] != a {
			a = leader[a]
		}
		return a
	}
	mate := w.doubleBonds()
	for x := range m.atoms {
		if !w.donor[x] {
			continue
		}
		for y, free := range w.exchanges(int32(x), mate) {
			if free && w.pi[y] && mobileElement(m.atoms[y].Element) {
				leader[find(int32(x))] = find(int32(y))
				out.group[x], out.group[y] = 1, 1
			}
		}
	}
	w.number(out, find)
	if out.groups == 0 {
		return nil
	}
	w.soften(out)
	return out
}

func mobileElement(e Element) bool { return e == 7 || e == 8 || e == 16 || e == 34 }

// classify marks pi atoms and donors; it reports whether there is one of each kind that matters.
func (w *mobileWork) classify() bool {
	m := w.m
	w.donor, w.pi = make([]bool, len(m.atoms)), make([]bool, len(m.atoms))
	w.role = make([]matching.Role, len(m.atoms))
	donors, acceptors := false, false
	for a := range m.atoms {
		x := &m.atoms[a]
		if x.Charge != 0 {
			continue
		}
		doubles, others := 0, 0
		for _, nb := range m.Neighbors(a) {
			switch m.bonds[nb.Bond].Order {
			case 1:
			case 2:
				doubles++
			default:
				others++
			}
		}
		valence := m.Degree(a) + int(x.Hydrogens) + doubles
		normal := x.Element == 6 && valence == 4 || x.Element == 7 && valence == 3 || (x.Element == 8 || x.Element == 16 || x.Element == 34) && valence == 2
		if !normal || others > 0 {
			continue
		}
		w.pi[a] = doubles == 1
		w.donor[a] = doubles == 0 && x.Hydrogens > 0 && mobileElement(x.Element)
		donors = donors || w.donor[a]
		acceptors = acceptors || w.pi[a] && mobileElement(x.Element)
	}
	// A double bond to a charged or odd atom does not take part.
	for i := range m.bonds {
		if x := &m.bonds[i]; x.Order == 2 && (!w.pi[x.A] || !w.pi[x.B]) {
			w.pi[x.A], w.pi[x.B] = false, false
		}
	}
	return donors && acceptors
}

// pieces labels the connected pieces of the pi graph; a donor is a leaf that does not conduct
// unless it could become covered, so donors join pieces like any other atom.
func (w *mobileWork) pieces() {
	m := w.m
	w.usable = make([]bool, len(m.bonds))
	for i := range m.bonds {
		x := &m.bonds[i]
		w.usable[i] = (w.pi[x.A] || w.donor[x.A]) && (w.pi[x.B] || w.donor[x.B])
	}
	w.piece = make([]int32, len(m.atoms))
	var stack []int32
	count := int32(0)
	for a := range m.atoms {
		if w.piece[a] != 0 || !w.pi[a] && !w.donor[a] {
			continue
		}
		count++
		w.piece[a] = count
		for stack = append(stack[:0], int32(a)); len(stack) > 0; {
			x := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			for _, nb := range m.Neighbors(int(x)) {
				if w.usable[nb.Bond] && w.piece[nb.Atom] == 0 {
					w.piece[nb.Atom] = count
					stack = append(stack, nb.Atom)
				}
			}
		}
	}
}

// doubleBonds is the matching that the double bonds make.
func (w *mobileWork) doubleBonds() []int32 {
	mate := make([]int32, len(w.m.atoms))
	for a := range mate {
		mate[a] = -1
	}
	for i := range w.m.bonds {
		if x := &w.m.bonds[i]; x.Order == 2 && w.pi[x.A] && w.pi[x.B] {
			mate[x.A], mate[x.B] = x.B, x.A
		}
	}
	return mate
}

// exchanges marks the atoms that the hydrogen of donor x can go to, as far as bonds are concerned.
func (w *mobileWork) exchanges(x int32, mate []int32) []bool {
	for a := range w.role {
		w.role[a] = matching.Absent
		if w.pi[a] && w.piece[a] == w.piece[x] || int32(a) == x {
			w.role[a] = matching.Required
		}
	}
	return w.matcher.Reach(w.m.first, w.m.neighbors, w.usable, w.role, mate, x)
}

// number gives the groups their numbers, hydrogens and kinds.
func (w *mobileWork) number(out *mobile, find func(int32) int32) {
	numberOf := make([]int32, len(w.m.atoms))
	for a := range w.m.atoms {
		if out.group[a] == 0 {
			continue
		}
		root := find(int32(a))
		if numberOf[root] == 0 {
			out.groups++
			numberOf[root] = int32(out.groups)
			out.hetero, out.hydro = append(out.hetero, false), append(out.hydro, 0)
		}
		g := numberOf[root]
		out.group[a] = g
		x := &w.m.atoms[a]
		out.hydro[g] += int(x.Hydrogens)
		out.hetero[g] = out.hetero[g] || x.Element != 8
	}
}

// soften marks the atoms of conjugated pieces that hold a group. Donors in no group do not conduct.
func (w *mobileWork) soften(out *mobile) {
	m := w.m
	inside := func(a int32) bool { return w.pi[a] || out.group[a] != 0 }
	var stack []int32
	for a := range m.atoms {
		if out.group[a] != 0 && !out.soft[a] {
			out.soft[a] = true
			stack = append(stack, int32(a))
		}
		for len(stack) > 0 {
			x := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			for _, nb := range m.Neighbors(int(x)) {
				if inside(nb.Atom) && !out.soft[nb.Atom] {
					out.soft[nb.Atom] = true
					stack = append(stack, nb.Atom)
				}
			}
		}
	}
}

// fixedDouble says that double bond b is double in every tautomer: no matching with the same
// number of exposed atoms does without it.
func (w *mobileWork) fixedDouble(b int, out *mobile) bool {
	x := w.m.bonds[b]
	size := 0
	for a := range w.role {
		w.role[a] = matching.Absent
		if w.piece[a] != w.piece[x.A] {
			continue
		}
		switch {
		case out.group[a] != 0:
			w.role[a] = matching.Optional
		case w.pi[a]:
			w.role[a] = matching.Required
		}
		if w.pi[a] {
			size++
		}
	}
	w.usable[b] = false
	mate, alone := w.matcher.Largest(w.m.first, w.m.neighbors, w.usable, w.role)
	w.usable[b] = true
	if alone != nil {
		return true
	}
	covered := 0
	for _, p := range mate {
		if p >= 0 {
			covered++
		}
	}
	return covered < size
}
