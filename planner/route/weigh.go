package route

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"shelfward/planner/search"
	"shelfward/reactions"
)

// RankBy says what routes are ordered by, and so what the search minimises.
type RankBy string

// The orders. Balanced adds, for every step of the tree, 1 and the terms of balancedStep; Steps counts
// the steps of the tree; Yield is the loss along the branch that loses most; Hazard adds a figure for
// the gravest class of each step; Cost is the price of all materials per mole of target; Waste is the
// mass of everything charged, water not counted, per mole of target.
const (
	Balanced RankBy = "balanced"
	Steps    RankBy = "steps"
	Yield    RankBy = "yield"
	Hazard   RankBy = "hazard"
	Cost     RankBy = "cost"
	Waste    RankBy = "waste"
)

var ranks = []RankBy{Balanced, Steps, Yield, Hazard, Cost, Waste}

// ParseRankBy reads the word of the option; empty means balanced.
func ParseRankBy(word string) (RankBy, error) {
	if word == "" {
		return Balanced, nil
	}
	if slices.Contains(ranks, RankBy(word)) {
		return RankBy(word), nil
	}
	return "", fmt.Errorf("rank by %q: expected balanced, steps, yield, hazard, cost or waste", word)
}

// Says describes in words what the order minimises.
func (r RankBy) Says() string {
	switch r {
	case Steps:
		return "number of steps, then balance"
	case Yield:
		return "loss of yield along the branch that loses most"
	case Hazard:
		return "gravest hazard class of each step, added up"
	case Cost:
		return "price of all materials per mole of target"
	case Waste:
		return "mass of everything charged per mole of target, water not counted"
	}
	return "steps, with loss of yield, hazards, objections, purchases and prices added in stated parts"
}

// atScale says what asking for a large batch does to the order.
func (r RankBy) atScale() string {
	if r == Balanced || r == Steps {
		return ", and what practice avoids at scale"
	}
	return "; what practice avoids at scale is named with each step, not weighed"
}

// cost is the way in which the search combines the weights of this order.
func (r RankBy) cost() search.Cost {
	switch r {
	case Yield:
		return search.Worst
	case Cost, Waste:
		return search.PerMole
	}
	return search.Sum
}

// Parts of the balanced weight. They are our own judgement, chosen so that one more step is worth
// about a halved yield together with a much graver hazard.
const (
	partYieldLoss  = 0.5  // times -ln(usual yield)
	partHazard     = 0.06 // times the gravest class, 0-4
	partEven       = 0.5  // the wanted product is one of about equal ones
	partMinor      = 0.9  // the wanted product is the smaller part
	partObjection  = 0.7  // each objection, three at most
	partEstimated  = 0.05 // conditions nobody published for the class
	partPurchase   = 0.20 // each reagent that is not on the shelf, three at most
	partLeafHazard = 0.02
	partLeafPrice  = 0.02 // times log10(1 + price per mol)
)

// gravestClass is the class that an unknown hazard counts as: cancer, reproduction, fatal doses, fire
// in air all stand on ordinary shelves.
const gravestClass = 4

// hazardPoints turn classes 0-4 into what is added up: eight steps of one class weigh less than one
// step of the next.
var hazardPoints = [gravestClass + 1]float64{1, 9, 81, 729, 6561}

// lowYield stands for a yield that is not known.
var lowYield = reactions.Range{Low: 0.1, Usual: 0.3, High: 0.6}

// yieldOf returns the yield of a step under a condition set, with the share of the wanted product.
func yieldOf(s *reactions.Step, c *reactions.Conditions) (y reactions.Range, known bool) {
	y, known = c.Yield, c.Yield.Usual > 0
	if !known {
		y = lowYield
	}
	if f := s.Fraction; f > 0 && f < 1 {
		y = reactions.Range{Low: y.Low * f, Usual: y.Usual * f, High: y.High * f}
	}
	return y, known
}

// classEnds are the last codes of the classes 4, 3 and 2 in the order of gravity of rules/ghs.yaml:
// fatal, self-igniting or causing cancer; then severe; then the rest of the signal word Danger.
var classEnds = [...]string{"H360", "EUH029", "H318"}

// codeClass returns the class of a hazard code, 0 for none to 4 for the gravest.
func (w *World) codeClass(code string) int {
	place := w.Gravity(code)
	for i, end := range classEnds {
		if place <= w.Gravity(end) {
			return gravestClass - i
		}
	}
	return 1
}

// class returns the gravest hazard class of a material, unknown counted as the gravest.
func (w *World) class(m *Material) int {
	if !m.HazardsKnown {
		return gravestClass
	}
	most := 0
	for _, h := range m.Hazards {
		most = max(most, w.codeClass(h))
	}
	return most
}

// charged is one reagent or solvent of a condition set with its amount per mole of product at full
// yield.
type charged struct {
	material Material
	mol      float64 // of a reagent
	massG    float64 // as supplied
	waterG   float64
	solvent  bool
	optional bool
	known    bool // the name stands in some list
}

