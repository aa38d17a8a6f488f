// Package sheet turns a planned route into the sheet that lies on the bench: what to charge, what to do,
// what to know. It computes first (Make) and prints last (Text, HTML). Amounts are for isolated product;
// a doubtful route gets a scout run only. The program never signs and never fills in a name.
package sheet

import (
	"errors"
	"fmt"
	"math"
	"sort"
	"strings"

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
	Reagents  *reagent.Table
	Hazards   *hazard.Data
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
	Yield       route.Range
	LongestRun  int
	Evidence    []string
	Stock       []StockLine
	Label       hazard.Label
	Gravest     []string // at most five H statements, gravest first
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

// StockLine is one material summed over the route.
type StockLine struct {
	Name, CAS string
	Steps     []int
	MassG     float64
	VolumeML  float64 // 0 unknown
	SureG     float64 // g to have if every step comes out low
	HaveG     float64 // NaN unknown
	ShortG    float64
	OnShelf   bool
}

// Step is one flask.
type Step struct {
	Number                           int
	Name                             string
	Transform                        string
	Product                          Compound
	From                             []Compound
	Charges                          []Charge
	Operations                       []string
	Holds                            []string // hold points with their negative answer
	Flags                            []string // stop flags
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
	Yield                            route.Range
	TheoryG                          float64
	ExpectLowG, ExpectG, ExpectHighG float64
	Flask                            string
	NextNeedsG                       float64 // g that the next step charges, 0 for the last
}

// Charge is one row of the charge table.
type Charge struct {
	Role      string
	Name, CAS string
	MolarMass float64
	Equiv     float64 // 0: by volume
	Mmol      float64
	MassG     float64
	VolumeML  float64 // 0: not a liquid, or too little to measure
	Form      string  // what the mass is for: "95 %", "3.0 M"
	Limiting  bool
	Hazards   []string
}

// Make writes the sheet of one route.
func Make(d *Desk, plan *route.Plan, r *route.Route, o Options) (*Sheet, error) {
	if len(r.Steps) == 0 {
		return nil, errors.New("the target stands on the shelf: there is nothing to make (ask for it to be planned anyway)")
	}
	if o.MakeMol <= 0 || math.IsNaN(o.MakeMol) || math.IsInf(o.MakeMol, 0) {
		return nil, errors.New("the amount to make must be more than nothing, for example 5 g")
	}
	w := &writer{desk: d, plan: plan, route: r, options: o}
	return w.write()
}

// writer holds one sheet while it is worked out.
type writer struct {
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
	w.stock()
	w.comesOut()
	w.head()
	return &w.out, nil
}

// findConditions looks up the condition set of every step, also for a plan read from a file.
func (w *writer) findConditions() error {
	for _, s := range w.route.Steps {
		set := s.Set
		if set == nil {
			t := w.desk.Book.Transform(s.Transform)
			if t == nil {
				return fmt.Errorf("step %d: the transform %q is not among the loaded rules", s.Number, s.Transform)
			}
			for _, c := range t.Conditions {
				if c.ID == s.Conditions {
					set = c
				}
			}
			if set == nil {
				return fmt.Errorf("step %d: the transform %s has no condition set %q", s.Number, s.Transform, s.Conditions)
			}
		}
		w.sets = append(w.sets, set)
	}
	return nil
}

// scale decides for how much the amounts are printed: doubt allows a scout run only.
func (w *writer) scale() {
	w.makeMol = w.options.MakeMol
	doubtful := 0
	for _, s := range w.route.Steps {
		if len(s.Objections) > 0 {
			doubtful++
		}
	}
	switch {
	case doubtful > 0 && w.options.Accept == "" && w.out.AskedG > ScoutGrams:
		w.makeMol = ScoutGrams / w.out.Target.MolarMass
		w.out.Doubts = append(w.out.Doubts, fmt.Sprintf("%s doubtful, so the whole route is: amounts are for a scout run of %s of target, not for the %s asked. "+
			"To work at full scale say --accept 'reason'.", countSteps(doubtful), grams(ScoutGrams), grams(w.out.AskedG)))
	case doubtful > 0 && w.options.Accept != "":
		w.out.Accepted = w.options.Accept
		w.out.Doubts = append(w.out.Doubts, fmt.Sprintf("%s doubtful; full scale was asked for with the reason: %s", countSteps(doubtful), w.options.Accept))
	case doubtful > 0:
		w.out.Doubts = append(w.out.Doubts, countSteps(doubtful)+" doubtful: a scout run.")
	}
	w.out.MakeG = w.makeMol * w.out.Target.MolarMass
	w.out.MakeMmol = w.makeMol * 1000
	w.out.Doubts = append(w.out.Doubts, w.route.Doubts...)
}

func countSteps(n int) string {
	if n == 1 {
		return "one step is"
	}
	return fmt.Sprintf("%d steps are", n)
}

// backCalculate finds how much of every product must be isolated: n = n(target) x equivalents / yields.
func (w *writer) backCalculate() {
	n := len(w.route.Steps)
	w.made, w.sure = make([]float64, n), make([]float64, n)
	w.made[n-1], w.sure[n-1] = w.makeMol, w.makeMol
	for i := n - 1; i >= 0; i-- {
		s := &w.route.Steps[i]
		for j, by := range s.MadeBy {
			if by > 0 {
				w.made[by-1] += w.made[i] / s.Yield.Usual * s.Equivalents[j]
				w.sure[by-1] += w.sure[i] / s.Yield.Low * s.Equivalents[j]
			}
		}
	}
}

// comesOut works out what is isolated when every step comes out low or high, with the charges printed.
func (w *writer) comesOut() {
	low, high := make([]float64, len(w.made)), make([]float64, len(w.made))
	for i, s := range w.route.Steps {
		lowest, highest := 1.0, math.Inf(1)
		for _, by := range s.MadeBy {
			if by > 0 {
				lowest, highest = math.Min(lowest, low[by-1]), math.Min(highest, high[by-1])
			}
		}
		if math.IsInf(highest, 1) {
			highest = 1
		}
		low[i] = lowest * s.Yield.Low / s.Yield.Usual
		high[i] = highest * s.Yield.High / s.Yield.Usual
	}
	last := len(low) - 1
	w.out.LowG, w.out.HighG = w.out.MakeG*low[last], w.out.MakeG*high[last]
}

func (w *writer) compound(m *molecule.Molecule) Compound {
	f := m.Formula()
	return Compound{SMILES: smilesOf(m), Name: w.desk.Name(m), Formula: f.String(), MolarMass: f.MolarMass(), Molecule: m}
}

// stock sums the charges over the steps and compares with the shelf.
func (w *writer) stock() {
	index := map[string]int{}
	for i, s := range w.out.Steps {
		ratio := 1.0
		if w.made[i] > 0 {
			ratio = (w.sure[i] / w.route.Steps[i].Yield.Low) / (w.made[i] / w.route.Steps[i].Yield.Usual)
		}
		for _, c := range s.Charges {
			if strings.HasPrefix(c.Role, "from step") {
				continue
			}
			k, ok := index[c.Name]
			if !ok {
				k = len(w.out.Stock)
				index[c.Name] = k
				w.out.Stock = append(w.out.Stock, w.stockLine(c))
			}
			line := &w.out.Stock[k]
			line.MassG += c.MassG
			line.VolumeML += c.VolumeML
			line.SureG += c.MassG * ratio
			if len(line.Steps) == 0 || line.Steps[len(line.Steps)-1] != s.Number {
				line.Steps = append(line.Steps, s.Number)
			}
		}
	}
	for i := range w.out.Stock {
		line := &w.out.Stock[i]
		if !math.IsNaN(line.HaveG) && line.HaveG < line.MassG*0.999 {
			line.ShortG = line.MassG - line.HaveG
			w.out.Doubts = append(w.out.Doubts, w.shortage(line))
		}
	}
}

func (w *writer) stockLine(c Charge) StockLine {
	line := StockLine{Name: c.Name, CAS: c.CAS, HaveG: math.NaN()}
	mat := w.material(c.Name)
	if mat != nil {
		line.OnShelf = mat.OnShelf
		if !math.IsNaN(mat.StockMol) && mat.MassPerMol > 0 {
			line.HaveG = mat.StockMol * mat.MassPerMol
		}
	}
	return line
}

// material finds a charged material again by its name: a starting material or a reagent.
func (w *writer) material(name string) *route.Material {
	for _, s := range w.route.Steps {
		for j, by := range s.MadeBy {
			if by > 0 {
				continue
			}
			m, err := w.desk.Read(s.Reactants[j])
			if err != nil {
				continue
			}
			if mat := w.desk.Materials.Molecule(m); w.materialName(&mat, m) == name {
				return &mat
			}
		}
	}
	if mat, ok := w.desk.Materials.Named(name); ok {
		return &mat
	}
	return nil
}

func (w *writer) shortage(line *StockLine) string {
	part := line.HaveG / line.MassG
	text := fmt.Sprintf("%s: short by %s (needs %s as supplied, the shelf has %s): it suffices for %s of target",
		line.Name, grams(line.ShortG), grams(line.MassG), grams(line.HaveG), grams(w.out.MakeG*part))
	return text + "; make less, buy, or make it"
}

// head collects the label of everything charged, gravest first.
func (w *writer) head() {
	var codes []string
	seen := map[string]bool{}
	flags := map[string]bool{}
	unknown := []string{}
	for _, s := range w.out.Steps {
		for _, c := range s.Charges {
			for _, h := range c.Hazards {
				if !seen[h] {
					seen[h] = true
					codes = append(codes, h)
				}
			}
			if c.Hazards == nil && !strings.HasPrefix(c.Role, "from step") && c.Name != "water" && !flags["?"+c.Name] {
				flags["?"+c.Name] = true
				unknown = append(unknown, c.Name)
			}
			if r, ok := w.desk.Reagents.Named(c.Name); ok {
				for _, f := range w.desk.Hazards.Watched(hazard.Substance{Name: c.Name, Reagent: r}) {
					if text := c.Name + ": " + f.Text; !flags[text] {
						flags[text] = true
						w.out.Watched = append(w.out.Watched, text)
					}
				}
			}
		}
	}
	w.out.Label = w.desk.Hazards.Label(codes)
	w.out.Gravest = w.statements(codes, 5)
	if len(unknown) > 0 {
		sort.Strings(unknown)
		w.out.Doubts = append(w.out.Doubts, "hazards unknown (nobody has looked them up): "+strings.Join(unknown, ", "))
	}
}

// statements writes the gravest n codes with their texts.
func (w *writer) statements(codes []string, n int) []string {
	var out []string
	sorted := w.desk.Hazards.Sort(codes)
	for i, code := range sorted {
		if i == n {
			break
		}
		line := code
		if s, ok := w.desk.Hazards.Statement(code); ok {
			line += " " + s.Text
		}
		out = append(out, line)
	}
	if len(sorted) > n {
		out = append(out, fmt.Sprintf("and %d more (see the charge tables)", len(sorted)-n))
	}
	return out
}
