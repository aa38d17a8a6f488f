package draw

import (
	"fmt"
	"math"
	"strings"

	"shelfward/molecule"
)

// Options of a picture of one structure; the zero value draws every atom alike, in the ink of the page.
type Options struct {
	Title       string // for screen readers; the formula if empty
	Description string // for screen readers; made from the structure if empty
	Style       Style  // Print if it has no name
	Heavy       []bool // atoms whose bonds are drawn heavy (the atoms of the chosen start)
	Made        []bool // bonds marked with a dot: those that a step makes
	Relative    bool   // the centres are known relative to each other only; said in words below
}

func (o Options) style() Style {
	if o.Style.Name == "" {
		return Print
	}
	return o.Style
}

// Structure draws m. Components stand side by side; hydrogens are written at named atoms, and drawn where they
// carry the configuration of a centre in the middle of rings.
func Structure(m *molecule.Molecule, o Options) *Drawing {
	st := o.style()
	p := &pen{m: m, o: o, st: st, d: &Drawing{Style: st, Title: o.Title, Description: o.Description}}
	if p.d.Title == "" {
		p.d.Title = m.Formula().String()
	}
	if p.d.Description == "" {
		p.d.Description = describe(m, o)
	}
	p.place(Place(m, true))
	for b := range m.NumBonds() {
		p.bond(b)
	}
	for _, h := range p.hydrogens {
		p.hydrogen(h)
	}
	for _, l := range p.labels {
		if len(l.runs) > 0 {
			p.d.Shapes = append(p.d.Shapes, Text{Runs: l.runs})
		}
	}
	p.frame()
	return p.d
}

// describe puts a structure into words.
func describe(m *molecule.Molecule, o Options) string {
	parts := []string{"Structure of " + m.Formula().String()}
	count := func(n int, one, more string) {
		if n == 1 {
			parts = append(parts, "1 "+one)
		} else if n > 1 {
			parts = append(parts, fmt.Sprintf("%d %s", n, more))
		}
	}
	n, _ := m.Components()
	if n > 1 {
		count(n, "component", "components")
	}
	count(len(m.Rings()), "ring", "rings")
	count(len(m.Centers()), "centre with wedges", "centres with wedges")
	count(len(m.DoubleBonds()), "double bond of known geometry", "double bonds of known geometry")
	if o.Relative && len(m.Centers()) > 0 {
		parts = append(parts, "relative configuration")
	}
	return strings.Join(parts, "; ")
}

// pen draws one structure.
type pen struct {
	m         *molecule.Molecule
	o         Options
	st        Style
	d         *Drawing
	at        []Point // on the page
	labels    []label
	wedge     map[int32][]Wedge
	hydrogens []Hydrogen
}

// place turns the layout into places on the page, y downwards, and writes the labels.
func (p *pen) place(placed *Placed) {
	places := placed.At
	page := func(q Point) Point { return Point{q.X * p.st.Bond, -q.Y * p.st.Bond} }
	p.at = make([]Point, len(places))
	for a, q := range places {
		p.at[a] = page(q)
	}
	p.wedge = make(map[int32][]Wedge, len(placed.Wedges))
	for _, x := range placed.Wedges {
		p.wedge[x.Bond] = append(p.wedge[x.Bond], x)
	}
	drawn := make(map[int32]bool)
	for _, h := range placed.Hydrogens {
		h.At = page(h.At)
		p.hydrogens = append(p.hydrogens, h)
		drawn[h.Center] = true
	}
	p.labels = make([]label, len(places))
	for a := range places {
		if !named(p.m, a) {
			continue
		}
		x := p.m.Atom(a)
		if drawn[int32(a)] {
			x.Hydrogens--
		}
		var around []Point
		for _, nb := range p.m.Neighbors(a) {
			around = append(around, p.at[nb.Atom].sub(p.at[a]))
		}
		p.labels[a] = makeLabel(x, p.at[a], around, p.st)
	}
}

