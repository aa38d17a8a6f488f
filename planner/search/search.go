package search

import (
	"context"
	"errors"
	"fmt"
	"runtime"
	"sync"
	"sync/atomic"
	"time"
)

// Options are the limits and wishes of one search. The zero value of a limit means the default named.
type Options struct {
	Cost        Cost
	Count       int           // routes wanted; 5
	MaxSteps    int           // along the longest run; 8
	From        []Key         // items that every route must consume; at most MaxFrom
	FromAny     []Key         // items of which every route must consume at least one
	Via         []Via         // nodes that every route must make on its way
	MakeRoot    bool          // the target is made even if it could be taken from stock
	MaxExpanded int           // nodes opened at most; no limit
	MaxNodes    int           // nodes held at most, for the memory; 1,000,000
	MaxBytes    int           // of memory held at most, by estimates that depend on the input alone; no limit
	Full        func() bool   // says that memory is short all the same; nil: never
	Time        time.Duration // by the clock; no limit
	Workers     int           // goroutines that expand; the number of processors
	Began       time.Time     // what Time, Elapsed and Stood count from where work went before; now
	Progress    func(Progress)
	// Accept says whether a complete route may be listed; nil accepts all. Routes are drawn until Count
	// are accepted, so what is proven holds among accepted ones.
	Accept func(*Tree) bool
	// Kind sorts routes into kinds of which only the cheapest is listed; nil lists all. What is proven
	// holds among the cheapest of each kind.
	Kind func(*Tree) string
}

// Via says whether a node counts as the one that must be made on the way. A pure function.
type Via func(k Key) bool

// owed returns the number of bits of what a route owes.
func (o *Options) owed() int {
	return len(o.From) + min(len(o.FromAny), 1) + len(o.Via)
}

// Progress is reported between batches.
type Progress struct {
	Expanded, Routes int
	Bytes            int // of memory held, as estimated
	Bound            float64
	Elapsed          time.Duration
}

// Route is one way to make the target, as a tree of nodes.
type Route struct {
	Cost   float64
	Tree   *Tree
	Proven bool
	Stood  time.Duration // after the start, when its last node had been opened
}

// Tree is a node taken from stock (no children) or made by one edge.
type Tree struct {
	Key      Key
	Edge     int // index into the expansion of Key, -1 for a leaf
	Variant  int
	Children []*Tree
	Cost     float64
}

// Depth returns the number of edges along the longest run of t.
func (t *Tree) Depth() int {
	depth := 0
	for _, c := range t.Children {
		depth = max(depth, c.Depth()+1)
	}
	return depth
}

// Result of a search.
type Result struct {
	Routes       []Route // in order of cost; beyond Options.Count where the costs tie
	Expanded     int
	Forward      int // molecules opened forwards, by a Tightener
	Tried        int // ways looked at in all expansions
	LeftOut      int // ways left out because they may not be shown
	Nodes        int
	Exhausted    bool    // nothing is open within the limit of steps
	ProvenRoutes int     // how many of the first routes are proven
	Bound        float64 // no route outside the list costs less than this; infinite when exhausted
	Stopped      Stop
	Elapsed      time.Duration
	Openings     []Opening // without a route: nodes that would complete one, the cheapest first
}

// Stop says what ended a search.
type Stop string

// The ends of a search. Proven and Exhausted are ends by itself.
const (
	Proven    Stop = "proven"
	Exhausted Stop = "exhausted"
	ByCount   Stop = "max-expanded"
	ByMemory  Stop = "memory"
	ByClock   Stop = "time"
	Cancelled Stop = "cancelled"
)

const (
	batchSize = 16
	// maxTies bounds the routes of equal cost drawn beyond the count.
	maxTies = 64
	// drawBudget and finalBudget bound the derivations looked at for one drawing of routes. Ordinary
	// graphs need hundreds; rings of mutual interconversion could need very many.
	drawBudget  = 20000
	finalBudget = 200000
	// kindCost is what looking at the kind of one route counts against the budget: there may be very many
	// of a kind.
	kindCost = 30
)

func (o Options) withDefaults() Options {
	if o.Count <= 0 {
		o.Count = 5
	}
	if o.MaxSteps <= 0 {
		o.MaxSteps = 8
	}
	if o.MaxNodes <= 0 {
		o.MaxNodes = 1_000_000
	}
	if o.Workers <= 0 {
		o.Workers = runtime.GOMAXPROCS(0)
	}
	return o
}

// run is the working state of one search.
type run struct {
	o        Options
	g        *graph
	start    time.Time
	result   Result
	routes   []*tree // drawn last, at most Count and ties
	cut      bool    // the last drawing spent its budget
	bytes    int     // of memory held, as estimated
	sequence int     // number of the batch
}

