package route

import (
	"cmp"
	"math"
	"slices"

	"shelfward/molecule"
	"shelfward/planner/search"
	"shelfward/reactions"
)

// The bound, on one page.
//
// A molecule M that is not taken from stock is made by a last step from reactants. What that must cost at
// least is found from both of its ends, each fact holding for every step that the rules can propose:
//
//  1. The last step. Its transform must be one whose product side lies on M (elements, bonds, rings,
//     groups, charges: whatever the pattern asks). Of these transforms the one with the cheapest conditions
//     that may be used counts, its product whole, nothing objected: ending(M). If there is none, M cannot
//     be made at all.
//  2. The shelf. Every transform was run forwards on every choice of stock, so what ONE step can supply is
//     a table (reach.one), with the least cost of each entry and the starts it consumes. If M is not in
//     it, some reactant is itself made: M needs two steps along its longest run, and costs at least
//     ending(M) + the cheapest entry of the table. All that no shelf item and no single step can supply
//     (an element, a ring, a carbon count, a group) is in this statement, because the table is complete.
//  3. The step after. Once the search has gone on for a while, the transforms are run on the entries of the
//     first table as well (reach.two: trees of two steps). A molecule in neither table needs three steps in
//     its tree: ending(M) + the cheapest of two steps, be they in one line or side by side.
//  4. Starts that are still owed. The tables know which starts of --from a tree consumes; a state that
//     still owes a set of them is looked up with that set, so that a molecule one step from the shelf but
//     not from X has no cheap entry when X is owed.
//  5. Price and waste are counted per mole: the carbon of M comes from materials whose mass, and whose
//     price at that of the cheapest carbon at hand, is charged at least. Steps weigh nothing there, but
//     the tables still give the number of steps along the longest run.
//
// Why it never exceeds the true cost: a step that is judged sound lays the same parts on the same
// molecules as the forward run did (reactions.Forwards hands over what judging would drop), a step
// weighs at least what its cheapest conditions weigh alone, costs rise with every argument, and loops or
// lost atoms only make real routes fewer than those counted here. Keys of the tables see through salts,
// tautomers and stereo marks, so that entries are shared rather than missed; stock is run in all its
// tautomeric forms. Where the stock is too large for the tables they are left out, and the bound is the
// last step alone. TestBoundNeverExceeds checks it against every molecule of finished searches.

// facts is what is worked out once per molecule for its bound.
type facts struct {
	ending float64 // least weight of a step that makes it, infinite if no transform ends in it
	flat   molecule.Key
	odd    bool // may lose a carbon-free piece that the tables do not know
}

// leastTransform is a transform with the least weight of its conditions.
type leastTransform struct {
	t      *reactions.Transform
	weight float64
}

// Bound says what making k costs at least and how many steps its longest run has at least; see above.
func (c *chemistry) Bound(k search.Key, owed uint8) (int, float64) {
	f := c.facts(k)
	steps, least := c.reach.bound(&f, owed)
	switch c.by {
	case Waste:
		least = carbonMass * float64(c.molecule(k).Formula().Count[carbon])
	case Cost:
		least = c.carbonPrice * float64(c.molecule(k).Formula().Count[carbon])
	}
	if math.IsInf(f.ending, 1) {
		return steps, f.ending
	}
	return steps, least
}

// facts returns the facts about k, worked out once.
func (c *chemistry) facts(k search.Key) facts {
	c.mu.RLock()
	f, ok := c.known[k]
	c.mu.RUnlock()
	if ok {
		return f
	}
	m := c.molecule(k)
	f = facts{ending: c.ending(m), flat: flatKey(m), odd: c.reach.oddPiece(m)}
	c.mu.Lock()
	c.known[k] = f
	c.mu.Unlock()
	return f
}

// ending is the least weight of a step that could have made m.
func (c *chemistry) ending(m *molecule.Molecule) float64 {
	book, ok := c.world.Book.(reachBook)
	if !ok {
		return c.floor
	}
	e := book.Ending(m)
	for i := range c.least {
		if e.By(c.least[i].t) {
			return c.least[i].weight
		}
	}
	return math.Inf(1)
}

// leastWeights orders the transforms that may be used by the least weight of their conditions.
func (c *chemistry) leastWeights() (list []leastTransform) {
	for _, t := range c.world.Transforms {
		if w := c.leastWeight(t.Conditions...); !math.IsInf(w, 1) {
			list = append(list, leastTransform{t, w})
		}
	}
	slices.SortStableFunc(list, func(a, b leastTransform) int { return cmp.Compare(a.weight, b.weight) })
	return list
}

// leastWeight is the least weight of a step under one of the condition sets, the whole product wanted and
// nothing objected; infinite if none may be used. Steps counted per mole weigh nothing: their amounts go
// by molecules not known here.
func (c *chemistry) leastWeight(sets ...*reactions.Conditions) float64 {
	least := math.Inf(1)
	for _, x := range sets {
		switch {
		case c.filter.conditions(x) != nil:
		case c.by.cost() == search.PerMole:
			return 0
		default:
			least = min(least, c.world.variant(c.by, c.scale, &option{step: &reactions.Step{}, conditions: x}).Weight)
		}
	}
	return least
}
