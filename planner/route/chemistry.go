package route

import (
	"bytes"
	"context"
	"math"
	"slices"
	"sync"

	"shelfward/molecule"
	"shelfward/planner/search"
	"shelfward/reactions"
)

// Book lists the judged steps that make a molecule; *reactions.Book does.
type Book interface {
	Expand(ctx context.Context, target *molecule.Molecule, stocked reactions.Stocked) ([]*reactions.Step, error)
}

// World is everything routes are made from. All functions must be safe for several goroutines.
type World struct {
	Book         Book
	Transforms   []*reactions.Transform // all that Book holds; used for bounds, words to avoid and counts
	Materials    Materials
	Shelf        []*molecule.Molecule                     // stand for the shelf: all of a small one, a sample of a large one; used for the order of the work only
	ShelfItems   int                                      // structures on the shelf
	Gravity      func(hazard string) int                  // place of a GHS code in the order of gravity, 0 the gravest
	Name         func(*molecule.Molecule) string          // "" if none is known
	Declined     func(*molecule.Molecule) bool            // restricted intermediates; nil: none
	Write        func(*molecule.Molecule) string          // canonical SMILES
	WriteClasses func(*molecule.Molecule) string          // with atom classes; nil: not written
	Read         func(string) (*molecule.Molecule, error) // reads what Write wrote
	Scale        *Scale                                   // what practice avoids at scale; nil: nothing

	names sync.Map // name -> namedMaterial, so that each is looked up once
	sets  sync.Map // *reactions.Conditions -> setFigures
}

// chemistry is the graph of molecules as the search sees it.
type chemistry struct {
	world         *World
	by            RankBy
	filter        *filter
	from          []*molecule.Molecule // all starts named, one of several included
	wants         wants
	floor         float64 // no step weighs less
	carbonPrice   float64 // least price of one mol of carbon, for Cost
	oneEnantiomer bool
	scale         *Scale // nil: the size of the batch plays no part
	guesser       *guesser
	least         []leastTransform // in order of weight
	reach         *reach
	counted       int // molecules run forwards that the search knows of

	mu        sync.RWMutex
	molecules map[search.Key]*molecule.Molecule
	options   map[search.Key][][]option // per molecule and edge
	known     map[search.Key]facts
	materials map[search.Key]*Material
	tally     tally               // what the wishes kept out
	refused   map[search.Key]bool // materials counted in it
	judged    *judgedSteps        // nil: steps are not kept
}

// judgedSteps keeps the steps of every molecule opened, for a second look without the wishes.
type judgedSteps struct {
	mu    sync.Mutex
	steps map[search.Key][]*reactions.Step
}

// newChemistry is a graph that is not yet ready for a search.
func newChemistry(w *World, by RankBy, f *filter, from []*molecule.Molecule, scale *Scale) *chemistry {
	c := &chemistry{world: w, by: by, filter: f, from: from, wants: wants{from: from}, scale: scale, molecules: map[search.Key]*molecule.Molecule{}, options: map[search.Key][][]option{},
		known: map[search.Key]facts{}, materials: map[search.Key]*Material{}, refused: map[search.Key]bool{}}
	if f.restrains() {
		c.judged = &judgedSteps{steps: map[search.Key][]*reactions.Step{}}
	}
	c.floor = c.leastStep()
	if by == Cost {
		c.carbonPrice = c.cheapestCarbon()
	}
	return c
}

// lookFromShelf makes ready for a search: what the shelf gives bounds and guides it.
func (c *chemistry) lookFromShelf(ctx context.Context) {
	c.least = c.leastWeights()
	c.reach = newReach(c)
	c.reach.first(ctx)
	c.guesser = newGuesser(c.world.Shelf, &c.wants, c.reach)
}

// leastStep is the least weight that any step under the loaded transforms can have: that of its
// conditions alone, with the whole product wanted and nothing objected.
func (c *chemistry) leastStep() float64 {
	if c.by == Cost || c.by == Waste {
		return 0 // see Bound
	}
	least := math.Inf(1)
	bare := &reactions.Step{}
	for _, t := range c.world.Transforms {
		for _, x := range t.Conditions {
			if c.filter.conditions(x) == nil {
				least = min(least, c.world.variant(c.by, c.scale, &option{step: bare, conditions: x}).Weight)
			}
		}
	}
	if math.IsInf(least, 1) {
		return 0
	}
	return least
}

// enter remembers a molecule under its exact key, or under that of the item of From that it counts
// as (another salt, a tautomer). Such an item is always a leaf, so its atoms need no order.
func (c *chemistry) enter(m *molecule.Molecule) search.Key {
	k := search.Key(m.Key())
	for _, f := range c.from {
		if ok, racemic := meets(f, m); ok && !(racemic && c.oneEnantiomer) {
			k = search.Key(f.Key())
			m = f
			break
		}
	}
	c.mu.Lock()
	if c.molecules[k] == nil {
		c.molecules[k] = m
	}
	c.mu.Unlock()
	return k
}