// charges lists reagents and solvents of a condition set for a step. Solvent volumes go by the mass of
// the first reactant.
func (w *World) charges(s *reactions.Step, c *reactions.Conditions) []charged {
	var out []charged
	for _, r := range c.Reagents {
		m, ok := w.named(r.Name)
		out = append(out, charged{material: m, mol: r.Equiv, massG: r.Equiv * m.MassPerMol, waterG: r.Equiv * m.WaterPerMol, optional: r.Optional, known: ok})
	}
	first := 0.0
	if len(s.Reactants) > 0 {
		first = s.Reactants[0].Equivalents * s.Reactants[0].Molecule.Formula().MolarMass()
	}
	for _, v := range c.Solvents {
		m, ok := w.named(v.Name)
		density := m.DensityGPerML
		if density == 0 {
			density = 1
		}
		x := charged{material: m, massG: first * v.MLPerG * density, solvent: true, known: ok}
		if m.MassPerMol > 0 {
			x.mol = x.massG / m.MassPerMol
			x.waterG = x.mol * m.WaterPerMol
		}
		out = append(out, x)
	}
	return out
}

// namedMaterial is the answer to one name.
type namedMaterial struct {
	material Material
	known    bool
}

// named looks a reagent up by the name that conditions use.
func (w *World) named(name string) (Material, bool) {
	if found, ok := w.names.Load(name); ok {
		n := found.(namedMaterial)
		return n.material, n.known
	}
	n := namedMaterial{unnamed(name), false}
	if m, ok := w.Materials.Named(name); ok {
		n = namedMaterial{m, true}
	}
	n.material.sound()
	w.names.Store(name, n)
	return n.material, n.known
}

// setFigures are figures of a condition set that do not depend on the molecules.
type setFigures struct {
	class int // gravest class among reagents and solvents
	buy   int // reagents that must be bought
}

func (w *World) setFigures(c *reactions.Conditions) setFigures {
	if f, ok := w.sets.Load(c); ok {
		return f.(setFigures)
	}
	var f setFigures
	for _, r := range c.Reagents {
		m, _ := w.named(r.Name)
		f.class = max(f.class, w.class(&m))
		if !m.OnShelf && !r.Optional && !isWater(&m) {
			f.buy++
		}
	}
	for _, v := range c.Solvents {
		m, _ := w.named(v.Name)
		f.class = max(f.class, w.class(&m))
	}
	w.sets.Store(c, f)
	return f
}

// isWater says whether a material is plain water.
func isWater(m *Material) bool { return m.SMILES == "O" || strings.EqualFold(m.Name, "water") }

// variant weighs one option for an order; scale (may be nil) adds to the orders that count balance.
func (w *World) variant(by RankBy, scale *Scale, o *option) search.Variant {
	s, c := o.step, o.conditions
	y, _ := yieldOf(s, c)
	v := search.Variant{Yield: clampYield(y.Usual)}
	for _, i := range o.order {
		v.Equiv = append(v.Equiv, s.Reactants[i].Equivalents)
	}
	switch by {
	case Yield:
		v.Weight = -math.Log(v.Yield)
	case Steps:
		v.Weight = 1 + 0.01*w.balancedStep(s, c, v.Yield, scale)
	case Hazard:
		v.Weight = hazardPoints[w.setFigures(c).class]
	case Cost:
		for _, x := range w.charges(s, c) {
			price, _ := x.material.Price()
			v.Weight += x.mol * price
		}
	case Waste:
		for _, x := range w.charges(s, c) {
			if !isWater(&x.material) {
				v.Weight += x.massG - x.waterG
			}
		}
	default:
		v.Weight = w.balancedStep(s, c, v.Yield, scale)
	}
	return v
}

func clampYield(y float64) float64 { return min(max(y, 0.01), 1) }

// balancedStep is the weight of one step in the balanced order: never below 1.
func (w *World) balancedStep(s *reactions.Step, c *reactions.Conditions, yield float64, scale *Scale) float64 {
	figures := w.setFigures(c)
	weight := 1 - partYieldLoss*math.Log(yield) + partHazard*float64(figures.class)
	switch s.Share {
	case reactions.ShareEven:
		weight += partEven
	case reactions.ShareMinor, reactions.ShareTrace:
		weight += partMinor
	}
	weight += partObjection * float64(min(len(s.Objections), 3))
	if c.Origin == "estimated" || c.Origin == "" {
		weight += partEstimated
	}
	adds, _ := scale.of(c)
	return weight + adds + partPurchase*float64(min(figures.buy, 3))
}

// leaf weighs a material taken from stock.
func (w *World) leaf(by RankBy, m *Material) float64 {
	price, _ := m.Price()
	switch by {
	case Yield:
		return 0
	case Steps:
		return 0.01 * partLeafPrice * math.Log10(1+price)
	case Hazard:
		return hazardPoints[w.class(m)]
	case Cost:
		return price
	case Waste:
		return m.MassPerMol - m.WaterPerMol
	}
	return partLeafPrice*math.Log10(1+price) + partLeafHazard*float64(w.class(m))
}
