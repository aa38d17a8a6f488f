package reagent

import (
	"slices"
	"strings"
)

// mention handles a reagent that was read.
func (r *reader) mention(reagent *Reagent, text string) {
	r.flushUnknown()
	if r.negated {
		r.negated = false
		return
	}
	if len(reagent.Means) > 0 {
		for _, name := range reagent.Means {
			r.add(Mention{Reagent: r.table.byName[fold(name)], Text: name})
		}
		return
	}
	r.add(Mention{Reagent: reagent, Text: text})
}

// add puts a mention into the stage, with the words before it, as an alternative if one was announced.
func (r *reader) add(m Mention) {
	m.take(r.pending)
	r.pending, r.hasWords = Mention{}, false
	m.piece, m.Note = r.count, r.note
	if r.either {
		m.Set, m.Option = r.alternative(m)
		if r.note || r.eitherAll {
			r.optionOf = [2]int{m.Set, m.Option}
		}
		if !r.note {
			r.either = false
		}
	} else if r.optionOf[0] > 0 {
		m.Set, m.Option = r.optionOf[0], r.optionOf[1]
	}
	r.stage.Mentions = append(r.stage.Mentions, m)
	r.last = len(r.stage.Mentions) - 1
}

// alternative numbers a mention that may be taken instead of earlier ones: inside a piece instead of
// the last mention, at the head of a piece instead of the whole piece before, in a note instead of
// the solvents (if it is one) or of the whole stage so far.
func (r *reader) alternative(m Mention) (set, option int) {
	if r.note && r.optionOf[0] > 0 {
		return r.optionOf[0], r.optionOf[1]
	}
	replaced := r.replacedBy(m)
	if len(replaced) == 0 { // 'no solvent (or dimethylformamide)': the first choice is nothing
		r.sets++
		return r.sets, 2
	}
	for _, i := range replaced {
		if s := r.stage.Mentions[i].Set; s > 0 {
			set = s
		}
	}
	if set == 0 {
		r.sets++
		set = r.sets
		for _, i := range replaced {
			r.stage.Mentions[i].Set, r.stage.Mentions[i].Option = set, 1
		}
	}
	for _, other := range r.stage.Mentions {
		if other.Set == set {
			option = max(option, other.Option)
		}
	}
	return set, option + 1
}

// replacedBy lists the mentions that m is an alternative to.
func (r *reader) replacedBy(m Mention) []int {
	all := r.stage.Mentions
	if len(all) == 0 {
		return nil
	}
	last := len(all) - 1
	var list []int
	switch {
	case r.note && akin(all[last], m):
		list = []int{last}
	case r.note:
		for i := range all {
			list = append(list, i)
		}
	case r.eitherAll:
		for i := range all {
			if all[i].piece == all[last].piece {
				list = append(list, i)
			}
		}
	default:
		list = []int{last}
	}
	return list
}

// akin reports whether two substances do the same job, so that one may stand for the other.
func akin(a, b Mention) bool {
	if a.Reagent == nil || b.Reagent == nil {
		return a.Reagent == b.Reagent
	}
	return slices.ContainsFunc(a.Reagent.Acts, func(act string) bool {
		return act != "oxidant" && act != "reductant" && b.Reagent.Does(act)
	}) || a.Reagent.Does("solvent") && b.Reagent.Does("solvent") || a.onMetal() && b.onMetal()
}

// onMetal reports whether the substance is a hydrogenation catalyst.
func (m Mention) onMetal() bool {
	return slices.ContainsFunc(m.Reagent.Acts, func(act string) bool { return strings.HasPrefix(act, "metal-catalyst-") })
}

// take adds what the words say of the substance.
func (m *Mention) take(w Mention) {
	m.Excess = m.Excess || w.Excess
	m.Catalytic = m.Catalytic || w.Catalytic
	m.Limited = m.Limited || w.Limited
	m.Dry = m.Dry || w.Dry
	m.Aqueous = m.Aqueous || w.Aqueous
	m.Concentrated = m.Concentrated || w.Concentrated
	m.gas = m.gas || w.gas
	if w.Equivalents > 0 {
		m.Equivalents = w.Equivalents
	}
	if w.Strength.Known() {
		m.Strength = w.Strength
	}
}

// phrase handles a phrase of the wording.
func (r *reader) phrase(p *phrase) {
	r.flushUnknown()
	switch p.kind {
	case kindLater:
		r.later()
	case kindEither:
		r.either = true
		r.eitherAll = r.last < 0 && !r.note
	case kindNegate:
		r.negated = true
	case kindFact, kindWorkup:
		if r.negated {
			r.negated = false
			return
		}
		for _, fact := range p.facts {
			r.fact(fact)
		}
		r.heat(p.temperature, false)
	}
}

