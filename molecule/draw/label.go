package draw

import (
	"cmp"
	"math"
	"slices"
	"strconv"

	"shelfward/molecule"
)

// box is the room of a piece of text.
type box struct{ lo, hi Point }

func (b box) wider(by float64) box {
	return box{Point{b.lo.X - by, b.lo.Y - by}, Point{b.hi.X + by, b.hi.Y + by}}
}

func (b box) union(c box) box {
	return box{Point{min(b.lo.X, c.lo.X), min(b.lo.Y, c.lo.Y)}, Point{max(b.hi.X, c.hi.X), max(b.hi.Y, c.hi.Y)}}
}

// leaves returns the part of the way from p to q (0 to 1) at which the line leaves the box for good; 0 where it
// does not touch it.
func (b box) leaves(p, q Point) float64 {
	d := q.sub(p)
	from, to := 0.0, 1.0
	for _, axis := range [2][4]float64{{p.X, d.X, b.lo.X, b.hi.X}, {p.Y, d.Y, b.lo.Y, b.hi.Y}} {
		if math.Abs(axis[1]) < 1e-9 {
			if axis[0] < axis[2] || axis[0] > axis[3] {
				return 0
			}
			continue
		}
		t, u := (axis[2]-axis[0])/axis[1], (axis[3]-axis[0])/axis[1]
		from, to = max(from, min(t, u)), min(to, max(t, u))
	}
	if from >= to {
		return 0
	}
	return to
}

// label is what is written at an atom, and the boxes that bonds keep out of.
type label struct {
	runs  []Run
	boxes []box
}

// hydrogensAt says on which side of the symbol the hydrogens stand.
type hydrogensAt uint8

const (
	right hydrogensAt = iota
	left
	above
	below
)

// named says that atom a is written as its symbol: every atom but a plain carbon of the skeleton.
func named(m *molecule.Molecule, a int) bool {
	x := m.Atom(a)
	if x.Element != 6 || x.Charge != 0 || x.Isotope != 0 || m.Degree(a) == 0 {
		return true
	}
	// Carbons drawn on a straight line would not be seen (cumulenes), nor would radicals and carbenes.
	doubles, sum := 0, 0
	for _, nb := range m.Neighbors(a) {
		order := m.Bond(int(nb.Bond)).Order
		sum += int(order)
		if order == 2 {
			doubles++
		}
	}
	return doubles == 2 && m.Degree(a) == 2 || sum+int(x.Hydrogens) < 4
}

// makeLabel writes atom a at p; neighbours are the directions of its bonds, y downwards.
func makeLabel(x molecule.Atom, p Point, neighbors []Point, st Style) label {
	var l label
	side := hydrogenSide(x, neighbors)
	symbol := x.Element.Symbol()
	size, small := st.Font, st.Small
	base := p.Y + 0.36*size
	width := textWidth(symbol, size)
	start := p.X - width/2
	l.run(Point{start, base}, size, symbol)
	end := start + width
	if x.Isotope > 0 {
		text := strconv.Itoa(int(x.Isotope))
		start -= textWidth(text, small)
		l.run(Point{start, base - 0.4*size}, small, text)
	}
	if x.Hydrogens > 0 {
		count := ""
		if x.Hydrogens > 1 {
			count = strconv.Itoa(int(x.Hydrogens))
		}
		h := textWidth("H", size)
		at := Point{end, base}
		switch side {
		case left:
			at.X = start - h - textWidth(count, small)
		case above:
			at = Point{p.X - h/2, base - 0.86*size}
		case below:
			at = Point{p.X - h/2, base + 0.86*size}
		}
		l.run(at, size, "H")
		if count != "" {
			l.run(Point{at.X + h, at.Y + 0.25*size}, small, count)
		}
		if side == right {
			end += h + textWidth(count, small)
		}
	}
	if x.Charge != 0 {
		l.run(Point{end, base - 0.4*size}, small, chargeText(int(x.Charge)))
	}
	if side == left || side == right { // to be read and copied as it is seen
		slices.SortStableFunc(l.runs, func(a, b Run) int { return cmp.Compare(a.At.X, b.At.X) })
	}
	return l
}

func (l *label) run(at Point, size float64, text string) {
	if k := len(l.runs) - 1; k >= 0 && l.runs[k].Size == size && l.runs[k].At.Y == at.Y && math.Abs(l.runs[k].At.X+textWidth(l.runs[k].Text, size)-at.X) < 0.01 {
		l.runs[k].Text += text
	} else {
		l.runs = append(l.runs, Run{at, size, text})
	}
	l.boxes = append(l.boxes, box{Point{at.X, at.Y - 0.73*size}, Point{at.X + textWidth(text, size), at.Y + 0.02*size}})
}

// hydrogenSide is the side with most room: left where the only bond comes from the right; above or below where
// bonds come from both sides. Water, the hydrogen halides and their like begin with hydrogen.
func hydrogenSide(x molecule.Atom, neighbors []Point) hydrogensAt {
	switch len(neighbors) {
	case 0:
		switch x.Element {
		case 8, 16, 34, 9, 17, 35, 53:
			if x.Charge == 0 {
				return left
			}
		}
		return right
	case 1:
		if neighbors[0].X > 0.1*neighbors[0].length() {
			return left
		}
		return right
	}
	best, room := right, -1.0
	for side, d := range [4]Point{right: {1, 0}, left: {-1, 0}, below: {0, 1}, above: {0, -1}} {
		least := 2.0
		for _, n := range neighbors {
			least = min(least, 1-n.unit().dot(d))
		}
		if least > room+0.05 {
			best, room = hydrogensAt(side), least
		}
	}
	return best
}

func chargeText(q int) string {
	sign := "+"
	if q < 0 {
		sign, q = "−", -q
	}
	if q == 1 {
		return sign
	}
	return strconv.Itoa(q) + sign
}
