package reactions

import (
	"errors"
	"slices"
	"sync"

	"shelfward/molecule"
)

// pool is a set of molecules laid side by side, whose atoms one mapping may pick from.
type pool struct {
	molecules []*molecule.Molecule
	offset    []int32 // first atom of each molecule
	atoms     int
}

// locate returns the molecule and its atom for a pool atom.
func (p *pool) locate(a int32) (which int, atom int32) {
	which = len(p.offset) - 1
	for p.offset[which] > a {
		which--
	}
	return which, a - p.offset[which]
}

// piece is one molecule after an edit, with the pool atom of each of its atoms (-1: new).
type piece struct {
	*made
	from []int32
}

var errNoFit = errors.New("the edit does not fit the molecule")

// editor applies a script to a pool. slots[i] lists, per application, the pool atom of slot i or -1.
type editor struct {
	s        *script
	d        direction
	p        *pool
	b        molecule.Builder
	hBefore  []int // hydrogens and bond orders before the edit, per atom
	sumBefor []int
	dead     []bool // atoms that vanish
	touched  []bool
	newSlot  []int     // for atoms made: 1 + slot, else 0
	lost     links     // ligands that an atom lost
	gained   links     // and gained
	course   []coursed // stereo course of the atoms that the script names

	sum, arom, degree              []int // scratch of bondSums
	label, sizes, index, bondIndex []int32
	to, madeOf                     []int32 // the mapping with the atoms made; per atom: 1 + its query atom on the side made
	builders                       []molecule.Builder
}

// links lists pairs of an atom and a ligand; an edit touches a handful of atoms.
type links [][2]int32

func (l *links) add(a, ligand int32) { *l = append(*l, [2]int32{a, ligand}) }

// sole returns the ligand of a where it has exactly one in the list.
func (l links) sole(a int32) (ligand int32, ok bool) {
	n := 0
	for _, x := range l {
		if x[0] == a {
			ligand = x[1]
			n++
		}
	}
	return ligand, n == 1
}

// coursed is an atom with its stereo course.
type coursed struct {
	atom int32
	word string
}

// fragments is one combination of what is attached for the slots that stand only on the side made.
type fragments struct {
	at     []*molecule.Molecule // slot -> fragment whose first atom is attached, nil: the pattern's own atom
	inside []bool               // slot -> some fragment brings its atom
}

// edit applies the script to p once per mapping (slot -> pool atom, -1 where the slot is not found)
// and returns the connected pieces, those with found atoms and the rest alike.
func (s *script) edit(w *workspace, d direction, p *pool, mappings [][]int32, frags *fragments) ([]piece, error) {
	e := editors.Get().(*editor)
	defer editors.Put(e)
	e.reset(s, d, p)
	e.load()
	for _, to := range mappings {
		e.to = append(e.to[:0], to...)
		to := e.to
		if err := e.makeAtoms(to, frags); err != nil {
			return nil, err
		}
		if err := e.changeBonds(to); err != nil {
			return nil, err
		}
		if err := e.changeAtoms(to); err != nil {
			return nil, err
		}
		if err := e.dropAtoms(to); err != nil {
			return nil, err
		}
		if err := e.stereo(to); err != nil {
			return nil, err
		}
	}
	if err := e.setHydrogens(mappings); err != nil {
		return nil, err
	}
	e.mendMarks()
	return e.pieces(w)
}

// editors keeps the scratch of edits: the search makes hundreds for every molecule that it opens.
var editors = sync.Pool{New: func() any { return new(editor) }}

// reset empties the scratch for another edit. Nothing that pieces keep lies in it.
func (e *editor) reset(s *script, d direction, p *pool) {
	e.s, e.d, e.p = s, d, p
	e.b.Atoms, e.b.Bonds = e.b.Atoms[:0], e.b.Bonds[:0]
	e.b.Centers, e.b.DoubleBonds = e.b.Centers[:0], e.b.DoubleBonds[:0]
	e.lost, e.gained, e.course = e.lost[:0], e.gained[:0], e.course[:0]
}

// sized returns a slice of n values, whatever they are, in the room of old.
func sized[T any](old []T, n int) []T {
	if cap(old) < n {
		return make([]T, n, n+8)
	}
	return old[:n]
}

// zeroed returns a slice of n zero values in the room of old.
func zeroed[T any](old []T, n int) []T {
	if cap(old) < n {
		return make([]T, n, n+8)
	}
	old = old[:n]
	clear(old)
	return old
}

// load copies the molecules into one builder. Aromatic bonds are given as such only where the script
// changes an aromatic bond; otherwise the Kekulé form kept by the molecule serves as it is.
func (e *editor) load() {
	aromatic := e.s.aromatic
	e.hBefore, e.sumBefor = zeroed(e.hBefore, e.p.atoms), zeroed(e.sumBefor, e.p.atoms)
	for i, m := range e.p.molecules {
		e.loadMolecule(m, e.p.offset[i], aromatic)
	}
	e.dead = zeroed(e.dead, len(e.b.Atoms))
	e.touched = zeroed(e.touched, len(e.b.Atoms))
	e.newSlot = zeroed(e.newSlot, len(e.b.Atoms))
}

