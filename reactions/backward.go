package reactions

import (
	"slices"
	"sort"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// Limits of the backward direction, per transform and target.
const (
	maxSites     = 6   // sites of an everywhere transform of which every subset is tried
	maxProposals = 120 // precursor sets looked at
	maxUnstocked = 2   // choices kept that no shelf item completes
	maxPlain     = 8   // such proposals kept at places where the target is nothing but chain
)

// Stocked says whether a molecule is on the shelf or given as a start. nil means that nothing is.
type Stocked func(m *molecule.Molecule) bool

// proposal is one backward result before it is judged.
type proposal struct {
	pieces []piece // precursors; from: target atom or -1 (pool of target and co-products)
}

// backwards proposes the precursor sets of one target under one transform.
func (t *Transform) backwards(w *workspace, target *subject, stocked Stocked) []proposal {
	if t.Everywhere && len(t.part[forward]) == 1 && t.part[forward][0].query.Matches(target.Subject) {
		return nil // what reacts everywhere would have left no such site
	}
	sites := t.sites(w, target)
	if len(sites) == 0 {
		return nil
	}
	nearFeaturesFirst(target, sites)
	clear(w.seen)
	x := &undoer{t: t, w: w, target: target, stocked: stocked, seen: w.seen}
	for i := range sites {
		if x.done(sites[i], sites[:i]) {
			continue
		}
		x.undo(sites[i : i+1])
		if len(x.out) >= maxProposals {
			return x.out
		}
	}
	for _, several := range t.together(sites) {
		x.undo(several)
		if len(x.out) >= maxProposals {
			break
		}
	}
	return x.out
}

// undoer collects the proposals of one target and transform.
type undoer struct {
	t       *Transform
	w       *workspace
	target  *subject
	stocked Stocked
	seen    map[setKey]bool
	out     []proposal

	plain     bool // the site at hand is nothing but chain carbon
	plainKept int
}

// done says whether a site is like an earlier one by the symmetry of the target: what it gives is known.
func (x *undoer) done(s site, earlier []site) bool {
	for _, old := range earlier {
		if x.target.alike(old, s, x.w) {
			return true
		}
	}
	return false
}

// undo runs the script backwards at the sites with every choice of co-products and leaving groups.
func (x *undoer) undo(sites []site) {
	x.plain = x.plainChain(sites)
	for _, co := range x.coproductChoices(sites[0]) {
		p, mappings := x.lay(sites, co)
		if p == nil {
			continue
		}
		x.keep(x.withFragments(p, mappings))
	}
}

// hopeless is how many combinations of leaving groups must fail before the site is given up: what the
// reactant side refuses in these it refuses in all, as the choices are made to fit it.
const hopeless = 2

// withFragments runs the script backwards once for each combination of leaving groups.
func (x *undoer) withFragments(p *pool, mappings [][]int32) []proposal {
	list := x.w.tried[:0]
	for fi := range x.t.combinations {
		pieces, err := x.t.script.edit(x.w, backward, p, mappings, &x.t.combinations[fi])
		if err == nil {
			if next := (proposal{pieces}); x.sound(next) {
				list = append(list, next)
			}
		}
		if len(list) == 0 && fi+1 >= hopeless {
			break
		}
	}
	x.w.tried = list
	return list
}

// plainChain says whether the sites touch nothing but sp3 chain carbons without hetero neighbours: putting
// an unsaturation there is possible anywhere and worth trying in a few places only, those near a feature
// of the molecule first.
func (x *undoer) plainChain(sites []site) bool {
	far := x.target.featureDistance()
	for _, s := range sites {
		for _, m := range s {
			for _, a := range m {
				if far[a] == 0 {
					return false
				}
			}
		}
	}
	return true
}

// feature says that an atom is more than a chain carbon.
func feature(m *molecule.Molecule, a int) bool {
	if m.Atom(a).Element != 6 || m.InRing(a) || m.Degree(a) > 2 {
		return true
	}
	for _, n := range m.Neighbors(a) {
		if m.Atom(int(n.Atom)).Element != 6 || m.Bond(int(n.Bond)).Order > 1 {
			return true
		}
	}
	return false
}

// nearFeaturesFirst orders sites by their distance from the nearest feature, stably.
func nearFeaturesFirst(target *subject, sites []site) {
	if len(sites) < 2 {
		return
	}
	far := target.featureDistance()
	away := func(s site) int32 {
		least := int32(len(far))
		for _, match := range s {
			for _, a := range match {
				least = min(least, far[a])
			}
		}
		return least
	}
	slices.SortStableFunc(sites, func(s, r site) int { return int(away(s) - away(r)) })
}

// featureDistance gives each atom its distance in bonds from the nearest feature.
func (s *subject) featureDistance() []int32 {
	if len(s.far) > 0 {
		return s.far
	}
	m := s.M
	var queue []int32
	for a := range m.NumAtoms() {
		s.far = append(s.far, int32(m.NumAtoms()))
		if feature(m, a) {
			s.far[a] = 0
			queue = append(queue, int32(a))
		}
	}
	for len(queue) > 0 {
		a := queue[0]
		queue = queue[1:]
		for _, n := range m.Neighbors(int(a)) {
			if s.far[n.Atom] > s.far[a]+1 {
				s.far[n.Atom] = s.far[a] + 1
				queue = append(queue, n.Atom)
			}
		}
	}
	return s.far
}

// coproductChoices lists the combinations of co-products for the parts missing in s; one empty combination
// where none is.
func (x *undoer) coproductChoices(s site) [][]coproduct {
	combos := [][]coproduct{nil}
	for part, m := range s {
		if m != nil {
			continue
		}
		var longer [][]coproduct
		for _, c := range combos {
			for _, choice := range x.t.partChoices[part] {
				longer = append(longer, append(append([]coproduct(nil), c...), choice))
			}
		}
		combos = longer
	}
	return combos
}

// lay builds the pool of the target and, per site, the co-products in the order of the parts missing, and
// the mappings slot -> pool atom. It returns nil where a co-product cannot be made or laid.
func (x *undoer) lay(sites []site, co []coproduct) (*pool, [][]int32) {
	ms := append(x.w.molecules.take(1 + len(sites)*len(co))[:0], x.target.M)
	for _, s := range sites {
		k := 0
		for part, m := range s {
			if m != nil {
				continue
			}
			if k >= len(co) {
				return nil, nil
			}
			m := co[k].m
			if co[k].same {
				if m = x.t.otherHalf(x.target.M, part, s); m == nil {
					return nil, nil
				}
			}
			ms = append(ms, m)
			k++
		}
	}
	p := x.w.newPool(ms)
	mappings := x.w.mappings.take(len(sites))
	at := 1
	for si, s := range sites {
		to := x.w.emptyMapping(x.t)
		k := 0
		for part, m := range s {
			offset := int32(0)
			if m == nil {
				if m = x.completing(part, ms[at], co[k]); m == nil {
					return nil, nil
				}
				offset = p.offset[at]
				at, k = at+1, k+1
			}
			x.t.layPart(to, part, m, offset)
		}
		mappings[si] = to
	}
	return p, mappings
}

// layPart writes one part of the product side into a mapping.
func (t *Transform) layPart(to []int32, part int, m partMatch, offset int32) {
	pq := &t.part[backward][part]
	for q, a := range m {
		to[t.script.slotOf[backward][pq.first+q]] = a + offset
	}
}

// completing lays the part on its co-product, numbered classes at the numbered atoms.
func (x *undoer) completing(part int, m *molecule.Molecule, c coproduct) partMatch {
	if !c.same {
		return c.laid
	}
	return x.t.layCoproduct(x.w.b.groups, part, m, c.classAt)
}

// layCoproduct lays a product part on m, its numbered classes at the atoms of classAt; nil where it does
// not fit.
func (t *Transform) layCoproduct(groups *pattern.Groups, part int, m *molecule.Molecule, classAt map[int]int32) (at partMatch) {
	q := t.part[backward][part].query
	q.EachWithin(pattern.NewSubject(m, groups), func(i, a int) bool {
		place, fixed := classAt[q.Atoms[i].Class]
		return !fixed || int(place) == a
	}, func(to pattern.Mapping) bool {
		at = append(at, to...)
		return false
	})
	return at
}

// maxFragments bounds the combinations of leaving groups tried at one site.
const maxFragments = 36

// fragmentChoices lists what may stand for the classes that leave: every combination, those early in
// their lists first.
func (t *Transform) fragmentChoices() []fragments {
	slots := len(t.script.slots)
	classes := make([]int, 0, len(t.choices))
	for class := range t.choices {
		classes = append(classes, class)
	}
	sort.Ints(classes)
	type combination struct {
		at   []*molecule.Molecule
		late int
	}
	combos := []combination{{make([]*molecule.Molecule, slots), 0}}
	for _, class := range classes {
		var longer []combination
		for _, c := range combos {
			for i, m := range t.choices[class] {
				at := slices.Clone(c.at)
				at[t.script.slotOfClass(class)] = m
				longer = append(longer, combination{at, c.late + i})
			}
		}
		combos = longer
	}
	sort.SliceStable(combos, func(i, j int) bool { return combos[i].late < combos[j].late })
	out := make([]fragments, 0, len(combos))
	for _, c := range combos {
		out = append(out, fragments{c.at, t.script.insideFragments(c.at)})
	}
	return out[:min(len(out), maxFragments)]
}

// keep adds proposals that are new and pass the reactant side's words; of those that no shelf item
// completes only the first few stay.
func (x *undoer) keep(list []proposal) {
	loose := 0
	for _, p := range list {
		key := x.w.setOf(p.pieces)
		if x.seen[key] {
			continue
		}
		x.seen[key] = true
		if x.stocked == nil || !x.anyStocked(p) {
			if loose >= maxUnstocked || x.plain && x.plainKept >= maxPlain {
				continue
			}
			loose++
			if x.plain {
				x.plainKept++
			}
		}
		x.out = append(x.out, p)
	}
}

func (x *undoer) anyStocked(p proposal) bool {
	for i := range p.pieces {
		if x.w.subjectOf(&p.pieces[i]).isStocked(x.stocked) {
			return true
		}
	}
	return false
}

// isStocked asks the shelf once.
func (s *subject) isStocked(stocked Stocked) bool {
	if s.stock == unknown {
		s.stock = answerOf(stocked(s.M))
	}
	return s.stock == yes
}

// sound refuses precursors that are the target itself, carry broken rings, or that the reactant side
// does not match.
func (x *undoer) sound(p proposal) bool {
	for i := range p.pieces {
		if !p.pieces[i].saneRings() || x.w.subjectOf(&p.pieces[i]).key == x.target.key {
			return false
		}
	}
	for i := range x.t.part[forward] {
		matched := false
		for k := range p.pieces {
			if x.t.part[forward][i].query.Matches(x.w.subjectOf(&p.pieces[k]).Subject) {
				matched = true
				break
			}
		}
		if !matched {
			return false
		}
	}
	return true
}
