package route

import (
	"context"
	"math"
	"math/bits"
	"slices"

	"shelfward/molecule"
)

// profile counts, hashed into a fixed table: bonds by elements, order and ring, skeleton bonds by the
// branching at both ends, carbons by what they bind, other atoms by hydrogens and neighbours. Two
// molecules one textbook step apart differ in few of them.
type profile [64]int16

// Marks that keep the kinds of entry apart before hashing.
const (
	inRing       = 1 << 20
	boundTo      = 1 << 21 // times one plus the branching of the carbon
	skeletonBond = 1 << 25
	carbonAtom   = 1 << 26
)

func (p *profile) add(entry uint32) { p[entry*2654435761>>26]++ }

func profileOf(m *molecule.Molecule) *profile {
	p := &profile{}
	branching := make([]uint32, m.NumAtoms()) // carbon neighbours
	for a := range branching {
		for _, n := range m.Neighbors(a) {
			if m.Atom(int(n.Atom)).Element == carbon {
				branching[a]++
			}
		}
	}
	for b := range m.NumBonds() {
		p.addBond(m, b, branching)
	}
	for a := range m.NumAtoms() {
		x := m.Atom(a)
		if x.Element != carbon { // end groups: an OH is no ether
			p.add(uint32(x.Element)*64 + uint32(x.Hydrogens)*8 + uint32(m.Degree(a)))
			continue
		}
		hetero := uint32(0)
		for _, n := range m.Neighbors(a) {
			if m.Atom(int(n.Atom)).Element != carbon {
				hetero += uint32(m.Bond(int(n.Bond)).Order)
			}
		}
		p.add(carbonAtom + hetero*8 + branching[a])
	}
	return p
}

func (p *profile) addBond(m *molecule.Molecule, b int, branching []uint32) {
	x := m.Bond(b)
	i, j := x.A, x.B
	if m.Atom(int(i)).Element > m.Atom(int(j)).Element {
		i, j = j, i
	}
	e, f := m.Atom(int(i)).Element, m.Atom(int(j)).Element
	order := uint32(x.Order)
	if x.Aromatic {
		order = 5
	}
	entry := (uint32(e)*131+uint32(f))*8 + order
	if x.Ring {
		entry += inRing
	}
	if e == carbon {
		if f == carbon {
			p.add(skeletonBond + min(branching[i], branching[j])*8 + max(branching[i], branching[j]))
		} else {
			entry += (1 + branching[i]) * boundTo
		}
	}
	p.add(entry)
}

// apart counts what p has and q has not, and the other way round.
func (p *profile) apart(q *profile) (only, lacks int) {
	for i := range p {
		if d := int(p[i]) - int(q[i]); d > 0 {
			only += d
		} else {
			lacks -= d
		}
	}
	return only, lacks
}

// guesser estimates how far a molecule is from what it could be made from.
type guesser struct {
	shelf  []*profile
	wants  *wants
	owed   []*profile // per set of items of from: the profiles of the items added up
	any    []*profile
	via    []*profile
	near   []map[molecule.Key]uint8 // what one, two ... steps from an item of From give: the items that lead there
	reach  *reach
	looked int // times that lookAhead looked
}

// forwardBook runs transforms forwards; *reactions.Book does.
type forwardBook interface {
	Products(ctx context.Context, start *molecule.Molecule, partners []*molecule.Molecule) ([]*molecule.Molecule, error)
}

// Partners that an item of From is tried with forwards: the smallest of the shelf.
const (
	mostPartners     = 24
	mostPartnerAtoms = 9
	mostOn           = 60  // products of one step that are taken one step on, with partners
	mostOnAlone      = 200 // and alone
)

// ahead is what forward steps from one item of From have given so far.
type ahead struct {
	item  int
	level [][]*molecule.Molecule // by number of steps
	seen  map[molecule.Key]bool
}

// lookAhead finds what forward steps from the items of From give, so that a molecule on the way is known
// as such before it is opened: one step with partners and a second alone; deeper takes the second with
// partners and a third alone. It costs some hundred openings at most.
func (g *guesser) lookAhead(book Book, shelf, from []*molecule.Molecule, deeper bool) {
	g.looked++
	forward, ok := book.(forwardBook)
	if !ok {
		return
	}
	partners := append(slices.Clone(from), smallest(shelf)...)
	g.near = nil
	for i, m := range from {
		a := &ahead{item: i, level: [][]*molecule.Molecule{{m}}, seen: map[molecule.Key]bool{m.FlatKey(): true}}
		if g.reach.one == nil {
			a.step(forward, partners, 1)
		} else {
			a.level = append(a.level, g.reach.consuming(i))
		}
		if deeper {
			a.step(forward, partners, mostOn)
		}
		a.step(forward, nil, mostOnAlone)
		g.remember(a)
	}
}

