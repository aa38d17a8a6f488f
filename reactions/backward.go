package reactions

import (
	"bytes"
	"math/bits"
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
func (t *Transform) backwards(b *Book, target *subject, stocked Stocked, cache *subjects) []proposal {
	if t.Everywhere && len(t.part[forward]) == 1 && t.part[forward][0].query.Matches(target.Subject) {
		return nil // what reacts everywhere would have left no such site
	}
	sites := t.sites(target)
	if len(sites) == 0 {
		return nil
	}
	nearFeaturesFirst(target.M, sites)
	x := &undoer{t: t, b: b, target: target, stocked: stocked, cache: cache, seen: map[string]bool{}}
	for _, subset := range t.subsets(sites) {
		x.undo(subset)
		if len(x.out) >= maxProposals {
			break
		}
	}
	return x.out
}

// site is a way to lay product parts on the target; parts not laid are completed by co-products.
type site struct {
	laid map[int]partMatch
}

// sites lists the ways to lay a non-empty set of product parts, disjoint, on the target.
func (t *Transform) sites(target *subject) []site {
	parts := t.part[backward]
	found := make([][]partMatch, len(parts))
	for i := range parts {
		found[i] = parts[i].matches(target.Subject, nil)
	}
	var out []site
	var grow func(part int, now map[int]partMatch)
	grow = func(part int, now map[int]partMatch) {
		if len(out) >= maxProposals {
			return
		}
		if part == len(parts) {
			if len(now) > 0 {
				cp := map[int]partMatch{}
				for k, v := range now {
					cp[k] = v
				}
				out = append(out, site{cp})
			}
			return
		}
		for _, m := range found[part] {
			if !overlapsLaid(now, m) {
				now[part] = m
				grow(part+1, now)
				delete(now, part)
			}
		}
		if len(t.partChoices[part]) > 0 {
			grow(part+1, now)
		}
	}
	grow(0, map[int]partMatch{})
	return out
}

func overlapsLaid(now map[int]partMatch, m partMatch) bool {
	for _, old := range now {
		for _, a := range old {
			for _, b := range m {
				if a == b {
					return true
				}
			}
		}
	}
	return false
}

// subsets returns the sets of sites to undo together: single ones, and for an everywhere transform every
// subset of at most maxSites disjoint sites, or all of them at once where there are more.
func (t *Transform) subsets(sites []site) [][]site {
	var out [][]site
	for _, s := range sites {
		out = append(out, []site{s})
	}
	if !t.Everywhere || len(sites) < 2 {
		return out
	}
	for laid := 1; laid < 1<<len(t.part[backward]); laid++ {
		var alike []site
		for _, s := range sites {
			if s.parts() == laid {
				alike = append(alike, s)
			}
		}
		out = append(out, setsOf(apart(alike))...)
	}
	return out
}

// parts returns the set of parts laid, as bits.
func (s site) parts() int {
	set := 0
	for part := range s.laid {
		set |= 1 << part
	}
	return set
}

// apart picks, in order, sites that do not overlap.
func apart(sites []site) []site {
	var out []site
next:
	for _, s := range sites {
		for _, old := range out {
			for _, m := range s.laid {
				if overlapsLaid(old.laid, m) {
					continue next
				}
			}
		}
		out = append(out, s)
	}
	return out
}

// setsOf returns every subset of two or more sites, or all at once where there are many.
func setsOf(sites []site) [][]site {
	if len(sites) > maxSites {
		return [][]site{sites}
	}
	var out [][]site
	for set := 1; set < 1<<len(sites); set++ {
		if bits.OnesCount(uint(set)) < 2 {
			continue
		}
		var some []site
		for i := range sites {
			if set&(1<<i) != 0 {
				some = append(some, sites[i])
			}
		}
		out = append(out, some)
	}
	return out
}

// undoer collects the proposals of one target and transform.
type undoer struct {
	t       *Transform
	b       *Book
	target  *subject
	stocked Stocked
	cache   *subjects
	seen    map[string]bool
	out     []proposal

	plain     bool // the site at hand is nothing but chain carbon
	plainKept int
}

// undo runs the script backwards at the sites with every choice of co-products and leaving groups.
func (x *undoer) undo(sites []site) {
	missing := x.missingParts(sites[0])
	x.plain = x.plainChain(sites)
	for _, co := range x.coproductChoices(missing) {
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
	var list []proposal
	for fi, frags := range x.t.fragmentChoices() {
		pieces, err := x.t.script.edit(backward, p, mappings, frags)
		if err == nil {
			if next := (proposal{pieces}); x.sound(next) {
				list = append(list, next)
			}
		}
		if len(list) == 0 && fi+1 >= hopeless {
			break
		}
	}
	return list
}

// plainChain says whether the sites touch nothing but sp3 chain carbons without hetero neighbours: putting
// an unsaturation there is possible anywhere and worth trying in a few places only, those near a feature
// of the molecule first.
func (x *undoer) plainChain(sites []site) bool {
	for _, s := range sites {
		for _, m := range s.laid {
			for _, a := range m {
				if feature(x.target.M, int(a)) {
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
func nearFeaturesFirst(m *molecule.Molecule, sites []site) {
	far := featureDistance(m)
	away := func(s site) int {
		least := len(far)
		for _, match := range s.laid {
			for _, a := range match {
				least = min(least, far[a])
			}
		}
		return least
	}
	sort.SliceStable(sites, func(i, j int) bool { return away(sites[i]) < away(sites[j]) })
}

// featureDistance gives each atom its distance in bonds from the nearest feature.
func featureDistance(m *molecule.Molecule) []int {
	far := make([]int, m.NumAtoms())
	var queue []int
	for a := range far {
		far[a] = m.NumAtoms()
		if feature(m, a) {
			far[a] = 0
			queue = append(queue, a)
		}
	}
	for len(queue) > 0 {
		a := queue[0]
		queue = queue[1:]
		for _, n := range m.Neighbors(a) {
			if far[n.Atom] > far[a]+1 {
				far[n.Atom] = far[a] + 1
				queue = append(queue, int(n.Atom))
			}
		}
	}
	return far
}

func (x *undoer) missingParts(s site) []int {
	var missing []int
	for i := range x.t.part[backward] {
		if _, ok := s.laid[i]; !ok {
			missing = append(missing, i)
		}
	}
	return missing
}

// coproductChoices lists the combinations of co-products for the missing parts; one empty combination
// where none is missing.
func (x *undoer) coproductChoices(missing []int) [][]coproduct {
	combos := [][]coproduct{nil}
	for _, part := range missing {
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

// lay builds the pool of the target and, per site, the co-products, and the mappings slot -> pool atom.
func (x *undoer) lay(sites []site, co []coproduct) (*pool, [][]int32) {
	ms := []*molecule.Molecule{x.target.M}
	type extra struct {
		site, part, at int
		c              coproduct
	}
	var extras []extra
	for si, s := range sites {
		for k, part := range x.missingParts(s) {
			if k >= len(co) {
				return nil, nil
			}
			m := co[k].m
			if co[k].same {
				if m = x.t.otherHalf(x.target.M, part, s); m == nil {
					return nil, nil
				}
			}
			extras = append(extras, extra{si, part, len(ms), co[k]})
			ms = append(ms, m)
		}
	}
	p := newPool(ms)
	mappings := make([][]int32, len(sites))
	for si, s := range sites {
		mappings[si] = make([]int32, len(x.t.script.slots))
		for i := range mappings[si] {
			mappings[si][i] = -1
		}
		for part, m := range s.laid {
			x.t.layPart(mappings[si], part, m, 0)
		}
	}
	for _, e := range extras {
		m := x.completing(e.part, ms[e.at], e.c, sites[e.site])
		if m == nil {
			return nil, nil
		}
		x.t.layPart(mappings[e.site], e.part, m, p.offset[e.at])
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
func (x *undoer) completing(part int, m *molecule.Molecule, c coproduct, s site) partMatch {
	pq := &x.t.part[backward][part]
	matches := pq.matches(pattern.NewSubject(m, x.b.groups), // not the cached one: classAt counts atoms of m itself
		func(q, a int) bool {
			at, fixed := c.classAt[pq.query.Atoms[q].Class]
			return !fixed || int(at) == a
		})
	if len(matches) == 0 {
		return nil
	}
	return matches[0]
}

// maxFragments bounds the combinations of leaving groups tried at one site.
const maxFragments = 36

// fragmentChoices lists what may stand for the classes that leave: every combination, those early in
// their lists first.
func (t *Transform) fragmentChoices() []fragments {
	classes := make([]int, 0, len(t.choices))
	for class := range t.choices {
		classes = append(classes, class)
	}
	sort.Ints(classes)
	type combination struct {
		frags fragments
		late  int
	}
	combos := []combination{{fragments{}, 0}}
	for _, class := range classes {
		var longer []combination
		for _, c := range combos {
			for i, m := range t.choices[class] {
				f := fragments{class: m}
				for k, v := range c.frags {
					f[k] = v
				}
				longer = append(longer, combination{f, c.late + i})
			}
		}
		combos = longer
	}
	sort.SliceStable(combos, func(i, j int) bool { return combos[i].late < combos[j].late })
	out := make([]fragments, 0, len(combos))
	for _, c := range combos {
		out = append(out, c.frags)
	}
	return out[:min(len(out), maxFragments)]
}

// keep adds proposals that are new and pass the reactant side's words; of those that no shelf item
// completes only the first few stay.
func (x *undoer) keep(list []proposal) {
	loose := 0
	for _, p := range list {
		key := precursorKey(p.pieces)
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
	for _, pc := range p.pieces {
		if x.stocked(pc.m) {
			return true
		}
	}
	return false
}

// sound refuses precursors that are the target itself, carry broken rings, or that the reactant side
// does not match.
func (x *undoer) sound(p proposal) bool {
	for _, pc := range p.pieces {
		if pc.m.Key() == x.target.key || !saneRings(pc.m) {
			return false
		}
	}
	for i := range x.t.part[forward] {
		matched := false
		for _, pc := range p.pieces {
			if x.t.part[forward][i].query.Matches(x.cache.of(pc.m).Subject) {
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

// precursorKey identifies a multiset of molecules.
func precursorKey(pieces []piece) string {
	keys := make([][]byte, len(pieces))
	for i, p := range pieces {
		k := p.m.Key()
		keys[i] = k[:]
	}
	sort.Slice(keys, func(i, j int) bool { return bytes.Compare(keys[i], keys[j]) < 0 })
	return string(bytes.Join(keys, nil))
}
