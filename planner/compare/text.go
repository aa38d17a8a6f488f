package compare

import (
	"fmt"
	"io"
	"strings"

	"shelfward/planner/route"
)

// WriteText prints the rows side by side, one column per route, and then which route comes first by
// each figure.
func (t *Table) WriteText(w io.Writer) error {
	var b strings.Builder
	t.WriteWishes(&b)
	for _, d := range t.Doubts {
		fmt.Fprintf(&b, "Doubt: %s\n", d)
	}
	for _, m := range t.Missing {
		fmt.Fprintf(&b, "from %s\n", m)
	}
	if len(t.Rows) == 0 {
		_, err := io.WriteString(w, b.String())
		return err
	}
	fmt.Fprintf(&b, "\nFigures are for %.4g g of target; yields in %% as low-usual-high; waste in kg per kg, solvents counted, work-up not.\n\n", t.MakeG)
	if err := route.WriteColumns(&b, t.lines()); err != nil {
		return err
	}
	b.WriteString("\nfirst by\n")
	var rows [][]string
	for _, f := range t.FirstBy {
		rows = append(rows, []string{"  " + f.Column, t.firstText(f)})
	}
	if err := route.WriteColumns(&b, rows); err != nil {
		return err
	}
	t.writeStanding(&b)
	for i := range t.Rows {
		r := &t.Rows[i]
		fmt.Fprintf(&b, "\n%s", r.Code)
		if r.From != "" {
			fmt.Fprintf(&b, " from %s", r.start())
		}
		b.WriteString("\n")
		for _, d := range r.Doubts {
			fmt.Fprintf(&b, "  Doubt: %s\n", d)
		}
		for _, s := range r.Steps {
			fmt.Fprintf(&b, "  %d  %s\n", s.Number, s.Line())
		}
		for _, w := range r.waysOut() {
			fmt.Fprintf(&b, "  way out: %s\n", w)
		}
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// firstText is the answer of one column in words.
func (t *Table) firstText(f First) string {
	text := strings.Join(f.Codes, ", ")
	if len(f.Codes) == len(t.Rows) && len(t.Rows) > 1 {
		text = "all alike"
	}
	if f.Clause != "" {
		text += " (" + f.Clause + ")"
	}
	return text
}

// writeStanding says which routes no other beats in every figure, and what beats the others.
func (t *Table) writeStanding(b *strings.Builder) {
	if len(t.Rows) < 2 {
		return
	}
	fmt.Fprintf(b, "\nnot beaten in every figure at once: %s\n", strings.Join(t.Unbeaten, ", "))
	for i := range t.Rows {
		r := &t.Rows[i]
		if len(r.BeatenBy) == 0 {
			continue
		}
		fmt.Fprintf(b, "  %s is beaten by %s", r.Code, strings.Join(r.BeatenBy, ", "))
		if gaps := r.gaps(); len(gaps) > 0 {
			fmt.Fprintf(b, " as far as known (%s: gaps in the data)", strings.Join(gaps, ", "))
		}
		b.WriteString("\n")
	}
}

// waysOut says for each intermediate what is left if the step that takes it on fails.
func (r *Row) waysOut() (out []string) {
	for _, w := range r.WaysOut {
		name := w.Name
		if name == "" {
			name = w.Product
		}
		out = append(out, fmt.Sprintf("from %s (step %d): %s for the next step, %s on to the target opened", name, w.Step,
			count(w.Conditions, "set of conditions", "sets of conditions"), count(w.Steps, "way", "ways")))
	}
	return out
}

func count(n int, one, many string) string {
	switch n {
	case 0:
		return "no other " + one
	case 1:
		return "1 other " + one
	}
	return fmt.Sprintf("%d other %s", n, many)
}

func (r *Row) start() string {
	if r.FromName != "" {
		return r.FromName
	}
	return r.From
}

// lines turns the rows into the lines of the table, one figure each.
func (t *Table) lines() [][]string {
	figures := []struct {
		name string
		text func(r *Row) string
	}{
		{"route", func(r *Row) string { return r.Code }},
		{"from", (*Row).start},
		{"steps / longest run", func(r *Row) string { return fmt.Sprintf("%d / %d", len(r.Steps), r.LongestRun) }},
		{"working days, about", func(r *Row) string { return fmt.Sprintf("%.3g", r.Days) }},
		{"overall yield", func(r *Row) string { return route.Percent(r.OverallYield) }},
		{"worst branch", func(r *Row) string { return route.Percent(r.WorstBranchYield) }},
		{"atom economy", func(r *Row) string {
			if r.AtomEconomy == nil {
				return "not balanced"
			}
			return fmt.Sprintf("%.2f", *r.AtomEconomy)
		}},
		{"waste, with water", func(r *Row) string { return fmt.Sprintf("%.1f", r.Waste.WithWater) }},
		{"waste, without water", func(r *Row) string { return fmt.Sprintf("%.1f", r.Waste.WithoutWater) }},
		{"gravest hazards", func(r *Row) string { return r.Hazard.String() }},
		{"materials", func(r *Row) string { return r.Materials.String() }},
		{"starting materials", func(r *Row) string { return r.Starts() }},
		{"not on the shelf", func(r *Row) string { return fmt.Sprint(len(r.ToBuy)) }},
		{"stock", func(r *Row) string {
			if !t.Asked {
				return ""
			}
			return r.Stock()
		}},
		{"doubts", func(r *Row) string { return fmt.Sprint(len(r.Doubts)) }},
	}
	var out [][]string
	for _, f := range figures {
		line := []string{f.name}
		any := false
		for i := range t.Rows {
			text := f.text(&t.Rows[i])
			any = any || text != ""
			line = append(line, text)
		}
		if any {
			out = append(out, line)
		}
	}
	return out
}
