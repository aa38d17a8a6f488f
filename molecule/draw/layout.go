// Package draw lays molecules out on the plane and draws them: structures, and schemes of reactions. A
// Drawing is neutral of devices; SVG and PNG are written from it.
//
// Ring systems come first, each in a frame of its own (regular polygons; bridged ones with a bridge inside).
// They and the chains are then joined, bond by bond, outwards from the largest system or along the longest
// chain; overlaps are turned or bent away; at last the whole is turned as chemists hold it. Conventions follow
// the IUPAC Recommendations 2008 (graphical representation standards for chemical structure diagrams, Pure
// Appl. Chem. 80 (2008) 277) and 2006 (stereochemical configuration, Pure Appl. Chem. 78 (2006) 1897).
package draw

import (
	"cmp"
	"slices"
	"sync"

	"shelfward/molecule"
)

// gap is the space between components.
const gap = 1.5

// Layout returns a place for every atom of m, in bond lengths. The same molecule gets the same picture whatever
// the order of its atoms. Double bonds stand as they are marked.
func Layout(m *molecule.Molecule) []Point {
	l := layouts.Get().(*layout)
	defer layouts.Put(l)
	l.load(m)
	at := make([]Point, l.v.n)
	if l.v.n == 0 {
		return at
	}
	l.layRings()
	l.components()
	for r, p := range l.at {
		at[l.v.tally[r]] = p
	}
	return at
}

var layouts = sync.Pool{New: func() any { return new(layout) }}

// layout is the state of one picture, and memory used again by the next.
type layout struct {
	v       view
	at      []Point
	placed  []bool
	parent  []int32 // atom -> atom it was reached from, -1 at the start
	height  []int32 // atom -> longest way down from it
	side    []int8  // atom -> side (1 left, -1 right) to which the chain turned at it
	run     []int16 // atom -> how many the chain has run on to it without a branch or ring taking over
	queue   []int32
	systems []ringSystem
	member  []int32 // atom -> its first ring system, -1 none
	marked  []mark

	frame  []Point // a ring system in the making
	have   []bool
	framed []int32
	path   []int32
	bow    []Point
	lines  []line
	marks  []bool
	want   []float64
	index  []int32
	points []Point

	angles []float64
	todo   []branch
	bonds  []line // of the component
	inSide []bool
	side2  []int32
	rest   []int32
	saved  []Point
}

// mark is a double bond of known geometry in the numbering of the view.
type mark struct {
	a, b, la, lb int32
	bond         int32
	together     bool
}

func (l *layout) load(m *molecule.Molecule) {
	l.v.load(m)
	n := l.v.n
	l.at, l.placed = resize(l.at, n), resize(l.placed, n)
	l.parent, l.height, l.side = resize(l.parent, n), resize(l.height, n), resize(l.side, n)
	l.run = resize(l.run, n)
	l.frame, l.have, l.framed = resize(l.frame, n), resize(l.have, n), l.framed[:0]
	l.marked = l.marked[:0]
	if len(m.DoubleBonds()) > 0 {
		ranks := m.Ranks()
		for _, d := range m.DoubleBonds() {
			x := m.Bond(int(d.Bond))
			l.marked = append(l.marked, mark{ranks[x.A], ranks[x.B], ranks[d.A], ranks[d.B], d.Bond, d.Together})
		}
		slices.SortFunc(l.marked, func(x, y mark) int {
			return cmp.Compare(min(x.a, x.b)*int32(n)+max(x.a, x.b), min(y.a, y.b)*int32(n)+max(y.a, y.b))
		})
	}
	l.member = resize(l.member, n)
	for i := range l.member {
		l.member[i] = -1
	}
	for i := len(l.v.rings) - 1; i >= 0; i-- {
		for _, a := range l.v.rings[i] {
			l.member[a] = l.v.system[i]
		}
	}
}

// components places the connected parts side by side, large ones first.
func (l *layout) components() {
	var parts []component
	for a := range l.v.n {
		if !l.placed[a] {
			parts = append(parts, l.component(int32(a)))
		}
	}
	if len(parts) == 1 {
		return
	}
	slices.SortStableFunc(parts, func(x, y component) int { return cmp.Compare(len(y.atoms), len(x.atoms)) })
	left := 0.0
	for _, c := range parts {
		lo, hi := l.bounds(c.atoms)
		shift := Point{left - lo.X, -(lo.Y + hi.Y) / 2}
		for _, a := range c.atoms {
			l.at[a] = l.at[a].add(shift)
		}
		left += hi.X - lo.X + gap
	}
}

