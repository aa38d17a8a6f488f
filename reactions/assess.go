package reactions

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"shelfward/molecule"
)

// Limits of the shares: what makes up more than half is the main product, down to a quarter it is even
// with others, below one part in twelve it is not worth isolating (common practice).
const (
	mainFraction  = 0.52
	evenFraction  = 0.28
	minorFraction = 0.08
)

// Product is one product that a step may give, with its estimated share.
type Product struct {
	Molecule *molecule.Molecule
	Fraction float64
	Share    Share
}

// assessment is what running a transform on given molecules says about a wanted product.
type assessment struct {
	found      bool
	outcome    outcome // the strongest outcome that gives the target
	cover      covering
	pieceIndex int
	count      int // target molecules per run
	fraction   float64
	share      Share
	racemic    bool
	objections []Objection // from site and stereo; the media are looked at per condition set
	over       []overReaction
	products   []Product // what forms, most first
}

// overReaction is a second reaction of the product; an excess of the material of part prevents it.
type overReaction struct {
	part int // from 0, -1: nothing prevents it
	Objection
}

// excessEquiv is the number of equivalents of a material from which its second reaction is held back.
const excessEquiv = 1.8

// under returns the objections that hold under a condition set (nil: under any). measured says of a part
// that its partner is stated to be one equivalent, so that the excess of the condition set is not there.
func (a *assessment) under(c *Conditions, measured func(part int) bool) []Objection {
	list := append([]Objection(nil), a.objections...)
	for _, o := range a.over {
		if c == nil || o.part < 0 || c.ReactantEquiv[o.part+1] < excessEquiv || measured != nil && measured(o.part) {
			list = append(list, o.Objection)
		}
	}
	return list
}

// fatal says whether one objection makes the step unsound.
func fatal(list []Objection) bool {
	for _, o := range list {
		if o.Fatal {
			return true
		}
	}
	return false
}

// assess runs t on the molecules and compares with the target.
func (w *workspace) assess(t *Transform, ms []*subject, target *molecule.Molecule) assessment {
	var a assessment
	outs := t.run(w, ms)
	a.weigh(w, outs, target)
	if !a.found {
		a.objections = append(a.objections, Objection{Kind: KindNoReaction, Fatal: true,
			Text: fmt.Sprintf("%s does not give this product from these materials", t.Name)})
		return a
	}
	a.judgeShare(t)
	a.judgeStereo(ms)
	a.judgeOver(w, t, ms)
	return a
}

// weigh finds the outcomes that give the target and their part of all outcomes.
func (a *assessment) weigh(w *workspace, outs []outcome, target *molecule.Molecule) {
	type group struct { // outcomes that give the same molecules
		lines  uint64 // sum of the sketches
		weight float64
		first  int
		cover  covering
	}
	var groups []group
	total, wanted := 0.0, 0.0
	best := -1
	top := topScore(outs)
	for i := range outs {
		o := &outs[i]
		lines := sketchOf(o.pieces)
		at := slices.IndexFunc(groups, func(g group) bool {
			return g.lines == lines && w.setOf(outs[g.first].pieces) == w.setOf(o.pieces)
		})
		if at < 0 {
			at = len(groups)
			c, _, _ := o.gives(target)
			groups = append(groups, group{lines: lines, first: i, cover: c})
		}
		g := &groups[at]
		if g.cover.ok && (best < 0 || better(g.cover, o, a.cover, &outs[best])) {
			best, a.cover = i, g.cover
		}
		if o.blocked != "" {
			continue
		}
		g.weight += o.weight(top)
		total += o.weight(top)
		if g.cover.ok && !g.cover.wrong {
			wanted += o.weight(top)
		}
	}
	a.products = nil
	for i := range groups {
		if g := &groups[i]; g.weight > 0 {
			a.products = append(a.products, Product{Molecule: outs[g.first].mainPiece(), Fraction: g.weight / total, Share: shareOf(g.weight / total)})
		}
	}
	slices.SortStableFunc(a.products, func(p, q Product) int { return cmp.Compare(q.Fraction, p.Fraction) })
	if best < 0 {
		return
	}
	a.found, a.outcome = true, outs[best]
	_, a.pieceIndex, a.count = outs[best].gives(target)
	if total > 0 {
		a.fraction = wanted / total
	}
	a.share = shareOf(a.fraction)
}

