package cip

import (
	"cmp"
	"slices"

	"shelfward/molecule"
)

// nameCenter names the mark c at node n from the order of its ligands under the rules up to last.
func (t *tree) nameCenter(c molecule.Center, n int32, last rule) Label {
	// Where each ligand of the mark stands in the tree; a lone pair has no node and comes last.
	var at [4]int32
	for i, l := range c.Ligands {
		at[i] = t.ligand(n, l)
		if at[i] < 0 && l != molecule.LigandLonePair {
			return None
		}
	}
	tie, lower := false, false
	order := [4]int{0, 1, 2, 3}
	slices.SortStableFunc(order[:], func(i, j int) int {
		if at[i] < 0 || at[j] < 0 {
			return cmp.Compare(at[j], at[i])
		}
		x, by := t.compare(at[j], at[i], n, last)
		tie = tie || x == 0
		lower = lower || x != 0 && by == rule5
		return x
	})
	if tie || t.full {
		return None
	}
	clockwise := c.Clockwise
	for i := range order {
		for j := range i {
			if order[j] > order[i] {
				clockwise = !clockwise
			}
		}
	}
	// Seen from the senior ligand the others run as they do seen from the side away from the last.
	return map[[2]bool]Label{{true, false}: R, {false, false}: S, {true, true}: LowerR, {false, true}: LowerS}[[2]bool{clockwise, lower}]
}

// seniorBeside returns the atom of the senior ligand of the double bond end at node n, the partner
// left out; not ok where the rules do not order them or only rule 5 does.
func (t *tree) seniorBeside(n, partner int32, last rule) (atom int32, ok bool) {
	m := t.f.m
	var at []int32
	a := t.nodes[n].atom
	for _, nb := range m.Neighbors(int(a)) {
		if nb.Atom != partner {
			at = append(at, t.ligand(n, nb.Atom))
		}
	}
	switch len(at) {
	case 1: // beside it a hydrogen or a lone pair
		return t.nodes[at[0]].atom, true
	case 2:
		c, by := t.compare(at[0], at[1], n, last)
		if c == 0 || by == rule5 {
			return 0, false
		}
		if c < 0 {
			return t.nodes[at[1]].atom, true
		}
		return t.nodes[at[0]].atom, true
	}
	return 0, false
}

// nameInside gives the nodes of the tree their auxiliary descriptors, the farthest first: each is named
// in the digraph turned so that the node is its root, with the labels of the spheres farther out (Hanson et al., see
// the package comment).
func (t *tree) nameInside() {
	var marked []int32
	deepest := int32(0)
	for n := int32(0); n < int32(len(t.nodes)) && !t.full; n++ {
		t.children(n)
		x := &t.nodes[n]
		if x.duplicate || x.atom < 0 || n == 0 {
			continue
		}
		if t.f.marks[x.atom] >= 0 || x.bond >= 0 && t.f.axes[x.bond] >= 0 {
			marked = append(marked, n)
			deepest = max(deepest, x.depth)
		}
	}
	type outcome struct {
		node        int32
		label, axis Label
	}
	for depth := deepest; depth > 0 && !t.full; depth-- {
		var found []outcome
		for _, n := range marked {
			x := t.nodes[n]
			if x.depth != depth {
				continue
			}
			o := outcome{node: n}
			if i := t.f.marks[x.atom]; i >= 0 {
				o.label = t.nameCenter(t.f.m.Centers()[i], n, lastRule)
			}
			if x.bond >= 0 && t.f.axes[x.bond] >= 0 && x.parent > 0 {
				o.axis = t.nameAxis(t.f.m.DoubleBonds()[t.f.axes[x.bond]], n)
			}
			found = append(found, o)
		}
		for _, o := range found {
			t.nodes[o.node].label, t.nodes[o.node].axis = o.label, o.axis
		}
		if len(found) > 0 {
			clear(t.sorted)
		}
	}
}

// nameAxis names the double bond between n and its parent within the tree.
func (t *tree) nameAxis(d molecule.DoubleBond, n int32) Label {
	p := t.nodes[n].parent
	together := d.Together
	for _, end := range [2][2]int32{{n, p}, {p, n}} {
		a, b := t.nodes[end[0]].atom, t.nodes[end[1]].atom
		first, ok := t.seniorBeside(end[0], b, lastRule)
		if !ok {
			return None
		}
		named := d.A
		if t.f.m.Bond(int(d.Bond)).A != a {
			named = d.B
		}
		if first != named {
			together = !together
		}
	}
	if together {
		return Z
	}
	return E
}
