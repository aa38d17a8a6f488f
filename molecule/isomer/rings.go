package isomer

// sound tests a prefix against the constraints that a longer code cannot mend, after row i with its
// closures to units below end.
func (s *search) sound(i, end int) bool {
	c := s.plan.problem
	closed := false
	for j := i + 1; j < end; j++ {
		if s.code[i][j] == 0 {
			continue
		}
		closed = true
		if c.NoRings != 0 {
			// The smallest ring of a bond can still shrink, but not past sizes that are forbidden too.
			size := s.smallestRing(i, j)
			if below := uint64(1)<<(size+1) - 1 - 7; size < 64 && c.NoRings&below == below {
				return false
			}
		}
	}
	if closed && c.NoSmallRing && s.strained() {
		return false
	}
	return true
}

// smallestRing returns the number of units in the smallest ring through the bond from a to b among
// the bonds made so far, 99 if there is none.
func (s *search) smallestRing(a, b int) int {
	seen, front := uint32(1)<<a, uint32(1)<<a
	for size := 2; front != 0; size++ {
		var next uint32
		for u := 0; u < s.met; u++ {
			if front>>u&1 == 0 {
				continue
			}
			for _, e := range s.adj[u][:s.deg[u]] {
				if u != a || int(e.to) != b {
					next |= 1 << e.to
				}
			}
		}
		front = next &^ seen
		seen |= front
		if front>>b&1 != 0 {
			return size
		}
	}
	return 99
}

// strained reports a triple bond, or a unit with two double bonds, in a ring under 8.
func (s *search) strained() bool {
	for u := 0; u < s.met; u++ {
		cumulated := s.twos[u] > 1
		for _, e := range s.adj[u][:s.deg[u]] {
			if (e.code == 3 || e.code == inner+2 || cumulated && (e.code == 2 || e.code == inner+1)) && s.smallestRing(u, int(e.to)) < 8 {
				return true
			}
		}
	}
	return false
}

// ringsAllowed tests the forbidden ring sizes on a finished structure.
func (w *workspace) ringsAllowed(s *search) bool {
	for _, l := range w.links {
		if size := s.smallestRing(int(l.a), int(l.b)); size < 64 && s.plan.problem.NoRings>>size&1 != 0 {
			return false
		}
	}
	return true
}
