package route

import (
	"context"
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
	shelf     []*profile
	owed      []*profile               // per set of items owed: the profiles of the items added up
	near      []map[molecule.Key]uint8 // what one, two ... steps from an item of From give: the items that lead there
	nearShelf map[molecule.Key]bool    // what one step from an item of a small shelf gives
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
	forward, ok := book.(forwardBook)
	if !ok {
		return
	}
	partners := append(slices.Clone(from), smallest(shelf)...)
	if !deeper {
		g.aroundShelf(forward, shelf, partners)
	}
	g.near = nil
	for i, m := range from {
		a := &ahead{item: i, level: [][]*molecule.Molecule{{m}}, seen: map[molecule.Key]bool{m.FlatKey(): true}}
		a.step(forward, partners, 1)
		if deeper {
			a.step(forward, partners, mostOn)
		}
		a.step(forward, nil, mostOnAlone)
		g.remember(a)
	}
}

// mostShelf is the size of shelf, in carbon compounds, up to which what lies one step from every item is
// worked out; beyond it would take longer than it saves.
const mostShelf = 40

// aroundShelf finds what one step from any item of a small shelf gives.
func (g *guesser) aroundShelf(forward forwardBook, shelf, partners []*molecule.Molecule) {
	var items []*molecule.Molecule
	for _, m := range shelf {
		if hasCarbon(m) {
			items = append(items, m)
		}
	}
	if len(items) > mostShelf {
		return
	}
	g.nearShelf = map[molecule.Key]bool{}
	for _, m := range items {
		list, err := forward.Products(context.Background(), m, partners)
		if err != nil {
			return
		}
		for _, p := range list {
			g.nearShelf[p.FlatKey()] = true
		}
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
			g.near[steps][m.FlatKey()] |= 1 << a.item
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

func newGuesser(shelf, from []*molecule.Molecule) *guesser {
	g := &guesser{owed: make([]*profile, 1<<len(from))}
	for _, m := range shelf {
		g.shelf = append(g.shelf, profileOf(m))
	}
	for set := 1; set < len(g.owed); set++ {
		sum := *profileOf(from[bits.TrailingZeros(uint(set))])
		if rest := set & (set - 1); rest != 0 {
			for i := range sum {
				sum[i] += g.owed[rest][i]
			}
		}
		g.owed[set] = &sum
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
	if owed != 0 {
		for i, near := range g.near {
			if near[m.FlatKey()]&owed != 0 {
				return float64(1 + i)
			}
		}
	}
	if owed == 0 && g.nearShelf[m.FlatKey()] {
		return 1
	}
	p := profileOf(m)
	if owed != 0 {
		return max(guessFar, p.stepsFrom(g.owed[owed]))
	}
	least := 1 + guessPerBond*float64(m.NumBonds())
	for _, q := range g.shelf {
		least = min(least, p.stepsFrom(q))
	}
	return least
}

func (p *profile) stepsFrom(q *profile) float64 {
	missing, surplus := p.apart(q)
	return 1 + guessMissing*float64(missing) + guessSurplus*float64(surplus)
}
