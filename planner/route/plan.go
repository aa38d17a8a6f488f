package route

import (
	"context"
	"fmt"
	"math"
	"time"

	"shelfward/molecule"
	"shelfward/planner/search"
)

// Options are the wishes and limits of one planning.
type Options struct {
	From          []*molecule.Molecule // every route consumes each; at most search.MaxFrom
	FromAny       []*molecule.Molecule // every route consumes one of them
	Via           []*molecule.Molecule // every route makes each on its way
	Bans          []Ban                // steps that may not be used, as the user wrote them
	Count         int                  // routes listed; 5
	MaxSteps      int                  // along the longest run; 8
	RankBy        RankBy
	Avoid         []string
	Bench         *Bench
	OnlyShelf     bool                 // reagents and solvents too must stand on the shelf
	MaxHazard     string               // nothing graver is charged: an H code or a class 0-4; "": anything
	AtScale       bool                 // what practice avoids at scale costs more
	Not           []Banned             // steps that may not be used
	NotThrough    []*molecule.Molecule // molecules that no step may consume
	InHand        []InHand             // what is there besides the shelf, and costs nothing
	Different     bool                 // one route for each key bond
	OneEnantiomer bool
	MakeAnyway    bool
	MakeMol       float64 // mol of target wanted, 0: not said; figures are then for DefaultMakeG
	Time          time.Duration
	MaxExpanded   int
	Memory        int         // bytes that the program may take for this planning; 0: no limit
	Full          func() bool // says that memory is short all the same; nil: never
	Openings      int         // purchases proposed where there is no route; 5
	Workers       int
	Progress      func(search.Progress)
}

// DefaultMakeG is the mass of target for which prices and purchases are worked out when no amount was
// asked for.
const DefaultMakeG = 10

// moreForStock is how many routes beyond the count are drawn when an amount is asked for: those whose
// stock does not suffice go back.
const moreForStock = 5

// Target is the molecule to make.
type Target struct {
	SMILES    string  `json:"smiles"`
	Name      string  `json:"name"`
	Formula   string  `json:"formula"`
	MolarMass float64 `json:"molar_mass"`
	OnShelf   bool    `json:"on_shelf"`
}

// SearchFigures say what the search did and what is proven.
type SearchFigures struct {
	Expanded        int      `json:"expanded"`
	Forward         int      `json:"expanded_forwards"` // molecules run forwards from the shelf
	TransformsTried int      `json:"transforms_tried"`
	Seconds         float64  `json:"seconds"`
	FirstAfter      *float64 `json:"first_after"` // null without a route
	Exhausted       bool     `json:"exhausted"`
	ProvenBest      bool     `json:"proven_best"`
	ProvenRoutes    int      `json:"proven_routes"`
	Bound           *float64 `json:"bound"` // null when nothing was left open
	LeftOut         int      `json:"left_out"`
	Stopped         string   `json:"stopped"` // proven, exhausted, max-expanded, memory, time, cancelled
	Rules           int      `json:"rules"`
	ShelfItems      int      `json:"shelf_items"`
}

// Plan is the answer: routes in order of rank and how far they are proven.
type Plan struct {
	Version   int      `json:"version"`
	Target    Target   `json:"target"`
	From      []string `json:"from"`
	FromAny   []string `json:"from_any"`  // one of them suffices
	Via       []string `json:"via"`       // made on every route
	Different bool     `json:"different"` // one route for each key bond
	RankedBy  RankBy   `json:"ranked_by"`
	Minimised string   `json:"minimised"` // what weight is, in words
	Kept
	MaxSteps  int           `json:"max_steps"`
	MakeG     float64       `json:"make_g"` // g of target that prices, purchases and shortages are for
	MakeAsked bool          `json:"make_asked"`
	Routes    []Route       `json:"routes"`
	Search    SearchFigures `json:"search"`
	WouldOpen []Opening     `json:"would_open"`
	Explained []Explained   `json:"explained"` // molecules asked about
	Doubts    []string      `json:"doubts"`

	Molecule *molecule.Molecule `json:"-"`

	chemistry *chemistry // of a plan just made
}

