package reactions

import (
	"math"
	"slices"
	"sort"

	"shelfward/molecule/pattern"
)

// maxCombinations bounds the ways in which one transform may be laid on given molecules; textbook
// steps have fewer than fifty. What lies beyond is left out of the shares.
const maxCombinations = 600

// partMatch is one way to lay a part on a molecule: the atom of each of the part's query atoms.
type partMatch []int32

// matches lists the ways to lay part p on s that differ in a significant atom. keep filters (may be nil).
func (p *partQuery) matches(w *workspace, s *pattern.Subject, keep func(queryAtom, a int) bool) []partMatch {
	g := &w.gatherer
	g.p, g.out = p, g.out[:0]
	p.query.EachWithin(s, keep, g.add)
	if len(g.out) == 0 {
		return nil
	}
	return w.matches.keep(g.out)
}

// gatherer collects the matches of one part.
type gatherer struct {
	w   *workspace
	p   *partQuery
	out []partMatch
	add func(pattern.Mapping) bool // take
}

func (g *gatherer) take(to pattern.Mapping) bool {
	for _, old := range g.out {
		if g.p.sameSites(old, to) {
			return true
		}
	}
	g.out = append(g.out, g.w.atoms.keep(to))
	return len(g.out) < maxCombinations
}

func (p *partQuery) sameSites(a partMatch, b pattern.Mapping) bool {
	for _, q := range p.significant {
		if a[q] != b[q] {
			return false
		}
	}
	return true
}

// laid is one part laid on one copy of a molecule.
type laid struct {
	copy  int // index into attempt.copies
	match partMatch
}

// attempt is one way to run a transform: the copies of molecules charged and where the parts lie.
type attempt struct {
	copies []int // index of the reactant molecule
	laid   []laid
}

// outcome is what one attempt gives.
type outcome struct {
	attempt
	pool     *pool
	pieces   []piece
	mappings [][]int32 // slot -> pool atom, one per application
	score    float64
	blocked  string // a preference model says that nothing happens, or something else
	stopped  Kind   // the kind of that objection
	sites    int    // applications (more than one with everywhere)
}

// run lays the transform on the molecules in every way and edits. The molecules may be used more than once.
func (t *Transform) run(w *workspace, ms []*subject) []outcome {
	found := t.layEach(w, ms)
	var out []outcome
	if t.Everywhere {
		out = t.runEverywhere(w, ms, found)
	}
	x := &w.combiner
	*x = combiner{t: t, w: w, ms: ms, found: found, intramolecularOnly: t.Everywhere, out: append(x.out[:0], out...),
		now: attempt{x.now.copies[:0], x.now.laid[:0]}}
	x.next(0)
	return w.outcomes.keep(x.out)
}

// layEach lists the matches of every part on every molecule.
func (t *Transform) layEach(w *workspace, ms []*subject) [][][]partMatch {
	found := w.found.take(len(t.part[forward]))
	for i := range t.part[forward] {
		found[i] = w.perPart.take(len(ms))
		for j, s := range ms {
			found[i][j] = t.part[forward][i].matches(w, s.Subject, nil)
		}
	}
	return found
}

// combiner runs over all ways to give each part a molecule, a copy and a match.
type combiner struct {
	t                  *Transform
	w                  *workspace
	ms                 []*subject
	found              [][][]partMatch
	now                attempt
	tried              int
	intramolecularOnly bool
	out                []outcome
}

func (x *combiner) next(part int) {
	if x.tried >= maxCombinations {
		return
	}
	if part == len(x.found) {
		x.tried++
		if x.intramolecularOnly && (len(x.now.copies) > 1 || len(x.found) < 2) {
			return
		}
		if o, ok := x.t.attempt(x.w, x.ms, x.now); ok {
			x.out = append(x.out, o)
		}
		return
	}
	for i := range x.ms {
		for _, match := range x.found[part][i] {
			for c, used := range x.now.copies {
				if used == i && !x.overlaps(c, match) {
					x.place(part, laid{c, match})
				}
			}
			x.now.copies = append(x.now.copies, i)
			x.place(part, laid{len(x.now.copies) - 1, match})
			x.now.copies = x.now.copies[:len(x.now.copies)-1]
		}
	}
}

func (x *combiner) place(part int, l laid) {
	if !x.t.sameAllowed(x.now, part, l) {
		return
	}
	x.now.laid = append(x.now.laid, l)
	x.next(part + 1)
	x.now.laid = x.now.laid[:len(x.now.laid)-1]
}

func (x *combiner) overlaps(copy int, match partMatch) bool {
	for _, l := range x.now.laid {
		if l.copy != copy {
			continue
		}
		for _, a := range l.match {
			for _, b := range match {
				if a == b {
					return true
				}
			}
		}
	}
	return false
}