func (e *editor) loadMolecule(m *molecule.Molecule, off int32, aromatic bool) {
	for a := 0; a < m.NumAtoms(); a++ {
		at := m.Atom(a)
		at.Aromatic = at.Aromatic && aromatic
		at.Class = 0
		e.b.Atoms = append(e.b.Atoms, at)
		e.hBefore[int(off)+a] = int(at.Hydrogens)
	}
	bondOff := int32(len(e.b.Bonds))
	for bi := 0; bi < m.NumBonds(); bi++ {
		b := m.Bond(bi)
		b.A, b.B = b.A+off, b.B+off
		e.sumBefor[b.A] += int(b.Order)
		e.sumBefor[b.B] += int(b.Order)
		if aromatic && b.Aromatic {
			b.Order = molecule.OrderAromatic
		} else {
			b.Aromatic = false
		}
		e.b.Bonds = append(e.b.Bonds, b)
	}
	for _, c := range m.Centers() {
		c.Atom += off
		for k, l := range c.Ligands {
			if l >= 0 {
				c.Ligands[k] = l + off
			}
		}
		e.b.Centers = append(e.b.Centers, c)
	}
	for _, db := range m.DoubleBonds() {
		db.Bond, db.A, db.B = db.Bond+bondOff, db.A+off, db.B+off
		e.b.DoubleBonds = append(e.b.DoubleBonds, db)
	}
}

func (e *editor) addAtom(a molecule.Atom, slot int) int32 {
	e.b.Atoms = append(e.b.Atoms, a)
	e.dead = append(e.dead, false)
	e.touched = append(e.touched, false)
	e.newSlot = append(e.newSlot, slot+1)
	return int32(len(e.b.Atoms) - 1)
}

// makeAtoms creates the atoms that stand only on the side made.
func (e *editor) makeAtoms(to []int32, frags *fragments) error {
	for i := range e.s.slots {
		sl := &e.s.slots[i]
		if sl.found(e.d) >= 0 || sl.made(e.d) < 0 || frags != nil && frags.inside[i] {
			continue
		}
		if frags != nil && frags.at[i] != nil {
			to[i] = e.attach(frags.at[i], i)
			continue
		}
		qa := &e.s.side[1-e.d].Atoms[sl.made(e.d)]
		el, ok := qa.SingleElement()
		if !ok {
			return errNoFit
		}
		a := molecule.Atom{Element: el, Charge: qa.Charge, Isotope: qa.Isotope, Hydrogens: molecule.AutoHydrogens, Aromatic: qa.OnlyAromatic()}
		if qa.Hydrogens >= 0 {
			a.Hydrogens = uint8(qa.Hydrogens)
		}
		to[i] = e.addAtom(a, i)
	}
	if e.d == backward {
		return e.mirrorHalves(to)
	}
	return nil
}

// mirrorHalves completes a symmetrical reactant: an atom that leaves and whose surroundings in the reactant
// part are those of an atom that stays takes over what hangs there. So the other half of an anhydride is
// the same acid.
func (e *editor) mirrorHalves(to []int32) error {
	for i := range e.s.slots {
		sl := &e.s.slots[i]
		if to[i] < 0 || e.newSlot[to[i]] != i+1 || sl.at[forward] < 0 || sl.at[backward] >= 0 {
			continue
		}
		twin := e.s.twin[i]
		if twin < 0 || to[twin] < 0 || int(to[twin]) >= e.p.atoms || e.s.slots[twin].at[backward] < 0 {
			continue
		}
		if !e.copyBranches(to[i], to[twin], to) {
			return errNoFit
		}
	}
	return nil
}

// copyBranches hangs on the new atom a copy of what hangs on the pool atom twin outside the pattern.
func (e *editor) copyBranches(on, twin int32, to []int32) bool {
	which, a := e.p.locate(twin)
	off := e.p.offset[which]
	var laid []int32
	for _, x := range to {
		if x >= off && x < off+int32(e.p.molecules[which].NumAtoms()) {
			laid = append(laid, x-off)
		}
	}
	b := &molecule.Builder{Atoms: e.b.Atoms, Bonds: e.b.Bonds}
	ok := copyBranches(b, int(on), e.p.molecules[which], a, laid)
	for len(e.dead) < len(b.Atoms) {
		e.dead, e.touched, e.newSlot = append(e.dead, false), append(e.touched, false), append(e.newSlot, 0)
	}
	e.b.Atoms, e.b.Bonds = b.Atoms, b.Bonds
	return ok
}

