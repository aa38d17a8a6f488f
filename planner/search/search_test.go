package search

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
	"time"
)

// dump writes everything of a result that does not come from the clock.
func dump(r *Result) string {
	var b strings.Builder
	for _, route := range r.Routes {
		fmt.Fprintf(&b, "%v %s %v\n", route.Cost, text(route.Tree), route.Proven)
	}
	fmt.Fprintln(&b, r.Expanded, r.Tried, r.LeftOut, r.Nodes, r.Exhausted, r.ProvenRoutes, r.Bound, r.Stopped)
	return b.String()
}

func find(t *testing.T, p Problem, o Options) *Result {
	t.Helper()
	r, err := Find(context.Background(), p, key(0), o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// wide is a larger random graph than the blind enumeration could take.
func wide(seed uint64) *made {
	r := rand.New(rand.NewPCG(seed, 3))
	m := random(r, 400)
	m.stock = map[int]float64{}
	for i := 1; i < 400; i++ {
		if r.IntN(20) == 0 {
			m.stock[i] = float64(r.IntN(4)) / 4
		}
	}
	return m
}

func TestSameBytesForAnyWorkers(t *testing.T) {
	routes := 0
	for seed := uint64(0); seed < 30; seed++ {
		m := wide(seed)
		o := Options{Cost: Cost(seed % 3), Count: 5, MaxSteps: 6, MaxExpanded: 150}
		if o.Cost == PerMole {
			m.floor = 0
		}
		if seed%2 == 0 {
			o.From = []Key{key(7)}
		}
		var first string
		for _, workers := range []int{1, 2, 8} {
			o.Workers = workers
			r := find(t, m, o)
			routes += len(r.Routes)
			if got := dump(r); first == "" {
				first = got
			} else if got != first {
				t.Fatalf("seed %d, %d workers:\n%sone worker:\n%s", seed, workers, got, first)
			}
		}
	}
	if routes == 0 {
		t.Error("no case had a route")
	}
}

// TestLimitsStayHonest stops searches early: what is called proven must stand first in the blind
// list, and no route outside the list may undercut the bound reported.
// heavy says that every expansion takes some memory.
type heavy struct{ *made }

func (h heavy) Expand(ctx context.Context, k Key) (Expansion, error) {
	x, err := h.made.Expand(ctx, k)
	x.Bytes = 10_000 + number(k)
	return x, err
}

// TestMemoryLimit: the estimate ends the search at the same node for any number of workers, within one
// batch of the limit; a shortage that the estimate did not see ends it, too.
func TestMemoryLimit(t *testing.T) {
	for seed := range uint64(10) {
		var first string
		for _, workers := range []int{1, 2, 8} {
			most := 0
			o := Options{Count: 500, MaxSteps: 6, MaxBytes: 2_000_000, Workers: workers, Progress: func(p Progress) { most = p.Bytes }}
			r := find(t, heavy{wide(seed)}, o)
			if r.Stopped == ByMemory && (most < o.MaxBytes || most > o.MaxBytes+600_000) {
				t.Errorf("seed %d: ended at %d bytes of %d", seed, most, o.MaxBytes)
			}
			if d := dump(r); first == "" {
				first = d
			} else if d != first {
				t.Errorf("seed %d, %d workers:\n%s\nwant\n%s", seed, workers, d, first)
			}
		}
	}
	asked := 0
	r := find(t, wide(1), Options{Count: 500, MaxSteps: 6, Full: func() bool { asked++; return asked > 3 }})
	if r.Stopped != ByMemory {
		t.Errorf("stopped by %s, want memory", r.Stopped)
	}
}

func TestLimitsStayHonest(t *testing.T) {
	early, proven := 0, 0
	for seed := uint64(0); seed < 1500; seed++ {
		m, o, from := task(seed)
		j := &judge{m: m, o: o, from: from, budget: 20000}
		costs, order, ok := j.routes()
		if !ok {
			continue
		}
		o.MaxExpanded = 1 + int(seed%4)
		r := find(t, m, o)
		if r.Expanded > o.MaxExpanded {
			t.Fatalf("seed %d: %d nodes opened, limit %d", seed, r.Expanded, o.MaxExpanded)
		}
		if r.Stopped == ByCount {
			early++
		}
		for i, route := range r.Routes[:r.ProvenRoutes] {
			proven++
			if math.Abs(route.Cost-order[i]) > 1e-9 {
				t.Fatalf("seed %d: route %d called proven costs %v, the blind list has %v", seed, i, route.Cost, order[i])
			}
		}
		listed, last := map[string]bool{}, math.Inf(1)
		for _, route := range r.Routes {
			listed[text(route.Tree)] = true
			last = route.Cost
		}
		for s, c := range costs {
			if !listed[s] && c < min(r.Bound, last)-1e-9 {
				t.Fatalf("seed %d: %s costs %v and is not listed; bound %v, last listed %v", seed, s, c, r.Bound, last)
			}
		}
	}
	if early < 100 || proven < 100 {
		t.Errorf("%d stopped early, %d proven: too easy", early, proven)
	}
}

// TestMoreStockNeverCostsMore and its twin: cheaper leaves are added, steps are made dearer.
func TestMonotone(t *testing.T) {
	compared := 0
	for seed := uint64(0); seed < 800; seed++ {
		m, o, _ := task(seed)
		o.Count, o.From, o.FromAny, o.Via = 1, nil, nil, nil // with items owed, stock decides what may be made at all
		o.MakeRoot = true
		before := find(t, m, o)
		r := rand.New(rand.NewPCG(seed, 2))
		id := 1 + r.IntN(len(m.edges)-1)
		if _, stocked := m.stock[id]; !stocked {
			m.stock[id] = 0
			after := find(t, m, o)
			if len(before.Routes) > 0 && (len(after.Routes) == 0 || after.Routes[0].Cost > before.Routes[0].Cost) {
				t.Fatalf("seed %d: with %d in stock %s, before %s", seed, id, dump(after), dump(before))
			}
			delete(m.stock, id)
		}
		for _, e := range m.edges[r.IntN(len(m.edges))] {
			for v := range e.Variants {
				e.Variants[v].Weight += 0.5
			}
		}
		after := find(t, m, o)
		if len(before.Routes) != len(after.Routes) || len(after.Routes) > 0 && after.Routes[0].Cost < before.Routes[0].Cost {
			t.Fatalf("seed %d: with dearer steps %s, before %s", seed, dump(after), dump(before))
		}
		compared += len(after.Routes)
	}
	if compared < 100 {
		t.Errorf("%d compared", compared)
	}
}

// graphOf reads 'node < child child [weight]' lines; atoms 0 to 2 of the node come from
// those of the first child, 3 to 5 from those of the second, and so on.
func graphOf(lines string, stock ...int) *made {
	m := &made{edges: make([][]Edge, 20), stock: map[int]float64{}}
	for _, s := range stock {
		m.stock[s] = 0
	}
	for _, line := range strings.Split(lines, ";") {
		made, from, _ := strings.Cut(line, "<")
		id, weight := 0, 1.0
		fmt.Sscan(made, &id)
		e := Edge{}
		for _, f := range strings.Fields(from) {
			if w, ok := strings.CutPrefix(f, "w"); ok {
				fmt.Sscan(w, &weight)
				continue
			}
			c := 0
			fmt.Sscan(f, &c)
			for a := range int32(3) {
				e.Origins = append(e.Origins, Origin{int32(len(e.Children)), a})
			}
			e.Children = append(e.Children, Child{key(c)})
		}
		e.Variants = []Variant{{Weight: weight, Yield: 1}}
		m.edges[id] = append(m.edges[id], e)
	}
	return m
}

func TestNamedCases(t *testing.T) {
	for _, c := range []struct {
		name, graph string
		stock       []int
		from        []int
		options     Options
		want        string // routes in order, separated by ' | '
	}{
		{name: "ester and acid make each other", graph: "0 < 1; 1 < 2; 2 < 1; 2 < 3", stock: []int{3}, want: "0(1(2(3)))"},
		{name: "no loop through the target", graph: "0 < 1; 1 < 0; 1 < 2", stock: []int{2}, want: "0(1(2))"},
		{name: "item only in the second branch", graph: "0 < 1 2; 2 < 3; 2 < 4 w2", stock: []int{1, 3}, from: []int{4}, want: "0(1 2(4))"},
		{name: "made from stock only when owed", graph: "0 < 1 2; 2 < 4", stock: []int{1, 2}, from: []int{4}, want: "0(1 2(4))"},
		{name: "stock is not made without need", graph: "0 < 1 2; 2 < 4", stock: []int{1, 2, 4}, want: "0(1 2)"},
		{name: "item needed twice", graph: "0 < 1 2; 1 < 4; 2 < 4", from: []int{4}, want: "0(1(4) 2(4))"},
		{name: "item is the target", graph: "0 < 1", stock: []int{1}, from: []int{0}, want: "0"},
		{name: "item is never made", graph: "0 < 4; 4 < 5", from: []int{4, 5}, want: ""},
		{name: "two items in one branch", graph: "0 < 1 2; 2 < 4 ; 1 < 5", stock: []int{2}, from: []int{4, 5}, want: "0(1(5) 2(4))"},
		{name: "empty shelf", graph: "0 < 1; 1 < 2", want: ""},
		{name: "target in stock", graph: "0 < 1", stock: []int{0, 1}, want: "0"},
		{name: "target in stock, made anyway", graph: "0 < 1", stock: []int{0, 1}, options: Options{MakeRoot: true}, want: "0(1)"},
		{name: "cheapest is too long", graph: "0 < 1 w.1; 1 < 2 w.1; 2 < 3 w.1; 0 < 4 w9", stock: []int{3, 4}, options: Options{MaxSteps: 2}, want: "0(4)"},
		{name: "long run within the limit", graph: "0 < 1 w.1; 1 < 2 w.1; 2 < 3 w.1; 0 < 4 w9", stock: []int{3, 4}, options: Options{MaxSteps: 3}, want: "0(1(2(3))) | 0(4)"},
	} {
		t.Run(c.name, func(t *testing.T) {
			m := graphOf(c.graph, c.stock...)
			for _, f := range c.from {
				c.options.From = append(c.options.From, key(f))
			}
			r := find(t, m, c.options)
			var got []string
			for _, route := range r.Routes {
				got = append(got, text(route.Tree))
			}
			if g := strings.Join(got, " | "); g != c.want {
				t.Errorf("got %q, want %q", g, c.want)
			}
			if !r.Exhausted || r.ProvenRoutes != len(r.Routes) {
				t.Errorf("exhausted %v, %d of %d proven", r.Exhausted, r.ProvenRoutes, len(r.Routes))
			}
		})
	}
}

// TestLostAtoms: the item is consumed, but a later step drops its atoms.
func TestLostAtoms(t *testing.T) {
	m := graphOf("0 < 1; 1 < 2 3", 2)
	m.edges[0][0].Origins = []Origin{{0, 0}} // atom 0 of node 1 comes from node 2
	o := Options{From: []Key{key(3)}}
	if r := find(t, m, o); len(r.Routes) != 0 {
		t.Errorf("no atom of 3 reaches 0: %s", dump(r))
	}
	m.edges[0][0].Origins[0].Atom = 4
	if r := find(t, m, o); len(r.Routes) != 1 {
		t.Errorf("atom 4 of 1 comes from 3: %s", dump(r))
	}
}

// TestOpenings puts what is said to open a route in stock: a route must then exist, unless a molecule
// repeats on it (bounds do not see that).
func TestOpenings(t *testing.T) {
	opened, looped := 0, 0
	for seed := uint64(0); seed < 1500; seed++ {
		m, o, _ := task(seed)
		o.From, o.FromAny, o.Via = nil, nil, nil
		for _, x := range find(t, m, o).Openings {
			id := number(x.Key)
			m.stock[id] = 0
			if r := find(t, m, o); len(r.Routes) > 0 {
				opened++
			} else {
				looped++
			}
			delete(m.stock, id)
		}
	}
	if opened < 200 || looped > opened/20 {
		t.Errorf("%d opened a route, %d did not", opened, looped)
	}
	m := graphOf("0 < 1 2; 2 < 3 4; 2 < 5", 1, 3)
	r := find(t, m, Options{})
	var got []int
	for _, x := range r.Openings {
		got = append(got, number(x.Key))
	}
	if fmt.Sprint(got) != "[2 4 5]" {
		t.Errorf("openings %v, want 2, 4 and 5", got)
	}
}

func TestErrorsAndEnds(t *testing.T) {
	m := wide(1)
	if _, err := Find(context.Background(), m, key(0), Options{From: make([]Key, 5)}); err == nil {
		t.Error("five items: no error")
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	r, err := Find(ctx, m, key(0), Options{})
	if err != nil || r.Stopped != Cancelled || len(r.Routes) != 0 {
		t.Errorf("cancelled: %v %v", r, err)
	}
	r, err = Find(context.Background(), slow{m}, key(0), Options{Time: 20 * time.Millisecond, Count: 1000})
	if err != nil || r.Stopped != ByClock || r.Elapsed > time.Second {
		t.Errorf("clock: %v %v", r, err)
	}
	r, err = Find(context.Background(), m, key(0), Options{MaxNodes: 30, Count: 1000})
	if err != nil || r.Stopped != ByMemory || r.Nodes > 300 {
		t.Errorf("memory: %v %v", r, err)
	}
}

type slow struct{ *made }

func (s slow) Expand(ctx context.Context, k Key) (Expansion, error) {
	time.Sleep(2 * time.Millisecond)
	return s.made.Expand(ctx, k)
}

// BenchmarkFind opens a graph of the size that chemistry gives: 400 nodes, one or two children,
// one item owed, eight steps.
func BenchmarkFind(b *testing.B) {
	m := wide(2)
	o := Options{Count: 5, MaxSteps: 8, From: []Key{key(7)}, Workers: 1}
	for b.Loop() {
		r, err := Find(context.Background(), m, key(0), o)
		if err != nil {
			b.Fatal(err)
		}
		b.ReportMetric(float64(r.Expanded), "expanded")
	}
}
