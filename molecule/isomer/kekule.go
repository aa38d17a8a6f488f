package isomer

import "math/bits"

// The Kekulé forms of one aromatic compound are different codes. One of them stands for the
// compound: that whose code is the largest. Which bonds are aromatic is for package molecule to say;
// only the commonest case is settled here, a single six-membered ring of alternating bonds.

// plainKekule reports whether the code of s is the largest among those of its Kekulé forms; s has no
// blocks.
func (w *workspace) plainKekule(s *search) bool {
	if s.rings == 0 || !w.findPi(s) {
		return true
	}
	ring, several := w.alternating(s)
	switch {
	case len(ring) == 0:
		return true
	case len(ring) == 4 && !several && s.loneRing(int(ring[0])):
		return true // cyclobutadienes are not aromatic; their two forms are two compounds
	case !several && len(ring) == 6 && s.isolatedRing(ring):
		adj := s.adj
		flip(&adj, &s.deg, ring)
		j := judge{&s.kind, &s.deg, &adj, &s.row, s.plan.units, s.spare}
		return !j.beats(s.plan.root, s.met)
	}
	w.write(s)
	w.perceive(s)
	return w.largestForm(s, &s.kind, 0)
}

// beats reports whether some tour has a larger code than the rows that stand.
func (j *judge) beats(root uint8, units int) bool {
	for u := 0; u < units; u++ {
		if j.kind[u] == root {
			switch j.from(u) {
			case larger:
				return true
			case same:
				return false // the same code: a picture of the structure itself
			}
		}
	}
	return false
}

// findPi notes the partner of each unit that has exactly one double bond; it reports whether there
// are two double bonds, the least that resonance needs.
func (w *workspace) findPi(s *search) bool {
	n := 0
	for u := 0; u < s.met; u++ {
		w.pi[u] = -1
		if s.twos[u] != 1 {
			continue
		}
		n++
		for _, e := range s.adj[u][:s.deg[u]] {
			if e.code == 2 {
				w.pi[u] = int8(e.to)
			}
		}
	}
	return n >= 4
}

// alternation is the search for rings of alternating single and double bonds.
type alternation struct {
	path, ring [maxUnits]uint8
	length     int  // of the first ring found, 0 for none
	several    bool // there are others
}

// alternating looks for rings of alternating bonds; it returns one, nil if there is none, and
// whether there are others.
func (w *workspace) alternating(s *search) (ring []uint8, several bool) {
	alt := &w.alternation
	alt.length, alt.several = 0, false
	for u := uint8(0); int(u) < s.met && !alt.several; u++ {
		if w.pi[u] > int8(u) {
			v := uint8(w.pi[u])
			alt.path[0], alt.path[1] = u, v
			w.walk(s, v, 2, 1<<u|1<<v)
		}
	}
	return alt.ring[:alt.length], alt.several
}

// walk stands at u, reached over a double bond as the n-th unit of the path, and goes on over single
// bonds. Units below the first of the path are left out, so that each ring is met once.
func (w *workspace) walk(s *search, u uint8, n int, on uint32) {
	alt := &w.alternation
	start := alt.path[0]
	for _, e := range s.adj[u][:s.deg[u]] {
		switch {
		case e.code != 1 || alt.several:
		case e.to == start:
			alt.several = alt.length > 0
			alt.ring, alt.length = alt.path, n
		case w.pi[e.to] > int8(start) && e.to > start && on>>e.to&1 == 0:
			v := uint8(w.pi[e.to])
			alt.path[n], alt.path[n+1] = e.to, v
			w.walk(s, v, n+2, on|1<<e.to|1<<v)
		}
	}
}

// flip exchanges single and double bonds round a ring whose bonds 0-1, 2-3 ... are double.
func flip(adj *[maxUnits][maxDegree]edge, deg *[maxUnits]uint8, ring []uint8) {
	for x := range ring {
		a, b := ring[x], ring[(x+1)%len(ring)]
		setCode(adj, deg, a, b, uint8(1+x%2))
	}
}

func setCode(adj *[maxUnits][maxDegree]edge, deg *[maxUnits]uint8, a, b, code uint8) {
	for _, x := range [2][2]uint8{{a, b}, {b, a}} {
		for i := range adj[x[0]][:deg[x[0]]] {
			if adj[x[0]][i].to == x[1] {
				adj[x[0]][i].code = code
			}
		}
	}
}

// isolatedRing reports whether a six-membered ring is certainly one of the smallest rings: no chord,
// no short cut of two or three bonds between units that are not neighbours in it.
func (s *search) isolatedRing(ring []uint8) bool {
	var in uint32
	for _, u := range ring {
		in |= 1 << u
	}
	for x, u := range ring {
		var near, far uint32 // units outside the ring within one and two bonds of u
		for _, e := range s.adj[u][:s.deg[u]] {
			if in>>e.to&1 == 0 {
				near |= 1 << e.to
			} else if e.to != ring[(x+1)%6] && e.to != ring[(x+5)%6] {
				return false
			}
		}
		far = near
		for v := 0; v < s.met; v++ {
			if near>>v&1 != 0 {
				for _, e := range s.adj[v][:s.deg[v]] {
					far |= 1 << e.to
				}
			}
		}
		for _, y := range [3]int{2, 3, 4} {
			for _, e := range s.adj[ring[(x+y)%6]][:s.deg[ring[(x+y)%6]]] {
				if in>>e.to&1 == 0 && far>>e.to&1 != 0 {
					return false
				}
			}
		}
	}
	return true
}

