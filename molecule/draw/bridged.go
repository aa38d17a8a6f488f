package draw

import (
	"math"
	"slices"
)

// layBridged lays a bridged system out: two rings with a common path first, as a wide ring with its least
// burdened bridge inside, then the others on them. Where that leaves overlaps, frames grown from other
// rings are evened out and the one with the fewest faults is taken.
func (l *layout) layBridged(s *ringSystem) {
	best := math.Inf(1)
	var keep []Point
	var order []int32
	try := func() bool {
		l.collect(s)
		worst, sum := l.faults(s)
		if worst >= 5 {
			l.even(s)
			worst, sum = l.faults(s)
		}
		if sum < best-1e-9 {
			best = sum
			keep, order = append(keep[:0], s.at...), append(order[:0], s.atoms...)
		}
		return worst < 0.5
	}
	if s.caged = l.cage(s); s.caged {
		l.collect(s)
		return
	}
	tries := 0
	const most = 6
	for i, r := range s.rings {
		for _, q := range s.rings[:i] {
			if common(r, q) > 2 && tries < most && l.startBridge(r, q) {
				tries++
				l.fuse(s)
				if try() {
					return
				}
			}
		}
	}
	for i := range s.rings {
		if tries++; tries > most {
			break
		}
		l.startRing(s.rings[len(s.rings)-1-i])
		l.fuse(s)
		if try() {
			return
		}
	}
	s.atoms, s.at = append(s.atoms[:0], order...), append(s.at[:0], keep...)
}

// startBridge clears the frame and places two rings that share a path of two bonds or more: three bridges
// between two bridgeheads. It reports false where the rings share something else.
func (l *layout) startBridge(r, q []int32) bool {
	ways, ok := l.threeBridges(r, q)
	if !ok {
		return false
	}
	// The bridge inside: few substituents, then short.
	inner := 0
	burden := func(w []int32) int {
		n := 0
		for _, a := range w[1 : len(w)-1] {
			n += 3 * (l.v.degree(a) - 2)
		}
		return 2*n + len(w)
	}
	for i := range ways {
		if burden(ways[i]) < burden(ways[inner]) {
			inner = i
		}
	}
	in := ways[inner]
	top, bottom := ways[(inner+1)%3], ways[(inner+2)%3]
	if len(top) > len(bottom) {
		top, bottom = bottom, top
	}
	l.clearFrame()
	l.placeBridges(top, in, bottom)
	return true
}

// threeBridges splits two rings into three ways from one bridgehead to the other, ends included.
func (l *layout) threeBridges(r, q []int32) (ways [3][]int32, ok bool) {
	n := len(r)
	start, changes := -1, 0
	for i := range r {
		now, next := slices.Contains(q, r[i]), slices.Contains(q, r[(i+1)%n])
		if now != next {
			changes++
			if now {
				start = i
			}
		}
	}
	if changes != 2 {
		return ways, false
	}
	own := []int32{r[start]}
	i := (start + 1) % n
	for ; !slices.Contains(q, r[i]); i = (i + 1) % n {
		own = append(own, r[i])
	}
	own = append(own, r[i])
	shared := []int32{r[start]}
	for j := (start + n - 1) % n; j != i; j = (j + n - 1) % n {
		shared = append(shared, r[j])
	}
	shared = append(shared, r[i])
	other, ok := rest(q, shared)
	if !ok || len(shared) < 3 {
		return ways, false
	}
	return [3][]int32{own, shared, other}, true
}

// rest is the way through ring q from the first to the last atom of shared that does not use its inner atoms.
func rest(q, shared []int32) ([]int32, bool) {
	n := len(q)
	start := slices.Index(q, shared[0])
	step := 1
	if q[(start+1)%n] == shared[1] {
		step = n - 1
	}
	end := shared[len(shared)-1]
	way := []int32{q[start]}
	for i := (start + step) % n; ; i = (i + step) % n {
		if slices.Contains(shared[1:len(shared)-1], q[i]) || len(way) > n {
			return nil, false
		}
		way = append(way, q[i])
		if q[i] == end {
			return way, true
		}
	}
}

