package search

import "math"

var inf = math.Inf(1)

// maxChildren is the largest number of children of one edge; a flask with more distinct
// carbon-giving materials does not occur.
const maxChildren = 8

// edge is an Edge with its children as node numbers.
type edge struct {
	children []int32
	variants []Variant
	origins  []Origin
	number   int32 // index into Expansion.Edges
	passes   uint8 // bit i: child i gives at least one atom to the node made
}

// node is one molecule of the graph. Nodes are numbered in the order in which they were met.
type node struct {
	key      Key
	from     int8  // the bit that this node pays as a leaf, -1 if none
	via      uint8 // the bits that it pays when it is made
	stock    bool
	leafCost float64
	open     bool  // not expanded yet
	openedAt int64 // nanoseconds after the start, once expanded
	edges    []edge
	parents  []int32 // nodes with an edge that consumes this one, each once
	// Values per state, index steps*sets+owed, once expanded. complete: least cost of a tree without
	// open nodes (loops not excluded, so a lower bound of the real one). bound: least bound of a tree
	// with at least one open node. guess: the same with estimates at the open nodes.
	complete, bound, guess []float64
	stamp                  []uint32 // marks visited states in pick
	picked                 uint32   // mark of the batch that took this node
}

// unopened holds what Problem says about a node before it is expanded, per set owed.
type unopened struct {
	minSteps     int
	bound, guess float64
}

// graph is the shared AND/OR graph with the values of all its states.
type graph struct {
	problem Problem
	cost    Cost
	steps   int // limit on the longest run
	sets    int // number of sets of what is owed

	via      []Via
	firstVia int // its bit

	nodes  []node
	facts  []unopened // node*sets + owed
	index  map[Key]int32
	from   map[Key]int8
	root   int32
	make   bool // the root may not be taken from stock
	dirty  [][]int32
	marked [][]bool
	mark   uint32 // number of the current call of pick
	batch  uint32 // number of the current batch, from 1
}

func newGraph(p Problem, root Key, o *Options) *graph {
	g := &graph{problem: p, cost: o.Cost, steps: o.MaxSteps, sets: 1 << o.owed(), via: o.Via, firstVia: o.owed() - len(o.Via),
		index: map[Key]int32{}, from: map[Key]int8{}, make: o.MakeRoot}
	for i, k := range o.From {
		if _, twice := g.from[k]; !twice {
			g.from[k] = int8(i)
		}
	}
	for _, k := range o.FromAny {
		if _, twice := g.from[k]; !twice {
			g.from[k] = int8(len(o.From))
		}
	}
	g.dirty = make([][]int32, g.steps+2)
	g.marked = make([][]bool, g.steps+2)
	g.root = g.node(root)
	return g
}

// node returns the number of the node named k and makes it if it is new.
func (g *graph) node(k Key) int32 {
	if id, ok := g.index[k]; ok {
		return id
	}
	id := int32(len(g.nodes))
	n := node{key: k, from: -1, open: true, leafCost: inf}
	if cost, ok := g.problem.Leaf(k); ok {
		n.stock, n.leafCost = true, cost
	}
	if i, ok := g.from[k]; ok {
		n.from = i
		if !n.stock {
			n.leafCost = 0
		}
	}
	for i, counts := range g.via {
		if counts(k) {
			n.via |= 1 << (g.firstVia + i)
		}
	}
	if id == 0 && g.make {
		n.stock, n.from, n.leafCost = false, -1, inf
	}
	g.nodes = append(g.nodes, n)
	for owed := 0; owed < g.sets; owed++ {
		g.facts = append(g.facts, g.ask(&n, uint8(owed)))
	}
	g.index[k] = id
	return id
}

// ask returns what the problem says about making n when owed must be consumed below it.
func (g *graph) ask(n *node, owed uint8) (u unopened) {
	if g.leafOnly(n, owed) {
		return unopened{math.MaxInt32, inf, inf}
	}
	u.minSteps, u.bound = g.problem.Bound(n.key, owed&^n.via)
	u.minSteps = max(u.minSteps, 1)
	u.guess = max(u.bound, g.problem.Guess(n.key, owed&^n.via))
	return u
}

