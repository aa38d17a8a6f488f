package reactions

import (
	"context"
	"io/fs"
	"slices"
	"sort"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
	"shelfward/rules"
)

// Book is the loaded rule set: transforms, groups, preference models and the tolerance table. It is
// immutable after Load and safe for concurrent use.
type Book struct {
	Transforms []*Transform // in order of id
	byID       map[string]*Transform
	groups     *pattern.Groups
	arene      *arene
	media      *toleranceTable
	protection []*ProtectingGroup
	takesOff   map[string]*ProtectingGroup // by transform
	guarding   []*Transform                // take off what is looked at only in need

	common  *commonMolecules // shared with the books made by Only
	sieve   *pattern.Sieve   // of all product parts, transform after transform
	sieveOf []*Transform     // per product part its transform
}

// Load reads and compiles the rules of fsys (rules.Files() or an overlay). The error is a
// rules.ErrorList with every mistake at its file and line; the Book then holds what did compile.
func Load(fsys fs.FS) (*Book, error) {
	l := &loader{fsys: fsys, groups: pattern.NewGroups(), byID: map[string]*Transform{}}
	l.loadGroups()
	a := l.loadModels()
	if a == nil {
		a = &arene{rho: -8}
	}
	l.loadTolerance()
	l.loadTransforms()
	l.checkTogether()
	b := &Book{Transforms: l.list, byID: l.byID, groups: l.groups, arene: a, media: l.media, protection: l.loadProtection(), takesOff: map[string]*ProtectingGroup{}, common: &commonMolecules{}}
	b.indexProtection()
	b.sift()
	return b, l.errs.Err()
}

// indexProtection finds the protecting groups by the transforms that take them off.
func (b *Book) indexProtection() {
	for _, g := range b.protection {
		for _, id := range g.TakeOff {
			b.takesOff[id] = g
			if t := b.byID[id]; t != nil && !g.Builds {
				b.guarding = append(b.guarding, t)
			}
		}
	}
}

// Only returns a book that holds some of the transforms of b, in their order.
func (b *Book) Only(list []*Transform) *Book {
	part := *b
	part.Transforms, part.sieveOf = list, nil
	part.sift()
	return &part
}

// sift makes the sieve of the product parts.
func (b *Book) sift() {
	var parts []*pattern.Query
	for _, t := range b.Transforms {
		for i := range t.part[backward] {
			parts = append(parts, t.part[backward][i].query)
			b.sieveOf = append(b.sieveOf, t)
		}
	}
	b.sieve = pattern.NewSieve(parts)
}

// eachFor calls yield with the transforms, in order, of which some product part may occur in s, until it
// returns false.
func (b *Book) eachFor(s *subject, yield func(*Transform) bool) {
	var last *Transform
	for i := b.sieve.Next(s.Subject, 0); i >= 0; i = b.sieve.Next(s.Subject, i+1) {
		if t := b.sieveOf[i]; t != last {
			if last = t; !yield(t) {
				return
			}
		}
	}
}

// Groups returns the functional groups of the rule set.
func (b *Book) Groups() *pattern.Groups { return b.groups }

// Transform returns the transform with an id, or nil.
func (b *Book) Transform(id string) *Transform { return b.byID[id] }

type groupFile struct {
	Groups []struct {
		rules.Place
		ID       rules.Text          `yaml:"id" need:"id: ester"`
		Name     string              `yaml:"name"`
		Pattern  rules.Text          `yaml:"pattern"`
		Patterns []rules.Text        `yaml:"patterns"`
		Where    map[string]wordList `yaml:"where"`
		Core     []int               `yaml:"core"`
		Note     string              `yaml:"note"`
		Source   string              `yaml:"source"`
	} `yaml:"groups"`
}

func (l *loader) loadGroups() {
	var file groupFile
	if err := rules.ReadInto(l.fsys, "groups.yaml", &file); err != nil {
		l.addErr(rules.Place{Path: "groups.yaml"}, err)
		return
	}
	shown := rules.PathOf(l.fsys, "groups.yaml")
	for _, g := range file.Groups {
		patterns := g.Patterns
		if g.Pattern.Written() {
			patterns = append([]rules.Text{g.Pattern}, patterns...)
		}
		if err := l.groups.Add(g.ID.Value, g.Name, texts(patterns), where(g.Where), g.Core); err != nil {
			l.addErr(g.Place, patternError(err, patterns, shown))
		}
	}
}

func (l *loader) checkTogether() {
	for _, t := range l.list {
		for _, c := range t.Conditions {
			for _, id := range c.Together {
				if l.byID[id] == nil {
					l.errs = append(l.errs, &rules.Error{Path: c.File, Text: "together: no transform " + id + didYouMean(id, l.ids())})
				}
			}
		}
	}
}

