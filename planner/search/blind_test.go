package search

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"sort"
	"strings"
	"testing"
)

// made is a small random graph given whole, the problem of most tests here.
type made struct {
	edges  [][]Edge
	stock  map[int]float64
	floor  float64
	prices float64 // least leaf cost
}

func key(i int) (k Key) {
	k[0], k[1] = byte(i>>8), byte(i)
	return k
}
func number(k Key) int { return int(k[0])<<8 | int(k[1]) }

func (m *made) Expand(ctx context.Context, k Key) (Expansion, error) {
	return Expansion{Edges: m.edges[number(k)], Tried: 1}, ctx.Err()
}
func (m *made) Leaf(k Key) (float64, bool) {
	c, ok := m.stock[number(k)]
	return c, ok
}
func (m *made) Bound(Key, uint8) (int, float64) { return 1, m.floor }
func (m *made) Guess(k Key, owed uint8) float64 { return float64((number(k)*7+int(owed)*3)%5) / 2 }

const atomsEach = 3

// random makes a graph of n nodes with cycles, sharing, ties and several variants.
func random(r *rand.Rand, n int) *made {
	m := &made{edges: make([][]Edge, n), stock: map[int]float64{}, floor: math.Inf(1)}
	for i := range m.edges {
		if i > 0 && r.IntN(5) < 3 {
			m.stock[i] = float64(r.IntN(4)) / 4
		}
		for range 1 + r.IntN(4) {
			var e Edge
			kids := r.Perm(n)[:1+r.IntN(2)]
			for _, c := range kids {
				e.Children = append(e.Children, Child{key(c)})
			}
			for range 1 + r.IntN(2) {
				v := Variant{Weight: 0.5 + float64(r.IntN(4))/4, Yield: 1 / float64(1+r.IntN(2))}
				for range kids {
					v.Equiv = append(v.Equiv, float64(1+r.IntN(2))/2)
				}
				m.floor = min(m.floor, v.Weight)
				e.Variants = append(e.Variants, v)
			}
			for range atomsEach {
				o := Origin{int32(r.IntN(len(kids))), int32(r.IntN(atomsEach))}
				if r.IntN(4) == 0 {
					o.Child = -1
				}
				e.Origins = append(e.Origins, o)
			}
			m.edges[i] = append(m.edges[i], e)
		}
	}
	if math.IsInf(m.floor, 1) {
		m.floor = 0
	}
	return m
}

// bush is a tree of the blind enumeration.
type bush struct {
	id      int
	edge    *Edge
	variant int
	kids    []*bush
}

func (b *bush) String() string {
	if b.edge == nil {
		return fmt.Sprint(b.id)
	}
	var parts []string
	for _, k := range b.kids {
		parts = append(parts, k.String())
	}
	return fmt.Sprintf("%d(%s)", b.id, strings.Join(parts, " "))
}

// judge is the blind enumeration: all trees, then the rules, read as a chemist would state them.
type judge struct {
	m      *made
	o      Options
	from   map[int]int
	budget int
}

// all lists every loop-free tree of id within the steps, for every edge and variant.
func (j *judge) all(id, steps int, path []int) (out []*bush) {
	_, isFrom := j.from[id]
	_, stocked := j.m.stock[id]
	if top := len(path) == 0 && j.o.MakeRoot; !top && (isFrom || stocked) {
		out = append(out, &bush{id: id})
		if isFrom {
			return out
		}
	}
	if steps == 0 {
		return out
	}
	path = append(path[:len(path):len(path)], id)
	for e := range j.m.edges[id] {
		edge := &j.m.edges[id][e]
		sets := [][]*bush{nil}
		for _, c := range edge.Children {
			if onPath(path, number(c.Key)) {
				sets = nil
				break
			}
			kids := j.all(number(c.Key), steps-1, path)
			var longer [][]*bush
			for _, s := range sets {
				for _, k := range kids {
					longer = append(longer, append(s[:len(s):len(s)], k))
				}
			}
			sets = longer
		}
		for _, s := range sets {
			for v := range edge.Variants {
				out = append(out, &bush{id, edge, v, s})
			}
		}
		if j.budget -= len(out); j.budget < 0 {
			return nil
		}
	}
	return out
}

func onPath(path []int, id int) bool {
	for _, p := range path {
		if p == id {
			return true
		}
	}
	return false
}