// placeBridges draws top and bottom as one wide ring with the bridgeheads left and right, and the inner bridge
// across it. The ring is blown up a little where the inner bridge needs the room.
func (l *layout) placeBridges(top, in, bottom []int32) {
	nt, ni, nb := len(top)-2, len(in)-2, len(bottom)-2
	half := l.bridgeSpan(nt, ni, nb) / 2
	left, right := Point{-half, 0}, Point{half, 0}
	l.put(top[0], left)
	l.put(top[len(top)-1], right)
	putArc := func(way []int32, p, q Point, scale float64) {
		k := len(way) - 2
		l.bow = arc(p.scale(1/scale), q.scale(1/scale), k, l.bow[:0])
		for i, x := range l.bow {
			l.put(way[i+1], x.scale(scale))
		}
	}
	scale := 1.0
	if ni >= 2 || nt+nb < 3 {
		scale = 1.15
	}
	putArc(top, left, right, scale)
	slices.Reverse(bottom)
	putArc(bottom, right, left, scale)
	slices.Reverse(bottom)
	switch {
	case ni == 1:
		room := 0.3
		if nt < nb {
			room = -0.25
		}
		l.put(in[1], Point{0, room})
	case ni == 2:
		l.put(in[1], Point{-0.42, 0.3})
		l.put(in[2], Point{0.42, -0.3})
		if nt < nb {
			l.put(in[1], Point{-0.4, -0.3})
			l.put(in[2], Point{0.4, -0.3})
		}
	default:
		way, p, q := in, right, left
		slices.Reverse(way)
		l.bow = arc(p, q, ni, l.bow[:0])
		for i, x := range l.bow {
			l.put(way[i+1], Point{x.X, x.Y * 0.6})
		}
	}
}

// bridgeSpan is the distance of the bridgeheads: that of the wide regular ring, less where the inner bridge
// could not reach.
func (l *layout) bridgeSpan(nt, ni, nb int) float64 {
	n := float64(nt + nb + 2)
	radius := 0.5 / math.Sin(math.Pi/n)
	span := 2 * radius * math.Sin(math.Pi*float64(nt+1)/n)
	if ni >= 2 || nt+nb < 3 {
		span *= 1.15
	}
	return min(span, 1.15*float64(ni+1))
}

// even pulls the frame of s into shape in a bounded number of rounds: bonds of one, rings round, atoms apart.
func (l *layout) even(s *ringSystem) {
	n := len(s.atoms)
	want := resize(l.want, n*n) // 0 none, else the distance wished
	l.want = want
	index := resize(l.index, l.v.n)
	l.index = index
	for i, a := range s.atoms {
		index[a] = int32(i)
	}
	for _, r := range s.rings {
		k := len(r)
		radius := 0.5 / math.Sin(math.Pi/float64(k))
		for i := range r {
			for j := range i {
				a, b := index[r[i]], index[r[j]]
				d := 2 * radius * math.Sin(math.Pi*float64(i-j)/float64(k))
				if k > macro {
					d = 0
				}
				if x := want[int(a)*n+int(b)]; x == 0 || d < x {
					want[int(a)*n+int(b)], want[int(b)*n+int(a)] = d, d
				}
			}
		}
	}
	for i, a := range s.atoms {
		for _, nb := range l.v.neighbors(a) {
			if l.have[nb.Atom] && slices.Contains(s.atoms, nb.Atom) {
				want[i*n+int(index[nb.Atom])] = 1
			}
		}
	}
	rounds := max(20, min(80, 60000/(n*n)))
	for round := range rounds {
		rate := 0.5 - 0.3*float64(round)/float64(rounds)
		for i := range n {
			for j := range i {
				d := s.at[j].sub(s.at[i])
				if d.square() < 1e-8 {
					d = Point{0.01 * float64(1+i%3), 0.01 * float64(1+j%3)}
				}
				dist, w := d.length(), want[i*n+j]
				force := 0.0
				switch {
				case w == 1:
					force = dist - 1
				case w > 0:
					force = 0.15 * (dist - w)
				}
				if w != 1 && dist < 0.85 {
					force += 0.5 * (dist - 0.85)
				}
				if force != 0 {
					move := d.scale(rate * force / dist / 2)
					s.at[i], s.at[j] = s.at[i].add(move), s.at[j].sub(move)
				}
			}
		}
	}
	for i, a := range s.atoms {
		l.frame[a] = s.at[i]
	}
}

