package compare

import "math"

// figure is the value by which a row is compared in a column: one with a gap counts as the worst there is.
func (c *column) figure(r *Row) float64 {
	if c.gap(r) != "" {
		return math.Inf(1)
	}
	return c.value(r)
}

// beats says whether a is nowhere worse than b and somewhere better.
func beats(a, b *Row) bool {
	better := false
	for i := range columns {
		x, y := columns[i].figure(a), columns[i].figure(b)
		switch {
		case x > y+sameFigure:
			return false
		case x < y-sameFigure:
			better = true
		}
	}
	return better
}

// unbeaten lists the codes of the rows that no other row beats, and fills in BeatenBy.
func unbeaten(rows []Row) []string {
	out := []string{}
	for i := range rows {
		rows[i].BeatenBy = []string{}
		for j := range rows {
			if beats(&rows[j], &rows[i]) {
				rows[i].BeatenBy = append(rows[i].BeatenBy, rows[j].Code)
			}
		}
		if len(rows[i].BeatenBy) == 0 {
			out = append(out, rows[i].Code)
		}
	}
	return out
}

// gaps names the columns in which a row has no figure.
func (r *Row) gaps() (out []string) {
	for i := range columns {
		if columns[i].gap(r) != "" {
			out = append(out, columns[i].name)
		}
	}
	return out
}
