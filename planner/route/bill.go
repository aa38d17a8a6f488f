package route

import (
	"fmt"
	"math"
	"sort"

	"shelfward/planner/search"
)

// bill works out the figures of one route from its distinct steps.
type bill struct {
	c      *chemistry
	list   []making
	number map[search.Key]int
	plan   *Plan
	route  *Route
	items  []item // everything charged, in the order of first use
}

// item is one material charged, summed over the route, per mole of target.
type item struct {
	material Material
	mol      float64
	massG    float64
	waterG   float64
	leaf     bool // a starting material
	carbon   bool
	solvent  bool
	steps    []int
	optional bool // in every step that uses it
}

func (b *bill) work() {
	need := b.amounts()
	b.yields()
	b.economy(need)
	b.sums()
	b.purchases()
}

// amounts charges every flask, from the target backwards, at usual yields; it returns the moles of
// each step's product per mole of target that the equation alone takes, for the atom economy.
func (b *bill) amounts() (byEquation []float64) {
	scaleMol := b.plan.MakeG / b.plan.Target.MolarMass
	made := make([]float64, len(b.list))
	byEquation = make([]float64, len(b.list))
	made[len(made)-1], byEquation[len(made)-1] = 1, 1
	perStep := make([][]item, len(b.list))
	for i := len(b.list) - 1; i >= 0; i-- {
		m := &b.list[i]
		step := &b.route.Steps[i]
		step.MolTarget = tidy(made[i])
		full := made[i] / clampYield(step.Yield.Usual) // moles at full yield
		for j, r := range m.option.step.Reactants {
			key := m.children[childOf(m.option, j)]
			if n := b.number[key]; n > 0 {
				made[n-1] += full * r.Equivalents
				byEquation[n-1] += byEquation[i] * float64(r.Count)
				step.FlaskML += full * r.Equivalents * r.Molecule.Formula().MolarMass() * scaleMol
				continue
			}
			mat := b.c.material(key)
			mol := full * r.Equivalents
			perStep[i] = append(perStep[i], item{material: *mat, mol: mol, massG: mol * mat.MassPerMol, waterG: mol * mat.WaterPerMol,
				leaf: true, carbon: hasCarbon(r.Molecule), steps: []int{i + 1}})
		}
		for _, x := range b.c.world.charges(m.option.step, m.option.conditions) {
			perStep[i] = append(perStep[i], item{material: x.material, mol: full * x.mol, massG: full * x.massG, waterG: full * x.waterG,
				solvent: x.solvent, optional: x.optional, steps: []int{i + 1}})
		}
	}
	for i, items := range perStep {
		for _, x := range items {
			b.charge(x)
			b.route.Steps[i].FlaskML += x.massG * scaleMol / x.density()
		}
		b.route.Steps[i].FlaskML = tidy(b.route.Steps[i].FlaskML)
	}
	return byEquation
}

// density is that of the supplied form in g/mL; what is not known, a solid among others, counts as 1.
func (x *item) density() float64 {
	if d := x.material.DensityGPerML; d > 0 {
		return d
	}
	return 1
}

// childOf returns the child index of reactant j.
func childOf(o *option, j int) int {
	for c, i := range o.order {
		if i == j {
			return c
		}
	}
	return -1
}

// charge adds an amount to the item of the same substance, or as a new item.
func (b *bill) charge(x item) {
	for i := range b.items {
		y := &b.items[i]
		if y.leaf == x.leaf && y.material.Name == x.material.Name && y.material.SMILES == x.material.SMILES {
			y.mol, y.massG, y.waterG = y.mol+x.mol, y.massG+x.massG, y.waterG+x.waterG
			y.optional, y.solvent = y.optional && x.optional, y.solvent && x.solvent
			if y.steps[len(y.steps)-1] != x.steps[0] {
				y.steps = append(y.steps, x.steps[0])
			}
			return
		}
	}
	b.items = append(b.items, x)
}

// branch is the run of steps from one start up to a step.
type branch struct {
	steps int
	yield Range
}

