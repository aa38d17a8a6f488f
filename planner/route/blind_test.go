package route

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/planner/search"
	"shelfward/reactions"
)

// spray is a tree of the blind enumeration: a molecule and how it is made.
type spray struct {
	k    search.Key
	edge *search.Edge // nil: taken
	kids []*spray
}

// mostOpened keeps the cases small: the blind enumeration opens everything within the steps.
const mostOpened = 40

// blind enumerates every route of a chemistry one by one, without bounds, tables or best-first order.
type blind struct {
	c      *chemistry
	o      search.Options
	budget int
	opened map[search.Key][]search.Edge
}

func (b *blind) edges(k search.Key) []search.Edge {
	if _, ok := b.opened[k]; !ok {
		if len(b.opened) >= mostOpened {
			b.budget = -1
			return nil
		}
		x, err := b.c.expand(context.Background(), k)
		if err != nil {
			panic(err)
		}
		b.opened[k] = x.Edges
	}
	return b.opened[k]
}

func (b *blind) all(k search.Key, steps int, path []search.Key) (out []*spray) {
	isFrom := slices.Contains(b.o.From, k)
	if _, ok := b.c.Leaf(k); ok && len(path) > 0 {
		out = append(out, &spray{k: k})
	}
	if isFrom || steps == 0 || b.budget < 0 {
		return out
	}
	path = append(path[:len(path):len(path)], k)
	list := b.edges(k)
	for i := range list {
		e := &list[i]
		rows := [][]*spray{nil}
		for _, child := range e.Children {
			var longer [][]*spray
			if !slices.Contains(path, child.Key) {
				kids := b.all(child.Key, steps-1, path)
				for _, r := range rows {
					for _, kid := range kids {
						longer = append(longer, append(r[:len(r):len(r)], kid))
					}
				}
			}
			rows = longer
		}
		for _, r := range rows {
			out = append(out, &spray{k, e, r})
		}
		if b.budget -= len(rows) + 1; b.budget < 0 {
			return nil
		}
	}
	return out
}

func (b *blind) cost(s *spray) float64 {
	if s.edge == nil {
		cost, _ := b.c.Leaf(s.k)
		return cost
	}
	kids := make([]float64, len(s.kids))
	for i, k := range s.kids {
		kids[i] = b.cost(k)
	}
	least := math.Inf(1)
	for i := range s.edge.Variants {
		least = min(least, b.o.Cost.Combine(&s.edge.Variants[i], kids))
	}
	return least
}

// atoms returns, for each leaf by its way from the root, the atoms of the root that come from it.
func (b *blind) atoms(s *spray, way string, out map[string][]int, leaves map[string]search.Key) {
	if s.edge == nil {
		leaves[way] = s.k
		for a := range b.c.molecule(s.k).NumAtoms() {
			out[way] = append(out[way], a)
		}
		return
	}
	for i, kid := range s.kids {
		below := map[string][]int{}
		b.atoms(kid, fmt.Sprint(way, "/", i), below, leaves)
		for w, from := range below {
			for a, o := range s.edge.Origins {
				if int(o.Child) == i && (kid.edge == nil || slices.Contains(from, int(o.Atom))) {
					out[w] = append(out[w], a)
				}
			}
		}
	}
}

// legal: a leaf whose atoms reach the root can be named for each start, such that every stock molecule that
// is made lies above a leaf so named.
func (b *blind) legal(s *spray) bool {
	reach, leaves := map[string][]int{}, map[string]search.Key{}
	b.atoms(s, "", reach, leaves)
	var choose func(i int, named []string) bool
	choose = func(i int, named []string) bool {
		if i == len(b.o.From) {
			return b.stockRule(s, "", named)
		}
		for w, k := range leaves {
			if k == b.o.From[i] && len(reach[w]) > 0 && choose(i+1, append(named[:len(named):len(named)], w)) {
				return true
			}
		}
		return false
	}
	return choose(0, nil)
}

func (b *blind) stockRule(s *spray, way string, named []string) bool {
	if s.edge == nil {
		return true
	}
	if _, ok := b.c.Leaf(s.k); ok && way != "" && !slices.ContainsFunc(named, func(n string) bool { return strings.HasPrefix(n, way+"/") }) {
		return false
	}
	for i, kid := range s.kids {
		if !b.stockRule(kid, fmt.Sprint(way, "/", i), named) {
			return false
		}
	}
	return true
}

func (b *blind) text(s *spray) string {
	out := b.c.world.Write(b.c.molecule(s.k))
	if s.edge != nil {
		var kids []string
		for _, k := range s.kids {
			kids = append(kids, b.text(k))
		}
		slices.Sort(kids)
		out += "(" + strings.Join(kids, " ") + ")"
	}
	return out
}

func treeText(c *chemistry, t *search.Tree) string {
	out := c.world.Write(c.molecule(t.Key))
	if t.Edge >= 0 {
		var kids []string
		for _, k := range t.Children {
			kids = append(kids, treeText(c, k))
		}
		slices.Sort(kids)
		out += "(" + strings.Join(kids, " ") + ")"
	}
	return out
}

// someRules is the book with a random part of its transforms.
func someRules(t testing.TB, r *rand.Rand, n int) *reactions.Book {
	t.Helper()
	whole, err := book()
	if err != nil {
		t.Logf("rules: %.300s", err.Error())
	}
	var part []*reactions.Transform
	for _, i := range r.Perm(len(whole.Transforms))[:n] {
		part = append(part, whole.Transforms[i])
	}
	return whole.Only(part)
}