func (l *loader) ids() []string {
	out := make([]string, len(l.list))
	for i, t := range l.list {
		out[i] = t.ID
	}
	return out
}

// Expand returns every judged step that makes target: run forwards it gives the target in a share worth
// isolating, and no objection is fatal. stocked (may be nil) says which molecules are at hand; of the
// leaving groups and co-products that a transform leaves free, those that complete to such a molecule
// come first. The order is fixed by the rule set alone.
func (b *Book) Expand(ctx context.Context, target *molecule.Molecule, stocked Stocked) ([]*Step, error) {
	w := b.newWorkspace()
	defer w.release()
	x := &expander{b: b, w: w, target: w.of(target), stocked: stocked}
	x.guards.watch = x.guardable()
	err := ctx.Err()
	b.eachFor(x.target, func(t *Transform) bool {
		if err = ctx.Err(); err == nil {
			x.expand(t)
		}
		return err == nil
	})
	if err != nil {
		return nil, err
	}
	x.dropUnneeded()
	return x.steps, nil
}

// expander collects the steps of one target.
type expander struct {
	b        *Book
	target   *subject
	stocked  Stocked
	w        *workspace
	steps    []*Step
	rejected []rejectedStep
	keepAll  bool
	guards   guards
}

// rejectedStep remembers why a proposal was dropped.
type rejectedStep struct {
	t       *Transform
	from    []*molecule.Molecule
	reasons []Objection
}

func (x *expander) expand(t *Transform) {
	for _, p := range t.backwards(x.w, x.target, x.stocked) {
		d := x.draft(t, p)
		step, reasons := d.step()
		switch {
		case step != nil:
			if g := x.b.watches(t); g != nil {
				x.guard(g, d)
			}
			x.steps = append(x.steps, step)
		case x.guards.watch && d.found:
			x.guards.failed = append(x.guards.failed, d)
		}
		if step == nil && x.keepAll {
			x.rejected = append(x.rejected, rejectedStep{t, d.molecules(), reasons})
		}
		x.expandTogether(d)
	}
}

// draft is a proposal run forwards, before its condition sets are looked at.
type draft struct {
	b         *Book
	t         *Transform
	together  []*Transform
	only      *Conditions // the set that names the companions, nil: any
	target    *subject
	reactants []*subject // distinct
	origins   []Origin   // per target atom
	assessment
	busy [][]bool // per reactant
	uses []int    // copies of each reactant
}

// molecules lists the reactants.
func (d *draft) molecules() []*molecule.Molecule {
	out := make([]*molecule.Molecule, len(d.reactants))
	for i, r := range d.reactants {
		out[i] = r.M
	}
	return out
}

func (x *expander) draft(t *Transform, p proposal) *draft {
	d := &x.w.drafts.take(1)[0]
	d.b, d.t, d.target = x.b, t, x.target
	d.reactants = x.w.subjectsOf.take(len(p.pieces))[:0]
	d.origins = make([]Origin, x.target.M.NumAtoms())
	for i := range d.origins {
		d.origins[i] = Origin{-1, -1}
	}
	for k, pc := range p.pieces {
		s := x.w.subjectOf(&p.pieces[k])
		at := -1
		for i, r := range d.reactants {
			if r.key == s.key {
				at = i
			}
		}
		if at < 0 {
			at = len(d.reactants)
			d.reactants = append(d.reactants, s)
		}
		onto := []int32(nil) // the same numbering
		if pc.m != s.M {
			onto = atomsOf(pc.m, s.M)
		}
		for i, from := range pc.from {
			if from < 0 || int(from) >= len(d.origins) {
				continue
			}
			atom := int32(i)
			if onto != nil {
				atom = onto[i]
			}
			d.origins[from] = Origin{int32(at), atom}
		}
	}
	x.w.expected = x.w.expect(d)
	d.assessment = x.w.assess(t, d.reactants, x.target.M)
	x.w.expected = nil
	if d.found {
		d.busy = d.outcome.busyAtoms(x.w, d.reactants)
		d.uses = x.w.counts.take(len(d.reactants))
		for _, c := range d.outcome.copies {
			d.uses[c]++
		}
	}
	return d
}

// step looks for condition sets under which the rest of the molecules survives.
func (d *draft) step() (*Step, []Objection) {
	d.orderByParts()
	if !d.found || fatal(d.objections) {
		return nil, d.under(nil, nil)
	}
	for _, n := range d.uses {
		if n == 0 {
			return nil, []Objection{{Kind: KindOther, Text: "a proposed material is not needed"}}
		}
	}
	type fit struct {
		c          *Conditions
		objections []Objection
	}
	var good []fit
	var worst []Objection
	for _, c := range d.conditionSets() {
		list := append(d.under(c, nil), d.mediaObjections(c)...)
		if fatal(list) {
			worst = append(worst, list...)
			continue
		}
		good = append(good, fit{c, list})
	}
	if len(good) == 0 {
		return nil, worst
	}
	sort.SliceStable(good, func(i, j int) bool { return len(good[i].objections) < len(good[j].objections) })
	s := d.newStep()
	s.Objections = good[0].objections
	for _, f := range good {
		if len(f.objections) == len(good[0].objections) {
			s.Conditions = append(s.Conditions, f.c)
		}
	}
	d.setAmounts(s)
	return s, nil
}

