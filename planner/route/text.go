package route

import (
	"fmt"
	"io"
	"math"
	"strings"
	"text/tabwriter"
)

// letters are the origin letters that stand behind conditions and yields.
var letters = map[string]string{"published": "P", "near": "N", "class": "C", "estimated": "E", "own": "O"}

// originKey explains the letters once per page.
const originKey = "origin of conditions and yields: P published for this substrate, N for a near one, C usual for the class, E estimated, O own runs"

// WriteText prints the plan as plain text: what was avoided, doubts, a table of the routes, then each
// route with its ladder and steps. The line that echoes the target is the caller's.
func (p *Plan) WriteText(w io.Writer) error {
	t := &writer{w: w}
	p.WriteWishes(t.w)
	for _, line := range p.wanted() {
		t.line("%s", line)
	}
	for _, d := range p.Doubts {
		t.line("Doubt: %s", d)
	}
	if len(p.Routes) == 0 {
		p.writeNothing(t)
		p.writeExplained(t)
		return t.err
	}
	if len(p.Routes[0].Steps) == 0 {
		t.line("On the shelf already: %s. No step is needed.", label(p.Target.Name, p.Target.SMILES))
		return t.err
	}
	t.line("")
	t.line("%d %s, ordered by: %s.", len(p.Routes), plural(len(p.Routes), "route", "routes"), p.Minimised)
	t.line("Figures are for %s g of target; yields in %% as low-usual-high; waste in kg per kg, solvents counted, work-up not.", figure(p.MakeG))
	t.line("")
	p.writeTable(t)
	t.line("")
	t.line("%s", p.proof())
	t.line("%s.", originKey)
	for i := range p.Routes {
		t.line("")
		p.Routes[i].write(t, p)
	}
	p.writeExplained(t)
	return t.err
}

func (p *Plan) writeExplained(t *writer) {
	for i := range p.Explained {
		p.Explained[i].write(t)
	}
}

// writer remembers the first error so that printing reads plainly.
type writer struct {
	w   io.Writer
	err error
}

func (t *writer) line(format string, args ...any) {
	if t.err == nil {
		_, t.err = fmt.Fprintf(t.w, format+"\n", args...)
	}
}

// table prints rows in aligned columns.
func (t *writer) table(rows [][]string) {
	if t.err != nil {
		return
	}
	t.err = WriteColumns(t.w, rows)
}

// WriteColumns prints rows in aligned columns, two blanks apart.
func WriteColumns(w io.Writer, rows [][]string) error {
	tab := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	for _, r := range rows {
		fmt.Fprintln(tab, strings.TrimRight(strings.Join(r, "\t"), "\t"))
	}
	return tab.Flush()
}

func (p *Plan) writeNothing(t *writer) {
	if p.Search.Exhausted {
		t.line("No route of at most %d steps along the longest run exists under the %d rules and %d shelf items loaded; that says nothing about the flask.", p.MaxSteps, p.Search.Rules, p.Search.ShelfItems)
	} else {
		t.line("No route was found.")
	}
	for _, o := range p.WouldOpen {
		t.line("One purchase would open a route: %s (%s; %s).", label(o.Name, o.SMILES), o.Why, o.ClassSays)
	}
}

func (p *Plan) writeTable(t *writer) {
	rows := [][]string{{"", "route", "steps", "run", "yield", "worst branch", "waste", "no water", "price", "gravest hazards", "doubts"}}
	if p.MakeAsked {
		rows[0] = append(rows[0], "stock")
	}
	for i := range p.Routes {
		r := &p.Routes[i]
		rows = append(rows, []string{fmt.Sprint(r.Rank), r.Code, fmt.Sprint(len(r.Steps)), fmt.Sprint(r.LongestRun), Percent(r.OverallYield), Percent(r.WorstBranchYield),
			short(r.Waste.WithWater), short(r.Waste.WithoutWater), r.Materials.String(), r.Hazard.String(), fmt.Sprint(len(r.Doubts))})
		if p.MakeAsked {
			rows[i+1] = append(rows[i+1], r.Stock())
		}
	}
	t.table(rows)
}

