package isomer

import (
	"sort"

	"shelfward/molecule"
)

// kind is a colour of units: an atom in a stated state with a stated number of hydrogens, free or
// as part of a block.
type kind struct {
	state     *state
	hydrogens uint8
	free      uint8 // valence left for bonds chosen by the search

	block int         // index in plan.blocks of the block it belongs to, or -1
	site  int         // lowest index of the equivalent atoms of the block
	inner []innerBond // kinds of bonds inside the block
	need  uint32      // how many bonds of each entry of inner a unit has, four bits each
	share uint8       // units of this kind in one instance of the block
	twos  uint8       // double bonds it has inside the block
}

// innerBond is a kind of bond inside a block: its code and the kind across.
type innerBond struct{ code, kind uint8 }

// plan is one distribution of hydrogens and states over the atoms: the units to be joined.
type plan struct {
	kinds []kind // from 1, in the order of their tokens
	count []uint8
	top   uint8 // last kind
	root  uint8 // the kind that codes begin with: the rarest
	units int

	excess             int // bond orders beyond those of a tree
	minRings, maxRings int // rings between units
	allow              [maxUnits][maxUnits]bondSet
	noCumulated        bool
	local              bool // prefixes have more to meet than the code (sound)
	blocks             []*variant
	perBlock           []int // instances of each block
	ringed             bool  // some block has a ring that is not aromatic by itself

	problem *compiled
}

// bondSet is a set of bond orders, bit n for order n.
type bondSet uint8

func (b bondSet) has(order uint8) bool { return b>>order&1 != 0 }

const anyOrder bondSet = 1<<1 | 1<<2 | 1<<3

// pool is a number of atoms in one state whose hydrogens are to be chosen.
type pool struct {
	state *state
	count int
	split [5]int // atoms with 0 to 4 hydrogens
}

// plans calls yield with every plan of the problem in a fixed order, until yield returns false.
func (c *compiled) plans(yield func(*plan) bool) bool {
	if c.impossible {
		return true
	}
	return c.chooseVariants(0, nil, nil, c.atoms, c.hydrogens, func(blocks []*variant, count []int, atoms [maxElement]int, hydrogens int) bool {
		return c.chooseStates(0, nil, atoms, func(pools []pool) bool {
			return c.chooseHydrogens(pools, 0, hydrogens, blocks, count, yield)
		})
	})
}

// chooseStates distributes the atoms that belong to no block over the states.
func (c *compiled) chooseStates(i int, pools []pool, atoms [maxElement]int, yield func([]pool) bool) bool {
	if i == len(c.states) {
		for _, n := range atoms {
			if n != 0 {
				return true
			}
		}
		return yield(pools)
	}
	st := c.states[i]
	for n := 0; ; n++ {
		if n > 0 {
			atoms[st.element]--
			for _, w := range st.with {
				atoms[w.element]--
			}
			for _, left := range atoms {
				if left < 0 {
					return true
				}
			}
		}
		if st.plain() && atoms[st.element] > 0 {
			continue // plain states come last of their element and take what is left
		}
		next := pools
		if n > 0 {
			next = append(pools[:len(pools):len(pools)], pool{state: st, count: n})
		}
		if !c.chooseStates(i+1, next, atoms, yield) {
			return false
		}
	}
}

// chooseHydrogens distributes the hydrogens over the pools.
func (c *compiled) chooseHydrogens(pools []pool, i, hydrogens int, blocks []*variant, count []int, yield func(*plan) bool) bool {
	if i == len(pools) {
		if hydrogens != 0 {
			return true
		}
		p := c.plan(pools, blocks, count)
		return p == nil || yield(p)
	}
	room := 0
	for _, pl := range pools[i:] {
		room += pl.count * min(pl.state.valence, pl.state.maxHydrogens)
	}
	if hydrogens > room {
		return true
	}
	pl := &pools[i]
	var split func(h, atoms, left int) bool
	split = func(h, atoms, left int) bool {
		if h == 0 {
			pl.split[0] = atoms
			return c.chooseHydrogens(pools, i+1, left, blocks, count, yield)
		}
		for n := 0; n <= atoms && n*h <= left; n++ {
			if pl.state.element == carbon && h < 3 && c.Carbons[h].Set && n > c.Carbons[h].Max {
				break
			}
			pl.split[h] = n
			if !split(h-1, atoms-n, left-n*h) {
				return false
			}
		}
		pl.split[h] = 0
		return true
	}
	return split(min(pl.state.valence, pl.state.maxHydrogens), pl.count, hydrogens)
}

// tally sums up what a plan would hold.
type tally struct {
	carbons [4]int // by hydrogens
	hetero  int    // hydrogens on other atoms
	units   int
	parts   int // blocks and units outside blocks
	stubs   int // free valences
}

// count adds up pools and blocks.
func (c *compiled) count(pools []pool, blocks []*variant, blockCount []int) (t tally) {
	t.carbons, t.hetero, t.units = c.blockHydrogens(blocks, blockCount)
	for b, v := range blocks {
		t.parts += blockCount[b]
		for _, u := range v.units {
			t.stubs += blockCount[b] * int(u.free)
		}
	}
	for i := range pools {
		pl := &pools[i]
		for h, n := range pl.split {
			t.units += n
			t.parts += n
			t.stubs += n * (pl.state.valence - h)
			if pl.state.element == carbon {
				t.carbons[min(h, 3)] += n
			} else {
				t.hetero += n * h
			}
		}
		t.carbons[0] += pl.count * pl.state.companions(carbon)
	}
	return t
}

