package sheet

import (
	"fmt"
	"io"
	"math"
	"strings"
	"unicode/utf8"
)

// textWidth is the width of wrapped lines: one A4 page in 10 pt.
const textWidth = 98

// Text prints the sheet as plain text, one block per step, no line wider than 100 characters.
func (s *Sheet) Text(w io.Writer) error {
	p := &printer{w: w}
	s.textHead(p)
	for i := range s.Steps {
		s.textStep(p, &s.Steps[i])
	}
	p.rule('=')
	p.wrap("CAUTION  ", s.Caution)
	p.line("")
	p.line("prepared ____________________   checked ____________________   approved ____________________")
	p.line("date ____________   building, room, hood ____________________   emergency number ______________")
	return p.err
}

// printer remembers the first error of its writer.
type printer struct {
	w   io.Writer
	err error
}

// line prints a line; spaces that must not break have done their work by now.
func (p *printer) line(format string, args ...any) {
	if p.err == nil {
		_, p.err = io.WriteString(p.w, strings.ReplaceAll(fmt.Sprintf(format, args...), noBreak, " ")+"\n")
	}
}

func (p *printer) rule(c byte) { p.line("%s", strings.Repeat(string(c), textWidth)) }

// part is a heading inside a step.
func (p *printer) part(name string) {
	p.line("-- %s %s", name, strings.Repeat("-", textWidth-4-utf8.RuneCountInString(name)))
}

// wrap prints a paragraph behind a label; further lines are indented by its width.
func (p *printer) wrap(label, text string) {
	width := textWidth - utf8.RuneCountInString(label)
	for i, l := range fold(text, width) {
		if i > 0 {
			label = strings.Repeat(" ", utf8.RuneCountInString(label))
		}
		p.line("%s", strings.TrimRight(label+l, " "))
	}
}

// list prints one paragraph per item, the label before the first.
func (p *printer) list(label string, items []string) {
	for i, text := range items {
		if i > 0 {
			label = strings.Repeat(" ", utf8.RuneCountInString(label))
		}
		p.wrap(label, text)
	}
}

func (s *Sheet) textHead(p *printer) {
	p.rule('=')
	p.line("ROUTE SHEET %s   %s, longest run %d   shelfward %s%s", s.Code, stepCount(len(s.Steps)), s.LongestRun, s.Version, printedText(s.Printed))
	p.rule('=')
	for _, d := range s.Doubts {
		p.wrap("DOUBT         ", d)
	}
	if s.Invented {
		p.wrap("DOUBT         ", "Stock, places and prices of the shelf used here are INVENTED examples.")
	}
	p.wrap("target        ", targetText(s))
	p.wrap("structure     ", s.Target.SMILES)
	p.wrap("aim           ", fmt.Sprintf("%s (%s mmol) of isolated product", grams(s.MakeG), digits(s.MakeMmol)))
	p.wrap("comes out     ", comesOutText(s))
	p.wrap("yield         ", yieldText(s))
	p.list("steps         ", s.overview())
	p.list("evidence      ", s.Evidence)
	p.wrap("signal word   ", orNone(s.Label.Signal)+"; pictograms: "+pictograms(s))
	p.list("gravest       ", s.Gravest)
	if len(s.Unknown) > 0 {
		p.wrap("UNKNOWN       ", unknownText(s))
	}
	p.list("watched       ", s.Watched)
	p.line("")
	s.textStock(p)
}

// overview tells each step on one line, and the largest vessel of all.
func (s *Sheet) overview() (out []string) {
	largest := 0
	for i := range s.Steps {
		st := &s.Steps[i]
		out = append(out, fmt.Sprintf("%d  %s: %s; %s-%s-%s %% (%s)", st.Number, st.Name, equation(st), percent(st.Yield.Low), percent(st.Yield.Usual), percent(st.Yield.High), st.OriginMark))
		if len(st.Flags) > 0 {
			out[i] += fmt.Sprintf("; %d to settle before it starts", len(st.Flags))
		}
		if s.Steps[i].flaskML > s.Steps[largest].flaskML {
			largest = i
		}
	}
	if f := s.Steps[largest].Flask; f != "" {
		return append(out, fmt.Sprintf("largest vessel: %s (step %d)", f, s.Steps[largest].Number))
	}
	return append(out, fmt.Sprintf("largest vessel: none of the usual ones is large enough for step %d", s.Steps[largest].Number))
}

func stepCount(n int) string {
	if n == 1 {
		return "1 step"
	}
	return fmt.Sprintf("%d steps", n)
}

