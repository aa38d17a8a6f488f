package canon

import "slices"

// DropVoid returns which marks of g say something: keepCenter and keepAxis tell it mark by mark, nil
// when all do.
//
// A mark is void when flipping it alone gives the same graph again, and when this holds for all
// marks that symmetry, mirror symmetry included, makes its like: the class goes as a whole or
// stays as a whole. Three like centres in a ring, two up and one down, show why: turning over either of
// the two gives the same graph, but with both left open nothing would be known of them. Classes are
// judged one after the other in canonical order, each against what is left.
//
// It is not ok when more than MaxDependent marks of one component depend on each other: labelling
// such a ring of like centers costs a refinement per center and atom.
func (w *Worker) DropVoid(g *Graph) (keepCenter, keepAxis []bool, ok bool) {
	h := *g
	centerAt, axisAt := w.dropTwins(g, &h)
	v := voidWork{w: w, left: maxWork / max(1, len(g.Colours)*len(g.Colours))}
	v.marks = marks{h, centerAt, axisAt, nil, nil}
	suspects, most := v.suspects()
	if most > MaxDependent {
		return nil, nil, false
	}
	if suspects {
		for v.dropClass() {
		}
	}
	if len(v.graph.Centers) == len(g.Centers) && len(v.graph.Axes) == len(g.Axes) {
		return nil, nil, true
	}
	keepCenter, keepAxis = make([]bool, len(g.Centers)), make([]bool, len(g.Axes))
	for _, i := range v.centerAt {
		keepCenter[i] = true
	}
	for _, i := range v.axisAt {
		keepAxis[i] = true
	}
	return keepCenter, keepAxis, true
}

// MaxDependent is the most marks of one component that only each other may tell apart: far above any
// molecule on a shelf.
const MaxDependent = 150

// dropTwins leaves out marks with two twin ligands and tells where the rest stood in g.
func (w *Worker) dropTwins(g, h *Graph) (centerAt, axisAt []int) {
	w.search.g = g
	w.search.theta = resized(w.search.theta, len(g.Colours))
	for i := range w.search.theta {
		w.search.theta[i] = int32(i)
	}
	w.search.findTwins()
	twin := w.search.twin
	same := func(x, y int32) bool { return x >= 0 && y >= 0 && twin[x] >= 0 && twin[x] == twin[y] }
	h.Centers, h.Axes = nil, nil
	for i, c := range g.Centers {
		void := false
		for j, x := range c.Ligands {
			for _, y := range c.Ligands[:j] {
				void = void || same(x, y)
			}
		}
		if !void {
			h.Centers = append(h.Centers, c)
			centerAt = append(centerAt, i)
		}
	}
	for i, x := range g.Axes {
		if !same(x.LigandA, x.OtherA) && !same(x.LigandB, x.OtherB) {
			h.Axes = append(h.Axes, x)
			axisAt = append(axisAt, i)
		}
	}
	return centerAt, axisAt
}

// maxWork bounds the labellings spent on one graph, times the square of its atoms, which is what one
// costs in a ring of equal centres: hundreds of labellings for any molecule on a shelf, a fraction of a
// second for a hostile one (a ring of hundreds of centres), whose void marks then stay.
const maxWork = 700_000

// marks is a graph with what is known of each of its marks.
type marks struct {
	graph            Graph
	centerAt, axisAt []int  // where the marks stand in the given graph
	center, axis     []bool // mark can be void
}

// clone copies the marks; the bare graph is shared.
func (m *marks) clone() marks {
	c := *m
	c.graph.Centers, c.graph.Axes = slices.Clone(m.graph.Centers), slices.Clone(m.graph.Axes)
	c.centerAt, c.axisAt = slices.Clone(m.centerAt), slices.Clone(m.axisAt)
	c.center, c.axis = slices.Clone(m.center), slices.Clone(m.axis)
	return c
}

// flip turns mark i over; axes are numbered behind the centres.
func (m *marks) flip(i int) {
	if n := len(m.graph.Centers); i < n {
		m.graph.Centers[i].Clockwise = !m.graph.Centers[i].Clockwise
	} else {
		m.graph.Axes[i-n].Together = !m.graph.Axes[i-n].Together
	}
}

// drop takes mark i out.
func (m *marks) drop(i int) {
	if n := len(m.graph.Centers); i >= n {
		i -= n
		m.graph.Axes, m.axisAt, m.axis = slices.Delete(m.graph.Axes, i, i+1), slices.Delete(m.axisAt, i, i+1), slices.Delete(m.axis, i, i+1)
		return
	}
	m.graph.Centers, m.centerAt, m.center = slices.Delete(m.graph.Centers, i, i+1), slices.Delete(m.centerAt, i, i+1), slices.Delete(m.center, i, i+1)
}

// suspect says that mark i can be void.
func (m *marks) suspect(i int) bool {
	if n := len(m.center); i >= n {
		return m.axis[i-n]
	}
	return m.center[i]
}

