package route

import (
	"context"
	"math"
	"sync"
	"sync/atomic"

	"shelfward/molecule"
	"shelfward/planner/search"
	"shelfward/reactions"
)

// reachBook runs transforms forwards; *reactions.Book does.
type reachBook interface {
	Forwards(stock []*molecule.Molecule) *reactions.Forwards
	CarbonFree() []*molecule.Molecule
	Ending(m *molecule.Molecule) reactions.Ending
}

// Sizes of stock, in carbon compounds, up to which it is run forwards: all of it on itself, or the starts
// on all of it. Beyond, pairing costs more than it saves.
const (
	mostStock = 40
	mostMates = 400
)

// reach is the end of the search that starts at the shelf: what one step from stock gives, and two.
type reach struct {
	c        *chemistry
	forwards *reactions.Forwards // nil: nothing is known
	items    []stockItem         // parallel to the stock of forwards
	whole    bool                // the whole stock was run on itself; else only the starts on it
	sets     int                 // of starts owed
	one, two map[molecule.Key][]float64
	made     []*molecule.Molecule  // of one, each constitution once
	small    map[molecule.Key]bool // stock of so few atoms that it has no stereoisomers
	opened   int                   // molecules run forwards
	leastOne float64               // no molecule that is made costs less
	leastTwo float64               // no molecule that takes two steps or more costs less
}

// stockItem is one drawn form of a material in stock.
type stockItem struct {
	start uint8 // the bit that it pays as a start
	cost  float64
}

// newReach prepares the stock. Nothing is run yet.
func newReach(c *chemistry) *reach {
	r := &reach{c: c, sets: 1 << c.wants.bits(), leastOne: c.floor, small: map[molecule.Key]bool{}}
	book, ok := c.world.Book.(reachBook)
	if !ok {
		return r
	}
	if c.world.ShelfItems > len(c.world.Shelf) { // a sample of a large shelf says nothing about the rest
		return r
	}
	carbons := 0
	for _, m := range c.world.Shelf {
		if hasCarbon(m) {
			carbons++
		}
	}
	r.whole = carbons <= mostStock
	if carbons > mostMates || !r.whole && len(c.from) == 0 {
		return r
	}
	var forms []*molecule.Molecule
	seen := map[molecule.Key]bool{}
	add := func(m *molecule.Molecule) {
		key := c.enter(m)
		cost, ok, _ := c.takeable(key)
		if !ok {
			return
		}
		item := stockItem{cost: cost}
		for i, f := range c.from {
			if search.Key(f.Key()) == key {
				item.start = c.wants.startBit(i)
			}
		}
		free := m.FreeForm()
		if m.NumAtoms() < 4 {
			r.small[flatKey(m)] = true
		}
		for _, f := range append([]*molecule.Molecule{free, m}, free.Forms()...) {
			if !seen[f.Key()] {
				seen[f.Key()] = true
				forms = append(forms, f)
				r.items = append(r.items, item)
			}
		}
	}
	for _, list := range [][]*molecule.Molecule{c.from, c.inHand(), c.world.Shelf, book.CarbonFree()} {
		for _, m := range list {
			add(m)
		}
	}
	r.forwards = book.Forwards(forms)
	return r
}

// inHand lists what is there besides the shelf.
func (c *chemistry) inHand() (list []*molecule.Molecule) {
	for i := range c.filter.inHand {
		list = append(list, c.filter.inHand[i].Molecule)
	}
	return list
}

// first runs one step from stock.
func (r *reach) first(ctx context.Context) {
	if r.forwards == nil {
		return
	}
	one := map[molecule.Key][]float64{}
	seen := map[molecule.Key]bool{}
	weights := r.weights()
	enter := func(start int, x reactions.Formed) {
		r.enter(one, x.Product, weights(&x), append(x.With, start), 0, 0, false)
		if k := x.Product.FlatKey(); !seen[k] {
			seen[k] = true
			r.made = append(r.made, x.Product)
		}
	}
	var err error
	if r.whole {
		r.opened = len(r.items)
		err = r.forwards.Stock(ctx, enter)
	} else {
		for i, item := range r.items {
			if item.start == 0 || err != nil {
				continue
			}
			r.opened++
			err = r.forwards.FromStock(ctx, i, func(x reactions.Formed) { enter(i, x) })
		}
	}
	if err != nil {
		r.forwards, r.made = nil, nil
		return
	}
	r.one = one
	if r.whole {
		r.leastOne = r.leastOf(one)
		r.leastTwo = r.then(r.c.floor, r.leastOne)
	}
}

