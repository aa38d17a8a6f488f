package search

import (
	"bytes"
	"container/heap"
)

// place is a state reached from the root along partial routes, with what the partial route through it
// costs more than the cheapest one. The excess is exact for Sum and an ordering aid otherwise.
type place struct {
	id     int32
	steps  int16
	owed   uint8
	excess float64
	guess  float64 // estimated cost of making an open node, for the order among equals
}

// places is a heap of places by excess, then estimate, then key, so that the order is the same in
// every run.
type places struct {
	list  []place
	nodes []node
}

func (p *places) Len() int      { return len(p.list) }
func (p *places) Swap(i, j int) { p.list[i], p.list[j] = p.list[j], p.list[i] }
func (p *places) Push(x any)    { p.list = append(p.list, x.(place)) }
func (p *places) Pop() any {
	last := p.list[len(p.list)-1]
	p.list = p.list[:len(p.list)-1]
	return last
}
func (p *places) Less(i, j int) bool {
	a, b := &p.list[i], &p.list[j]
	switch {
	case a.excess != b.excess:
		return a.excess < b.excess
	case a.guess != b.guess:
		return a.guess < b.guess
	case a.id != b.id:
		return bytes.Compare(p.nodes[a.id].key[:], p.nodes[b.id].key[:]) < 0
	case a.steps != b.steps:
		return a.steps > b.steps
	}
	return a.owed < b.owed
}

// maxPlaces bounds the work of choosing one batch. Enough places to fill a batch are met long before;
// the bound matters only where very many partial routes share few open nodes.
const maxPlaces = 60000

// pick appends to batch up to want open nodes that stand in the partial routes of least bound, or of
// least estimate if byGuess, and marks them with
// the batch number.
func (g *graph) pick(batch []int32, want int, byGuess bool) []int32 {
	g.mark++
	h := &places{nodes: g.nodes}
	root := place{id: g.root, steps: int16(g.steps), owed: uint8(g.sets - 1)}
	if g.openValue(&root, byGuess) == inf {
		return batch
	}
	heap.Push(h, root)
	for popped := 0; h.Len() > 0 && want > 0; popped++ {
		at := heap.Pop(h).(place)
		n := &g.nodes[at.id]
		if n.open {
			if n.picked != g.batch {
				n.picked = g.batch
				batch = append(batch, at.id)
				want--
			}
			continue
		}
		if stamp := &n.stamp[int(at.steps)*g.sets+int(at.owed)]; *stamp == g.mark {
			continue
		} else {
			*stamp = g.mark
		}
		if popped > maxPlaces && len(batch) > 0 {
			break
		}
		g.descend(h, at, byGuess)
	}
	return batch
}

// openValue returns the least bound (or estimate) of a tree with an open node at a place.
func (g *graph) openValue(p *place, byGuess bool) float64 {
	_, bound, guess := g.values(p.id, int(p.steps), p.owed)
	if byGuess {
		return guess
	}
	return bound
}

// descend pushes the children of a place through which a tree with an open node runs.
func (g *graph) descend(h *places, at place, byGuess bool) {
	n := &g.nodes[at.id]
	here := g.openValue(&at, byGuess)
	var low, open [maxChildren]float64
	for i := range n.edges {
		e := &n.edges[i]
		k := len(e.children)
	splits:
		for s := firstSplit(e, at.owed&^n.via); s.ok; s.next() {
			for j, child := range e.children {
				c, b, u := g.values(child, int(at.steps)-1, s.part[j])
				if open[j] = b; byGuess {
					open[j] = u
				}
				if low[j] = min(c, open[j]); low[j] == inf {
					continue splits
				}
			}
			for j, child := range e.children {
				if open[j] == inf {
					continue
				}
				next := place{id: child, steps: at.steps - 1, owed: s.part[j]}
				cn := &g.nodes[child]
				if cn.open && cn.picked == g.batch {
					continue
				}
				if !cn.open && cn.stamp[int(next.steps)*g.sets+int(next.owed)] == g.mark {
					continue
				}
				keep := low[j]
				low[j] = open[j]
				next.excess = at.excess + g.cheapest(e, low[:k]) - here
				low[j] = keep
				next.guess = g.facts[int(child)*g.sets+int(next.owed)].guess
				heap.Push(h, next)
			}
		}
	}
}
