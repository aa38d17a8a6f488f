package isomer

// The search. A structure is written as a code: its units (atoms, or atoms with fixed company such
// as a nitro group) are visited breadth first from a unit of the rarest kind, and for each unit one
// row says how it is bonded to units met before but not yet visited (closures) and to units met for
// the first time (children). The code of a compound is the largest over all such visits. The search
// writes rows one after the other, in every possible way, and gives up a prefix as soon as another
// visit of the same units is seen to give a larger code (canonical.go). A finished code that no
// other visit beats is the code of a compound, and no compound has two: so nothing is remembered.
//
// The method belongs to the orderly algorithms of Read (Ann. Discrete Math. 2 (1978) 107) and
// Faradzhev (1978); the breadth-first code in place of the full connection matrix makes
// connectivity free and leaves few visits to compare when some kind is rare.

// maxUnits is the largest number of units: positions and kinds are five bits of a token.
const maxUnits = 32

// maxDegree is the largest number of neighbours of a unit: a row holds seven tokens of nine bits.
const maxDegree = 7

// Bond codes between units: 1 to 3 are bond orders chosen by the search, inner+k are bonds inside
// a block.
const (
	inner         = 4 // inner, inner+1, inner+2: single, double, triple bond of a block
	innerAromatic = 7
)

// edge is one end of a bond between units.
type edge struct{ to, code uint8 }

// search is the state of one descent. Copying it copies the descent.
type search struct {
	plan *plan
	out  sink

	met    int // units met so far; units are numbered in the order they are met and visited
	excess int // bond orders still to spend on closures and on making bonds double or triple
	rings  int // rings closed so far between units

	kind  [maxUnits]uint8  // kind of each unit met
	free  [maxUnits]uint8  // free valence left
	need  [maxUnits]uint32 // bonds inside the block still to be made: a nibble per entry of kind.inner
	group [maxUnits]uint8  // block instance the unit belongs to (provisional until instances merge)
	deg   [maxUnits]uint8
	adj   [maxUnits][maxDegree]edge
	twos  [maxUnits]uint8 // double bonds made

	left   [maxUnits]uint8 // units of each kind not yet met
	groups int             // block instances opened, those that merged later included
	opened [maxBlocks]int8 // the same for each block kind, less merged ones

	row   [maxUnits]uint64               // finished rows
	cell  [maxUnits + 1][maxUnits]uint8  // cell[i][u]: first unit of the set of units that u cannot be told from when row i is written
	metAt [maxUnits + 1]uint8            // units met when row i is written
	rival [maxUnits + 1][maxUnits]uint32 // rival[d][k]: units that may stand in place of k without a smaller code so far
	roots [maxUnits + 1]uint32           // the same for the first unit

	spare *[maxUnits]tour // scratch: a copy of the search that is to run beside this one needs its own

	code [maxUnits][maxUnits]uint8 // code[i][j]: closure from unit i to unit j as row i is written
}

// sink receives what a search finds; false stops the search.
type sink interface {
	// node is told of each surviving prefix: rows 0 to depth-1 are written. Skip leaves the branch out.
	node(s *search, depth int) verdict
	leaf(s *search) bool
}

type verdict uint8

const (
	descend verdict = iota
	skip
	stop
)

// start places the first unit.
func (s *search) start(p *plan, out sink) {
	*s = search{plan: p, out: out, excess: p.excess, spare: new([maxUnits]tour)}
	copy(s.left[:], p.count[:])
	s.meet(p.root, 0)
	if p.kinds[p.root].block >= 0 {
		s.open(0)
	}
	s.cell[0][0], s.metAt[0] = 0, 1
}

// meet adds the next unit of kind k and returns its number.
func (s *search) meet(k uint8, spent uint8) int {
	u := s.met
	s.met++
	s.left[k]--
	kd := &s.plan.kinds[k]
	s.kind[u], s.free[u], s.need[u] = k, kd.free-spent, kd.need
	s.deg[u], s.twos[u] = 0, kd.twos
	return u
}

