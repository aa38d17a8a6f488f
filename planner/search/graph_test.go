package search

import (
	"math"
	"testing"
)

// partial is the cost of one partial tree and whether it has an open node.
type partial struct {
	cost float64
	open bool
}

// partials lists every partial tree of a state of g, loops included, one by one.
func partials(g *graph, id int32, steps int, owed uint8, budget *int) (out []partial) {
	n := &g.nodes[id]
	if c := g.leaf(n, owed); c < inf {
		out = append(out, partial{c, false})
	}
	if g.leafOnly(n, owed) || steps == 0 {
		return out
	}
	if n.open {
		return append(out, partial{g.facts[int(id)*g.sets+int(owed)].bound, true})
	}
	for i := range n.edges {
		e := &n.edges[i]
		deals := 1 << (2 * len(e.children)) // each child gets any subset of two items
		for deal := range deals {
			all, fits := uint8(0), true
			part := make([]uint8, len(e.children))
			for j := range e.children {
				part[j] = uint8(deal >> (2 * j) & 3)
				fits = fits && all&part[j] == 0 && (part[j] == 0 || e.passes&(1<<j) != 0)
				all |= part[j]
			}
			if !fits || all != owed {
				continue
			}
			rows := [][]partial{nil}
			for j, c := range e.children {
				var longer [][]partial
				for _, r := range rows {
					for _, p := range partials(g, c, steps-1, part[j], budget) {
						longer = append(longer, append(r[:len(r):len(r)], p))
					}
				}
				rows = longer
			}
			for _, r := range rows {
				costs, open := []float64{}, false
				for _, p := range r {
					costs, open = append(costs, p.cost), open || p.open
				}
				out = append(out, partial{g.cheapest(e, costs), open})
			}
			if *budget -= len(rows); *budget < 0 {
				return nil
			}
		}
	}
	return out
}

// TestValues opens nodes one after the other and compares, after each, the values of the root that
// were brought up to date with those of all partial trees listed one by one.
func TestValues(t *testing.T) {
	compared, mixed := 0, 0
	for seed := uint64(0); seed < 600; seed++ {
		m, o, _ := task(seed)
		o.From, o.FromAny, o.Via = o.From[:min(len(o.From), 2)], nil, nil
		o.MaxSteps = min(o.MaxSteps, 3)
		g := newGraph(m, key(0), &o)
		for range 6 {
			g.batch++
			ids := g.pick(nil, 1, seed%2 == 0)
			if len(ids) == 0 {
				break
			}
			g.expand(ids[0], Expansion{Edges: m.edges[number(g.nodes[ids[0]].key)]}, 0)
			g.propagate()
			budget := 20000
			list := partials(g, g.root, g.steps, uint8(g.sets-1), &budget)
			if budget < 0 {
				break
			}
			complete, bound := math.Inf(1), math.Inf(1)
			for _, p := range list {
				if p.open {
					bound = min(bound, p.cost)
				} else {
					complete = min(complete, p.cost)
				}
			}
			c, b, _ := g.values(g.root, g.steps, uint8(g.sets-1))
			if math.Abs(c-complete) > 1e-9 || math.Abs(b-bound) > 1e-9 {
				t.Fatalf("seed %d: complete %v bound %v, listed one by one %v and %v", seed, c, b, complete, bound)
			}
			compared++
			if complete < inf && bound < inf {
				mixed++
			}
		}
	}
	t.Logf("%d compared, %d with both", compared, mixed)
	if mixed < 100 {
		t.Error("too easy")
	}
}
