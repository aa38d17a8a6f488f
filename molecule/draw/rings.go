package draw

import (
	"math"
	"slices"
)

// ringSystem is a set of rings joined by common bonds, laid out in a frame of its own.
type ringSystem struct {
	rings   [][]int32
	atoms   []int32
	at      []Point // beside atoms
	bridged bool
	caged   bool // placed as a known cage
	placed  bool
}

// place returns where atom a stands in the frame of s.
func (s *ringSystem) place(a int32) Point { return s.at[slices.Index(s.atoms, a)] }

// macro is the smallest ring that is drawn as a large one, with dents for its trans double bonds.
const macro = 8

// layRings lays every ring system of the view out.
func (l *layout) layRings() {
	l.systems = resize(l.systems, l.v.systems)
	for i, r := range l.v.rings {
		s := &l.systems[l.v.system[i]]
		s.rings = append(s.rings, r)
	}
	l.points = l.points[:0]
	for i := range l.systems {
		l.laySystem(&l.systems[i])
	}
}

// laySystem lays one system out: a ring alone as a polygon, fused rings one on the other, bridged ones by the
// first of several ways that gives a clear picture.
func (l *layout) laySystem(s *ringSystem) {
	for i, r := range s.rings {
		for _, q := range s.rings[:i] {
			s.bridged = s.bridged || common(r, q) > 2
		}
	}
	if !s.bridged {
		l.startRing(s.rings[l.widestRing(s)])
		l.fuse(s)
		l.collect(s)
		if len(s.rings) == 1 || l.sound(s, 0.02) {
			return
		}
		s.bridged = true
	}
	l.layBridged(s)
}

// widestRing is the ring to start with: a large ring if there is one, else the one with most neighbours.
func (l *layout) widestRing(s *ringSystem) int {
	best, most := 0, -1
	for i, r := range s.rings {
		score := 0
		for j, q := range s.rings {
			if i != j && common(r, q) > 1 {
				score++
			}
		}
		switch {
		case len(r) > macro:
			score += 100 * len(r)
		case len(r) == 6:
			score += 50
		}
		if score > most {
			best, most = i, score
		}
	}
	return best
}

// startRing clears the frame and places a ring as a regular polygon.
func (l *layout) startRing(r []int32) {
	l.clearFrame()
	n := len(r)
	radius := 0.5 / math.Sin(math.Pi/float64(n))
	spoke := Point{0, radius}
	turn := toward(-2 * math.Pi / float64(n))
	for _, a := range r {
		l.put(a, spoke)
		spoke = spoke.times(turn)
	}
	if n >= macro {
		l.dent(r)
	}
}

func (l *layout) clearFrame() {
	for _, a := range l.framed {
		l.have[a] = false
	}
	l.framed = l.framed[:0]
}

func (l *layout) put(a int32, p Point) {
	if !l.have[a] {
		l.have[a] = true
		l.framed = append(l.framed, a)
	}
	l.frame[a] = p
}

// collect copies the frame into s.
func (l *layout) collect(s *ringSystem) {
	s.atoms, s.at = s.atoms[:0], s.at[:0]
	for _, a := range l.framed {
		s.atoms = append(s.atoms, a)
		s.at = append(s.at, l.frame[a])
	}
}

// fuse adds the rings of s that touch the frame: six-membered ones first, so that these come out regular, then those
// with most atoms in place.
func (l *layout) fuse(s *ringSystem) {
	for {
		best, most := -1, 0
		for i, r := range s.rings {
			n := l.inFrame(r)
			if n < 2 || n == len(r) {
				continue
			}
			if len(r) == 6 {
				n += 100
			}
			if n > most {
				best, most = i, n
			}
		}
		if best < 0 {
			return
		}
		l.closeRing(s.rings[best])
	}
}

func (l *layout) inFrame(r []int32) (n int) {
	for _, a := range r {
		if l.have[a] {
			n++
		}
	}
	return n
}

// closeRing lays the first missing path of ring r on an arc, away from what is placed.
func (l *layout) closeRing(r []int32) {
	n := len(r)
	start := 0
	for !l.have[r[start]] || l.have[r[(start+1)%n]] {
		start++
	}
	path := l.path[:0]
	i := (start + 1) % n
	for ; !l.have[r[i]]; i = (i + 1) % n {
		path = append(path, r[i])
	}
	l.path = path
	p, q := l.frame[r[start]], l.frame[r[i]]
	if l.crowdSide(r, p, q, len(path)) {
		slices.Reverse(path)
		p, q = q, p
	}
	l.bow = arc(p, q, len(path), l.bow[:0])
	for k, a := range path {
		l.put(a, l.bow[k])
	}
}

// crowdSide says that the side to the left of p-q is more crowded than the right one.
func (l *layout) crowdSide(r []int32, p, q Point, k int) bool {
	mid, up := p.middle(q), q.sub(p).left().unit().scale(0.35+0.25*float64(k))
	return l.crowding(mid.add(up)) > l.crowding(mid.sub(up))
}

// crowding is a measure of what stands near x in the frame.
func (l *layout) crowding(x Point) float64 {
	total := 0.0
	for _, a := range l.framed {
		d := x.sub(l.frame[a]).square()
		total += 1 / (0.1 + d*d)
	}
	return total
}

