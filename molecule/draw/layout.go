// Package draw lays molecules out on the plane and writes them as SVG. It promises a plain readable
// picture: regular rings, zig-zag chains, labels at hetero atoms. It does not yet draw wedges (the
// caller prints the line notation beside it) and bridged ring systems come out relaxed, not by rule.
package draw

import (
	"math"

	"shelfward/molecule"
)

// Point is a place in units of one bond length; y grows upwards.
type Point struct{ X, Y float64 }

func (p Point) add(q Point) Point     { return Point{p.X + q.X, p.Y + q.Y} }
func (p Point) sub(q Point) Point     { return Point{p.X - q.X, p.Y - q.Y} }
func (p Point) scale(f float64) Point { return Point{p.X * f, p.Y * f} }
func (p Point) length() float64       { return math.Hypot(p.X, p.Y) }
func (p Point) turn(angle float64) Point {
	s, c := math.Sincos(angle)
	return Point{p.X*c - p.Y*s, p.X*s + p.Y*c}
}
func toward(angle float64) Point { s, c := math.Sincos(angle); return Point{c, s} }
func angleOf(p Point) float64    { return math.Atan2(p.Y, p.X) }

// gap is the space between components.
const gap = 1.5

// Layout returns a place for every atom of m. The same molecule always gets the same picture; the cost
// is linear but for bridged rings and clashes, which take a bounded number of rounds.
func Layout(m *molecule.Molecule) []Point {
	l := &layout{m: m, at: make([]Point, m.NumAtoms()), placed: make([]bool, m.NumAtoms())}
	left := 0.0
	for a := 0; a < m.NumAtoms(); a++ {
		if l.placed[a] {
			continue
		}
		atoms := l.component(a)
		lo, hi := l.bounds(atoms)
		for _, x := range atoms {
			l.at[x].X += left - lo
		}
		left += hi - lo + gap
	}
	return l.at
}

// layout is the state of one picture.
type layout struct {
	m      *molecule.Molecule
	at     []Point
	placed []bool
}

// component places the connected component of start and returns its atoms.
func (l *layout) component(start int) []int {
	atoms := l.connected(start)
	first := l.firstAtom(atoms)
	if ring := l.ringOf(first); ring != nil {
		l.placeRing(ring, Point{}, math.Pi/2)
	} else {
		l.at[first], l.placed[first] = Point{}, true
	}
	l.grow(atoms)
	l.relaxClashes(atoms)
	return atoms
}

func (l *layout) connected(start int) []int {
	seen := map[int]bool{start: true}
	list := []int{start}
	for i := 0; i < len(list); i++ {
		for _, n := range l.m.Neighbors(list[i]) {
			if !seen[int(n.Atom)] {
				seen[int(n.Atom)] = true
				list = append(list, int(n.Atom))
			}
		}
	}
	return list
}

// firstAtom prefers the ring atom with most rings, else an end of the longest chain.
func (l *layout) firstAtom(atoms []int) int {
	best, most := -1, 0
	for _, a := range atoms {
		n := 0
		for _, r := range l.m.Rings() {
			if holds(r, a) {
				n++
			}
		}
		if n > most {
			best, most = a, n
		}
	}
	if best >= 0 {
		return best
	}
	return l.farthest(l.farthest(atoms[0]))
}

// farthest returns the last atom that a walk by breadth reaches.
func (l *layout) farthest(start int) int {
	list := l.connected(start)
	return list[len(list)-1]
}

func holds(ring []int32, a int) bool {
	for _, x := range ring {
		if int(x) == a {
			return true
		}
	}
	return false
}

// ringOf returns the first ring through a with no atom placed.
func (l *layout) ringOf(a int) []int32 {
	for _, r := range l.m.Rings() {
		if holds(r, a) {
			return r
		}
	}
	return nil
}

// placeRing puts a ring down as a regular polygon around center.
func (l *layout) placeRing(ring []int32, center Point, first float64) {
	n := len(ring)
	radius := 0.5 / math.Sin(math.Pi/float64(n))
	for i, a := range ring {
		if !l.placed[a] {
			l.at[a] = center.add(toward(first - 2*math.Pi*float64(i)/float64(n)).scale(radius))
			l.placed[a] = true
		}
	}
}

