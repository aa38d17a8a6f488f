package sheet

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/planner/route"
	"shelfward/reactions"
	"shelfward/reactions/hazard"
)

// origins lists where a figure may come from, the strongest first, with its letter on the sheet.
var origins = []struct{ word, mark string }{{"published", "P"}, {"own", "O"}, {"near", "N"}, {"class", "C"}, {"estimated", "E"}}

// weakest returns the weakest of several origins with its letter; what is not stated is estimated.
func weakest(words ...string) (word, mark string) {
	last := 0
	for _, o := range words {
		i := slices.IndexFunc(origins, func(x struct{ word, mark string }) bool { return x.word == o })
		if i < 0 {
			i = len(origins) - 1
		}
		last = max(last, i)
	}
	return origins[last].word, origins[last].mark
}

func (w *writer) step(i int) (Step, error) {
	src, set := &w.route.Steps[i], w.sets[i]
	product, err := w.desk.Read(src.Product)
	if err != nil {
		return Step{}, err
	}
	s := Step{Number: src.Number, Name: src.Name, Transform: src.Transform, Product: w.compound(product), Yield: src.Yield,
		Sources: []string{set.Source.String()}, SureFactor: w.sureFactor(i)}
	words := []string{src.Origin, set.Origin}
	for _, o := range src.Objections {
		s.Objections = append(s.Objections, o.Text)
		words = append(words, "estimated") // the yield was multiplied by an estimated share
	}
	_, s.ConditionMark = weakest(set.Origin)
	s.Origin, s.OriginMark = weakest(words...)
	full := w.made[i] / src.Yield.Usual
	s.TheoryG = full * s.Product.MolarMass
	s.ExpectLowG, s.ExpectG, s.ExpectHighG = s.TheoryG*src.Yield.Low, s.TheoryG*src.Yield.Usual, s.TheoryG*src.Yield.High
	if i+1 < len(w.route.Steps) {
		s.NextNeedsG = w.made[i] * s.Product.MolarMass
	}
	if err := w.chargeReactants(&s, src, full); err != nil {
		return Step{}, err
	}
	w.chargeReagents(&s, set, full)
	w.do(&s, set, full)
	return s, w.know(&s, src, set, full)
}

// know fills the second side of a step.
func (w *writer) know(s *Step, src *route.Step, set *reactions.Conditions, full float64) error {
	var codes, unknown []string
	for _, c := range s.Charges {
		codes = append(codes, c.Hazards...)
		if !c.Known && c.FromStep == 0 && !isWater(&c) && !slices.Contains(unknown, c.Name) {
			unknown = append(unknown, c.Name)
		}
	}
	s.Hazards = w.statements(codes, 5)
	if len(unknown) > 0 {
		s.Hazards = append(s.Hazards, "hazards UNKNOWN, nobody has looked them up: "+strings.Join(unknown, ", "))
	}
	if names := intermediates(s); len(names) > 0 {
		s.Hazards = append(s.Hazards, "hazards UNKNOWN (made here, not on any list): "+strings.Join(names, ", "))
	}
	s.Controls = said(w.desk.Guide.Controls, w.desk.Hazards, s.Charges)
	s.Emergency = said(w.desk.Guide.Emergency, w.desk.Hazards, s.Charges)
	w.flags(s, set, full)
	w.mixture(s, set, full)
	s.Waste = w.waste(s.Charges)
	if w.desk.Watch != nil {
		s.Watch = w.desk.Watch(moleculesOf(s.From), s.Product.Molecule)
	}
	return w.crude(s, src, set)
}

func moleculesOf(list []Compound) (out []*molecule.Molecule) {
	for _, c := range list {
		out = append(out, c.Molecule)
	}
	return out
}

func isWater(c *Charge) bool { return c.Reagent != nil && c.Reagent.Does("water") }

// intermediates names what the route makes and charges here.
func intermediates(s *Step) (names []string) {
	for _, c := range s.Charges {
		if c.FromStep > 0 {
			names = append(names, c.Name)
		}
	}
	return append(names, shown(s.Product))
}