// clip shortens the line p-q at both ends to the room that the labels of a and b leave.
func (p *pen) clip(a, b int, from, to Point) (Point, Point) {
	d := to.sub(from)
	start, end := 0.0, 1.0
	const room = 1.8
	for _, x := range p.labels[a].boxes {
		if t := x.wider(room).leaves(from, to); t < 0.7 {
			start = max(start, t)
		}
	}
	for _, x := range p.labels[b].boxes {
		if t := x.wider(room).leaves(to, from); t < 0.7 {
			end = min(end, 1-t)
		}
	}
	if start >= end {
		return from, to
	}
	return from.add(d.scale(start)), from.add(d.scale(end))
}

func (p *pen) line(a, b Point, width float64) {
	p.d.Shapes = append(p.d.Shapes, Line{a, b, width})
}

func (p *pen) heavy(a int) bool { return a < len(p.o.Heavy) && p.o.Heavy[a] }

// bond draws bond b.
func (p *pen) bond(b int) {
	x := p.m.Bond(b)
	from, to := p.at[x.A], p.at[x.B]
	side := to.sub(from).unit().left()
	width := p.st.Line
	if p.heavy(int(x.A)) && p.heavy(int(x.B)) {
		width = p.st.Heavy
	}
	from, to = p.clip(int(x.A), int(x.B), from, to)
	switch {
	case len(p.wedge[int32(b)]) > 0:
		for _, w := range p.wedge[int32(b)] {
			if w.From == x.A {
				p.wedged(from, to, w.Up)
			} else {
				p.wedged(to, from, w.Up)
			}
		}
	case x.Order == 2:
		p.double(b, width)
	case x.Order >= 3:
		p.line(from, to, width)
		for _, s := range []float64{p.st.Gap * 0.8, -p.st.Gap * 0.8} {
			p.line(from.add(side.scale(s)), to.add(side.scale(s)), p.st.Line)
		}
	default:
		p.line(from, to, width)
	}
	if b < len(p.o.Made) && p.o.Made[b] {
		p.dot(from.middle(to), 2.2*p.st.Line)
	}
}

// dot is a filled circle.
func (p *pen) dot(c Point, radius float64) {
	const corners = 16
	var round []Point
	for i := range corners {
		round = append(round, c.add(toward(2*math.Pi*float64(i)/corners).scale(radius)))
	}
	p.d.Shapes = append(p.d.Shapes, Polygon{round})
}

// double draws a double bond: the second line inside the ring, or on the side of more neighbours; both beside
// the axis where the bond ends.
func (p *pen) double(b int, width float64) {
	x := p.m.Bond(b)
	a, c := p.at[x.A], p.at[x.B]
	side := c.sub(a).unit().left()
	gap := p.st.Gap
	lean := p.lean(b)
	if lean == 0 {
		for _, s := range []float64{gap / 2, -gap / 2} {
			from, to := p.clip(int(x.A), int(x.B), a.add(side.scale(s)), c.add(side.scale(s)))
			p.line(from, to, width)
		}
		return
	}
	from, to := p.clip(int(x.A), int(x.B), a, c)
	p.line(from, to, width)
	off := side.scale(gap * lean)
	dir := c.sub(a).unit()
	cut := func(atom int) float64 { // the inner line ends short of a corner, not of an open end
		if p.m.Degree(atom) == 1 || len(p.labels[atom].runs) > 0 {
			return 0
		}
		return gap * 0.75
	}
	from = a.add(off).add(dir.scale(cut(int(x.A))))
	to = c.add(off).sub(dir.scale(cut(int(x.B))))
	from, to = p.clip(int(x.A), int(x.B), from, to)
	p.line(from, to, p.st.Line)
}

// lean is the side of the second line: 1 left of the bond, -1 right, 0 both.
func (p *pen) lean(b int) float64 {
	x := p.m.Bond(b)
	a, c := p.at[x.A], p.at[x.B]
	if x.Ring {
		if center, ok := p.ringCenter(b); ok {
			if c.sub(a).cross(center.sub(a)) > 0 {
				return 1
			}
			return -1
		}
	}
	da, dc := p.m.Degree(int(x.A)), p.m.Degree(int(x.B))
	if da == 1 && (dc != 2 || named(p.m, int(x.A))) || dc == 1 && (da != 2 || named(p.m, int(x.B))) || da == 3 && dc == 3 {
		return 0
	}
	total := 0.0
	for _, end := range [2]int32{x.A, x.B} {
		for _, nb := range p.m.Neighbors(int(end)) {
			if int(nb.Bond) != b {
				total += math.Copysign(1, c.sub(a).cross(p.at[nb.Atom].sub(a)))
			}
		}
	}
	switch {
	case da+dc == 2 || p.straight(int(x.A)) || p.straight(int(x.B)):
		return 0
	case total < 0:
		return -1
	}
	return 1
}

