package isomer

import (
	"fmt"
	"sort"
)

// maxBlocks bounds the number of different blocks, those that differ in hydrogens counted apart.
const maxBlocks = 24

// block is a compiled Block of two units or more.
type block struct {
	name     string
	count    int
	variants []*variant
}

// variant is a block with all its hydrogens stated.
type variant struct {
	units    []blockUnit // each but the first bonded to an earlier one
	bonds    []blockBond
	atoms    [maxElement]int // atoms it takes from the formula
	aromatic bool
}

type blockUnit struct {
	state     *state
	hydrogens uint8
	free      uint8
	site      int // lowest unit equivalent to it
}

type blockBond struct {
	a, b  uint8
	code  uint8
	order uint8 // in a Kekulé form
}

// requirement is a Block of one unit: no more than a number of units of one kind.
type requirement struct {
	state     *state
	hydrogens int8 // or AnyHydrogens
	count     int
}

func (v *variant) rings() int { return len(v.bonds) - len(v.units) + 1 }

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

// cumulated reports whether a unit of v has two double bonds inside.
func (v *variant) cumulated() bool {
	var twos [maxUnits]int
	for _, b := range v.bonds {
		if b.code == inner+1 {
			twos[b.a]++
			twos[b.b]++
		}
	}
	for _, n := range twos {
		if n > 1 {
			return true
		}
	}
	return false
}

// openAromatic counts the aromatic units of v that are bonded to outside.
func (v *variant) openAromatic() int {
	n := 0
	for x, u := range v.units {
		for _, b := range v.bonds {
			if u.free > 0 && b.code == innerAromatic && (int(b.a) == x || int(b.b) == x) {
				n++
				break
			}
		}
	}
	return n
}