func (s *search) unmeet() {
	s.met--
	s.left[s.kind[s.met]]++
}

func (s *search) join(a, b int, code uint8) {
	s.adj[a][s.deg[a]] = edge{uint8(b), code}
	s.adj[b][s.deg[b]] = edge{uint8(a), code}
	s.deg[a]++
	s.deg[b]++
	if code == 2 {
		s.twos[a]++
		s.twos[b]++
	}
}

func (s *search) unjoin(a, b int) {
	s.deg[a]--
	s.deg[b]--
	if s.adj[a][s.deg[a]].code == 2 {
		s.twos[a]--
		s.twos[b]--
	}
}

// visit writes row i in every possible way and goes on from each. It returns false to stop all.
func (s *search) visit(i int) bool {
	if i == s.plan.units {
		return s.finish()
	}
	return s.closures(i, i+1, s.met, 0, 54)
}

// closures chooses the bond from unit i to unit j and to those behind it, up to end; row holds the
// tokens chosen so far and shift the place of the next.
func (s *search) closures(i, j, end int, row uint64, shift int) bool {
	cells := &s.cell[i]
	for {
		if s.free[i] == 0 && s.need[i] == 0 {
			for ; j < end; j++ {
				s.code[i][j] = 0
			}
			return s.written(i, row, end)
		}
		if j == end {
			return s.children(i, end, row, shift, 255)
		}
		// Units of one cell that come later must not be bonded more than the one before.
		if s.free[j] == 0 && s.need[j] == 0 || j > i+1 && cells[j] == cells[j-1] && s.code[i][j-1] == 0 {
			s.code[i][j] = 0
			j++
			continue
		}
		break
	}
	limit := uint8(7)
	if j > i+1 && cells[j] == cells[j-1] {
		limit = s.code[i][j-1]
	}
	from := int(cells[j])
	if from == i {
		from = i + 1
	}
	base := uint64(1<<8 | (31-from)<<3)
	if s.need[i] != 0 && s.need[j] != 0 {
		for code := limit; code >= inner; code-- {
			u, ok := s.bindInner(i, j, code)
			if !ok {
				continue
			}
			s.code[i][j] = code
			more := s.closures(i, j+1, end, row|(base|uint64(code))<<shift, shift-9)
			s.unbindInner(u)
			if !more {
				return false
			}
		}
	}
	if s.excess > 0 && s.rings < s.plan.maxRings {
		order := min(s.free[i], s.free[j], limit, 3, uint8(min(s.excess, 3)))
		for ; order > 0; order-- {
			if !s.mayBond(i, j, order) {
				continue
			}
			s.bind(i, j, order)
			more := s.closures(i, j+1, end, row|(base|uint64(order))<<shift, shift-9)
			s.unbind(i, j, order)
			if !more {
				return false
			}
		}
	}
	s.code[i][j] = 0
	return s.closures(i, j+1, end, row, shift)
}

// bind closes a ring between units met before, unbind opens it again.
func (s *search) bind(i, j int, order uint8) {
	s.code[i][j] = order
	s.free[i] -= order
	s.free[j] -= order
	s.excess -= int(order)
	s.rings++
	s.join(i, j, order)
}

func (s *search) unbind(i, j int, order uint8) {
	s.unjoin(i, j)
	s.rings--
	s.excess += int(order)
	s.free[i] += order
	s.free[j] += order
}

// mayBond tells whether units a and b may be joined by a bond of this order.
func (s *search) mayBond(a, b int, order uint8) bool {
	if !s.plan.allow[s.kind[a]][s.kind[b]].has(order) {
		return false
	}
	return order != 2 || !s.plan.noCumulated || s.twos[a] == 0 && s.twos[b] == 0
}

