package search

import "container/heap"

// Opening is a node that, were it in stock, would complete a route.
type Opening struct {
	Key   Key
	Steps int     // edges between the node and the target
	Cost  float64 // of the rest of the route, the node taken as free
}

// maxOpenings and maxOpeningPlaces bound the list and the work of openings.
const (
	maxOpenings      = 64
	maxOpeningPlaces = 20000
)

// openings lists single nodes that would complete a route within the limits, the cheapest first. Only
// what was opened so far is looked at.
func (g *graph) openings() (out []Opening) {
	g.mark++
	met := map[int32]bool{g.root: true}
	h := &places{nodes: g.nodes}
	heap.Push(h, place{id: g.root, steps: int16(g.steps), owed: uint8(g.sets - 1)})
	for popped := 0; h.Len() > 0 && popped < maxOpeningPlaces && len(out) < maxOpenings; popped++ {
		at := heap.Pop(h).(place)
		n := &g.nodes[at.id]
		if at.owed == 0 && !met[at.id] {
			met[at.id] = true
			out = append(out, Opening{n.key, g.steps - int(at.steps), at.excess})
		}
		if n.open || at.steps == 0 {
			continue
		}
		if stamp := &n.stamp[int(at.steps)*g.sets+int(at.owed)]; *stamp == g.mark {
			continue
		} else {
			*stamp = g.mark
		}
		g.descendToGap(h, at)
	}
	return out
}

// descendToGap pushes, for every edge that lacks one child only, that child.
func (g *graph) descendToGap(h *places, at place) {
	n := &g.nodes[at.id]
	var costs [maxChildren]float64
	for i := range n.edges {
		e := &n.edges[i]
		for s := firstSplit(e, at.owed&^n.via); s.ok; s.next() {
			lacking, gap := 0, 0
			for j, child := range e.children {
				if costs[j], _, _ = g.values(child, int(at.steps)-1, s.part[j]); costs[j] == inf {
					costs[j] = 0
					lacking++
					gap = j
				}
			}
			if lacking != 1 {
				continue
			}
			next := place{id: e.children[gap], steps: at.steps - 1, owed: s.part[gap]}
			next.excess = at.excess + g.cheapest(e, costs[:len(e.children)])
			heap.Push(h, next)
		}
	}
}