// agrees tests a tally against the evidence and against itself.
func (c *compiled) agrees(t *tally) bool {
	for h, n := range t.carbons {
		if !c.Carbons[h].Holds(n) {
			return false
		}
	}
	return c.OnHetero.Holds(t.hetero) && t.units > 0 && t.stubs%2 == 0 && t.stubs/2 >= t.parts-1
}

// plan builds the plan of chosen pools and blocks; nil if it cannot hold together.
func (c *compiled) plan(pools []pool, blocks []*variant, blockCount []int) *plan {
	t := c.count(pools, blocks, blockCount)
	if !c.agrees(&t) || !c.enough(pools) {
		return nil
	}
	type counted struct {
		kind
		n int
	}
	var list []counted
	for _, pl := range pools {
		for h, n := range pl.split {
			if n > 0 {
				list = append(list, counted{kind{state: pl.state, hydrogens: uint8(h), free: uint8(pl.state.valence - h), block: -1, share: 1}, n})
			}
		}
	}
	for b, v := range blocks {
		for _, k := range v.siteKinds(b) {
			list = append(list, counted{k, blockCount[b] * int(k.share)})
		}
	}
	if t.units > maxUnits || len(list) >= maxUnits {
		c.overflow = true
		return nil
	}
	sort.SliceStable(list, func(i, j int) bool { return kindBefore(&list[i].kind, &list[j].kind) })
	p := &plan{units: t.units, excess: t.stubs/2 - (t.parts - 1), problem: c, blocks: blocks, perBlock: blockCount, noCumulated: c.NoCumulated}
	p.kinds, p.count = make([]kind, 1, len(list)+1), make([]uint8, 1, len(list)+1)
	for _, x := range list {
		if x.free == 0 && x.block < 0 && t.units > 1 {
			return nil
		}
		p.kinds, p.count = append(p.kinds, x.kind), append(p.count, uint8(x.n))
	}
	p.top = uint8(len(list))
	p.linkSites()
	p.chooseRoot()
	p.setRings()
	if p.maxRings < 0 || p.minRings > p.excess {
		return nil // the blocks hold too many rings, or too few can be closed
	}
	p.setAllowed()
	return p
}

// kindBefore orders kinds: the more bonds, the larger the token.
func kindBefore(a, b *kind) bool {
	switch {
	case a.free != b.free:
		return a.free < b.free
	case a.block != b.block:
		return a.block < b.block
	case a.site != b.site:
		return a.site < b.site
	case a.state.element != b.state.element:
		return a.state.element > b.state.element
	case len(a.state.with) != len(b.state.with):
		return len(a.state.with) < len(b.state.with)
	default:
		return a.hydrogens < b.hydrogens
	}
}

// chooseRoot takes the rarest kind, so that few units compete for the first place.
func (p *plan) chooseRoot() {
	p.root = 1
	for k := uint8(1); k <= p.top; k++ {
		if p.count[k] <= p.count[p.root] {
			p.root = k
		}
	}
}

// setRings turns the bounds on rings into bounds on rings between units.
func (p *plan) setRings() {
	inside := 0
	for b, v := range p.blocks {
		p.ringed = p.ringed || v.plainRing()
		inside += p.perBlock[b] * v.rings()
	}
	p.minRings, p.maxRings = 0, maxUnits*4
	if r := p.problem.Rings; r.Set {
		p.minRings, p.maxRings = r.Min-inside, r.Max-inside
	}
}

// setAllowed fills the table of allowed bonds.
func (p *plan) setAllowed() {
	c := p.problem
	for a := 1; a <= int(p.top); a++ {
		for b := 1; b <= int(p.top); b++ {
			p.allow[a][b] = anyOrder
			for _, ban := range c.Bonds {
				p.allow[a][b] &^= ban.between(p.kinds[a].state.element, p.kinds[b].state.element)
			}
		}
	}
	for a := 1; a <= int(p.top); a++ {
		for b := 1; b <= int(p.top); b++ {
			if p.kinds[a].state.oxide() && p.kinds[b].state.element == oxygen {
				// [N+]([O-])=O is the state nitro, not an N-oxide with a double bond to oxygen.
				p.allow[a][b] &^= 1 << 2
				p.allow[b][a] &^= 1 << 2
			}
		}
	}
	p.local = c.NoRings != 0 || c.NoSmallRing || len(c.Lacks) > 0
}

// between gives the bond orders that the ban takes from bonds between elements a and b.
func (ban BondBan) between(a, b molecule.Element) bondSet {
	if (ban.A != a || ban.B != b) && (ban.A != b || ban.B != a) {
		return 0
	}
	if ban.Order == 0 {
		return anyOrder
	}
	return 1 << ban.Order
}

// enough reports whether the pools hold the units that blocks of one unit ask for.
func (c *compiled) enough(pools []pool) bool {
	return c.granted(func(r *requirement) int {
		have := 0
		for _, pl := range pools {
			for h, n := range pl.split {
				if r.fits(pl.state, uint8(h)) {
					have += n
				}
			}
		}
		return have
	})
}
