package canon

// DropVoid returns g without the marks that say nothing: those where flipping the mark alone gives
// the same graph again. Marks are judged one at a time, in canonical order, each against what is
// left. The slices of marks are new when something was dropped; the rest is shared. keepCenter and
// keepAxis tell which marks stayed, nil when all did.
func (w *Worker) DropVoid(g *Graph) (keepCenter, keepAxis []bool) {
	h := *g
	centerAt, axisAt := w.dropTwins(g, &h)
	v := voidWork{w: w, h: &h, centerAt: centerAt, axisAt: axisAt, left: maxWork / max(1, len(g.Colours)*len(g.Colours))}
	if v.suspects() {
		for v.dropOne() {
		}
	}
	centerAt, axisAt = v.centerAt, v.axisAt
	if len(h.Centers) == len(g.Centers) && len(h.Axes) == len(g.Axes) {
		return nil, nil
	}
	keepCenter, keepAxis = make([]bool, len(g.Centers)), make([]bool, len(g.Axes))
	for _, i := range centerAt {
		keepCenter[i] = true
	}
	for _, i := range axisAt {
		keepAxis[i] = true
	}
	return keepCenter, keepAxis
}

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
// costs in a ring of equal centres: thousands of labellings for any molecule on a shelf, about a
// second for a hostile one (a ring of hundreds of centres), whose void marks then stay.
const maxWork = 2_000_000

// voidWork is the search for void marks in h.
type voidWork struct {
	w                *Worker
	h                *Graph
	centerAt, axisAt []int  // where the marks of h stand in the given graph
	center, axis     []bool // mark of h can be void
	left             int    // labellings left
}

// suspects finds the marks with ligands which the flat refinement cannot tell apart, and reports
// whether there are any. The others always count: the sign relative to the flat order is an
// invariant of the atom, and flipping one changes how often it occurs.
func (v *voidWork) suspects() bool {
	h := v.h
	if len(h.Centers)+len(h.Axes) == 0 {
		return false
	}
	flat := *h
	flat.Centers, flat.Axes = nil, nil
	r := &v.w.search.r
	r.g = &flat
	v.w.search.grow(0)
	p := &v.w.search.level[0]
	r.start(p)
	r.refine(p)
	any := false
	v.center, v.axis = make([]bool, len(h.Centers)), make([]bool, len(h.Axes))
	for i := range h.Centers {
		v.center[i] = h.Centers[i].sign(p.cell) == 0
		any = any || v.center[i]
	}
	for i := range h.Axes {
		v.axis[i] = h.Axes[i].sign(p.cell) == 0
		any = any || v.axis[i]
	}
	return any
}

// dropOne drops the first void mark of h in canonical order, centres first, and reports whether
// there was one. Of marks on equivalent atoms one stands for all.
func (v *voidWork) dropOne() bool {
	h := v.h
	base := v.w.Label(h)
	tried := map[[2]int32]bool{}
	found, at := int32(1<<30), -1
	for i := range h.Centers {
		c := &h.Centers[i]
		place := [2]int32{base.Orbits[c.Atom], -1}
		if !v.center[i] || base.Ranks[c.Atom] >= found || tried[place] || v.left == 0 {
			continue
		}
		tried[place] = true
		v.left--
		c.Clockwise = !c.Clockwise
		if v.w.Label(h).Hash == base.Hash {
			found, at = base.Ranks[c.Atom], i
		}
		c.Clockwise = !c.Clockwise
	}
	if at >= 0 {
		h.Centers = append(h.Centers[:at], h.Centers[at+1:]...)
		v.centerAt = append(v.centerAt[:at], v.centerAt[at+1:]...)
		v.center = append(v.center[:at], v.center[at+1:]...)
		return true
	}
	for i := range h.Axes {
		x := &h.Axes[i]
		rank := min(base.Ranks[x.A], base.Ranks[x.B])
		if !v.axis[i] || rank >= found || v.left == 0 {
			continue
		}
		v.left--
		x.Together = !x.Together
		if v.w.Label(h).Hash == base.Hash {
			found, at = rank, i
		}
		x.Together = !x.Together
	}
	if at >= 0 {
		h.Axes = append(h.Axes[:at], h.Axes[at+1:]...)
		v.axisAt = append(v.axisAt[:at], v.axisAt[at+1:]...)
		v.axis = append(v.axis[:at], v.axis[at+1:]...)
	}
	return at >= 0
}