// later opens the next stage unless the current one is still empty.
func (r *reader) later() {
	if r.note {
		return
	}
	r.closePiece()
	if len(r.stage.Mentions) > 0 || len(r.stage.Facts) > 0 || len(r.done) == 0 {
		r.nextStage()
	}
	r.last, r.optionOf = -1, [2]int{}
}

// fact notes a fact for the stage, and for the substance next to it where it describes one.
func (r *reader) fact(fact string) {
	r.stage.Facts = insert(r.stage.Facts, fact)
	said := true
	switch fact {
	case "excess":
		r.pending.Excess = true
	case "catalytic":
		r.pending.Catalytic = true
	case "limited":
		r.pending.Limited = true
	case "dry":
		r.pending.Dry = true
	case "aqueous":
		r.pending.Aqueous = true
	case "concentrated":
		r.pending.Concentrated = true
	case "gas":
		r.pending.gas = true
	case workupFact:
		r.stage.Workup, said = true, false
	default:
		said = false
	}
	r.hasWords = r.hasWords || said
}

// quantity notes a number with its unit.
func (r *reader) quantity(q quantity) {
	if q.later {
		r.later()
		return
	}
	for _, fact := range q.facts {
		r.fact(fact)
	}
	r.heat(q.temperature, q.upTo)
	if q.ph != nil {
		r.stage.PH = q.ph
		r.stage.Facts = insert(r.stage.Facts, "pH")
	}
	if q.equivalents > 0 {
		r.pending.Equivalents, r.hasWords = q.equivalents, true
	}
	if q.strength.Known() {
		r.pending.Strength, r.hasWords = q.strength, true
	}
}

// What a chemist calls hot and cold. Source: common practice.
const (
	hotFromC    = 40
	coldToC     = 10
	deepColdToC = -40 // dry ice and below: what a measured reagent is picky at
)

// heat widens the stage's temperature span. An upper end alone ('below 60 C') is no heating.
func (r *reader) heat(span *[2]float64, upTo bool) {
	if span == nil {
		return
	}
	if t := r.stage.TemperatureC; t == nil {
		r.stage.TemperatureC = &[2]float64{span[0], span[1]}
	} else {
		t[0], t[1] = min(t[0], span[0]), max(t[1], span[1])
	}
	if span[1] >= hotFromC && !upTo {
		r.stage.Facts = insert(r.stage.Facts, "hot")
	}
	if span[0] <= coldToC && !upTo || span[1] <= coldToC {
		r.stage.Facts = insert(r.stage.Facts, "cold")
	}
	if span[1] <= deepColdToC {
		r.stage.Facts = insert(r.stage.Facts, "deep-cold")
	}
}

// nextStage closes the current stage, with the facts that its substances bring.
func (r *reader) nextStage() {
	s := r.stage
	for i, m := range s.Mentions {
		if m.Reagent == nil {
			continue
		}
		if m.Reagent.DryForm != "" && (m.Dry || m.gas) {
			m.Reagent = r.table.byName[fold(m.Reagent.DryForm)]
			s.Mentions[i] = m
		}
		for _, act := range m.Reagent.Acts {
			for _, fact := range r.table.wording.factsOfAct[act] {
				s.Facts = insert(s.Facts, fact)
			}
		}
		if m.Reagent.Does("water") || m.Aqueous || m.wateryAcid() {
			s.Facts = insert(s.Facts, "aqueous")
		}
	}
	if len(s.Mentions) > 0 || len(s.Facts) > 0 || s.TemperatureC != nil {
		r.done = append(r.done, s)
	}
	r.stage, r.last, r.optionOf, r.sets = Stage{}, -1, [2]int{}, 0
	r.either, r.eitherAll = false, false
}

// wateryAcid reports whether the name or a stated strength makes a mineral acid a solution in water;
// 'HBr' alone may be the gas.
func (m Mention) wateryAcid() bool {
	if !m.Reagent.Does("mineral-acid") {
		return false
	}
	named := m.Reagent.Strength.In == "water" && strings.HasSuffix(m.Text, " acid")
	return named || m.Strength.MolarM > 0 || m.Strength.MassFraction > 0 && m.Strength.MassFraction < 0.9
}

// Reagents lists the distinct reagents of a description in the order of their first mention.
func (d Description) Reagents() []*Reagent {
	var list []*Reagent
	for _, s := range d.Stages {
		for _, m := range s.Mentions {
			if m.Reagent != nil && !slices.Contains(list, m.Reagent) {
				list = append(list, m.Reagent)
			}
		}
	}
	return list
}
