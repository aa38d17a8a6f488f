package isomer

import (
	"fmt"
	"sort"
)

// maxBlocks bounds the number of different blocks, those that differ in hydrogens counted apart.
const maxBlocks = 64

// block is a compiled Block of two units or more.
type block struct {
	name     string
	count    int
	variants []*variant
}

// requirement is a Block of one unit: no more than a number of units of one kind.
type requirement struct {
	state     *state
	hydrogens int8 // or AnyHydrogens
	count     int
}

func (r *requirement) fits(st *state, hydrogens uint8) bool {
	return r.state == st && (r.hydrogens == AnyHydrogens || uint8(r.hydrogens) == hydrogens)
}

// granted reports whether the units outside larger blocks, counted by have, suffice for all
// requirements together: those with open hydrogens may not use up what the others need.
func (c *compiled) granted(have func(r *requirement) int) bool {
	for i := range c.required {
		r := &c.required[i]
		asked := 0
		for _, o := range c.required {
			if o.state == r.state && (r.hydrogens == AnyHydrogens || o.hydrogens == r.hydrogens) {
				asked += o.count
			}
		}
		if have(r) < asked {
			return false
		}
	}
	return true
}

// compileBlocks checks the pieces. A problem without blocks gets its largest piece of Contains as
// one: a single piece cannot overlap with itself, so nothing is lost.
func (c *compiled) compileBlocks() error {
	var err error
	c.Contains, c.Lacks = append([]Piece(nil), c.Contains...), append([]Piece(nil), c.Lacks...)
	for _, list := range [][]Piece{c.Contains, c.Lacks} {
		for i := range list {
			if list[i], err = list[i].sorted(); err != nil {
				return err
			}
		}
	}
	for _, b := range c.Blocks {
		if b.Count < 1 {
			continue
		}
		if err := c.addBlock(b); err != nil {
			return err
		}
	}
	if len(c.Blocks) > 0 {
		return nil
	}
	largest := -1
	for i, p := range c.Contains {
		if c.promotable(p) && (largest < 0 || len(p.Atoms) > len(c.Contains[largest].Atoms)) {
			largest = i
		}
	}
	if largest >= 0 {
		return c.addBlock(Block{c.Contains[largest], 1})
	}
	return nil
}

// promotable reports whether p means the same as a block as it does as a pattern: no atom whose
// valence a further oxygen outside the piece could raise, no ring cut through.
func (c *compiled) promotable(p Piece) bool {
	for _, a := range p.Atoms {
		if a.Charge != 0 || c.Valences == Usual && (a.Element == sulfur || a.Element == phosphor) {
			return false
		}
	}
	for _, b := range p.Bonds {
		if b.Order == OrderAromatic && !p.wholeRings() {
			return false
		}
	}
	vs, err := p.variants()
	if err != nil {
		return false
	}
	for _, v := range vs {
		if v.aromatic && v.openAromatic() > 1 {
			return false // as a pattern it also fits rings with double bonds to outside (C=c1ccccc1=C)
		}
		if c.NoCumulated && v.cumulated() {
			return false
		}
	}
	return true
}

// bannedInside reports whether a forbidden bond is part of v.
func (c *compiled) bannedInside(v *variant) bool {
	for _, b := range v.bonds {
		for _, ban := range c.Bonds {
			if ban.between(v.units[b.a].state.element, v.units[b.b].state.element).has(b.order) {
				return true
			}
		}
	}
	return false
}

func (c *compiled) addBlock(b Block) error {
	p, err := b.Piece.sorted()
	if err != nil {
		return err
	}
	if !p.wholeRings() {
		return fmt.Errorf("piece %s: an aromatic ring is cut through, expected it whole", p.Name)
	}
	vs, err := p.variants()
	if err != nil {
		return err
	}
	kept := vs[:0]
	for _, v := range vs {
		if !c.bannedInside(v) {
			kept = append(kept, v)
		}
	}
	if len(kept) == 0 {
		c.impossible = true
		return nil
	}
	vs = kept
	if len(vs[0].units) == 1 {
		u := vs[0].units[0]
		r := requirement{u.state, int8(u.hydrogens), b.Count}
		for _, a := range p.Atoms {
			if a.Hydrogens == AnyHydrogens {
				r.hydrogens = AnyHydrogens
			}
		}
		c.required = append(c.required, r)
		return nil
	}
	c.blocks = append(c.blocks, &block{p.Name, b.Count, vs})
	n := 0
	for _, b := range c.blocks {
		n += len(b.variants)
	}
	if n > maxBlocks {
		return fmt.Errorf("the pieces allow %d different numbers of hydrogens, at most %d can be handled: state more hydrogens", n, maxBlocks)
	}
	return nil
}

