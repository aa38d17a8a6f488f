package draw

import "math"

// Point is a place in units of one bond length; y grows upwards.
type Point struct{ X, Y float64 }

func (p Point) add(q Point) Point       { return Point{p.X + q.X, p.Y + q.Y} }
func (p Point) sub(q Point) Point       { return Point{p.X - q.X, p.Y - q.Y} }
func (p Point) scale(f float64) Point   { return Point{p.X * f, p.Y * f} }
func (p Point) length() float64         { return math.Sqrt(p.X*p.X + p.Y*p.Y) }
func (p Point) square() float64         { return p.X*p.X + p.Y*p.Y }
func (p Point) dot(q Point) float64     { return p.X*q.X + p.Y*q.Y }
func (p Point) cross(q Point) float64   { return p.X*q.Y - p.Y*q.X }
func (p Point) times(q Point) Point     { return Point{p.X*q.X - p.Y*q.Y, p.X*q.Y + p.Y*q.X} } // turn by the angle of q
func (p Point) left() Point             { return Point{-p.Y, p.X} }
func (p Point) middle(q Point) Point    { return Point{(p.X + q.X) / 2, (p.Y + q.Y) / 2} }
func (p Point) turn(turn float64) Point { return p.times(toward(turn)) }

// unit is p made one long; a point too short to have a direction becomes straight up.
func (p Point) unit() Point {
	if l := p.length(); l > 1e-9 {
		return p.scale(1 / l)
	}
	return Point{0, 1}
}

func toward(angle float64) Point { s, c := math.Sincos(angle); return Point{c, s} }
func angleOf(p Point) float64    { return math.Atan2(p.Y, p.X) }

// mirrored reflects p about the line through a along the unit vector u.
func (p Point) mirrored(a, u Point) Point {
	d := p.sub(a)
	return a.add(u.scale(2 * d.dot(u))).sub(d)
}

// crosses says that the lines p-q and r-s have an inner point in common.
func crosses(p, q, r, s Point) bool {
	d, e := q.sub(p), s.sub(r)
	det := d.cross(e)
	if math.Abs(det) < 1e-9 {
		return false
	}
	w := r.sub(p)
	t, u := w.cross(e)/det, w.cross(d)/det
	const inner = 0.02
	return t > inner && t < 1-inner && u > inner && u < 1-inner
}

// toLine is the square of the distance of p from the line a-b.
func toLine(p, a, b Point) float64 {
	d := b.sub(a)
	t := p.sub(a).dot(d) / max(d.square(), 1e-12)
	return p.sub(a.add(d.scale(max(0, min(1, t))))).square()
}

// arc returns k points between p and q, such that the k+1 steps from p to q are all one long and lie on a
// circle; they bulge to the left of p-q. Where p and q are too far apart the steps are stretched on a
// shallow bow.
func arc(p, q Point, k int, out []Point) []Point {
	d := q.sub(p)
	dist := d.length()
	steps := float64(k + 1)
	if dist > steps*0.98 {
		up := d.left().unit().scale(0.15)
		for i := 1; i <= k; i++ {
			t := float64(i) / steps
			out = append(out, p.add(d.scale(t)).add(up.scale(4*t*(1-t))))
		}
		return out
	}
	alpha := halfStep(dist, steps)
	// The first step leaves p at k+1 half steps to the left of the chord, each next one turns two to the right.
	step := d.scale(1 / max(dist, 1e-9))
	if dist < 1e-9 {
		step = Point{1, 0}
	}
	step = step.turn(steps*alpha - alpha)
	turn := toward(-2 * alpha)
	at := p
	for i := 0; i < k; i++ {
		at = at.add(step)
		out = append(out, at)
		step = step.times(turn)
	}
	return out
}

// halfStep is half the angle at the centre that one step of an arc of unit steps spans, so that its ends lie
// dist apart: sin(steps*a)/sin(a) = dist.
func halfStep(dist, steps float64) float64 {
	for polygon := steps + 1; polygon <= steps+3; polygon++ { // the rest of a regular polygon
		a := math.Pi / polygon
		if math.Abs(math.Sin(steps*a)-dist*math.Sin(a)) < 1e-7 {
			return a
		}
	}
	lo, hi := 1e-6, math.Pi/steps
	for range 40 {
		a := (lo + hi) / 2
		if math.Sin(steps*a) > dist*math.Sin(a) {
			lo = a
		} else {
			hi = a
		}
	}
	return lo
}