// second runs one step more from what the first gave. It reports whether it was done.
func (r *reach) second(ctx context.Context, workers int) (bool, error) {
	if r.one == nil || !r.whole || r.two != nil {
		return false, nil
	}
	two := map[molecule.Key][]float64{}
	type formed struct {
		m    *molecule.Molecule
		w    float64
		with []int
	}
	found := make([][]formed, len(r.made))
	failed := make([]error, len(r.made))
	var next atomic.Int32
	work := func() {
		f, weights := r.forwards.Clone(), r.weights()
		for {
			i := int(next.Add(1)) - 1
			if i >= len(r.made) {
				return
			}
			m := r.made[i]
			for _, form := range append([]*molecule.Molecule{m}, m.Forms()...) {
				failed[i] = f.From(ctx, form, func(x reactions.Formed) {
					if w := weights(&x); !math.IsInf(w, 1) {
						x.Product.SeenThroughKey() // here, because it takes its time
						found[i] = append(found[i], formed{x.Product, w, x.With})
					}
				})
			}
			if failed[i] != nil {
				return
			}
		}
	}
	var wait sync.WaitGroup
	for w := 1; w < workers; w++ {
		wait.Go(work)
	}
	work()
	wait.Wait()
	for _, err := range failed {
		if err != nil {
			return false, err
		}
	}
	for i, list := range found {
		row := r.one[flatKey(r.made[i])]
		for _, x := range list {
			for owed, cost := range row {
				if !math.IsInf(cost, 1) {
					r.enter(two, x.m, x.w, x.with, uint8(owed), cost, true)
				}
			}
		}
	}
	r.two = two
	r.opened += len(r.made)
	r.leastTwo = min(r.leastOf(two), r.then(r.c.floor, r.leastOne, r.leastOne))
	return true, nil
}

// weights returns a function that gives the least weight of the step that formed x, with a memory.
func (r *reach) weights() func(x *reactions.Formed) float64 {
	byTransform, bySet := map[*reactions.Transform]float64{}, map[*reactions.Conditions]float64{}
	return func(x *reactions.Formed) float64 {
		if x.Conditions != nil {
			w, ok := bySet[x.Conditions]
			if !ok {
				w = r.c.leastWeight(x.Conditions)
				bySet[x.Conditions] = w
			}
			return w
		}
		w, ok := byTransform[x.Transform]
		if !ok {
			w = r.c.leastWeight(x.Transform.Conditions...)
			byTransform[x.Transform] = w
		}
		return w
	}
}

// enter adds a product to a table: its step weighs weight and consumes stock, and with made a molecule of
// the given cost that has consumed the starts of owed.
func (r *reach) enter(table map[molecule.Key][]float64, m *molecule.Molecule, weight float64, stock []int, owed uint8, cost float64, made bool) {
	if math.IsInf(weight, 1) {
		return
	}
	var list [8]float64
	costs := list[:0]
	if made {
		costs = append(costs, cost)
	}
	for _, i := range stock {
		owed |= r.items[i].start
		costs = append(costs, r.items[i].cost)
	}
	owed |= r.c.wants.viaBits(m, true)
	total := r.then(weight, costs...)
	key := flatKey(m)
	row := table[key]
	if row == nil {
		row = make([]float64, r.sets)
		for i := range row {
			row[i] = math.Inf(1)
		}
		table[key] = row
	}
	for set := range row { // what consumes more also serves a state that owes less
		if uint8(set)&^owed == 0 {
			row[set] = min(row[set], total)
		}
	}
}

// then is the cost of a step on reactants of given costs. Counted per mole nothing is known.
func (r *reach) then(weight float64, reactants ...float64) float64 {
	if r.c.by.cost() == search.PerMole {
		return 0
	}
	return r.c.by.cost().Combine(&search.Variant{Weight: weight, Yield: 1}, reactants)
}

