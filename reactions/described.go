package reactions

import (
	"fmt"
	"slices"
	"strings"

	"shelfward/reactions/reagent"
)

// match compares a condition set with the description: every reagent that is not optional must be
// there, by name or by what it does; what else is there and active stays unexplained.
func (j *judge) match(t *Transform, c *Conditions) candidate {
	s := candidate{t: t, c: c, matched: true}
	if !j.described {
		return s
	}
	explained := make([]bool, len(j.mentions))
	early := false // a reagent of the step itself serves, not only the work-up
	for _, ch := range c.Reagents {
		hit := false
		for i := range j.mentions {
			if j.serves(&j.mentions[i], ch) {
				hit, explained[i] = true, true
				early = early || !j.mentions[i].late
			}
		}
		hit = hit || ch.Name == "water" && j.with.Has("aqueous") // 'aqueous acetone' names the water as well
		if hit && !ch.Optional {
			s.served++
		}
		if !hit && !ch.Optional {
			s.missing = append(s.missing, ch.Name)
		}
	}
	for _, sol := range c.Solvents {
		for i := range j.mentions {
			if r := j.find(sol.Name); r != nil && r == j.mentions[i].r {
				explained[i] = true
			}
		}
	}
	for _, name := range c.WorkupMaterials {
		for i := range j.mentions {
			if r := j.find(name); r != nil && r == j.mentions[i].r && !j.mentions[i].main {
				explained[i] = true
			}
		}
	}
	for i, m := range j.mentions {
		if m.active && !explained[i] && !j.partner(t, &j.mentions[i]) {
			s.unexplained = append(s.unexplained, m.r.Name)
			if m.steers() {
				s.foreign = append(s.foreign, m.r.Name)
			}
		}
	}
	if s.served > 0 && !early && len(s.unexplained) > 0 && len(s.missing) == 0 {
		s.missing = append(s.missing, "its reagents before the work-up")
	}
	s.matched = len(s.missing) == 0 && j.factsAllow(c, &s)
	return s
}

// steering lists acts of reagents that decide what a step is: a transform that has no place for one
// describes another step.
var steering = []string{"organocuprate", "oxidant", "hydride-aluminium", "hydride-borohydride", "hydride-dibal", "borane", "hydrogen-gas",
	"halogen", "halogenating-agent", "halogenating-imide", "nitrating", "sulfonating", "metal-zinc", "metal-sodium", "dissolving-metal", "diazoalkane"}

func (m *mentioned) steers() bool {
	return !m.late && !m.r.Class && slices.ContainsFunc(steering, func(act string) bool { return m.acts[act] })
}

// partner says that a substance named among the conditions is one of the materials of the transform itself.
func (j *judge) partner(t *Transform, m *mentioned) bool {
	if m.free == nil {
		mol, err := m.r.Molecule()
		if err != nil || mol == nil {
			return false
		}
		for _, part := range mol.Split() {
			if part.NumAtoms() > 1 || !isMetal(part.Atom(0).Element) {
				m.free = append(m.free, j.b.subject(protonated(part.FreeForm())))
			}
		}
	}
	for i := range t.part[forward] {
		for _, s := range m.free {
			if len(t.part[forward]) > 1 && t.part[forward][i].query.Matches(s.Subject) {
				return true
			}
		}
	}
	return false
}

func (j *judge) find(name string) *reagent.Reagent {
	if j.table == nil {
		return nil
	}
	r, known := j.names[name]
	if !known {
		r, _ = j.table.Named(name)
		j.names[name] = r
	}
	return r
}

// serves says whether a mentioned substance can stand for a charge of the condition set.
func (j *judge) serves(m *mentioned, ch Charge) bool {
	r := j.find(ch.Name)
	if r != nil && r == m.r {
		return true
	}
	for _, act := range ch.Like {
		if m.acts[act] {
			return true
		}
	}
	if len(ch.Like) > 0 || r == nil {
		return false
	}
	for _, act := range r.Acts { // no list of like acts: the leading act decides
		return !passive(act) && m.acts[act]
	}
	return false
}

// measured returns a test of the parts of an assessment: is another material stated to be limited to one
// equivalent, and no excess of anything stated?
func (j *judge) measured(a *assessment, pool []*subject) func(part int) bool {
	return func(part int) bool {
		own := pool[a.outcome.copies[a.outcome.laid[part].copy]]
		limited := false
		for _, st := range j.with.Stages {
			for _, m := range st.Mentions {
				if m.Excess {
					return false
				}
				if mol := mentionMolecule(m); m.Limited && mol != nil {
					key := mol.FreeForm().Key()
					limited = limited || key != own.key && slices.ContainsFunc(j.reactants, func(s *subject) bool { return s.key == key })
				}
			}
		}
		return limited
	}
}

// has says whether a fact is stated or brought by a salt among the materials.
func (j *judge) has(fact string) bool { return j.with.Has(fact) || slices.Contains(j.brought, fact) }

// needsHeatC is the lower end of a condition set from which a flask said to be cold or at room
// temperature does nothing: a hundredfold slower for 60 degrees (rule of thumb, common practice).
const needsHeatC = 85

// factsAllow looks at heat, cold, light and the like.
func (j *judge) factsAllow(c *Conditions, s *candidate) bool {
	if c.Temperature[0] >= needsHeatC && j.with.Unheated() {
		s.missing = append(s.missing, fmt.Sprintf("heat (%.0f to %.0f C)", c.Temperature[0], c.Temperature[1]))
		return false
	}
	for _, f := range c.NeverWith {
		if j.has(f) {
			s.missing = append(s.missing, "not "+f)
			return false
		}
	}
	if len(c.OnlyWith) == 0 {
		return true
	}
	for _, f := range c.OnlyWith {
		if j.has(f) {
			s.asked++ // what the set insists on is there: it is meant more than a set that does not ask
			return true
		}
	}
	s.missing = append(s.missing, strings.Join(c.OnlyWith, " or "))
	return false
}
