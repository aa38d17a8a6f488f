package sheet

import (
	"fmt"
	"math"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/planner/route"
	"shelfward/reactions"
	"shelfward/reactions/hazard"
)

func smilesOf(m *molecule.Molecule) string { return smiles.Write(m) }

// originMarks are the letters behind every figure: published, near, class, estimated, own.
var originMarks = map[string]string{"published": "P", "near": "N", "class": "C", "estimated": "E", "own": "O"}

func (w *writer) step(i int) (Step, error) {
	src, set := &w.route.Steps[i], w.sets[i]
	product, err := w.desk.Read(src.Product)
	if err != nil {
		return Step{}, err
	}
	s := Step{Number: src.Number, Name: src.Name, Transform: src.Transform, Product: w.compound(product), Yield: src.Yield,
		Origin: src.Origin, OriginMark: originMarks[src.Origin], Sources: []string{set.Source + " (" + set.Provenance + ")"}}
	for _, o := range src.Objections {
		s.Objections = append(s.Objections, o.Text)
	}
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
	w.operations(&s, set)
	w.know(&s, src, set, product, full)
	return s, nil
}

// chargeReactants adds the carbon-giving materials; the first is the limiting one.
func (w *writer) chargeReactants(s *Step, src *route.Step, full float64) error {
	for j, text := range src.Reactants {
		m, err := w.desk.Read(text)
		if err != nil {
			return err
		}
		c := w.compound(m)
		s.From = append(s.From, c)
		mol := full * src.Equivalents[j]
		row := Charge{Role: "reactant", Equiv: src.Equivalents[j], Mmol: mol * 1000, MolarMass: c.MolarMass}
		if by := src.MadeBy[j]; by > 0 {
			row.Role = fmt.Sprintf("from step %d", by)
			row.Name, row.MassG = shown(c), mol*c.MolarMass
		} else {
			mat := w.desk.Materials.Molecule(m)
			row.Name, row.CAS, row.Hazards = w.materialName(&mat, m), mat.CAS, knownHazards(&mat)
			fill(&row, &mat, mol)
		}
		s.Charges = append(s.Charges, row)
	}
	limiting := 0
	for k := range s.Charges {
		if s.Charges[k].Equiv < s.Charges[limiting].Equiv {
			limiting = k
		}
	}
	s.Charges[limiting].Limiting = true
	return nil
}

// shown is the name of a compound, or its formula and line notation where it has none.
func shown(c Compound) string {
	if c.Name != "" {
		return c.Name
	}
	return c.Formula + " " + c.SMILES
}

func (w *writer) materialName(mat *route.Material, m *molecule.Molecule) string {
	if mat.Name != "" {
		return mat.Name
	}
	return shown(w.compound(m))
}

// knownHazards is nil where nobody has looked, and empty where nothing was found.
func knownHazards(mat *route.Material) []string {
	if !mat.HazardsKnown {
		return nil
	}
	return append([]string{}, mat.Hazards...)
}

// leastVolumeML is the smallest volume printed; below it the mass alone is given (common practice).
const leastVolumeML = 0.2

// fill turns moles into mass and volume of the supplied form.
func fill(row *Charge, mat *route.Material, mol float64) {
	row.MassG = mol * mat.MassPerMol
	if mat.DensityGPerML > 0 {
		if v := row.MassG / mat.DensityGPerML; v >= leastVolumeML {
			row.VolumeML = v
		}
	}
	if mat.MassPerMol > mat.MolarMass*1.005 && mat.MolarMass > 0 {
		row.Form = fmt.Sprintf("as supplied, %.3g %% by mass", 100*mat.MolarMass/mat.MassPerMol)
	}
}

func (w *writer) chargeReagents(s *Step, set *reactions.Conditions, full float64) {
	for _, r := range set.Reagents {
		row := Charge{Role: "reagent", Name: r.Name, Equiv: r.Equiv, Mmol: full * r.Equiv * 1000}
		if r.Equiv > 0 && r.Equiv < 0.3 {
			row.Role = "catalyst"
		}
		if r.Optional {
			row.Role += " (if needed)"
		}
		mat, ok := w.desk.Materials.Named(r.Name)
		if ok {
			row.CAS, row.MolarMass, row.Hazards = mat.CAS, mat.MolarMass, knownHazards(&mat)
			fill(&row, &mat, full*r.Equiv)
		}
		s.Charges = append(s.Charges, row)
	}
	firstG := 0.0
	if len(s.From) > 0 {
		firstG = full * s.Charges[0].Equiv * s.From[0].MolarMass
	}
	for _, v := range set.Solvents {
		row := Charge{Role: "solvent", Name: v.Name, VolumeML: firstG * v.MLPerG}
		if mat, ok := w.desk.Materials.Named(v.Name); ok {
			row.CAS, row.MolarMass, row.Hazards = mat.CAS, mat.MolarMass, knownHazards(&mat)
			if mat.DensityGPerML > 0 {
				row.MassG = row.VolumeML * mat.DensityGPerML
			}
		}
		s.Charges = append(s.Charges, row)
	}
	for _, name := range set.WorkupMaterials {
		row := Charge{Role: "work-up", Name: name}
		if mat, ok := w.desk.Materials.Named(name); ok {
			row.CAS, row.Hazards = mat.CAS, knownHazards(&mat)
		}
		s.Charges = append(s.Charges, row)
	}
	s.Flask = flaskFor(s.Charges, len(set.Gas) > 0)
}