// chooseVariants distributes the blocks over their variants.
func (c *compiled) chooseVariants(i int, blocks []*variant, count []int, atoms [maxElement]int, hydrogens int, yield func([]*variant, []int, [maxElement]int, int) bool) bool {
	if i == len(c.blocks) {
		return yield(blocks, count, atoms, hydrogens)
	}
	b := c.blocks[i]
	var share func(v, left int, blocks []*variant, count []int, atoms [maxElement]int, hydrogens int) bool
	share = func(v, left int, blocks []*variant, count []int, atoms [maxElement]int, hydrogens int) bool {
		if left == 0 {
			return c.chooseVariants(i+1, blocks, count, atoms, hydrogens, yield)
		}
		if v == len(b.variants) {
			return true
		}
		if !share(v+1, left, blocks, count, atoms, hydrogens) {
			return false
		}
		for n := 1; n <= left; n++ {
			hydrogens -= b.variants[v].atoms[1]
			short := hydrogens < 0
			for e := 2; e < maxElement; e++ {
				atoms[e] -= b.variants[v].atoms[e]
				short = short || atoms[e] < 0
			}
			if short {
				return true
			}
			if !share(v+1, left-n, append(blocks[:len(blocks):len(blocks)], b.variants[v]), append(count[:len(count):len(count)], n), atoms, hydrogens) {
				return false
			}
		}
		return true
	}
	return share(0, b.count, blocks, count, atoms, hydrogens)
}

// blockHydrogens counts carbons by hydrogens, hydrogens on other atoms, and units inside blocks.
func (c *compiled) blockHydrogens(blocks []*variant, count []int) (carbons [4]int, hetero, units int) {
	for b, v := range blocks {
		units += count[b] * len(v.units)
		for _, u := range v.units {
			carbons[0] += count[b] * u.state.companions(carbon)
			if u.state.element == carbon {
				carbons[min(u.hydrogens, 3)] += count[b]
			} else {
				hetero += count[b] * int(u.hydrogens)
			}
		}
	}
	return carbons, hetero, units
}

// siteKinds returns a kind for each set of equivalent units of v, the b-th block of a plan.
func (v *variant) siteKinds(b int) []kind {
	var list []kind
	for x, u := range v.units {
		if u.site != x {
			continue
		}
		k := kind{state: u.state, hydrogens: u.hydrogens, free: u.free, block: b, site: x}
		for _, other := range v.units {
			if other.site == x {
				k.share++
			}
		}
		list = append(list, k)
	}
	return list
}

// linkSites fills the inner bonds of the kinds of blocks.
func (p *plan) linkSites() {
	kindOf := func(b, site int) uint8 {
		for k := 1; k <= int(p.top); k++ {
			if p.kinds[k].block == b && p.kinds[k].site == site {
				return uint8(k)
			}
		}
		return 0
	}
	for k := 1; k <= int(p.top); k++ {
		kd := &p.kinds[k]
		if kd.block < 0 {
			continue
		}
		v := p.blocks[kd.block]
		number := map[innerBond]uint32{}
		for _, b := range v.bonds {
			for _, ends := range [2][2]uint8{{b.a, b.b}, {b.b, b.a}} {
				if int(ends[0]) == kd.site {
					e := innerBond{b.code, kindOf(kd.block, v.units[ends[1]].site)}
					if number[e]++; number[e] == 1 {
						kd.inner = append(kd.inner, e)
					}
				}
			}
		}
		sort.Slice(kd.inner, func(i, j int) bool {
			a, b := kd.inner[i], kd.inner[j]
			return a.code > b.code || a.code == b.code && a.kind > b.kind
		})
		kd.need = 0
		for i, e := range kd.inner {
			if e.code == inner+1 {
				kd.twos += uint8(number[e])
			}
			kd.need |= number[e] << (4 * i)
		}
	}
}
