package isomer

// A compound may be cut into the same blocks in several ways. One code stands for it: that of the
// cut which is largest, first by the numbers of variants used, then by the code.

// grid holds the bond code between any two units of a finished structure, as a block has it; 0 none.
type grid [maxUnits][maxUnits]uint8

// match puts the units of v one after the other on units that fits allows, inner bonds on equal codes,
// and calls found with each complete placing until it returns false.
func (v *variant) match(g *grid, units int, fits func(x int, u uint8) bool, found func(at *[maxUnits]uint8) bool) bool {
	var at [maxUnits]uint8
	var put func(x int, used uint32) bool
	put = func(x int, used uint32) bool {
		if x == len(v.units) {
			return found(&at)
		}
		for u := uint8(0); int(u) < units; u++ {
			if used>>u&1 != 0 || !fits(x, u) {
				continue
			}
			at[x] = u
			if v.bondsAgree(g, x, &at) && !put(x+1, used|1<<u) {
				return false
			}
		}
		return true
	}
	return put(0, 0)
}

// bondsAgree tests the bonds of unit x to earlier units.
func (v *variant) bondsAgree(g *grid, x int, at *[maxUnits]uint8) bool {
	for _, b := range v.bonds {
		if int(max(b.a, b.b)) == x && g[at[b.a]][at[b.b]] != b.code {
			return false
		}
	}
	return true
}

func (v *variant) alike(x int, o *variant, y int) bool {
	a, b := &v.units[x], &o.units[y]
	return a.state == b.state && a.hydrogens == b.hydrogens
}

func (v *variant) grid() *grid {
	var g grid
	for _, b := range v.bonds {
		g[b.a][b.b], g[b.b][b.a] = b.code, b.code
	}
	return &g
}

// equals reports whether two variants are the same block.
func (v *variant) equals(o *variant) bool {
	if len(v.units) != len(o.units) || len(v.bonds) != len(o.bonds) {
		return false
	}
	return !v.match(o.grid(), len(o.units), func(x int, u uint8) bool { return v.alike(x, o, int(u)) },
		func(*[maxUnits]uint8) bool { return false })
}

// findSites finds the units that symmetries of the block exchange.
func (v *variant) findSites() {
	g := v.grid()
	for y := range v.units {
		v.units[y].site = y
		for x := 0; x < y; x++ {
			if v.units[x].site != x || !v.alike(x, v, y) {
				continue
			}
			fits := func(z int, u uint8) bool {
				return v.alike(z, v, int(u)) && (z == x) == (int(u) == y)
			}
			if !v.match(g, len(v.units), fits, func(*[maxUnits]uint8) bool { return false }) {
				v.units[y].site = x
				break
			}
		}
	}
}

// kekuliseBlocks checks each instance against its block and gives its aromatic bonds an order.
func (w *workspace) kekuliseBlocks(s *search) bool {
	w.grid = grid{}
	for _, l := range w.links {
		if l.code >= inner {
			w.grid[l.a][l.b], w.grid[l.b][l.a] = l.code, l.code
		}
	}
	var done uint32
	for u := 0; u < s.met; u++ {
		k := &s.plan.kinds[s.kind[u]]
		if k.block < 0 || done>>s.group[u]&1 != 0 {
			continue
		}
		done |= 1 << s.group[u]
		v := s.plan.blocks[k.block]
		if v.rings() == 0 {
			continue // a connected tree with the right bonds round every unit is the block
		}
		fits := func(x int, o uint8) bool {
			kd := &s.plan.kinds[s.kind[o]]
			return kd.block == k.block && s.group[o] == s.group[u] && kd.site == v.units[x].site
		}
		if v.match(&w.grid, s.met, fits, func(at *[maxUnits]uint8) bool {
			for _, b := range v.bonds {
				w.setOrder(at[b.a], at[b.b], b.order)
			}
			return false
		}) {
			return false
		}
	}
	return true
}

func (w *workspace) setOrder(a, b, order uint8) {
	for i := range w.links {
		if l := &w.links[i]; l.a == a && l.b == b || l.a == b && l.b == a {
			l.order = order
		}
	}
}

// image is a place where a variant of a block stands in a finished structure.
type image struct {
	variant int    // index in problem order over all blocks
	units   uint32 // the units it takes
	links   uint64 // the links inside it
	at      [maxUnits]uint8
}

// decomposition writes the structure of s, which has blocks, and reports whether s is the cut and
// the Kekulé form that stands for it.
func (w *workspace) decomposition(s *search) bool {
	if !w.write(s) {
		return false
	}
	free := false // aromatic bonds outside the blocks
	if (s.rings > 0 || s.plan.ringed) && s.mayBeAromatic() {
		w.perceive(s)
		for _, l := range w.links {
			if l.code >= inner && l.aromatic != (l.code == innerAromatic) {
				return false // the block is not what it says: C=C that became part of an aromatic ring
			}
			free = free || l.aromatic && l.code < inner
		}
	}
	if free {
		inside := uint64(0)
		for i, l := range w.links {
			if l.code >= inner {
				inside |= 1 << i
			}
		}
		if !w.largestForm(s, &s.kind, inside) {
			return false
		}
	}
	if w.findImages(s) {
		return true
	}
	return w.largestCut(s)
}

