package isomer

import (
	"fmt"
	"slices"
)

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

func (v *variant) rings() int { return len(v.bonds) - len(v.units) + 1 }

// plainRing reports whether a bond of v that is not aromatic lies in a ring of v.
func (v *variant) plainRing() bool {
	for i, out := range v.bonds {
		if out.code == innerAromatic {
			continue
		}
		seen := uint32(1) << out.a
		for range v.units {
			for j, b := range v.bonds {
				if ends := uint32(1)<<b.a | 1<<b.b; j != i && seen&ends != 0 {
					seen |= ends
				}
			}
		}
		if seen>>out.b&1 != 0 {
			return true
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

// variants states the open hydrogens of p in every possible way, different up to symmetry.
func (p Piece) variants() ([]*variant, error) {
	var list []*variant
	var failure error
	atoms := append([]PieceAtom(nil), p.Atoms...)
	q := p
	q.Atoms = atoms
	room := p.room()
	var choose func(i int)
	choose = func(i int) {
		if len(list) > maxBlocks {
			return
		}
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
		for h := 0; h <= room[i]; h++ {
			atoms[i].Hydrogens = int8(h)
			choose(i + 1)
		}
	}
	choose(0)
	switch {
	case len(list) == 0:
		return nil, failure
	case len(list) > maxBlocks:
		return nil, fmt.Errorf("piece %s: it allows more than %d different numbers of hydrogens: state more of them", p.Name, maxBlocks)
	}
	return list, nil
}

// room bounds the hydrogens of each atom by its bonds inside p.
func (p Piece) room() []int {
	room := make([]int, len(p.Atoms))
	for a := range room {
		room[a] = 4
	}
	for _, b := range p.Bonds {
		order := int(b.Order)
		if b.Order == OrderAromatic {
			order = 1
		}
		room[b.A] -= order
		room[b.B] -= order
	}
	return room
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
			if x == a || b.Order != w.order || unitOf[x] >= 0 || slices.Contains(with, x) {
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
