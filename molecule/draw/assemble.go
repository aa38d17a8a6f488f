package draw

import (
	"cmp"
	"math"
	"slices"
)

// branch is something to be hung on an atom: a neighbour outside the rings placed, or a ring system.
type branch struct {
	atom   int32 // -1 for a system
	system int32
	weight int32 // the heaviest goes on with the chain
}

// assemble places the component of start, outwards.
func (l *layout) assemble(start int32) {
	l.at[start], l.placed[start] = Point{}, true
	l.side[start] = 1
	queue := l.rest[:0]
	queue = append(queue, start)
	for i := 0; i < len(queue); i++ {
		queue = l.expand(queue[i], queue)
	}
	l.rest = queue
}

// expand places what hangs on a and adds it to the queue.
func (l *layout) expand(a int32, queue []int32) []int32 {
	l.angles = l.angles[:0]
	l.todo = l.todo[:0]
	ringBonds := 0
	for _, nb := range l.v.neighbors(a) {
		switch {
		case l.placed[nb.Atom]:
			l.angles = append(l.angles, angleOf(l.at[nb.Atom].sub(l.at[a])))
			if l.v.m.Bond(int(nb.Bond)).Ring {
				ringBonds++
			}
		case !l.v.m.Bond(int(nb.Bond)).Ring:
			l.todo = append(l.todo, branch{nb.Atom, -1, l.weight(nb.Atom, nb.Bond)})
		}
	}
	if l.member[a] >= 0 {
		for i := range l.systems {
			if s := &l.systems[i]; !s.placed && slices.Contains(s.atoms, a) {
				l.todo = append(l.todo, branch{-1, int32(i), 1 << 20})
			}
		}
	}
	if len(l.todo) == 0 {
		return queue
	}
	slices.SortStableFunc(l.todo, func(x, y branch) int { return int(y.weight) - int(x.weight) })
	if l.todo[0].system >= 0 { // rings first: what else hangs on a looks for room beside them
		queue = l.hangSystem(a, int(l.todo[0].system), queue)
		return l.expand(a, queue)
	}
	if len(l.angles) == 1 && ringBonds == 0 {
		return l.expandChain(a, queue)
	}
	return l.expandFree(a, queue)
}

// weight ranks the branches at one atom: long ways first, single bonds before double ones.
func (l *layout) weight(x, bond int32) int32 {
	w := 8 * (l.height[x] + 1)
	if l.member[x] >= 0 {
		w += 4
	}
	if l.v.m.Bond(int(bond)).Order == 1 {
		w += 2
	}
	if l.v.atom(x).Element != 6 {
		w++
	}
	return w
}

// expandChain hangs branches on an atom reached by one bond: the heaviest goes on in zig-zag.
func (l *layout) expandChain(a int32, queue []int32) []int32 {
	back := l.angles[0]
	parent := l.parentPlaced(a)
	const third = 2 * math.Pi / 3
	todo := l.todo
	if l.linear(a) || l.cross(a) {
		return l.expandCross(a, back, queue)
	}
	side := -float64(l.side[parent])
	if branch := l.side[a] != 0; branch || side == 0 {
		side = l.roomier(a, back, third)
	} else if l.run[a] = l.run[parent] + 1; l.turns(a) {
		side = -side
	}
	queue = l.hang(a, todo[0].atom, back+side*third, int8(side), 0, queue)
	switch len(todo) {
	case 2:
		queue = l.hang(a, todo[1].atom, back-side*third, int8(side), 1, queue)
	case 3: // both on the outer side
		queue = l.hang(a, todo[1].atom, back-side*third*0.68, int8(side), 1, queue)
		queue = l.hang(a, todo[2].atom, back-side*third*1.34, int8(side), 1, queue)
	default:
		for i, t := range todo[1:] {
			queue = l.hang(a, t.atom, back-side*(2*math.Pi-third)*float64(i+1)/float64(len(todo)), int8(side), 1, queue)
		}
	}
	return queue
}

// rowLength is the number of atoms of a chain after which it turns back, so that a long one fits on a page; the last
// three of them make the turn. It is even: then one turn goes to the left and the next one to the right.
const rowLength = 24

// turns says that the chain goes round a corner at a instead of on in zig-zag. A turn begins only where three atoms
// without branches follow each other and enough of the chain is left; else it is put off by two atoms.
func (l *layout) turns(a int32) bool {
	k := l.run[a] % rowLength
	if k != rowLength-3 {
		return k > rowLength-3
	}
	if l.v.degree(a) == 2 && l.height[a] >= 12 && l.plainAhead(a, 2) {
		return true
	}
	l.run[a] -= 2
	return false
}

