package reactions

import (
	"context"
	"slices"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// Formed is a product that one step could give as far as constitution goes: nothing is judged.
type Formed struct {
	Product    *molecule.Molecule
	Transform  *Transform
	Conditions *Conditions // the set that carries out a companion as well; nil: any set of the transform
	With       []int       // indices of the stock consumed beside the start, ascending
}

// Forwards runs transforms forwards from molecules at hand. What it hands over holds every step that
// Expand can propose from these molecules: both lay the same parts on the same molecules with the same
// script, and here nothing is dropped. It is not safe for concurrent use; Clone gives a second one.
type Forwards struct {
	b       *Book
	stock   []*subject
	fits    [][]bool // per part of all transforms, in order: the stock it lies on
	first   []int    // per transform: index into fits of its first part
	carried map[string][]carrier
	halves  []Formed   // what companions make from stock alone, for transforms that take more beside it
	w       *workspace // of the call at hand
}

// carrier is a condition set of a transform that carries out a companion in the same flask.
type carrier struct {
	transform  int
	conditions *Conditions
}

// Forwards prepares to run the transforms on a stock of molecules, each as it is drawn.
func (b *Book) Forwards(stock []*molecule.Molecule) *Forwards {
	f := &Forwards{b: b, carried: map[string][]carrier{}}
	for _, m := range stock {
		f.stock = append(f.stock, b.subject(m))
	}
	for i, t := range b.Transforms {
		f.first = append(f.first, len(f.fits))
		for part := range t.part[forward] {
			on := make([]bool, len(f.stock))
			for j, s := range f.stock {
				on[j] = t.part[forward][part].query.Matches(s.Subject)
			}
			f.fits = append(f.fits, on)
		}
		for _, c := range t.Conditions {
			for _, id := range c.Together {
				f.carried[id] = append(f.carried[id], carrier{i, c})
			}
		}
	}
	return f
}

// Clone returns a second one with the same stock.
func (f *Forwards) Clone() *Forwards {
	c := *f
	return &c
}

// Stock hands over what one step gives from the stock alone, the start being the item with the highest
// index in the step; companions in the same flask are looked at too. It must have run before From.
func (f *Forwards) Stock(ctx context.Context, visit func(start int, x Formed)) error {
	f.halves = nil
	for i, s := range f.stock {
		if err := f.fromItem(ctx, i, s, visit); err != nil {
			return err
		}
	}
	return nil
}

func (f *Forwards) fromItem(ctx context.Context, i int, s *subject, visit func(start int, x Formed)) error {
	f.w = f.b.newWorkspace()
	defer f.w.release()
	var made []Formed
	if err := f.all(ctx, s, i, func(x Formed) { made = append(made, x) }); err != nil {
		return err
	}
	for _, x := range made {
		visit(i, x)
		f.finishHalf(x, nil, func(y Formed) { visit(i, y) })
		f.keepHalf(x, i)
	}
	return nil
}

// keepHalf remembers what a companion makes from stock, where a transform with more parts goes on with it.
func (f *Forwards) keepHalf(x Formed, start int) {
	if slices.ContainsFunc(f.carried[x.Transform.ID], func(c carrier) bool { return len(f.b.Transforms[c.transform].part[forward]) > 1 }) {
		x.With = merged(x.With, []int{start})
		f.halves = append(f.halves, x)
	}
}

// FromStock hands over what one step gives from item i of the stock, alone and with the rest of it.
func (f *Forwards) FromStock(ctx context.Context, i int, visit func(Formed)) error {
	if f.halves == nil {
		f.w = f.b.newWorkspace()
		f.halves = []Formed{}
		for j, s := range f.stock {
			for ti, t := range f.b.Transforms {
				if f.carried[t.ID] != nil {
					f.each(ti, []*subject{s}, j, nil, func(x Formed) { f.keepHalf(x, j) })
				}
			}
		}
		f.w.release()
	}
	return f.from(ctx, f.stock[i].M, visit)
}

// From hands over what one step gives from start, alone and with the stock.
func (f *Forwards) From(ctx context.Context, start *molecule.Molecule, visit func(Formed)) error {
	return f.from(ctx, start, visit)
}

func (f *Forwards) from(ctx context.Context, start *molecule.Molecule, visit func(Formed)) error {
	f.w = f.b.newWorkspace()
	defer f.w.release()
	s := f.w.of(start)
	var made []Formed
	if err := f.all(ctx, s, len(f.stock), func(x Formed) { made = append(made, x) }); err != nil {
		return err
	}
	for _, x := range made {
		visit(x)
		f.finishHalf(x, nil, visit)
	}
	for _, half := range f.halves {
		f.finishHalf(half, s, visit)
	}
	return nil
}

// all runs every transform on start and stock below the index limit.
func (f *Forwards) all(ctx context.Context, start *subject, limit int, visit func(Formed)) error {
	for i := range f.b.Transforms {
		if err := ctx.Err(); err != nil {
			return err
		}
		f.each(i, []*subject{start}, limit, nil, visit)
	}
	return nil
}

// finishHalf lets the transforms that carry out the companion of x go on with its product, with other (may
// be nil) consumed as well.
func (f *Forwards) finishHalf(x Formed, other *subject, visit func(Formed)) {
	for _, c := range f.carried[x.Transform.ID] {
		start := []*subject{f.w.of(x.Product)}
		if other != nil {
			if other.key == start[0].key {
				continue
			}
			start = append(start, other)
		}
		f.each(c.transform, start, len(f.stock), c.conditions, func(y Formed) {
			y.With = merged(y.With, x.With)
			visit(y)
		})
	}
}

// each runs one transform on the molecules of start together with every choice of stock, no more molecules
// than the transform has parts.
func (f *Forwards) each(ti int, start []*subject, limit int, c *Conditions, visit func(Formed)) {
	t := f.b.Transforms[ti]
	parts := len(t.part[forward])
	x := &chooser{f: f, t: t, first: f.first[ti], limit: limit, conditions: c, visit: visit, ms: start}
	for _, s := range start {
		on := uint64(0)
		for part := range parts {
			if t.part[forward][part].query.Matches(s.Subject) {
				on |= 1 << part
			}
		}
		if on == 0 {
			return
		}
		x.covered |= on
	}
	x.next(0, parts-len(start))
}

// chooser runs over the choices of stock beside the start.
type chooser struct {
	f          *Forwards
	t          *Transform
	first      int
	limit      int
	conditions *Conditions
	visit      func(Formed)

	ms      []*subject
	with    []int
	covered uint64 // parts that lie on some molecule chosen
}

func (x *chooser) next(from, more int) {
	parts := len(x.t.part[forward])
	if more < 0 {
		return
	}
	if x.covered == 1<<parts-1 {
		x.run()
	}
	if more == 0 {
		return
	}
	for i := from; i < x.limit; i++ {
		on := uint64(0)
		for part := range parts {
			if x.f.fits[x.first+part][i] {
				on |= 1 << part
			}
		}
		if on == 0 || slices.ContainsFunc(x.ms, func(s *subject) bool { return s.key == x.f.stock[i].key }) {
			continue
		}
		before := x.covered
		x.ms, x.with, x.covered = append(x.ms, x.f.stock[i]), append(x.with, i), before|on
		x.next(i+1, more-1)
		x.ms, x.with, x.covered = x.ms[:len(x.ms)-1], x.with[:len(x.with)-1], before
	}
}

// run hands over what forms when every molecule chosen is consumed.
func (x *chooser) run() {
	seen := map[molecule.Key]bool{}
	outs := x.t.run(x.f.w, x.ms)
	for i := range outs {
		o := &outs[i]
		for which := range x.ms {
			if !slices.Contains(o.copies, which) {
				o = nil
				break
			}
		}
		if o == nil {
			continue
		}
		for _, p := range o.pieces {
			if k := p.m.FlatKey(); !seen[k] && carbons(p.m) > 0 {
				seen[k] = true
				x.visit(Formed{p.m, x.t, x.conditions, slices.Clone(x.with)})
			}
		}
	}
}

// merged joins two ascending lists.
func merged(a, b []int) []int {
	out := append(slices.Clone(a), b...)
	slices.Sort(out)
	return slices.Compact(out)
}

// CarbonFree lists the carbon-free molecules that steps consume as materials (ammonia, hydrogen azide and
// the like), as the examples of the transforms show them.
func (b *Book) CarbonFree() []*molecule.Molecule {
	var out []*molecule.Molecule
	seen := map[molecule.Key]bool{}
	for _, t := range b.Transforms {
		for _, x := range t.Examples {
			for _, text := range x.From {
				m, err := smiles.Read(text)
				if err != nil || carbons(m) > 0 || seen[m.Key()] {
					continue
				}
				seen[m.Key()] = true
				out = append(out, m)
			}
		}
	}
	return out
}

// Ending tells which transforms could have made a molecule.
type Ending struct{ s *subject }

// Ending prepares a molecule for the question.
func (b *Book) Ending(m *molecule.Molecule) Ending { return Ending{b.subject(m)} }

// By says whether t could have made the molecule, as far as its product side lies on it; where it says no,
// Expand proposes no step by t.
func (e Ending) By(t *Transform) bool {
	if t.Everywhere && len(t.part[forward]) == 1 && t.part[forward][0].query.Matches(e.s.Subject) {
		return false
	}
	lies := false
	for part := range t.part[backward] {
		switch {
		case t.part[backward][part].query.Matches(e.s.Subject):
			lies = true
		case len(t.partChoices[part]) == 0:
			return false
		}
	}
	return lies
}
