package route

import (
	"math"
	"testing"

	"shelfward/reactions"
)

// TestFiguresOfSulfonateEster: benzyl alcohol 10.81 g, p-toluenesulfonyl chloride 21.9 g and triethylamine
// 15 g in 500 g of toluene give 23.6 g of ester, 90 %. Example of Constable, Curzons and Cunningham, Green
// Chem. 2002, 4, 521 (inputs from memory); by hand: atom economy counting the base 65.6 %, process mass
// intensity 547.71/23.6 = 23.2, so the E-factor with the same boundary is 22.2; no water.
func TestFiguresOfSulfonateEster(t *testing.T) {
	f := newFakeBook(t)
	s := f.makes("sulfonylation", "Cc1ccc(cc1)S(=O)(=O)OCc1ccccc1", 0.90, "OCc1ccccc1", "Cc1ccc(cc1)S(=O)(=O)Cl")
	s.Reactants[1].Equivalents = 0.1149 / 0.09997
	s.Byproducts = []reactions.Byproduct{{Molecule: mustRead(t, "CC[NH+](CC)CC.[Cl-]"), Count: 1}}
	set := s.Conditions[0]
	set.Uses = []reactions.Amount{{Count: 1, SMILES: "CCN(CC)CC"}}
	set.Reagents = []reactions.Charge{{Name: "triethylamine", Equiv: 0.1482 / 0.09997}}
	set.Solvents = []reactions.Solvent{{Name: "toluene", MLPerG: 500 / 0.867 / 10.81}}
	b := newBottles()
	b.put(t, "benzyl alcohol", "OCc1ccccc1", nil)
	b.put(t, "tosyl chloride", "Cc1ccc(cc1)S(=O)(=O)Cl", nil)
	b.put(t, "triethylamine", "CCN(CC)CC", nil)
	b.put(t, "toluene", "Cc1ccccc1", func(m *Material) { m.DensityGPerML = 0.867 })
	r := &plan(t, f.world(b), "Cc1ccc(cc1)S(=O)(=O)OCc1ccccc1", Options{}).Routes[0]
	if r.AtomEconomy == nil || !near4(*r.AtomEconomy, 0.6558) {
		t.Errorf("atom economy %v, want 0.656", r.AtomEconomy)
	}
	if e := r.Waste.WithWater; math.Abs(e-22.2) > 0.05 || e != r.Waste.WithoutWater {
		t.Errorf("waste %+v, want 22.2 with and without water", r.Waste)
	}
}

// TestFiguresOfAspirin: salicylic acid 10.0 g, acetic anhydride 11.02 g, phosphoric acid 0.25 g, 75 mL of
// water and 20 mL of ethanol for 10.4 g. Own bench example, by hand: atom economy 180.16/(138.12 + 102.09) =
// 75.0 %, mass intensity 10.77, without water 3.56, hence waste 9.77 and 2.56.
func TestFiguresOfAspirin(t *testing.T) {
	f := newFakeBook(t)
	s := f.makes("acetylation", "CC(=O)Oc1ccccc1C(=O)O", 0.7973, "OC(=O)c1ccccc1O", "CC(=O)OC(C)=O")
	s.Reactants[1].Equivalents = 0.10795 / 0.0724
	s.Byproducts = []reactions.Byproduct{{Molecule: mustRead(t, "CC(=O)O"), Count: 1}}
	set := s.Conditions[0]
	set.Reagents = []reactions.Charge{{Name: "phosphoric acid", Equiv: 0.25 / 97.995 / 0.0724}}
	set.Solvents = []reactions.Solvent{{Name: "water", MLPerG: 7.5}, {Name: "ethanol", MLPerG: 2}}
	b := newBottles()
	b.put(t, "salicylic acid", "OC(=O)c1ccccc1O", nil)
	b.put(t, "acetic anhydride", "CC(=O)OC(C)=O", nil)
	b.put(t, "phosphoric acid", "OP(=O)(O)O", nil)
	b.put(t, "water", "O", func(m *Material) { m.DensityGPerML = 1; m.HazardsKnown = true })
	b.put(t, "ethanol", "CCO", func(m *Material) { m.DensityGPerML = 0.789 })
	r := &plan(t, f.world(b), "CC(=O)Oc1ccccc1C(=O)O", Options{}).Routes[0]
	if r.AtomEconomy == nil || math.Abs(*r.AtomEconomy-0.750) > 0.0005 {
		t.Errorf("atom economy %v, want 0.750", r.AtomEconomy)
	}
	if w := r.Waste; math.Abs(w.WithWater-9.77) > 0.03 || math.Abs(w.WithoutWater-2.56) > 0.03 {
		t.Errorf("waste %+v, want 9.77 and 2.56", w)
	}
}

// TestYieldsOfLinearPlan: three steps at 50 % each give 12.5 %, and two 50 % branches joined at 50 % give
// 25 % on either starting material (textbook rule).
func TestYieldsOfLinearPlan(t *testing.T) {
	f := newFakeBook(t)
	f.makes("three", "CCCCCO", 0.5, "CCCCC=O")
	f.makes("two", "CCCCC=O", 0.5, "CCCCCCl")
	f.makes("one", "CCCCCCl", 0.5, "CCCCCBr")
	f.makes("join", "CCCOCCC", 0.5, "CCCS", "CCCN")
	f.makes("left", "CCCS", 0.5, "CCCBr")
	f.makes("right", "CCCN", 0.5, "CCCI")
	b := newBottles()
	for _, x := range []string{"CCCCCBr", "CCCBr", "CCCI"} {
		b.put(t, x, x, nil)
	}
	if r := &plan(t, f.world(b), "CCCCCO", Options{}).Routes[0]; !near4(r.OverallYield.Usual, 0.125) {
		t.Errorf("linear: %v", r.OverallYield)
	}
	if r := &plan(t, f.world(b), "CCCOCCC", Options{}).Routes[0]; !near4(r.OverallYield.Usual, 0.25) || !near4(r.WorstBranchYield.Usual, 0.25) {
		t.Errorf("convergent: %v, worst branch %v", r.OverallYield, r.WorstBranchYield)
	}
}