// Make plans the target. Finding nothing is a Plan without routes, not an error; errors are words to
// avoid that mean nothing, too many items of From, or trouble in the rules.
func Make(ctx context.Context, w *World, target *molecule.Molecule, o Options) (*Plan, error) {
	by, err := ParseRankBy(string(o.RankBy))
	if err != nil {
		return nil, err
	}
	f, err := newFilter(w, &o)
	if err != nil {
		return nil, err
	}
	if o.Count <= 0 {
		o.Count = 5
	}
	if o.MaxSteps <= 0 {
		o.MaxSteps = 8
	}
	var scale *Scale
	if o.AtScale {
		scale = w.Scale
	}
	began := time.Now()
	want := wants{o.From, o.FromAny, o.Via}
	want.settle()
	if err := want.check(target); err != nil {
		return nil, err
	}
	c := newChemistry(w, by, f, want.starts(), scale)
	c.wants = want
	c.oneEnantiomer = o.OneEnantiomer
	root := c.enter(target)
	p := c.newPlan(target, root, &o)
	p.chemistry = c
	if p.Target.OnShelf && !o.MakeAnyway {
		p.Routes = []Route{c.takenFromShelf(root)}
		p.Search.ProvenBest, p.Search.ProvenRoutes, p.Search.Exhausted, p.Search.Stopped = true, 1, true, string(search.Exhausted)
		zero := 0.0
		p.Search.FirstAfter = &zero
		return p, nil
	}
	wanted := o.Count
	if o.MakeMol > 0 { // some more, because stock comes before weight
		wanted += moreForStock
	}
	var kind func(*search.Tree) string
	if o.Different {
		kind = c.keyPlace
	}
	options := search.Options{Kind: kind, Cost: by.cost(), Count: wanted, MaxSteps: o.MaxSteps, MakeRoot: o.MakeAnyway, MaxExpanded: o.MaxExpanded,
		MaxBytes: int(partOfMemory * float64(o.Memory)), Full: o.Full, Time: o.Time, Workers: o.Workers, Began: began, Progress: o.Progress, Accept: c.oneWayEach}
	want.enterInto(&options, c)
	c.lookFromShelf(ctx)
	found, err := c.findWished(ctx, root, options, p)
	if err != nil {
		return nil, err
	}
	for _, r := range found.Routes {
		built, err := c.build(r, p)
		if err != nil {
			return nil, err
		}
		p.Routes = append(p.Routes, *built)
	}
	p.WouldOpen = c.openings(found.Openings, o.Openings)
	p.fillSearch(found)
	p.Search.Rules, p.Search.ShelfItems = len(w.Transforms), w.ShelfItems
	p.order(o.Count)
	c.waysOut(p, root)
	p.finish(found.Exhausted && len(p.Routes) == len(found.Routes))
	return p, nil
}

// firstSteps and firstLook are the numbers of molecules opened before the starts are looked ahead from, and
// before that goes deeper because no route stands.
const (
	firstSteps = 3
	firstLook  = 64
)

// findWished searches with a look at what the wishes keep out before it, where there are any.
func (c *chemistry) findWished(ctx context.Context, root search.Key, o search.Options, p *Plan) (*search.Result, error) {
	if !c.filter.restrains() {
		return search.Find(ctx, c, root, o)
	}
	var err error
	if p.LeftOutOf, err = c.countLeftOut(ctx, root, o); err != nil {
		return nil, err
	}
	found, err := search.Find(ctx, c, root, o)
	if err != nil {
		return nil, err
	}
	for i := range c.filter.avoid { // a word that met nothing says so
		c.tally.entry(c.filter.avoid[i].refuses(""))
	}
	p.LeftOut = c.tally.sorted()
	return found, nil
}

func (c *chemistry) newPlan(target *molecule.Molecule, root search.Key, o *Options) *Plan {
	formula := target.Formula()
	p := &Plan{Version: planVersion, RankedBy: c.by, Minimised: c.by.Says(), Kept: Kept{Avoided: c.filter.Avoided(), LeftOut: []LeftOut{}}, MaxSteps: o.MaxSteps, Different: o.Different,
		From: []string{}, FromAny: []string{}, Via: []string{}, Routes: []Route{}, WouldOpen: []Opening{}, Explained: []Explained{}, Doubts: []string{}, Molecule: target,
		Target: Target{SMILES: c.world.Write(target), Name: c.world.Name(target), Formula: formula.String(), MolarMass: formula.MolarMass(), OnShelf: c.material(root).OnShelf}}
	for _, m := range o.From {
		p.From = append(p.From, c.world.Write(m))
	}
	for _, m := range o.FromAny {
		p.FromAny = append(p.FromAny, c.world.Write(m))
	}
	for _, m := range o.Via {
		p.Via = append(p.Via, c.world.Write(m))
	}
	if o.AtScale {
		p.Minimised += c.by.atScale()
	}
	p.MakeG, p.MakeAsked = DefaultMakeG, o.MakeMol > 0
	if p.MakeAsked {
		p.MakeG = o.MakeMol * p.Target.MolarMass
	}
	return p
}