// plainAhead says that the next atoms after a in a chain yet to be placed have no branches.
func (l *layout) plainAhead(a int32, atoms int) bool {
	for before := l.parentPlaced(a); atoms > 0; atoms-- {
		for _, nb := range l.v.neighbors(a) {
			if nb.Atom != before {
				before, a = a, nb.Atom
				break
			}
		}
		if l.v.degree(a) != 2 || l.member[a] >= 0 || l.linear(a) {
			return false
		}
	}
	return true
}

// parentPlaced is the placed neighbour of a chain atom.
func (l *layout) parentPlaced(a int32) int32 {
	for _, nb := range l.v.neighbors(a) {
		if l.placed[nb.Atom] {
			return nb.Atom
		}
	}
	return a
}

// expandCross goes straight on, further branches to the sides at right angles.
func (l *layout) expandCross(a int32, back float64, queue []int32) []int32 {
	turn := int8(1)
	if p := l.parentPlaced(a); l.side[p] != 0 {
		turn = l.side[p]
	}
	todo := l.todo
	queue = l.hang(a, todo[0].atom, back+math.Pi, turn, 0, queue)
	for i, t := range todo[1:] {
		angle := back + math.Pi/2
		if i%2 == 1 {
			angle = back - math.Pi/2
		}
		if i >= 2 {
			angle = back + math.Pi/4 + float64(i-2)*math.Pi/2
		}
		queue = l.hang(a, t.atom, angle, turn, 1, queue)
	}
	return queue
}

// linear says that a is drawn straight: a triple bond or two double bonds and nothing else.
func (l *layout) linear(a int32) bool {
	if l.v.degree(a) != 2 {
		return false
	}
	doubles := 0
	for _, nb := range l.v.neighbors(a) {
		switch l.v.m.Bond(int(nb.Bond)).Order {
		case 3:
			return true
		case 2:
			doubles++
		}
	}
	return doubles == 2
}

// cross says that the four bonds of a are drawn as a cross: three ends (tert-butyl, trifluoromethyl), three rings
// (trityl, triphenylphosphonium), or two
// ends on an atom that is not carbon (sulfonyl, silyl, phosphoryl).
func (l *layout) cross(a int32) bool {
	if l.v.degree(a) != 4 {
		return l.v.degree(a) > 4
	}
	ends, rings := 0, 0
	for _, nb := range l.v.neighbors(a) {
		if l.v.degree(nb.Atom) == 1 {
			ends++
		}
		if l.member[nb.Atom] >= 0 {
			rings++
		}
	}
	return ends >= 3 || rings >= 3 && l.member[a] < 0 || ends == 2 && l.v.atom(a).Element != 6
}

// roomier is the side (1 or -1) on which an atom at that turn from back has more room.
func (l *layout) roomier(a int32, back, turn float64) float64 {
	p := l.at[a]
	if l.crowd(p.add(toward(back+turn))) > l.crowd(p.add(toward(back-turn)))+1e-9 {
		return -1
	}
	return 1
}

// crowd measures what has been placed near x.
func (l *layout) crowd(x Point) float64 {
	total := 0.0
	for _, a := range l.rest {
		d := x.sub(l.at[a]).square()
		total += 1 / (0.2 + d)
	}
	return total
}

// hang places x at an angle from a: kind 0 goes on with the chain, which turned to the side given at a; 1 is a
// branch. Until x is expanded itself, side keeps the kind for it.
func (l *layout) hang(a, x int32, angle float64, side int8, kind int, queue []int32) []int32 {
	l.at[x] = l.at[a].add(toward(angle))
	l.placed[x] = true
	if kind == 0 {
		l.side[a] = side
	}
	l.side[x] = int8(kind)
	l.rest = append(queue, x)
	return l.rest
}

// expandFree hangs branches into the widest gap at an atom with several bonds in place, or on a lone one.
func (l *layout) expandFree(a int32, queue []int32) []int32 {
	todo := l.todo
	if len(l.angles) == 0 {
		n := len(todo)
		start, step := -math.Pi/6, 2*math.Pi/float64(n)
		if n <= 2 {
			step = 2 * math.Pi / 3
			if l.linear(a) {
				step = math.Pi
			}
		}
		for i, t := range todo {
			queue = l.hang(a, t.atom, start+float64(i)*step, 1, i, queue)
			l.side[t.atom] = 0
		}
		l.side[a] = -1
		return queue
	}
	from, width := l.openGap(a)
	step := width / float64(len(todo)+1)
	if len(todo) == 2 && width > math.Pi { // two on a ring atom: a right angle or so between them
		step = min(step, math.Pi*0.46)
	}
	middle := from + width/2
	order := todo
	for i, t := range order {
		k := float64(i) - float64(len(order)-1)/2
		queue = l.hang(a, t.atom, middle+k*step, 1, 1, queue)
	}
	l.side[a] = 0
	return queue
}

