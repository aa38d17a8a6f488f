package name

import (
	"slices"

	"shelfward/molecule"
)

// The sequence rule of Cahn, Ingold and Prelog as far as rule 1a goes (P-92.2): ligands are compared by
// atomic number, sphere by sphere, with duplicate atoms for multiple bonds and ring closures. What is not
// decided by it, and aromatic rings with heteroatoms, whose duplicates depend on the drawing, are left undecided.

// sphereNode is an atom of the tree that grows from a stereocentre.
type sphereNode struct {
	atom   int32 // -1: a phantom
	number int   // atomic number, 0 for a phantom
	copy   bool  // a duplicate: its ligands are phantoms
	parent *sphereNode
}

// maxSpheres and maxSphereSteps bound a comparison.
const (
	maxSpheres     = 16
	maxSphereSteps = 4000
)

// priority compares ligands.
type priority struct {
	m     *molecule.Molecule
	steps int
	fail  bool
}

// ligands lists what hangs on n beyond its parent, highest first.
func (p *priority) ligands(n *sphereNode) []*sphereNode {
	var list []*sphereNode
	if n.atom < 0 || n.copy {
		return nil
	}
	add := func(a int32, copy bool) {
		list = append(list, &sphereNode{a, int(p.m.Atom(int(a)).Element), copy, n})
	}
	var aromatic []molecule.Element
	for _, nb := range p.m.Neighbors(int(n.atom)) {
		b := p.m.Bond(int(nb.Bond))
		if b.Aromatic {
			aromatic = append(aromatic, p.m.Atom(int(nb.Atom)).Element)
		}
		back := n.parent != nil && nb.Atom == n.parent.atom
		ring := false
		for q := n.parent; q != nil && !back; q = q.parent {
			ring = ring || q.atom == nb.Atom
		}
		if !back {
			add(nb.Atom, ring)
		}
		for range int(b.Order) - 1 {
			add(nb.Atom, true)
		}
	}
	for _, e := range aromatic {
		if e != aromatic[0] {
			p.fail = true
		}
	}
	for range p.m.Atom(int(n.atom)).Hydrogens {
		list = append(list, &sphereNode{-1, 1, false, n})
	}
	for len(list) < 3 {
		list = append(list, &sphereNode{-1, 0, false, n})
	}
	slices.SortStableFunc(list, func(x, y *sphereNode) int {
		if x.number != y.number {
			return y.number - x.number
		}
		return -p.compare(x, y)
	})
	return list
}

// compare says which ligand is senior: positive for x, negative for y, 0 if rule 1a does not decide.
func (p *priority) compare(x, y *sphereNode) int {
	if x.number != y.number {
		return x.number - y.number
	}
	if x.atom < 0 && y.atom < 0 {
		return 0
	}
	xs, ys := []*sphereNode{x}, []*sphereNode{y}
	for range maxSpheres {
		if p.steps++; p.steps > maxSphereSteps || p.fail {
			p.fail = true
			return 0
		}
		var nx, ny []*sphereNode
		for i := range max(len(xs), len(ys)) {
			var lx, ly []*sphereNode
			if i < len(xs) {
				lx = p.ligands(xs[i])
			}
			if i < len(ys) {
				ly = p.ligands(ys[i])
			}
			for k := range max(len(lx), len(ly)) {
				a, b := 0, 0
				if k < len(lx) {
					a = lx[k].number
				}
				if k < len(ly) {
					b = ly[k].number
				}
				if a != b {
					return a - b
				}
			}
			nx, ny = append(nx, lx...), append(ny, ly...)
		}
		if len(nx) == 0 && len(ny) == 0 {
			return 0
		}
		xs, ys = nx, ny
	}
	return 0
}

// ranked orders the ligands of atom a (without the atom across, -1 for none), highest first; false if two
// of them are not told apart.
func ranked(m *molecule.Molecule, a, across int32) ([]int32, bool) {
	p := &priority{m: m}
	root := &sphereNode{a, int(m.Atom(int(a)).Element), false, nil}
	if across >= 0 {
		root.parent = &sphereNode{across, int(m.Atom(int(across)).Element), false, nil}
	}
	var list []*sphereNode
	for _, nb := range m.Neighbors(int(a)) {
		if nb.Atom != across {
			list = append(list, &sphereNode{nb.Atom, int(m.Atom(int(nb.Atom)).Element), false, root})
		}
	}
	for range m.Atom(int(a)).Hydrogens {
		list = append(list, &sphereNode{molecule.LigandHydrogen, 1, false, root})
	}
	slices.SortStableFunc(list, func(x, y *sphereNode) int { return -p.compare(x, y) })
	atoms := make([]int32, len(list))
	for i, x := range list {
		atoms[i] = x.atom
		if i > 0 && p.compare(list[i-1], x) == 0 {
			return nil, false
		}
	}
	return atoms, !p.fail
}