// takenFromShelf is the route without steps.
func (c *chemistry) takenFromShelf(root search.Key) Route {
	m := c.material(root)
	r := emptyRoute()
	r.Rank, r.Proven = 1, true
	one := 1.0
	r.AtomEconomy, r.OverallYield, r.WorstBranchYield = &one, Range{1, 1, 1}, Range{1, 1, 1}
	r.StartingMaterials = []StartingMaterial{{SMILES: m.SMILES, Name: m.Name, OnShelf: true, Mol: 1, Molecule: c.molecule(root), Material: *m}}
	r.Code = codeOf([]string{"taken from the shelf: " + m.SMILES})
	return r
}

func emptyRoute() Route {
	return Route{Steps: []Step{}, Hazard: HazardFigures{Gravest: []string{}}, StartingMaterials: []StartingMaterial{}, ToBuy: []Purchase{},
		Alternatives: []Alternative{}, Protections: []Protection{}, WaysOut: []WayOut{}, Short: []string{}, StockUnknown: []string{}, Doubts: []string{}}
}

func (p *Plan) fillSearch(r *search.Result) {
	s := &p.Search
	s.Forward = r.Forward
	s.Expanded, s.TransformsTried, s.Seconds, s.LeftOut = r.Expanded, r.Tried, r.Elapsed.Seconds(), r.LeftOut
	s.Exhausted, s.Stopped = r.Exhausted, string(r.Stopped)
	if !math.IsInf(r.Bound, 1) {
		bound := r.Bound
		s.Bound = &bound
	}
}

// finish numbers the routes and says what is proven of the list as it stands. everything says that the
// list holds all routes there are.
func (p *Plan) finish(everything bool) {
	s := &p.Search
	for i := range p.Routes {
		r := &p.Routes[i]
		r.Rank = i + 1
		if p.MakeAsked && r.enough() > 0 && !everything { // a route whose stock suffices may come yet
			r.Proven = false
		}
		if r.Proven && s.ProvenRoutes == i {
			s.ProvenRoutes++
		}
	}
	s.ProvenBest = s.ProvenRoutes > 0
	if len(p.Routes) > 0 {
		first := p.Routes[0].stood.Seconds()
		s.FirstAfter = &first
	}
	if s.LeftOut > 0 {
		p.Doubts = append(p.Doubts, fmt.Sprintf("%d %s left out because they pass through a controlled or excluded material.", s.LeftOut, plural(s.LeftOut, "step was", "steps were")))
	}
	p.searchDoubts()
	markVariants(p.Routes)
}

// searchDoubts says in words how far the search got when it did not end by itself.
func (p *Plan) searchDoubts() {
	switch s := &p.Search; search.Stop(s.Stopped) {
	case search.Exhausted, search.Proven:
		return
	default:
		why := map[search.Stop]string{search.ByClock: "The time was up", search.ByCount: "The limit of molecules opened was reached",
			search.ByMemory: "The memory limit was reached", search.Cancelled: "The search was broken off"}[search.Stop(s.Stopped)]
		if len(p.Routes) == 0 {
			p.Doubts = append(p.Doubts, why+" before a route was found; more may exist.")
		} else if !s.ProvenBest {
			p.Doubts = append(p.Doubts, why+": a better ranked route may exist.")
		} else if s.ProvenRoutes < len(p.Routes) {
			p.Doubts = append(p.Doubts, fmt.Sprintf("%s: only the first %d of the list are proven.", why, s.ProvenRoutes))
		}
	}
}

func plural(n int, one, many string) string {
	if n == 1 {
		return one
	}
	return many
}
