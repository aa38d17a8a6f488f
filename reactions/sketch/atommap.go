package sketch

import (
	"fmt"
	"sort"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// Costs of a change between the two sides, in tenths of a bond. They only order the maps: the one with the
// least change is taken, as a chemist pairs the atoms (principle of minimal structure change; the weights are
// ours: a carbon-carbon bond is the last to be thought broken, a halogen the first to leave).
const (
	costMade         = 20
	costBroken       = 20
	costBrokenCC     = 30
	costBrokenPlain  = 45 // between two carbons that only single bonds hold
	costDouble       = 16 // more for each further bond between the two
	costBrokenHalide = 14
	costBrokenAcyl   = 17 // at an acyl carbon: of an acid and an alcohol the acid loses its oxygen
	costOrder        = 10
	costAromatic     = 8
	costCharge       = 5
	costHydrogen     = 3
	costCarbonH      = 12 // a carbon-hydrogen bond is a bond like others; one to O or N comes and goes
	costNewCarbon    = 200
	costNewAtom      = 8
	costNewNitrogen  = 20 // fewer reagents bring nitrogen than oxygen or a halogen
	costCarbonLeaves = 25 // a carbon group that leaves a heteroatom behind: the heteroatom is the better leaver
	costArylCleaved  = 10
	maxMapNodes      = 400_000
)

// mapper looks for the map with the least change by depth first search with a bound.
type mapper struct {
	l, r  *molecule.Molecule // reactants, products
	order []int              // product atoms in the order of decision
	cand  [][]int32          // product atom -> reactant atoms of its element, the most alike first
	fixed []int32            // product atom -> reactant atom by the drawing's numbers, else -1

	to    []int32 // product atom -> reactant atom, -1 none, -2 not decided
	from  []int32 // reactant atom -> product atom, -1
	best  []int32
	least int
	nodes int
}

// mapAtoms pairs product atoms with reactant atoms. Numbers of the drawing that stand on both sides are kept.
func mapAtoms(l, r *molecule.Molecule) (to []int32, mapped bool, err error) {
	m := &mapper{l: l, r: r, least: 1 << 30}
	if mapped, err = m.readNumbers(); err != nil {
		return nil, false, err
	}
	like := alike(l, r)
	m.candidates(like)
	m.arrange(like)
	m.to, m.from = make([]int32, r.NumAtoms()), make([]int32, l.NumAtoms())
	for i := range m.to {
		m.to[i] = -2
	}
	for i := range m.from {
		m.from[i] = -1
	}
	m.decide(0, 0)
	return m.best, mapped, nil
}

func (m *mapper) readNumbers() (bool, error) {
	at := map[uint16]int32{}
	for a := range m.l.NumAtoms() {
		c := m.l.Atom(a).Class
		if _, twice := at[c]; twice && c != 0 {
			return false, fmt.Errorf("atom number %d stands twice among the reactants", c)
		}
		at[c] = int32(a)
	}
	m.fixed = make([]int32, m.r.NumAtoms())
	any := false
	seen := map[uint16]bool{}
	for a := range m.r.NumAtoms() {
		m.fixed[a] = -1
		c := m.r.Atom(a).Class
		la, ok := at[c]
		if c == 0 || !ok {
			continue
		}
		if seen[c] {
			return false, fmt.Errorf("atom number %d stands twice among the products", c)
		}
		seen[c] = true
		if x, y := m.l.Atom(int(la)).Element, m.r.Atom(a).Element; x != y {
			return false, fmt.Errorf("atom number %d is %s among the reactants and %s among the products", c, x.Symbol(), y.Symbol())
		}
		m.fixed[a], any = la, true
	}
	return any, nil
}

// radii is how many spheres of neighbours are compared.
const radii = 5

// alike returns, for a product and a reactant atom, in how many spheres their surroundings agree.
func alike(l, r *molecule.Molecule) func(p, q int) int {
	hl, hr := spheres(l), spheres(r)
	return func(p, q int) int {
		n := 0
		for n < radii && hr[n][p] == hl[n][q] {
			n++
		}
		return n
	}
}

func spheres(m *molecule.Molecule) [radii][]uint64 {
	var out [radii][]uint64
	for k := range out {
		out[k] = make([]uint64, m.NumAtoms())
		for a := range out[k] {
			x := m.Atom(a)
			h := uint64(x.Element)*31 + uint64(uint8(x.Charge))*7
			if x.Aromatic {
				h += 3
			}
			if k > 0 {
				for _, n := range m.Neighbors(a) {
					h += mix(out[k-1][n.Atom] + uint64(kind(m, int(n.Bond)))<<56) // a sum: the order of neighbours does not count
				}
			}
			out[k][a] = mix(h)
		}
	}
	return out
}

func mix(h uint64) uint64 {
	h ^= h >> 29
	h *= 0xbf58476d1ce4e5b9
	h ^= h >> 32
	return h
}

// kind is the order of a bond with 4 for an aromatic one, 0 for none.
func kind(m *molecule.Molecule, bond int) uint8 {
	switch {
	case bond < 0:
		return 0
	case m.Bond(bond).Aromatic:
		return molecule.OrderAromatic
	}
	return m.Bond(bond).Order
}

func (m *mapper) candidates(like func(p, q int) int) {
	m.cand = make([][]int32, m.r.NumAtoms())
	for p := range m.cand {
		if m.fixed[p] >= 0 {
			m.cand[p] = []int32{m.fixed[p]}
			continue
		}
		for q := range m.l.NumAtoms() {
			if m.l.Atom(q).Element == m.r.Atom(p).Element {
				m.cand[p] = append(m.cand[p], int32(q))
			}
		}
		sort.SliceStable(m.cand[p], func(i, j int) bool { return like(p, int(m.cand[p][i])) > like(p, int(m.cand[p][j])) })
	}
}

// arrange decides first where one reactant atom is clearly the most alike, then along the bonds.
func (m *mapper) arrange(like func(p, q int) int) {
	n := m.r.NumAtoms()
	clear := make([]int, n)
	for p := range clear {
		c := m.cand[p]
		switch {
		case m.fixed[p] >= 0:
			clear[p] = 1000
		case len(c) > 0:
			top := like(p, int(c[0]))
			clear[p] = 10 * top
			if len(c) > 1 && like(p, int(c[1])) == top {
				clear[p] -= 5
			}
		}
	}
	done, near := make([]bool, n), make([]bool, n)
	for len(m.order) < n {
		next := -1
		for p := range n {
			if !done[p] && (next < 0 || near[p] && !near[next] || near[p] == near[next] && clear[p] > clear[next]) {
				next = p
			}
		}
		done[next] = true
		m.order = append(m.order, next)
		for _, nb := range m.r.Neighbors(next) {
			near[nb.Atom] = true
		}
	}
}

// decide settles the atoms of order from k on; cost is that of the changes among those settled.
func (m *mapper) decide(k, cost int) {
	m.nodes++
	if cost >= m.least || m.nodes > maxMapNodes {
		return
	}
	if k == len(m.order) {
		if total := cost + m.leaving(); total < m.least {
			m.least, m.best = total, append(m.best[:0], m.to...)
		}
		return
	}
	p := m.order[k]
	for pass := range 2 { // first along the bonds of a settled neighbour
		for _, q := range m.cand[p] {
			if m.from[q] < 0 && m.besideSettled(p, int(q)) == (pass == 0) {
				m.settle(p, q, k, cost)
			}
		}
	}
	if m.fixed[p] < 0 {
		m.settle(p, -1, k, cost)
	}
}

func (m *mapper) settle(p int, q int32, k, cost int) {
	m.to[p] = q
	if q >= 0 {
		m.from[q] = int32(p)
	}
	m.decide(k+1, cost+m.change(p))
	if q >= 0 {
		m.from[q] = -1
	}
	m.to[p] = -2
}

func (m *mapper) besideSettled(p, q int) bool {
	for _, n := range m.r.Neighbors(p) {
		if s := m.to[n.Atom]; s >= 0 && m.l.BondBetween(q, int(s)) >= 0 {
			return true
		}
	}
	return false
}

// change is the cost of atom p against what is settled already.
func (m *mapper) change(p int) int {
	cost, q := 0, m.to[p]
	if q < 0 {
		cost = costNewAtom
		switch m.r.Atom(p).Element {
		case carbon:
			cost = costNewCarbon
		case nitrogen:
			cost = costNewNitrogen
		}
	}
	for _, n := range m.r.Neighbors(p) {
		s := m.to[n.Atom]
		switch {
		case s == -2:
		case q < 0 && s < 0:
		case q < 0 || s < 0:
			cost += costMade
		default:
			cost += bondChange(kind(m.l, m.l.BondBetween(int(q), int(s))), kind(m.r, int(n.Bond)))
		}
	}
	if q < 0 {
		return cost
	}
	for _, n := range m.l.Neighbors(int(q)) {
		if s := m.from[n.Atom]; s >= 0 && m.r.BondBetween(p, int(s)) < 0 {
			cost += m.broken(int(n.Bond))
		}
	}
	x, y := m.l.Atom(int(q)), m.r.Atom(p)
	hydrogen := costHydrogen
	if x.Element == carbon {
		hydrogen = costCarbonH
	}
	return cost + costCharge*abs(int(x.Charge)-int(y.Charge)) + hydrogen*abs(int(x.Hydrogens)-int(y.Hydrogens))
}

func bondChange(before, after uint8) int {
	switch {
	case before == after:
		return 0
	case before == 0:
		return costMade
	case before == molecule.OrderAromatic || after == molecule.OrderAromatic:
		return costAromatic
	}
	return costOrder * abs(int(before)-int(after))
}

// broken is the cost of breaking a bond of the reactants.
func (m *mapper) broken(bond int) int {
	b := m.l.Bond(bond)
	x, y := m.l.Atom(int(b.A)).Element, m.l.Atom(int(b.B)).Element
	cost := costBroken
	switch {
	case x == carbon && y == carbon:
		cost = costBrokenCC
		if m.plain(int(b.A)) && m.plain(int(b.B)) {
			cost = costBrokenPlain
		}
	case x.IsHalogen() || y.IsHalogen():
		cost = costBrokenHalide
	case x == carbon && acyl(m.l, int(b.A)) || y == carbon && acyl(m.l, int(b.B)):
		cost = costBrokenAcyl
	}
	if m.l.Atom(int(b.A)).Aromatic || m.l.Atom(int(b.B)).Aromatic {
		cost += costArylCleaved
	}
	if !b.Aromatic {
		cost += costDouble * (int(b.Order) - 1)
	}
	return cost
}

// plain says that a carbon has single bonds to carbons only.
func (m *mapper) plain(a int) bool {
	return pattern.Hybridisation(m.l, a) == "sp3" && heteroNeighbours(m.l, a) == 0
}

// acyl says that a carbon carries a double bond to oxygen, sulfur or nitrogen.
func acyl(m *molecule.Molecule, a int) bool {
	for _, n := range m.Neighbors(a) {
		if m.Bond(int(n.Bond)).Order == 2 && m.Atom(int(n.Atom)).Element != carbon {
			return true
		}
	}
	return false
}

// leaving is the cost of the bonds between what stays and what leaves.
func (m *mapper) leaving() int {
	cost := 0
	for a := range m.from {
		if m.from[a] < 0 {
			continue
		}
		for _, n := range m.l.Neighbors(a) {
			if m.from[n.Atom] < 0 {
				cost += m.broken(int(n.Bond))
				if m.l.Atom(int(n.Atom)).Element == carbon && m.l.Atom(a).Element != carbon {
					cost += costCarbonLeaves
				}
			}
		}
	}
	return cost
}

func abs(n int) int { return max(n, -n) }