// grow adds rings that touch what is placed, then chain atoms, until the component stands.
func (l *layout) grow(atoms []int) {
	for {
		if l.growRing() {
			continue
		}
		if !l.growChain(atoms) {
			return
		}
	}
}

// growRing places one ring that shares atoms with the picture.
func (l *layout) growRing() bool {
	for _, r := range l.m.Rings() {
		done, free := 0, 0
		for _, a := range r {
			if l.placed[a] {
				done++
			} else {
				free++
			}
		}
		if free == 0 || done == 0 {
			continue
		}
		switch {
		case done == 1:
			l.spiro(r)
		case done == 2 && l.fuse(r):
		default:
			l.bridge(r)
		}
		return true
	}
	return false
}

// spiro hangs a ring on one placed atom, away from its neighbours.
func (l *layout) spiro(r []int32) {
	k := 0
	for i, a := range r {
		if l.placed[a] {
			k = i
		}
	}
	rotated := append(append([]int32(nil), r[k:]...), r[:k]...)
	a := int(rotated[0])
	out := l.freeAngle(a)
	radius := 0.5 / math.Sin(math.Pi/float64(len(r)))
	center := l.at[a].add(toward(out).scale(radius))
	l.placeRing(rotated, center, out+math.Pi)
}

// fuse hangs a ring on a placed bond, on the side that is free.
func (l *layout) fuse(r []int32) bool {
	n := len(r)
	for i := range r {
		a, b := r[i], r[(i+1)%n]
		if !l.placed[a] || !l.placed[b] {
			continue
		}
		rotated := append(append([]int32(nil), r[i:]...), r[:i]...)
		mid := l.at[a].add(l.at[b]).scale(0.5)
		side := l.at[b].sub(l.at[a]).turn(math.Pi / 2)
		if l.crowd(mid.add(side)) > l.crowd(mid.sub(side)) {
			side = side.scale(-1)
		}
		apothem := 0.5 / math.Tan(math.Pi/float64(n))
		center := mid.add(side.scale(apothem / math.Max(side.length(), 1e-9)))
		from := angleOf(l.at[a].sub(center))
		step := -2 * math.Pi / float64(n)
		if math.Abs(wrap(angleOf(l.at[b].sub(center))-from-step)) > 0.3 {
			step = -step
		}
		radius := 0.5 / math.Sin(math.Pi/float64(n))
		for k, x := range rotated {
			if !l.placed[x] {
				l.at[x] = center.add(toward(from + step*float64(k)).scale(radius))
				l.placed[x] = true
			}
		}
		return true
	}
	return false
}

func wrap(a float64) float64 {
	for a > math.Pi {
		a -= 2 * math.Pi
	}
	for a < -math.Pi {
		a += 2 * math.Pi
	}
	return a
}

// crowd counts placed atoms near a point.
func (l *layout) crowd(p Point) float64 {
	total := 0.0
	for a, q := range l.at {
		if l.placed[a] {
			d := p.sub(q)
			total += 1 / (0.2 + d.X*d.X + d.Y*d.Y)
		}
	}
	return total
}

// bridge lays the missing path of a bridged ring on a bow between its placed ends.
func (l *layout) bridge(r []int32) {
	n := len(r)
	for i := range r {
		if !l.placed[r[i]] || l.placed[r[(i+1)%n]] {
			continue
		}
		j := (i + 1) % n
		var path []int32
		for !l.placed[r[j]] {
			path = append(path, r[j])
			j = (j + 1) % n
		}
		l.bow(l.at[r[i]], l.at[r[j]], path)
		return
	}
}

