package sheet

import (
	"math"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/planner/route"
	"shelfward/reactions"
)

func smilesOf(m *molecule.Molecule) string { return smiles.Write(m) }

// Roles of a charge, in the order of the table.
const (
	roleReactant = "reactant"
	roleReagent  = "reagent"
	roleCatalyst = "catalyst"
	roleSolvent  = "solvent"
	roleWorkup   = "work-up"
)

const (
	// leastVolumeML is the smallest volume printed; below it the mass alone is given (common practice).
	leastVolumeML = 0.2
	// catalystEquiv is where a reagent is called a catalyst.
	catalystEquiv = 0.3
)

// chargeReactants adds the carbon-giving materials and marks the limiting one.
func (w *writer) chargeReactants(s *Step, src *route.Step, full float64) error {
	for j, text := range src.Reactants {
		m, err := w.desk.Read(text)
		if err != nil {
			return err
		}
		c := w.compound(m)
		s.From = append(s.From, c)
		row := Charge{Role: roleReactant, Equiv: src.Equivalents[j], MolarMass: c.MolarMass, Molecule: m, FromStep: src.MadeBy[j]}
		row.Mmol = 1000 * full * row.Equiv
		if row.FromStep > 0 {
			row.Name, row.MassG, row.Form = shown(c), full*row.Equiv*c.MolarMass, "as isolated"
		} else {
			mat := w.desk.Materials.Molecule(m)
			row.Name = mat.Name
			if row.Name == "" {
				row.Name = shown(c)
			}
			w.fill(&row, &mat)
			if row.Reagent == nil {
				row.Reagent, _ = w.desk.Reagents.ByExact(m)
			}
		}
		s.Charges = append(s.Charges, row)
	}
	s.Charges[limiting(src)].Limiting = true
	return nil
}

// limiting is the reactant that runs out first: the least n over its count in the equation.
func limiting(src *route.Step) int {
	first, least := 0, math.Inf(1)
	for j, e := range src.Equivalents {
		if src.Judged != nil && j < len(src.Judged.Reactants) {
			if n := src.Judged.Reactants[j].Count; n > 1 {
				e /= float64(n)
			}
		}
		if e < least*(1-1e-9) {
			first, least = j, e
		}
	}
	return first
}

// shown is the name of a compound, or its formula and line notation where it has none.
func shown(c Compound) string {
	if c.Name != "" {
		return c.Name
	}
	return c.Formula + " " + c.SMILES
}

// fill turns the moles of a row into mass and volume of the supplied form.
func (w *writer) fill(row *Charge, mat *route.Material) {
	row.material, row.supply = mat, w.desk.Supplied(mat)
	row.CAS, row.MolarMass, row.Gas = mat.CAS, mat.MolarMass, row.supply.Gas
	row.Hazards, row.Known = append([]string{}, mat.Hazards...), mat.HazardsKnown
	row.Reagent, _ = w.desk.Reagents.Named(mat.Name)
	row.Form = row.supply.Form()
	if row.Mmol > 0 {
		row.measure(row.supply.Charge(row.Mmol / 1000))
	}
	if row.Molecule == nil && mat.SMILES != "" {
		row.Molecule, _ = w.desk.Read(mat.SMILES)
	}
}

// measure sets what is weighed or measured: a solution by molarity and a gas by volume, a liquid by
// both, too small a volume by mass.
func (c *Charge) measure(massG, volumeML float64) {
	c.MassG, c.VolumeML = massG, volumeML
	if c.byVolume() {
		c.MassG = 0
	} else if volumeML < leastVolumeML {
		c.VolumeML = 0
	}
}

// byVolume says whether the charge is measured in mL only.
func (c *Charge) byVolume() bool { return c.Gas || c.supply.Strength.MolarM > 0 }

// chargeReagents adds reagents, solvents and work-up materials of a condition set.
func (w *writer) chargeReagents(s *Step, set *reactions.Conditions, full float64) {
	for _, r := range set.Reagents {
		row := Charge{Role: roleReagent, Name: r.Name, Equiv: r.Equiv, Mmol: full * r.Equiv * 1000, IfNeeded: r.Optional, Note: r.Note}
		if r.Equiv > 0 && r.Equiv < catalystEquiv {
			row.Role = roleCatalyst
		}
		w.chargeNamed(s, row)
	}
	firstG := full * s.Charges[0].Equiv * s.From[0].MolarMass
	for _, v := range set.Solvents {
		w.chargeSolvent(s, v, firstG)
	}
	for _, name := range set.WorkupMaterials {
		w.chargeNamed(s, Charge{Role: roleWorkup, Name: name})
	}
	s.flaskML = flaskFor(s.Charges, len(set.Gas) > 0)
	if !math.IsInf(s.flaskML, 1) {
		s.Flask = millilitresWhole(s.flaskML)
	}
}

// chargeNamed adds a row by the name that conditions use. What is on the shelf already keeps that name.
func (w *writer) chargeNamed(s *Step, row Charge) {
	if mat, ok := w.desk.Materials.Named(row.Name); ok {
		w.fill(&row, &mat)
	} else {
		row.Reagent, _ = w.desk.Reagents.Named(row.Name)
		row.Form = "not in the lists"
	}
	s.Charges = append(s.Charges, row)
}

// chargeSolvent adds a solvent; one that is charged as a reagent too is one row, of the larger amount.
func (w *writer) chargeSolvent(s *Step, v reactions.Solvent, firstG float64) {
	row := Charge{Role: roleSolvent, Name: v.Name}
	if mat, ok := w.desk.Materials.Named(v.Name); ok {
		w.fill(&row, &mat)
	} else {
		row.Reagent, _ = w.desk.Reagents.Named(v.Name)
	}
	row.VolumeML = firstG * v.MLPerG
	row.MassG = row.VolumeML * row.supply.DensityGPerML
	for i := range s.Charges {
		old := &s.Charges[i]
		if old.Role == roleReagent && old.Name == row.Name && old.VolumeML > 0 {
			row.Equiv, row.Mmol, row.Note = old.Equiv, old.Mmol, "solvent and reagent"
			if old.VolumeML > row.VolumeML {
				row.VolumeML, row.MassG = old.VolumeML, old.MassG
			} else {
				row.Mmol = 1000 * row.supply.Mol(row.MassG)
				row.Equiv = old.Equiv * row.Mmol / old.Mmol
			}
			s.Charges = append(s.Charges[:i], s.Charges[i+1:]...)
			break
		}
	}
	s.Charges = append(s.Charges, row)
}

// flasks are the sizes in mL that benches have.
var flasks = []float64{10, 25, 50, 100, 250, 500, 1000, 2000, 3000, 5000}

// contentsML is the volume of what lies in the flask at the end of the charge; solids count 1 mL/g.
func contentsML(charges []Charge) (total float64) {
	for _, c := range charges {
		switch {
		case c.Role == roleWorkup || c.Gas:
		case c.VolumeML > 0:
			total += c.VolumeML
		default:
			total += c.MassG
		}
	}
	return total
}

// flaskFor chooses a flask at most two thirds full, half full where gas comes off (common practice);
// +Inf if no flask is large enough. The answer is in mL.
func flaskFor(charges []Charge, gas bool) float64 {
	fill := 2.0 / 3
	if gas {
		fill = 0.5
	}
	for _, f := range flasks {
		if contentsML(charges) <= f*fill {
			return f
		}
	}
	return math.Inf(1)
}