func (c *chemistry) molecule(k search.Key) *molecule.Molecule {
	c.mu.RLock()
	defer c.mu.RUnlock()
	return c.molecules[k]
}

// material describes the molecule k, looked up once.
func (c *chemistry) material(k search.Key) *Material {
	c.mu.RLock()
	mat := c.materials[k]
	c.mu.RUnlock()
	if mat != nil {
		return mat
	}
	m := c.molecule(k)
	found := c.world.Materials.Molecule(m)
	if held, ok := c.filter.held(c.world, m); ok {
		found = held
	} else if !found.OnShelf {
		if other, ok := c.otherMarks(m); ok {
			found = other
		}
	}
	found.sound()
	c.mu.Lock()
	defer c.mu.Unlock()
	if c.materials[k] == nil {
		c.materials[k] = &found
	}
	return c.materials[k]
}

// stocked says whether a molecule stands on the shelf or is an item of From.
func (c *chemistry) stocked(m *molecule.Molecule) bool {
	for _, f := range c.from {
		if ok, _ := meets(f, m); ok {
			return true
		}
	}
	return c.material(c.enter(m)).OnShelf
}

// Expand groups the judged steps by what they consume: one edge per set of molecules, one variant per
// step and condition set that the filter lets through. The bounds of what they consume are worked out
// here, where several molecules are opened at once.
func (c *chemistry) Expand(ctx context.Context, k search.Key) (search.Expansion, error) {
	x, err := c.expand(ctx, k)
	for i := range x.Edges {
		for _, child := range x.Edges[i].Children {
			c.facts(child.Key)
		}
	}
	return x, err
}

func (c *chemistry) expand(ctx context.Context, k search.Key) (search.Expansion, error) {
	steps, err := c.steps(ctx, k)
	if err != nil {
		return search.Expansion{}, err
	}
	x := search.Expansion{Tried: len(steps)}
	var edges [][]option
	for _, s := range steps {
		if c.restricted(s) {
			x.LeftOut++
			continue
		}
		if fatal(s) || enolic(s) || c.filter.bans(s) {
			continue
		}
		if why := c.filter.step(s); why != nil {
			c.turnDown(why, len(s.Conditions))
			continue
		}
		var usable []option
		for _, cond := range s.Conditions {
			if why := c.filter.conditions(cond); why != nil {
				c.turnDown(why, 1)
				continue
			}
			usable = append(usable, c.newOption(s, cond))
		}
		if len(usable) > 0 {
			edges = join(edges, usable)
			x.Bytes += heldBytes(s)
		}
	}
	for _, options := range edges {
		x.Edges = append(x.Edges, c.edge(options))
	}
	c.mu.Lock()
	c.options[k] = edges
	c.mu.Unlock()
	return x, nil
}

// steps asks the rules how a molecule is made.
func (c *chemistry) steps(ctx context.Context, k search.Key) ([]*reactions.Step, error) {
	if j := c.judged; j != nil {
		j.mu.Lock()
		steps, ok := j.steps[k]
		j.mu.Unlock()
		if ok {
			return steps, nil
		}
	}
	steps, err := c.world.Book.Expand(ctx, c.molecule(k), c.stocked)
	if j := c.judged; j != nil && err == nil {
		j.mu.Lock()
		j.steps[k] = steps
		j.mu.Unlock()
	}
	return steps, err
}

// turnDown counts ways that a wish keeps out.
func (c *chemistry) turnDown(why *refusal, ways int) {
	c.mu.Lock()
	c.tally.way(why, ways)
	c.mu.Unlock()
}

// fatal says whether an objection makes the step unsound.
func fatal(s *reactions.Step) bool {
	return slices.ContainsFunc(s.Objections, func(o reactions.Objection) bool { return o.Fatal })
}

// enolic says that a step takes the enol of a ketone or aldehyde for a material of its own: no bottle holds
// one, and the ketone would react as a ketone.
func enolic(s *reactions.Step) bool {
	return slices.ContainsFunc(s.Reactants, func(r reactions.Reactant) bool { return r.Molecule.SimpleEnol() })
}

func (c *chemistry) restricted(s *reactions.Step) bool {
	if c.world.Declined == nil {
		return false
	}
	return slices.ContainsFunc(s.Reactants, func(r reactions.Reactant) bool { return c.world.Declined(r.Molecule) })
}

// join adds options to the edge that consumes the same molecules and maps atoms alike, or as a new one.
func join(edges [][]option, add []option) [][]option {
	for i, e := range edges {
		if sameEdge(&e[0], &add[0]) {
			edges[i] = append(e, add...)
			return edges
		}
	}
	return append(edges, add)
}

// sameEdge says whether two steps consume the same molecules and take the atoms of the product from
// the same ones.
func sameEdge(a, b *option) bool {
	if len(a.children) != len(b.children) || len(a.step.Origins) != len(b.step.Origins) {
		return false
	}
	return slices.Equal(a.children, b.children) && slices.Equal(a.origins, b.origins)
}