func targetText(s *Sheet) string {
	if s.Target.Name == "" {
		return fmt.Sprintf("no name known; %s, %.2f g/mol", s.Target.Formula, s.Target.MolarMass)
	}
	return fmt.Sprintf("%s, %s, %.2f g/mol", s.Target.Name, s.Target.Formula, s.Target.MolarMass)
}

func comesOutText(s *Sheet) string {
	return fmt.Sprintf("%s if every step comes out low, %s if every step comes out high (later charges cut to what came out); to be sure of %s charge %.2g times the amounts of the first steps, see 'to be sure'",
		grams(s.LowG), grams(s.HighG), grams(s.MakeG), s.SureFactor)
}

func yieldText(s *Sheet) string {
	return fmt.Sprintf("%s %% overall (%s to %s; product of step ranges, not a statistical interval)", percent(s.Yield.Usual), percent(s.Yield.Low), percent(s.Yield.High))
}

func unknownText(s *Sheet) string {
	return "hazards that nobody has looked up: " + strings.Join(s.Unknown, ", ") + "; treat as toxic, get the data sheet first"
}

func printedText(t string) string {
	if t == "" {
		return ""
	}
	return "   printed " + t
}

func orNone(s string) string {
	if s == "" {
		return "none"
	}
	return s
}

func pictograms(s *Sheet) string {
	var out []string
	for _, x := range s.Label.Pictograms {
		out = append(out, x.Code+" "+x.Name)
	}
	return orNone(strings.Join(out, ", "))
}

var stockColumns = []column{{"material, as supplied", 37, false}, {"steps", 6, false}, {"needs", 9, true}, {"", 8, true}, {"to be sure", 10, true}, {"on the shelf", 23, true}}

func (s *Sheet) textStock(p *printer) {
	p.line("To have ready; 'to be sure' if every step comes out low")
	var rows [][]string
	for i := range s.Stock {
		l := &s.Stock[i]
		mass, volume, sure := l.needs()
		rows = append(rows, []string{l.name(), joinInts(l.Steps), mass, volume, sure, haveText(l)})
	}
	p.table(stockColumns, rows)
	p.line("")
}

// name is the first cell of a stock line; a form that nobody stated matters only beside an amount.
func (l *StockLine) name() string {
	if l.MassG == 0 && l.VolumeML == 0 && (l.Form == assumedPure || l.Form == massUnknown) {
		return l.Name + casText(l.CAS)
	}
	return l.Name + casText(l.CAS) + formText(l.Form)
}

// needs writes mass, volume and the amount to be sure of a stock line.
func (l *StockLine) needs() (mass, volume, sure string) {
	if l.VolumeML > 0 {
		volume = millilitres(l.VolumeML)
	}
	switch {
	case l.ByVolume && l.VolumeML > 0:
		return "", volume, millilitres(l.SureML)
	case l.MassG > 0:
		return grams(l.MassG), volume, grams(l.SureG)
	case l.VolumeML > 0:
		return "", volume, millilitres(l.SureML)
	}
	return "as needed", "", ""
}

func haveText(l *StockLine) string {
	have := "amount not stated"
	switch {
	case l.Water && !l.OnShelf:
		return "deionised"
	case !l.OnShelf:
		return "to buy"
	case l.ByVolume && !math.IsNaN(l.HaveML):
		have = millilitres(l.HaveML)
	case !l.ByVolume && !math.IsNaN(l.HaveG):
		have = grams(l.HaveG)
	}
	if l.Short != "" {
		return have + " SHORT by " + l.Short
	}
	return have
}

func casText(cas string) string {
	if cas == "" {
		return ""
	}
	return " [" + cas + "]"
}

func joinInts(list []int) string {
	var out []string
	for _, n := range list {
		out = append(out, fmt.Sprint(n))
	}
	return strings.Join(out, " ")
}

func (s *Sheet) textStep(p *printer, st *Step) {
	p.rule('=')
	p.wrap(fmt.Sprintf("STEP %d of %d  ", st.Number, len(s.Steps)), fmt.Sprintf("%s   (%s; route %s)", st.Name, st.Transform, s.Code))
	p.rule('=')
	for _, o := range st.Objections {
		p.wrap("DOUBT  ", o)
	}
	for _, f := range st.Flags {
		p.wrap("STOP   ", f)
	}
	p.wrap("", equation(st))
	p.line("")
	p.part("DO")
	textCharges(p, st)
	p.list("hazard   ", st.Hazards)
	for _, t := range st.Tasks {
		if t.Hold() {
			p.wrap("HOLD [ ] ", t.Text+". If not: "+t.Otherwise+".")
		} else {
			p.wrap(fmt.Sprintf("%4d [ ] ", t.Number), t.Text)
		}
	}
	p.wrap("yield    ", expectText(st))
	p.line("record   start ________ end ________ highest temp. ______ colour ________ crude ______ pure ______")
	p.line("         what went otherwise ______________________________________________________ initials ____")
	p.line("")
	p.part("KNOW")
	for _, x := range st.knowParts() {
		p.list(pad(x.Name, 11, false), x.Lines)
	}
	p.line("")
}