// flasks are the sizes in mL that benches have.
var flasks = []float64{10, 25, 50, 100, 250, 500, 1000, 2000, 3000, 5000}

// flaskFor chooses a flask at most two thirds full, half full where gas comes off (common practice).
func flaskFor(charges []Charge, gas bool) string {
	total := 0.0
	for _, c := range charges {
		switch {
		case c.Role == "work-up":
		case c.VolumeML > 0:
			total += c.VolumeML
		default:
			total += c.MassG // solids at about 1 g/mL
		}
	}
	fill := 2.0 / 3
	if gas {
		fill = 0.5
	}
	for _, f := range flasks {
		if total <= f*fill {
			return fmt.Sprintf("%.0f mL", f)
		}
	}
	return fmt.Sprintf("more than 5 L (%.1f L of mixture): split the batch or use plant equipment", total/1000)
}

// operations are the numbered sentences of the do side.
func (w *writer) operations(s *Step, set *reactions.Conditions) {
	add := func(format string, args ...any) { s.Operations = append(s.Operations, fmt.Sprintf(format, args...)) }
	add("Set up: %s flask, stirrer, thermometer in the mixture%s.", s.Flask, needsText(set.Needs))
	if set.Order != "" {
		add("%s", set.Order)
	} else {
		add("Charge in the order of the table.")
	}
	add("Keep at %s for %s (%s).", temperatureText(set.Temperature), hoursText(set.Hours), originMarks[set.Origin])
	if set.Watch != "" {
		add("Watch: %s", set.Watch)
	}
	for _, line := range set.Workup {
		add("%s", line)
	}
	s.Holds = append(s.Holds, "Identity and amount of the limiting material checked: if not, do not start.")
	if set.HeatKJ >= 100 {
		s.Holds = append(s.Holds, "The start of the heat is seen after the first tenth: if not, stop the feed, do not add more.")
	}
	s.Holds = append(s.Holds, "Conversion complete by the watch line: if not, wait, then stop and ask.",
		fmt.Sprintf("Identity of the product (%s, M = %.2f g/mol) shown before the next step: if not, keep the batch apart.", s.Product.Formula, s.Product.MolarMass))
}

func needsText(needs []string) string {
	if len(needs) == 0 {
		return ""
	}
	return "; needs " + strings.Join(needs, ", ")
}

func temperatureText(t [2]float64) string {
	if t[0] == t[1] {
		return fmt.Sprintf("%.0f C", t[0])
	}
	return fmt.Sprintf("%.0f to %.0f C", t[0], t[1])
}

func hoursText(h [2]float64) string {
	one := func(x float64) string {
		if x < 1 {
			return fmt.Sprintf("%.0f min", x*60)
		}
		return fmt.Sprintf("%.3g h", x)
	}
	if h[0] == h[1] {
		return one(h[0])
	}
	return one(h[0]) + " to " + one(h[1])
}

// know fills the second side of a step.
func (w *writer) know(s *Step, src *route.Step, set *reactions.Conditions, product *molecule.Molecule, full float64) {
	var codes []string
	seen := map[string]bool{}
	var list []hazard.Substance
	for _, c := range s.Charges {
		for _, h := range c.Hazards {
			if !seen[h] {
				seen[h] = true
				codes = append(codes, h)
			}
		}
		r, _ := w.desk.Reagents.Named(c.Name)
		list = append(list, hazard.Substance{Name: c.Name, Reagent: r})
	}
	s.Hazards = w.statements(codes, 5)
	s.Controls = controls(codes)
	w.clashes(s, list)
	w.heatAndGas(s, set, full)
	for _, t := range set.Cautions {
		s.Mixture = append(s.Mixture, t)
	}
	s.Waste = wasteStreams(s.Charges)
	w.crude(s, src, product)
	s.Emergency = []string{
		"Cooling or stirring lost: stop every feed, raise the cooling bath, leave the sash down.",
		"Spill, splash or gas: leave, warn, call the emergency number of the site; skin and eyes: water for 15 min.",
	}
	if w.desk.Watch != nil {
		var from []*molecule.Molecule
		for _, c := range s.From {
			from = append(from, c.Molecule)
		}
		s.Watch = w.desk.Watch(from, product)
	}
}