// sound says that no bond of s is off by more than the tolerance, and that nothing overlaps.
func (l *layout) sound(s *ringSystem, tolerance float64) bool {
	worst, _ := l.faults(s)
	return worst <= tolerance
}

// faults measures the frame of s: the largest deviation of a bond from one, 9 where atoms or bonds overlap, and
// a sum over all faults that ranks frames.
func (l *layout) faults(s *ringSystem) (worst, sum float64) {
	lines := l.lines[:0]
	for i, a := range s.atoms {
		for _, nb := range l.v.neighbors(a) {
			if nb.Atom > a && l.have[nb.Atom] {
				d := math.Abs(s.at[i].sub(l.frame[nb.Atom]).length() - 1)
				worst = max(worst, d)
				sum += d * d
				lines = append(lines, line{a, nb.Atom})
			}
		}
	}
	l.lines = lines
	for i, p := range s.at {
		for j := range i {
			if d := p.sub(s.at[j]).square(); d < 0.52*0.52 {
				worst = 9
				sum += 10 * (1 - d)
			}
		}
		for _, x := range lines {
			if a := s.atoms[i]; a != x.a && a != x.b && toLine(p, l.frame[x.a], l.frame[x.b]) < 0.2*0.2 {
				worst = 9
				sum += 5
			}
		}
	}
	for i, x := range lines {
		for _, y := range lines[:i] {
			if x.a != y.a && x.a != y.b && x.b != y.a && x.b != y.b && crosses(l.frame[x.a], l.frame[x.b], l.frame[y.a], l.frame[y.b]) {
				worst = max(worst, 5)
				sum += 2
			}
		}
	}
	return worst, sum
}

// line is a bond by its ends.
type line struct{ a, b int32 }

// dent pushes atoms of a large ring inwards so that its trans double bonds come out trans, then evens the bonds.
func (l *layout) dent(r []int32) {
	n := len(r)
	dented := l.flags(len(r))
	any := false
	for i := range r {
		a, b := r[i], r[(i+1)%n]
		if !l.transInRing(r, i) || dented[i] != dented[(i+1)%n] {
			continue
		}
		k := i
		if l.v.degree(a) > l.v.degree(b) || dented[(i+n-1)%n] { // the end without a branch, and not beside another dent
			k = (i + 1) % n
		}
		dented[k], any = true, true
	}
	if !any {
		return
	}
	for i, a := range r {
		if dented[i] {
			p, q := l.frame[r[(i+n-1)%n]], l.frame[r[(i+1)%n]]
			l.frame[a] = l.frame[a].mirrored(p, q.sub(p).unit())
		}
	}
	l.points = l.points[:0]
	for _, a := range r {
		l.points = append(l.points, l.frame[a])
	}
	l.relaxRing(r)
	if !l.ringMarksHold(r) { // the dented polygon is plainer, but its bonds are one long as well
		for i, a := range r {
			l.frame[a] = l.points[i]
		}
	}
}

// ringMarksHold says that the double bonds of ring r stand in the frame as they are marked.
func (l *layout) ringMarksHold(r []int32) bool {
	n := len(r)
	for i := range r {
		a, b := l.frame[r[i]], l.frame[r[(i+1)%n]]
		axis := b.sub(a)
		apart := axis.cross(l.frame[r[(i+n-1)%n]].sub(a))*axis.cross(l.frame[r[(i+2)%n]].sub(b)) < 0
		if l.ringMark(r[i], r[(i+1)%n]) != nil && apart != l.transInRing(r, i) {
			return false
		}
	}
	return true
}

// ringMark returns the mark of the double bond between a and b, or nil.
func (l *layout) ringMark(a, b int32) *mark {
	for i := range l.marked {
		if d := &l.marked[i]; d.a == a && d.b == b || d.a == b && d.b == a {
			return d
		}
	}
	return nil
}

func (l *layout) flags(n int) []bool {
	l.marks = resize(l.marks, n)
	return l.marks
}

// transInRing says that the bond from r[i] to r[i+1] is marked with its ring neighbours on opposite sides.
func (l *layout) transInRing(r []int32, i int) bool {
	n := len(r)
	a, b := r[i], r[(i+1)%n]
	d := l.ringMark(a, b)
	if d == nil {
		return false
	}
	before, after := r[(i+n-1)%n], r[(i+2)%n]
	if d.a == b {
		before, after = after, before
	}
	return d.together != ((d.la == before) == (d.lb == after))
}

// relaxRing evens a dented ring: bonds of one, atoms two bonds apart at 1.73, all others well apart.
func (l *layout) relaxRing(r []int32) {
	n := len(r)
	for round := range 200 {
		rate := 0.4 - 0.0015*float64(round)
		for i := range n {
			for j := range i {
				hops := min(i-j, n-i+j)
				p, q := l.frame[r[i]], l.frame[r[j]]
				d := q.sub(p)
				dist := max(d.length(), 1e-6)
				force := 0.0
				switch {
				case hops == 1:
					force = dist - 1
				case hops == 2:
					force = 0.5 * (dist - 1.73)
				case dist < 1.3:
					force = 0.2 * (dist - 1.3)
				}
				move := d.scale(rate * force / dist / 2)
				l.frame[r[i]], l.frame[r[j]] = p.add(move), q.sub(move)
			}
		}
	}
}
