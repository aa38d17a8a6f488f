package canon

// Worker holds working memory that is reused between labellings. Not safe for concurrent use.
type Worker struct {
	search search
	piece  []int32 // atom -> component
	local  []int32 // atom -> index inside its component
	stack  []int32
	sub    Graph
	cols   []uint64
}

// split numbers the components of g and returns their count (at least 1).
func (w *Worker) split(g *Graph) int {
	n := len(g.Colours)
	if n == 0 {
		return 1
	}
	w.piece = resized(w.piece, n)
	for i := range w.piece {
		w.piece[i] = -1
	}
	count := int32(0)
	for a := int32(0); a < int32(n); a++ {
		if w.piece[a] >= 0 {
			continue
		}
		w.piece[a] = count
		w.stack = append(w.stack[:0], a)
		for len(w.stack) > 0 {
			x := w.stack[len(w.stack)-1]
			w.stack = w.stack[:len(w.stack)-1]
			for _, nb := range g.Neighbors[g.First[x]:g.First[x+1]] {
				if w.piece[nb.Atom] < 0 {
					w.piece[nb.Atom] = count
					w.stack = append(w.stack, nb.Atom)
				}
			}
		}
		count++
	}
	return int(count)
}

// extract copies component k of g; c.atoms receives its atoms.
func (w *Worker) extract(g *Graph, k int32, c *component) *Graph {
	s := &w.sub
	w.local = resized(w.local, len(g.Colours))
	s.Colours, s.First, s.Neighbors = s.Colours[:0], append(s.First[:0], 0), s.Neighbors[:0]
	s.BondColours = g.BondColours
	s.Centers, s.Axes = s.Centers[:0], s.Axes[:0]
	for a, p := range w.piece {
		if p == k {
			w.local[a] = int32(len(c.atoms))
			c.atoms = append(c.atoms, int32(a))
		}
	}
	at := func(a int32) int32 {
		if a < 0 {
			return a
		}
		return w.local[a]
	}
	for _, a := range c.atoms {
		s.Colours = append(s.Colours, g.Colours[a])
		for _, nb := range g.Neighbors[g.First[a]:g.First[a+1]] {
			s.Neighbors = append(s.Neighbors, Neighbor{Atom: w.local[nb.Atom], Bond: nb.Bond})
		}
		s.First = append(s.First, int32(len(s.Neighbors)))
	}
	for _, x := range g.Centers {
		if w.piece[x.Atom] == k {
			y := Center{Atom: at(x.Atom), Clockwise: x.Clockwise}
			for i, l := range x.Ligands {
				y.Ligands[i] = at(l)
			}
			s.Centers = append(s.Centers, y)
		}
	}
	for _, x := range g.Axes {
		if w.piece[x.A] == k {
			s.Axes = append(s.Axes, Axis{at(x.A), at(x.B), at(x.LigandA), at(x.OtherA), at(x.LigandB), at(x.OtherB), x.Together})
		}
	}
	return s
}

func resized(s []int32, n int) []int32 {
	if cap(s) < n {
		return make([]int32, n, n+n/2)
	}
	return s[:n]
}
