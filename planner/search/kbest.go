package search

import (
	"container/heap"
	"math/bits"
	"slices"
)

// tree is one complete way to make a node: a leaf, or an edge with a tree for each child.
type tree struct {
	id       int32
	edge     *edge // nil for a leaf
	variant  int   // of edge
	children []*tree
	cost     float64
	hash     uint64 // of the molecules and their arrangement
	// reach[i] is the set of atoms of the node that come from what pays the i-th bit that the state owed,
	// nil if that was not owed. At a leaf of From, or at a node that must be made on the way, it is nil
	// with whole set: every atom comes from it.
	reach [MaxOwed]atomSet
	whole [MaxOwed]bool
}

// atomSet is a set of atom indices.
type atomSet []uint64

func (s atomSet) has(a int32) bool {
	return int(a>>6) < len(s) && s[a>>6]&(1<<(a&63)) != 0
}

// holds says whether the tree contains the node id.
func (t *tree) holds(id int32) bool {
	if t.id == id {
		return true
	}
	for _, c := range t.children {
		if c.holds(id) {
			return true
		}
	}
	return false
}

// sameMolecules says whether two trees are the same arrangement of molecules.
func (t *tree) sameMolecules(o *tree) bool {
	if t.id != o.id || t.hash != o.hash || len(t.children) != len(o.children) {
		return false
	}
	for i, c := range t.children {
		if !c.sameMolecules(o.children[i]) {
			return false
		}
	}
	return true
}

// sameReach says whether the same atoms come from each item owed.
func (t *tree) sameReach(o *tree) bool {
	for i := range t.reach {
		if t.whole[i] != o.whole[i] || !slices.Equal(t.reach[i], o.reach[i]) {
			return false
		}
	}
	return true
}

// candidate is a derivation that waits in the heap of a state: an edge, a way of dealing out the items
// owed, and the place of each child in its own list. With rough set the cost is a lower bound from
// the values of the children, whose lists have not been opened yet.
type candidate struct {
	edge  int
	split split
	nth   [maxChildren]int32
	last  int // the child whose place was raised last; only it and later ones are raised further
	cost  float64
	rough bool
	order int // of pushing
}

// lister yields the distinct trees of one state in order of cost.
type lister struct {
	id    int32
	steps int
	owed  uint8
	got   []*tree
	heap  []candidate
	order int
	begun bool
}

func (l *lister) Len() int      { return len(l.heap) }
func (l *lister) Swap(i, j int) { l.heap[i], l.heap[j] = l.heap[j], l.heap[i] }
func (l *lister) Push(x any)    { l.heap = append(l.heap, x.(candidate)) }
func (l *lister) Pop() any {
	last := l.heap[len(l.heap)-1]
	l.heap = l.heap[:len(l.heap)-1]
	return last
}
func (l *lister) Less(i, j int) bool {
	a, b := &l.heap[i], &l.heap[j]
	switch {
	case a.cost != b.cost:
		return a.cost < b.cost
	case a.rough != b.rough: // it may hide a tree of the same cost with a lower edge number
		return a.rough
	case a.edge != b.edge:
		return a.edge < b.edge
	}
	return a.order < b.order
}

// drawer draws the complete trees of the root in order of cost from the graph as it stands.
type drawer struct {
	g       *graph
	listers map[state]*lister
	budget  int // candidates that may still be looked at
}

type state struct {
	id    int32
	steps int16
	owed  uint8
}

func newDrawer(g *graph, budget int) *drawer {
	return &drawer{g: g, listers: map[state]*lister{}, budget: budget}
}

// root returns the n-th tree of the root, from 0, or nil if there is none (or the budget is spent).
func (d *drawer) root(n int) *tree {
	return d.nth(d.lister(d.g.root, d.g.steps, uint8(d.g.sets-1)), n)
}

func (d *drawer) lister(id int32, steps int, owed uint8) *lister {
	k := state{id, int16(steps), owed}
	l := d.listers[k]
	if l == nil {
		l = &lister{id: id, steps: steps, owed: owed}
		d.listers[k] = l
	}
	return l
}

// nth returns the n-th tree of a state, nil if it has fewer.
func (d *drawer) nth(l *lister, n int) *tree {
	if !l.begun {
		l.begun = true
		d.begin(l)
	}
	for len(l.got) <= n && len(l.heap) > 0 && d.budget > 0 {
		d.budget--
		c := heap.Pop(l).(candidate)
		d.settle(l, c)
	}
	if n < len(l.got) {
		return l.got[n]
	}
	return nil
}