func (l *layout) bow(a, b Point, path []int32) {
	mid := a.add(b).scale(0.5)
	side := b.sub(a).turn(math.Pi / 2)
	if side.length() < 1e-9 {
		side = Point{0, 1}
	}
	side = side.scale(1 / side.length())
	if l.crowd(mid.add(side)) > l.crowd(mid.sub(side)) {
		side = side.scale(-1)
	}
	k := float64(len(path) + 1)
	height := 0.35 * k
	if b.sub(a).length() > k*0.9 {
		height = 0.25
	}
	for i, x := range path {
		t := float64(i+1) / k
		l.at[x] = a.add(b.sub(a).scale(t)).add(side.scale(height * 4 * t * (1 - t)))
		l.placed[x] = true
	}
}

// growChain places the neighbours of one placed atom.
func (l *layout) growChain(atoms []int) bool {
	for _, a := range atoms {
		if !l.placed[a] {
			continue
		}
		for _, n := range l.m.Neighbors(a) {
			x := int(n.Atom)
			if l.placed[x] {
				continue
			}
			l.at[x] = l.at[a].add(toward(l.freeAngle(a)))
			l.placed[x] = true
			return true
		}
	}
	return false
}

// freeAngle is the direction at a with most room: straight on for sp atoms, 120 degrees else, zig-zag.
func (l *layout) freeAngle(a int) float64 {
	var used []float64
	for _, n := range l.m.Neighbors(a) {
		if l.placed[n.Atom] {
			used = append(used, angleOf(l.at[n.Atom].sub(l.at[a])))
		}
	}
	if len(used) == 0 {
		return -math.Pi / 6
	}
	best, least := 0.0, math.Inf(1)
	for _, c := range l.directions(a, used) {
		cost := l.crowd(l.at[a].add(toward(c)))
		for _, u := range used {
			if math.Abs(wrap(c-u)) < math.Pi/3-0.05 {
				cost += 100
			}
		}
		if cost < least-1e-9 {
			best, least = c, cost
		}
	}
	return best
}

// directions lists candidate angles at a beside those used.
func (l *layout) directions(a int, used []float64) []float64 {
	if len(used) == 1 {
		if l.linear(a) {
			return []float64{used[0] + math.Pi}
		}
		return []float64{used[0] + 2*math.Pi/3, used[0] - 2*math.Pi/3}
	}
	var out []float64
	for i := range used {
		for j := range used {
			if i < j {
				mid := used[i] + wrap(used[j]-used[i])/2
				out = append(out, mid+math.Pi, mid)
			}
		}
		out = append(out, used[i]+math.Pi/2, used[i]-math.Pi/2, used[i]+math.Pi)
	}
	return out
}

func (l *layout) linear(a int) bool {
	doubles := 0
	for _, n := range l.m.Neighbors(a) {
		switch l.m.Bond(int(n.Bond)).Order {
		case 3:
			return true
		case 2:
			doubles++
		}
	}
	return doubles == 2
}

// relaxClashes pushes atoms apart that came too close, keeping bonds near one unit.
func (l *layout) relaxClashes(atoms []int) {
	if len(atoms) > 200 {
		return
	}
	for round := 0; round < 60 && l.clash(atoms); round++ {
		push := make(map[int]Point, len(atoms))
		for i, a := range atoms {
			for _, b := range atoms[i+1:] {
				d := l.at[b].sub(l.at[a])
				dist := d.length()
				if dist < 1e-6 {
					d, dist = Point{0.01, 0.02}, 0.0224
				}
				force := 0.0
				if l.m.BondBetween(a, b) >= 0 {
					force = 0.4 * (dist - 1)
				} else if dist < 0.8 {
					force = 0.3 * (dist - 0.8)
				}
				move := d.scale(force / dist / 2)
				push[a] = push[a].add(move)
				push[b] = push[b].sub(move)
			}
		}
		for a, p := range push {
			l.at[a] = l.at[a].add(p)
		}
	}
}

func (l *layout) clash(atoms []int) bool {
	for i, a := range atoms {
		for _, b := range atoms[i+1:] {
			if l.at[a].sub(l.at[b]).length() < 0.5 {
				return true
			}
		}
	}
	return false
}

func (l *layout) bounds(atoms []int) (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, a := range atoms {
		lo, hi = math.Min(lo, l.at[a].X), math.Max(hi, l.at[a].X)
	}
	return lo, hi
}
