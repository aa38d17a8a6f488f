// Package name writes and reads systematic names of organic molecules after the IUPAC
// recommendations of 2013 (Favre, Powell: Nomenclature of Organic Chemistry; rule numbers P-... in the
// comments are from memory). Of names constitutions; OfWithStereo adds R, S, E and Z where they belong
// to the parent and are decided by atomic numbers alone. Read reads both.
//
// Of is careful rather than complete: a molecule outside what it knows gets no name, and every name
// is read back and compared with the molecule before it is given out. Where the recommendations
// offer several names the one written is unambiguous, though not always the preferred one (no
// multiplicative names, von Baeyer names for small rings without a retained or fusion name).
package name

import (
	"shelfward/molecule"
)

// maxAtoms is the largest molecule that is named: longer names help nobody.
const maxAtoms = 120

// maxDepth bounds the nesting of substituents.
const maxDepth = 24

// writer is the working memory for one molecule.
type writer struct {
	m         *molecule.Molecule
	ringOf    []int32 // atom -> ring system, -1 none
	rings     []*ringSystem
	biphenyls []*ringSystem // pairs of joined benzene rings, beside rings
	groupOf   []*group      // key atom -> its group
	position  []int32       // atom -> position+1 in the candidate at hand, 0 outside
	stamped   []int32       // atom -> stamp of the plan that expressed it last
	stamp     int32
	known     map[[2]int32]sub // substituent names by atom and neighbour
	depth     int
	cation    int32 // the ring atom that an ium ending names, -1 none
	fail      bool  // something has no name
}

// newWriter prepares the naming of one connected molecule.
func newWriter(m *molecule.Molecule) *writer {
	w := &writer{m: m, cation: -1, known: map[[2]int32]sub{}}
	w.position = make([]int32, m.NumAtoms())
	w.stamped = make([]int32, m.NumAtoms())
	w.findRings()
	w.findBiphenyls()
	w.findGroups()
	return w
}

// Of returns the systematic name of the constitution of m, or an empty text if none can be given.
// The same constitution gives the same name however its atoms are numbered.
func Of(m *molecule.Molecule) string {
	if m.NumAtoms() == 0 || m.NumAtoms() > maxAtoms || !nameable(m) {
		return ""
	}
	name := written(m)
	if name == "" || !readsBack(name, m) {
		return ""
	}
	return name
}

// written names m without checking.
func written(m *molecule.Molecule) string {
	if n, _ := m.Components(); n > 1 {
		return saltName(m)
	}
	if name, ok := loaded().whole[m.FlatKey()]; ok {
		return name
	}
	w := newWriter(m)
	name := w.root()
	if w.fail {
		return ""
	}
	return name
}

// nameable refuses isotopes, radicals and unusual valences.
func nameable(m *molecule.Molecule) bool {
	for a := range m.NumAtoms() {
		x := m.Atom(a)
		if x.Isotope != 0 || x.Element == 0 {
			return false
		}
	}
	return true
}

// root names the whole molecule.
func (w *writer) root() string {
	s := spec{attach: -1, blocked: -1}
	senior := noClass
	for _, g := range w.groupOf {
		if g != nil && (senior == noClass || g.class < senior) {
			senior = g.class
		}
	}
	for _, g := range w.groupOf {
		if g != nil && g.class == senior {
			s.groups = append(s.groups, g)
		}
	}
	if name := w.mineralName(senior); name != "" || w.fail {
		return name
	}
	if name := w.polyolEster(s); name != "" || w.fail {
		return name
	}
	var list []*candidate
	for _, g := range s.groups {
		list = append(list, w.functionalParents(g)...)
	}
	list = append(list, w.heteroParents()...)
	for _, r := range w.rings {
		list = append(list, ringCandidates(r)...)
	}
	for _, r := range w.biphenyls {
		list = append(list, ringCandidates(r)...)
	}
	list = append(list, w.chainCandidates(-1, s)...)
	if len(list) == 0 {
		w.fail = true
		return ""
	}
	return w.choose(list, s)
}

// functionalParents are the urea, carbamic acid and the like that g stands for.
func (w *writer) functionalParents(g *group) []*candidate {
	if len(g.hosts) > 0 || g.within || g.chain == "" {
		return nil
	}
	one := &candidate{order: []int32{g.key}, group: g, locants: []string{""}}
	if len(g.nitrogens) < 2 {
		return []*candidate{one}
	}
	return []*candidate{one, {order: one.order, group: g, locants: one.locants, swapped: true}}
}

// ringCandidates are the numberings of r.
func ringCandidates(r *ringSystem) []*candidate {
	if !r.ok {
		return nil
	}
	list := make([]*candidate, len(r.orders))
	for i, o := range r.orders {
		list[i] = &candidate{ring: r, order: o, locants: r.locants}
	}
	return list
}