// leastOf is the least cost of a table. What stands on the shelf is only made to consume a start; whether a
// key means just that is sure for molecules too small for stereo marks.
func (r *reach) leastOf(table map[molecule.Key][]float64) float64 {
	least := math.Inf(1)
	for k, row := range table {
		if !r.small[k] {
			least = min(least, row[0])
		}
		for _, cost := range row[1:] {
			least = min(least, cost)
		}
	}
	return least
}

// bound is points 1 to 4 of the bound.
func (r *reach) bound(f *facts, owed uint8) (steps int, cost float64) {
	if r.one == nil || f.odd || owed == 0 && !r.whole {
		return 1, f.ending
	}
	one, two := lookUp(r.one, f.flat, owed), lookUp(r.two, f.flat, owed)
	steps = 2
	if !math.IsInf(one, 1) {
		steps = 1
	}
	switch {
	case r.two != nil:
		cost = min(one, two, r.then(f.ending, r.leastTwo), r.then(f.ending, r.leastOne, r.leastOne))
	default:
		cost = min(one, r.then(f.ending, r.leastOne))
	}
	return steps, max(cost, f.ending)
}

func lookUp(table map[molecule.Key][]float64, k molecule.Key, owed uint8) float64 {
	if row := table[k]; row != nil {
		return row[owed]
	}
	return math.Inf(1)
}

// within says how many steps from stock m is, consuming the starts owed, as far as the tables go; 0: not
// known.
func (r *reach) within(m *molecule.Molecule, owed uint8) int {
	if r.one == nil || owed == 0 && !r.whole {
		return 0
	}
	k := flatKey(m)
	switch {
	case !math.IsInf(lookUp(r.one, k, owed), 1):
		return 1
	case !math.IsInf(lookUp(r.two, k, owed), 1):
		return 2
	}
	return 0
}

// consuming lists what one step gives that consumes start i.
func (r *reach) consuming(i int) (list []*molecule.Molecule) {
	for _, m := range r.made {
		if !math.IsInf(lookUp(r.one, flatKey(m), r.c.wants.startBit(i)), 1) {
			list = append(list, m)
		}
	}
	return list
}

// oddPiece says that m holds a group of heteroatoms that, cut off whole or in part, could be a carbon-free
// material other than those run forwards: several nitrogens that are neither a hydrazine nor an azide.
func (r *reach) oddPiece(m *molecule.Molecule) bool {
	seen := make([]bool, m.NumAtoms())
	for a := range seen {
		if seen[a] || m.Atom(a).Element == carbon {
			continue
		}
		seen[a] = true
		group := []int32{int32(a)}
		nitrogens := 0
		for i := 0; i < len(group); i++ {
			if m.Atom(int(group[i])).Element == 7 {
				nitrogens++
			}
			for _, n := range m.Neighbors(int(group[i])) {
				if !seen[n.Atom] && m.Atom(int(n.Atom)).Element != carbon {
					seen[n.Atom] = true
					group = append(group, n.Atom)
				}
			}
		}
		if nitrogens > 1 && (nitrogens != len(group) || nitrogens > 3) {
			return true
		}
	}
	return false
}

// Tighten runs the shelf's end of the search one step further when the target's end has opened half as many
// molecules as that would open, or found no route in a first look: then it costs little beside what it
// saves. Where the shelf is too large for that, only the starts are looked ahead from, for the order of the
// work.
func (c *chemistry) Tighten(ctx context.Context, s search.Standing) (did search.Tightening, err error) {
	lost := s.Routes == 0 && s.Expanded >= firstLook
	deeper := lost && !c.reach.whole && c.guesser.looked == 1
	switch {
	case c.reach.whole && (lost || 2*s.Expanded >= len(c.reach.made)):
		did.Changed, err = c.reach.second(ctx, s.Workers)
	case len(c.from) > 0 && s.Expanded >= firstSteps && (c.guesser.looked == 0 || deeper):
		c.guesser.lookAhead(c.world.Book, c.world.Shelf, c.from, deeper)
		did.Changed = true
	}
	did.Opened, c.counted = c.reach.opened-c.counted, c.reach.opened
	return did, err
}

var _ search.Tightener = (*chemistry)(nil)
