package route

import (
	"math"
	"testing"

	"shelfward/reactions"
)

func near4(a, b float64) bool { return math.Abs(a-b) < 5e-4 }

// TestYieldsOfConvergentPlan is the worked example of a convergent plan: branch A 90 % then 80 %,
// branch B 70 %, coupling 75 %, last step 85 %. Longest run 4; along it 45.9 %, on branch B 44.6 %;
// 10 mmol of target take 21.8 mmol of A's start and 22.4 mmol of B's (arithmetic by hand).
func TestYieldsOfConvergentPlan(t *testing.T) {
	f := newFakeBook(t)
	f.makes("last", "CCCCCCCO", 0.85, "CCCCCCC=O")
	f.makes("coupling", "CCCCCCC=O", 0.75, "CCCC", "CCC=O")
	f.makes("a2", "CCCC", 0.80, "CCCCl")
	f.makes("a1", "CCCCl", 0.90, "CCCBr")
	f.makes("b1", "CCC=O", 0.70, "CCCO")
	b := newBottles()
	b.put(t, "start a", "CCCBr", nil)
	b.put(t, "start b", "CCCO", nil)
	p := plan(t, f.world(b), "CCCCCCCO", Options{})
	if len(p.Routes) != 1 {
		t.Fatalf("%d routes", len(p.Routes))
	}
	r := &p.Routes[0]
	if len(r.Steps) != 5 || r.LongestRun != 4 || !near4(r.OverallYield.Usual, 0.459) || !near4(r.WorstBranchYield.Usual, 0.44625) {
		t.Errorf("%d steps, run %d, overall %v, worst branch %v", len(r.Steps), r.LongestRun, r.OverallYield, r.WorstBranchYield)
	}
	for _, m := range r.StartingMaterials {
		want := map[string]float64{"start a": 2.1786, "start b": 2.2409}[m.Name]
		if !near4(m.Mol, want) {
			t.Errorf("%s: %v mol per mol, want %v", m.Name, m.Mol, want)
		}
	}
	for i, s := range r.Steps {
		for _, n := range s.MadeBy {
			if n > i {
				t.Errorf("step %d uses the product of step %d", i+1, n)
			}
		}
	}
	if r.Steps[0].Transform != "a1" || r.Steps[4].Transform != "last" {
		t.Errorf("bench order %v", r.lines())
	}
	if !p.Search.ProvenBest || !p.Search.Exhausted {
		t.Errorf("search %+v", p.Search)
	}
}

// TestAtomEconomyOfSulfonateEster: benzyl alcohol, tosyl chloride and triethylamine; counting the base
// 65.6 % (example of Constable, Curzons, Cunningham, Green Chem. 2002, 4, 521, figures from memory,
// recomputed by hand).
func TestAtomEconomyOfSulfonateEster(t *testing.T) {
	f := newFakeBook(t)
	s := f.makes("sulfonylation", "Cc1ccc(cc1)S(=O)(=O)OCc1ccccc1", 0.90, "OCc1ccccc1", "Cc1ccc(cc1)S(=O)(=O)Cl")
	s.Byproducts = []reactions.Byproduct{{Molecule: mustRead(t, "CC[NH+](CC)CC.[Cl-]"), Count: 1}}
	s.Conditions[0].Uses = []reactions.Amount{{Count: 1, SMILES: "CCN(CC)CC"}}
	b := newBottles()
	b.put(t, "benzyl alcohol", "OCc1ccccc1", nil)
	b.put(t, "tosyl chloride", "Cc1ccc(cc1)S(=O)(=O)Cl", nil)
	r := &plan(t, f.world(b), "Cc1ccc(cc1)S(=O)(=O)OCc1ccccc1", Options{}).Routes[0]
	if r.AtomEconomy == nil || !near4(*r.AtomEconomy, 0.6558) {
		t.Errorf("atom economy %v", r.AtomEconomy)
	}
}

