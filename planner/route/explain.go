package route

import (
	"context"
	"fmt"
	"strings"
	"time"

	"shelfward/molecule"
	"shelfward/planner/search"
)

// Explained says whether a molecule lies on the way to the target, at what cost, and why no listed route
// passes through it.
//
// Through is the weight of the cheapest whole route found that passes through it; null where there is none,
// where a listed route does, or where the weights of parts do not add up.
type Explained struct {
	SMILES  string   `json:"smiles"`
	Name    string   `json:"name"`
	OnShelf bool     `json:"on_shelf"`
	Met     bool     `json:"met"`    // some step of the search makes it or takes it
	Opened  bool     `json:"opened"` // its own making was looked at
	Routes  []string `json:"routes"` // codes of listed routes that pass through it
	Made    *Leg     `json:"made"`   // from the shelf; null: no way was found, or it stands there
	Onward  *Leg     `json:"onward"` // from it to the target; null: no way was found
	Through *float64 `json:"through"`
	Says    []string `json:"says"`
}

// Leg is the first way found over a part of a route.
type Leg struct {
	Weight float64 `json:"weight"`
	Steps  int     `json:"steps"`
	Proven bool    `json:"proven"`
	Line   string  `json:"line"`
}

// Explain looks for the first way to make x and the first way on from it, each within the limits of o, and
// compares them with the routes listed.
func (p *Plan) Explain(ctx context.Context, w *World, x *molecule.Molecule, o Options) error {
	e := Explained{SMILES: w.Write(x), Name: w.Name(x), Routes: []string{}, Says: []string{}}
	e.place(p, x)
	o.Count, o.Progress, o.MakeMol = 1, nil, 0
	made, onward := o, o
	made.From, made.MakeAnyway = nil, false
	a, err := Make(ctx, w, x, made)
	if err != nil {
		return err
	}
	e.OnShelf = a.Target.OnShelf
	e.Made = leg(a)
	var b *Plan
	if x.Key() != p.Molecule.Key() && len(o.From) < search.MaxFrom {
		onward.From, onward.MakeAnyway = append(o.From[:len(o.From):len(o.From)], x), true
		if b, err = Make(ctx, w, p.Molecule, onward); err != nil {
			return err
		}
		e.Onward = leg(b)
	}
	e.say(p, a, b)
	p.Explained = append(p.Explained, e)
	return nil
}

// place finds x among what the search met and in the routes listed.
func (e *Explained) place(p *Plan, x *molecule.Molecule) {
	if c := p.chemistry; c != nil {
		k := search.Key(x.Key())
		e.Met = c.molecule(k) != nil
		c.mu.RLock()
		_, e.Opened = c.options[k]
		c.mu.RUnlock()
	}
	for i := range p.Routes {
		r := &p.Routes[i]
		for j := range r.Steps {
			s := &r.Steps[j]
			hit := s.Molecule != nil && s.Molecule.Key() == x.Key()
			for _, m := range s.Consumed {
				hit = hit || m.Key() == x.Key()
			}
			if hit {
				e.Routes = append(e.Routes, r.Code)
				break
			}
		}
	}
}

func leg(p *Plan) *Leg {
	if len(p.Routes) == 0 || len(p.Routes[0].Steps) == 0 {
		return nil
	}
	r := &p.Routes[0]
	names := make([]string, len(r.Steps))
	for i := range r.Steps {
		names[i] = r.Steps[i].Name
	}
	return &Leg{Weight: r.Weight, Steps: r.LongestRun, Proven: r.Proven, Line: strings.Join(names, "; then ")}
}

// say puts the finding into words.
func (e *Explained) say(p, a, b *Plan) {
	add := func(format string, args ...any) { e.Says = append(e.Says, fmt.Sprintf(format, args...)) }
	switch {
	case !e.Met:
		add("not met among the molecules of the search (%d opened): no step from what was opened takes it", p.Search.Expanded)
	case e.OnShelf:
		add("met as a material")
	case e.Opened:
		add("met, and its own making was looked at")
	default:
		add("met, but not opened: nothing cheaper than what stood already could come of it, or the search was stopped")
	}
	switch {
	case e.OnShelf:
		add("on the shelf: it is taken, not made")
	case e.Made != nil:
		add("made from the shelf at a weight of %s in %d %s: %s", weight(e.Made.Weight), e.Made.Steps, plural(e.Made.Steps, "step", "steps"), e.Made.Line)
	default:
		add("it cannot be made: %s", a.why())
	}
	switch {
	case b == nil:
	case e.Onward != nil:
		add("from it to the target at a weight of %s in %d %s: %s", weight(e.Onward.Weight), e.Onward.Steps, plural(e.Onward.Steps, "step", "steps"), e.Onward.Line)
	default:
		add("nothing leads on from it to the target: %s", b.why())
	}
	e.verdict(p, add)
}

// verdict says why it was chosen or not.
func (e *Explained) verdict(p *Plan, add func(string, ...any)) {
	if len(e.Routes) > 0 {
		add("chosen: on %s %s", plural(len(e.Routes), "route", "routes"), strings.Join(e.Routes, ", "))
		return
	}
	if e.Onward == nil || e.Made == nil && !e.OnShelf {
		add("not chosen: no whole route passes through it")
		return
	}
	through, steps := e.Onward.Weight, e.Onward.Steps
	if e.Made != nil {
		through, steps = through+e.Made.Weight, steps+e.Made.Steps
	}
	if p.RankedBy.cost() != search.Sum {
		add("not chosen: in this order weights of parts do not add up; ask with --from for whole routes")
		return
	}
	e.Through = &through
	switch last := len(p.Routes) - 1; {
	case steps > p.MaxSteps:
		add("not chosen: %d steps are more than --max-steps %d", steps, p.MaxSteps)
	case last < 0:
		add("not chosen: no route was listed; through it the whole weighs about %s", weight(through))
	default:
		add("not chosen: through it the whole weighs about %s; the routes listed weigh %s to %s", weight(through), weight(p.Routes[0].Weight), weight(p.Routes[last].Weight))
	}
}

// why says in words why a plan holds no route.
func (p *Plan) why() string {
	if p.Search.Exhausted {
		return fmt.Sprintf("no way of at most %d steps under the rules and shelf loaded, and these wishes", p.MaxSteps)
	}
	return "no way was found before the search was stopped"
}

func weight(x float64) string { return fmt.Sprintf("%.2f", x) }

// partOfExplaining is the share of the time that each search of Explain gets.
const partOfExplaining = 4

// ExplainTime divides a time limit between the plan and the two searches of each explanation.
func ExplainTime(whole time.Duration, molecules int) (plan, each time.Duration) {
	if molecules == 0 {
		return whole, whole
	}
	each = whole / time.Duration(partOfExplaining*molecules)
	return whole - 2*each*time.Duration(molecules), each
}

func (e *Explained) write(t *writer) {
	t.line("")
	t.line("About %s:", label(e.Name, e.SMILES))
	for _, s := range e.Says {
		t.line("  %s.", s)
	}
}