// findImages lists the places of all blocks; it returns true if there are no more than s uses.
func (w *workspace) findImages(s *search) bool {
	w.grid = grid{}
	for _, l := range w.links {
		code := l.order + inner - 1
		if l.aromatic {
			code = innerAromatic
		}
		w.grid[l.a][l.b], w.grid[l.b][l.a] = code, code
	}
	c := s.plan.problem
	w.images, w.imageEnd = w.images[:0], w.imageEnd[:0]
	index, only := 0, true
	for _, b := range c.blocks {
		before := len(w.images)
		for _, v := range b.variants {
			w.addImages(s, v, index)
			index++
		}
		w.imageEnd = append(w.imageEnd, len(w.images))
		only = only && len(w.images)-before == b.count
	}
	return only
}

func (w *workspace) addImages(s *search, v *variant, index int) {
	fits := func(x int, u uint8) bool {
		k := &s.plan.kinds[s.kind[u]]
		return k.state == v.units[x].state && k.hydrogens == v.units[x].hydrogens
	}
	from := len(w.images)
	v.match(&w.grid, s.met, fits, func(at *[maxUnits]uint8) bool {
		im := image{variant: index, at: *at}
		for x := range v.units {
			im.units |= 1 << at[x]
		}
		for i, l := range w.links {
			for _, b := range v.bonds {
				if l.a == at[b.a] && l.b == at[b.b] || l.a == at[b.b] && l.b == at[b.a] {
					im.links |= 1 << i
				}
			}
		}
		for _, old := range w.images[from:] {
			if old.units == im.units && old.links == im.links {
				return true
			}
		}
		w.images = append(w.images, im)
		return true
	})
}

// largestCut compares the cut of s with all others.
func (w *workspace) largestCut(s *search) bool {
	c := s.plan.problem
	var own, used [maxBlocks]int
	index := 0
	var list []*variant
	for _, b := range c.blocks {
		for _, v := range b.variants {
			for x, o := range s.plan.blocks {
				if o == v {
					own[index] = s.plan.perBlock[x]
				}
			}
			list = append(list, v)
			index++
		}
	}
	var chosen []int
	var choose func(b, from, left int, taken uint32) bool
	choose = func(b, from, left int, taken uint32) bool {
		if left == 0 {
			if b+1 < len(c.blocks) {
				return choose(b+1, w.imageEnd[b], c.blocks[b+1].count, taken)
			}
			if !w.leavesEnough(s, taken) {
				return true // not a cut: the blocks of one unit are missing
			}
			for i := range own {
				if used[i] != own[i] {
					return used[i] < own[i] // a cut that comes before or after s whatever its code
				}
			}
			return w.cutNotLarger(s, list, chosen)
		}
		for x := from; x < w.imageEnd[b]; x++ {
			im := &w.images[x]
			if im.units&taken != 0 {
				continue
			}
			used[im.variant]++
			chosen = append(chosen, x)
			ok := choose(b, x+1, left-1, taken|im.units)
			chosen = chosen[:len(chosen)-1]
			used[im.variant]--
			if !ok {
				return false
			}
		}
		return true
	}
	return choose(0, 0, c.blocks[0].count, 0)
}

// leavesEnough reports whether the units outside the set taken hold the blocks of one unit.
func (w *workspace) leavesEnough(s *search, taken uint32) bool {
	return s.plan.problem.granted(func(r *requirement) int {
		n := 0
		for u := 0; u < s.met; u++ {
			if k := &s.plan.kinds[s.kind[u]]; taken>>u&1 == 0 && r.fits(k.state, k.hydrogens) {
				n++
			}
		}
		return n
	})
}

// cutNotLarger compares the code of another cut into the same variants.
func (w *workspace) cutNotLarger(s *search, list []*variant, chosen []int) bool {
	var kinds [maxUnits]uint8
	var inside uint64
	for _, x := range chosen {
		im := &w.images[x]
		inside |= im.links
		v := list[im.variant]
		for y, u := range v.units {
			kinds[im.at[y]] = s.plan.kindOf(v, u.site)
		}
	}
	for u := 0; u < s.met; u++ {
		if kinds[u] == 0 {
			if kinds[u] = s.plan.freeKind(&s.plan.kinds[s.kind[u]]); kinds[u] == 0 {
				return true // cannot be: the same variants leave the same atoms
			}
		}
	}
	return w.largestForm(s, &kinds, inside)
}

// kindOf returns the kind of a site of block v.
func (p *plan) kindOf(v *variant, site int) uint8 {
	for k := uint8(1); k <= p.top; k++ {
		if b := p.kinds[k].block; b >= 0 && p.blocks[b] == v && p.kinds[k].site == site {
			return k
		}
	}
	return 0
}

// freeKind returns the kind of an atom like that of k outside blocks.
func (p *plan) freeKind(like *kind) uint8 {
	for k := uint8(1); k <= p.top; k++ {
		if x := &p.kinds[k]; x.block < 0 && x.state == like.state && x.hydrogens == like.hydrogens {
			return k
		}
	}
	return 0
}
