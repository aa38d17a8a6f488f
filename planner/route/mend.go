package route

import (
	"context"
	"fmt"
	"math"
	"slices"

	"shelfward/molecule"
	"shelfward/planner/search"
)

// InHand is a substance that is there besides the shelf: an intermediate made already.
type InHand struct {
	Molecule *molecule.Molecule
	Mol      float64
}

// Banned is a step that may not be used: these materials to this product, by whatever transform.
type Banned struct {
	Product   *molecule.Molecule
	Reactants []*molecule.Molecule
}

// Mend is the answer to a step that failed: what can be done, in the order in which it costs least of
// what is there already.
type Mend struct {
	Target  Target   `json:"target"`
	Code    string   `json:"code"`
	Step    int      `json:"step"`
	Failed  string   `json:"failed"` // the step as one line
	MakeG   float64  `json:"make_g"` // g of target that amounts, prices and days are for
	InHand  []Held   `json:"in_hand"`
	Planned Course   `json:"planned"` // the route as it was meant
	Spent   Course   `json:"spent"`   // of it, up to and with the step that failed
	Ways    []Way    `json:"ways"`
	None    []string `json:"none"` // kinds of which none was found, with the reason
	Doubts  []string `json:"doubts"`
}

// Held is one substance in hand.
type Held struct {
	SMILES  string  `json:"smiles"`
	Name    string  `json:"name"`
	G       float64 `json:"g"`
	Mol     float64 `json:"mol"`
	Step    int     `json:"step"`    // that made it, 0: not of this route
	Assumed bool    `json:"assumed"` // nobody said how much is left: the planned amount
}

// Course is what a row of steps takes.
type Course struct {
	Steps    int     `json:"steps"`
	Yield    Range   `json:"yield"` // along the longest run
	Days     float64 `json:"days"`
	Price    float64 `json:"price"`
	Currency string  `json:"currency"`
	Unpriced int     `json:"unpriced"` // materials without a price
}

// The kinds of way, in the order in which they are tried.
const (
	OtherConditions = "conditions" // for the same step
	OtherWay        = "product"    // to the same product
	OtherOnward     = "onward"     // from what is in hand
	BackToShelf     = "shelf"
)

// Way is one thing that can be done.
type Way struct {
	Kind   string   `json:"kind"`   // conditions, product, onward, shelf
	Steps  []Step   `json:"steps"`  // in place of the failed one; for onward and shelf up to the target
	Then   []int    `json:"then"`   // steps of the old route that follow
	Uses   []string `json:"uses"`   // SMILES of what is in hand and used
	Still  Course   `json:"still"`  // what is still to be done, the steps under Then counted
	Lost   Lost     `json:"lost"`   // against the route as it was meant
	Enough float64  `json:"enough"` // g of target that what is in hand gives at usual yields; 0: nothing in hand is used
	Doubts []string `json:"doubts"`
}

// Lost is what a way costs against the route as it was meant.
type Lost struct {
	Material []string `json:"material"`   // in hand and not used, and what went into the failed flask
	Yield    Loss     `json:"yield"`      // usual yields as fractions
	From     string   `json:"yield_from"` // hand: from the failed step on; shelf: over the whole route
	Days     float64  `json:"days"`       // more than planned
	Price    float64  `json:"price"`      // more than planned
	Currency string   `json:"currency"`
	Unpriced int      `json:"unpriced"` // materials of the rest without a price
}

// Loss is a figure as it was planned and as it is now.
type Loss struct {
	Planned float64 `json:"planned"`
	Now     float64 `json:"now"`
}

// waysEach is how many ways of each kind are listed.
const waysEach = 3

// mender works out one Mend.
type mender struct {
	w      *World
	o      Options
	plan   *Plan
	route  *Route
	at     int // index of the failed step
	have   []InHand
	mol    float64 // of target
	result *Mend
}

// Mend says what can be done when a step of a route fails. have is what is in hand; nil: the planned
// amount of what earlier steps made for the failed one. The steps of r must hold their judged steps, as
// those of a plan just made or restored do.
func (p *Plan) Mend(ctx context.Context, w *World, r *Route, step int, have []InHand, o Options) (*Mend, error) {
	if len(r.Steps) == 0 {
		return nil, fmt.Errorf("route %s has no steps: nothing can fail", r.Code)
	}
	if step < 1 || step > len(r.Steps) {
		return nil, fmt.Errorf("step %d: route %s has steps 1 to %d", step, r.Code, len(r.Steps))
	}
	m := &mender{w: w, o: o, plan: p, route: r, at: step - 1, have: have, mol: p.MakeG / p.Target.MolarMass}
	if o.MakeMol > 0 {
		m.mol = o.MakeMol
	}
	m.begin()
	m.o.Time = o.Time / 3 // three searches
	for _, try := range []func(context.Context) error{m.conditions, m.product, m.onward, m.shelf} {
		if err := try(ctx); err != nil {
			return nil, err
		}
	}
	return m.result, nil
}

