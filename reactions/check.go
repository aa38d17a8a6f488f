package reactions

import (
	"context"
	"fmt"
	"slices"
	"sort"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions/reagent"
)

// Fault is one thing wrong with a transform, found by running its examples.
type Fault struct {
	Place, Transform, Text string
}

func (f Fault) String() string { return fmt.Sprintf("%s: %s: %s", f.Place, f.Transform, f.Text) }

// Check runs every example and reject of a transform in both directions and balances its condition sets.
func (b *Book) Check(t *Transform) []Fault {
	var faults []Fault
	for _, ex := range t.Examples {
		faults = append(faults, b.checkExample(t, ex)...)
	}
	for _, ex := range t.Rejects {
		if text := b.checkReject(t, ex); text != "" {
			faults = append(faults, Fault{ex.File, t.ID, text})
		}
	}
	return faults
}

// CheckNames asks that every reagent, solvent and material of a work-up stands in the table.
func (t *Transform) CheckNames(table *reagent.Table) []Fault {
	var faults []Fault
	ask := func(c *Conditions, what, name string) {
		if _, ok := table.Named(name); ok {
			return
		}
		near := ""
		if list := table.Near(name, 3); len(list) > 0 {
			near = "; near: " + strings.Join(list, ", ")
		}
		faults = append(faults, Fault{c.File, t.ID, fmt.Sprintf("no %s %q in rules/reagents.yaml%s", what, name, near)})
	}
	for _, c := range t.Conditions {
		for _, r := range c.Reagents {
			ask(c, "reagent", r.Name)
		}
		for _, s := range c.Solvents {
			ask(c, "solvent", s.Name)
		}
		for _, name := range c.WorkupMaterials {
			ask(c, "material of a work-up", name)
		}
	}
	return faults
}

func (b *Book) readExample(ex Example) (from []*subject, target *molecule.Molecule, err error) {
	for _, s := range ex.From {
		m, err := smiles.Read(s)
		if err != nil {
			return nil, nil, err
		}
		from = append(from, b.subject(m.FreeForm()))
	}
	m, err := smiles.Read(ex.To)
	if err != nil {
		return nil, nil, err
	}
	return distinct(from), m.FreeForm(), nil
}

func distinct(list []*subject) []*subject {
	var out []*subject
	seen := map[molecule.Key]bool{}
	for _, s := range list {
		if !seen[s.key] {
			seen[s.key] = true
			out = append(out, s)
		}
	}
	return out
}

func (b *Book) checkExample(t *Transform, ex Example) []Fault {
	fault := func(format string, args ...any) []Fault {
		return []Fault{{ex.File, t.ID, fmt.Sprintf(format, args...)}}
	}
	from, target, err := b.readExample(ex)
	if err != nil {
		return fault("%v", err)
	}
	a := b.newWorkspace().assess(t, from, target)
	if !a.found && b.stepFrom(t, from, target) != nil {
		return nil // with a companion in the same flask
	}
	if !a.found {
		return fault("forwards, %s does not give %s%s", strings.Join(ex.From, " + "), ex.To, gaveInstead(a))
	}
	if fatal(a.objections) {
		return fault("forwards: %s", a.objections[0].Text)
	}
	var faults []Fault
	if a.share > ex.Share {
		faults = append(faults, fault("forwards: the share of %s is %s (%.0f %%), not %s%s", ex.To, a.share, 100*a.fraction, ex.Share, gaveInstead(a))...)
	}
	faults = append(faults, b.checkBalance(t, ex, &a)...)
	faults = append(faults, b.checkMedia(t, ex, &a, from)...)
	return append(faults, b.checkBackwards(t, ex, from, target)...)
}

// stepFrom looks for a step of t, companions included, that makes target from just these molecules.
func (b *Book) stepFrom(t *Transform, from []*subject, target *molecule.Molecule) *Step {
	have := map[molecule.Key]bool{}
	for _, s := range from {
		have[s.M.SeenThroughKey()] = true
	}
	x := &expander{b: b, target: b.subject(target), w: b.newWorkspace(),
		stocked: func(m *molecule.Molecule) bool { return have[m.SeenThroughKey()] }}
	x.expand(t)
	for _, s := range x.steps {
		all := len(s.Reactants) == len(have)
		for _, r := range s.Reactants {
			all = all && have[r.Molecule.SeenThroughKey()]
		}
		if all {
			return s
		}
	}
	return nil
}