// clashes tells intended pairs (within the charge of the reaction) from unintended ones (with work-up).
func (w *writer) clashes(s *Step, list []hazard.Substance) {
	work := map[string]bool{}
	for _, c := range s.Charges {
		if c.Role == "work-up" {
			work[c.Name] = true
		}
	}
	var intended []string
	for _, c := range w.desk.Hazards.Clashes(list, w.desk.Book.Groups()) {
		if work[c.A] != work[c.B] || work[c.A] && work[c.B] {
			s.Flags = append(s.Flags, "keep apart until quenched, also in rinses and the waste bottle: "+c.Says())
			continue
		}
		intended = append(intended, c.A+" with "+c.B)
	}
	if len(intended) > 0 {
		s.Mixture = append(s.Mixture, "Pairs that react on purpose here, controlled by the order and rate of addition and the temperature: "+strings.Join(intended, "; ")+".")
	}
}

// gasLitresPerMol at 20 C and 1 atm (ideal gas).
const gasLitresPerMol = 24.1

func (w *writer) heatAndGas(s *Step, set *reactions.Conditions, full float64) {
	if set.HeatKJ > 0 {
		s.Mixture = append(s.Mixture, fmt.Sprintf("Heat: about %.0f kJ in all at this scale (%.0f kJ/mol, rough): the feed is the control.", set.HeatKJ*full, set.HeatKJ))
	}
	for _, g := range set.Gas {
		mol := g.Count * full
		s.Mixture = append(s.Mixture, fmt.Sprintf("Gas: %s, %.3g mol, about %s at 20 C: vent, never a closed vessel.", g.SMILES, mol, litres(mol*gasLitresPerMol)))
	}
	for _, c := range s.Charges {
		if c.Name == "hydrogen" {
			volume := c.Mmol / 1000 * gasLitresPerMol
			s.Mixture = append(s.Mixture, fmt.Sprintf("Hydrogen: %s at 1 atm; this much makes up to %s of air flammable: hood, purge three times, catalyst wet.", litres(volume), litres(volume/0.04)))
		}
	}
	grams := s.Product.MolarMass * full
	if grams > 100 {
		s.Flags = append(s.Flags, "more than 100 g of product: outside ordinary bench work; a new risk assessment with heat and gas data, and a small run first")
	}
}

// controls chooses explicit measures from the hazard codes, in the order replace, contain, ventilate, protect.
func controls(codes []string) []string {
	has := func(list ...string) bool {
		for _, c := range codes {
			for _, l := range list {
				if strings.HasPrefix(c, l) {
					return true
				}
			}
		}
		return false
	}
	var out []string
	if has("H340", "H350", "H360") {
		out = append(out, "Carcinogen, mutagen or reproductive toxicant in use: look for a replacement first; weigh in the hood, closed transfer, site permission.")
	}
	if has("H220", "H224", "H225") {
		out = append(out, "Highly flammable: hood, no flame or hot plate edge, earthed cans above 5 L.")
	}
	if has("H250", "H260", "H261") {
		out = append(out, "Pyrophoric or gives flammable gas with water: dry glass, inert gas, sand or class D extinguisher at hand, never alone.")
	}
	if has("H300", "H310", "H330", "H301", "H311", "H331") {
		out = append(out, "Toxic: hood with the sash down, double gloves, a second person within call.")
	}
	if has("H314", "H318", "H290") {
		out = append(out, "Corrosive: face shield for every pour; rinse water at hand.")
	}
	return append(out, "Goggles, coat, gloves chosen for the solvent in use (nitrile fails fast with dichloromethane, iodomethane, dimethylformamide).")
}

// wasteStreams sorts the liquids into streams with volumes.
func wasteStreams(charges []Charge) []string {
	halogenated, organic := 0.0, 0.0
	for _, c := range charges {
		if c.Role != "solvent" {
			continue
		}
		if strings.Contains(c.Name, "chloro") {
			halogenated += c.VolumeML
		} else if c.Name != "water" {
			organic += c.VolumeML
		}
	}
	var out []string
	if halogenated > 0 {
		out = append(out, fmt.Sprintf("halogenated solvents: about %s and washings", millilitres(halogenated)))
	}
	if organic > 0 {
		out = append(out, fmt.Sprintf("halogen-free solvents: about %s and washings", millilitres(organic)))
	}
	return append(out, "aqueous layers: by pH and metal, oxidisers reduced and tested first; nothing into a common bottle before it is quenched")
}

// crude lists what the crude may hold if the step went wrong: starting materials and the rivals named by
// the objections, with their molecular ions.
func (w *writer) crude(s *Step, src *route.Step, product *molecule.Molecule) {
	for _, c := range s.From {
		s.Crude = append(s.Crude, fmt.Sprintf("unchanged %s, M+. %d", shown(c), int(math.Round(c.Molecule.Formula().MonoisotopicMass()))))
	}
	s.Crude = append(s.Crude, fmt.Sprintf("product, M+. %d", int(math.Round(product.Formula().MonoisotopicMass()))))
	for _, o := range src.Objections {
		s.Crude = append(s.Crude, o.Text)
	}
}