// straight says that a is the middle of a cumulene.
func (p *pen) straight(a int) bool {
	doubles := 0
	for _, nb := range p.m.Neighbors(a) {
		if p.m.Bond(int(nb.Bond)).Order == 2 {
			doubles++
		}
	}
	return doubles == 2 && p.m.Degree(a) == 2
}

// ringCenter is the middle of the ring in which bond b is drawn double: the one with most double bonds, then the
// smallest.
func (p *pen) ringCenter(b int) (Point, bool) {
	x := p.m.Bond(b)
	best, most := Point{}, -1
	for _, r := range p.m.Rings() {
		inA, inB := false, false
		for _, a := range r {
			inA, inB = inA || a == x.A, inB || a == x.B
		}
		if !inA || !inB {
			continue
		}
		score := 0
		var sum Point
		for i, a := range r {
			sum = sum.add(p.at[a])
			if c := p.m.BondBetween(int(a), int(r[(i+1)%len(r)])); p.m.Bond(c).Order == 2 {
				score += 10
			}
		}
		if score = 100 + score - len(r); score > most {
			best, most = sum.scale(1/float64(len(r))), score
		}
	}
	return best, most >= 0
}

// wedged draws a wedge, or a hash of bars that grow, from its narrow end.
func (p *pen) wedged(from, to Point, up bool) {
	d := to.sub(from)
	half := d.unit().left().scale(p.st.Wide / 2)
	if up {
		p.d.Shapes = append(p.d.Shapes, Polygon{[]Point{from, to.add(half), to.sub(half)}})
		return
	}
	bars := max(4, int(d.length()/(2.2*p.st.Line)))
	for i := range bars {
		t := (float64(i) + 0.7) / (float64(bars) - 0.3)
		c, h := from.add(d.scale(t)), half.scale(t)
		p.line(c.add(h), c.sub(h), p.st.Line*0.7)
	}
}

// hydrogen draws a hydrogen that carries the mark of its centre.
func (p *pen) hydrogen(h Hydrogen) {
	l := makeLabel(molecule.Atom{Element: 1}, h.At, nil, p.st)
	from := p.at[h.Center]
	to := from.add(h.At.sub(from).scale(1 - l.boxes[0].wider(1.5).leaves(h.At, from)))
	p.wedged(from, to, h.Up)
	p.labels = append(p.labels, l)
}

// frame moves everything onto the page, adds what is said in words, and sets the size.
func (p *pen) frame() {
	lo, hi := Point{math.Inf(1), math.Inf(1)}, Point{math.Inf(-1), math.Inf(-1)}
	room := box{lo, hi}
	for _, q := range p.at {
		room = room.union(box{q, q})
	}
	for _, l := range p.labels {
		for _, b := range l.boxes {
			room = room.union(b)
		}
	}
	if len(p.at) == 0 {
		room = box{}
	}
	by := Point{p.st.Margin - room.lo.X, p.st.Margin - room.lo.Y}
	for i, s := range p.d.Shapes {
		p.d.Shapes[i] = s.move(by)
	}
	p.d.Width, p.d.Height = room.hi.X+by.X+p.st.Margin, room.hi.Y+by.Y+p.st.Margin
	if p.o.Relative && len(p.m.Centers()) > 0 {
		const note = "relative configuration"
		p.d.words(Point{p.st.Margin, p.d.Height + 0.5*p.st.Small}, p.st.Small, note)
		p.d.Height += p.st.Small + 6
		p.d.Width = max(p.d.Width, textWidth(note, p.st.Small)+2*p.st.Margin)
	}
}