func (m *mender) begin() {
	p, r, s := m.plan, m.route, &m.route.Steps[m.at]
	m.result = &Mend{Target: p.Target, Code: r.Code, Step: s.Number, Failed: s.Line(), MakeG: m.mol * p.Target.MolarMass, InHand: []Held{}, Ways: []Way{}, None: []string{}, Doubts: []string{}}
	if m.have == nil {
		for i, n := range s.MadeBy {
			if n > 0 {
				full := s.MolTarget * m.mol / clampYield(s.Yield.Usual)
				m.have = append(m.have, InHand{s.Consumed[i], full * s.Equivalents[i]})
				m.held(m.have[len(m.have)-1], n, true)
			}
		}
	} else {
		m.have = slices.DeleteFunc(slices.Clone(m.have), func(h InHand) bool { return h.Mol <= 0 })
		for _, h := range m.have {
			m.held(h, m.madeBy(h.Molecule), false)
		}
	}
	m.result.Planned = m.course(r.Steps)
	m.result.Planned.Yield = r.OverallYield
	m.result.Spent = m.course(r.Steps[:m.at+1])
	m.result.Spent.Yield = m.along(0, m.at)
}

func (m *mender) held(h InHand, step int, assumed bool) {
	m.result.InHand = append(m.result.InHand, Held{SMILES: m.w.Write(h.Molecule), Name: m.w.Name(h.Molecule), Mol: tidy(h.Mol),
		G: tidy(h.Mol * h.Molecule.Formula().MolarMass()), Step: step, Assumed: assumed})
}

// madeBy returns the number of the step whose product x is, 0 if none.
func (m *mender) madeBy(x *molecule.Molecule) int {
	for i := range m.route.Steps {
		if ok, _ := meets(x, m.route.Steps[i].Molecule); ok {
			return i + 1
		}
	}
	return 0
}

// along multiplies the yields of the steps first to last that lie on the way to step last.
func (m *mender) along(first, last int) Range {
	y := m.route.Steps[last].Yield
	worst := Range{1, 1, 1}
	for _, n := range m.route.Steps[last].MadeBy {
		if n > 0 && n-1 >= first {
			if below := m.along(first, n-1); below.Usual < worst.Usual {
				worst = below
			}
		}
	}
	return y.times(worst)
}

// after is the yield from the product of the failed step to the target.
func (m *mender) after() Range {
	y, at := Range{1, 1, 1}, m.at+1
	for i := m.at + 1; i < len(m.route.Steps); i++ {
		if slices.Contains(m.route.Steps[i].MadeBy, at) {
			y, at = y.times(m.route.Steps[i].Yield), i+1
		}
	}
	return y
}

// course adds up days and prices of steps of the old route.
func (m *mender) course(steps []Step) Course {
	c := Course{Steps: len(steps), Yield: Range{1, 1, 1}}
	for i := range steps {
		s := &steps[i]
		c.Days += daysOf(s)
		c.add(m.flask(s, s.MolTarget*m.mol))
	}
	return c
}

func (c *Course) add(x Course) {
	c.Price, c.Unpriced = math.Round((c.Price+x.Price)*100)/100, c.Unpriced+x.Unpriced
	if c.Currency == "" {
		c.Currency = x.Currency
	}
}

// flask prices what is charged to one step for an amount of its product; what another step made costs
// nothing here.
func (m *mender) flask(s *Step, molProduct float64) (c Course) {
	full := molProduct / clampYield(s.Yield.Usual)
	count := func(mat *Material, mol float64) {
		switch price, known := mat.Price(); {
		case isWater(mat):
		case !known:
			c.Unpriced++
		default:
			c.Price += price * mol
			if c.Currency == "" {
				c.Currency = mat.Currency
			}
		}
	}
	for i, x := range s.Consumed {
		if s.MadeBy[i] == 0 {
			mat := m.w.Materials.Molecule(x)
			count(&mat, full*s.Equivalents[i])
		}
	}
	for _, x := range m.w.charges(s.Judged, s.Set) {
		count(&x.material, full*x.mol)
	}
	return c
}