// insideFragments marks the leaving atoms without choices of their own that hang on a class for which a whole fragment
// stands in: the fragment brings them.
func (s *script) insideFragments(at []*molecule.Molecule) []bool {
	inside := make([]bool, len(s.slots))
	for changed := true; changed; {
		changed = false
		for _, be := range s.bonds {
			for _, pair := range [2][2]int{{be.a, be.b}, {be.b, be.a}} {
				from, to := s.slots[pair[0]], s.slots[pair[1]]
				whole := at[pair[0]] != nil && from.at[backward] < 0 || inside[pair[0]]
				if whole && at[pair[1]] == nil && to.at[backward] < 0 && !inside[pair[1]] {
					inside[pair[1]], changed = true, true
				}
			}
		}
	}
	return inside
}

// attach copies a fragment into the builder; its first atom gives up the hydrogens that the bonds to
// the molecule replace.
func (e *editor) attach(f *molecule.Molecule, slotIndex int) int32 {
	first := int32(len(e.b.Atoms))
	for i := range f.NumAtoms() {
		a := f.Atom(i)
		if i == 0 {
			need := 0
			for _, be := range e.s.bonds {
				if far := be.a + be.b - slotIndex; (be.a == slotIndex || be.b == slotIndex) && e.s.slots[far].at[backward] >= 0 {
					need += int(be.order[1-e.d])
				}
			}
			a.Hydrogens = uint8(max(0, int(a.Hydrogens)-need))
		}
		a.Class, a.Aromatic = 0, false
		e.addAtom(a, slotIndex)
	}
	for i := range f.NumBonds() {
		b := f.Bond(i)
		b.A, b.B, b.Aromatic = b.A+first, b.B+first, false
		e.b.Bonds = append(e.b.Bonds, b)
	}
	return first
}

// bond returns the index of the bond between two builder atoms, -1 if none.
func (e *editor) bond(a, b int32) int {
	for i := range e.b.Bonds {
		x := &e.b.Bonds[i]
		if x.Order != 0 && (x.A == a && x.B == b || x.A == b && x.B == a) {
			return i
		}
	}
	return -1
}

func (e *editor) changeBonds(to []int32) error {
	for _, be := range e.s.bonds {
		a, b := to[be.a], to[be.b]
		if a < 0 || b < 0 {
			continue // an atom that stands on neither side here
		}
		onMadeA, onMadeB := e.s.slots[be.a].made(e.d) >= 0, e.s.slots[be.b].made(e.d) >= 0
		if !onMadeA && !onMadeB {
			continue // both leave together, still joined
		}
		after := be.order[1-e.d]
		i := e.bond(a, b)
		e.touched[a], e.touched[b] = true, true
		switch {
		case after == 0 && i >= 0:
			e.b.Bonds[i].Order = 0
			e.lost.add(a, b)
			e.lost.add(b, a)
		case after != 0 && i >= 0:
			if be.order[e.d] == 0 {
				return errNoFit // the bond to be made is there already
			}
			e.b.Bonds[i].Order = after
			e.b.Bonds[i].Aromatic = after == molecule.OrderAromatic
		case after != 0:
			e.b.Bonds = append(e.b.Bonds, molecule.Bond{A: a, B: b, Order: after, Aromatic: after == molecule.OrderAromatic})
			e.gained.add(a, b)
			e.gained.add(b, a)
		}
	}
	return nil
}

// changeAtoms sets charges; hydrogens follow later.
func (e *editor) changeAtoms(to []int32) error {
	for i := range e.s.slots {
		sl := &e.s.slots[i]
		if to[i] < 0 || sl.at[0] < 0 || sl.at[1] < 0 || !e.s.touched[i] {
			continue
		}
		f, m := &e.s.side[e.d].Atoms[sl.found(e.d)], &e.s.side[1-e.d].Atoms[sl.made(e.d)]
		e.touched[to[i]] = true
		if sl.course != "" {
			e.course = append(e.course, coursed{to[i], sl.course})
		}
		if f.AnyCharge || m.AnyCharge {
			continue
		}
		e.b.Atoms[to[i]].Charge += m.Charge - f.Charge
	}
	return nil
}

// dropAtoms removes, backwards, the atoms that a reagent brought: all that hangs on them must be known.
func (e *editor) dropAtoms(to []int32) error {
	if e.d == forward {
		return nil
	}
	for i := range e.s.slots {
		sl := &e.s.slots[i]
		if sl.at[forward] >= 0 || to[i] < 0 {
			continue
		}
		a := to[i]
		for bi := range e.b.Bonds {
			b := &e.b.Bonds[bi]
			if b.Order == 0 || b.A != a && b.B != a {
				continue
			}
			other := b.A + b.B - a
			if !slices.Contains(to, other) {
				return errNoFit
			}
			b.Order = 0
			e.lost.add(other, a)
			e.touched[other] = true
		}
		e.dead[a] = true
	}
	return nil
}