// openGap is the widest gap between the bonds of a; one inside a ring counts only where there is no other.
func (l *layout) openGap(a int32) (from, width float64) {
	if len(l.angles) < 3 || l.member[a] < 0 {
		return widestGap(l.angles)
	}
	var around [12]spoke
	list := around[:0]
	for _, nb := range l.v.neighbors(a) {
		if l.placed[nb.Atom] {
			list = append(list, spoke{angleOf(l.at[nb.Atom].sub(l.at[a])), nb.Atom})
		}
	}
	return outerGap(list, l.v.rings, a)
}

// spoke is a bond seen from one atom: its direction and the atom across.
type spoke struct {
	angle float64
	atom  int32
}

// outerGap is widestGap of the bonds of a, where gaps that lie inside one of the rings count less than half.
func outerGap(list []spoke, rings [][]int32, a int32) (from, width float64) {
	slices.SortFunc(list, func(x, y spoke) int { return cmp.Compare(x.angle, y.angle) })
	most := 0.0
	for i, x := range list {
		y := list[(i+1)%len(list)]
		gap := y.angle - x.angle
		if i+1 == len(list) {
			gap += 2 * math.Pi
		}
		worth := gap
		if sideBySide(rings, a, x.atom, y.atom) {
			worth *= 0.45
		}
		if worth > most+1e-6 {
			from, width, most = x.angle, gap, worth
		}
	}
	return from, width
}

// sideBySide says that a ring runs through x, a and y.
func sideBySide(rings [][]int32, a, x, y int32) bool {
	for _, r := range rings {
		if i := slices.Index(r, a); i >= 0 {
			p, q := r[(i+len(r)-1)%len(r)], r[(i+1)%len(r)]
			if p == x && q == y || p == y && q == x {
				return true
			}
		}
	}
	return false
}

// widestGap returns the start and the width of the widest gap between directions; the earliest of equals.
func widestGap(angles []float64) (from, width float64) {
	slices.Sort(angles)
	for i, x := range angles {
		next := angles[0] + 2*math.Pi
		if i+1 < len(angles) {
			next = angles[i+1]
		}
		if next-x > width+1e-6 {
			from, width = x, next-x
		}
	}
	return from, width
}

// hangSystem places a ring system on its atom a, which stands already: its free side towards what is placed.
func (l *layout) hangSystem(a int32, system int, queue []int32) []int32 {
	s := &l.systems[system]
	s.placed = true
	origin := s.place(a)
	turn, squeeze := Point{1, 0}, 1.0
	if len(l.angles) > 0 {
		from, width := l.outerSide(s, a)
		out := toward(from + width/2)
		open, room := widestGap(l.angles)
		var free float64
		free, squeeze = l.share(a, 2*math.Pi-width, open, room) // the ring lies in the widest gap
		turn = toward(free + math.Pi).times(Point{out.X, -out.Y})
	}
	for i, x := range s.atoms {
		if x == a {
			continue
		}
		p := s.at[i].sub(origin).times(turn)
		if squeeze < 1 {
			axis := turn.times(l.outward(s, a))
			across := axis.left()
			p = axis.scale(1.15 * p.dot(axis)).add(across.scale(1.15 * squeeze * p.dot(across)))
		}
		l.at[x] = l.at[a].add(p)
		l.placed[x] = true
		queue = append(queue, x)
	}
	l.rest = queue
	return queue
}

// share is the direction of the next ring system at a, in a gap that it shares with the others still to come, and
// the factor by which it is squeezed where they do not fit in (three chelate rings on one metal). own is the
// angle that it takes at a.
func (l *layout) share(a int32, own, from, width float64) (direction, squeeze float64) {
	rings, taken := 0.0, 0.0
	for _, t := range l.todo {
		if t.system >= 0 {
			_, open := l.outerSide(&l.systems[t.system], a)
			rings++
			taken += 2*math.Pi - open
		}
	}
	const apart = 37 * math.Pi / 180 // keeps the squeezed rings half a bond apart
	squeeze = 1
	if most := (width - (rings+1)*apart) / rings; own > most && most > 0 && own < math.Pi {
		squeeze = math.Tan(most/2) / math.Tan(own/2)
		taken, own = most*rings, most
	}
	return from + (width-taken)/(rings+1) + own/2, squeeze
}

// outward is the direction at atom a of a system away from its rings.
func (l *layout) outward(s *ringSystem, a int32) Point {
	from, width := l.outerSide(s, a)
	return toward(from + width/2)
}

// outerSide is the widest gap between the bonds that atom a of a system has in its frame.
func (l *layout) outerSide(s *ringSystem, a int32) (from, width float64) {
	origin := s.place(a)
	var list [8]float64
	found := list[:0]
	for i, x := range s.atoms {
		if l.v.joined(a, x) >= 0 {
			found = append(found, angleOf(s.at[i].sub(origin)))
		}
	}
	return widestGap(found)
}
