package sheet

import (
	"fmt"
	"io"
	"math"
	"strings"
	"text/tabwriter"
	"unicode/utf8"
)

// textWidth is the width of wrapped lines: one A4 page in 10 pt.
const textWidth = 100

// Text prints the sheet as plain text, one block per step.
func (s *Sheet) Text(w io.Writer) error {
	p := &printer{w: w}
	s.textHead(p)
	for i := range s.Steps {
		s.textStep(p, &s.Steps[i])
	}
	p.rule('=')
	p.wrap("", "CAUTION  "+s.Caution)
	p.line("")
	p.line("prepared ______________________   checked ______________________   approved ______________________")
	p.line("emergency contact ______________________   building, room, hood ______________________")
	return p.err
}

// printer remembers the first error of its writer.
type printer struct {
	w   io.Writer
	err error
}

func (p *printer) line(format string, args ...any) {
	if p.err == nil {
		_, p.err = fmt.Fprintf(p.w, format+"\n", args...)
	}
}

func (p *printer) rule(c byte) { p.line("%s", strings.Repeat(string(c), textWidth)) }

// wrap prints a paragraph behind a label; further lines are indented by its width.
func (p *printer) wrap(label, text string) {
	indent := strings.Repeat(" ", utf8.RuneCountInString(label))
	line := label
	for _, word := range strings.Fields(text) {
		if utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) > textWidth && strings.TrimSpace(line) != "" {
			p.line("%s", strings.TrimRight(line, " "))
			line = indent
		}
		if line != "" && !strings.HasSuffix(line, " ") {
			line += " "
		}
		line += word
	}
	p.line("%s", strings.TrimRight(line, " "))
}

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
	p.line("ROUTE SHEET %s   %d steps, longest run %d   shelfward %s%s", s.Code, len(s.Steps), s.LongestRun, s.Version, printedText(s.Printed))
	p.rule('=')
	for _, d := range s.Doubts {
		p.wrap("DOUBT  ", d)
	}
	if s.Invented {
		p.line("Stock, places and prices of the shelf used here are INVENTED examples.")
	}
	p.line("target       %s, %s, %.2f g/mol", shown(s.Target), s.Target.Formula, s.Target.MolarMass)
	p.line("structure    %s", s.Target.SMILES)
	p.line("aim          %s (%s mmol) of isolated product", grams(s.MakeG), digits(s.MakeMmol))
	p.line("comes out    %s if every step comes out low, %s if every step comes out high", grams(s.LowG), grams(s.HighG))
	p.line("yield        %.0f %% overall (%.0f to %.0f; product of step ranges, not a statistical interval)",
		100*s.Yield.Usual, 100*s.Yield.Low, 100*s.Yield.High)
	p.list("evidence     ", s.Evidence)
	p.line("signal word  %s   pictograms %s", orNone(s.Label.Signal), pictograms(s))
	p.list("gravest      ", s.Gravest)
	p.list("watched      ", s.Watched)
	p.line("")
	s.textStock(p)
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

func (s *Sheet) textStock(p *printer) {
	p.line("To have ready (as supplied; 'to be sure' if every step comes out low)")
	tw := tabwriter.NewWriter(p.w, 0, 4, 2, ' ', tabwriter.AlignRight)
	fmt.Fprintln(tw, "steps\tneeds\t\tto be sure\ton the shelf\t")
	var rows []string
	for _, l := range s.Stock {
		volume := ""
		if l.VolumeML > 0 {
			volume = millilitres(l.VolumeML)
		}
		mass, sure := "as needed", ""
		if l.MassG > 0 {
			mass, sure = grams(l.MassG), grams(l.SureG)
		}
		fmt.Fprintf(tw, "%s\t%s\t%s\t%s\t%s\t\n", joinInts(l.Steps), mass, volume, sure, haveText(l))
		rows = append(rows, l.Name+casText(l.CAS))
	}
	s.flushBeside(p, tw, rows)
}