// yields finds the longest run and the branch that loses most. Equal runs count by the lower yield.
func (b *bill) yields() {
	long, worst := make([]branch, len(b.list)), make([]branch, len(b.list))
	for i := range b.list {
		y := b.route.Steps[i].Yield
		long[i], worst[i] = branch{1, y}, branch{1, y}
		var bestLong, worstBelow *branch
		for _, n := range b.route.Steps[i].MadeBy {
			if n == 0 {
				continue
			}
			l, w := &long[n-1], &worst[n-1]
			if bestLong == nil || l.steps > bestLong.steps || l.steps == bestLong.steps && l.yield.Usual < bestLong.yield.Usual {
				bestLong = l
			}
			if worstBelow == nil || w.yield.Usual < worstBelow.yield.Usual {
				worstBelow = w
			}
		}
		if bestLong != nil {
			long[i] = branch{1 + bestLong.steps, y.times(bestLong.yield)}
			worst[i] = branch{1 + worstBelow.steps, y.times(worstBelow.yield)}
		}
	}
	last := len(b.list) - 1
	b.route.LongestRun, b.route.OverallYield, b.route.WorstBranchYield = long[last].steps, long[last].yield.tidy(), worst[last].yield.tidy()
}

// times multiplies low by low and high by high: a product of ranges, not a statistical interval.
func (r Range) times(o Range) Range {
	return Range{r.Low * o.Low, r.Usual * o.Usual, r.High * o.High}
}

func (r Range) tidy() Range { return Range{tidy(r.Low), tidy(r.Usual), tidy(r.High)} }

// economy is the atom economy of the balanced sum of all steps: target over target and by-products,
// since inputs are their sum (Trost, Science 1991, 254, 1471, from memory). Bases and other reagents
// that the equations consume count. It stays null if a step's equation does not balance on carbon.
func (b *bill) economy(byEquation []float64) {
	target := b.plan.Target.MolarMass
	waste := 0.0
	for i := range b.list {
		s := b.list[i].option.step
		have := 0.0
		for _, r := range s.Reactants {
			have += float64(r.Count) * float64(r.Molecule.Formula().Count[carbon])
		}
		want := float64(s.Product.Formula().Count[carbon])
		for _, p := range s.Byproducts {
			want += p.Count * float64(p.Molecule.Formula().Count[carbon])
			waste += byEquation[i] * p.Count * p.Molecule.Formula().MolarMass()
		}
		if want > have+1e-6+b.reagentCarbon(i) {
			return
		}
	}
	if economy := tidy(target / (target + waste)); economy > 0 && !math.IsNaN(economy) {
		b.route.AtomEconomy = &economy
	}
}

// reagentCarbon is the carbon that the reagents consumed in step i bring.
func (b *bill) reagentCarbon(i int) (sum float64) {
	for _, u := range b.list[i].option.conditions.Uses {
		if m, err := b.c.world.Read(u.SMILES); err == nil {
			sum += u.Count * float64(m.Formula().Count[carbon]) * 8 // several sites may react
		}
	}
	return sum
}

// sums adds up waste, hazards and prices.
func (b *bill) sums() {
	r, molMass := b.route, b.plan.Target.MolarMass
	scaleMol := b.plan.MakeG / molMass
	mass, water := 0.0, 0.0
	grave := map[string]int{}
	for _, x := range b.items {
		mass += x.massG
		if isWater(&x.material) {
			water += x.massG
		} else {
			water += x.waterG
		}
		if !x.material.HazardsKnown && !isWater(&x.material) {
			r.Hazard.WithoutData++
			r.GravestClass = gravestClass
		}
		for _, h := range x.material.Hazards {
			grave[h] = b.c.world.Gravity(h)
			r.GravestClass = max(r.GravestClass, b.c.world.codeClass(h))
		}
		r.Materials.Of++
		if price, known := x.material.Price(); known {
			r.Materials.Price += price * x.mol * scaleMol
			if r.Materials.Currency == "" {
				r.Materials.Currency = x.material.Currency
			}
		} else if isWater(&x.material) {
			r.Materials.Of--
		} else {
			r.Materials.Unpriced++
		}
	}
	r.Materials.Price = math.Round(r.Materials.Price*100) / 100
	r.Waste = WasteFigures{WithWater: tidy((mass - molMass) / molMass), WithoutWater: tidy((mass - water - molMass) / molMass)}
	r.Hazard.Gravest = gravest(grave, 5)
	for i := range r.Steps {
		codes := map[string]int{}
		for _, x := range b.items {
			for _, n := range x.steps {
				if n == i+1 {
					for _, h := range x.material.Hazards {
						codes[h] = b.c.world.Gravity(h)
					}
				}
			}
		}
		r.Steps[i].Hazards = gravest(codes, len(codes))
		r.Days += daysOf(&r.Steps[i])
	}
}

