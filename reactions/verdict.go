package reactions

import (
	"fmt"
	"strings"
)

// conclude turns candidates into a verdict.
func (j *judge) conclude() Judgement {
	out := Judgement{NotUnderstood: j.with.NotUnderstood}
	best := j.bestFound()
	switch {
	case best == nil:
		j.concludeNothing(&out)
	case best.matched:
		j.concludeMatched(best, &out)
	default:
		j.concludeOther(best, &out)
	}
	if len(out.NotUnderstood) > 0 && out.Verdict == Sound {
		out.Verdict = Doubtful
	}
	return out
}

// bestFound picks the candidate that stands strongest: matched, without fatal objection, with the
// fewest unexplained reagents and objections.
func (j *judge) bestFound() *candidate {
	rank := func(c *candidate) [5]int {
		r := [5]int{1, 1, len(c.unexplained), len(c.objections), len(c.missing)}
		if c.matched {
			r[0] = 0
		}
		if !fatal(c.objections) {
			r[1] = 0
		}
		return r
	}
	var best *candidate
	for i := range j.found {
		c := &j.found[i]
		if best == nil || less(rank(c), rank(best)) {
			best = c
		}
	}
	return best
}

func less(a, b [5]int) bool {
	for i := range a {
		if a[i] != b[i] {
			return a[i] < b[i]
		}
	}
	return false
}

func (j *judge) concludeMatched(best *candidate, out *Judgement) {
	out.Transforms = []*Transform{best.t}
	out.Expected = best.a.products
	out.Racemic = best.a.racemic
	out.Objections = append(out.Objections, best.objections...)
	if rival := j.rivalOf(best); rival != nil {
		out.Objections = append(out.Objections, Objection{Kind: KindOther, Fatal: true, Source: rival.t.Source.Text,
			Text: fmt.Sprintf("with these reagents %s runs instead and gives %s", rival.t.Name, productNames(rival.a.products))})
		out.Expected = rival.a.products
		out.Transforms = append(out.Transforms, rival.t)
	}
	if best.served == 0 {
		for _, name := range best.foreign {
			out.Objections = append(out.Objections, Objection{Kind: KindNoReaction, Source: best.t.Source.Text,
				Text: fmt.Sprintf("%s makes no use of %s: with it the materials meet something else", best.t.Name, name)})
		}
	}
	switch {
	case fatal(out.Objections):
		out.Verdict = Unsound
	case len(out.Objections) > 0:
		out.Verdict = Doubtful
	default:
		out.Verdict = Sound
	}
}

// rivalOf looks for another transform that explains more of the reagents, or needs more of them to give an
// isomer, or takes up a material that stays over, and gives something else.
func (j *judge) rivalOf(best *candidate) *candidate {
	for i := range j.others {
		c := &j.others[i]
		closer := len(c.unexplained) < len(best.unexplained) ||
			len(c.unexplained) == len(best.unexplained) && best.served > 0 && c.served+c.asked > best.served+best.asked && isomers(best, c) ||
			len(c.unexplained) == len(best.unexplained) && c.uses > best.uses && c.served >= best.served && len(c.objections) == 0
		if c.t != best.t && closer && !fatal(c.objections) && len(c.a.products) > 0 {
			return c
		}
	}
	return nil
}

// isomers says that two candidates give isomers: the same change, the conditions choose where.
func isomers(a, b *candidate) bool {
	if len(a.a.products) == 0 || len(b.a.products) == 0 {
		return false
	}
	return a.a.products[0].Molecule.Formula() == b.a.products[0].Molecule.Formula()
}

func productNames(list []Product) string {
	var names []string
	for i, p := range list {
		if i < 2 {
			names = append(names, written(p.Molecule))
		}
	}
	if len(names) == 0 {
		return "another product"
	}
	return strings.Join(names, " and ")
}

// concludeOther: a transform gives the product, but not with these reagents.
func (j *judge) concludeOther(best *candidate, out *Judgement) {
	out.Transforms = []*Transform{best.t}
	out.Verdict = Unsound
	if len(j.known) == 0 && len(j.others) == 0 {
		out.Verdict = Doubtful
	}
	if len(out.NotUnderstood) > 0 {
		out.Verdict = Doubtful
	}
	text := fmt.Sprintf("%s would give it, but these conditions lack %s", best.t.Name, strings.Join(best.missing, ", "))
	out.Objections = append(out.Objections, Objection{Kind: KindNoReaction, Text: text, Fatal: out.Verdict == Unsound})
	if rival := j.strongestOther(); rival != nil {
		out.Expected = rival.a.products
		out.Objections = append(out.Objections, Objection{Kind: KindSite, Fatal: out.Verdict == Unsound, Source: rival.t.Source.Text,
			Text: fmt.Sprintf("with these reagents %s runs and gives %s", rival.t.Name, productNames(rival.a.products))})
	}
	for _, o := range best.objections {
		out.Objections = append(out.Objections, o)
	}
}

func (j *judge) strongestOther() *candidate {
	var best *candidate
	for i := range j.others {
		c := &j.others[i]
		if fatal(c.objections) || len(c.a.products) == 0 {
			continue
		}
		if best == nil || len(c.unexplained) < len(best.unexplained) {
			best = c
		}
	}
	return best
}

// concludeNothing: no transform gives the product from these molecules.
func (j *judge) concludeNothing(out *Judgement) {
	rival := j.strongestOther()
	switch {
	case !j.described: // without conditions nothing runs instead
		out.Verdict = Unknown
		out.Objections = append(out.Objections, Objection{Kind: KindNoTransform,
			Text: "no loaded transform leads from these materials to this product"})
	case rival != nil:
		out.Verdict = Unsound
		out.Transforms = []*Transform{rival.t}
		out.Expected = rival.a.products
		kind := KindSite
		if !j.sameFormula(rival) {
			kind = KindOther
		}
		out.Objections = append(out.Objections, Objection{Kind: kind, Fatal: true, Source: rival.t.Source.Text,
			Text: fmt.Sprintf("with these reagents %s runs and gives %s, not the product claimed", rival.t.Name, productNames(rival.a.products))},
			Objection{Kind: KindNoTransform, Text: "no loaded transform leads from these materials to this product under any conditions"})
	case len(j.known) > 0:
		out.Verdict = Unsound
		out.Transforms = j.known[:min(3, len(j.known))]
		out.Objections = append(out.Objections, Objection{Kind: KindNoReaction, Fatal: true,
			Text: fmt.Sprintf("these are the conditions of %s, which needs other groups than these molecules offer", namesOf(out.Transforms))})
	case len(j.near) > 0:
		out.Verdict = Doubtful
		out.Transforms = j.near[:min(3, len(j.near))]
		out.Objections = append(out.Objections, Objection{Kind: KindNoReaction,
			Text: fmt.Sprintf("these may be the conditions of %s, which finds only part of what it needs here; no loaded transform gives the product", namesOf(out.Transforms))})
	default:
		out.Verdict = Unknown
		out.Objections = append(out.Objections, Objection{Kind: KindNoTransform,
			Text: "no loaded transform leads from these materials to this product"})
	}
	if len(out.NotUnderstood) > 0 && out.Verdict == Unsound {
		out.Verdict = Doubtful
	}
}

func (j *judge) sameFormula(c *candidate) bool {
	return len(c.a.products) > 0 && len(j.claimed) > 0 && c.a.products[0].Molecule.Formula() == j.claimed[0].Formula()
}

func namesOf(ts []*Transform) string {
	var names []string
	for _, t := range ts {
		names = append(names, t.Name)
	}
	return strings.Join(names, ", ")
}
