package molecule

// AutoHydrogens in Atom.Hydrogens asks the Builder to fill hydrogens up to the lowest normal valence.
const AutoHydrogens uint8 = 255

// OrderAromatic is the bond order of aromatic input; Build assigns a Kekulé form by maximum matching.
const OrderAromatic uint8 = 5

// MaxAtoms is the largest molecule that Build accepts.
const MaxAtoms = 2000

// Builder collects atoms and bonds; Build perceives and freezes them. Not safe for concurrent use.
type Builder struct {
	Atoms       []Atom
	Bonds       []Bond // Ring is ignored; Order may be OrderAromatic
	Centers     []Center
	DoubleBonds []DoubleBond
}

// Error says which atom or bond (index, -1 none) a molecule could not be built for.
type Error struct {
	Atom, Bond int
	Text       string
}

func (e *Error) Error() string { return e.Text }

// Builder returns a Builder that holds a copy of m (Kekulé orders, explicit hydrogen counts, stereo
// marks), to be edited and built again. Atom and bond indices are kept.
func (m *Molecule) Builder() *Builder { panic("todo") }

// AddAtom and AddBond append and return the index. Indices stay valid until RemoveAtoms/RemoveBonds.
func (b *Builder) AddAtom(a Atom) int                  { panic("todo") }
func (b *Builder) AddBond(a1, a2 int, order uint8) int { panic("todo") }

// Build perceives and freezes; the Builder may be reused. Errors are *Error.
func (b *Builder) Build() (*Molecule, error) { panic("todo") }