// gravest sorts codes by gravity, then by name, and keeps the first n.
func gravest(places map[string]int, n int) []string {
	codes := make([]string, 0, len(places))
	for h := range places {
		codes = append(codes, h)
	}
	sort.Slice(codes, func(i, j int) bool {
		if a, b := places[codes[i]], places[codes[j]]; a != b {
			return a < b
		}
		return codes[i] < codes[j]
	})
	return codes[:min(n, len(codes))]
}

// daysOf counts working days: half a day for setting up and work-up together with the reaction time;
// what runs longer than the day stands overnight.
func daysOf(s *Step) float64 {
	hours := (s.Time.Low + s.Time.High) / 2
	if hours <= 4 {
		return 1
	}
	return 1 + math.Ceil((hours-4)/20)
}

// purchases lists starting materials, what must be bought, and what the shelf holds too little of.
func (b *bill) purchases() {
	r := b.route
	scaleMol := b.plan.MakeG / b.plan.Target.MolarMass
	for i := range b.items {
		x := &b.items[i]
		if x.leaf {
			m := x.material
			name := m.Name
			for j := range b.list {
				for k, key := range b.list[j].children {
					if name == "" && b.number[key] == 0 && b.c.material(key).SMILES == m.SMILES {
						name = b.c.world.Name(b.c.molecule(b.list[j].children[k]))
					}
				}
			}
			r.StartingMaterials = append(r.StartingMaterials, StartingMaterial{SMILES: m.SMILES, Name: name, OnShelf: m.OnShelf, Mol: tidy(x.mol), Material: m})
		}
		if !x.material.OnShelf && !(x.leaf && x.carbon) && !isWater(&x.material) {
			r.ToBuy = append(r.ToBuy, Purchase{Name: x.material.Name, CAS: x.material.CAS, SMILES: x.material.SMILES, Needed: x.amount(scaleMol), Why: usedIn(x)})
		}
		if !b.plan.MakeAsked || !x.material.OnShelf || isWater(&x.material) {
			continue
		}
		if math.IsNaN(x.material.StockMol) {
			r.StockUnknown = append(r.StockUnknown, nameOr(x.material.Name, x.material.SMILES))
		} else if x.mol*scaleMol > x.material.StockMol*(1+1e-9) {
			short := x.mol*scaleMol - x.material.StockMol
			part := item{material: x.material, mol: short, massG: short * x.material.MassPerMol, solvent: x.solvent}
			r.Short = append(r.Short, fmt.Sprintf("%s by %s of the %s wanted", nameOr(x.material.Name, x.material.SMILES), part.amount(1), x.amount(scaleMol)))
		}
	}
}

// usedIn says which steps use an item, and how.
func usedIn(x *item) string {
	what := "reagent"
	if x.solvent {
		what = "solvent"
	} else if x.leaf {
		what = "carbon-free material"
	}
	if x.optional {
		what = "optional " + what
	}
	text := fmt.Sprintf("%s of %s %d", what, plural(len(x.steps), "step", "steps"), x.steps[0])
	for _, n := range x.steps[1:] {
		text += fmt.Sprintf(", %d", n)
	}
	return text
}

// amount writes an amount for a scale in mol of target: volumes for liquids of known density.
func (x *item) amount(scaleMol float64) string {
	g := x.massG * scaleMol
	switch {
	case g <= 0:
		return fmt.Sprintf("%s mol", figure(x.mol*scaleMol))
	case x.material.DensityGPerML > 0 && x.solvent:
		return fmt.Sprintf("%s mL", figure(g/x.material.DensityGPerML))
	case g < 0.1:
		return fmt.Sprintf("%s mg", figure(g*1000))
	}
	return fmt.Sprintf("%s g", figure(g))
}

// figure writes a positive number with three significant digits and without exponents.
func figure(x float64) string {
	if x <= 0 || math.IsInf(x, 0) || math.IsNaN(x) {
		return "0"
	}
	digits := max(0, 2-int(math.Floor(math.Log10(x))))
	rounded := x
	if digits == 0 {
		unit := math.Pow(10, math.Floor(math.Log10(x))-2)
		rounded = math.Round(x/unit) * unit
	}
	return fmt.Sprintf("%.*f", min(digits, 6), rounded)
}

func nameOr(name, smiles string) string {
	if name != "" {
		return name
	}
	return smiles
}
