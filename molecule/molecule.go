// Package molecule holds the frozen molecular graph: atoms and bonds in flat slices, packed
// adjacency, hydrogens, rings, aromaticity and stereo perceived once when a Builder builds it.
// A *Molecule is immutable and safe to share between goroutines.
package molecule

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

// Neighbor is one entry of the packed adjacency: the atom across and the bond between.
type Neighbor struct{ Atom, Bond int32 }

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

// Key identifies a molecule: a 128-bit hash of its canonical certificate.
type Key [16]byte

// Molecule is a frozen molecular graph; see the package comment.
type Molecule struct {
	atoms []Atom
	bonds []Bond
}

func (m *Molecule) NumAtoms() int   { panic("todo") }
func (m *Molecule) NumBonds() int   { panic("todo") }
func (m *Molecule) Atom(a int) Atom { panic("todo") }
func (m *Molecule) Bond(b int) Bond { panic("todo") }

// Neighbors returns the packed adjacency of a: shared, read only.
func (m *Molecule) Neighbors(a int) []Neighbor { panic("todo") }
func (m *Molecule) Degree(a int) int           { panic("todo") }

// BondBetween returns the bond that joins a and b, or -1.
func (m *Molecule) BondBetween(a, b int) int { panic("todo") }

// Rings returns a minimal cycle basis, each ring its atoms in cyclic order: shared, read only.
func (m *Molecule) Rings() [][]int32  { panic("todo") }
func (m *Molecule) InRing(a int) bool { panic("todo") }

// SmallestRing returns the size of the smallest ring through atom a, 0 if none.
func (m *Molecule) SmallestRing(a int) int { panic("todo") }

// SmallestBondRing returns the size of the smallest ring through bond b, 0 if none.
func (m *Molecule) SmallestBondRing(b int) int { panic("todo") }

// Components labels each atom with its connected component, 0.. in order of first atom.
func (m *Molecule) Components() (count int, label []int32) { panic("todo") }

// Split returns the connected components as molecules of their own.
func (m *Molecule) Split() []*Molecule { panic("todo") }

// Centers and DoubleBonds list the stereo marks kept (void marks are dropped).
func (m *Molecule) Centers() []Center         { panic("todo") }
func (m *Molecule) DoubleBonds() []DoubleBond { panic("todo") }

// Ranks gives each atom its place in the canonical order (a permutation).
func (m *Molecule) Ranks() []int32 { panic("todo") }

// Orbits gives each atom the lowest index of the atoms equivalent to it by symmetry, stereo included.
func (m *Molecule) Orbits() []int32 { panic("todo") }

// Key is the exact identity, FlatKey ignores stereo, SeenThroughKey also sees through salts,
// charge-separated forms and hydrogens shifting between N, O, S along a conjugated path, and simple enols.
func (m *Molecule) Key() Key            { panic("todo") }
func (m *Molecule) FlatKey() Key        { panic("todo") }
func (m *Molecule) SeenThroughKey() Key { panic("todo") }

// FreeForm returns the neutral parent: metal cations and counter-ions of salts dropped, protons restored.
func (m *Molecule) FreeForm() *Molecule { panic("todo") }

// Mirror returns the mirror image; WithoutStereo drops all stereo marks.
func (m *Molecule) Mirror() *Molecule        { panic("todo") }
func (m *Molecule) WithoutStereo() *Molecule { panic("todo") }

// Join puts several molecules into one graph; atoms keep their order, shifted.
func Join(ms ...*Molecule) *Molecule { panic("todo") }
func (m *Molecule) Formula() Formula { panic("todo") }

// Formula counts atoms by element, hydrogens included, with the total charge.
type Formula struct {
	Count  [119]int32
	Charge int32
}

// String writes f in Hill order ("C8H16O").
func (f Formula) String() string { panic("todo") }

// ParseFormula reads a formula such as C8H16O or C2H6OS; errors name the position.
func ParseFormula(s string) (Formula, error) { panic("todo") }

// MolarMass in g/mol from IUPAC standard atomic weights.
func (f Formula) MolarMass() float64 { panic("todo") }

// MonoisotopicMass in Da, electron mass of the charge counted.
func (f Formula) MonoisotopicMass() float64 { panic("todo") }

// Unsaturation: rings plus pi bonds, standard valences; half-integers mean an odd electron count.
func (f Formula) Unsaturation() float64 { panic("todo") }

// Symbol and ElementBySymbol translate between atomic numbers and symbols.
func (e Element) Symbol() string               { panic("todo") }
func ElementBySymbol(s string) (Element, bool) { panic("todo") }