// TestWaste: aspirin, 1.49 equivalents of anhydride, usual yield 79.7 %, 60 mL of water as solvent for
// 10 g. By hand: charged 10.00 + 11.01 + 59.82 g for 10.40 g of product.
func TestWaste(t *testing.T) {
	f := newFakeBook(t)
	s := f.makes("acetylation", "CC(=O)Oc1ccccc1C(=O)O", 0.797, "OC(=O)c1ccccc1O", "CC(=O)OC(C)=O")
	s.Reactants[1].Equivalents = 1.49
	s.Conditions[0].Solvents = []reactions.Solvent{{Name: "water", MLPerG: 6}}
	b := newBottles()
	b.put(t, "salicylic acid", "OC(=O)c1ccccc1O", nil)
	b.put(t, "acetic anhydride", "CC(=O)OC(C)=O", nil)
	b.put(t, "water", "O", func(m *Material) { m.DensityGPerML = 0.997; m.HazardsKnown = true })
	r := &plan(t, f.world(b), "CC(=O)Oc1ccccc1C(=O)O", Options{}).Routes[0]
	if w := r.Waste; math.Abs(w.WithWater-6.77) > 0.02 || math.Abs(w.WithoutWater-1.02) > 0.02 {
		t.Errorf("waste %+v", w)
	}
	if r.AtomEconomy == nil {
		t.Error("no atom economy")
	}
}

// TestUsedTwice: an intermediate used twice is one step at the bench and is charged for both uses.
func TestUsedTwice(t *testing.T) {
	f := newFakeBook(t)
	f.makes("join", "CCCOCCN", 1, "CCCO", "NCCO")
	f.makes("a", "CCCO", 1, "C=C")
	f.makes("b", "NCCO", 0.5, "CCCO")
	b := newBottles()
	b.put(t, "ethene", "C=C", nil)
	r := &plan(t, f.world(b), "CCCOCCN", Options{}).Routes[0]
	if len(r.Steps) != 3 || r.LongestRun != 3 {
		t.Errorf("%d steps, run %d", len(r.Steps), r.LongestRun)
	}
	if got := r.StartingMaterials[0].Mol; !near4(got, 3) {
		t.Errorf("ethene %v mol per mol, want 3", got)
	}
}

// TestGapNeverWins empties price, hazards and yield of the material of the better of two equal routes.
func TestGapNeverWins(t *testing.T) {
	for _, by := range []RankBy{Balanced, Cost, Hazard, Yield} {
		make2 := func(change func(*Material), yield float64) *Plan {
			f := newFakeBook(t)
			f.makes("first", "CCCC", yield, "CCCO")
			f.makes("second", "CCCC", 0.8, "CCCCl")
			b := newBottles()
			priced := func(price float64, h string) func(*Material) {
				return func(m *Material) {
					m.PricePerMol, m.Hazards, m.HazardsKnown, m.Currency = price, []string{h}, true, "EUR"
				}
			}
			b.put(t, "one", "CCCO", func(m *Material) { priced(5, "H319")(m); change(m) })
			b.put(t, "two", "CCCCl", priced(900, "H360"))
			return plan(t, f.world(b), "CCCC", Options{RankBy: by})
		}
		if p := make2(func(*Material) {}, 0.9); p.Routes[0].Steps[0].Transform != "first" {
			t.Errorf("%s: %v first", by, p.Routes[0].Steps[0].Transform)
		}
		p := make2(func(m *Material) { m.PricePerMol, m.Hazards, m.HazardsKnown = unknown, nil, false }, 0)
		if p.Routes[0].Steps[0].Transform != "second" {
			t.Errorf("%s: with gaps %v stays first", by, p.Routes[0].Steps[0].Transform)
		}
		for _, r := range p.Routes {
			if r.Steps[0].Transform == "first" && (r.Materials.Unpriced != 1 || r.Hazard.WithoutData != 1 || len(r.Doubts) < 3) {
				t.Errorf("%s: gaps are not counted: %+v %+v %q", by, r.Materials, r.Hazard, r.Doubts)
			}
		}
	}
}
