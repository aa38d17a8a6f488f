package draw

// Drawing is a picture neutral of devices: shapes on a page with y downwards, in points.
type Drawing struct {
	Width, Height      float64
	Title, Description string // for screen readers
	Style              Style
	Shapes             []Shape
}

// Shape is one of Line, Polygon or Text.
type Shape interface{ move(by Point) Shape }

// Line is a straight line with round ends.
type Line struct {
	A, B  Point
	Width float64
}

// Polygon is a filled area.
type Polygon struct{ Points []Point }

// Text is a line of text in runs that may stand higher or lower and have sizes of their own.
type Text struct {
	Runs []Run
	Bold bool
}

// Run is a piece of text; At is the left end of its base line.
type Run struct {
	At   Point
	Size float64
	Text string
}

func (s Line) move(by Point) Shape { return Line{s.A.add(by), s.B.add(by), s.Width} }

func (s Polygon) move(by Point) Shape {
	out := make([]Point, len(s.Points))
	for i, p := range s.Points {
		out[i] = p.add(by)
	}
	return Polygon{out}
}

func (s Text) move(by Point) Shape {
	out := Text{Bold: s.Bold}
	for _, r := range s.Runs {
		r.At = r.At.add(by)
		out.Runs = append(out.Runs, r)
	}
	return out
}

// take adds the shapes of another drawing at a place.
func (d *Drawing) take(other *Drawing, by Point) {
	for _, s := range other.Shapes {
		d.Shapes = append(d.Shapes, s.move(by))
	}
}

// words adds a line of text that begins at p.
func (d *Drawing) words(p Point, size float64, text string) {
	d.Shapes = append(d.Shapes, Text{Runs: []Run{{p, size, text}}})
}

// widths are the advance widths of Helvetica in thousandths of the size (Adobe font metrics of the standard
// fonts); what is not listed counts as a lower-case letter.
var widths = map[rune]float64{
	' ': 278, '(': 333, ')': 333, '+': 584, '−': 584, ',': 278, '-': 333, '.': 278, '/': 278, ':': 278, ';': 278, '=': 584, '*': 389, '°': 400,
	'A': 667, 'B': 667, 'C': 722, 'D': 722, 'E': 667, 'F': 611, 'G': 778, 'H': 722, 'I': 278, 'J': 500, 'K': 667, 'L': 556, 'M': 833,
	'N': 722, 'O': 778, 'P': 667, 'Q': 778, 'R': 722, 'S': 667, 'T': 611, 'U': 722, 'V': 667, 'W': 944, 'X': 667, 'Y': 667, 'Z': 611,
	'c': 500, 'f': 278, 'i': 222, 'j': 222, 'k': 500, 'l': 222, 'm': 833, 'r': 333, 's': 500, 't': 278, 'v': 500, 'w': 722, 'x': 500, 'y': 500, 'z': 500,
}

// textWidth is the width of a text at a size.
func textWidth(text string, size float64) float64 {
	total := 0.0
	for _, r := range text {
		if w, ok := widths[r]; ok {
			total += w
		} else {
			total += 556
		}
	}
	return total * size / 1000
}
