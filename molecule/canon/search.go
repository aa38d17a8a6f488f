package canon

import "slices"

// leaf is a discrete labelling met in the search with the trace of the path to it.
type leaf struct {
	order []int32  // place -> atom
	cert  []uint32 // bonds and stereo signs in terms of places
	path  []int32  // atoms individualised
	trace []uint64 // trace after each level, from the root
	set   bool
}

// maxStored bounds the automorphisms kept for pruning off the first path.
const maxStored = 64

// search walks the tree of individualisations of one connected graph.
type search struct {
	g      *Graph
	r      refiner
	level  []partition // partition per depth
	trace  []uint64    // trace per depth on the current path
	path   []int32     // atoms individualised on the current path
	cands  [][]int32   // candidates per depth
	first  leaf
	best   leaf
	now    leaf
	theta  []int32 // union-find over the automorphisms found
	twin   []int32 // atom -> lowest of its twins (end atoms on one neighbour), -1 alone
	autos  [][]int32
	fixing []int32 // union-find of the automorphisms that fix the current path
	seen   []uint64
	leaves int // leaves met, for tests of the pruning
}

// run labels g; the result is s.best with s.theta.
func (s *search) run(g *Graph) {
	n := len(g.Colours)
	s.g, s.r.g, s.r.trace = g, g, 0
	s.path, s.trace = s.path[:0], s.trace[:0]
	s.autos = s.autos[:0]
	s.leaves = 0
	s.first.set, s.best.set = false, false
	s.theta = resized(s.theta, n)
	for i := range s.theta {
		s.theta[i] = int32(i)
	}
	s.findTwins()
	s.grow(0)
	s.r.start(&s.level[0])
	s.r.refine(&s.level[0])
	s.trace = append(s.trace, s.r.trace)
	s.explore(0)
}

func (s *search) grow(depth int) {
	for len(s.level) <= depth {
		s.level = append(s.level, partition{})
		s.cands = append(s.cands, nil)
	}
}

// findTwins groups end atoms of one colour on one neighbour over bonds of one colour: exchanging
// them is an automorphism (marks with such ligands are void and dropped before).
func (s *search) findTwins() {
	g := s.g
	s.twin = resized(s.twin, len(g.Colours))
	for i := range s.twin {
		s.twin[i] = -1
	}
	for a := range g.Colours {
		nbs := g.Neighbors[g.First[a]:g.First[a+1]]
		if len(nbs) < 2 {
			continue
		}
		for i, x := range nbs {
			if g.First[x.Atom+1]-g.First[x.Atom] != 1 || s.twin[x.Atom] >= 0 {
				continue
			}
			low := x.Atom
			for pass := 0; pass < 2; pass++ {
				for _, y := range nbs[i+1:] {
					if g.First[y.Atom+1]-g.First[y.Atom] != 1 || g.Colours[x.Atom] != g.Colours[y.Atom] || g.BondColours[x.Bond] != g.BondColours[y.Bond] {
						continue
					}
					if pass == 0 {
						low = min(low, y.Atom)
					} else {
						s.twin[x.Atom], s.twin[y.Atom] = low, low
						s.union(s.theta, x.Atom, y.Atom)
					}
				}
			}
		}
	}
}

// target returns the start of the first cell that is neither a single atom nor one set of twins,
// or -1.
func (s *search) target(p *partition) int32 {
	if p.cells == len(p.elems) {
		return -1
	}
	for c := int32(0); c < int32(len(p.elems)); c += p.size[c] {
		if p.size[c] == 1 {
			continue
		}
		t := s.twin[p.elems[c]]
		if t < 0 {
			return c
		}
		for _, a := range p.elems[c : c+p.size[c]] {
			if s.twin[a] != t {
				return c
			}
		}
	}
	return -1
}

// explore handles the node at depth (its partition is refined, its trace noted) and returns the
// depth to go back to: depth itself, or less after an automorphism was found.
func (s *search) explore(depth int) int {
	p := &s.level[depth]
	c := s.target(p)
	if c < 0 {
		return s.leaf(depth)
	}
	s.grow(depth + 1)
	s.cands[depth] = append(s.cands[depth][:0], s.level[depth].elems[c:c+s.level[depth].size[c]]...)
	slices.Sort(s.cands[depth])
	for i := range s.cands[depth] {
		v := s.cands[depth][i]
		if i > 0 && s.skip(depth, i) {
			continue
		}
		s.level[depth+1].copyFrom(&s.level[depth])
		s.r.trace = s.trace[depth]
		clear(s.r.dirty)
		s.r.individualise(&s.level[depth+1], v)
		s.r.refine(&s.level[depth+1])
		s.trace = append(s.trace[:depth+1], s.r.trace)
		s.path = append(s.path[:depth], v)
		if s.prune(depth + 1) {
			continue
		}
		if back := s.explore(depth + 1); back < depth {
			return back
		}
	}
	return depth
}

// skip says that candidate i at depth is equivalent to an earlier one.
func (s *search) skip(depth, i int) bool {
	cands := s.cands[depth]
	v := cands[i]
	classes := s.theta
	if !s.onFirstPath(depth) {
		classes = s.stabiliser(depth)
	}
	root := s.find(classes, v)
	for _, u := range cands[:i] {
		if s.find(classes, u) == root || (s.twin[v] >= 0 && s.twin[u] == s.twin[v]) {
			return true
		}
	}
	return false
}

// onFirstPath says that the node at depth lies on the path to the first leaf: then every
// automorphism found so far fixes the atoms individualised above it.
func (s *search) onFirstPath(depth int) bool {
	return len(s.first.path) >= depth && slices.Equal(s.first.path[:depth], s.path[:depth])
}