// Find searches until the Count cheapest routes are proven, nothing is open, or a limit is met. The
// error is the context's only if nothing at all could be done, and a Problem's own otherwise.
func Find(ctx context.Context, p Problem, target Key, options Options) (*Result, error) {
	o := options.withDefaults()
	if len(o.From) > MaxFrom {
		return nil, fmt.Errorf("%d items that must be consumed; at most %d are possible", len(o.From), MaxFrom)
	}
	if o.owed() > MaxOwed {
		return nil, fmt.Errorf("%d items and nodes that must be on every route; at most %d are possible", o.owed(), MaxOwed)
	}
	r := &run{o: o, start: o.Began}
	if r.start.IsZero() {
		r.start = time.Now()
	}
	r.g = newGraph(p, target, &o)
	for {
		r.result.Stopped = r.stop(ctx)
		if r.result.Stopped != "" {
			break
		}
		if changed, err := r.tighten(ctx); err != nil {
			return nil, err
		} else if changed {
			continue
		}
		if err := r.batch(ctx, r.choose()); err != nil {
			return nil, err
		}
		r.g.propagate()
		r.draw(drawBudget)
		if o.Progress != nil {
			o.Progress(Progress{r.result.Expanded, min(len(r.routes), o.Count), r.bytes, r.bound(), time.Since(r.start)})
		}
	}
	if err := r.openRoot(ctx); err != nil {
		return nil, err
	}
	r.finish()
	return &r.result, nil
}

// bound returns the least bound of any route that still has an open node.
func (r *run) bound() float64 {
	_, bound, _ := r.g.values(r.g.root, r.o.MaxSteps, uint8(r.g.sets-1))
	return bound
}

// worst returns the cost that the last route wanted has now, infinite while there are too few.
func (r *run) worst() float64 {
	if len(r.routes) < r.o.Count {
		return inf
	}
	return r.routes[r.o.Count-1].cost
}

// stop looks at the ends of the search, those that depend on the input alone first.
func (r *run) stop(ctx context.Context) Stop {
	bound := r.bound()
	switch {
	case bound == inf:
		return Exhausted
	case r.worst() <= bound && !r.cut:
		return Proven
	case r.o.MaxExpanded > 0 && r.result.Expanded >= r.o.MaxExpanded:
		return ByCount
	case len(r.g.nodes) >= r.o.MaxNodes, r.o.MaxBytes > 0 && r.bytes >= r.o.MaxBytes, r.o.Full != nil && r.o.Full():
		return ByMemory
	case r.late(), errors.Is(ctx.Err(), context.DeadlineExceeded):
		return ByClock
	case ctx.Err() != nil:
		return Cancelled
	}
	return ""
}

func (r *run) late() bool { return r.o.Time > 0 && time.Since(r.start) >= r.o.Time }

// choose picks the nodes to open next. Until a route stands most of the batch follows the estimates, to
// find one soon; then half of it until there are as many as wanted, then a quarter, as long as the
// estimates promise something cheaper than what stands. The rest follows the bounds, which is what proves. The first batches are small.
func (r *run) choose() []int32 {
	size := batchSize
	if r.sequence < 4 {
		size = 1 << r.sequence
	}
	if r.o.MaxExpanded > 0 {
		size = min(size, r.o.MaxExpanded-r.result.Expanded)
	}
	r.sequence++
	r.g.batch++
	_, _, estimate := r.g.values(r.g.root, r.o.MaxSteps, uint8(r.g.sets-1))
	byGuess := 0
	switch {
	case len(r.routes) == 0:
		byGuess = (3*size + 3) / 4
	case len(r.routes) < r.o.Count:
		byGuess = size / 2
	case estimate < r.worst():
		byGuess = size / 4
	}
	picked := r.g.pick(nil, byGuess, true)
	picked = r.g.pick(picked, size-len(picked), false)
	return picked
}

// batch opens one batch of nodes in parallel and enters what was found in the order of the batch.
func (r *run) batch(ctx context.Context, ids []int32) error {
	if r.o.Time > 0 { // a long expansion is cut, too
		var cancel context.CancelFunc
		ctx, cancel = context.WithDeadline(ctx, r.start.Add(r.o.Time))
		defer cancel()
	}
	found := make([]Expansion, len(ids))
	failed := make([]error, len(ids))
	var next atomic.Int32
	work := func() {
		for {
			i := int(next.Add(1)) - 1
			if i >= len(ids) {
				return
			}
			if r.late() {
				failed[i] = context.DeadlineExceeded
			} else if failed[i] = ctx.Err(); failed[i] == nil {
				found[i], failed[i] = r.g.problem.Expand(ctx, r.g.nodes[ids[i]].key)
			}
		}
	}
	var wait sync.WaitGroup
	for w := 1; w < min(r.o.Workers, len(ids)); w++ {
		wait.Go(work)
	}
	work()
	wait.Wait()
	at := int64(time.Since(r.start))
	before := r.result.Expanded
	for i, id := range ids {
		switch err := failed[i]; {
		case err == nil:
			r.g.expand(id, found[i], at)
			r.result.Expanded++
			r.result.Tried += found[i].Tried
			r.result.LeftOut += found[i].LeftOut
			r.bytes += found[i].Bytes + r.g.weight(id)
		case errors.Is(err, context.Canceled), errors.Is(err, context.DeadlineExceeded):
		default:
			return err
		}
	}
	if r.result.Expanded == before && ctx.Err() == nil && !r.late() {
		return fmt.Errorf("search: a batch of %d opened nothing", len(ids))
	}
	return nil
}

