package canon

import (
	"math/rand"
	"slices"
	"testing"
)

// marked makes random marks on a random small graph: centres on atoms with three or four
// neighbours, axes on some bonds between atoms with two or three.
func marked(r *rand.Rand) (g *Graph, edges [][2]int32) {
	n := 4 + r.Intn(3)
	for i := int32(1); i < int32(n); i++ {
		edges = append(edges, [2]int32{int32(r.Intn(int(i))), i})
	}
	for range r.Intn(5) {
		e := [2]int32{int32(r.Intn(n)), int32(r.Intn(n))}
		if e[0] < e[1] && !slices.Contains(edges, e) {
			edges = append(edges, e)
		}
	}
	g = graph(n, edges)
	around := func(a int32) []Neighbor { return g.Neighbors[g.First[a]:g.First[a+1]] }
	for a := int32(0); a < int32(n); a++ {
		nbs := around(a)
		if len(nbs) != 3 && len(nbs) != 4 || r.Intn(4) == 0 {
			continue
		}
		c := Center{Atom: a, Clockwise: r.Intn(2) == 0, Ligands: [4]int32{-1, -1, -1, -1}}
		for i, nb := range nbs {
			c.Ligands[i] = nb.Atom
		}
		g.Centers = append(g.Centers, c)
	}
	for i, e := range edges {
		a, b := around(e[0]), around(e[1])
		if len(a) < 2 || len(a) > 3 || len(b) < 2 || len(b) > 3 || r.Intn(2) == 0 {
			continue
		}
		side := func(list []Neighbor, partner int32) (x, y int32) {
			y = -1
			x = -1
			for _, nb := range list {
				switch {
				case nb.Atom == partner:
				case x < 0:
					x = nb.Atom
				default:
					y = nb.Atom
				}
			}
			return x, y
		}
		x := Axis{A: e[0], B: e[1], Together: r.Intn(2) == 0}
		x.LigandA, x.OtherA = side(a, e[1])
		x.LigandB, x.OtherB = side(b, e[0])
		g.BondColours[i] = 2
		g.Axes = append(g.Axes, x)
	}
	return g, edges
}

// signs lists the marks in terms of an order of the atoms.
func signs(g *Graph, place []int32) []uint64 {
	var list []uint64
	for i := range g.Centers {
		c := &g.Centers[i]
		list = append(list, uint64(place[c.Atom])<<8|c.sign(place))
	}
	for i := range g.Axes {
		x := &g.Axes[i]
		p, q := place[x.A], place[x.B]
		list = append(list, 1<<60|uint64(min(p, q))<<30|uint64(max(p, q))<<8|x.sign(place))
	}
	slices.Sort(list)
	return list
}

// isomorphic tries every permutation of the atoms of g onto those of h.
func isomorphic(g, h *Graph, edges [][2]int32) bool {
	n := len(g.Colours)
	colour := map[[2]int32]uint8{}
	for i, e := range edges {
		colour[e], colour[[2]int32{e[1], e[0]}] = h.BondColours[i], h.BondColours[i]
	}
	identity := make([]int32, n)
	for i := range identity {
		identity[i] = int32(i)
	}
	want := signs(h, identity)
	perm := make([]int32, n)
	used := make([]bool, n)
	var place func(i int) bool
	place = func(i int) bool {
		if i == n {
			for k, e := range edges {
				if colour[[2]int32{perm[e[0]], perm[e[1]]}] != g.BondColours[k] {
					return false
				}
			}
			return slices.Equal(signs(g, perm), want)
		}
		for b := range n {
			if !used[b] {
				used[b], perm[i] = true, int32(b)
				if place(i + 1) {
					return true
				}
				used[b] = false
			}
		}
		return false
	}
	return place(0)
}