// topScore is the highest score of an outcome that is not blocked.
func topScore(outs []outcome) float64 {
	top := math.Inf(-1)
	for i := range outs {
		if outs[i].blocked == "" {
			top = max(top, outs[i].score)
		}
	}
	return top
}

// better prefers exact stereo, then the higher score.
func better(c covering, o *outcome, oldCover covering, old *outcome) bool {
	rank := func(c covering) int {
		switch {
		case c.exact:
			return 3
		case c.mirror && c.open == 0:
			return 2
		case !c.wrong:
			return 1
		}
		return 0
	}
	if rank(c) != rank(oldCover) {
		return rank(c) > rank(oldCover)
	}
	return o.score > old.score
}

func shareOf(f float64) Share {
	switch {
	case f >= mainFraction:
		return ShareMain
	case f >= evenFraction:
		return ShareEven
	case f >= minorFraction:
		return ShareMinor
	}
	return ShareTrace
}

// gives looks for the target among the pieces: how it is covered, which piece, how many of them.
func (o *outcome) gives(target *molecule.Molecule) (c covering, which, count int) {
	for i, p := range o.pieces {
		if p.m.NumAtoms() != target.NumAtoms() {
			continue
		}
		x := cover(p.m, target)
		if !x.ok {
			continue
		}
		if !c.ok {
			c, which = x, i
		}
		count++
	}
	return c, which, count
}

// mainPiece is the largest piece that was changed: what a chemist would call the product.
func (o *outcome) mainPiece() *molecule.Molecule {
	best := o.pieces[0].m
	for _, p := range o.pieces[1:] {
		if p.m.NumAtoms() > best.NumAtoms() {
			best = p.m
		}
	}
	return best
}

func (a *assessment) judgeShare(t *Transform) {
	if a.outcome.blocked != "" {
		a.objections = append(a.objections, Objection{Kind: a.outcome.stopped, Text: a.outcome.blocked, Fatal: true})
		return
	}
	if a.share == ShareMain {
		return
	}
	text := fmt.Sprintf("only about %.0f %% of the product is this isomer", 100*a.fraction)
	if other := a.rival(); other != "" {
		text += "; " + other + " forms too"
	}
	a.objections = append(a.objections, Objection{Kind: KindSite, Text: text, Fatal: a.share == ShareTrace, Source: preferenceSource(t)})
}

// rival names the strongest product that is not the target.
func (a *assessment) rival() string {
	want := a.outcome.pieces[a.pieceIndex].m.FlatKey()
	for _, p := range a.products {
		if p.Molecule.FlatKey() != want {
			return written(p.Molecule)
		}
	}
	return ""
}

func preferenceSource(t *Transform) string {
	for _, p := range t.prefers {
		if p.model.source != "" {
			return p.model.source
		}
	}
	return t.Source.Text
}

// judgeStereo compares the marks. Achiral materials give relative marks: the mirror image is the same
// racemate. An isolated centre left open is racemic; several open marks mean a mixture.
func (a *assessment) judgeStereo(ms []*subject) {
	c, handed := a.cover, false
	for _, which := range a.outcome.copies {
		s := ms[which]
		handed = handed || !s.relative && len(s.M.Centers()) > 0 && s.M.Mirror().Key() != s.M.Key()
	}
	switch {
	case c.exact:
		p := a.outcome.pieces[a.pieceIndex].m
		a.racemic = !handed && len(p.Centers()) > 0 && p.Mirror().Key() != p.Key()
	case c.wrong || c.mirror && handed:
		a.objections = append(a.objections, Objection{Kind: KindStereo, Fatal: true,
			Text: "the step gives another stereoisomer: " + written(a.outcome.pieces[a.pieceIndex].m)})
	case c.open == 0:
		a.racemic = true
	case c.openRaw:
		a.objections = append(a.objections, Objection{Kind: KindStereo, Text: "the geometry of the new double bond is not controlled: a mixture of E and Z"})
	case c.open == 1 && len(a.outcome.pieces[a.pieceIndex].m.Centers()) == 0 && handed && a.loses(ms):
		a.objections = append(a.objections, Objection{Kind: KindStereo, Fatal: true,
			Text: "the centre loses its configuration in this step: a racemate, not one enantiomer"})
	case c.open == 1 && len(a.outcome.pieces[a.pieceIndex].m.Centers()) == 0:
		a.racemic = true
	default:
		a.objections = append(a.objections, Objection{Kind: KindStereo, Text: "a mixture of stereoisomers: the step leaves a marked centre open"})
		a.fraction /= 2
	}
}

