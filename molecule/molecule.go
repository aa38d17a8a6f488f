// Package molecule holds the frozen molecular graph: atoms and bonds in flat slices, packed
// adjacency, hydrogens, rings, aromaticity and stereo perceived once when a Builder builds it.
// A *Molecule is immutable and safe to share between goroutines.
//
// Short names: m is a molecule, a an atom index, b a bond index, both from 0.
package molecule

import "sync/atomic"

// Element is an atomic number; 0 is the unknown atom '*'.
type Element uint8

// Atom is one atom of a frozen molecule.
type Atom struct {
	Element   Element
	Charge    int8
	Hydrogens uint8  // attached hydrogens that are not atoms of the graph
	Isotope   uint16 // mass number; 0 means natural
	Class     uint16 // atom class as written ([CH3:2]); 0 none. Never part of the identity.
	Aromatic  bool
}

// Bond joins atoms A and B. Order is the order in the Kekulé form kept (1-4), also when Aromatic.
type Bond struct {
	A, B     int32
	Order    uint8
	Aromatic bool
	Ring     bool
}

// Neighbor is one entry of the packed adjacency: the atom across and the bond between. It is an
// alias so that the pure graph packages below can take the adjacency as it is.
type Neighbor = struct{ Atom, Bond int32 }

// Ligand places that are not atoms of the graph.
const (
	LigandHydrogen int32 = -1
	LigandLonePair int32 = -2
)

// Center is a tetrahedral centre: looking from Ligands[0] towards Atom, the ligands 1, 2, 3 run
// clockwise if Clockwise. A ligand is an atom index, LigandHydrogen or LigandLonePair.
type Center struct {
	Atom      int32
	Ligands   [4]int32
	Clockwise bool
}

// DoubleBond is a double bond with a known geometry: A is a neighbour of Bond.A, B one of Bond.B,
// and Together says that A and B lie on the same side.
type DoubleBond struct {
	Bond     int32
	A, B     int32
	Together bool
}

// Molecule is a frozen molecular graph; see the package comment.
type Molecule struct {
	atoms       []Atom
	bonds       []Bond
	first       []int32    // atom -> start of its neighbours, one more entry than atoms
	neighbors   []Neighbor // all adjacency lists, one after the other
	rings       [][]int32
	bondRing    []uint16 // bond -> size of its smallest ring, 0 none; nil without rings
	centers     []Center
	doubleBonds []DoubleBond
	redraw      bool   // some nitrogen has five bonds or some halogen a positive charge
	leftOut     uint16 // see MarksLeftOut

	exact, flat, seen atomic.Pointer[identity] // made when first asked for
}

// NumAtoms returns the number of atoms of the graph (folded hydrogens not counted).
func (m *Molecule) NumAtoms() int { return len(m.atoms) }

// NumBonds returns the number of bonds of the graph.
func (m *Molecule) NumBonds() int { return len(m.bonds) }

// Atom returns atom a.
func (m *Molecule) Atom(a int) Atom { return m.atoms[a] }

// Bond returns bond b.
func (m *Molecule) Bond(b int) Bond { return m.bonds[b] }

// Neighbors returns the packed adjacency of a: shared, read only.
func (m *Molecule) Neighbors(a int) []Neighbor { return m.neighbors[m.first[a]:m.first[a+1]] }

// Degree returns the number of bonds of a in the graph.
func (m *Molecule) Degree(a int) int { return int(m.first[a+1] - m.first[a]) }

// BondBetween returns the bond that joins a and b, or -1.
func (m *Molecule) BondBetween(a, b int) int {
	for _, nb := range m.Neighbors(a) {
		if nb.Atom == int32(b) {
			return int(nb.Bond)
		}
	}
	return -1
}

// Other returns the atom across bond b from a.
func (m *Molecule) Other(b, a int) int {
	x := m.bonds[b]
	return int(x.A + x.B - int32(a))
}

// Rings returns a minimal cycle basis, each ring its atoms in cyclic order: shared, read only.
// Which basis is taken can depend on the numbering where several are minimal (cages).
func (m *Molecule) Rings() [][]int32 { return m.rings }

// InRing says whether a lies in a ring.
func (m *Molecule) InRing(a int) bool {
	for _, nb := range m.Neighbors(a) {
		if m.bonds[nb.Bond].Ring {
			return true
		}
	}
	return false
}

// SmallestRing returns the size of the smallest ring through atom a, 0 if none.
func (m *Molecule) SmallestRing(a int) int {
	size := 0
	for _, nb := range m.Neighbors(a) {
		if r := m.SmallestBondRing(int(nb.Bond)); r > 0 && (size == 0 || r < size) {
			size = r
		}
	}
	return size
}

// SmallestBondRing returns the size of the smallest ring through bond b, 0 if none.
func (m *Molecule) SmallestBondRing(b int) int {
	if m.bondRing == nil {
		return 0
	}
	return int(m.bondRing[b])
}

// Centers lists the tetrahedral marks kept (void marks are dropped): shared, read only.
func (m *Molecule) Centers() []Center { return m.centers }

// DoubleBonds lists the double bond marks kept (void marks are dropped): shared, read only.
func (m *Molecule) DoubleBonds() []DoubleBond { return m.doubleBonds }

// MarksLeftOut is the number of stereo marks of the input that a Molecule does not hold: axes (allenes,
// biaryls), shapes other than the tetrahedron, wedges that contradict each other. The molecule is the
// one without them; who reads it should say so.
func (m *Molecule) MarksLeftOut() int { return int(m.leftOut) }

// HasStereo says whether any stereo mark is kept.
func (m *Molecule) HasStereo() bool { return len(m.centers)+len(m.doubleBonds) > 0 }

// Components labels each atom with its connected component, 0.. in order of first atom.
func (m *Molecule) Components() (count int, label []int32) {
	label = make([]int32, len(m.atoms))
	for i := range label {
		label[i] = -1
	}
	var stack []int32
	for a := range m.atoms {
		if label[a] >= 0 {
			continue
		}
		label[a] = int32(count)
		for stack = append(stack[:0], int32(a)); len(stack) > 0; {
			x := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			for _, nb := range m.Neighbors(int(x)) {
				if label[nb.Atom] < 0 {
					label[nb.Atom] = int32(count)
					stack = append(stack, nb.Atom)
				}
			}
		}
		count++
	}
	return count, label
}