func gaveInstead(a assessment) string {
	var names []string
	for i, p := range a.products {
		if i < 3 {
			names = append(names, fmt.Sprintf("%s (%.0f %%)", written(p.Molecule), 100*p.Fraction))
		}
	}
	if len(names) == 0 {
		return "; it gives nothing"
	}
	return "; it gives " + strings.Join(names, ", ")
}

func (b *Book) checkBalance(t *Transform, ex Example, a *assessment) []Fault {
	var faults []Fault
	for _, c := range t.Conditions {
		if !t.appliesTo(c, &a.outcome) {
			continue
		}
		if left := t.imbalance(&a.outcome, c); left != "" {
			faults = append(faults, Fault{c.File, t.ID, fmt.Sprintf("conditions %s do not balance in the example at %s: right minus left = %s", c.ID, ex.File, left)})
		}
	}
	return faults
}

// checkMedia asks that some condition set of the example is free of objections (unless some are expected).
func (b *Book) checkMedia(t *Transform, ex Example, a *assessment, from []*subject) []Fault {
	sets, last := b.cleanSet(t, ex, a, from)
	switch {
	case sets == 0:
		return []Fault{{ex.File, t.ID, "no condition set applies to the example"}}
	case len(last) == 0 || ex.Objects || ex.Share > ShareMain && !fatal(last):
		return nil
	}
	return []Fault{{ex.File, t.ID, "no condition set is free of objections: " + last[0].Text}}
}

// cleanSet looks for a condition set without objections; it returns how many apply and the objections of
// the last one where none is clean.
func (b *Book) cleanSet(t *Transform, ex Example, a *assessment, from []*subject) (sets int, last []Objection) {
	w := b.newWorkspace()
	busy := a.outcome.busyAtoms(w, from)
	weighed := t.otherSites(w, from, busy)
	for _, c := range t.Conditions {
		if ex.With != "" && c.ID != ex.With || !t.appliesTo(c, &a.outcome) {
			continue
		}
		sets++
		list := a.under(c, nil)
		for i, r := range from {
			list = append(list, b.media.objections(c.Media, r.Subject, busy[i], weighed[i])...)
		}
		if len(list) == 0 {
			return sets, nil
		}
		last = list
	}
	return sets, last
}

func (b *Book) checkBackwards(t *Transform, ex Example, from []*subject, target *molecule.Molecule) []Fault {
	want := make([]string, len(from))
	for i, s := range from {
		k := s.M.WithoutStereo().SeenThroughKey() // marks are the forward run's affair
		want[i] = string(k[:])
	}
	sort.Strings(want)
	stocked := func(m *molecule.Molecule) bool {
		k := m.WithoutStereo().SeenThroughKey()
		for _, w := range want {
			if w == string(k[:]) {
				return true
			}
		}
		return false
	}
	var seen []string
	for _, p := range t.backwards(b.newWorkspace(), b.subject(target), stocked) {
		var keys, names []string
		for _, pc := range p.pieces {
			k := pc.m.WithoutStereo().SeenThroughKey()
			if !slices.Contains(keys, string(k[:])) {
				keys = append(keys, string(k[:]))
				names = append(names, written(pc.m))
			}
		}
		sort.Strings(keys)
		if strings.Join(keys, "") == strings.Join(want, "") {
			return nil
		}
		seen = append(seen, strings.Join(names, " + "))
	}
	if len(seen) > 4 {
		seen = seen[:4]
	}
	return []Fault{{ex.File, t.ID, fmt.Sprintf("backwards, %s does not come from %s; proposals: %s", ex.To, strings.Join(ex.From, " + "), strings.Join(seen, " | "))}}
}

// checkReject returns a text when the reject comes out sound.
func (b *Book) checkReject(t *Transform, ex Example) string {
	from, target, err := b.readExample(ex)
	if err != nil {
		return err.Error()
	}
	a := b.newWorkspace().assess(t, from, target)
	if !a.found {
		return ""
	}
	if sets, objections := b.cleanSet(t, ex, &a, from); sets > 0 && len(objections) == 0 {
		return fmt.Sprintf("the reject %s to %s comes out without objection", strings.Join(ex.From, " + "), ex.To)
	}
	return ""
}

// CheckAll checks every transform, cancellable.
func (b *Book) CheckAll(ctx context.Context) ([]Fault, error) {
	var faults []Fault
	for _, t := range b.Transforms {
		if err := ctx.Err(); err != nil {
			return faults, err
		}
		faults = append(faults, b.Check(t)...)
	}
	return faults, nil
}
