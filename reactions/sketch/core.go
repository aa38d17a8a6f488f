package sketch

import (
	"errors"
	"fmt"
	"slices"
	"sort"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// Part is one connected piece of the reacting core on one side.
type Part struct {
	Atoms []CoreAtom
	Bonds []CoreBond
}

// CoreAtom is an atom of a part as the pattern will say it.
type CoreAtom struct {
	Class     int
	Element   molecule.Element
	Aromatic  bool
	Charge    int8
	Hydrogens int      // exact number to be written, -1 free
	Words     []string // for where
	Leaves    string   // fragment that leaves with the atom, as SMILES, where more than the atom leaves
	atom      int      // in the joined side
}

// CoreBond joins Atoms[A] and Atoms[B]; Kind is the order, 4 aromatic.
type CoreBond struct {
	A, B int
	Kind uint8
}

// findCore fills Left, Right and Changes.
func (s *Sketch) findCore() error {
	from := make([]int32, s.left.NumAtoms())
	for a := range from {
		from[a] = -1
	}
	for p, q := range s.to {
		if q >= 0 {
			from[q] = int32(p)
		}
	}
	changed := s.changedAtoms(from)
	if !slices.Contains(changed, true) {
		return errors.New("nothing changes between the two sides: draw the product of the step")
	}
	core := s.grow(changed, from)
	classes := make([]int, s.left.NumAtoms())
	next := 0
	for a := range core {
		if core[a] {
			next++
			classes[a] = next
		}
	}
	rightClass := make([]int, s.right.NumAtoms())
	inRight := make([]bool, s.right.NumAtoms())
	for p, q := range s.to {
		switch {
		case q >= 0 && core[q]:
			rightClass[p], inRight[p] = classes[q], true
		case q < 0:
			next++
			rightClass[p], inRight[p] = next, true
		}
	}
	s.Left = parts(s.left, core, classes, func(a int) CoreAtom { return s.leftAtom(a, changed, from) })
	s.Right = parts(s.right, inRight, rightClass, func(p int) CoreAtom { return s.rightAtom(p, changed) })
	s.describeChanges(classes, rightClass, from)
	s.doubtStereo()
	return nil
}

// changedAtoms marks the reactant atoms whose bonds, charge or hydrogens change.
func (s *Sketch) changedAtoms(from []int32) []bool {
	changed := make([]bool, len(from))
	for p, q := range s.to {
		if q < 0 {
			continue
		}
		x, y := s.left.Atom(int(q)), s.right.Atom(p)
		if x.Charge != y.Charge || x.Hydrogens != y.Hydrogens {
			changed[q] = true
		}
		for _, n := range s.right.Neighbors(p) {
			r := s.to[n.Atom]
			if r < 0 || kind(s.left, s.left.BondBetween(int(q), int(r))) != kind(s.right, int(n.Bond)) {
				changed[q] = true
			}
		}
		for _, n := range s.left.Neighbors(int(q)) {
			if f := from[n.Atom]; f < 0 || s.right.BondBetween(p, int(f)) < 0 {
				changed[q] = true
			}
		}
	}
	return changed
}

// grow adds to the changed atoms what makes them the groups they are: what leaves, the heteroatoms and multiple
// bonds at a changed carbon, all that a changed heteroatom holds, and the group that loosens a hydrogen beside it.
func (s *Sketch) grow(changed []bool, from []int32) []bool {
	m := s.left
	core := slices.Clone(changed)
	for a := range changed {
		if !changed[a] {
			continue
		}
		hetero := m.Atom(a).Element != carbon
		for _, n := range m.Neighbors(a) {
			b := int(n.Atom)
			multiple := !m.Bond(int(n.Bond)).Aromatic && m.Bond(int(n.Bond)).Order > 1
			switch {
			case hetero, multiple, from[b] < 0, m.Atom(b).Element != carbon && !m.Bond(int(n.Bond)).Aromatic:
				core[b] = true
			case !m.Atom(a).Aromatic && acceptor(m, b):
				core[b] = true
			}
		}
	}
	for a := range core { // what hangs on a leaving heteroatom tells an ester from an acid
		if from[a] < 0 && core[a] && m.Atom(a).Element != carbon {
			for _, n := range m.Neighbors(a) {
				core[n.Atom] = true
			}
		}
	}
	for a := range core { // what makes an added atom an acyl carbon, a nitrile or a nitro group
		if core[a] && (!changed[a] || m.Atom(a).Element != carbon) {
			for _, n := range m.Neighbors(a) {
				if x := m.Bond(int(n.Bond)); !x.Aromatic && x.Order > 1 || m.Atom(a).Charge > 0 && m.Atom(int(n.Atom)).Charge < 0 {
					core[n.Atom] = true
				}
			}
		}
	}
	return core
}

// acceptor says that b holds a multiple bond to a heteroatom, so that a hydrogen beside it is loose.
func acceptor(m *molecule.Molecule, b int) bool {
	if m.Atom(b).Element != carbon || m.Atom(b).Aromatic {
		return false
	}
	for _, n := range m.Neighbors(b) {
		if m.Bond(int(n.Bond)).Order > 1 && m.Atom(int(n.Atom)).Element != carbon {
			return true
		}
	}
	return false
}

func (s *Sketch) leftAtom(a int, changed []bool, from []int32) CoreAtom {
	x := s.left.Atom(a)
	c := CoreAtom{Element: x.Element, Aromatic: x.Aromatic, Charge: x.Charge, Hydrogens: -1, atom: a}
	lost := 0
	if from[a] >= 0 {
		lost = int(x.Hydrogens) - int(s.right.Atom(int(from[a])).Hydrogens)
	}
	switch {
	case x.Element == carbon:
		if !x.Aromatic && pattern.Hybridisation(s.left, a) == "sp3" {
			c.Words = append(c.Words, "sp3")
		}
		if changed[a] && !x.Aromatic {
			if n := heteroNeighbours(s.left, a); n > 0 {
				c.Words = append(c.Words, fmt.Sprintf("hetero neighbours %d", n))
			}
		}
		if lost > 0 {
			c.Words = append(c.Words, fmt.Sprintf("hydrogens at least %d", lost))
		}
	case !changed[a] && from[a] >= 0:
	case x.Element == nitrogen && from[a] >= 0:
		if lost > 0 {
			c.Words = append(c.Words, fmt.Sprintf("hydrogens at least %d", lost))
		}
	case x.Hydrogens > 0: // without hydrogens the neighbours, all part of the core, say it
		c.Hydrogens = int(x.Hydrogens)
	}
	if from[a] < 0 {
		c.Leaves = s.leaving(a, from)
	}
	return c
}

const nitrogen = molecule.Element(7)

func (s *Sketch) rightAtom(p int, changed []bool) CoreAtom {
	x := s.right.Atom(p)
	c := CoreAtom{Element: x.Element, Aromatic: x.Aromatic, Charge: x.Charge, Hydrogens: -1, atom: p}
	q := s.to[p]
	fresh := q < 0 || changed[q]
	switch {
	case x.Aromatic && x.Element == nitrogen && x.Hydrogens > 0 && fresh: // without it the ring has no aromatic form
		c.Hydrogens = 1
	case x.Element == carbon || x.Hydrogens == 0 || !fresh || x.Aromatic:
	case x.Element == nitrogen && q >= 0 && x.Hydrogens <= s.left.Atom(int(q)).Hydrogens:
	default:
		c.Hydrogens = int(x.Hydrogens)
	}
	return c
}

func heteroNeighbours(m *molecule.Molecule, a int) int {
	n := 0
	for _, nb := range m.Neighbors(a) {
		if m.Atom(int(nb.Atom)).Element != carbon {
			n++
		}
	}
	return n
}

// leaving writes what hangs on a leaving atom, the atom first; empty where only the atom leaves, where it hangs on
// another leaving atom, or where it is held at more than one place.
func (s *Sketch) leaving(a int, from []int32) string {
	held := 0
	for _, n := range s.left.Neighbors(a) {
		if from[n.Atom] >= 0 {
			held++
		}
	}
	if held != 1 || s.left.Degree(a) == 1 {
		return ""
	}
	inside := make([]bool, s.left.NumAtoms())
	stack, ok := []int{a}, true
	inside[a] = true
	for len(stack) > 0 {
		x := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for _, n := range s.left.Neighbors(x) {
			b := int(n.Atom)
			if from[b] >= 0 {
				ok = ok && x == a
			} else if !inside[b] {
				inside[b] = true
				stack = append(stack, b)
			}
		}
	}
	if !ok {
		return ""
	}
	return fragment(s.left, inside, a)
}

// parts cuts the marked atoms into connected pieces.
func parts(m *molecule.Molecule, in []bool, class []int, describe func(a int) CoreAtom) []Part {
	var out []Part
	where := make([]int, m.NumAtoms()) // 1 + index in its part
	for start := range in {
		if !in[start] || where[start] > 0 {
			continue
		}
		atoms := []int{start}
		where[start] = 1
		for i := 0; i < len(atoms); i++ {
			for _, n := range m.Neighbors(atoms[i]) {
				if b := int(n.Atom); in[b] && where[b] == 0 {
					atoms = append(atoms, b)
					where[b] = 1
				}
			}
		}
		sort.Ints(atoms)
		p := Part{}
		for i, a := range atoms {
			where[a] = i + 1
			c := describe(a)
			c.Class = class[a]
			p.Atoms = append(p.Atoms, c)
		}
		for i, a := range atoms {
			for _, n := range m.Neighbors(a) {
				if b := int(n.Atom); in[b] && b > a {
					p.Bonds = append(p.Bonds, CoreBond{i, where[b] - 1, kind(m, int(n.Bond))})
				}
			}
		}
		out = append(out, p)
	}
	return out
}

// describeChanges says in words, by class, what happens to the bonds.
func (s *Sketch) describeChanges(leftClass, rightClass []int, from []int32) {
	orders := [...]string{"no bond", "single", "double", "triple", "aromatic"}
	name := func(class int, e molecule.Element) string { return fmt.Sprintf("%s%d", e.Symbol(), class) }
	for i := range s.left.NumBonds() {
		b := s.left.Bond(i)
		x, y := from[b.A], from[b.B]
		was, is := kind(s.left, i), uint8(0)
		if x >= 0 && y >= 0 {
			is = kind(s.right, s.right.BondBetween(int(x), int(y)))
		} else if x < 0 && y < 0 {
			continue
		}
		pair := name(leftClass[b.A], s.left.Atom(int(b.A)).Element) + "-" + name(leftClass[b.B], s.left.Atom(int(b.B)).Element)
		switch {
		case is == 0:
			s.Changes = append(s.Changes, "breaks "+pair)
		case is != was:
			s.Changes = append(s.Changes, fmt.Sprintf("changes %s from %s to %s", pair, orders[min(was, 4)], orders[min(is, 4)]))
		}
	}
	for i := range s.right.NumBonds() {
		b := s.right.Bond(i)
		x, y := s.to[b.A], s.to[b.B]
		if x >= 0 && y >= 0 && s.left.BondBetween(int(x), int(y)) >= 0 {
			continue
		}
		s.Changes = append(s.Changes, fmt.Sprintf("makes %s-%s (%s)", name(rightClass[b.A], s.right.Atom(int(b.A)).Element),
			name(rightClass[b.B], s.right.Atom(int(b.B)).Element), orders[min(kind(s.right, i), 4)]))
	}
}

// doubtStereo says what the sketch does not read off the drawing.
func (s *Sketch) doubtStereo() {
	if s.left.HasStereo() || s.right.HasStereo() {
		s.Doubts = append(s.Doubts, "the stereo course is not read off the drawing: say it under stereo")
	}
	if !s.Mapped {
		s.Doubts = append(s.Doubts, "the drawing has no atom numbers: the atoms were paired so that the least changes; read the bonds changed")
	}
}