// statements writes the gravest n codes with their texts.
func (w *writer) statements(codes []string, n int) []string {
	var out []string
	sorted := w.desk.Hazards.Sort(codes)
	for i, code := range sorted {
		if i == n {
			break
		}
		text := code
		if s, ok := w.desk.Hazards.Statement(code); ok {
			text += " " + s.Text
		}
		out = append(out, text)
	}
	if len(sorted) > n {
		out = append(out, "further: "+strings.Join(sorted[n:], " "))
	}
	return out
}

// substances are the charges of some roles as the table of incompatible pairs sees them.
func substances(charges []Charge, roles ...string) (list []hazard.Substance) {
	for _, c := range charges {
		if slices.Contains(roles, c.Role) {
			list = append(list, hazard.Substance{Name: c.Name, Reagent: c.Reagent, Molecule: c.Molecule})
		}
	}
	return list
}

// crude lists what the crude may hold if the step went wrong: what was charged, what the forward run
// finds beside the product, and what the rules tell to look for.
func (w *writer) crude(s *Step, src *route.Step, set *reactions.Conditions) error {
	add := func(what string, m *molecule.Molecule) {
		line := what
		if volatile(m) {
			line += fmt.Sprintf(", M+. %d", nominal(m))
		}
		if !slices.Contains(s.Crude, line) {
			s.Crude = append(s.Crude, line)
		}
	}
	for _, c := range s.From {
		add("unchanged "+shown(c), c.Molecule)
	}
	setFree := map[molecule.Key]bool{}
	if src.Judged != nil {
		for _, b := range src.Judged.Byproducts {
			setFree[b.Molecule.FlatKey()] = true
			if b.Molecule.Formula().Count[6] > 0 {
				add(shown(w.compound(b.Molecule))+" (set free)", b.Molecule)
			}
		}
	}
	rivals, err := w.rivals(s, src)
	if err != nil {
		return err
	}
	for _, p := range rivals {
		if !setFree[p.Molecule.FlatKey()] {
			what := " (" + p.Share.String() + " share by the rules"
			if nominal(p.Molecule) == nominal(s.Product.Molecule) {
				what += "; the mass of the product: NMR or a chromatogram tells"
			}
			add(shown(w.compound(p.Molecule))+what+")", p.Molecule)
		}
	}
	for _, t := range set.Cautions {
		if strings.Contains(t, "crude") {
			s.Crude = append(s.Crude, t)
		}
	}
	s.Crude = append(s.Crude, s.Objections...)
	s.Crude = append(s.Crude, fmt.Sprintf("for comparison the product, M+. %d", nominal(s.Product.Molecule)))
	return nil
}

// volatile says whether a molecule may show a molecular ion: no salt, no charge.
func volatile(m *molecule.Molecule) bool {
	for a := range m.NumAtoms() {
		if m.Atom(a).Charge != 0 && !neighbourCharge(m, a) {
			return false
		}
	}
	return len(m.Split()) == 1
}

// neighbourCharge says whether the charge of an atom is met by that of a neighbour, as in nitro.
func neighbourCharge(m *molecule.Molecule, a int) bool {
	return slices.ContainsFunc(m.Neighbors(a), func(n molecule.Neighbor) bool {
		return m.Atom(int(n.Atom)).Charge == -m.Atom(a).Charge
	})
}

func nominal(m *molecule.Molecule) int { return int(math.Round(m.Formula().MonoisotopicMass())) }

// rivals are the other products that the forward run of the step's transform expects.
func (w *writer) rivals(s *Step, src *route.Step) (out []reactions.Product, err error) {
	j, err := w.desk.Book.Judge(w.ctx, moleculesOf(s.From), []*molecule.Molecule{s.Product.Molecule}, noDescription, false, w.desk.Reagents)
	if err != nil || len(j.Transforms) != 1 || j.Transforms[0].ID != src.Transform {
		return nil, err
	}
	for _, p := range j.Expected {
		if p.Molecule.FlatKey() != s.Product.Molecule.FlatKey() && len(out) < 3 {
			out = append(out, p)
		}
	}
	return out, nil
}