// begin opens the list of a state with its leaf or with the rough candidates of its edges.
func (d *drawer) begin(l *lister) {
	n := &d.g.nodes[l.id]
	if cost := d.g.leaf(n, l.owed); cost < inf {
		t := &tree{id: l.id, cost: cost, hash: mix(uint64(l.id) + 1)}
		if l.owed != 0 {
			t.whole[bits.TrailingZeros8(l.owed)] = true
		}
		l.got = append(l.got, t)
	}
	if n.open || l.steps == 0 || d.g.leafOnly(n, l.owed) {
		return
	}
	var low [maxChildren]float64
	for i := range n.edges {
		e := &n.edges[i]
	splits:
		for s := firstSplit(e, l.owed&^n.via); s.ok; s.next() {
			for j, child := range e.children {
				if low[j], _, _ = d.g.values(child, l.steps-1, s.part[j]); low[j] == inf {
					continue splits
				}
			}
			l.heap = append(l.heap, candidate{edge: i, split: s, cost: d.g.cheapest(e, low[:len(e.children)]), rough: true, order: l.order})
			l.order++
		}
	}
	heap.Init(l)
}

// settle turns a candidate into a tree, keeps it if it passes, and pushes its successors.
func (d *drawer) settle(l *lister, c candidate) {
	e := &d.g.nodes[l.id].edges[c.edge]
	t := &tree{id: l.id, edge: e, children: make([]*tree, len(e.children))}
	for j, child := range e.children {
		sub := d.nth(d.lister(child, l.steps-1, c.split.part[j]), int(c.nth[j]))
		if sub == nil {
			return
		}
		t.children[j] = sub
	}
	d.price(t)
	if c.rough || t.cost > c.cost { // now the true cost is known: back into the queue with it
		c.rough, c.cost = false, t.cost
		c.order = l.order
		l.order++
		heap.Push(l, c)
		return
	}
	for j := c.last; j < len(e.children); j++ {
		next := c
		next.nth[j]++
		next.last = j
		next.order = l.order // its cost is known when it is settled; ours is a lower bound
		l.order++
		next.rough = true
		heap.Push(l, next)
	}
	if d.passes(t, l.owed) && !l.has(t) {
		l.got = append(l.got, t)
	}
}

// price fills in the cost, the variant and the hash of a tree from its children.
func (d *drawer) price(t *tree) {
	var costs [maxChildren]float64
	t.hash = mix(uint64(t.id) + 1)
	for j, sub := range t.children {
		costs[j] = sub.cost
		t.hash = mix(t.hash*31 + sub.hash)
	}
	t.cost = inf
	for v := range t.edge.variants {
		if cost := d.g.cost.Combine(&t.edge.variants[v], costs[:len(t.children)]); cost < t.cost {
			t.cost, t.variant = cost, v
		}
	}
}

// passes makes the exact checks of one tree: its own molecule does not come back below it, and atoms
// of each item owed reach the molecule. Both are true of a tree only if they are true of every
// subtree, so failing trees are never built upon.
func (d *drawer) passes(t *tree, owed uint8) bool {
	for _, sub := range t.children {
		if sub.holds(t.id) {
			return false
		}
	}
	for i := 0; owed>>i != 0; i++ {
		if owed&(1<<i) == 0 {
			continue
		}
		if d.g.nodes[t.id].via&(1<<i) != 0 {
			t.whole[i] = true
			continue
		}
		found := false
		set := make(atomSet, (len(t.edge.origins)+63)/64)
		for a, o := range t.edge.origins {
			if o.Child < 0 {
				continue
			}
			if sub := t.children[o.Child]; sub.whole[i] || sub.reach[i].has(o.Atom) {
				set[a>>6] |= 1 << (a & 63)
				found = true
			}
		}
		if !found {
			return false
		}
		t.reach[i] = set
	}
	return true
}

// has says whether a tree of the same molecules that brings the same atoms was listed before. Trees
// that bring other atoms stay apart, because an upper step may lose the atoms of one of them.
func (l *lister) has(t *tree) bool {
	for _, o := range l.got {
		if o.sameMolecules(t) && o.sameReach(t) {
			return true
		}
	}
	return false
}

// mix is a 64-bit finaliser (constants of splitmix64, from memory).
func mix(x uint64) uint64 {
	x += 0x9e3779b97f4a7c15
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}
