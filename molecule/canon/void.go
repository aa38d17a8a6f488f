package canon

// DropVoid returns g without the marks that say nothing: those where flipping the mark alone gives
// the same graph again. Marks are judged one at a time, in canonical order, each against what is
// left. The slices of marks are new when something was dropped; the rest is shared. keepCenter and
// keepAxis tell which marks stayed, nil when all did.
func (w *Worker) DropVoid(g *Graph) (keepCenter, keepAxis []bool) {
	h := *g
	centerAt, axisAt := w.dropTwins(g, &h)
	for w.suspect(&h) {
		if !w.dropOne(&h, &centerAt, &axisAt) {
			break
		}
	}
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

// suspect says that some mark of g has ligands which the flat refinement cannot tell apart; where
// it can, every mark counts: the sign relative to the flat order is an invariant of the atom, and
// flipping one changes how often it occurs.
func (w *Worker) suspect(g *Graph) bool {
	if len(g.Centers)+len(g.Axes) == 0 {
		return false
	}
	flat := *g
	flat.Centers, flat.Axes = nil, nil
	r := &w.search.r
	r.g = &flat
	w.search.grow(0)
	p := &w.search.level[0]
	r.start(p)
	r.refine(p)
	for i := range g.Centers {
		if g.Centers[i].sign(p.cell) == 0 {
			return true
		}
	}
	for i := range g.Axes {
		if g.Axes[i].sign(p.cell) == 0 {
			return true
		}
	}
	return false
}

// dropOne drops the first void mark of h in canonical order and reports whether there was one.
func (w *Worker) dropOne(h *Graph, centerAt, axisAt *[]int) bool {
	base := w.Label(h)
	found, at, axis := int32(1<<30), -1, false
	for i := range h.Centers {
		c := &h.Centers[i]
		if base.Ranks[c.Atom] >= found {
			continue
		}
		c.Clockwise = !c.Clockwise
		if w.Label(h).Hash == base.Hash {
			found, at = base.Ranks[c.Atom], i
		}
		c.Clockwise = !c.Clockwise
	}
	for i := range h.Axes {
		x := &h.Axes[i]
		if at >= 0 && !axis {
			break // centres come first
		}
		rank := min(base.Ranks[x.A], base.Ranks[x.B])
		if rank >= found {
			continue
		}
		x.Together = !x.Together
		if w.Label(h).Hash == base.Hash {
			found, at, axis = rank, i, true
		}
		x.Together = !x.Together
	}
	switch {
	case at < 0:
		return false
	case axis:
		h.Axes = append(h.Axes[:at], h.Axes[at+1:]...)
		*axisAt = append((*axisAt)[:at], (*axisAt)[at+1:]...)
	default:
		h.Centers = append(h.Centers[:at], h.Centers[at+1:]...)
		*centerAt = append((*centerAt)[:at], (*centerAt)[at+1:]...)
	}
	return true
}