// refresh asks again about every node that is still open and marks what depends on it as out of date.
func (g *graph) refresh() {
	for id := range g.nodes {
		n := &g.nodes[id]
		if !n.open {
			continue
		}
		changed := false
		for owed := 0; owed < g.sets; owed++ {
			fact := &g.facts[id*g.sets+owed]
			if u := g.ask(n, uint8(owed)); u != *fact {
				*fact, changed = u, true
			}
		}
		if !changed {
			continue
		}
		for _, p := range n.parents {
			for steps := 1; steps <= g.steps; steps++ {
				g.soil(p, steps)
			}
		}
	}
}

// leafOnly says that n is never made when owed must be consumed at or below it: an item of From is
// always a leaf, and a stock molecule is only made to consume something that is owed.
func (g *graph) leafOnly(n *node, owed uint8) bool {
	return n.from >= 0 || n.stock && owed == 0
}

// leaf returns the cost of taking n as a leaf that settles owed, or infinity.
func (g *graph) leaf(n *node, owed uint8) float64 {
	if owed == 0 && (n.stock || n.from >= 0) || n.from >= 0 && owed == 1<<n.from {
		return n.leafCost
	}
	return inf
}

// values returns complete, bound and guess of the state (id, steps, owed).
func (g *graph) values(id int32, steps int, owed uint8) (complete, bound, guess float64) {
	n := &g.nodes[id]
	if !n.open {
		i := steps*g.sets + int(owed)
		return n.complete[i], n.bound[i], n.guess[i]
	}
	complete = g.leaf(n, owed)
	u := &g.facts[int(id)*g.sets+int(owed)]
	if u.minSteps > steps {
		return complete, inf, inf
	}
	return complete, u.bound, u.guess
}

// expand enters the edges of a node. The values are brought up to date by propagate.
func (g *graph) expand(id int32, x Expansion, at int64) {
	edges := make([]edge, 0, len(x.Edges))
	for number, e := range x.Edges {
		if len(e.Children) == 0 || len(e.Children) > maxChildren || len(e.Variants) == 0 {
			continue
		}
		ne := edge{number: int32(number), variants: e.Variants, origins: e.Origins}
		self := false
		for _, c := range e.Children {
			child := g.node(c.Key)
			self = self || child == id
			ne.children = append(ne.children, child)
		}
		if self {
			continue
		}
		for _, o := range e.Origins {
			if o.Child >= 0 {
				ne.passes |= 1 << o.Child
			}
		}
		edges = append(edges, ne)
	}
	for i := range edges {
		for _, c := range edges[i].children {
			p := g.nodes[c].parents // id can only be the newest
			if len(p) == 0 || p[len(p)-1] != id {
				g.nodes[c].parents = append(p, id)
			}
		}
	}
	n := &g.nodes[id]
	n.open, n.openedAt, n.edges = false, at, edges
	size := (g.steps + 1) * g.sets
	block := make([]float64, 3*size)
	n.complete, n.bound, n.guess = block[:size:size], block[size:2*size:2*size], block[2*size:]
	n.stamp = make([]uint32, size)
	for owed := 0; owed < g.sets; owed++ {
		n.complete[owed], n.bound[owed], n.guess[owed] = g.leaf(n, uint8(owed)), inf, inf
	}
	for steps := 1; steps <= g.steps; steps++ {
		g.soil(id, steps)
		for _, p := range n.parents {
			g.soil(p, steps+1)
		}
	}
}

// weight estimates the bytes that an expanded node takes, with the nodes that its edges may have added.
func (g *graph) weight(id int32) int {
	const perNode, perEdge, perState = 400, 160, 28
	n := 0
	for i := range g.nodes[id].edges {
		e := &g.nodes[id].edges[i]
		n += perEdge + len(e.children)*(perNode+24*g.sets) + 48*len(e.variants) + 8*len(e.origins)
	}
	return n + perNode + perState*(g.steps+1)*g.sets
}

// soil marks the states of a node at one number of steps left as out of date.
func (g *graph) soil(id int32, steps int) {
	if steps > g.steps || g.nodes[id].open {
		return
	}
	if len(g.marked[steps]) < len(g.nodes) {
		g.marked[steps] = append(g.marked[steps], make([]bool, len(g.nodes)-len(g.marked[steps])+256)...)
	}
	if !g.marked[steps][id] {
		g.marked[steps][id] = true
		g.dirty[steps] = append(g.dirty[steps], id)
	}
}

