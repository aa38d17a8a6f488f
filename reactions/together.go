package reactions

// expandTogether adds the steps in which a condition set of the draft's transform carries out another
// transform in the same flask: before it in the retrosynthetic sense, so the companion is undone on the
// draft's precursors.
func (x *expander) expandTogether(d *draft) {
	if !d.found || fatal(d.objections) {
		return
	}
	for _, c := range d.t.Conditions {
		if !d.t.appliesTo(c, &d.outcome) {
			continue
		}
		for _, id := range c.Together {
			if companion := x.b.byID[id]; companion != nil {
				x.undoCompanion(d, c, companion)
			}
		}
	}
}

func (x *expander) undoCompanion(d *draft, c *Conditions, companion *Transform) {
	for i, r := range d.reactants {
		if d.uses[i] != 1 {
			continue
		}
		inner := &expander{b: x.b, target: r, stocked: x.stocked, w: x.w}
		for _, p := range companion.backwards(x.w, r, x.stocked) {
			e := inner.draft(companion, p)
			if !e.found || fatal(e.objections) {
				continue
			}
			if step, _ := d.joined(e, i, c).step(); step != nil {
				x.steps = append(x.steps, step)
			}
		}
	}
}

// joined puts the companion draft e, which makes reactant i of d, into one step under conditions c.
func (d *draft) joined(e *draft, i int, c *Conditions) *draft {
	j := &draft{b: d.b, t: d.t, together: []*Transform{e.t}, only: c, target: d.target, assessment: d.assessment}
	j.objections = append(append([]Objection(nil), d.objections...), e.objections...)
	j.over = append(append([]overReaction(nil), d.over...), e.over...)
	index := map[int]int{}
	for k, r := range d.reactants {
		if k != i {
			index[k] = j.add(r, d.busy[k], d.uses[k])
		}
	}
	inner := make([]int, len(e.reactants))
	for k, r := range e.reactants {
		busy := append([]bool(nil), e.busy[k]...)
		for a, o := range e.origins {
			if o.Reactant == int32(k) && d.busy[i][a] {
				busy[o.Atom] = true
			}
		}
		inner[k] = j.add(r, busy, e.uses[k])
	}
	j.origins = make([]Origin, len(d.origins))
	for a, o := range d.origins {
		switch {
		case o.Reactant < 0:
			j.origins[a] = o
		case int(o.Reactant) != i:
			j.origins[a] = Origin{int32(index[int(o.Reactant)]), o.Atom}
		default:
			from := e.origins[o.Atom]
			if from.Reactant >= 0 {
				from.Reactant = int32(inner[from.Reactant])
			}
			j.origins[a] = from
		}
	}
	return j
}

func (d *draft) add(r *subject, busy []bool, uses int) int {
	for i, old := range d.reactants {
		if old.key == r.key {
			d.uses[i] += uses
			return i
		}
	}
	d.reactants = append(d.reactants, r)
	d.busy = append(d.busy, busy)
	d.uses = append(d.uses, uses)
	return len(d.reactants) - 1
}
