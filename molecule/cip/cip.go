// Package cip gives stereo marks their names: R, S, r and s for tetrahedral centres, E and Z for
// double bonds, after the hierarchical rules 1a to 5 of IUPAC (Nomenclature of Organic Chemistry,
// Recommendations and Preferred Names 2013, P-92; the reading of rule 1b for duplicated atoms and of
// auxiliary descriptors follows R. M. Hanson, S. Musacchio, J. W. Mayfield, M. J. Vainio,
// A. Yerin, D. Redkin, J. Chem. Inf. Model. 58 (2018) 1755).
//
// It keeps silent rather than guess: a mark whose ligands these rules do not order gets no label,
// nor does one that only rule 3 or a later one decides while a centre or double bond of the
// molecule is open, nor one whose digraph is larger than maxNodes.
package cip

import (
	"slices"

	"shelfward/molecule"
)

// Label is the name of one mark.
type Label string

// The labels; r and s name centres that only the sense of other centres tells apart (pseudo-asymmetric).
const (
	None   Label = ""
	R      Label = "R"
	S      Label = "S"
	LowerR Label = "r"
	LowerS Label = "s"
	E      Label = "E"
	Z      Label = "Z"
)

// Labels of one molecule, in the order of its Centers and DoubleBonds; None where the rules are silent.
type Labels struct {
	Centers     []Label
	DoubleBonds []Label
}

// Assign names every mark of m.
func Assign(m *molecule.Molecule) Labels {
	l := Labels{Centers: make([]Label, len(m.Centers())), DoubleBonds: make([]Label, len(m.DoubleBonds()))}
	if !m.HasStereo() {
		return l
	}
	f := newFrame(m)
	for i, c := range m.Centers() {
		l.Centers[i] = f.center(c)
	}
	for i, d := range m.DoubleBonds() {
		l.DoubleBonds[i] = f.doubleBond(d)
	}
	return l
}

// frame is what all digraphs of one molecule share.
type frame struct {
	m        *molecule.Molecule
	marks    []int32 // atom -> its entry in Centers, -1
	axes     []int32 // bond -> its entry in DoubleBonds, -1
	partners [][]int32
	open     bool // some centre or double bond that constitution makes stereogenic has no mark
}

func newFrame(m *molecule.Molecule) *frame {
	f := &frame{m: m, marks: filled(m.NumAtoms()), axes: filled(m.NumBonds())}
	for i, c := range m.Centers() {
		f.marks[c.Atom] = int32(i)
	}
	for i, d := range m.DoubleBonds() {
		f.axes[d.Bond] = int32(i)
	}
	f.partners = doublePartners(m)
	f.open = f.hasOpen()
	return f
}

func filled(n int) []int32 {
	list := make([]int32, n)
	for i := range list {
		list[i] = -1
	}
	return list
}

// hasOpen says whether constitution alone makes a centre or double bond stereogenic that has no mark.
func (f *frame) hasOpen() bool {
	m, orbits := f.m, f.m.FlatOrbits()
	distinct := func(a, except int) bool {
		var seen []int32
		for _, nb := range m.Neighbors(a) {
			if int(nb.Atom) == except {
				continue
			}
			if slices.Contains(seen, orbits[nb.Atom]) {
				return false
			}
			seen = append(seen, orbits[nb.Atom])
		}
		return true
	}
	for a := range m.NumAtoms() {
		x := m.Atom(a)
		if f.marks[a] < 0 && x.Element == 6 && x.Hydrogens < 2 && m.Degree(a)+int(x.Hydrogens) == 4 && (distinct(a, -1) || f.maybeDependent(a)) {
			return true
		}
	}
	for b := range m.NumBonds() {
		x := m.Bond(b)
		ring := m.SmallestBondRing(b)
		if f.axes[b] >= 0 || x.Order != 2 || x.Aromatic || ring > 0 && ring < 8 {
			continue
		}
		end := func(a, partner int32) bool {
			return m.Degree(int(a)) > 1 && m.Degree(int(a)) < 4 && m.Atom(int(a)).Hydrogens < 2 && distinct(int(a), int(partner))
		}
		if end(x.A, x.B) && end(x.B, x.A) {
			return true
		}
	}
	return false
}

// maybeDependent says that ligands of a which constitution makes equal lead to marks that tell them
// apart: a could be a centre because of them.
func (f *frame) maybeDependent(a int) bool {
	m, orbits, exact := f.m, f.m.FlatOrbits(), f.m.Orbits()
	alone := exact[a] == int32(a) && !slices.Contains(exact[a+1:], int32(a))
	nbs := m.Neighbors(a)
	for i, x := range nbs {
		for _, y := range nbs[:i] {
			// What makes equal ligands equal leaves a in its place, unless there are more of its kind and a
			// ring leads from one to the next.
			alike := exact[x.Atom] == exact[y.Atom] && (alone || !m.Bond(int(x.Bond)).Ring)
			if orbits[x.Atom] == orbits[y.Atom] && !alike && f.leadsToMark(x.Atom, int32(a)) {
				return true
			}
		}
	}
	return false
}

// leadsToMark walks from start without passing block.
func (f *frame) leadsToMark(start, block int32) bool {
	seen := make([]bool, f.m.NumAtoms())
	seen[start], seen[block] = true, true
	queue := []int32{start}
	for i := 0; i < len(queue); i++ {
		if f.marks[queue[i]] >= 0 {
			return true
		}
		for _, nb := range f.m.Neighbors(int(queue[i])) {
			if f.axes[nb.Bond] >= 0 {
				return true
			}
			if !seen[nb.Atom] {
				seen[nb.Atom] = true
				queue = append(queue, nb.Atom)
			}
		}
	}
	return false
}

// center names the mark c.
func (f *frame) center(c molecule.Center) Label {
	t := newTree(f, c.Atom)
	label := t.nameCenter(c, 0, lastPlain)
	if label == None && !t.full && !f.open {
		t.nameInside()
		label = t.nameCenter(c, 0, lastRule)
	}
	if t.full {
		return None
	}
	return label
}

// doubleBond names the mark d.
func (f *frame) doubleBond(d molecule.DoubleBond) Label {
	x := f.m.Bond(int(d.Bond))
	label, full := f.axis(d, x, lastPlain)
	if label == None && !full && !f.open {
		label, full = f.axis(d, x, lastRule)
	}
	if full {
		return None
	}
	return label
}

// axis ranks the ligands at each end in the digraph that grows from that end.
func (f *frame) axis(d molecule.DoubleBond, x molecule.Bond, last rule) (label Label, full bool) {
	together := d.Together
	for _, end := range [2][3]int32{{x.A, x.B, d.A}, {x.B, x.A, d.B}} {
		t := newTree(f, end[0])
		if last > lastPlain {
			t.nameInside()
		}
		first, ok := t.seniorBeside(0, end[1], last)
		if t.full || !ok {
			return None, t.full
		}
		if first != end[2] {
			together = !together
		}
	}
	if together {
		return Z, false
	}
	return E, false
}