// flushBeside is a plain flush: names go into their own column at the right so that numbers align.
func (s *Sheet) flushBeside(p *printer, tw *tabwriter.Writer, names []string) {
	if err := tw.Flush(); err != nil && p.err == nil {
		p.err = err
	}
	for i, n := range names {
		p.line("  %2d. %s", i+1, n)
	}
	p.line("")
}

func haveText(l StockLine) string {
	switch {
	case l.ShortG > 0:
		return fmt.Sprintf("%s  SHORT by %s", grams(l.HaveG), grams(l.ShortG))
	case !l.OnShelf:
		return "to buy"
	case math.IsNaN(l.HaveG):
		return "amount not stated"
	}
	return grams(l.HaveG)
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
	p.line("STEP %d of %d   %s   (%s)   weakest origin of its figures: %s (%s)", st.Number, len(s.Steps), st.Name, st.Transform, st.OriginMark, st.Origin)
	p.rule('=')
	for _, o := range st.Objections {
		p.wrap("DOUBT  ", o)
	}
	for _, f := range st.Flags {
		p.wrap("STOP   ", f)
	}
	var from []string
	for _, c := range st.From {
		from = append(from, shown(c))
	}
	p.wrap("", strings.Join(from, " + ")+"  ->  "+shown(st.Product))
	p.line("")
	p.line("-- DO %s", strings.Repeat("-", textWidth-6))
	textCharges(p, st)
	p.list("hazard  ", st.Hazards)
	for i, o := range st.Operations {
		p.wrap(fmt.Sprintf("%2d [ ]  ", i+1), o)
	}
	for _, h := range st.Holds {
		p.wrap("HOLD [ ]  ", h)
	}
	p.line("yield   %s expected (%s to %s; %.0f-%.0f-%.0f %%, %s); theory %s", grams(st.ExpectG), grams(st.ExpectLowG), grams(st.ExpectHighG),
		100*st.Yield.Low, 100*st.Yield.Usual, 100*st.Yield.High, st.OriginMark, grams(st.TheoryG))
	if st.NextNeedsG > 0 {
		p.line("        later steps take %s", grams(st.NextNeedsG))
	}
	p.line("record  start ________ end ________ highest temperature ________ colour ____________ crude ________ pure ________")
	p.line("")
	p.line("-- KNOW %s", strings.Repeat("-", textWidth-8))
	p.list("controls  ", st.Controls)
	p.list("mixture   ", st.Mixture)
	p.list("watch     ", st.Watch)
	p.list("crude     ", st.Crude)
	p.list("waste     ", st.Waste)
	p.list("emergency ", st.Emergency)
	p.list("source    ", st.Sources)
	p.line("")
}

func textCharges(p *printer, st *Step) {
	tw := tabwriter.NewWriter(p.w, 0, 4, 2, ' ', 0)
	fmt.Fprintln(tw, "role\tmaterial\tM\tequiv\tmmol\tmass\tvolume\tlot\tweighed")
	for _, c := range st.Charges {
		fmt.Fprintf(tw, "%s\t%s\t%s\t%s\t%s\t%s\t%s\t______\t______\n", roleText(c), c.Name+casText(c.CAS)+formText(c.Form),
			positive(c.MolarMass, "%.2f"), positive(c.Equiv, "%.3g"), positiveDigits(c.Mmol), massText(c), volumeText(c))
	}
	if err := tw.Flush(); err != nil && p.err == nil {
		p.err = err
	}
}

func roleText(c Charge) string {
	if c.Limiting {
		return c.Role + " (limiting)"
	}
	return c.Role
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

func massText(c Charge) string {
	if c.MassG <= 0 {
		if c.Role == "work-up" {
			return "as needed"
		}
		return ""
	}
	return grams(c.MassG)
}

func volumeText(c Charge) string {
	if c.VolumeML <= 0 {
		return ""
	}
	return millilitres(c.VolumeML)
}
