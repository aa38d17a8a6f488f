package compare

import (
	"fmt"
	"html"
	"math"
	"strings"
)

// The plot has one strip per figure, the first on the left, the last on the right, and one letter per
// route. A letter in a filled circle is a route that no other beats; in an open one, a beaten route. What
// has a gap stands behind a dashed line at the right end. Letters that coincide stand above each other.
const (
	plotWidth  = 760.0
	stripLeft  = 130.0
	stripRight = 640.0
	gapAt      = 700.0 // where figures with gaps stand
	dotRadius  = 9.0
	dotRow     = 21.0 // height of a row of dots within a strip
	stripPad   = 26.0 // below the dots: scale, and space
)

// dot is one route in one strip.
type dot struct {
	x      float64
	row    int
	letter string
	filled bool
	title  string
}

// letterOf names row i: A to Z, then AA and so on.
func letterOf(i int) string {
	if i < 26 {
		return string(rune('A' + i))
	}
	return letterOf(i/26-1) + letterOf(i%26)
}

// plot draws the rows. It is empty for fewer than two.
func (t *Table) plot() string {
	if len(t.Rows) < 2 {
		return ""
	}
	var b strings.Builder
	y := 8.0
	for i := range columns {
		y = t.strip(&b, &columns[i], y)
	}
	return fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 %.0f %.0f" width="%.0f" role="img" aria-label="routes along each figure" font-family="sans-serif" font-size="11">`,
		plotWidth, y, plotWidth) + b.String() + "</svg>"
}

// strip draws one figure and returns where the next begins.
func (t *Table) strip(b *strings.Builder, c *column, top float64) float64 {
	least, most, gaps := math.Inf(1), math.Inf(-1), false
	for i := range t.Rows {
		if v := c.figure(&t.Rows[i]); math.IsInf(v, 1) {
			gaps = true
		} else {
			least, most = min(least, v), max(most, v)
		}
	}
	dots, rows := t.dots(c, least, most)
	base := top + dotRow*float64(rows) + 4
	fmt.Fprintf(b, `<text x="4" y="%.1f" font-weight="bold">%s</text>`, base, html.EscapeString(c.name))
	fmt.Fprintf(b, `<line x1="%.1f" y1="%.1f" x2="%.1f" y2="%.1f" stroke="black"/>`, stripLeft, base, stripRight, base)
	if !math.IsInf(least, 1) {
		fmt.Fprintf(b, `<text x="%.1f" y="%.1f">%s</text>`, stripLeft, base+14, html.EscapeString(c.says(least)))
		if most > least+sameFigure {
			fmt.Fprintf(b, `<text x="%.1f" y="%.1f" text-anchor="end">%s</text>`, stripRight, base+14, html.EscapeString(c.says(most)))
		}
	}
	if gaps {
		middle := (stripRight + gapAt) / 2
		fmt.Fprintf(b, `<line x1="%.1f" y1="%.1f" x2="%.1f" y2="%.1f" stroke="black" stroke-dasharray="3 3"/>`, middle, top, middle, base)
		fmt.Fprintf(b, `<text x="%.1f" y="%.1f" text-anchor="middle">not known</text>`, gapAt, base+14)
	}
	for _, d := range dots {
		d.draw(b, base-dotRadius-3-dotRow*float64(d.row))
	}
	return base + stripPad
}

// dots places the letters of a strip; rows is how many stand above each other at most.
func (t *Table) dots(c *column, least, most float64) (dots []dot, rows int) {
	rows = 1
	for i := range t.Rows {
		r := &t.Rows[i]
		d := dot{x: stripLeft + dotRadius, letter: letterOf(i), filled: len(r.BeatenBy) == 0}
		v := c.figure(r)
		switch {
		case math.IsInf(v, 1):
			d.x, d.title = gapAt, r.Code+": "+c.gap(r)
		case most > least+sameFigure:
			d.x += (v - least) / (most - least) * (stripRight - stripLeft - 2*dotRadius)
			fallthrough
		default:
			d.title = r.Code + ": " + c.says(v)
		}
		for touches(dots, &d) {
			d.row++
		}
		rows = max(rows, d.row+1)
		dots = append(dots, d)
	}
	return dots, rows
}

// touches says whether a dot lies on another of its row.
func touches(dots []dot, d *dot) bool {
	for _, o := range dots {
		if o.row == d.row && math.Abs(o.x-d.x) < 2*dotRadius+1 {
			return true
		}
	}
	return false
}

func (d *dot) draw(b *strings.Builder, y float64) {
	fill, text := "white", "black"
	if d.filled {
		fill, text = "black", "white"
	}
	fmt.Fprintf(b, `<g><title>%s</title><circle cx="%.1f" cy="%.1f" r="%.1f" fill="%s" stroke="black"/>`, html.EscapeString(d.title), d.x, y, dotRadius, fill)
	fmt.Fprintf(b, `<text x="%.1f" y="%.1f" text-anchor="middle" fill="%s" font-size="10">%s</text></g>`, d.x, y+3.5, text, d.letter)
}