// tighten lets the problem raise its bounds by work from the stock, and says whether it did.
func (r *run) tighten(ctx context.Context) (bool, error) {
	p, ok := r.g.problem.(Tightener)
	if !ok {
		return false, nil
	}
	s := Standing{Expanded: r.result.Expanded, Routes: min(len(r.routes), r.o.Count), Gap: r.worst() - r.bound(), Workers: r.o.Workers}
	if r.o.Time > 0 {
		var cancel context.CancelFunc
		ctx, cancel = context.WithDeadline(ctx, r.start.Add(r.o.Time))
		defer cancel()
	}
	did, err := p.Tighten(ctx, s)
	if errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return false, nil // the search ends for the same reason
	}
	r.result.Forward += did.Opened
	if did.Changed && err == nil {
		r.g.refresh()
		r.g.propagate()
	}
	return did.Changed, err
}

// openRoot opens the target where its bound alone said that there is no route: what would open one can
// only be seen from there.
func (r *run) openRoot(ctx context.Context) error {
	root := &r.g.nodes[r.g.root]
	if r.result.Stopped != Exhausted || !root.open || r.g.leaf(root, uint8(r.g.sets-1)) < inf || r.g.leafOnly(root, uint8(r.g.sets-1)) {
		return nil
	}
	r.g.batch++
	root.picked = r.g.batch
	if err := r.batch(ctx, []int32{r.g.root}); err != nil {
		return err
	}
	r.g.propagate()
	return nil
}

// draw lists the routes of the graph as it stands, in order of cost.
func (r *run) draw(budget int) {
	complete, _, _ := r.g.values(r.g.root, r.o.MaxSteps, uint8(r.g.sets-1))
	if complete == inf {
		return
	}
	d := newDrawer(r.g, budget)
	r.routes = r.routes[:0]
	seen, kinds := map[uint64][]*tree{}, map[string]bool{}
	for n := 0; ; n++ {
		t := d.root(n)
		if t == nil || d.budget <= 0 {
			break
		}
		if k := len(r.routes); k >= r.o.Count && (t.cost > r.routes[r.o.Count-1].cost || k >= r.o.Count+maxTies) {
			break
		}
		if !listed(seen[t.hash], t) {
			seen[t.hash] = append(seen[t.hash], t)
			if r.listable(t, kinds) {
				r.routes = append(r.routes, t)
			}
			if r.o.Kind != nil {
				d.budget -= kindCost
			}
		}
	}
	r.cut = d.budget <= 0
}

// listable says whether a route goes on the list; kinds are those listed already.
func (r *run) listable(t *tree, kinds map[string]bool) bool {
	if r.o.Accept == nil && r.o.Kind == nil {
		return true
	}
	whole := r.tree(t)
	if r.o.Accept != nil && !r.o.Accept(whole) {
		return false
	}
	if r.o.Kind == nil {
		return true
	}
	kind := r.o.Kind(whole)
	if kinds[kind] {
		return false
	}
	kinds[kind] = true
	return true
}

// listed says whether a route of the same molecules is in the list.
func listed(list []*tree, t *tree) bool {
	for _, o := range list {
		if o.sameMolecules(t) {
			return true
		}
	}
	return false
}

// finish draws the final list and fills in the result.
func (r *run) finish() {
	r.draw(finalBudget)
	bound := r.bound()
	res := &r.result
	res.Bound, res.Exhausted, res.Nodes = bound, bound == inf && !r.cut, len(r.g.nodes)
	for _, t := range r.routes {
		proven := t.cost <= bound && res.ProvenRoutes == len(res.Routes)
		if proven {
			res.ProvenRoutes++
		}
		res.Routes = append(res.Routes, Route{Cost: t.cost, Tree: r.tree(t), Proven: proven, Stood: time.Duration(r.stood(t))})
	}
	if len(res.Routes) == 0 {
		res.Openings = r.g.openings()
	}
	res.Elapsed = time.Since(r.start)
}

// stood returns when the last node of t was opened.
func (r *run) stood(t *tree) int64 {
	if t.edge == nil {
		return 0
	}
	last := r.g.nodes[t.id].openedAt
	for _, c := range t.children {
		last = max(last, r.stood(c))
	}
	return last
}

func (r *run) tree(t *tree) *Tree {
	out := &Tree{Key: r.g.nodes[t.id].key, Edge: -1, Variant: t.variant, Cost: t.cost}
	if t.edge == nil {
		return out
	}
	out.Edge = int(t.edge.number)
	for _, c := range t.children {
		out.Children = append(out.Children, r.tree(c))
	}
	return out
}
