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

// isomorphic tries every way to lay g on h, two graphs with the same atoms and edges and other marks.
func isomorphic(g, h *Graph, edges [][2]int32) bool {
	found := false
	layings(g, h, edges, func([]int32) bool { found = true; return false })
	return found
}

// layings calls use with every permutation of the atoms that lays g on h, until use returns false.
func layings(g, h *Graph, edges [][2]int32, use func(perm []int32) bool) {
	n := len(g.Colours)
	colour := make([][]uint8, n) // by atoms of h; 255 where no edge is
	for i := range colour {
		colour[i] = slices.Repeat([]uint8{255}, n)
	}
	from := slices.Clone(colour)
	for i := range from {
		from[i] = slices.Clone(colour[i])
	}
	for i, e := range edges {
		colour[e[0]][e[1]], colour[e[1]][e[0]] = h.BondColours[i], h.BondColours[i]
		from[e[0]][e[1]], from[e[1]][e[0]] = g.BondColours[i], g.BondColours[i]
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
			return !slices.Equal(signs(g, perm), want) || use(perm)
		}
	next:
		for b := range n {
			if used[b] {
				continue
			}
			for k := range i {
				if from[i][k] != colour[b][perm[k]] {
					continue next
				}
			}
			used[b], perm[i] = true, int32(b)
			if !place(i + 1) {
				return false
			}
			used[b] = false
		}
		return true
	}
	place(0)
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
	centers, axes, _ := w.DropVoid(g)
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

// rings makes a ring of like centers, each with one end atom, or two rings that share an end atom; or
// a chain of centers with branches: shapes in which marks depend on one another.
func rings(r *rand.Rand) (g *Graph, edges [][2]int32) {
	ring := func(from, size, ends int32) {
		for i := range size {
			edges = append(edges, [2]int32{from + i, from + (i+1)%size})
			if i < ends {
				edges = append(edges, [2]int32{from + i, from + size + i})
			}
		}
	}
	n := int32(0)
	switch r.Intn(5) {
	case 0: // all atoms of the ring are like centers
		size := 3 + r.Int31n(3)
		ring(0, size, size)
		n = 2 * size
	case 1: // centers and plain atoms in turn
		size := 2 + r.Int31n(3)
		for i := range size {
			edges = append(edges, [2]int32{2 * i, 2*i + 1}, [2]int32{2*i + 1, (2*i + 2) % (2 * size)}, [2]int32{2 * i, 2*size + i})
		}
		n = 3 * size
	case 2: // two small rings on one atom
		edges = append(edges, [2]int32{0, 1}, [2]int32{1, 2}, [2]int32{0, 2}, [2]int32{1, 3}, [2]int32{2, 4},
			[2]int32{0, 5}, [2]int32{5, 6}, [2]int32{6, 7}, [2]int32{5, 7}, [2]int32{6, 8}, [2]int32{7, 9})
		n = 10
	case 3: // a chain a-b-c-b-a, each middle atom with an end
		edges = append(edges, [2]int32{0, 1}, [2]int32{1, 2}, [2]int32{2, 3}, [2]int32{3, 4}, [2]int32{1, 5}, [2]int32{2, 6}, [2]int32{3, 7}, [2]int32{5, 8}, [2]int32{7, 9})
		n = 10
	case 4: // a cube, a prism
		k := 3 + r.Int31n(2)
		for i := range k {
			edges = append(edges, [2]int32{i, (i + 1) % k}, [2]int32{k + i, k + (i+1)%k}, [2]int32{i, k + i})
		}
		n = 2 * k
	}
	g = graph(int(n), edges)
	for a := range n {
		nbs := g.Neighbors[g.First[a]:g.First[a+1]]
		ends := 0
		for _, nb := range nbs {
			if g.First[nb.Atom+1]-g.First[nb.Atom] == 1 {
				ends++
			}
		}
		if len(nbs) < 3 || ends > 1 {
			continue
		}
		c := Center{Atom: a, Clockwise: r.Intn(2) == 0, Ligands: [4]int32{-1, -1, -1, -1}}
		for i, nb := range nbs {
			c.Ligands[i] = nb.Atom
		}
		g.Centers = append(g.Centers, c)
	}
	return g, edges
}

// withSigns is g with the centers named in which set by the bits of sense.
func withSigns(g *Graph, which []int, sense int) *Graph {
	h := *g
	h.Centers = slices.Clone(g.Centers)
	for k, i := range which {
		h.Centers[i].Clockwise = sense>>k&1 == 1
	}
	return &h
}

// allAlike says that g stays the same graph whatever the senses of the centers named.
func allAlike(g *Graph, which []int, edges [][2]int32) bool {
	for sense := range 1 << len(which) {
		if !isomorphic(g, withSigns(g, which, sense), edges) {
			return false
		}
	}
	return true
}

// mirrorClass lists the centers that an automorphism of g, or a map of g on its mirror image, makes like
// center i.
func mirrorClass(g *Graph, i int, edges [][2]int32) []int {
	image := *g
	image.Centers = slices.Clone(g.Centers)
	for k := range image.Centers {
		image.Centers[k].Clockwise = !image.Centers[k].Clockwise
	}
	atoms := map[int32]bool{}
	note := func(perm []int32) bool { atoms[perm[g.Centers[i].Atom]] = true; return true }
	layings(g, g, edges, note)
	layings(g, &image, edges, note)
	var list []int
	for k, c := range g.Centers {
		if atoms[c.Atom] {
			list = append(list, k)
		}
	}
	return list
}

// TestVoidAgainstForce tries all permutations: whatever senses the dropped centers are given, the graph
// is the one that was given (no mark that says something is dropped); and no class of like centers is
// left whose senses do not matter (none that says nothing is kept). All centers are marked.
func TestVoidAgainstForce(t *testing.T) {
	r := rand.New(rand.NewSource(8))
	var w Worker
	kinds := map[string]int{}
	for round := range 1500 {
		g, edges := rings(r)
		keep, _, _ := w.DropVoid(g)
		p := pruned(&w, g)
		var gone []int
		for i, k := range keep {
			if !k {
				gone = append(gone, i)
			}
		}
		kinds[map[bool]string{true: "none dropped", false: "some dropped"}[len(gone) == 0]]++
		if !allAlike(g, gone, edges) {
			t.Fatalf("round %d: edges %v, centers %+v: dropped %v, which says something", round, edges, g.Centers, gone)
		}
		for i := range p.Centers {
			class := mirrorClass(p, i, edges)
			if allAlike(p, class, edges) {
				t.Fatalf("round %d: edges %v, centers %+v: kept %v, which say nothing", round, edges, p.Centers, class)
			}
			if allAlike(p, []int{i}, edges) {
				kinds["kept for its class"]++
			}
		}
	}
	t.Log(kinds)
	for _, kind := range []string{"none dropped", "some dropped", "kept for its class"} {
		if kinds[kind] == 0 {
			t.Errorf("no case of: %s", kind)
		}
	}
}

// TestStereoAgainstForce: after void marks are dropped, two sets of marks on one graph share a hash
// exactly when some permutation of the atoms maps one to the other, and the numbering does not matter.
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
	}
}