// renumbered gives the atoms of g other numbers, ligand lists shuffled with their parity.
func renumbered(g *Graph, edges [][2]int32, r *rand.Rand) *Graph {
	n := len(g.Colours)
	to := r.Perm(n)
	at := func(a int32) int32 {
		if a < 0 {
			return a
		}
		return int32(to[a])
	}
	order := r.Perm(len(edges))
	moved := make([][2]int32, len(edges))
	for i, k := range order {
		moved[i] = [2]int32{at(edges[k][1]), at(edges[k][0])}
	}
	h := graph(n, moved)
	for i, k := range order {
		h.BondColours[i] = g.BondColours[k]
	}
	for _, c := range g.Centers {
		d := Center{Atom: at(c.Atom), Clockwise: c.Clockwise}
		for i, l := range c.Ligands {
			d.Ligands[i] = at(l)
		}
		i, j := r.Intn(4), r.Intn(4)
		if i != j {
			d.Ligands[i], d.Ligands[j] = d.Ligands[j], d.Ligands[i]
			d.Clockwise = !d.Clockwise
		}
		h.Centers = append(h.Centers, d)
	}
	for _, x := range g.Axes {
		y := Axis{A: at(x.A), B: at(x.B), LigandA: at(x.LigandA), OtherA: at(x.OtherA), LigandB: at(x.LigandB), OtherB: at(x.OtherB), Together: x.Together}
		if y.OtherA >= 0 && r.Intn(2) == 0 {
			y.LigandA, y.OtherA, y.Together = y.OtherA, y.LigandA, !y.Together
		}
		if r.Intn(2) == 0 {
			y = Axis{A: y.B, B: y.A, LigandA: y.LigandB, OtherA: y.OtherB, LigandB: y.LigandA, OtherB: y.OtherA, Together: y.Together}
		}
		h.Axes = append(h.Axes, y)
	}
	return h
}

// pruned is g without void marks.
func pruned(w *Worker, g *Graph) *Graph {
	h := *g
	centers, axes := w.DropVoid(g)
	if centers == nil && axes == nil {
		return &h
	}
	h.Centers, h.Axes = nil, nil
	for i, keep := range centers {
		if keep {
			h.Centers = append(h.Centers, g.Centers[i])
		}
	}
	for i, keep := range axes {
		if keep {
			h.Axes = append(h.Axes, g.Axes[i])
		}
	}
	return &h
}

// TestStereoAgainstForce: after void marks are dropped, two sets of marks on one graph share a hash
// exactly when some permutation of the atoms maps one to the other; no mark left is void; and the
// numbering does not matter.
func TestStereoAgainstForce(t *testing.T) {
	r := rand.New(rand.NewSource(21))
	var w Worker
	for round := range 1200 {
		g, edges := marked(r)
		if len(g.Centers)+len(g.Axes) == 0 {
			continue
		}
		h := &Graph{Colours: g.Colours, First: g.First, Neighbors: g.Neighbors, BondColours: g.BondColours,
			Centers: slices.Clone(g.Centers), Axes: slices.Clone(g.Axes)}
		for i := range h.Centers {
			h.Centers[i].Clockwise = r.Intn(2) == 0
		}
		for i := range h.Axes {
			h.Axes[i].Together = r.Intn(2) == 0
		}
		p, q := pruned(&w, g), pruned(&w, h)
		same := w.Label(p).Hash == w.Label(q).Hash
		if want := isomorphic(p, q, edges); same != want {
			t.Fatalf("round %d: edges %v, marks %+v %+v and %+v %+v: same %v, want %v", round, edges, p.Centers, p.Axes, q.Centers, q.Axes, same, want)
		}
		for range 2 {
			s := renumbered(g, edges, r)
			if w.Label(pruned(&w, s)).Hash != w.Label(p).Hash {
				t.Fatalf("round %d: edges %v, marks %+v %+v: the numbering matters", round, edges, g.Centers, g.Axes)
			}
		}
		for i := range p.Centers {
			flipped := *p
			flipped.Centers = slices.Clone(p.Centers)
			flipped.Centers[i].Clockwise = !flipped.Centers[i].Clockwise
			if isomorphic(p, &flipped, edges) {
				t.Fatalf("round %d: edges %v: a void mark stayed: %+v", round, edges, p.Centers[i])
			}
		}
	}
}