// place is where mark i stands: center or axis, and what its atoms have in of, the lower one first.
func (m *marks) place(i int, of []int32) [3]int32 {
	if n := len(m.graph.Centers); i >= n {
		x := &m.graph.Axes[i-n]
		return [3]int32{1, min(of[x.A], of[x.B]), max(of[x.A], of[x.B])}
	}
	return [3]int32{0, of[m.graph.Centers[i].Atom]}
}

// inOrder lists the suspects, one of each orbit, centers first and by rank.
func (m *marks) inOrder(l *Labelling) []int {
	var list []int
	for i := range len(m.center) + len(m.axis) {
		if m.suspect(i) {
			list = append(list, i)
		}
	}
	slices.SortFunc(list, func(i, j int) int {
		x, y := m.place(i, l.Ranks), m.place(j, l.Ranks)
		return slices.Compare(x[:], y[:])
	})
	seen := map[[3]int32]bool{}
	return slices.DeleteFunc(list, func(i int) bool {
		orbit := m.place(i, l.Orbits)
		again := seen[orbit]
		seen[orbit] = true
		return again
	})
}

// voidWork is the search for void marks.
type voidWork struct {
	marks
	w    *Worker
	left int // labellings left
}

// suspects finds the marks with ligands which the flat refinement cannot tell apart, and reports
// whether there are any and how many at most in one component. The others always count: the sign relative to the flat order is an
// invariant of the atom, and flipping one changes how often it occurs.
func (v *voidWork) suspects() (found bool, most int) {
	h := &v.graph
	if len(h.Centers)+len(h.Axes) == 0 {
		return false, 0
	}
	flat := *h
	flat.Centers, flat.Axes = nil, nil
	r := &v.w.search.r
	r.g = &flat
	v.w.search.grow(0)
	p := &v.w.search.level[0]
	r.start(p)
	r.refine(p)
	inPiece := make([]int, v.w.split(h))
	note := func(sign uint64, a int32) bool {
		if sign == 0 {
			inPiece[v.w.piece[a]]++
		}
		return sign == 0
	}
	v.center, v.axis = make([]bool, len(h.Centers)), make([]bool, len(h.Axes))
	for i := range h.Centers {
		v.center[i] = note(h.Centers[i].sign(p.cell), h.Centers[i].Atom)
	}
	for i := range h.Axes {
		v.axis[i] = note(h.Axes[i].sign(p.cell), h.Axes[i].A)
	}
	most = slices.Max(inPiece)
	return most > 0, most
}

// dropClass drops the first void class of marks in canonical order and reports whether there was one.
func (v *voidWork) dropClass() bool {
	base := v.w.Label(&v.graph)
	order := slices.DeleteFunc(v.inOrder(base), func(i int) bool { return !v.open(&v.marks, i, base) })
	if len(order) == 0 {
		return false
	}
	like, turned := v.mirrored(base)
	if turned != nil && len(order) > 1 {
		// A graph and its mirror image must lose the same classes: the order is that of one of the two.
		open := map[[3]int32]bool{}
		for _, i := range order {
			open[v.place(i, base.Orbits)] = true
		}
		order = slices.DeleteFunc(v.inOrder(turned), func(i int) bool { return !open[v.place(i, base.Orbits)] })
	}
	for _, i := range order {
		if v.dropLike(v.place(i, like), like, base) {
			return true
		}
	}
	return false
}

// open says that mark i of m can be turned over without a change; base is the labelling of m.
func (v *voidWork) open(m *marks, i int, base *Labelling) bool {
	if v.left == 0 {
		return false
	}
	v.left--
	m.flip(i)
	same := v.w.Label(&m.graph).Hash == base.Hash
	m.flip(i)
	return same
}

// dropLike drops all marks of one class, if every one is open when those before it are gone.
func (v *voidWork) dropLike(class [3]int32, like []int32, base *Labelling) bool {
	trial := v.clone()
	for i := len(v.center) + len(v.axis) - 1; i >= 0; i-- { // from the end: a mark gone moves only those behind it
		if v.place(i, like) != class {
			continue
		}
		if !trial.suspect(i) || !v.open(&trial, i, base) {
			return false
		}
		trial.drop(i)
		base = v.w.Label(&trial.graph)
	}
	v.marks = trial
	return true
}

// mirrored joins the orbits of base with those which only a reflection makes equal. turned is the
// labelling of the mirror image where that is another graph which comes first; else it is nil.
func (v *voidWork) mirrored(base *Labelling) (like []int32, turned *Labelling) {
	image := v.clone()
	for i := range image.graph.Centers {
		image.flip(i)
	}
	other := v.w.Label(&image.graph)
	if other.Hash != base.Hash {
		if slices.Compare(other.Hash[:], base.Hash[:]) < 0 {
			turned = other
		}
		return base.Orbits, turned
	}
	like = slices.Clone(base.Orbits)
	at := make([]int32, len(like))
	for a, r := range other.Ranks {
		at[r] = int32(a)
	}
	for a, r := range base.Ranks {
		x, y := base.Orbits[a], base.Orbits[at[r]]
		like[x], like[y] = min(like[x], like[y]), min(like[x], like[y])
	}
	for a, o := range base.Orbits {
		like[a] = like[o]
	}
	return like, nil
}