// propagate brings the values of all states up to date. Values at one number of steps left depend on
// those at one less only, so one pass upwards is enough.
func (g *graph) propagate() {
	for steps := 1; steps <= g.steps; steps++ {
		for _, id := range g.dirty[steps] {
			g.marked[steps][id] = false
			if g.revalue(id, steps) {
				for _, p := range g.nodes[id].parents {
					g.soil(p, steps+1)
				}
			}
		}
		g.dirty[steps] = g.dirty[steps][:0]
	}
}

// revalue computes the states of an expanded node at one number of steps left, for every set owed.
func (g *graph) revalue(id int32, steps int) (changed bool) {
	n := &g.nodes[id]
	for owed := 0; owed < g.sets; owed++ {
		complete, bound, guess := g.leaf(n, uint8(owed)), inf, inf
		if !g.leafOnly(n, uint8(owed)) {
			for i := range n.edges {
				e := &n.edges[i]
				for s := firstSplit(e, uint8(owed)&^n.via); s.ok; s.next() {
					c, b, u := g.edgeValues(e, &s, steps-1)
					complete, bound, guess = min(complete, c), min(bound, b), min(guess, u)
				}
			}
		}
		i := steps*g.sets + owed
		if n.complete[i] != complete || n.bound[i] != bound || n.guess[i] != guess {
			n.complete[i], n.bound[i], n.guess[i] = complete, bound, guess
			changed = true
		}
	}
	return changed
}

// edgeValues combines the values of the children of e under the split s.
func (g *graph) edgeValues(e *edge, s *split, steps int) (complete, bound, guess float64) {
	var whole, low, lowGuess, c, b, u [maxChildren]float64
	k := len(e.children)
	allWhole := true
	for i, child := range e.children {
		c[i], b[i], u[i] = g.values(child, steps, s.part[i])
		low[i], lowGuess[i], whole[i] = min(c[i], b[i]), min(c[i], u[i]), c[i]
		if low[i] == inf {
			return inf, inf, inf
		}
		allWhole = allWhole && c[i] < inf
	}
	complete, bound, guess = inf, inf, inf
	if allWhole {
		complete = g.cheapest(e, whole[:k])
	}
	for i := range e.children {
		if b[i] < inf {
			keep := low[i]
			low[i] = b[i]
			bound = min(bound, g.cheapest(e, low[:k]))
			low[i] = keep
		}
		if u[i] < inf {
			keep := lowGuess[i]
			lowGuess[i] = u[i]
			guess = min(guess, g.cheapest(e, lowGuess[:k]))
			lowGuess[i] = keep
		}
	}
	return complete, bound, guess
}

// cheapest returns the least cost over the variants of e.
func (g *graph) cheapest(e *edge, children []float64) float64 {
	least := inf
	for i := range e.variants {
		least = min(least, g.cost.Combine(&e.variants[i], children))
	}
	return least
}

// split deals the items owed out to the children of an edge; part[i] is what child i must consume.
type split struct {
	part  [maxChildren]uint8
	bits  [MaxOwed]uint8 // the single items
	at    [MaxOwed]int   // index into able of the child that takes each item
	count int
	able  [maxChildren]int8 // children that give atoms
	ables int
	ok    bool
}

func firstSplit(e *edge, owed uint8) (s split) {
	if owed == 0 {
		s.ok = true
		return s
	}
	for i := range e.children {
		if e.passes&(1<<i) != 0 {
			s.able[s.ables] = int8(i)
			s.ables++
		}
	}
	if s.ables == 0 {
		return s
	}
	for b := uint8(1); b <= owed && b != 0; b <<= 1 {
		if owed&b != 0 {
			s.bits[s.count] = b
			s.count++
			s.part[s.able[0]] |= b
		}
	}
	s.ok = true
	return s
}

// next moves on to the following way of dealing out; ok becomes false after the last.
func (s *split) next() {
	for i := 0; i < s.count; i++ {
		s.part[s.able[s.at[i]]] &^= s.bits[i]
		s.at[i]++
		if s.at[i] < s.ables {
			s.part[s.able[s.at[i]]] |= s.bits[i]
			return
		}
		s.at[i] = 0
		s.part[s.able[0]] |= s.bits[i]
	}
	s.ok = false
}