// sameAllowed holds parts that must be one kind of molecule to it: another copy, the same site.
func (t *Transform) sameAllowed(now attempt, part int, l laid) bool {
	if !slices.Contains(t.same, part) {
		return true
	}
	for _, p := range t.same {
		if p >= part || p >= len(now.laid) {
			continue
		}
		first := now.laid[p]
		if now.copies[first.copy] != now.copies[l.copy] || first.copy == l.copy {
			return false
		}
		for i := range first.match {
			if i < len(l.match) && first.match[i] != l.match[i] {
				return false
			}
		}
	}
	return true
}

// attempt edits one combination and scores it; ok is false where it does not fit.
func (t *Transform) attempt(w *workspace, ms []*subject, now attempt) (outcome, bool) {
	o := outcome{attempt: attempt{w.counts.keep(now.copies), w.laid.keep(now.laid)}, sites: 1}
	o.pool = w.poolOf(ms, o.copies)
	o.mappings = w.mappings.take(1)
	o.mappings[0] = t.mapping(w, o.pool, o.laid)
	return o, t.finish(w, ms, &o)
}

// mapping turns laid parts into slot -> pool atom.
func (t *Transform) mapping(w *workspace, p *pool, parts []laid) []int32 {
	to := w.emptyMapping(t)
	for i, l := range parts {
		pq := &t.part[forward][i]
		for q, a := range l.match {
			to[t.script.slotOf[forward][pq.first+q]] = a + p.offset[l.copy]
		}
	}
	return to
}

// finish edits, checks rings and scores.
func (t *Transform) finish(w *workspace, ms []*subject, o *outcome) bool {
	var err error
	if o.pieces, err = t.script.edit(w, forward, o.pool, o.mappings, nil); err != nil {
		return false
	}
	bonus, ok := t.ringCheck(o)
	if !ok || !o.sane() || o.idle(w, ms) {
		return false
	}
	o.score = bonus
	t.rate(w, ms, o)
	return true
}

// rate adds the scores of the preference models at the first application.
func (t *Transform) rate(w *workspace, ms []*subject, o *outcome) {
	to := o.mappings[0]
	for k := range t.prefers {
		p := &t.prefers[k]
		which, atoms := -1, w.atoms.take(len(p.slots))
		for i, s := range p.slots {
			atoms[i] = -1
			if to[s] < 0 {
				continue
			}
			c, a := o.pool.locate(to[s])
			if which < 0 {
				which = c
			}
			if which == c {
				atoms[i] = a
			}
		}
		if which < 0 || atoms[0] < 0 {
			continue
		}
		var points float64
		if s := ms[o.copies[which]].Subject; p.model.ring {
			points = w.b.arene.rate(s, atoms[0], p.rho, p.ortho)
		} else {
			points = p.model.rate(s, atoms)
		}
		o.score += points
		if p.hasMin && points < p.needs && o.blocked == "" {
			o.blocked, o.stopped = p.whyNot, KindNoReaction
			if !p.model.ring {
				o.stopped = p.model.stopKind(ms[o.copies[which]].Subject, atoms)
			}
			if o.blocked == "" {
				o.blocked = "the site is not reactive enough (" + p.model.means + ")"
			}
		}
	}
}

// ringCheck refuses rings of sizes that the transform does not close, and favours five and six: powers
// of ten against the reaction between two molecules (effective molarities, common practice).
func (t *Transform) ringCheck(o *outcome) (bonus float64, ok bool) {
	for _, to := range o.mappings {
		for _, be := range t.script.bonds {
			if be.order[forward] != 0 || be.order[backward] == 0 || to[be.a] < 0 || to[be.b] < 0 {
				continue
			}
			pa, pb := t.partOfSlot(be.a), t.partOfSlot(be.b)
			ca, _ := o.pool.locate(to[be.a])
			cb, _ := o.pool.locate(to[be.b])
			if pa < 0 || pb < 0 || pa == pb || ca != cb {
				continue
			}
			size := o.ringThrough(to[be.a], to[be.b])
			if size != 0 && !t.closes.allows(size) {
				return 0, false
			}
			switch {
			case size == 0: // the ends fell apart again
			case size == 5 || size == 6:
				bonus += 1.5
			case size == 7:
				bonus += 0.3
			case size < 5:
				bonus -= 0.5
			default:
				bonus -= 2
			}
		}
	}
	return bonus, true
}

func (t *Transform) partOfSlot(s int) int {
	if q := t.script.slots[s].at[forward]; q >= 0 {
		return t.script.partOf(forward, q)
	}
	return -1
}

