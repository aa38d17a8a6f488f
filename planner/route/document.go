package route

import (
	"time"

	"shelfward/molecule"
	"shelfward/reactions"
)

// Range is low, usual and high of a figure.
type Range struct {
	Low   float64 `json:"low"`
	Usual float64 `json:"usual"`
	High  float64 `json:"high"`
}

// Span is low and high of a temperature in C or a time in h.
type Span struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

// Objection is a reason to doubt a step.
type Objection struct {
	Kind string `json:"kind"`
	Text string `json:"text"`
}

// Step is one flask of a route. Structures are canonical SMILES.
type Step struct {
	Number         int         `json:"number"` // from 1, in bench order
	Transform      string      `json:"transform"`
	Name           string      `json:"name"`
	Together       []string    `json:"together"` // further transforms in the same flask
	Conditions     string      `json:"conditions"`
	Reactants      []string    `json:"reactants"`
	ReactantNames  []string    `json:"reactant_names"`
	Equivalents    []float64   `json:"equivalents"`
	Product        string      `json:"product"`
	ProductName    string      `json:"product_name"`
	ProductFormula string      `json:"product_formula"`
	Byproducts     []string    `json:"byproducts"`
	ByproductNames []string    `json:"byproduct_names"` // or formulas
	Reagents       []string    `json:"reagents"`
	Solvents       []string    `json:"solvents"`
	Temperature    Span        `json:"temperature"`
	Time           Span        `json:"time"`
	Share          string      `json:"share"`
	Yield          Range       `json:"yield"`
	Origin         string      `json:"origin"`
	Hazards        []string    `json:"hazards"`
	Cautions       []string    `json:"cautions"`
	Objections     []Objection `json:"objections"`
	AtScale        []string    `json:"at_scale"` // what practice avoids at scale; filled when asked for
	FlaskML        float64     `json:"flask_ml"` // volume charged for the scale of the plan, about; 0 unknown
	Racemic        bool        `json:"racemic"`
	Source         string      `json:"source"`

	// For the route sheet. MadeBy[i] is the number of the step that makes reactant i, 0 if it is taken
	// from the shelf.
	MadeBy    []int                 `json:"made_by"`
	Judged    *reactions.Step       `json:"-"`
	Set       *reactions.Conditions `json:"-"`
	Molecule  *molecule.Molecule    `json:"-"`           // the product
	Consumed  []*molecule.Molecule  `json:"-"`           // parallel to Reactants
	MolTarget float64               `json:"mol_per_mol"` // moles of the product that one mole of target takes, at usual yields
}

// StartingMaterial is a leaf of a route.
type StartingMaterial struct {
	SMILES  string  `json:"smiles"`
	Name    string  `json:"name"`
	OnShelf bool    `json:"on_shelf"`
	Mol     float64 `json:"mol_per_mol"` // charged per mole of target at usual yields
	Gives   string  `json:"gives"`       // atoms of the target that come from it, hydrogen left out: 'C4'

	Molecule *molecule.Molecule `json:"-"`
	Material Material           `json:"-"`
}

// Purchase is a reagent that is not on the shelf.
type Purchase struct {
	Name   string `json:"name"`
	CAS    string `json:"cas"`
	SMILES string `json:"smiles"`
	Needed string `json:"needed"` // amount in words for the scale of the plan
	Why    string `json:"why"`    // the steps that use it
}

// Alternative is another way to carry out one step of a route between the same molecules.
type Alternative struct {
	Step       int      `json:"step"`
	Transform  string   `json:"transform"`
	Name       string   `json:"name"`
	Conditions string   `json:"conditions"`
	Reagents   []string `json:"reagents"`
	Yield      Range    `json:"yield"`
}

// WasteFigures are E-factors in kg per kg of target, at usual yields: everything charged, solvents
// counted, work-up not, less the target.
type WasteFigures struct {
	WithWater    float64 `json:"with_water"`
	WithoutWater float64 `json:"without_water"`
}

// HazardFigures are the gravest statements of everything charged, and the number of materials for
// which no hazard was ever looked up. Intermediates are not counted: nobody has looked them up.
type HazardFigures struct {
	Gravest     []string `json:"gravest"`
	WithoutData int      `json:"without_data"`
}

// PriceFigures is the price of everything charged for the scale of the plan, as far as priced.
type PriceFigures struct {
	Price    float64 `json:"price"`
	Currency string  `json:"currency"`
	Unpriced int     `json:"unpriced"` // materials without a price
	Of       int     `json:"of"`       // materials in all
}

// Stock says in one word whether the shelf holds enough for the scale of the plan.
func (r *Route) Stock() string {
	switch {
	case len(r.Short) > 0:
		return "short"
	case len(r.StockUnknown) > 0:
		return "unknown"
	}
	return "suffices"
}

// enough is 0 if the stock is known to suffice, 1 if not: an amount that nobody wrote down moves no route up.
func (r *Route) enough() int {
	if r.Stock() == "suffices" {
		return 0
	}
	return 1
}

// Route is one way from the shelf to the target with its figures.
type Route struct {
	Rank              int                `json:"rank"`
	Code              string             `json:"code"`
	Weight            float64            `json:"weight"`
	Proven            bool               `json:"proven"`
	Steps             []Step             `json:"steps"`
	LongestRun        int                `json:"longest_run"`
	OverallYield      Range              `json:"overall_yield"`
	WorstBranchYield  Range              `json:"worst_branch_yield"`
	AtomEconomy       *float64           `json:"atom_economy"` // null where the atoms do not balance
	Waste             WasteFigures       `json:"waste"`
	Hazard            HazardFigures      `json:"hazard"`
	Materials         PriceFigures       `json:"materials"`
	StartingMaterials []StartingMaterial `json:"starting_materials"`
	TargetByStart     string             `json:"target_by_start"` // SMILES of the target; atom class n: from starting material n
	FromReagents      string             `json:"from_reagents"`   // atoms that reagents bring, hydrogen left out
	ToBuy             []Purchase         `json:"to_buy"`
	Alternatives      []Alternative      `json:"alternatives"`
	Protections       []Protection       `json:"protections"`   // groups shielded over some steps
	WaysOut           []WayOut           `json:"ways_out"`      // per intermediate: what is left if the step that takes it on fails
	VariantOf         string             `json:"variant_of"`    // code of an earlier route that makes the same bonds from the same materials
	VariantBy         string             `json:"variant_by"`    // in what it differs from that one
	KeyBonds          string             `json:"key_bonds"`     // SMILES of the target; atom class 1: ends of the carbon-carbon bonds made last
	Short             []string           `json:"short"`         // stock that does not suffice for the scale of the plan
	StockUnknown      []string           `json:"stock_unknown"` // on the shelf, but nobody wrote down how much
	GravestClass      int                `json:"gravest_class"` // 0 slight to 4; unknown hazards count as 4
	Days              float64            `json:"days"`          // working days of eight hours, added up along the bench order
	Doubts            []string           `json:"doubts"`

	madePlaces string        // the bonds made, by kinds of place
	keySteps   []string      // the transforms that make the key bonds
	stood      time.Duration // after the start of the search
	made       []making      // parallel to Steps; of a plan just made
}