// stabiliser joins the orbits of the stored automorphisms that fix the path down to depth.
func (s *search) stabiliser(depth int) []int32 {
	s.fixing = resized(s.fixing, len(s.theta))
	for i := range s.fixing {
		s.fixing[i] = int32(i)
	}
next:
	for _, auto := range s.autos {
		for _, a := range s.path[:depth] {
			if auto[a] != a {
				continue next
			}
		}
		for a, b := range auto {
			s.union(s.fixing, int32(a), b)
		}
	}
	return s.fixing
}

// prune says that nothing below the node at depth can matter: its trace is worse than the best
// leaf's and differs from the first leaf's (whose equivalents give the automorphisms).
func (s *search) prune(depth int) bool {
	if !s.best.set {
		return false
	}
	return s.compare(&s.best, depth) > 0 && s.compare(&s.first, depth) != 0
}

// compare compares the trace of the current path down to depth with that of l.
func (s *search) compare(l *leaf, depth int) int {
	return slices.Compare(s.trace[:depth+1], l.trace[:min(depth+1, len(l.trace))])
}

// leaf compares a discrete labelling with the first and the best and returns the depth to go on at.
func (s *search) leaf(depth int) int {
	s.leaves++
	s.now.path = append(s.now.path[:0], s.path[:depth]...)
	s.now.trace = append(s.now.trace[:0], s.trace[:depth+1]...)
	s.now.order = append(s.now.order[:0], s.level[depth].elems...)
	s.certificate()
	if !s.best.set {
		s.now.set = true
		s.best.copyFrom(&s.now)
		s.first.copyFrom(&s.now)
		return depth
	}
	if slices.Equal(s.now.trace, s.first.trace) && slices.Equal(s.now.cert, s.first.cert) {
		return s.automorphism(&s.first)
	}
	order := slices.Compare(s.now.trace, s.best.trace)
	if order == 0 {
		order = slices.Compare(s.now.cert, s.best.cert)
	}
	switch {
	case order == 0:
		return s.automorphism(&s.best)
	case order < 0:
		s.best.copyFrom(&s.now)
		s.best.set = true
	}
	return depth
}

// automorphism records the mapping from leaf l to the current leaf and returns the depth where
// their paths part: what hangs below there is equivalent to what was seen.
func (s *search) automorphism(l *leaf) int {
	var auto []int32
	if k := len(s.autos); k < maxStored {
		if k < cap(s.autos) {
			auto = s.autos[:k+1][k] // of an earlier graph
		}
		auto = resized(auto, len(l.order))
	}
	for i, a := range l.order {
		b := s.now.order[i]
		if auto != nil {
			auto[a] = b
		}
		s.union(s.theta, a, b)
	}
	if auto != nil {
		s.autos = append(s.autos, auto)
	}
	depth := 0
	for depth < len(l.path) && depth < len(s.now.path) && l.path[depth] == s.now.path[depth] {
		depth++
	}
	return depth
}

// certificate writes the bonds (later place, earlier place, colour) and the stereo signs.
func (s *search) certificate() {
	g, l := s.g, &s.now
	place := s.level[len(l.path)].place
	cert := l.cert[:0]
	for i, a := range l.order {
		at := len(cert)
		for _, nb := range g.Neighbors[g.First[a]:g.First[a+1]] {
			j := place[nb.Atom]
			if j > int32(i) {
				continue
			}
			x := uint32(j)<<8 | uint32(g.BondColours[nb.Bond])
			cert = append(cert, x)
			for k := len(cert) - 1; k > at && cert[k-1] > x; k-- {
				cert[k], cert[k-1] = cert[k-1], x
			}
		}
		cert = append(cert, ^uint32(0))
	}
	if len(g.Centers)+len(g.Axes) > 0 {
		s.seen = s.seen[:0]
		for k := range g.Centers {
			c := &g.Centers[k]
			s.seen = append(s.seen, uint64(place[c.Atom])<<16|c.sign(place))
		}
		for k := range g.Axes {
			x := &g.Axes[k]
			i, j := place[x.A], place[x.B]
			s.seen = append(s.seen, 1<<63|uint64(min(i, j))<<36|uint64(max(i, j))<<16|x.sign(place))
		}
		slices.Sort(s.seen)
		for _, x := range s.seen {
			cert = append(cert, uint32(x>>32), uint32(x))
		}
	}
	l.cert = cert
}

func (l *leaf) copyFrom(m *leaf) {
	l.order = append(l.order[:0], m.order...)
	l.cert = append(l.cert[:0], m.cert...)
	l.path = append(l.path[:0], m.path...)
	l.trace = append(l.trace[:0], m.trace...)
	l.set = m.set
}

// colours lists the atom colours in canonical order, in memory of w.
func (l *leaf) colours(g *Graph, w *Worker) []uint64 {
	w.cols = w.cols[:0]
	for _, a := range l.order {
		w.cols = append(w.cols, g.Colours[a])
	}
	return w.cols
}

func (s *search) find(classes []int32, a int32) int32 {
	for classes[a] != a {
		classes[a] = classes[classes[a]]
		a = classes[a]
	}
	return a
}

// union joins the classes of a and b under the lower of the two names.
func (s *search) union(classes []int32, a, b int32) {
	a, b = s.find(classes, a), s.find(classes, b)
	if a < b {
		classes[b] = a
	} else {
		classes[a] = b
	}
}

// orbits writes the lowest equivalent atom of each atom.
func (s *search) orbits(out []int32) {
	for a := range out {
		out[a] = s.find(s.theta, int32(a))
	}
}
