package draw

import (
	"fmt"
	"html"
	"math"
	"strings"

	"shelfward/molecule"
)

// Options of a picture; the zero value draws every atom alike.
type Options struct {
	Title string // for screen readers
	Heavy []bool // atoms whose bonds are drawn heavy (the atoms of the chosen start)
}

// unit is the bond length in pixels.
const unit = 30.0

// SVG writes m as a self-contained SVG element with text as text. Lines use currentColor, so that the
// picture prints on paper and reads on a dark screen.
func SVG(m *molecule.Molecule, o Options) string {
	c := &canvas{m: m, at: Layout(m), o: o}
	c.orient()
	w, h := c.frame()
	for b := 0; b < m.NumBonds(); b++ {
		c.bond(b)
	}
	for a := 0; a < m.NumAtoms(); a++ {
		c.label(a)
	}
	title := o.Title
	if title == "" {
		title = m.Formula().String()
	}
	return fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" role="img" width="%.0f" height="%.0f" viewBox="0 0 %.0f %.0f" font-family="sans-serif" font-size="14"><title>%s</title>%s</svg>`,
		w, h, w, h, html.EscapeString(title), c.out.String())
}

type canvas struct {
	m   *molecule.Molecule
	at  []Point // pixels after frame
	o   Options
	out strings.Builder
}

// orient lays the longer side of the picture along the page.
func (c *canvas) orient() {
	loX, hiX, loY, hiY := c.box()
	if hiY-loY > 1.3*(hiX-loX) {
		for i, p := range c.at {
			c.at[i] = Point{-p.Y, p.X}
		}
	}
}

func (c *canvas) box() (loX, hiX, loY, hiY float64) {
	loX, loY, hiX, hiY = math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)
	for _, p := range c.at {
		loX, hiX = math.Min(loX, p.X), math.Max(hiX, p.X)
		loY, hiY = math.Min(loY, p.Y), math.Max(hiY, p.Y)
	}
	return loX, hiX, loY, hiY
}

func (c *canvas) frame() (w, h float64) {
	loX, hiX, loY, hiY := c.box()
	const margin = 26
	for i, p := range c.at {
		c.at[i] = Point{(p.X-loX)*unit + margin, (hiY-p.Y)*unit + margin}
	}
	return (hiX-loX)*unit + 2*margin, (hiY-loY)*unit + 2*margin
}

func (c *canvas) line(a, b Point, width float64) {
	fmt.Fprintf(&c.out, `<line x1="%.1f" y1="%.1f" x2="%.1f" y2="%.1f" stroke="currentColor" stroke-width="%.1f" stroke-linecap="round"/>`, a.X, a.Y, b.X, b.Y, width)
}

func (c *canvas) bond(b int) {
	bd := c.m.Bond(b)
	p, q := c.at[bd.A], c.at[bd.B]
	d := q.sub(p)
	if d.length() < 1e-6 {
		return
	}
	dir := d.scale(1 / d.length())
	if c.text(int(bd.A)) != "" {
		p = p.add(dir.scale(9))
	}
	if c.text(int(bd.B)) != "" {
		q = q.sub(dir.scale(9))
	}
	width := 1.6
	if c.heavy(int(bd.A)) && c.heavy(int(bd.B)) {
		width = 3.6
	}
	side := dir.turn(math.Pi / 2)
	switch bd.Order {
	case 2:
		c.double(b, p, q, dir, side, width)
	case 3:
		c.line(p, q, width)
		c.line(p.add(side.scale(4)), q.add(side.scale(4)), 1.4)
		c.line(p.sub(side.scale(4)), q.sub(side.scale(4)), 1.4)
	default:
		c.line(p, q, width)
	}
}

// double draws the second line inside the ring, or both lines beside the axis at a chain end.
func (c *canvas) double(b int, p, q, dir, side Point, width float64) {
	bd := c.m.Bond(b)
	if bd.Ring {
		if center, ok := c.ringCenter(b); ok {
			if to := center.sub(p); to.X*side.X+to.Y*side.Y < 0 {
				side = side.scale(-1)
			}
			c.line(p, q, width)
			c.line(p.add(side.scale(4.5)).add(dir.scale(4)), q.add(side.scale(4.5)).sub(dir.scale(4)), 1.4)
			return
		}
	}
	c.line(p.add(side.scale(2.2)), q.add(side.scale(2.2)), width)
	c.line(p.sub(side.scale(2.2)), q.sub(side.scale(2.2)), width)
}

func (c *canvas) ringCenter(b int) (Point, bool) {
	bd := c.m.Bond(b)
	for _, r := range c.m.Rings() {
		if !holds(r, int(bd.A)) || !holds(r, int(bd.B)) {
			continue
		}
		var sum Point
		for _, a := range r {
			sum = sum.add(c.at[a])
		}
		return sum.scale(1 / float64(len(r))), true
	}
	return Point{}, false
}

func (c *canvas) heavy(a int) bool { return a < len(c.o.Heavy) && c.o.Heavy[a] }

// text is what is written at an atom; nothing for a carbon inside the skeleton.
func (c *canvas) text(a int) string {
	at := c.m.Atom(a)
	if at.Element == 6 && at.Charge == 0 && at.Isotope == 0 && c.m.Degree(a) > 0 {
		return ""
	}
	return at.Element.Symbol()
}

func (c *canvas) label(a int) {
	text := c.text(a)
	if text == "" {
		return
	}
	at := c.m.Atom(a)
	h := ""
	if at.Hydrogens == 1 {
		h = "H"
	} else if at.Hydrogens > 1 {
		h = fmt.Sprintf(`H<tspan dy="4" font-size="10">%d</tspan><tspan dy="-4">​</tspan>`, at.Hydrogens)
	}
	if at.Isotope > 0 {
		text = fmt.Sprintf(`<tspan dy="-5" font-size="10">%d</tspan><tspan dy="5">%s</tspan>`, at.Isotope, text)
	}
	charge := ""
	if at.Charge != 0 {
		charge = fmt.Sprintf(`<tspan dy="-6" font-size="10">%s</tspan>`, chargeText(int(at.Charge)))
	}
	p := c.at[a]
	anchor, body, x := "start", text+h+charge, p.X-5
	if h != "" && c.leftward(a) {
		anchor, body, x = "end", h+text+charge, p.X+5
	}
	fmt.Fprintf(&c.out, `<text x="%.1f" y="%.1f" text-anchor="%s" fill="currentColor">%s</text>`, x, p.Y+5, anchor, body)
}

func chargeText(q int) string {
	sign := "+"
	if q < 0 {
		sign, q = "−", -q
	}
	if q == 1 {
		return sign
	}
	return fmt.Sprintf("%d%s", q, sign)
}

// leftward says that the neighbours stand to the right, so that hydrogens are written on the left.
func (c *canvas) leftward(a int) bool {
	sum := 0.0
	for _, n := range c.m.Neighbors(a) {
		sum += c.at[n.Atom].X - c.at[a].X
	}
	return sum > 1
}
