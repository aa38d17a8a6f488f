package route

import (
	"context"
	"fmt"
	"slices"
	"time"

	"shelfward/molecule"
)

func (m *mender) none(kind, why string) {
	m.result.None = append(m.result.None, "no "+kind+": "+why)
}

// banned is the failed step, between its molecules.
func (m *mender) banned() Banned {
	s := &m.route.Steps[m.at]
	return Banned{s.Molecule, s.Consumed}
}

// product looks for another way to what the failed step was to make.
func (m *mender) product(ctx context.Context) error {
	s := &m.route.Steps[m.at]
	if s.Molecule.Key() == m.plan.Molecule.Key() {
		m.none("other way to the product of this step", "it is the target; see the ways on from what is in hand and from the shelf")
		return nil
	}
	o := m.o
	o.From, o.Count, o.InHand, o.Not, o.MakeMol, o.MakeAnyway = nil, waysEach, m.have, []Banned{m.banned()}, s.MolTarget*m.mol, true
	rest := m.after()
	planned := s.Yield.times(rest)
	return m.search(ctx, s.Molecule, o, OtherWay, "other way to "+label(s.ProductName, s.Product), func(w *Way, r *Route) Range {
		w.Then = m.then()
		then := m.course(m.route.Steps[m.at+1:])
		w.Still.Steps += then.Steps
		w.Still.Days += then.Days
		w.Still.add(then)
		w.Still.Yield = w.Still.Yield.times(rest).tidy()
		return planned
	})
}

// onward looks for another way to the target from what is in hand, not through the failed product.
func (m *mender) onward(ctx context.Context) error {
	s := &m.route.Steps[m.at]
	if len(m.have) == 0 {
		m.none("other way on from what is in hand", "nothing is in hand")
		return nil
	}
	found := 0
	for _, h := range m.have {
		if h.Molecule.Key() == m.plan.Molecule.Key() {
			continue
		}
		o := m.o
		o.From, o.Count, o.InHand, o.MakeMol, o.MakeAnyway = []*molecule.Molecule{h.Molecule}, waysEach, m.have, m.mol, true
		o.Not = []Banned{m.banned()}
		if s.Molecule.Key() != m.plan.Molecule.Key() {
			o.NotThrough = []*molecule.Molecule{s.Molecule}
		}
		before := len(m.result.Ways)
		err := m.search(ctx, m.plan.Molecule, o, OtherOnward, "other way on from "+label(m.w.Name(h.Molecule), m.w.Write(h.Molecule)),
			func(w *Way, r *Route) Range { return s.Yield.times(m.after()) })
		if err != nil {
			return err
		}
		found += len(m.result.Ways) - before
	}
	return nil
}

// shelf looks for another route from the shelf.
func (m *mender) shelf(ctx context.Context) error {
	o := m.o
	o.From, o.Count, o.Not, o.MakeMol, o.MakeAnyway = nil, waysEach, []Banned{m.banned()}, m.mol, true
	return m.search(ctx, m.plan.Molecule, o, BackToShelf, "other route from the shelf", func(*Way, *Route) Range { return m.route.OverallYield })
}

// search plans and lists the routes found as ways. complete adds what follows them and returns the yield
// that was planned from the same point.
func (m *mender) search(ctx context.Context, target *molecule.Molecule, o Options, kind, what string, complete func(*Way, *Route) Range) error {
	o.Bench = m.o.Bench
	if o.Time > 0 { // 0: no limit
		o.Time = max(o.Time, time.Millisecond)
	}
	p, err := Make(ctx, m.w, target, o)
	if err != nil {
		return err
	}
	listed, known := 0, 0
	for i := range p.Routes {
		r := &p.Routes[i]
		if len(r.Steps) == 0 {
			continue
		}
		if m.known(r) {
			known++
			continue
		}
		w := Way{Kind: kind, Steps: r.Steps, Then: []int{}, Doubts: slices.Clone(r.Doubts), Still: Course{Steps: len(r.Steps), Yield: r.OverallYield, Days: r.Days, Price: r.Materials.Price,
			Currency: r.Materials.Currency, Unpriced: r.Materials.Unpriced}}
		planned := complete(&w, r)
		for _, s := range r.StartingMaterials {
			if x, err := m.w.Read(s.SMILES); err == nil {
				w.use(m, x, s.Mol*m.perTarget(kind))
			}
		}
		m.finish(&w, planned)
		listed++
	}
	if listed == 0 {
		why := fmt.Sprintf("none of at most %d steps under the rules and shelf loaded", p.MaxSteps)
		if known > 0 {
			why = "those found stand above"
		} else if !p.Search.Exhausted {
			why = "none was found before the search was stopped"
		}
		m.none(what, why)
	}
	return nil
}

// perTarget turns mol per mol of a search's target into mol per mol of the route's target.
func (m *mender) perTarget(kind string) float64 {
	if kind == OtherWay {
		return m.route.Steps[m.at].MolTarget
	}
	return 1
}

// known says whether a route has been listed already as a way that loses less.
func (m *mender) known(r *Route) bool {
	line := func(s *Step) string { return s.Transform + "/" + s.Conditions + ">" + s.Product }
	var new []string
	for i := range r.Steps {
		new = append(new, line(&r.Steps[i]))
	}
	slices.Sort(new)
	for i := range m.result.Ways {
		w := &m.result.Ways[i]
		var old []string
		for j := range w.Steps {
			old = append(old, line(&w.Steps[j]))
		}
		for _, n := range w.Then {
			old = append(old, line(&m.route.Steps[n-1]))
		}
		slices.Sort(old)
		if w.Kind != OtherConditions && slices.Equal(new, old) {
			return true
		}
	}
	return false
}