// cage places a system that is a known cage: four atoms joined in pairs by six single atoms (adamantane), or
// the eight corners of a cube. The places are projections of the body.
func (l *layout) cage(s *ringSystem) bool {
	var atoms, corners []int32
	for _, r := range s.rings {
		for _, a := range r {
			if !slices.Contains(atoms, a) {
				atoms = append(atoms, a)
				if l.ringDegree(a, nil) == 3 {
					corners = append(corners, a)
				}
			}
		}
	}
	switch {
	case len(atoms) == 10 && len(corners) == 4:
		return l.adamantane(atoms, corners)
	case len(atoms) == 8 && len(corners) == 8:
		return l.cube(atoms)
	}
	return false
}

// ringDegree counts the ring bonds of a, those inside a list if one is given.
func (l *layout) ringDegree(a int32, within []int32) int {
	n := 0
	for _, nb := range l.v.neighbors(a) {
		if l.v.m.Bond(int(nb.Bond)).Ring && (within == nil || slices.Contains(within, nb.Atom)) {
			n++
		}
	}
	return n
}

// adamantane places the four corners and the six atoms between them.
func (l *layout) adamantane(atoms, corners []int32) bool {
	between := func(x, y int32) int32 {
		for _, nb := range l.v.neighbors(x) {
			if l.v.joined(nb.Atom, y) >= 0 && slices.Contains(atoms, nb.Atom) {
				return nb.Atom
			}
		}
		return -1
	}
	// The body turned so that no atoms hide each other and one pair of bonds crosses.
	places := [4]Point{{0.62, 0.90}, {-0.72, 0.44}, {0.76, -0.79}, {-0.66, -0.55}}
	middles := [6]Point{{-0.10, 1.34}, {1.38, 0.11}, {-0.04, 0.35}, {0.04, -0.35}, {-1.38, -0.11}, {0.10, -1.34}}
	l.clearFrame()
	k := 0
	for i := range 4 {
		l.put(corners[i], places[i])
		for j := i + 1; j < 4; j++ {
			b := between(corners[i], corners[j])
			if b < 0 || l.have[b] {
				return false
			}
			l.put(b, middles[k])
			k++
		}
	}
	return true
}

// cube places a front and a back square.
func (l *layout) cube(atoms []int32) bool {
	front := []int32{atoms[0]}
	for len(front) < 4 { // a path around one face
		grown := false
		for _, r := range l.v.rings {
			if len(r) == 4 && slices.Contains(r, atoms[0]) {
				front, grown = append(front[:0], r...), true
				break
			}
		}
		if !grown {
			return false
		}
	}
	l.clearFrame()
	for i, p := range [4]Point{{0, 0}, {1, 0}, {1, 1}, {0, 1}} {
		l.put(front[i], p)
	}
	for i, a := range front {
		for _, nb := range l.v.neighbors(a) {
			if slices.Contains(atoms, nb.Atom) && !slices.Contains(front, nb.Atom) {
				if l.have[nb.Atom] {
					return false
				}
				l.put(nb.Atom, l.frame[front[i]].add(Point{0.6, 0.45}))
			}
		}
	}
	return len(l.framed) == 8
}
