// Package sheet turns a planned route into the sheet that lies on the bench: what to charge, what to do,
// what to know. It computes first (Make) and prints last (Text, HTML). Amounts are for isolated product;
// a doubtful route gets a scout run only. The program never signs and never fills in a name.
//
// Nothing here measures: heat, gas and flask sizes are estimates from the rules, for a first look; what
// the rules do not say is printed as unknown, never as harmless.
package sheet

import (
	"context"
	"errors"
	"fmt"
	"math"

	"shelfward/molecule"
	"shelfward/planner/route"
	"shelfward/reactions"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
)

// ScoutGrams is the most that a doubtful route is charged for, in g of target, unless the doubt is accepted.
const ScoutGrams = 1.0

// Desk is what a sheet is written from.
type Desk struct {
	Book      *reactions.Book
	Materials route.Materials
	Supplied  func(*route.Material) Supply
	Reagents  *reagent.Table
	Hazards   *hazard.Data
	Guide     *Guide
	Name      func(*molecule.Molecule) string // "" if none is known
	Read      func(string) (*molecule.Molecule, error)
	Watch     func(from []*molecule.Molecule, to *molecule.Molecule) []string // what vanishes and appears; may be nil
}

// Options say how much is wanted and what the sheet should repeat.
type Options struct {
	MakeMol  float64  // mol of isolated target
	Accept   string   // a reason for working at full scale in spite of doubts; printed
	Evidence []string // how the target was identified, and what was not decided
	Invented bool     // the shelf's amounts and prices are invented
	Version  string
	Printed  string // date and time, empty: none
}

// Sheet is a finished route sheet; every number is worked out.
type Sheet struct {
	Doubts      []string // at the head, in words
	Code        string
	Target      Compound
	MakeG       float64 // g of isolated target the amounts are for
	AskedG      float64 // g asked for
	MakeMmol    float64
	LowG, HighG float64 // g that come out if every step comes out low, or high
	SureFactor  float64 // by which to multiply the charges of the first step to be sure of MakeG
	Yield       route.Range
	LongestRun  int
	Evidence    []string
	Stock       []StockLine
	Label       hazard.Label
	Gravest     []string // at most five H statements, gravest first
	Unknown     []string // materials whose hazards nobody has looked up
	Watched     []string
	Steps       []Step
	Caution     string
	Version     string
	Printed     string
	Invented    bool
	Accepted    string
}

// Compound is a structure as the sheet shows it.
type Compound struct {
	SMILES, Name, Formula string
	MolarMass             float64
	Molecule              *molecule.Molecule
}

// StockLine is one material summed over the route, in the form supplied.
type StockLine struct {
	Name, CAS, Form string
	Steps           []int
	MassG           float64 // 0 unknown, or as needed
	VolumeML        float64 // 0 unknown, or a solid
	SureG, SureML   float64 // to have if every step comes out low
	HaveG, HaveML   float64 // NaN unknown
	Short           string  // by how much the shelf is short, empty if it is not
	OnShelf         bool
	Water           bool // from the tap or the still, never bought
	ByVolume        bool // a solution or a gas: measured in mL
	Start           bool // gives carbon to a product: worth making if it runs short

	molarMass float64
	material  *route.Material
	mol       float64
}

// Step is one flask.
type Step struct {
	Number                           int
	Name                             string
	Transform                        string
	Product                          Compound
	From                             []Compound
	Charges                          []Charge
	Tasks                            []Task   // operations and hold points in the order of the bench
	Flags                            []string // stop flags: settle these before anything is charged
	Hazards                          []string // at most five lines
	Controls                         []string
	Mixture                          []string
	Waste                            []string
	Crude                            []string // what the crude may show if it went wrong
	Watch                            []string
	Emergency                        []string
	Sources                          []string
	Objections                       []string
	OriginMark                       string // P N C E O: the weakest origin of its figures
	Origin                           string
	ConditionMark                    string
	Yield                            route.Range
	TheoryG                          float64
	ExpectLowG, ExpectG, ExpectHighG float64
	SureFactor                       float64 // by which to multiply every charge to be sure of what the next step takes
	Flask                            string  // size of the flask, empty if none is large enough
	flaskML                          float64
	NextNeedsG                       float64 // g that later steps charge, 0 for the last
}

// Task is one numbered operation, or a hold point: work stops until what it says is true.
type Task struct {
	Number    int // of the operation, 0 for a hold point
	Text      string
	Otherwise string // what to do if a hold point is not met
}