// option is one way to carry out an edge: a judged step under one of its condition sets.
type option struct {
	step       *reactions.Step
	conditions *reactions.Conditions
	children   []search.Child // in order of key, so that two steps that consume the same are seen as alike
	order      []int          // order[i] is the index in step.Reactants of child i
	origins    []search.Origin
}

// newOption sorts the reactants of a step by key. A reactant that counts as an item of From becomes
// that item, whatever its form.
func (c *chemistry) newOption(s *reactions.Step, cond *reactions.Conditions) option {
	o := option{step: s, conditions: cond}
	keys := make([]search.Key, len(s.Reactants))
	for i, r := range s.Reactants {
		keys[i] = c.enter(r.Molecule)
		o.order = append(o.order, i)
	}
	slices.SortStableFunc(o.order, func(a, b int) int { return bytes.Compare(keys[a][:], keys[b][:]) })
	for _, i := range o.order {
		o.children = append(o.children, search.Child{Key: keys[i]})
	}
	o.origins = c.origins(&o)
	return o
}

// origins gives the origin of each product atom by child. Two steps may draw the same molecule with its
// atoms in another order; the order of the molecule entered first counts.
func (c *chemistry) origins(o *option) []search.Origin {
	child := make([]int32, len(o.order))
	onto := make([][]int32, len(o.order))
	for i, which := range o.order {
		child[which] = int32(i)
		onto[which] = renumbered(o.step.Reactants[which].Molecule, c.molecule(o.children[i].Key))
	}
	out := make([]search.Origin, len(o.step.Origins))
	for a, from := range o.step.Origins {
		out[a] = search.Origin{Child: -1, Atom: from.Atom}
		if from.Reactant >= 0 {
			out[a].Child = child[from.Reactant]
			if to := onto[from.Reactant]; to != nil {
				out[a].Atom = to[from.Atom]
			}
		}
	}
	return out
}

// renumbered gives the atom of b for each atom of a, the same molecule in another order; nil where the
// order is the same, or where b is another form that a counts as.
func renumbered(a, b *molecule.Molecule) []int32 {
	if a == b || a.Key() != b.Key() {
		return nil
	}
	at := make([]int32, b.NumAtoms())
	for i, rank := range b.Ranks() {
		at[rank] = int32(i)
	}
	out := make([]int32, a.NumAtoms())
	for i, rank := range a.Ranks() {
		out[i] = at[rank]
	}
	return out
}

func (c *chemistry) edge(options []option) search.Edge {
	e := search.Edge{Children: options[0].children, Origins: options[0].origins}
	for i := range options {
		e.Variants = append(e.Variants, c.world.variant(c.by, c.scale, &options[i]))
	}
	return e
}

// Leaf says whether k may be taken: it stands on the shelf, or it gives no carbon and is bought as a
// reagent is, or it is required. What is avoided may not be taken.
func (c *chemistry) Leaf(k search.Key) (float64, bool) {
	cost, ok, why := c.takeable(k)
	if why != nil && !c.refused[k] {
		c.refused[k] = true
		c.turnDown(why, 1)
	}
	return cost, ok
}

// takeable is Leaf with the wish that refuses a material at hand.
func (c *chemistry) takeable(k search.Key) (cost float64, ok bool, why *refusal) {
	mat := c.material(k)
	m := c.molecule(k)
	if !c.required(k) {
		if !mat.OnShelf && hasCarbon(m) {
			return 0, false, nil
		}
		if why := c.filter.material(mat, m); why != nil {
			return 0, false, why
		}
	}
	return c.world.leaf(c.by, mat), true, nil
}

// required says whether k is an item of From.
func (c *chemistry) required(k search.Key) bool {
	return slices.ContainsFunc(c.from, func(f *molecule.Molecule) bool { return search.Key(f.Key()) == k })
}

const carbon = molecule.Element(6)

func hasCarbon(m *molecule.Molecule) bool { return m.Formula().Count[carbon] > 0 }

// carbonMass is the molar mass of carbon in g/mol (IUPAC standard atomic weight, abridged).
const carbonMass = 12.011

// cheapestCarbon is a price that no mol of carbon among the materials at hand undercuts.
func (c *chemistry) cheapestCarbon() float64 {
	least, priced, unpriced := c.world.Materials.CarbonPrice()
	if !priced {
		least = math.Inf(1)
	}
	if unpriced > 0 {
		least = min(least, unknownPrice/float64(unpriced))
	}
	for _, m := range c.from {
		if n := m.Formula().Count[carbon]; n > 0 {
			mat := c.world.Materials.Molecule(m)
			price, _ := mat.Price()
			least = min(least, price/float64(n))
		}
	}
	if math.IsInf(least, 1) {
		return 0
	}
	return least
}

// Guess estimates the steps still needed from what the molecule has in common with what it could be
// made from; it orders the work and proves nothing.
func (c *chemistry) Guess(k search.Key, owed uint8) float64 {
	return c.floor * c.guesser.steps(c.molecule(k), owed)
}