func (j *judge) cost(b *bush) float64 {
	if b.edge == nil {
		return j.m.stock[b.id]
	}
	v := &b.edge.Variants[b.variant]
	kids := make([]float64, len(b.kids))
	sum, most, mole := v.Weight, 0.0, v.Weight
	for i, k := range b.kids {
		kids[i] = j.cost(k)
		sum += kids[i]
		most = math.Max(most, kids[i])
		mole += kids[i] * v.Equiv[i]
	}
	switch j.o.Cost {
	case Worst:
		return v.Weight + most + otherBranches*(sum-v.Weight-most)
	case PerMole:
		return mole / v.Yield
	}
	return sum
}

// leaves lists the ways (child indices from the root) to the leaves of the tree.
func leaves(b *bush) (out [][]int) {
	if b.edge == nil {
		return [][]int{nil}
	}
	for i, k := range b.kids {
		for _, w := range leaves(k) {
			out = append(out, append([]int{i}, w...))
		}
	}
	return out
}

// inner lists the ways to the nodes of the tree that are made, the root included.
func inner(b *bush) (out [][]int) {
	if b.edge == nil {
		return nil
	}
	out = append(out, nil)
	for i, k := range b.kids {
		for _, w := range inner(k) {
			out = append(out, append([]int{i}, w...))
		}
	}
	return out
}

// follow returns the node at the end of a way and which of its atoms reach the root.
func follow(b *bush, way []int) (id int, atoms map[int32]int32) {
	if len(way) == 0 {
		same := map[int32]int32{}
		for a := range int32(atomsEach) {
			same[a] = a
		}
		return b.id, same
	}
	id, below := follow(b.kids[way[0]], way[1:])
	atoms = map[int32]int32{}
	for a, o := range b.edge.Origins {
		if int(o.Child) == way[0] {
			if x, ok := below[o.Atom]; ok {
				atoms[int32(a)] = x
			}
		}
	}
	return id, atoms
}

// legal says whether one leaf can be named for each item of From whose atoms reach the root, such
// that every stock molecule that is made lies above a leaf so named.
func (j *judge) legal(b *bush) bool {
	ways := make([][][]int, j.o.owed())
	for _, w := range leaves(b) {
		id, atoms := follow(b, w)
		if i, ok := j.from[id]; ok && len(atoms) > 0 {
			ways[i] = append(ways[i], w)
		}
	}
	for _, w := range inner(b) {
		id, atoms := follow(b, w)
		for v, counts := range j.o.Via {
			above := false // the first such node from the root is the one that counts
			for n := range w {
				top := upTo(b, w[:n])
				above = above || counts(key(top))
			}
			if counts(key(id)) && len(atoms) > 0 && !above {
				i := len(ways) - len(j.o.Via) + v
				ways[i] = append(ways[i], w)
			}
		}
	}
	var choose func(i int, named [][]int) bool
	choose = func(i int, named [][]int) bool {
		if i == len(ways) {
			return j.stockRule(b, nil, named)
		}
		for _, w := range ways[i] {
			if choose(i+1, append(named[:len(named):len(named)], w)) {
				return true
			}
		}
		return false
	}
	return choose(0, nil)
}

func (j *judge) stockRule(b *bush, way []int, named [][]int) bool {
	if b.edge == nil {
		return true
	}
	if _, stocked := j.m.stock[b.id]; stocked && !(len(way) == 0 && j.o.MakeRoot) {
		above := false
		for _, n := range named {
			above = above || strings.HasPrefix(fmt.Sprint(n)[1:], strings.Trim(fmt.Sprint(way), "[]"))
		}
		if !above {
			return false
		}
	}
	for i, k := range b.kids {
		if !j.stockRule(k, append(way[:len(way):len(way)], i), named) {
			return false
		}
	}
	return true
}

// routes returns the legal routes, the cheapest variant of each, in order of cost.
func (j *judge) routes() (costs map[string]float64, order []float64, ok bool) {
	costs = map[string]float64{}
	for _, b := range j.all(0, j.o.MaxSteps, nil) {
		if !j.legal(b) {
			continue
		}
		c, s := j.cost(b), b.String()
		if old, seen := costs[s]; !seen || c < old {
			costs[s] = c
		}
	}
	for _, c := range costs {
		order = append(order, c)
	}
	sort.Float64s(order)
	return costs, order, j.budget >= 0
}

func text(t *Tree) string {
	if t.Edge < 0 {
		return fmt.Sprint(number(t.Key))
	}
	var parts []string
	for _, c := range t.Children {
		parts = append(parts, text(c))
	}
	return fmt.Sprintf("%d(%s)", number(t.Key), strings.Join(parts, " "))
}

