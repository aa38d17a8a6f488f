package route

import (
	"fmt"
	"io"
	"strings"
)

// kindHeads head the kinds of way in print.
var kindHeads = []struct{ kind, head string }{
	{OtherConditions, "Other conditions for the same step"},
	{OtherWay, "Another way to the same product"},
	{OtherOnward, "Another way on from what is in hand"},
	{BackToShelf, "Back to the shelf"},
}

// WriteText prints what can be done, in the order in which it costs least of what is there. The line that
// echoes the target is the caller's.
func (m *Mend) WriteText(w io.Writer) error {
	t := &writer{w: w}
	for _, d := range m.Doubts {
		t.line("Doubt: %s", d)
	}
	t.line("")
	t.line("Route %s, step %d failed: %s", m.Code, m.Step, m.Failed)
	t.line("in hand: %s", m.inHand())
	t.line("planned for %s g of target: %s; spent with the failed step: %s", figure(m.MakeG), m.Planned.text(), m.Spent.text())
	if len(m.Ways) == 0 {
		t.line("")
		t.line("Nothing else was found.")
	}
	number := 0
	for _, k := range kindHeads {
		headed := false
		for i := range m.Ways {
			way := &m.Ways[i]
			if way.Kind != k.kind {
				continue
			}
			if !headed {
				t.line("")
				t.line("%s", k.head)
				headed = true
			}
			number++
			way.write(t, number)
		}
	}
	t.line("")
	for _, n := range m.None {
		t.line("%s.", upper(n))
	}
	t.line("%s.", originKey)
	return t.err
}

func upper(s string) string { return strings.ToUpper(s[:1]) + s[1:] }

func (m *Mend) inHand() string {
	var parts []string
	for _, h := range m.InHand {
		from := ""
		if h.Step > 0 {
			from = fmt.Sprintf("step %d", h.Step)
		}
		if h.Assumed {
			from += "; assumed, the planned amount: --have says otherwise"
		}
		text := fmt.Sprintf("%s g of %s", figure(h.G), label(h.Name, h.SMILES))
		if from != "" {
			text += " (" + from + ")"
		}
		parts = append(parts, text)
	}
	if len(parts) == 0 {
		return "nothing"
	}
	return strings.Join(parts, ", ")
}

func (c *Course) text() string {
	return fmt.Sprintf("%d %s, yield %s %%, about %s %s, %s", c.Steps, plural(c.Steps, "step", "steps"), Percent(c.Yield), figureDays(c.Days), plural(int(c.Days), "day", "days"), c.price())
}

func (c *Course) price() string {
	text := strings.TrimSpace(figure(c.Price) + " " + c.Currency)
	if c.Unpriced > 0 {
		text = fmt.Sprintf("at least %s (%d unpriced)", text, c.Unpriced)
	}
	return text
}

// write prints one way; its own steps are numbered within it.
func (w *Way) write(t *writer, number int) {
	for i := range w.Steps {
		s := &w.Steps[i]
		head := fmt.Sprintf("  %d.", number)
		if w.Kind != OtherConditions {
			head += fmt.Sprint(s.Number)
		}
		t.line("%s %s", head, s.Line())
		t.line("     %s, %s, yield %s %% (%s)", span(s.Temperature, "C"), span(s.Time, "h"), Percent(s.Yield), letters[s.Origin])
	}
	if len(w.Then) > 0 {
		t.line("     then %s of the route as planned", stepList(w.Then))
	}
	for _, d := range w.Doubts {
		t.line("     Doubt: %s", d)
	}
	if len(w.Uses) > 0 {
		t.line("     what is in hand gives about %s g of target; still to do: %s", figure(w.Enough), w.Still.text())
	} else {
		t.line("     still to do: %s", w.Still.text())
	}
	t.line("     lost: %s", w.Lost.text())
}

func stepList(numbers []int) string {
	var parts []string
	for _, n := range numbers {
		parts = append(parts, fmt.Sprint(n))
	}
	return plural(len(numbers), "step ", "steps ") + strings.Join(parts, ", ")
}

// text says material, yield, time and money, in this order.
func (l *Lost) text() string {
	where := "from here"
	if l.From == "shelf" {
		where = "from the shelf"
	}
	parts := []string{strings.Join(l.Material, ", "), fmt.Sprintf("yield %.0f %% instead of %.0f %% %s", 100*l.Yield.Now, 100*l.Yield.Planned, where),
		change(figureDays(l.Days), l.Days, plural(int(l.Days), "day", "days"))}
	price := change(figure(max(l.Price, -l.Price)), l.Price, l.Currency)
	if l.Unpriced > 0 {
		price += fmt.Sprintf(" at least (%d unpriced)", l.Unpriced)
	}
	return strings.Join(append(parts, price), "; ")
}

// change writes a figure with its unit as more or less than planned.
func change(text string, x float64, unit string) string {
	text = strings.TrimSpace(strings.TrimPrefix(text, "-") + " " + unit)
	if x < 0 {
		return text + " less"
	}
	return text + " more"
}
