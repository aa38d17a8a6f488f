package draw

import (
	"strings"

	"shelfward/molecule"
)

// Reaction is what a scheme shows.
type Reaction struct {
	Reactants, Products []*molecule.Molecule
	Above, Below        []string // lines at the arrow: reagents above, conditions below
}

// schemeWidth is the width at which a scheme begins a new row, in points.
const schemeWidth = 760

// Scheme draws a reaction: reactants, an arrow with its words, products. Where atom classes tell, bonds of the
// products that the reactants have not got are marked with a dot. Heavy and Made of the options are not used.
func Scheme(r Reaction, o Options) *Drawing {
	st := o.style()
	s := &scheme{d: &Drawing{Style: st, Title: o.Title, Description: o.Description}}
	if s.d.Title == "" {
		s.d.Title = "Reaction scheme"
	}
	if s.d.Description == "" {
		s.d.Description = describeReaction(r)
	}
	old := bondsByClass(r.Reactants)
	for i, m := range r.Reactants {
		if i > 0 {
			s.add(plus(st))
		}
		s.add(Structure(m, Options{Style: st, Relative: o.Relative}))
	}
	s.add(arrow(st, r.Above, r.Below))
	for i, m := range r.Products {
		if i > 0 {
			s.add(plus(st))
		}
		s.add(Structure(m, Options{Style: st, Relative: o.Relative, Made: madeBonds(m, old)}))
	}
	s.endRow()
	return s.d
}

func describeReaction(r Reaction) string {
	formulas := func(ms []*molecule.Molecule) string {
		var list []string
		for _, m := range ms {
			list = append(list, m.Formula().String())
		}
		return strings.Join(list, " + ")
	}
	text := formulas(r.Reactants) + " to " + formulas(r.Products)
	if words := append(append([]string(nil), r.Above...), r.Below...); len(words) > 0 {
		text += "; " + strings.Join(words, "; ")
	}
	return text
}

// scheme sets pieces into rows.
type scheme struct {
	d   *Drawing
	row []*Drawing
}

// add appends a piece, in a new row where this one is full.
func (s *scheme) add(piece *Drawing) {
	width := piece.Width
	for _, p := range s.row {
		width += p.Width
	}
	if width > schemeWidth && len(s.row) > 0 {
		s.endRow()
	}
	s.row = append(s.row, piece)
}

// endRow sets the row, pieces centred on one line.
func (s *scheme) endRow() {
	height, x := 0.0, 0.0
	for _, p := range s.row {
		height = max(height, p.Height)
	}
	for _, p := range s.row {
		s.d.take(p, Point{x, s.d.Height + (height-p.Height)/2})
		x += p.Width
	}
	s.d.Width = max(s.d.Width, x)
	s.d.Height += height
	s.row = nil
}

func plus(st Style) *Drawing {
	d := &Drawing{Width: 1.4 * st.Font, Height: st.Font}
	d.words(Point{0.4 * st.Font, 0.86 * st.Font}, st.Font, "+")
	return d
}

// arrow is a reaction arrow with lines of words above and below it.
func arrow(st Style, above, below []string) *Drawing {
	size := st.Words
	width := 46.0
	for _, list := range [][]string{above, below} {
		for _, text := range list {
			width = max(width, textWidth(text, size)+14)
		}
	}
	rows := float64(max(len(above), len(below)))
	pitch := 1.3 * size
	d := &Drawing{Width: width + 2*st.Margin, Height: 2*rows*pitch + 16}
	y := d.Height / 2
	left, right := st.Margin, st.Margin+width
	const head = 9.0
	d.Shapes = append(d.Shapes, Line{Point{left, y}, Point{right - head, y}, st.Line},
		Polygon{[]Point{{right, y}, {right - head, y - 0.38*head}, {right - head, y + 0.38*head}}})
	middle := (left + right) / 2
	for i, text := range above {
		d.words(Point{middle - textWidth(text, size)/2, y - 7 - float64(len(above)-1-i)*pitch}, size, text)
	}
	for i, text := range below {
		d.words(Point{middle - textWidth(text, size)/2, y + 5 + size + float64(i)*pitch}, size, text)
	}
	return d
}

// pair is a bond by the classes of its ends, the lower first.
type pair [2]uint16

func classes(m *molecule.Molecule, b int) (pair, bool) {
	x := m.Bond(b)
	p, q := m.Atom(int(x.A)).Class, m.Atom(int(x.B)).Class
	return pair{min(p, q), max(p, q)}, p > 0 && q > 0
}

func bondsByClass(ms []*molecule.Molecule) map[pair]bool {
	found := map[pair]bool{}
	for _, m := range ms {
		for b := range m.NumBonds() {
			if p, ok := classes(m, b); ok {
				found[p] = true
			}
		}
	}
	return found
}

// madeBonds are the bonds of m between atoms of known classes that are not among the old ones.
func madeBonds(m *molecule.Molecule, old map[pair]bool) []bool {
	made := make([]bool, m.NumBonds())
	for b := range made {
		p, ok := classes(m, b)
		made[b] = ok && !old[p]
	}
	return made
}
