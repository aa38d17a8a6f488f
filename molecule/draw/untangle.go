package draw

import (
	"math"
	"slices"
)

// near is the distance below which two atoms that are not bonded crowd each other.
const near = 0.8

// untangle turns and bends branches about bonds outside rings until no atoms crowd and no bonds cross, or
// nothing helps any more. The number of rounds is bounded by the size.
func (l *layout) untangle(atoms []int32) {
	n := len(atoms)
	if n < 5 {
		return
	}
	l.bonds = l.bonds[:0]
	for _, a := range atoms {
		for _, nb := range l.v.neighbors(a) {
			if nb.Atom > a {
				l.bonds = append(l.bonds, line{a, nb.Atom})
			}
		}
	}
	rounds := min(25, 2+4_000_000/(n*n))
	for range rounds {
		a, b, ok := l.worstPair(atoms)
		if !ok {
			return
		}
		if !l.mend(atoms, a, b) {
			break
		}
	}
	l.shorten(atoms)
}

// shorten draws ends on rings that still stand too close to something shorter, and swings them to where there is
// room: angular methyl groups in the bay of fused rings.
func (l *layout) shorten(atoms []int32) {
	for _, t := range atoms {
		nbs := l.v.neighbors(t)
		if len(nbs) != 1 || l.member[nbs[0].Atom] < 0 {
			continue
		}
		host := nbs[0].Atom
		most := l.room(atoms, t, host)
		if most >= 0.55 {
			continue
		}
		best := l.at[t]
		spoke := best.sub(l.at[host]).unit()
		for _, length := range [...]float64{0.8, 0.65} {
			for _, swing := range [...]float64{0, 15, -15, 30, -30, 45, -45} {
				l.at[t] = l.at[host].add(spoke.turn(swing * math.Pi / 180).scale(length))
				if room := l.room(atoms, t, host); room > most+0.02 {
					best, most = l.at[t], room
				}
			}
		}
		l.at[t] = best
	}
}

// room is the distance of an end to the nearest other atom, or twice that to the nearest bond.
func (l *layout) room(atoms []int32, t, host int32) float64 {
	p := l.at[t]
	least := 1.0
	for _, a := range atoms {
		if a != t && a != host {
			least = min(least, p.sub(l.at[a]).length())
		}
	}
	for _, b := range l.bonds {
		if b.a != t && b.b != t && b.a != host && b.b != host {
			least = min(least, 2*math.Sqrt(toLine(p, l.at[b.a], l.at[b.b])))
		}
	}
	for _, a := range atoms { // and what its own bond runs over
		if a != t && a != host {
			least = min(least, 2*math.Sqrt(toLine(l.at[a], p, l.at[host])))
		}
	}
	return least
}

// worstPair finds two atoms to be parted: the closest pair that crowds, or ends of bonds that cross.
func (l *layout) worstPair(atoms []int32) (x, y int32, ok bool) {
	least := near * near
	slices.SortFunc(atoms, func(a, b int32) int { // by place, so that only neighbours are compared
		switch {
		case l.at[a].X < l.at[b].X:
			return -1
		case l.at[a].X > l.at[b].X:
			return 1
		}
		return int(a - b)
	})
	for i, a := range atoms {
		p := l.at[a]
		for _, b := range atoms[i+1:] {
			q := l.at[b]
			if q.X-p.X >= near {
				break
			}
			if d := p.sub(q).square(); d < least-1e-9 && !l.sameFrame(a, b) && l.v.joined(a, b) < 0 {
				least, x, y, ok = d, a, b, true
			}
		}
	}
	if ok {
		return x, y, true
	}
	for i, u := range l.bonds {
		p, q := l.at[u.a], l.at[u.b]
		mid := p.middle(q)
		for _, w := range l.bonds[:i] {
			r, s := l.at[w.a], l.at[w.b]
			if mid.sub(r.middle(s)).square() > 1.1 || u.a == w.a || u.a == w.b || u.b == w.a || u.b == w.b {
				continue
			}
			if crosses(p, q, r, s) && !(l.sameFrame(u.a, u.b) && l.sameFrame(u.a, w.a) && l.sameFrame(u.a, w.b)) {
				return u.a, w.a, true
			}
		}
	}
	return 0, 0, false
}

// sameFrame says that two atoms belong to one ring system, whose places are not to be changed.
func (l *layout) sameFrame(a, b int32) bool {
	if l.member[a] < 0 || l.member[b] < 0 {
		return false
	}
	return l.member[a] == l.member[b]
}

// mend tries the moves of the bonds between x and y and makes the one that helps most.
func (l *layout) mend(atoms []int32, x, y int32) bool {
	way := l.between(x, y)
	l.inSide = resize(l.inSide, l.v.n)
	best, bestGain := move{}, 1e-6
	for i := 0; i+1 < len(way); i++ {
		a, b := way[i], way[i+1]
		bond := l.v.joined(a, b)
		spiro := i > 0 && l.spiro(way[i-1], a, b)
		if bond < 0 || l.v.m.Bond(int(bond)).Ring && !spiro {
			continue
		}
		side := l.behind(b, a)
		hinge, far := a, b
		if 2*len(side) > len(atoms) && !spiro {
			side = l.behind(a, b)
			hinge, far = b, a
		}
		for _, s := range side {
			l.inSide[s] = true
		}
		before := l.strain(atoms, side)
		l.saved = l.saved[:0]
		for _, s := range side {
			l.saved = append(l.saved, l.at[s])
		}
		for kind := range moveKinds {
			m := move{hinge, far, kind}
			if spiro && (kind == 0 || kind%2 == 0 || math.Abs(swings[(kind-1)/2]) > 15) { // the ring swings a little as a whole
				continue
			}
			if kind == 0 && l.v.m.Bond(int(bond)).Order == 2 && l.fixed(bond) || kind != 0 && !l.bends(m) {
				continue
			}
			l.apply(m, side)
			gain := before - l.strain(atoms, side) - moveCost[kind]
			if gain > bestGain {
				best, bestGain = m, gain
			}
			for k, s := range side {
				l.at[s] = l.saved[k]
			}
		}
		for _, s := range side {
			l.inSide[s] = false
		}
	}
	if best.hinge == best.far {
		return false
	}
	l.apply(best, l.behind(best.far, best.hinge))
	return true
}