// Hold reports whether the task is a hold point.
func (t Task) Hold() bool { return t.Number == 0 }

// Charge is one row of the charge table.
type Charge struct {
	Role      string // reactant, reagent, catalyst, solvent, work-up
	FromStep  int    // the step that made it, 0: a bottle
	Name, CAS string
	MolarMass float64
	Equiv     float64 // 0: by volume
	Mmol      float64
	MassG     float64 // of the form supplied; 0 unknown, or a solution measured by volume
	VolumeML  float64 // 0: not a liquid, or too little to measure
	Form      string  // what mass and volume are for: "95 %", "3.0 M in diethyl ether"
	Limiting  bool
	IfNeeded  bool
	Gas       bool
	Note      string
	Hazards   []string
	Known     bool // the hazards were looked up

	Reagent  *reagent.Reagent   // its entry in the list of reagents, nil if there is none
	Molecule *molecule.Molecule // nil if unknown
	material *route.Material
	supply   Supply
}

// Make writes the sheet of one route. It fails on a route without steps, on an amount that is none, and
// on a step that the loaded rules no longer hold or hold to be unsound.
func Make(ctx context.Context, d *Desk, plan *route.Plan, r *route.Route, o Options) (*Sheet, error) {
	if len(r.Steps) == 0 {
		return nil, errors.New("the target stands on the shelf: there is nothing to make (ask for it to be planned anyway)")
	}
	if o.MakeMol <= 0 || math.IsNaN(o.MakeMol) || math.IsInf(o.MakeMol, 0) {
		return nil, errors.New("the amount to make must be more than nothing, for example 5 g")
	}
	w := &writer{ctx: ctx, desk: d, plan: plan, route: r, options: o}
	return w.write()
}

// writer holds one sheet while it is worked out.
type writer struct {
	ctx     context.Context
	desk    *Desk
	plan    *route.Plan
	route   *route.Route
	options Options
	sets    []*reactions.Conditions
	makeMol float64
	made    []float64 // mol of each step's product isolated, at usual yields
	sure    []float64 // mol of each step's product needed if every later step comes out low
	out     Sheet
}

func (w *writer) write() (*Sheet, error) {
	m, err := w.desk.Read(w.plan.Target.SMILES)
	if err != nil {
		return nil, err
	}
	if err := w.findConditions(); err != nil {
		return nil, err
	}
	w.out.Target = w.compound(m)
	w.out.AskedG = w.options.MakeMol * w.out.Target.MolarMass
	w.out.Code, w.out.Yield, w.out.LongestRun = w.route.Code, w.route.OverallYield, w.route.LongestRun
	w.out.Evidence, w.out.Version, w.out.Printed, w.out.Invented = w.options.Evidence, w.options.Version, w.options.Printed, w.options.Invented
	w.out.Caution = w.desk.Hazards.StandingCaution()
	w.scale()
	w.backCalculate()
	for i := range w.route.Steps {
		s, err := w.step(i)
		if err != nil {
			return nil, err
		}
		w.out.Steps = append(w.out.Steps, s)
	}
	w.apart()
	w.stock()
	w.comesOut()
	w.head()
	return &w.out, nil
}

// findConditions looks up the condition set of every step, also for a plan read from a file, and
// refuses unsound steps: no amounts are printed for those.
func (w *writer) findConditions() error {
	for _, s := range w.route.Steps {
		set := s.Set
		if t := w.desk.Book.Transform(s.Transform); set == nil && t == nil {
			return fmt.Errorf("step %d: the transform %q is not among the loaded rules", s.Number, s.Transform)
		} else if set == nil {
			for _, c := range t.Conditions {
				if c.ID == s.Conditions {
					set = c
				}
			}
		}
		if set == nil {
			return fmt.Errorf("step %d: the transform %s has no condition set %q", s.Number, s.Transform, s.Conditions)
		}
		if s.Judged != nil {
			for _, o := range s.Judged.Objections {
				if o.Fatal {
					return fmt.Errorf("step %d (%s) is unsound, no amounts are printed: %s", s.Number, s.Name, o.Text)
				}
			}
		}
		w.sets = append(w.sets, set)
	}
	return nil
}

func (w *writer) compound(m *molecule.Molecule) Compound {
	f := m.Formula()
	return Compound{SMILES: smilesOf(m), Name: w.desk.Name(m), Formula: f.String(), MolarMass: f.MolarMass(), Molecule: m}
}