// wholeRings reports whether every atom with aromatic bonds has two of them or more.
func (p Piece) wholeRings() bool {
	var n [64]int
	for _, b := range p.Bonds {
		if b.Order == OrderAromatic {
			n[b.A]++
			n[b.B]++
		}
	}
	for _, x := range n {
		if x == 1 {
			return false
		}
	}
	return true
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

// variants states the open hydrogens of p in every possible way, different up to symmetry.
func (p Piece) variants() ([]*variant, error) {
	var list []*variant
	var failure error
	atoms := append([]PieceAtom(nil), p.Atoms...)
	q := p
	q.Atoms = atoms
	var choose func(i int)
	choose = func(i int) {
		for ; i < len(atoms) && p.Atoms[i].Hydrogens != AnyHydrogens; i++ {
		}
		if i == len(atoms) {
			v, err := q.variant()
			if err != nil {
				failure = err
				return
			}
			for _, old := range list {
				if old.equals(v) {
					return
				}
			}
			list = append(list, v)
			return
		}
		for h := int8(0); h <= 4; h++ { // more hydrogens no atom holds
			atoms[i].Hydrogens = h
			choose(i + 1)
		}
	}
	choose(0)
	if len(list) == 0 {
		return nil, failure
	}
	return list, nil
}

// variant builds the block of a piece with all hydrogens stated.
func (p Piece) variant() (*variant, error) {
	unitOf, states, err := p.fold()
	if err != nil {
		return nil, err
	}
	orders, err := p.kekuleOrders()
	if err != nil {
		return nil, err
	}
	v := &variant{}
	var unit [64]int
	for a, st := range states {
		if unitOf[a] != a {
			continue
		}
		unit[a] = len(v.units)
		free := st.valence - int(p.Atoms[a].Hydrogens)
		if int(p.Atoms[a].Hydrogens) > st.maxHydrogens {
			free = -1
		}
		for i, b := range p.Bonds {
			if int(b.A) == a && unitOf[b.B] != a || int(b.B) == a && unitOf[b.A] != a {
				free -= int(orders[i])
			}
		}
		if free < 0 {
			return nil, fmt.Errorf("piece %s: atom %d (%s) has more bonds and hydrogens than its valence of %d", p.Name, a+1, st.element.Symbol(), st.valence)
		}
		v.units = append(v.units, blockUnit{state: st, hydrogens: uint8(p.Atoms[a].Hydrogens), free: uint8(free)})
		v.atoms[st.element]++
		v.atoms[1] += int(p.Atoms[a].Hydrogens)
		for _, w := range st.with {
			v.atoms[w.element]++
		}
	}
	for i, b := range p.Bonds {
		if unitOf[b.A] != int(b.A) || unitOf[b.B] != int(b.B) {
			continue
		}
		code := b.Order + inner - 1
		if b.Order == OrderAromatic {
			code, v.aromatic = innerAromatic, true
		}
		v.bonds = append(v.bonds, blockBond{uint8(unit[b.A]), uint8(unit[b.B]), code, orders[i]})
	}
	if len(v.units) > maxUnits {
		return nil, fmt.Errorf("piece %s: it has %d atoms, at most %d can be handled", p.Name, len(v.units), maxUnits)
	}
	v.findSites()
	return v, nil
}

// fold finds the state of each atom; unitOf gives for each atom of a company the atom it goes with.
func (p Piece) fold() (unitOf []int, states []*state, err error) {
	n := len(p.Atoms)
	unitOf, states = make([]int, n), make([]*state, n)
	for a := range unitOf {
		unitOf[a] = -1
	}
	for _, st := range usualStates {
		for a := range p.Atoms {
			if with := p.companyOf(a, st, unitOf); with != nil {
				states[a], unitOf[a] = st, a
				for _, b := range with {
					unitOf[b] = a
				}
			}
		}
	}
	for a, at := range p.Atoms {
		if unitOf[a] >= 0 {
			continue
		}
		unitOf[a] = a
		for _, st := range plainStates {
			if st.element == at.Element && at.Charge == 0 {
				states[a] = st
			}
		}
		if states[a] == nil {
			return nil, nil, fmt.Errorf("piece %s: no valence is known for atom %d (%s, charge %+d)", p.Name, a+1, at.Element.Symbol(), at.Charge)
		}
	}
	return unitOf, states, nil
}

// companyOf returns the atoms round a that make it an atom in state st, nil if it is none.
func (p Piece) companyOf(a int, st *state, unitOf []int) []int {
	if p.Atoms[a].Element != st.element || p.Atoms[a].Charge != st.charge || unitOf[a] >= 0 {
		return nil
	}
	var with []int
	for _, w := range st.with {
		parent := a
		if w.parent >= 0 {
			parent = with[w.parent]
		}
		found := -1
		for _, b := range p.Bonds {
			x := int(b.A)
			if x == parent {
				x = int(b.B)
			} else if int(b.B) != parent {
				continue
			}
			if x == a || b.Order != w.order || unitOf[x] >= 0 || contains(with, x) {
				continue
			}
			if at := p.Atoms[x]; at.Element == w.element && at.Charge == w.charge && at.Hydrogens <= 0 {
				found = x
			}
		}
		if found < 0 {
			return nil
		}
		with = append(with, found)
	}
	return with
}

func contains(list []int, x int) bool {
	for _, y := range list {
		if x == y {
			return true
		}
	}
	return false
}

// kekuleOrders gives every bond an order, aromatic ones by a Kekulé form: each carbon has one double
// bond, a nitrogen without hydrogen too where that works out, other atoms none.
func (p Piece) kekuleOrders() ([]uint8, error) {
	orders := make([]uint8, len(p.Bonds))
	var aromatic, must, may [64]bool
	for i, b := range p.Bonds {
		orders[i] = b.Order
		if b.Order == OrderAromatic {
			orders[i] = 1
			aromatic[b.A], aromatic[b.B] = true, true
		}
	}
	for a, at := range p.Atoms {
		sigma, double := 0, false
		for i, b := range p.Bonds {
			if int(b.A) == a || int(b.B) == a {
				sigma++
				double = double || orders[i] > 1
			}
		}
		must[a] = aromatic[a] && at.Element == carbon && !double
		may[a] = must[a] || aromatic[a] && at.Element == nitrogen && at.Hydrogens == 0 && (sigma == 2 || at.Charge == 1)
	}
	var match func(a int) bool
	match = func(a int) bool {
		for ; a < len(p.Atoms) && !may[a]; a++ {
		}
		if a == len(p.Atoms) {
			return true
		}
		may[a] = false
		for i, b := range p.Bonds {
			x := int(b.A) + int(b.B) - a
			if b.Order != OrderAromatic || int(b.A) != a && int(b.B) != a || !may[x] {
				continue
			}
			may[x], orders[i] = false, 2
			if match(a + 1) {
				return true
			}
			may[x], orders[i] = true, 1
		}
		if !must[a] && match(a+1) {
			return true
		}
		may[a] = true
		return false
	}
	if p.kekule != nil {
		return p.kekule, nil
	}
	if !match(0) {
		return nil, fmt.Errorf("piece %s: its aromatic bonds have no Kekulé form", p.Name)
	}
	return orders, nil
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