// ringThrough returns the smallest ring through the bond of two pool atoms after the edit, 0 if none.
func (o *outcome) ringThrough(a, b int32) int {
	for _, p := range o.pieces {
		ia, ib := slices.Index(p.from, a), slices.Index(p.from, b)
		if ia >= 0 && ib >= 0 {
			if bond := p.m.BondBetween(ia, ib); bond >= 0 {
				return p.m.SmallestBondRing(bond)
			}
		}
	}
	return 0
}

// idle says that the products are the molecules charged: nothing has happened.
func (o *outcome) idle(w *workspace, ms []*subject) bool {
	if len(o.pieces) != len(o.pool.molecules) {
		return false
	}
	lines := uint64(0)
	for _, which := range o.copies {
		lines += ms[which].sketch()
	}
	if lines != sketchOf(o.pieces) {
		return false
	}
	var charged setKey
	for _, m := range o.pool.molecules {
		charged.add(m.Key())
	}
	return charged == w.setOf(o.pieces)
}

func (o *outcome) sane() bool {
	for i := range o.pieces {
		if !o.pieces[i].saneRings() {
			return false
		}
	}
	return true
}

// runEverywhere lets all like sites of one molecule react at once, each with a fresh copy of the partners.
func (t *Transform) runEverywhere(w *workspace, ms []*subject, found [][][]partMatch) []outcome {
	var out []outcome
	for i := range ms {
		sites := disjoint(&t.part[forward][0], t.byPreference(ms[i], found[0][i]))
		if len(sites) == 0 {
			continue
		}
		for _, partners := range partnerChoices(found[1:], len(ms)) {
			if o, ok := t.attemptEverywhere(w, ms, i, sites, partners); ok {
				out = append(out, o)
			}
			if len(out) >= maxCombinations {
				return out
			}
		}
	}
	return out
}

// byPreference orders the matches of the first part, the site that the preferences favour first: where two
// overlap (the two sides of an ether) it is the one that reacts.
func (t *Transform) byPreference(s *subject, matches []partMatch) []partMatch {
	if len(t.prefers) == 0 || len(matches) < 2 {
		return matches
	}
	points := make([]float64, len(matches))
	order := make([]int, len(matches))
	for i, m := range matches {
		order[i] = i
		for _, p := range t.prefers {
			atoms := make([]int32, len(p.slots))
			for k, slot := range p.slots {
				atoms[k] = -1
				if q := t.script.slots[slot].at[forward] - t.part[forward][0].first; q >= 0 && q < len(m) {
					atoms[k] = m[q]
				}
			}
			if atoms[0] >= 0 && !p.model.ring {
				points[i] += p.model.rate(s.Subject, atoms)
			}
		}
	}
	sort.SliceStable(order, func(x, y int) bool { return points[order[x]] > points[order[y]] })
	out := make([]partMatch, len(matches))
	for i, k := range order {
		out[i] = matches[k]
	}
	return out
}

// partnerChoice is a molecule and a match for each part after the first.
type partnerChoice []struct {
	molecule int
	match    partMatch
}

func partnerChoices(found [][][]partMatch, molecules int) []partnerChoice {
	choices := []partnerChoice{nil}
	for _, perMolecule := range found {
		var longer []partnerChoice
		for _, c := range choices {
			for i := 0; i < molecules; i++ {
				for _, m := range perMolecule[i] {
					n := append(append(partnerChoice(nil), c...), struct {
						molecule int
						match    partMatch
					}{i, m})
					longer = append(longer, n)
				}
			}
		}
		choices = longer
	}
	return choices
}

// disjoint picks, in order, matches whose significant atoms do not overlap.
func disjoint(p *partQuery, matches []partMatch) []partMatch {
	var picked []partMatch
	used := map[int32]bool{}
next:
	for _, m := range matches {
		for _, q := range p.significant {
			if used[m[q]] {
				continue next
			}
		}
		for _, q := range p.significant {
			used[m[q]] = true
		}
		picked = append(picked, m)
	}
	return picked
}

func (t *Transform) attemptEverywhere(w *workspace, ms []*subject, substrate int, sites []partMatch, partners partnerChoice) (outcome, bool) {
	o := outcome{sites: len(sites)}
	o.copies = []int{substrate}
	var perSite [][]laid
	for _, site := range sites {
		parts := []laid{{0, site}}
		for _, p := range partners {
			o.copies = append(o.copies, p.molecule)
			parts = append(parts, laid{len(o.copies) - 1, p.match})
		}
		perSite = append(perSite, parts)
	}
	o.laid = perSite[0]
	o.pool = w.poolOf(ms, o.copies)
	for _, parts := range perSite {
		o.mappings = append(o.mappings, t.mapping(w, o.pool, parts))
	}
	return o, t.finish(w, ms, &o)
}

// weight is the share that the score stands for beside the strongest score top, before normalisation.
func (o *outcome) weight(top float64) float64 { return math.Pow(10, o.score-top) }