// orderByParts puts the materials into the order of the transform's parts: the first is the one that
// solvent volumes are counted on. With a companion the order stays.
func (d *draft) orderByParts() {
	if !d.found || len(d.together) > 0 {
		return
	}
	place := make([]int, len(d.reactants))
	for i := range place {
		place[i] = -1
	}
	var order []int
	for _, l := range d.outcome.laid {
		if which := d.outcome.copies[l.copy]; place[which] < 0 {
			place[which] = len(order)
			order = append(order, which)
		}
	}
	if len(order) != len(d.reactants) {
		return // some material is not needed; step refuses it
	}
	reactants, busy, uses := make([]*subject, len(order)), make([][]bool, len(order)), make([]int, len(order))
	for to, from := range order {
		reactants[to], busy[to], uses[to] = d.reactants[from], d.busy[from], d.uses[from]
	}
	d.reactants, d.busy, d.uses = reactants, busy, uses
	for i := range d.origins {
		if r := d.origins[i].Reactant; r >= 0 {
			d.origins[i].Reactant = int32(place[r])
		}
	}
	copies := make([]int, len(d.outcome.copies))
	for i, which := range d.outcome.copies {
		copies[i] = place[which]
	}
	d.outcome.copies = copies
}

func (d *draft) conditionSets() []*Conditions {
	if d.only != nil {
		return []*Conditions{d.only}
	}
	var out []*Conditions
	for _, c := range d.t.Conditions {
		if d.t.appliesTo(c, &d.outcome) {
			out = append(out, c)
		}
	}
	return out
}

func (d *draft) mediaObjections(c *Conditions) []Objection {
	var out []Objection
	for i, r := range d.reactants {
		out = append(out, d.b.media.objections(c.Media, r.Subject, d.busy[i], nil)...)
	}
	return worstPerText(out)
}

func (d *draft) newStep() *Step {
	s := &Step{Transform: d.t, Together: d.together, Product: d.target.M, Origins: d.origins,
		Share: d.share, Fraction: d.fraction, Racemic: d.racemic}
	for i, r := range d.reactants {
		s.Reactants = append(s.Reactants, Reactant{Molecule: r.M, Count: d.uses[i]})
	}
	return s
}

// setAmounts fills equivalents and by-products for the first condition set.
func (d *draft) setAmounts(s *Step) {
	c := s.Conditions[0]
	perRun := float64(max(1, d.count))
	seen := make([]float64, len(d.outcome.copies))
	for part, l := range d.outcome.laid {
		equiv := c.ReactantEquiv[part+1]
		if equiv == 0 {
			equiv = 1
		}
		if seen[l.copy] == 0 {
			seen[l.copy] = equiv
		}
	}
	byMolecule := map[int]float64{}
	for copyIndex, which := range d.outcome.copies {
		e := seen[copyIndex]
		if e == 0 { // further sites of an everywhere transform: as the first partner of its kind
			e = 1
			for part, l := range d.outcome.laid {
				if d.outcome.copies[l.copy] == which && c.ReactantEquiv[part+1] > 0 {
					e = c.ReactantEquiv[part+1]
				}
			}
		}
		byMolecule[which] += e
	}
	for i := range s.Reactants {
		s.Reactants[i].Equivalents = byMolecule[i] / perRun
	}
	s.Byproducts = d.t.byproducts(&d.outcome, c, d.pieceIndex, d.target.M, perRun)
}

// appliesTo says whether a condition set serves the leaving groups of an outcome.
func (t *Transform) appliesTo(c *Conditions, o *outcome) bool {
	for class, allowed := range c.applies {
		left := t.leaving(o, class)
		if left == nil {
			continue
		}
		ok := false
		for _, m := range allowed {
			ok = ok || m.FlatKey() == left.FlatKey()
		}
		if !ok {
			return false
		}
	}
	return true
}

// leaving returns the piece that left with a class at the first application, nil if none did.
func (t *Transform) leaving(o *outcome, class int) *molecule.Molecule {
	s := t.script.slotOfClass(class)
	if s < 0 || o.mappings[0][s] < 0 {
		return nil
	}
	for _, p := range o.pieces {
		if slices.Index(p.from, o.mappings[0][s]) >= 0 {
			return p.m
		}
	}
	return nil
}
