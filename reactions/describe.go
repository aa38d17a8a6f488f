package reactions

import (
	"fmt"
	"io"
	"strings"
)

// Describe writes a transform for a reader: the edit, the hydrogens it moves, the conditions, the source.
func Describe(w io.Writer, t *Transform) {
	fmt.Fprintf(w, "%s\n%s (%s)\n", t.ID, t.Name, t.Family)
	if t.Summary != "" {
		fmt.Fprintln(w, t.Summary)
	}
	fmt.Fprintf(w, "  from  %s\n  to    %s\n", strings.Join(t.Reactants, "  +  "), strings.Join(t.Products, "  +  "))
	left, right := t.drawing()
	fmt.Fprintf(w, "\n  %s\n    ->  %s\n\n", left, right)
	if t.Everywhere {
		fmt.Fprintln(w, "  all like sites react at once")
	}
	for _, c := range t.Conditions {
		describeConditions(w, c)
	}
	fmt.Fprintln(w)
	for _, ex := range t.Examples {
		describeExample(w, "example", ex)
	}
	for _, ex := range t.Rejects {
		describeExample(w, "not", ex)
	}
	fmt.Fprintf(w, "  source: %s\n  file: %s\n", t.Source, t.File)
}

// describeExample writes a use of the transform with where it is reported.
func describeExample(w io.Writer, word string, ex Example) {
	fmt.Fprintf(w, "  %s: %s -> %s\n", word, strings.Join(ex.From, " + "), ex.To)
	if ex.Why != "" {
		fmt.Fprintln(w, "    "+ex.Why)
	}
	switch yield := ex.Source.YieldText(); {
	case yield != "":
		fmt.Fprintf(w, "    reported yield %s: %s\n", yield, ex.Source)
	case ex.Source.Text != "":
		fmt.Fprintf(w, "    %s\n", ex.Source)
	case ex.Why == "":
		fmt.Fprintln(w, "    textbook (memory)")
	}
}

func describeConditions(w io.Writer, c *Conditions) {
	var with []string
	for _, r := range c.Reagents {
		name := r.Name
		if r.Equiv > 0 {
			name = fmt.Sprintf("%s (%.3g equiv)", r.Name, r.Equiv)
		}
		with = append(with, name)
	}
	for _, s := range c.Solvents {
		with = append(with, s.Name)
	}
	fmt.Fprintf(w, "\n  %s: %s\n", c.ID, strings.Join(with, "; "))
	fmt.Fprintf(w, "    %.0f to %.0f C, %.3g to %.3g h, yield %.0f-%.0f-%.0f %% (%s)\n", c.Temperature[0], c.Temperature[1],
		c.Hours[0], c.Hours[1], 100*c.Yield.Low, 100*c.Yield.Usual, 100*c.Yield.High, c.Origin)
	if len(c.Media) > 0 {
		fmt.Fprintf(w, "    the other groups meet: %s\n", strings.Join(c.Media, ", "))
	}
	if c.Order != "" {
		fmt.Fprintln(w, "    "+c.Order)
	}
	for _, s := range c.Workup {
		fmt.Fprintln(w, "    then: "+s)
	}
	if c.Watch != "" {
		fmt.Fprintln(w, "    watch: "+c.Watch)
	}
	if len(c.Needs) > 0 {
		fmt.Fprintln(w, "    needs: "+strings.Join(c.Needs, ", "))
	}
	for _, s := range c.Cautions {
		fmt.Fprintln(w, "    caution: "+s)
	}
	if c.TriedAt != "" {
		fmt.Fprintln(w, "    tried at: "+c.TriedAt)
	}
	fmt.Fprintf(w, "    source: %s\n", c.Source)
}