// mayBeAromatic reports whether a bond not called aromatic lies in a ring without a saturated carbon,
// the least that an aromatic ring needs, or bridges a block, which may lose its aromatic ring by that.
func (s *search) mayBeAromatic() bool {
	fit := s.unsaturated()
	for u := 0; u < s.met; u++ {
		if fit>>u&1 == 0 {
			continue
		}
		if s.inBlock(u) && s.bridged(u) {
			return true
		}
		for _, e := range s.adj[u][:s.deg[u]] {
			if e.code != innerAromatic && int(e.to) > u && fit>>e.to&1 != 0 && s.joined(u, int(e.to), fit) {
				return true
			}
		}
	}
	return false
}

// unsaturated returns the units that are not saturated carbons.
func (s *search) unsaturated() (fit uint32) {
	for u := 0; u < s.met; u++ {
		open := s.plan.kinds[s.kind[u]].state.element != carbon
		for _, e := range s.adj[u][:s.deg[u]] {
			open = open || e.code != 1 && e.code != inner
		}
		if open {
			fit |= 1 << u
		}
	}
	return fit
}

// loneRing reports whether unsaturated units round u close one ring and no more.
func (s *search) loneRing(u int) bool {
	fit := s.unsaturated()
	seen, front := uint32(1)<<u, uint32(1)<<u
	units, ends := 0, 0
	for front != 0 {
		v := bits.TrailingZeros32(front)
		front &= front - 1
		units++
		for _, e := range s.adj[v][:s.deg[v]] {
			if next := uint32(1) << e.to & fit; next != 0 {
				ends++
				front |= next &^ seen
				seen |= next
			}
		}
	}
	return ends/2 == units
}

// bridged reports whether four bonds or fewer lead from unit u of a block over units outside it to
// another unit of it that is not a neighbour. Longer bridges leave the rings of the block the smallest.
func (s *search) bridged(u int) bool {
	var block, near uint32
	for v := 0; v < s.met; v++ {
		if s.inBlock(v) && s.group[v] == s.group[u] {
			block |= 1 << v
		}
	}
	for _, e := range s.adj[u][:s.deg[u]] {
		near |= 1 << e.to
	}
	front := near &^ block
	for range 3 {
		next := front
		for v := 0; v < s.met; v++ {
			if front>>v&1 != 0 {
				for _, e := range s.adj[v][:s.deg[v]] {
					next |= 1 << e.to
				}
			}
		}
		if next&block&^near&^(1<<u) != 0 {
			return true
		}
		front = next &^ block
	}
	return false
}

// joined reports whether units a and b are joined within the set fit by another way than their bond.
func (s *search) joined(a, b int, fit uint32) bool {
	seen, front := uint32(1)<<a, uint32(1)<<a
	for front != 0 {
		u := bits.TrailingZeros32(front)
		front &= front - 1
		for _, e := range s.adj[u][:s.deg[u]] {
			if u == a && int(e.to) == b {
				continue
			}
			if next := uint32(1) << e.to & fit &^ seen; next != 0 {
				seen |= next
				front |= next
			}
		}
		if seen>>b&1 != 0 {
			return true
		}
	}
	return false
}

// perceive marks the aromatic links of the structure written.
func (w *workspace) perceive(s *search) {
	m, err := w.structure.Materialise()
	if err != nil {
		return // the builder accepts every valence the search uses; a structure it refuses has no aromatic bond to mark
	}
	w.structure.built = m
	for i := range w.links {
		l := &w.links[i]
		if b := m.BondBetween(int(w.first[l.a]), int(w.first[l.b])); b >= 0 {
			l.aromatic = m.Bond(b).Aromatic && l.order < 3
		}
	}
}

// forms runs through the Kekulé forms of a finished structure.
type forms struct {
	judge
	adj    [maxUnits][maxDegree]edge
	work   *workspace
	inside uint64 // links inside blocks: they keep their codes
	root   uint8
	units  int
}

// largestForm reports whether no Kekulé form of the aromatic links has a larger code than s, when
// units have the given kinds and the links in the set inside are bonds of blocks.
func (w *workspace) largestForm(s *search, kinds *[maxUnits]uint8, inside uint64) bool {
	f := &forms{adj: s.adj, work: w, inside: inside, root: s.plan.root, units: s.met}
	f.judge = judge{kinds, &s.deg, &f.adj, &s.row, s.plan.units, s.spare}
	var doubled, covered, outside uint32 // units with an aromatic double bond; with aromatic bonds inside and outside blocks
	for i, l := range w.links {
		ends := uint32(1<<l.a | 1<<l.b)
		if l.aromatic && l.order == 2 {
			doubled |= ends
		}
		switch in := inside>>i&1 != 0; {
		case in && l.aromatic:
			f.set(l.a, l.b, innerAromatic)
			covered |= ends
		case in:
			f.set(l.a, l.b, l.order+inner-1)
		case l.aromatic:
			f.set(l.a, l.b, 1)
			outside |= ends
		default:
			f.set(l.a, l.b, l.order)
		}
	}
	return f.match(doubled & outside &^ covered)
}

// set changes the code of the bond between a and b.
func (f *forms) set(a, b, code uint8) { setCode(&f.adj, f.deg, a, b, code) }

// match gives each unit of the set open one double bond, in every way, and compares the codes; it
// returns false if one is larger.
func (f *forms) match(open uint32) bool {
	if open == 0 {
		return !f.beats(f.root, f.units)
	}
	u := uint8(bits.TrailingZeros32(open))
	for i, l := range f.work.links {
		if !l.aromatic || f.inside>>i&1 != 0 || l.a != u && l.b != u {
			continue
		}
		v := l.a + l.b - u
		if open>>v&1 == 0 {
			continue
		}
		f.set(u, v, 2)
		ok := f.match(open &^ (1<<u | 1<<v))
		f.set(u, v, 1)
		if !ok {
			return false
		}
	}
	return true
}