// chemicalTask draws some transforms, a target that one of their examples makes, and a shelf of what their
// examples start from.
func chemicalTask(t testing.TB, seed uint64) (c *chemistry, o search.Options, ok bool) {
	r := rand.New(rand.NewPCG(seed, 9))
	part := someRules(t, r, 60+r.IntN(90))
	by := ranks[r.IntN(len(ranks))]
	var targets, starts []string
	var ends [][]string
	for _, x := range part.Transforms {
		for _, e := range x.Examples {
			targets, ends = append(targets, e.To), append(ends, e.From)
			starts = append(starts, e.From...)
		}
	}
	at := r.IntN(len(targets))
	target := mustRead(t, targets[at])
	if target.NumAtoms() > 12 {
		return nil, o, false
	}
	b := newBottles()
	put := func(text string) {
		m := mustRead(t, text)
		if _, twice := b.bySeen[m.SeenThroughKey()]; !twice && m.SeenThroughKey() != target.SeenThroughKey() && m.NumAtoms() <= 10 {
			b.put(t, fmt.Sprint("item ", len(b.list)), text, func(mat *Material) { mat.PricePerMol = float64(r.IntN(50)) })
		}
	}
	for range 15 + r.IntN(25) {
		put(starts[r.IntN(len(starts))])
	}
	for _, x := range ends[at] {
		if r.IntN(4) > 0 {
			put(x)
		}
	}
	for _, x := range everyday[r.IntN(len(everyday)):] {
		put(x)
	}
	w := worldWith(t, b)
	w.Book, w.Transforms = part, part.Transforms
	var from []*molecule.Molecule
	if r.IntN(2) == 0 { // what the example starts from, so that there is a route, and now and then another
		from = append(from, mustRead(t, ends[at][r.IntN(len(ends[at]))]))
		if m := b.list[r.IntN(len(b.list))]; r.IntN(3) == 0 && m.SeenThroughKey() != from[0].SeenThroughKey() {
			from = append(from, m)
		}
		if from[0].SeenThroughKey() == target.SeenThroughKey() {
			from = nil
		}
	}
	c = newChemistry(w, by, &filter{world: w}, from, nil)
	c.enter(target)
	o = search.Options{Cost: by.cost(), Count: 1 + r.IntN(6), MaxSteps: 2 + r.IntN(2), Workers: 1}
	c.wants.enterInto(&o, c)
	return c, o, true
}

// TestBlindChemistry compares searches over small rule sets and shelves with the blind enumeration: costs
// and routes, k of them, with and without starts, in every order of ranking.
func TestBlindChemistry(t *testing.T) {
	want := 8
	if os.Getenv("SHELFWARD_SLOW") != "" {
		want = 200
	}
	tried, withRoutes, withFrom, longer := 0, 0, 0, 0
	for seed := uint64(0); tried < want; seed++ {
		c, o, ok := chemicalTask(t, seed)
		if !ok {
			continue
		}
		root := rootOf(c, t, seed)
		b := &blind{c: c, o: o, budget: 6000, opened: map[search.Key][]search.Edge{}}
		costs := map[string]float64{}
		trees := b.all(root, o.MaxSteps, nil)
		if b.budget < 0 {
			continue
		}
		for _, s := range trees {
			if b.legal(s) {
				text := b.text(s)
				if old, twice := costs[text]; !twice || b.cost(s) < old {
					costs[text] = b.cost(s)
				}
			}
		}
		if len(costs) == 0 && tried%8 != 0 { // few without a route
			continue
		}
		tried++
		compareBlind(t, seed, c, root, o, costs)
		if len(costs) > 0 {
			withRoutes++
			if len(o.From) > 0 {
				withFrom++
			}
		}
		if len(costs) > o.Count {
			longer++
		}
	}
	t.Logf("%d cases: %d with routes, %d of them with starts, %d with more routes than wanted", tried, withRoutes, withFrom, longer)
	if withRoutes < want/2 || withFrom < want/10 || longer < want/40 {
		t.Error("the cases are too easy")
	}
}

// rootOf finds the target that chemicalTask entered.
func rootOf(c *chemistry, t testing.TB, seed uint64) search.Key {
	t.Helper()
	fresh := map[search.Key]bool{}
	for k := range c.molecules {
		fresh[k] = true
	}
	for _, m := range append(slices.Clone(c.world.Shelf), c.from...) {
		delete(fresh, c.enter(m))
	}
	for k := range fresh {
		return k
	}
	t.Fatalf("seed %d: no target", seed)
	return search.Key{}
}

func compareBlind(t *testing.T, seed uint64, c *chemistry, root search.Key, o search.Options, costs map[string]float64) {
	t.Helper()
	var order []float64
	for _, cost := range costs {
		order = append(order, cost)
	}
	slices.Sort(order)
	c.lookFromShelf(context.Background())
	if seed%2 == 0 {
		if _, err := c.reach.second(context.Background(), 1); err != nil {
			t.Fatal(err)
		}
	}
	got, err := search.Find(context.Background(), c, root, o)
	if err != nil {
		t.Fatalf("seed %d: %v", seed, err)
	}
	if len(got.Routes) < min(o.Count, len(order)) || got.ProvenRoutes < min(o.Count, len(order)) {
		t.Errorf("seed %d by %s: %d routes, %d proven, of %d, %d wanted", seed, c.by, len(got.Routes), got.ProvenRoutes, len(order), o.Count)
		return
	}
	for i, route := range got.Routes {
		text := treeText(c, route.Tree)
		if cost, legal := costs[text]; !legal || math.Abs(cost-route.Cost) > 1e-9 || math.Abs(order[i]-route.Cost) > 1e-9 {
			t.Errorf("seed %d by %s: route %d costs %v, by itself %v, in its place %v, legal %v: %s", seed, c.by, i, route.Cost, cost, order[i], legal, text)
		}
	}
}