// step takes up to most molecules of the last level one step on.
func (a *ahead) step(forward forwardBook, partners []*molecule.Molecule, most int) {
	var next []*molecule.Molecule
	last := a.level[len(a.level)-1]
	for _, m := range last[:min(len(last), most)] {
		list, err := forward.Products(context.Background(), m, partners)
		if err != nil {
			return
		}
		for _, p := range list {
			if k := p.FlatKey(); !a.seen[k] {
				a.seen[k] = true
				next = append(next, p)
			}
		}
	}
	a.level = append(a.level, next)
}

func (g *guesser) remember(a *ahead) {
	for steps, list := range a.level[1:] {
		for len(g.near) <= steps {
			g.near = append(g.near, map[molecule.Key]uint8{})
		}
		for _, m := range list {
			g.near[steps][m.FlatKey()] |= g.wants.startBit(a.item)
		}
	}
}

// smallest lists the carbon compounds of the shelf that are small enough to be everyday partners.
func smallest(shelf []*molecule.Molecule) []*molecule.Molecule {
	var list []*molecule.Molecule
	for _, m := range shelf {
		if m.NumAtoms() <= mostPartnerAtoms {
			list = append(list, m)
		}
	}
	slices.SortStableFunc(list, func(a, b *molecule.Molecule) int { return a.NumAtoms() - b.NumAtoms() })
	return list[:min(len(list), mostPartners)]
}

func newGuesser(shelf []*molecule.Molecule, w *wants, r *reach) *guesser {
	g := &guesser{reach: r, wants: w, owed: make([]*profile, 1<<len(w.from))}
	for _, m := range shelf {
		g.shelf = append(g.shelf, profileOf(m))
	}
	for set := 1; set < len(g.owed); set++ {
		sum := *profileOf(w.from[bits.TrailingZeros(uint(set))])
		if rest := set & (set - 1); rest != 0 {
			for i := range sum {
				sum[i] += g.owed[rest][i]
			}
		}
		g.owed[set] = &sum
	}
	for _, m := range w.any {
		g.any = append(g.any, profileOf(m))
	}
	for _, m := range w.via {
		g.via = append(g.via, profileOf(m))
	}
	return g
}

// Parts of the estimate in steps: entries of the molecule that the start has not (a partner may bring
// them), and entries of the start that must go. Their proportion was chosen so that the published
// continuations of textbook syntheses stand high among all continuations; their size is several times
// what is true, because a first route is found sooner when the search keeps to one line.
const (
	guessMissing = 0.25
	guessSurplus = 0.5
	guessPerBond = 0.4 // for a molecule that resembles nothing on the shelf
	guessFar     = 1.5 // what no single step from an item of From is known to give
)

// steps estimates the steps between m and what it is made from. It orders the work of the search and
// proves nothing.
func (g *guesser) steps(m *molecule.Molecule, owed uint8) float64 {
	if n := g.reach.within(m, owed); n > 0 {
		return float64(n)
	}
	p := profileOf(m)
	if owed == 0 {
		least := 1 + guessPerBond*float64(m.NumBonds())
		for _, q := range g.shelf {
			least = min(least, p.stepsFrom(q))
		}
		return least
	}
	far := guessFar
	for i, q := range g.via {
		if owed&(1<<(g.wants.bits()-len(g.via)+i)) != 0 {
			far = max(far, 1+p.stepsFrom(q))
		}
	}
	if far > guessFar { // first to what must be made on the way
		return far
	}
	for i, near := range g.near {
		if near[m.FlatKey()]&owed != 0 {
			return float64(1 + i)
		}
	}
	if all := owed & uint8(len(g.owed)-1); all != 0 {
		return max(far, p.stepsFrom(g.owed[all]))
	}
	least := math.Inf(1)
	for _, q := range g.any {
		least = min(least, p.stepsFrom(q))
	}
	return max(far, least)
}

func (p *profile) stepsFrom(q *profile) float64 {
	missing, surplus := p.apart(q)
	return 1 + guessMissing*float64(missing) + guessSurplus*float64(surplus)
}