// component is a connected part.
type component struct{ atoms []int32 }

// component places the connected part of a.
func (l *layout) component(a int32) component {
	start := l.start(a)
	l.walk(start)
	atoms := slices.Clone(l.queue)
	l.assemble(start)
	l.setGeometry(atoms)
	l.untangle(atoms)
	l.orient(atoms)
	return component{atoms}
}

// start is the atom to begin with: in the ring system with most atoms, or the end of a longest chain.
func (l *layout) start(a int32) int32 {
	l.walk(a)
	best := int32(-1)
	for _, x := range l.queue {
		if s := l.member[x]; s >= 0 && (best < 0 || len(l.systems[s].atoms) > len(l.systems[best].atoms) ||
			len(l.systems[s].atoms) == len(l.systems[best].atoms) && s < best) {
			best = s
		}
	}
	if best >= 0 {
		return l.systems[best].atoms[0]
	}
	l.walk(l.queue[len(l.queue)-1])
	return l.queue[len(l.queue)-1]
}

// walk reaches the atoms connected with a by breadth: queue, parent and height.
func (l *layout) walk(a int32) {
	l.queue = append(l.queue[:0], a)
	l.parent[a] = -1
	seen := l.flags(l.v.n)
	seen[a] = true
	for i := 0; i < len(l.queue); i++ {
		x := l.queue[i]
		l.height[x] = 0
		for _, nb := range l.v.neighbors(x) {
			if !seen[nb.Atom] {
				seen[nb.Atom] = true
				l.parent[nb.Atom] = x
				l.queue = append(l.queue, nb.Atom)
			}
		}
	}
	for i := len(l.queue) - 1; i > 0; i-- {
		x := l.queue[i]
		if p := l.parent[x]; l.height[p] <= l.height[x] {
			l.height[p] = l.height[x] + 1
		}
	}
}

func (l *layout) bounds(atoms []int32) (lo, hi Point) {
	lo, hi = l.at[atoms[0]], l.at[atoms[0]]
	for _, a := range atoms {
		p := l.at[a]
		lo = Point{min(lo.X, p.X), min(lo.Y, p.Y)}
		hi = Point{max(hi.X, p.X), max(hi.Y, p.Y)}
	}
	return lo, hi
}

// setGeometry turns one side of each marked double bond outside rings that stands the wrong way.
func (l *layout) setGeometry(atoms []int32) {
	for _, d := range l.marked {
		if l.parent[d.a] != d.b && l.parent[d.b] != d.a || l.v.m.Bond(int(d.bond)).Ring || !l.placed[d.a] {
			continue
		}
		if l.drawnTogether(d) == d.together {
			continue
		}
		top, low := d.a, d.b
		if l.parent[d.a] == d.b {
			top, low = d.b, d.a
		}
		u := l.at[low].sub(l.at[top]).unit()
		for _, x := range l.behind(low, top) {
			l.at[x] = l.at[x].mirrored(l.at[top], u)
		}
	}
}

// drawnTogether says that the named ligands of a marked double bond stand on one side of it.
func (l *layout) drawnTogether(d mark) bool {
	axis := l.at[d.b].sub(l.at[d.a])
	return axis.cross(l.at[d.la].sub(l.at[d.a]))*axis.cross(l.at[d.lb].sub(l.at[d.b])) > 0
}

// behind lists the atoms reached from a without passing block.
func (l *layout) behind(a, block int32) []int32 {
	seen := l.flags(l.v.n)
	seen[a], seen[block] = true, true
	l.side2 = append(l.side2[:0], a)
	for i := 0; i < len(l.side2); i++ {
		for _, nb := range l.v.neighbors(l.side2[i]) {
			if !seen[nb.Atom] {
				seen[nb.Atom] = true
				l.side2 = append(l.side2, nb.Atom)
			}
		}
	}
	return l.side2
}
