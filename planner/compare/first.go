package compare

import (
	"fmt"
	"math"
	"strings"
)

// column is one figure by which rows are compared; lower comes first.
type column struct {
	name  string
	value func(r *Row) float64
	gap   func(r *Row) string    // what is missing; "" if nothing
	says  func(v float64) string // a value in print
}

func plain(unit string) func(float64) string {
	return func(v float64) string { return strings.TrimSpace(fmt.Sprintf("%.3g %s", v, unit)) }
}

// classes are the hazard classes in words, from rules/ghs.yaml's order of gravity.
var classes = [...]string{"none", "class 1", "class 2", "class 3", "class 4, the gravest"}

func className(v float64) string { return classes[min(max(int(v), 0), len(classes)-1)] }

func complete(*Row) string { return "" }

// columns are compared in this order. A row with a gap cannot come first in that column as long as
// another has none; if all have gaps, the column says so.
var columns = []column{
	{"steps", func(r *Row) float64 { return float64(len(r.Steps)) }, complete, plain("")},
	{"longest run", func(r *Row) float64 { return float64(r.LongestRun) }, complete, plain("")},
	{"working days", func(r *Row) float64 { return r.Days }, complete, plain("d")},
	{"yield", func(r *Row) float64 { return -r.WorstBranchYield.Usual }, complete, func(v float64) string { return fmt.Sprintf("%.0f %%", -100*v) }},
	{"hazard", func(r *Row) float64 { return float64(r.GravestClass) }, func(r *Row) string {
		if n := r.Hazard.WithoutData; n > 0 {
			return fmt.Sprintf("hazards of %d materials never looked up", n)
		}
		return ""
	}, className},
	{"cost", func(r *Row) float64 { return r.Materials.Price }, func(r *Row) string {
		if n := r.Materials.Unpriced; n > 0 {
			return fmt.Sprintf("%d of %d materials unpriced", n, r.Materials.Of)
		}
		return ""
	}, plain("")},
	{"waste", func(r *Row) float64 { return r.Waste.WithoutWater }, complete, plain("kg/kg")},
}

// sameFigure is the difference below which two figures count as equal: well under what is printed.
const sameFigure = 1e-9

// firsts finds the first row or rows of each column.
func firsts(rows []Row) []First {
	out := []First{}
	for _, c := range columns {
		if len(rows) > 0 {
			out = append(out, c.first(rows))
		}
	}
	return out
}

func (c *column) first(rows []Row) First {
	f := First{Column: c.name, Codes: []string{}}
	full, gaps := 0, 0
	for i := range rows {
		if c.gap(&rows[i]) == "" {
			full++
		} else {
			gaps++
		}
	}
	least := math.Inf(1)
	for i := range rows {
		r := &rows[i]
		if full > 0 && c.gap(r) != "" {
			continue
		}
		switch v := c.value(r); {
		case v < least-sameFigure:
			least, f.Codes = v, []string{r.Code}
		case v <= least+sameFigure:
			f.Codes = append(f.Codes, r.Code)
		}
	}
	switch {
	case full == 0:
		f.Clause = "as far as known: every route has gaps here"
	case gaps > 0:
		f.Clause = fmt.Sprintf("%d with gaps in the data left aside", gaps)
	}
	return f
}