// conditions lists the other condition sets for the failed step.
func (m *mender) conditions(ctx context.Context) error {
	f, err := newFilter(m.w, &m.o)
	if err != nil {
		return err
	}
	old := &m.route.Steps[m.at]
	c := newChemistry(m.w, m.plan.RankedBy, f, nil, nil)
	key := c.enter(old.Molecule)
	if _, err := c.Expand(ctx, key); err != nil {
		return err
	}
	number := map[search.Key]int{}
	for i, x := range old.Consumed {
		number[c.enter(x)] = old.MadeBy[i]
	}
	for _, edge := range c.options[key] {
		if !slices.EqualFunc(childKeys(edge[0].children), sortedKeys(c, old.Consumed), func(a, b search.Key) bool { return a == b }) {
			continue
		}
		for i := range edge {
			o := &edge[i]
			if o.step.Transform.ID == old.Transform && o.conditions.ID == old.Conditions {
				continue
			}
			m.addConditions(c.step(making{key: key, option: o, children: childKeys(o.children)}, number))
		}
	}
	slices.SortStableFunc(m.result.Ways, func(a, b Way) int {
		if d := b.Still.Yield.Usual - a.Still.Yield.Usual; d > sameYield {
			return 1
		} else if d < -sameYield {
			return -1
		}
		return 0
	})
	m.result.Ways = m.result.Ways[:min(len(m.result.Ways), 2*waysEach)]
	if len(m.result.Ways) == 0 {
		m.none("other conditions for this step", "the rules hold no other set that these molecules stand")
	}
	return nil
}

const sameYield = 1e-9

func childKeys(list []search.Child) []search.Key {
	out := make([]search.Key, len(list))
	for i, c := range list {
		out[i] = c.Key
	}
	return out
}

func sortedKeys(c *chemistry, list []*molecule.Molecule) []search.Key {
	out := make([]search.Key, len(list))
	for i, x := range list {
		out[i] = c.enter(x)
	}
	slices.SortFunc(out, func(a, b search.Key) int { return slices.Compare(a[:], b[:]) })
	return out
}

func (m *mender) addConditions(s Step) {
	old := &m.route.Steps[m.at]
	s.Number = old.Number
	rest := m.after()
	w := Way{Kind: OtherConditions, Steps: []Step{s}, Then: m.then(), Still: m.course(m.route.Steps[m.at+1:])}
	w.Still.Steps++
	w.Still.Days += daysOf(&s)
	w.Still.add(m.flask(&s, old.MolTarget*m.mol))
	w.Still.Yield = s.Yield.times(rest).tidy()
	for i, n := range s.MadeBy {
		if n > 0 {
			w.use(m, s.Consumed[i], old.MolTarget*s.Equivalents[i]/clampYield(s.Yield.Usual))
		}
	}
	m.finish(&w, old.Yield.times(rest))
}

// then lists the old steps behind the failed one.
func (m *mender) then() []int {
	out := []int{}
	for i := m.at + 1; i < len(m.route.Steps); i++ {
		out = append(out, i+1)
	}
	return out
}

// use notes that a way consumes something in hand, so many mol per mol of target, and how much target that
// gives.
func (w *Way) use(m *mender, x *molecule.Molecule, molPerMol float64) {
	for _, h := range m.have {
		if ok, _ := meets(h.Molecule, x); ok && molPerMol > 0 {
			text := m.w.Write(h.Molecule)
			if !slices.Contains(w.Uses, text) {
				w.Uses = append(w.Uses, text)
			}
			g := h.Mol / molPerMol * m.plan.Target.MolarMass
			if w.Enough == 0 || g < w.Enough {
				w.Enough = tidy(g)
			}
		}
	}
}

// finish works out what a way loses and lists it. planned is the yield that was planned from the same
// point on.
func (m *mender) finish(w *Way, planned Range) {
	r, planR := m.result, m.result.Planned
	l := &w.Lost
	l.Material, l.From = []string{}, "hand"
	if w.Kind == BackToShelf || len(w.Uses) == 0 && w.Kind != OtherConditions {
		l.From, planned = "shelf", m.route.OverallYield
	}
	for _, h := range r.InHand {
		if !slices.Contains(w.Uses, h.SMILES) {
			l.Material = append(l.Material, fmt.Sprintf("%s g of %s in hand", figure(h.G), label(h.Name, h.SMILES)))
		}
	}
	l.Material = append(l.Material, fmt.Sprintf("what was charged to step %d", r.Step))
	l.Yield = Loss{tidy(planned.Usual), tidy(w.Still.Yield.Usual)}
	l.Days = tidy(r.Spent.Days + w.Still.Days - planR.Days)
	l.Price = math.Round((r.Spent.Price+w.Still.Price-planR.Price)*100) / 100
	l.Currency, l.Unpriced = planR.Currency, w.Still.Unpriced
	if l.Currency == "" {
		l.Currency = w.Still.Currency
	}
	if w.Uses == nil {
		w.Uses = []string{}
	}
	if w.Doubts == nil {
		w.Doubts = []string{}
	}
	for i := range w.Steps {
		for _, o := range w.Steps[i].Objections {
			w.Doubts = append(w.Doubts, fmt.Sprintf("%s: %s", w.Steps[i].Name, o.Text))
		}
	}
	if w.Enough > 0 && w.Enough < r.MakeG*(1-1e-6) {
		w.Doubts = append(w.Doubts, fmt.Sprintf("What is in hand gives about %s g of target; the rest must be made again.", figure(w.Enough)))
	}
	r.Ways = append(r.Ways, *w)
}