// task draws a graph and the options of one case from a seed.
func task(seed uint64) (*made, Options, map[int]int) {
	r := rand.New(rand.NewPCG(seed, 1))
	m := random(r, 4+r.IntN(5))
	o := Options{Cost: Cost(r.IntN(3)), Count: 1 + r.IntN(6), MaxSteps: 2 + r.IntN(3), MakeRoot: r.IntN(4) == 0, Workers: 1}
	if o.Cost == PerMole {
		m.floor = 0
	}
	from := map[int]int{}
	for _, id := range r.Perm(len(m.edges))[:min(len(m.edges), r.IntN(4))] {
		if id == 0 && o.MakeRoot {
			continue
		}
		from[id] = len(o.From)
		o.From = append(o.From, key(id))
	}
	if r.IntN(6) == 0 { // one of several
		for _, id := range r.Perm(len(m.edges))[:2] {
			if _, taken := from[id]; !taken && !(id == 0 && o.MakeRoot) {
				o.FromAny = append(o.FromAny, key(id))
			}
		}
		for _, k := range o.FromAny {
			from[number(k)] = len(o.From)
		}
	}
	for range max(0, r.IntN(7)-4) { // a node on the way, now and then either of two
		a, b := r.IntN(len(m.edges)), r.IntN(len(m.edges))
		o.Via = append(o.Via, func(k Key) bool { return number(k) == a || seed%3 == 0 && number(k) == b })
	}
	return m, o, from
}

// cheapestOfKinds gives the least cost of the routes of each number of nodes made, in order.
func cheapestOfKinds(costs map[string]float64) (order []float64) {
	least := map[int]float64{}
	for s, c := range costs {
		n := strings.Count(s, "(")
		if old, met := least[n]; !met || c < old {
			least[n] = c
		}
	}
	for _, c := range least {
		order = append(order, c)
	}
	sort.Float64s(order)
	return order
}

// TestBlind compares cost for cost and route for route with the blind enumeration: cycles, sharing,
// limits, items owed, ties, all three costs.
func TestBlind(t *testing.T) {
	tried, withRoutes, withFrom, withVia, looped, kinds := 0, 0, 0, 0, 0, 0
	for seed := uint64(0); tried < 1500; seed++ {
		m, o, from := task(seed)
		j := &judge{m: m, o: o, from: from, budget: 60000}
		costs, order, ok := j.routes()
		if !ok {
			continue
		}
		tried++
		if seed%5 == 0 { // only the cheapest of each kind; the kind is the number of nodes made
			o.Kind = func(t *Tree) string { return fmt.Sprint(strings.Count(text(t), "(")) }
			order = cheapestOfKinds(costs)
			if len(order) > 1 {
				kinds++
			}
		}
		got, err := Find(context.Background(), m, key(0), o)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		if len(order) > 0 {
			withRoutes++
			if len(from) > 0 {
				withFrom++
			}
			if len(o.Via) > 0 {
				withVia++
			}
		}
		if len(order) > o.Count {
			looped++
		}
		if len(got.Routes) < min(o.Count, len(order)) || len(got.Routes) > len(order) {
			t.Fatalf("seed %d: %d routes of %d, %d wanted", seed, len(got.Routes), len(order), o.Count)
		}
		seen := map[string]bool{}
		for i, route := range got.Routes {
			s := text(route.Tree)
			want, legal := costs[s]
			switch {
			case !legal:
				t.Fatalf("seed %d: route %s is not legal", seed, s)
			case seen[s]:
				t.Fatalf("seed %d: route %s comes twice", seed, s)
			case math.Abs(route.Cost-want) > 1e-9 || math.Abs(route.Cost-order[i]) > 1e-9:
				t.Fatalf("seed %d: route %d %s costs %v; by itself %v, in its place %v", seed, i, s, route.Cost, want, order[i])
			}
			seen[s] = true
		}
		if want := min(o.Count, len(order)); got.ProvenRoutes < want {
			t.Fatalf("seed %d: %d proven of %d", seed, got.ProvenRoutes, want)
		}
	}
	t.Logf("%d cases: %d with routes, %d of them with items owed, %d with a node on the way, %d with more routes than wanted, %d by kinds", tried, withRoutes, withFrom, withVia, looped, kinds)
	if withRoutes < tried/5 || withFrom < tried/20 || withVia < tried/40 || kinds < tried/60 || looped < tried/25 {
		t.Errorf("the cases are too easy")
	}
}

// upTo returns the node at the end of a way.
func upTo(b *bush, way []int) int {
	for _, i := range way {
		b = b.kids[i]
	}
	return b.id
}
