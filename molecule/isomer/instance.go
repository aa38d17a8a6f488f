package isomer

// Blocks in the search. The units of a block are met and visited like any others. Bonds inside a
// block are rationed: each unit has a number of them to each kind, and the units so bonded form an
// instance that must never hold more units of a kind than the block does. A unit met over a bond
// from outside opens an instance of its own, which may turn out to be part of one that is open
// already; then an inner bond merges the two.

// entry returns the index of the inner bond of kind a with this code to kind b, -1 if there is none.
func (p *plan) entry(a, code, b uint8) int {
	for i, e := range p.kinds[a].inner {
		if e.code == code && e.kind == b {
			return i
		}
	}
	return -1
}

// mayOpen reports whether a unit of kind k may be met from outside its block. An instance beyond the
// number of blocks must merge with another later, which closes a ring.
func (s *search) mayOpen(k uint8) bool {
	b := s.plan.kinds[k].block
	over := int(s.opened[b]) - s.plan.perBlock[b]
	return over < 0 || over < s.excess && s.rings < s.plan.maxRings
}

func (s *search) open(u int) {
	s.group[u] = uint8(s.groups)
	s.groups++
	s.opened[s.plan.kinds[s.kind[u]].block]++
}

func (s *search) shut(u int) {
	s.groups--
	s.opened[s.plan.kinds[s.kind[u]].block]--
}

// held counts the units of kind k in instance g.
func (s *search) held(g, k uint8) (n uint8) {
	for u := 0; u < s.met; u++ {
		if s.kind[u] == k && s.group[u] == g {
			n++
		}
	}
	return n
}

// meetInner meets a unit over the inner bond e of unit i.
func (s *search) meetInner(i int, e innerBond) (int, bool) {
	at := s.plan.entry(s.kind[i], e.code, e.kind)
	if s.need[i]>>(4*at)&15 == 0 || s.held(s.group[i], e.kind) >= s.plan.kinds[e.kind].share {
		return 0, false
	}
	u := s.meet(e.kind, 0)
	s.group[u] = s.group[i]
	s.need[i] -= 1 << (4 * at)
	s.need[u] -= 1 << (4 * s.plan.entry(e.kind, e.code, s.kind[i]))
	s.join(i, u, e.code)
	return u, true
}

func (s *search) unmeetInner(u int) {
	e := s.adj[u][0]
	i := int(e.to)
	s.need[i] += 1 << (4 * s.plan.entry(s.kind[i], e.code, s.kind[u]))
	s.unjoin(i, u)
	s.unmeet()
}

// innerClosure is what bindInner did, for unbindInner.
type innerClosure struct {
	i, j     int
	moved    uint32 // units that changed their instance
	from     uint8
	merged   bool
	atI, atJ int
}

// bindInner makes an inner bond between two units met before.
func (s *search) bindInner(i, j int, code uint8) (innerClosure, bool) {
	c := innerClosure{i: i, j: j}
	ki, kj := s.kind[i], s.kind[j]
	if s.plan.kinds[ki].block != s.plan.kinds[kj].block {
		return c, false
	}
	c.atI, c.atJ = s.plan.entry(ki, code, kj), s.plan.entry(kj, code, ki)
	if c.atI < 0 || c.atJ < 0 || s.need[i]>>(4*c.atI)&15 == 0 || s.need[j]>>(4*c.atJ)&15 == 0 {
		return c, false
	}
	gi, gj := s.group[i], s.group[j]
	if gi != gj {
		if s.excess == 0 || s.rings >= s.plan.maxRings || !s.mergeable(gi, gj, s.plan.kinds[ki].block) {
			return c, false
		}
		c.merged, c.from = true, gj
	}
	s.need[i] -= 1 << (4 * c.atI)
	s.need[j] -= 1 << (4 * c.atJ)
	if c.merged {
		for u := 0; u < s.met; u++ {
			if s.inBlock(u) && s.group[u] == gj {
				c.moved |= 1 << u
				s.group[u] = gi
			}
		}
		s.excess--
		s.rings++
		s.opened[s.plan.kinds[ki].block]--
	}
	s.join(i, j, code)
	if s.closedShort(gi, s.plan.kinds[ki].block) {
		s.unbindInner(c)
		return c, false
	}
	return c, true
}

func (s *search) unbindInner(c innerClosure) {
	s.unjoin(c.i, c.j)
	if c.merged {
		for u := 0; u < s.met; u++ {
			if c.moved>>u&1 != 0 {
				s.group[u] = c.from
			}
		}
		s.excess++
		s.rings--
		s.opened[s.plan.kinds[s.kind[c.i]].block]++
	}
	s.need[c.i] += 1 << (4 * c.atI)
	s.need[c.j] += 1 << (4 * c.atJ)
}

func (s *search) inBlock(u int) bool { return s.plan.kinds[s.kind[u]].block >= 0 }

// mergeable reports whether two instances together hold no more than one block does.
func (s *search) mergeable(g, h uint8, block int) bool {
	for k := uint8(1); k <= s.plan.top; k++ {
		if s.plan.kinds[k].block == block && s.held(g, k)+s.held(h, k) > s.plan.kinds[k].share {
			return false
		}
	}
	return true
}

// closedShort reports an instance that has all its inner bonds but not all its units.
func (s *search) closedShort(g uint8, block int) bool {
	n := 0
	for u := 0; u < s.met; u++ {
		if s.inBlock(u) && s.group[u] == g {
			if s.need[u] != 0 {
				return false
			}
			n++
		}
	}
	return n < len(s.plan.blocks[block].units)
}
