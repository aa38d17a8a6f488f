package route

import (
	"slices"

	"shelfward/planner/search"
)

// WayOut says how one stands with an intermediate in hand when the step that takes it on fails.
type WayOut struct {
	Step       int    `json:"step"` // the step that made it
	Product    string `json:"product"`
	Name       string `json:"name"`
	Conditions int    `json:"other_conditions"` // other conditions for the step that takes it on
	Steps      int    `json:"other_steps"`      // other steps from it that lead to the target, as far as opened
}

// network is what the search opened, turned round: which ways consume a molecule.
type network struct {
	c        *chemistry
	root     search.Key
	taken    map[search.Key]bool // stands on the shelf
	makeable map[search.Key]bool // so does it, or it can be made by the ways opened
	ways     map[search.Key][]wayTo
}

// wayTo is one way that makes a molecule.
type wayTo struct {
	edge     int
	children []search.Key
}

// newNetwork collects the ways opened and finds what can be made by them: the least set that holds the
// shelf and every molecule with a way whose materials it holds.
func (c *chemistry) newNetwork(root search.Key) *network {
	n := &network{c: c, root: root, taken: map[search.Key]bool{}, makeable: map[search.Key]bool{}, ways: map[search.Key][]wayTo{}}
	waiting := map[search.Key][]search.Key{} // material -> products with a way that consumes it
	for k, edges := range c.options {
		for i, options := range edges {
			w := wayTo{edge: i}
			for _, child := range options[0].children {
				w.children = append(w.children, child.Key)
				waiting[child.Key] = append(waiting[child.Key], k)
			}
			n.ways[k] = append(n.ways[k], w)
		}
	}
	var queue []search.Key
	settle := func(k search.Key) {
		if !n.makeable[k] {
			n.makeable[k] = true
			queue = append(queue, k)
		}
	}
	for k := range waiting {
		if _, ok := c.Leaf(k); ok {
			n.taken[k] = true
			settle(k)
		}
	}
	for len(queue) > 0 {
		k := queue[len(queue)-1]
		queue = queue[:len(queue)-1]
		for _, p := range waiting[k] {
			if !n.makeable[p] && slices.ContainsFunc(n.ways[p], func(w wayTo) bool { return n.all(w.children, p) }) {
				settle(p)
			}
		}
	}
	return n
}

// all says whether every child but one that is in hand can be had.
func (n *network) all(children []search.Key, inHand search.Key) bool {
	return !slices.ContainsFunc(children, func(k search.Key) bool { return k != inHand && !n.makeable[k] })
}

// leading lists the molecules from which the target can be reached in at most steps steps without
// passing through x or through what stands on the shelf, the target among them; every partner on the way
// can be had.
func (n *network) leading(x search.Key, steps int) map[search.Key]bool {
	met := map[search.Key]bool{n.root: true}
	level := []search.Key{n.root}
	for ; steps > 1 && len(level) > 0; steps-- {
		var next []search.Key
		for _, p := range level {
			for _, w := range n.ways[p] {
				for _, k := range w.children {
					if k != x && !met[k] && !n.taken[k] && n.all(w.children, k) {
						met[k] = true
						next = append(next, k)
					}
				}
			}
		}
		level = next
	}
	return met
}

// waysOut fills in, for every intermediate of every route, how many other ways lead on from it.
func (c *chemistry) waysOut(p *Plan, root search.Key) {
	var n *network
	for i := range p.Routes {
		r := &p.Routes[i]
		for j := range r.made {
			x := r.made[j].key
			if x == root {
				continue
			}
			if n == nil {
				n = c.newNetwork(root)
			}
			w := WayOut{Step: j + 1, Product: r.Steps[j].Product, Name: r.Steps[j].ProductName}
			leading := n.leading(x, p.MaxSteps)
			for product := range leading {
				for _, way := range n.ways[product] {
					if slices.Contains(way.children, x) && n.all(way.children, x) && !r.takes(product, way.edge) {
						w.Steps++
					}
				}
			}
			for k := range r.made {
				if m := &r.made[k]; slices.Contains(m.children, x) {
					w.Conditions += len(c.options[m.key][m.tree.Edge]) - 1
				}
			}
			r.WaysOut = append(r.WaysOut, w)
		}
	}
}

// takes says whether the route makes the product by this way.
func (r *Route) takes(product search.Key, edge int) bool {
	return slices.ContainsFunc(r.made, func(m making) bool { return m.key == product && m.tree.Edge == edge })
}
