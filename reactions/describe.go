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
	if t.Everywhere {
		fmt.Fprintln(w, "  all like sites react at once")
	}
	for _, c := range t.Conditions {
		describeConditions(w, c)
	}
	fmt.Fprintf(w, "  source: %s (%s)\n  file: %s\n", t.Source, t.Provenance, t.File)
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
	if c.Order != "" {
		fmt.Fprintln(w, "    "+c.Order)
	}
	for _, s := range c.Cautions {
		fmt.Fprintln(w, "    caution: "+s)
	}
}
