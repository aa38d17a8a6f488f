package cip

import "shelfward/molecule"

// maxNodes bounds a digraph, maxCompared the pairs of nodes compared in it: far more than drugs and
// steroids need; cages with dozens of rings stay without a label.
const (
	maxNodes    = 20_000
	maxCompared = 2_000_000
)

// numberUnit makes the mean of up to three atomic numbers whole.
const numberUnit = 6

// node is one atom on one path from the root of the hierarchical digraph (P-92.1.4).
type node struct {
	atom      int32 // molecule.LigandHydrogen for a hydrogen that is no atom of the graph
	parent    int32
	bond      int32 // to the parent; -1 for duplicates and hydrogens
	first     int32 // children are nodes first .. first+count-1
	count     int32
	depth     int32
	original  int32 // duplicates: the sphere of the atom that is duplicated; else depth
	number    int32 // atomic number times numberUnit
	massDa    float64
	duplicate bool
	expanded  bool
	label     Label // auxiliary descriptor
	axis      Label // auxiliary descriptor of the double bond to the parent
}

// tree is the digraph of one root; node 0 is the root.
type tree struct {
	f        *frame
	nodes    []node
	sorted   map[view][]ranked
	compared int
	full     bool // a bound was met: no label may be drawn from it
}

// view is a node seen from a neighbouring node, under the rules up to last.
type view struct {
	node, from int32
	last       rule
}

func newTree(f *frame, root int32) *tree {
	t := &tree{f: f, sorted: map[view][]ranked{}}
	t.nodes = append(t.nodes, t.realNode(root, -1, -1))
	return t
}

func (t *tree) realNode(atom, parent, bond int32) node {
	n := node{atom: atom, parent: parent, bond: bond}
	if parent >= 0 {
		n.depth = t.nodes[parent].depth + 1
	}
	n.original = n.depth
	element := molecule.Element(1)
	if atom >= 0 {
		x := t.f.m.Atom(int(atom))
		element = x.Element
		n.massDa = float64(x.Isotope)
	}
	if n.massDa == 0 {
		n.massDa = element.Weight()
	}
	n.number = int32(element) * numberUnit
	return n
}

// children returns the nodes below n, which are made when first asked for.
func (t *tree) children(n int32) (first, end int32) {
	if x := &t.nodes[n]; !x.expanded {
		x.expanded = true
		start := int32(len(t.nodes))
		if !x.duplicate && x.atom >= 0 && !t.full {
			t.expand(n)
		}
		x = &t.nodes[n]
		x.first, x.count = start, int32(len(t.nodes))-start
		if len(t.nodes) > maxNodes {
			t.full = true
		}
	}
	x := &t.nodes[n]
	return x.first, x.first + x.count
}

func (t *tree) expand(n int32) {
	m := t.f.m
	x := t.nodes[n]
	for _, nb := range m.Neighbors(int(x.atom)) {
		b := m.Bond(int(nb.Bond))
		extra := int(b.Order) - 1
		if b.Aromatic || t.f.expanded(b.A) || t.f.expanded(b.B) {
			extra = 0 // aromatic ones: see below
		}
		at := t.onPath(n, nb.Atom)
		switch {
		case nb.Bond == x.bond:
		case at >= 0: // a ring closes
			extra++
		default:
			t.nodes = append(t.nodes, t.realNode(nb.Atom, n, nb.Bond))
		}
		for range extra {
			t.addDuplicate(n, nb.Atom, at)
		}
	}
	if partners := t.f.partners[x.atom]; len(partners) > 0 {
		t.addDuplicate(n, partners[0], t.onPath(n, partners[0]))
		d := &t.nodes[len(t.nodes)-1]
		sum := int32(0)
		for _, p := range partners {
			sum += int32(m.Atom(int(p)).Element)
		}
		d.number = sum * numberUnit / int32(len(partners))
		if len(partners) > 1 { // a mean has no original, and must not depend on the Kekulé form kept
			d.original = d.depth
		}
	}
	for range m.Atom(int(x.atom)).Hydrogens {
		t.nodes = append(t.nodes, t.realNode(molecule.LigandHydrogen, n, -1))
	}
}

// onPath returns the node of atom between n and the root, -1 where there is none.
func (t *tree) onPath(n, atom int32) int32 {
	for ; n >= 0; n = t.nodes[n].parent {
		if t.nodes[n].atom == atom {
			return n
		}
	}
	return -1
}

// addDuplicate adds a copy of atom below n; at is the node of the original, -1 where it is a child of n.
func (t *tree) addDuplicate(n, atom, at int32) {
	d := t.realNode(atom, n, -1)
	d.duplicate, d.massDa = true, 0
	if at >= 0 {
		d.original = t.nodes[at].depth
	}
	t.nodes = append(t.nodes, d)
}

// ligand returns the node beside n that stands for ligand l of its atom, -1 where there is none.
func (t *tree) ligand(n, l int32) int32 {
	x := &t.nodes[n]
	if l >= 0 && x.parent >= 0 && t.nodes[x.parent].atom == l {
		return x.parent
	}
	first, end := t.children(n)
	found := int32(-1)
	for k := first; k < end; k++ {
		if t.nodes[k].atom == l && (found < 0 || t.nodes[found].duplicate) {
			found = k
		}
	}
	return found
}

// expanded says that a is an atom of the third row or below with three ligands or more (sulfoxides,
// phosphates): what d orbitals add to its bonds is left out of account, its double bonds count as
// single (R. S. Cahn, C. Ingold, V. Prelog, Angew. Chem. Int. Ed. 5 (1966) 385; from memory).
func (f *frame) expanded(a int32) bool {
	x := f.m.Atom(int(a))
	switch x.Element {
	case 14, 15, 16, 17, 32, 33, 34, 35, 51, 52, 53:
		return f.m.Degree(int(a))+int(x.Hydrogens) > 2
	}
	return false
}
