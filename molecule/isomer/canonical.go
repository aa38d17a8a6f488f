package isomer

import "math/bits"

// tour is another breadth-first visit of the same units. Places 0 to met-1 hold the units met; cell
// gives for each place the first place of the set whose units the tour cannot tell apart yet.
type tour struct {
	unit, place, cell [maxUnits]uint8 // place[u] is absent for units not met
	met               int
}

const absent = 255

// places[n] puts the units 0 to n-1 at the places of their numbers and the others nowhere.
var places = func() (t [maxUnits + 1][maxUnits]uint8) {
	for n := range t {
		for u := range t[n] {
			t[n][u] = absent
			if u < n {
				t[n][u] = uint8(u)
			}
		}
	}
	return t
}()

// outcome compares the rows of a tour with the rows that stand.
type outcome uint8

const (
	smaller outcome = iota // it can never become the largest: forget it
	same                   // equal as far as rows are known
	larger                 // the rows that stand are not the largest
)

// judge holds what a tour is compared with: bonds to walk on, and rows.
type judge struct {
	kind  *[maxUnits]uint8
	deg   *[maxUnits]uint8
	adj   *[maxUnits][maxDegree]edge
	row   *[maxUnits]uint64
	depth int             // rows that stand; the bonds of units 0 to depth-1 are all known
	spare *[maxUnits]tour // room for the tour that branches at each place
}

// largest reports whether no tour is known to beat rows 0 to depth-1, and keeps the rivals that are
// not decided yet: a tour that fell behind once stays behind whatever rows follow.
func (s *search) largest(depth int) bool {
	j := judge{&s.kind, &s.deg, &s.adj, &s.row, depth, s.spare}
	visited := uint32(1)<<depth - 1
	i := depth - 1

	s.rival[depth] = s.rival[i]
	s.rival[depth][i] = 0
	if s.row[i] != 0 { // otherwise the units of the cell have no bonds left and are alike
		end := i + 1
		for end < int(s.metAt[i]) && s.cell[i][end] == s.cell[i][i] {
			end++
		}
		s.rival[depth][i] = (uint32(1)<<end - 1) &^ (uint32(1)<<(i+1) - 1)
	}
	rivals := s.rival[depth][:depth]
	for k := i; k >= 0; k-- {
		for m := rivals[k] & visited; m != 0; m &= m - 1 {
			w := bits.TrailingZeros32(m)
			switch s.instead(&j, k, w) {
			case larger:
				return false
			case smaller:
				rivals[k] &^= 1 << w
			}
		}
	}
	s.roots[depth] = s.roots[i]
	if i > 0 && s.kind[i] == s.plan.root {
		s.roots[depth] |= 1 << i
	}
	for m := s.roots[depth]; m != 0; m &= m - 1 {
		w := bits.TrailingZeros32(m)
		switch j.from(w) {
		case larger:
			return false
		case smaller:
			s.roots[depth] &^= 1 << w
		}
	}
	return true
}

// instead follows the tours that run as ours up to place k and take unit w there.
func (s *search) instead(j *judge, k, w int) outcome {
	t := tour{unit: places[maxUnits], cell: s.cell[k], met: int(s.metAt[k])}
	t.place = places[t.met]
	return t.take(j, k, w)
}

// from follows the tours that begin with unit w.
func (j *judge) from(w int) outcome {
	t := tour{place: places[0]}
	t.unit[0], t.place[w], t.met = uint8(w), 0, 1
	return t.take(j, 0, w)
}

// take puts unit w of the cell at place p there and follows the tour to its end.
func (t *tour) take(j *judge, p, w int) outcome {
	t.swap(p, int(t.place[w]))
	for q := p + 1; q < t.met && int(t.cell[q]) == p; q++ {
		t.cell[q] = uint8(p + 1)
	}
	for {
		if int(t.unit[p]) >= j.depth {
			return same // its bonds are not all known yet
		}
		if o := t.step(j, p); o != same {
			return o
		}
		p++
		if p == j.depth {
			return same
		}
		t.cell[p] = uint8(p)
		if p+1 < t.met && int(t.cell[p+1]) == p {
			if j.row[p] != 0 {
				return t.branch(j, p)
			}
			for q := p + 1; q < t.met && int(t.cell[q]) == p; q++ { // units without bonds left: any will do
				t.cell[q] = uint8(p + 1)
			}
		}
	}
}

// branch tries every unit of the cell at place p.
func (t *tour) branch(j *judge, p int) outcome {
	end := p + 1
	for end < t.met && int(t.cell[end]) == p {
		end++
	}
	result := smaller
	for q := p; q < end; q++ {
		next := &j.spare[p]
		*next = *t
		switch next.take(j, p, int(t.unit[q])) {
		case larger:
			return larger
		case same:
			// Either undecided until more rows stand, or a symmetry of the finished structure: then
			// the rest of this branch repeats what is compared from our own tour.
			return same
		}
	}
	return result
}

func (t *tour) swap(p, q int) {
	a, b := t.unit[p], t.unit[q]
	t.unit[p], t.unit[q] = b, a
	t.place[a], t.place[b] = uint8(q), uint8(p)
}

// step writes the row of the unit at place p, compares it with ours and, if they agree, splits
// cells and meets the children.
func (t *tour) step(j *judge, p int) outcome {
	w := t.unit[p]
	var tokens [maxDegree]uint16
	var to [maxDegree]uint8
	n := 0
	for _, e := range j.adj[w][:j.deg[w]] {
		q := t.place[e.to]
		var token uint16
		switch {
		case q == absent:
			token = uint16(e.code)<<5 | uint16(j.kind[e.to])
		case int(q) < p:
			continue
		default:
			token = 1<<8 | uint16(31-t.cell[q])<<3 | uint16(e.code)
		}
		x := n
		for ; x > 0 && tokens[x-1] < token; x-- {
			tokens[x], to[x] = tokens[x-1], to[x-1]
		}
		tokens[x], to[x] = token, e.to
		n++
	}
	row := uint64(0)
	for x := 0; x < n; x++ {
		row |= uint64(tokens[x]) << (54 - 9*x)
	}
	if row != j.row[p] {
		if row > j.row[p] {
			return larger
		}
		return smaller
	}
	for x := 0; x < n; {
		y := x
		if tokens[x] >= 1<<8 {
			x = t.split(tokens[:n], to[:n], x)
			continue
		}
		first := uint8(t.met)
		for ; y < n && tokens[y] == tokens[x]; y++ {
			t.unit[t.met], t.place[to[y]], t.cell[t.met] = to[y], uint8(t.met), first
			t.met++
		}
		x = y
	}
	return same
}

// split moves the units of one cell that the row closes to, from to[x] on, to the front of it and
// returns the first token behind them.
func (t *tour) split(tokens []uint16, to []uint8, x int) int {
	start := int(t.cell[t.place[to[x]]])
	at, first := start, start
	y := x
	for ; y < len(tokens) && tokens[y]>>3 == tokens[x]>>3; y++ {
		if y > x && tokens[y] != tokens[y-1] {
			first = at
		}
		t.swap(at, int(t.place[to[y]]))
		t.cell[at] = uint8(first)
		at++
	}
	for q := at; q < t.met && int(t.cell[q]) == start; q++ {
		t.cell[q] = uint8(at)
	}
	return y
}