// part of the second side of a step.
type part struct {
	Name  string
	Lines []string
}

// knowParts lists the second side in its order; empty parts are left out.
func (st *Step) knowParts() (out []part) {
	for _, x := range []part{{"origin", []string{originText(st)}}, {"controls", st.Controls}, {"mixture", st.Mixture}, {"watch", st.Watch}, {"crude may", st.Crude},
		{"waste", st.Waste}, {"emergency", st.Emergency}, {"source", st.Sources}} {
		if len(x.Lines) > 0 {
			out = append(out, x)
		}
	}
	return out
}

func originText(st *Step) string {
	return fmt.Sprintf("weakest of the figures of this step: %s (%s). P published for this substrate, O own runs, N published for a near one, C usual for the class, E estimated",
		st.OriginMark, st.Origin)
}

func equation(st *Step) string {
	var from []string
	for _, c := range st.From {
		from = append(from, shown(c))
	}
	return strings.Join(from, " + ") + "  ->  " + shown(st.Product)
}

func expectText(st *Step) string {
	text := fmt.Sprintf("%s expected, %s if low, %s if high (%s-%s-%s %%, %s); theory %s", grams(st.ExpectG), grams(st.ExpectLowG), grams(st.ExpectHighG),
		percent(st.Yield.Low), percent(st.Yield.Usual), percent(st.Yield.High), st.OriginMark, grams(st.TheoryG))
	if st.NextNeedsG > 0 {
		text += fmt.Sprintf("; later steps take %s", grams(st.NextNeedsG))
	}
	return text + fmt.Sprintf("; to be sure multiply every charge by %.3g", st.SureFactor)
}

var chargeColumns = []column{{"", 1, false}, {"material, as supplied", 37, false}, {"M", 7, true}, {"equiv", 6, true}, {"mmol", 6, true}, {"mass", 8, true}, {"volume", 8, true},
	{"weighed", 9, true}, {"lot", 7, true}}

func textCharges(p *printer, st *Step) {
	var rows [][]string
	role := ""
	for _, c := range st.inFlask() {
		if c.Role != role {
			role = c.Role
			rows = append(rows, []string{roleHeads[role]})
		}
		mark := ""
		if c.Limiting {
			mark = "*"
		}
		rows = append(rows, []string{mark, chargeName(&c), positive(c.MolarMass, "%.2f"), positive(c.Equiv, "%.3g"), positiveDigits(c.Mmol), massText(&c), volumeText(&c), "________", "______"})
	}
	p.table(chargeColumns, rows)
	if text := workupText(st); text != "" {
		p.wrap("work-up, as needed: ", text)
	}
	p.line("* limiting.  m = n M / w,  V = m / d or n / c,  w = purity or strength")
	p.line("")
}

var roleHeads = map[string]string{roleReactant: "reactants", roleReagent: "reagents", roleCatalyst: "catalysts, initiators", roleSolvent: "solvents"}

// workupText lists the work-up materials.
func workupText(st *Step) string {
	var names []string
	for _, c := range st.Charges {
		if c.Role == roleWorkup {
			names = append(names, c.Name)
		}
	}
	return strings.Join(names, ", ")
}

// chargeName is the first cell of a charge: name, number, form, notes.
func chargeName(c *Charge) string {
	text := c.Name + casText(c.CAS)
	if c.FromStep > 0 {
		text += fmt.Sprintf(", from step %d", c.FromStep)
	} else {
		text += formText(c.Form)
	}
	if c.IfNeeded {
		text += " (if needed)"
	}
	if c.Note != "" {
		text += " (" + c.Note + ")"
	}
	return text
}

func formText(form string) string {
	if form == "" {
		return ""
	}
	return ", " + form
}

func positive(x float64, format string) string {
	if x <= 0 {
		return ""
	}
	return fmt.Sprintf(format, x)
}

func positiveDigits(x float64) string {
	if x <= 0 {
		return ""
	}
	return digits(x)
}

func massText(c *Charge) string {
	switch {
	case c.MassG > 0:
		return grams(c.MassG)
	case c.VolumeML > 0:
		return ""
	}
	return "unknown"
}

func volumeText(c *Charge) string {
	if c.VolumeML <= 0 {
		return ""
	}
	return millilitres(c.VolumeML)
}