// loses says that a marked centre of a material takes part in the edit and comes out unmarked.
func (a *assessment) loses(ms []*subject) bool {
	p := a.outcome.pieces[a.pieceIndex]
	for _, to := range a.outcome.mappings {
		for _, x := range to {
			if x < 0 || slices.Index(p.from, x) < 0 {
				continue
			}
			c, atom := a.outcome.pool.locate(x)
			if _, marked := centerAt(ms[a.outcome.copies[c]].M, atom); !marked {
				continue
			}
			if _, still := centerAt(p.m, int32(slices.Index(p.from, x))); !still {
				return true
			}
		}
	}
	return false
}

// judgeOver looks for a second reaction at an equal or better site of the product.
func (a *assessment) judgeOver(w *workspace, t *Transform, ms []*subject) {
	product := w.subjectOf(&a.outcome.pieces[a.pieceIndex])
	for _, g := range t.goesOn {
		partner := ms[a.outcome.copies[a.outcome.laid[g.part].copy]]
		if g.query.Matches(partner.Subject) && t.fitsAgain(product, g.part) {
			a.over = append(a.over, overReaction{-1, Objection{Kind: KindOverReaction, Text: g.why, Fatal: true, Source: t.Source.Text}})
			return
		}
	}
	if t.Everywhere || t.Once {
		return
	}
	for part := range t.part[forward] {
		s := ms[a.outcome.copies[a.outcome.laid[part].copy]]
		before := len(disjoint(&t.part[forward][part], t.part[forward][part].matches(w, s.Subject, nil)))
		if before < 2 || t.reusesPart(a, part) {
			continue
		}
		again := t.scoreAgain(w, ms, product, part, a)
		if again >= a.outcome.score-0.3 {
			a.over = append(a.over, overReaction{part, Objection{Kind: KindOverReaction, Source: preferenceSource(t), Text: fmt.Sprintf(
				"the product has another such site that reacts as fast: part of it goes on (%s in excess helps)", written(s.M))}})
			return
		}
	}
}

// reusesPart says whether the same molecule serves another part as well (then its other site is used).
func (t *Transform) reusesPart(a *assessment, part int) bool {
	for i, l := range a.outcome.laid {
		if i != part && l.copy == a.outcome.laid[part].copy {
			return true
		}
	}
	return false
}

// fitsAgain says whether some other part of the reactant side matches the product.
func (t *Transform) fitsAgain(product *subject, partner int) bool {
	for i := range t.part[forward] {
		if i != partner && t.part[forward][i].query.Matches(product.Subject) {
			return true
		}
	}
	return false
}

// scoreAgain runs the transform with the product in place of the molecule of one part.
func (t *Transform) scoreAgain(w *workspace, ms []*subject, product *subject, part int, a *assessment) float64 {
	best := -99.0
	now := a.outcome.attempt
	list := []*subject{}
	for i := range now.copies {
		list = append(list, ms[now.copies[i]])
	}
	at := now.laid[part].copy
	list[at] = product
	for _, match := range t.part[forward][part].matches(w, product.Subject, nil) {
		next := attempt{copies: make([]int, len(list)), laid: append([]laid(nil), now.laid...)}
		for i := range next.copies {
			next.copies[i] = i
		}
		next.laid[part] = laid{at, match}
		if o, ok := t.attempt(w, list, next); ok && o.blocked == "" && o.score > best {
			best = o.score
		}
	}
	return best
}

// busyAtoms marks, per reactant molecule, the atoms that the outcome's mappings cover.
func (o *outcome) busyAtoms(w *workspace, ms []*subject) [][]bool {
	busy := w.busy.take(len(ms))
	for i, s := range ms {
		busy[i] = w.flags.take(s.M.NumAtoms())
	}
	for _, to := range o.mappings {
		for _, a := range to {
			if a >= 0 {
				c, atom := o.pool.locate(a)
				busy[o.copies[c]][atom] = true
			}
		}
	}
	return busy
}