// proof says in words what is proven.
func (p *Plan) proof() string {
	under := fmt.Sprintf("under the %d rules and %d shelf items loaded; that says nothing about the flask.", p.Search.Rules, p.Search.ShelfItems)
	switch {
	case p.Search.ProvenRoutes >= len(p.Routes) && p.Search.Exhausted:
		return fmt.Sprintf("No other route of at most %d steps along the longest run comes before these %s", p.MaxSteps, under)
	case p.Search.ProvenRoutes >= len(p.Routes):
		return "No route that is not listed comes before these " + under
	case p.Search.ProvenRoutes > 1:
		return fmt.Sprintf("No route comes before the first %d %s The rest is not proven.", p.Search.ProvenRoutes, under)
	case p.Search.ProvenBest:
		return "No route comes before the first " + under + " The rest is not proven."
	}
	return "The order is not proven: the search was not finished."
}

// write prints one route: doubts, ladder, steps, materials.
func (r *Route) write(t *writer, p *Plan) {
	head := fmt.Sprintf("Route %s (%d): %d %s, longest run %d, about %s working %s", r.Code, r.Rank, len(r.Steps), plural(len(r.Steps), "step", "steps"), r.LongestRun, figureDays(r.Days), plural(int(r.Days), "day", "days"))
	if r.VariantOf != "" {
		head += ", a variant of " + r.VariantOf + " (" + r.VariantBy + ")"
	}
	t.line("%s", head)
	for _, d := range r.Doubts {
		t.line("  Doubt: %s", d)
	}
	for i := range r.Protections {
		t.line("  Protection: %s", r.Protections[i].text())
	}
	t.line("")
	r.ladder(t, p)
	t.line("")
	for i := range r.Steps {
		r.Steps[i].write(t)
	}
	r.writeMaterials(t)
}

// ladder draws the route as rungs between the shelf, the ground line, and the target on top.
func (r *Route) ladder(t *writer, p *Plan) {
	const ground = "  ====================================================================="
	t.line("        %s", label(p.Target.Name, p.Target.SMILES))
	for i := len(r.Steps) - 1; i >= 0; i-- {
		s := &r.Steps[i]
		t.line("    |---|  %s", s.Rung())
		if i == 0 {
			break
		}
		t.line("    |   |    %s", r.StepProduct(i-1))
	}
	t.line("%s", ground)
	t.line("  shelf: %s", r.Starts())
}

// Rung is the step in the words that stand on its rung: number, reaction, yield range with its origin, days, gravest
// hazard.
func (s *Step) Rung() string {
	gravest := ""
	if len(s.Hazards) > 0 {
		gravest = ", " + s.Hazards[0]
	}
	return fmt.Sprintf("%d %s, %s %% %s, %s d%s", s.Number, s.Name, Percent(s.Yield), letters[s.Origin], figureDays(daysOf(s)), gravest)
}

// StepProduct is the product of step i (from 0) by name, with the steps that it goes to where they are not the next.
func (r *Route) StepProduct(i int) string {
	s := &r.Steps[i]
	if i == len(r.Steps)-1 {
		return label(s.ProductName, s.Product)
	}
	return label(s.ProductName, s.Product) + r.bound(i)
}

// bound names the step that an intermediate goes to, where that is not the rung above it.
func (r *Route) bound(i int) string {
	var to []string
	for j := i + 1; j < len(r.Steps); j++ {
		for _, n := range r.Steps[j].MadeBy {
			if n == i+1 {
				to = append(to, fmt.Sprint(j+1))
			}
		}
	}
	if len(to) == 1 && to[0] == fmt.Sprint(i+2) {
		return ""
	}
	return " (for step " + strings.Join(to, " and ") + ")"
}

// Starts lists the starting materials by name.
func (r *Route) Starts() string {
	var out []string
	for _, m := range r.StartingMaterials {
		out = append(out, label(m.Name, m.SMILES))
	}
	return strings.Join(out, ", ")
}

// Line is the step as one line: what goes in, what comes out, with what.
func (s *Step) Line() string {
	return fmt.Sprintf("%s: %s, %s", s.Name, s.equation(), s.with())
}

func (s *Step) equation() string {
	var parts []string
	for i := range s.Reactants {
		part := label(s.ReactantNames[i], s.Reactants[i])
		if s.MadeBy[i] > 0 {
			part += fmt.Sprintf(" (step %d)", s.MadeBy[i])
		}
		if s.Equivalents[i] != 1 {
			part += fmt.Sprintf(" %g eq", round(s.Equivalents[i], 3))
		}
		parts = append(parts, part)
	}
	return strings.Join(parts, " + ") + " -> " + label(s.ProductName, s.Product)
}