// spiro says that x joins two ring systems and that the way from before to after leads from one into the other.
func (l *layout) spiro(before, x, after int32) bool {
	if l.member[before] < 0 || l.member[after] < 0 || l.member[x] < 0 {
		return false
	}
	joins := 0
	for i := range l.systems {
		s := &l.systems[i]
		if !slices.Contains(s.atoms, x) {
			continue
		}
		p, q := slices.Contains(s.atoms, before), slices.Contains(s.atoms, after)
		if p && q {
			return false
		}
		if p || q {
			joins++
		}
	}
	return joins == 2
}

// move is a change to everything behind far, seen from hinge: kind 0 turns it over, the others swing it about
// hinge or about far by an angle.
type move struct {
	hinge, far int32
	kind       int
}

// swings are the angles of the moves after the first: a third of them about the hinge by degrees.
var swings = [...]float64{30, -30, 15, -15, 60, -60, 45, -45}

const moveKinds = 1 + 2*len(swings)

// moveCost keeps angles as they are where turning over helps as well.
var moveCost = func() (cost [moveKinds]float64) {
	for i, s := range swings {
		cost[1+2*i], cost[2+2*i] = 0.1+math.Abs(s)/150, 0.1+math.Abs(s)/150
	}
	return cost
}()

// bends says that a bend is allowed there: not at a straight atom, and about far only where something follows.
func (l *layout) bends(m move) bool {
	if (m.kind-1)%2 == 0 {
		return !l.linear(m.hinge)
	}
	return l.v.degree(m.far) > 1 && !l.linear(m.far)
}

// fixed says that a double bond has a marked geometry.
func (l *layout) fixed(bond int32) bool {
	for _, d := range l.marked {
		if d.bond == bond {
			return true
		}
	}
	return false
}

func (l *layout) apply(m move, side []int32) {
	pivot := l.at[m.hinge]
	if m.kind == 0 {
		u := l.at[m.far].sub(pivot).unit()
		for _, s := range side {
			l.at[s] = l.at[s].mirrored(pivot, u)
		}
		return
	}
	turn := toward(swings[(m.kind-1)/2] * math.Pi / 180)
	if (m.kind-1)%2 == 1 {
		pivot = l.at[m.far]
	}
	for _, s := range side {
		l.at[s] = pivot.add(l.at[s].sub(pivot).times(turn))
	}
}

// strain sums what is wrong between the atoms of side (marked in inSide) and the others, angles at the bond
// included.
func (l *layout) strain(atoms, side []int32) float64 {
	total := 0.0
	lo, hi := l.bounds(side)
	lo, hi = Point{lo.X - 1, lo.Y - 1}, Point{hi.X + 1, hi.Y + 1}
	others := l.path[:0]
	for _, a := range atoms {
		if p := l.at[a]; !l.inSide[a] && p.X > lo.X && p.X < hi.X && p.Y > lo.Y && p.Y < hi.Y {
			others = append(others, a)
		}
	}
	l.path = others
	for _, s := range side {
		p := l.at[s]
		for _, a := range others {
			q := l.at[a]
			d := p.sub(q).square()
			if d < near*near && l.v.joined(a, s) < 0 {
				total += 1.2 - d/(near*near)
				if d < 0.52*0.52 {
					total += 2
				}
			}
		}
	}
	return total + l.crossings(lo, hi)
}

// crossings counts bonds of one side that cross those of the other, inside a box.
func (l *layout) crossings(lo, hi Point) (total float64) {
	mine := l.lines[:0]
	for _, u := range l.bonds {
		if l.inSide[u.a] && l.inSide[u.b] {
			mine = append(mine, u)
		}
	}
	l.lines = mine
	for _, w := range l.bonds {
		if l.inSide[w.a] && l.inSide[w.b] {
			continue
		}
		r, s := l.at[w.a], l.at[w.b]
		mid := r.middle(s)
		if mid.X < lo.X || mid.X > hi.X || mid.Y < lo.Y || mid.Y > hi.Y {
			continue
		}
		for _, u := range mine {
			p, q := l.at[u.a], l.at[u.b]
			if mid.sub(p.middle(q)).square() < 1.1 && u.a != w.a && u.a != w.b && u.b != w.a && u.b != w.b && crosses(p, q, r, s) {
				total += 1.5
			}
		}
	}
	return total
}

// between is the way from x to y over the fewest bonds.
func (l *layout) between(x, y int32) []int32 {
	from := resize(l.index, l.v.n)
	l.index = from
	queue := append(l.rest[:0], y)
	from[y] = -1
	seen := l.flags(l.v.n)
	seen[y] = true
	for i := 0; i < len(queue) && !seen[x]; i++ {
		for _, nb := range l.v.neighbors(queue[i]) {
			if !seen[nb.Atom] {
				seen[nb.Atom] = true
				from[nb.Atom] = queue[i]
				queue = append(queue, nb.Atom)
			}
		}
	}
	l.rest = queue
	way := l.framed[:0]
	for a := x; a >= 0; a = from[a] {
		way = append(way, a)
	}
	l.framed = way
	return way
}