// children chooses the units met for the first time from unit i, in falling order of token; last is
// the token before. Inner bonds come first: their tokens are larger.
func (s *search) children(i, end int, row uint64, shift int, last int) bool {
	if s.free[i] == 0 && s.need[i] == 0 {
		return s.written(i, row, end)
	}
	if s.met == s.plan.units {
		return true
	}
	if s.need[i] != 0 {
		return s.innerChildren(i, end, row, shift, last)
	}
	p := s.plan
	for order := min(s.free[i], 3, uint8(min(s.excess+1, 3))); order > 0; order-- {
		for k := p.top; k > 0; k-- {
			token := int(order)<<5 | int(k)
			if token > last || !s.mayMeet(i, k, order) {
				continue
			}
			s.free[i] -= order
			s.excess -= int(order) - 1
			u := s.meet(k, order)
			s.join(i, u, order)
			if p.kinds[k].block >= 0 {
				s.open(u)
			}
			more := s.children(i, end, row|uint64(token)<<shift, shift-9, token)
			if p.kinds[k].block >= 0 {
				s.shut(u)
			}
			s.unjoin(i, u)
			s.unmeet()
			s.excess += int(order) - 1
			s.free[i] += order
			if !more {
				return false
			}
		}
	}
	return true
}

// mayMeet tells whether a unit of kind k may be met over a bond of this order from unit i.
func (s *search) mayMeet(i int, k, order uint8) bool {
	p := s.plan
	kd := &p.kinds[k]
	return s.left[k] > 0 && kd.free >= order && p.allow[s.kind[i]][k].has(order) &&
		(order != 2 || !p.noCumulated || s.twos[i]+kd.twos == 0) && (kd.block < 0 || s.mayOpen(k))
}

// innerChildren chooses the next unit met over a bond inside a block.
func (s *search) innerChildren(i, end int, row uint64, shift int, last int) bool {
	for _, e := range s.plan.kinds[s.kind[i]].inner {
		token := int(e.code)<<5 | int(e.kind)
		if token > last || s.left[e.kind] == 0 {
			continue
		}
		u, ok := s.meetInner(i, e)
		if !ok {
			continue
		}
		more := s.children(i, end, row|uint64(token)<<shift, shift-9, token)
		s.unmeetInner(u)
		if !more {
			return false
		}
	}
	return true
}

// written closes row i: it tests whether the rest can still be filled and whether the prefix may
// belong to a largest code, and goes on.
func (s *search) written(i int, row uint64, end int) bool {
	if !s.fillable(i) {
		return true
	}
	s.row[i] = row
	s.refine(i, end)
	if !s.largest(i + 1) {
		return true
	}
	if s.plan.local && !s.sound(i, end) {
		return true
	}
	switch s.out.node(s, i+1) {
	case skip:
		return true
	case stop:
		return false
	}
	return s.visit(i + 1)
}

// fillable is a cheap necessary condition for the rest to be completed after row i.
func (s *search) fillable(i int) bool {
	open, most, inside := 0, 0, false
	for j := i + 1; j < s.met; j++ {
		f := int(s.free[j])
		open += f
		most = max(most, f)
		inside = inside || s.need[j] != 0
	}
	if s.met < s.plan.units {
		return open > 0 || inside
	}
	if open == 0 {
		return true
	}
	return open&1 == 0 && 2*most <= open && s.rings < s.plan.maxRings
}

// refine writes the cells that stand after row i: units stay together that were together before
// and are bonded alike to unit i.
func (s *search) refine(i, end int) {
	s.metAt[i+1] = uint8(s.met)
	old, next := &s.cell[i], &s.cell[i+1]
	for j := i + 1; j < end; j++ {
		if j > i+1 && old[j] == old[j-1] && s.code[i][j] == s.code[i][j-1] {
			next[j] = next[j-1]
		} else {
			next[j] = uint8(j)
		}
	}
	var before int
	for j := end; j < s.met; j++ {
		token := int(s.adj[j][0].code)<<5 | int(s.kind[j])
		if j > end && token == before {
			next[j] = next[j-1]
		} else {
			next[j] = uint8(j)
		}
		before = token
	}
}

// finish is called with every row written.
func (s *search) finish() bool {
	if s.rings < s.plan.minRings {
		return true
	}
	return s.out.leaf(s)
}