// with lists reagents and solvents.
func (s *Step) with() string {
	with := strings.Join(s.Reagents, ", ")
	if len(s.Solvents) > 0 {
		with = strings.TrimPrefix(with+" in "+strings.Join(s.Solvents, " and "), " ")
	}
	if with == "" {
		return "no reagent"
	}
	return with
}

func (s *Step) write(t *writer) {
	t.line("  %d  %s", s.Number, s.Name)
	t.line("     %s", s.equation())
	t.line("     %s; %s, %s", s.with(), span(s.Temperature, "C"), span(s.Time, "h"))
	t.line("     yield %s %% (%s)", Percent(s.Yield), letters[s.Origin])
	if len(s.Byproducts) > 0 {
		t.line("     sets free: %s", strings.Join(s.ByproductNames, ", "))
	}
	if len(s.Hazards) > 0 {
		t.line("     hazards charged: %s", strings.Join(s.Hazards[:min(len(s.Hazards), 8)], " "))
	}
	if len(s.AtScale) > 0 {
		t.line("     avoided at scale: %s", strings.Join(s.AtScale, "; "))
	}
	for _, c := range s.Cautions {
		t.line("     caution: %s", c)
	}
}

func (r *Route) writeMaterials(t *writer) {
	r.writeAtoms(t)
	for _, b := range r.ToBuy {
		t.line("  not on the shelf: %s, %s (%s)", label(b.Name, b.SMILES), b.Needed, b.Why)
	}
	perStep := map[int]int{}
	for _, a := range r.Alternatives {
		if perStep[a.Step]++; perStep[a.Step] <= alternativesShown {
			t.line("  instead, in step %d: %s with %s, yield %s %%", a.Step, a.Name, nameOr(strings.Join(a.Reagents, ", "), "no reagent"), Percent(a.Yield))
		}
	}
	for i := range r.Steps {
		if more := perStep[i+1] - alternativesShown; more > 0 {
			t.line("  and %d more for step %d", more, i+1)
		}
	}
}

// alternativesShown is how many ways per step are printed; JSON has all.
const alternativesShown = 3

// label prefers a name to a structure.
func label(name, smiles string) string {
	if name == "" {
		return smiles
	}
	return name
}

// Percent writes a range of fractions in whole per cents.
func Percent(r Range) string {
	whole := func(x float64) float64 { return math.Floor(100*x + 0.5 + 1e-9) } // a half that binary fractions fall short of
	return fmt.Sprintf("%.0f-%.0f-%.0f", whole(r.Low), whole(r.Usual), whole(r.High))
}

// span writes a temperature or time range once if both ends are the same.
func span(s Span, unit string) string {
	if s.Low == s.High {
		return fmt.Sprintf("%g %s", s.Low, unit)
	}
	return fmt.Sprintf("%g to %g %s", s.Low, s.High, unit)
}

// short writes a figure with two or three digits.
func short(x float64) string {
	if math.Abs(x) >= 10 {
		return fmt.Sprintf("%.0f", x)
	}
	return fmt.Sprintf("%.1f", x)
}

func round(x float64, digits int) float64 {
	unit := math.Pow(10, float64(digits))
	return math.Round(x*unit) / unit
}

func figureDays(d float64) string { return fmt.Sprintf("%g", round(d, 1)) }

// String is the price in words: 'at least' as soon as one material has none.
func (f PriceFigures) String() string {
	switch {
	case f.Unpriced == f.Of:
		return "unknown"
	case f.Unpriced > 0:
		return strings.TrimSpace(fmt.Sprintf("at least %s %s (%d of %d unpriced)", figure(f.Price), f.Currency, f.Unpriced, f.Of))
	}
	return strings.TrimSpace(figure(f.Price) + " " + f.Currency)
}

// String lists the gravest codes and what nobody looked up.
func (f HazardFigures) String() string {
	text := strings.Join(f.Gravest[:min(len(f.Gravest), 3)], " ")
	if f.WithoutData > 0 {
		text = strings.TrimSpace(fmt.Sprintf("%s (%d never looked up)", text, f.WithoutData))
	}
	if text == "" {
		return "none"
	}
	return text
}
