package draw

import "shelfward/molecule"

// Rung is one step of a route: its words, and what it makes.
type Rung struct {
	Words   []string
	Product *molecule.Molecule
	Name    string // of the product, with a note where it goes
}

// Stock is what a route takes from the shelf.
type Stock struct {
	Molecule *molecule.Molecule
	Name     string
	Chosen   bool // the start that was asked for: drawn heavy
}

// Ladder draws a route: the shelf is the ground line, the target stands on top, and one rung per step leads up;
// what a step makes stands above its rung. Rungs are given from the ground up.
func Ladder(rungs []Rung, shelf []Stock, o Options) *Drawing {
	st := o.style()
	l := &ladder{st: st, d: &Drawing{Style: st, Title: o.Title, Description: o.Description}}
	ground := l.ground(shelf)
	width := ground.Width
	var pieces []*Drawing
	for _, r := range rungs {
		piece := captioned(Structure(r.Product, Options{Style: st}), r.Name)
		pieces = append(pieces, piece)
		width = max(width, piece.Width+6*st.Margin)
		for _, w := range r.Words {
			width = max(width, textWidth(w, st.Words)+8*st.Margin)
		}
	}
	left, right := 2*st.Margin, width-2*st.Margin
	y := st.Margin
	top := 0.0
	for i := len(rungs) - 1; i >= 0; i-- {
		l.d.take(pieces[i], Point{(width - pieces[i].Width) / 2, y})
		y += pieces[i].Height
		if i == len(rungs)-1 {
			top = y
		}
		l.line(Point{left, y}, Point{right, y}, 1.4*st.Line)
		for _, w := range rungs[i].Words {
			y += 1.3 * st.Words
			l.d.words(Point{(width - textWidth(w, st.Words)) / 2, y}, st.Words, w)
		}
		y += st.Margin
	}
	l.line(Point{left, top}, Point{left, y}, 1.4*st.Line)
	l.line(Point{right, top}, Point{right, y}, 1.4*st.Line)
	l.line(Point{2, y}, Point{width - 2, y}, 2*st.Heavy)
	l.d.take(ground, Point{(width - ground.Width) / 2, y + st.Line})
	l.d.Width, l.d.Height = width, y+ground.Height
	return l.d
}

type ladder struct {
	st Style
	d  *Drawing
}

func (l *ladder) line(a, b Point, width float64) {
	l.d.Shapes = append(l.d.Shapes, Line{a, b, width})
}

// ground is the row of what comes from the shelf, in several rows where it is wide.
func (l *ladder) ground(shelf []Stock) *Drawing {
	s := &scheme{d: &Drawing{Style: l.st}}
	for _, x := range shelf {
		o := Options{Style: l.st}
		if x.Chosen {
			o.Heavy = make([]bool, x.Molecule.NumAtoms())
			for i := range o.Heavy {
				o.Heavy[i] = true
			}
		}
		s.add(captioned(Structure(x.Molecule, o), x.Name))
	}
	s.endRow()
	return s.d
}

// captioned is a drawing with its name below.
func captioned(d *Drawing, name string) *Drawing {
	if name == "" {
		return d
	}
	st := d.Style
	wide := textWidth(name, st.Small) + st.Margin
	out := &Drawing{Style: st, Width: max(d.Width, wide), Height: d.Height + 1.2*st.Small}
	out.take(d, Point{(out.Width - d.Width) / 2, 0})
	out.words(Point{(out.Width - wide + st.Margin) / 2, d.Height}, st.Small, name)
	return out
}
