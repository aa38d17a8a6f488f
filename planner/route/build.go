package route

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"shelfward/molecule"
	"shelfward/planner/search"
	"shelfward/reactions"
)

// oneWayEach rejects trees that make the same molecule in two ways: at the bench the cheaper way would
// serve both places, and that route is in the list by itself.
func (c *chemistry) oneWayEach(t *search.Tree) bool {
	type way struct{ edge, variant int }
	ways := map[search.Key]way{}
	fits := true
	var walk func(t *search.Tree)
	walk = func(t *search.Tree) {
		w := way{t.Edge, t.Variant}
		if old, met := ways[t.Key]; met && old != w {
			fits = false
		}
		ways[t.Key] = w
		for _, k := range t.Children {
			walk(k)
		}
	}
	walk(t)
	return fits && (!c.oneEnantiomer || c.keepsHand(t))
}

// keepsHand says whether no step of the tree leaves the product's marks relative only.
func (c *chemistry) keepsHand(t *search.Tree) bool {
	if t.Edge >= 0 && c.option(t).step.Racemic && len(c.molecule(t.Key).Centers()) > 0 {
		return false
	}
	return !slices.ContainsFunc(t.Children, func(k *search.Tree) bool { return !c.keepsHand(k) })
}

// option returns the step and conditions that a tree node chose.
func (c *chemistry) option(t *search.Tree) *option {
	c.mu.RLock()
	defer c.mu.RUnlock()
	return &c.options[t.Key][t.Edge][t.Variant]
}

// making is one distinct step of a route before it is written down.
type making struct {
	key      search.Key
	option   *option
	tree     *search.Tree
	children []search.Key // parallel to option.children
}

// makings lists the distinct steps of a tree in bench order: the longer branch first, every step
// behind those that make what it consumes.
func (c *chemistry) makings(t *search.Tree) ([]making, error) {
	var list []making
	seen := map[search.Key]bool{}
	var walk func(t *search.Tree)
	walk = func(t *search.Tree) {
		if t.Edge < 0 || seen[t.Key] {
			return
		}
		seen[t.Key] = true
		branches := slices.Clone(t.Children)
		sort.SliceStable(branches, func(i, j int) bool { return branches[i].Depth() > branches[j].Depth() })
		for _, b := range branches {
			walk(b)
		}
		m := making{key: t.Key, option: c.option(t), tree: t}
		for _, k := range t.Children {
			m.children = append(m.children, k.Key)
		}
		list = append(list, m)
	}
	walk(t)
	makes, takes := make([]string, len(list)), make([][]string, len(list))
	for i, m := range list {
		makes[i] = string(m.key[:])
		for _, k := range m.children {
			takes[i] = append(takes[i], string(k[:]))
		}
	}
	order, err := benchOrder(makes, takes)
	if err != nil {
		return nil, err
	}
	sorted := make([]making, len(list))
	for i, j := range order {
		sorted[i] = list[j]
	}
	return sorted, nil
}

// build writes a route of the search down with its figures.
func (c *chemistry) build(found search.Route, p *Plan) (*Route, error) {
	list, err := c.makings(found.Tree)
	if err != nil {
		return nil, err
	}
	r := emptyRoute()
	r.Weight, r.Proven, r.stood, r.made = found.Cost, found.Proven, found.Stood, list
	if len(list) == 0 { // the target itself is an item of From
		taken := c.takenFromShelf(found.Tree.Key)
		taken.Weight, taken.stood = found.Cost, found.Stood
		return &taken, nil
	}
	number := map[search.Key]int{}
	for i, m := range list {
		number[m.key] = i + 1
		r.Steps = append(r.Steps, c.step(m, number))
	}
	r.Code = codeOf(r.lines())
	b := &bill{c: c, list: list, number: number, plan: p, route: &r}
	b.work()
	r.traceAtoms(c, found.Tree)
	r.markBonds(c, found.Tree)
	r.alternatives(c, list)
	r.protections(c.world)
	r.doubt(c, p)
	return &r, nil
}

// step writes one step down.
func (c *chemistry) step(m making, number map[search.Key]int) Step {
	w, s, set := c.world, m.option.step, m.option.conditions
	y, _ := yieldOf(s, set)
	out := Step{Number: number[m.key], Transform: s.Transform.ID, Name: s.Transform.Name, Conditions: set.ID,
		Together: []string{}, Reactants: []string{}, ReactantNames: []string{}, Equivalents: []float64{}, MadeBy: []int{},
		Product: w.Write(s.Product), ProductName: w.Name(s.Product), ProductFormula: s.Product.Formula().String(), Molecule: s.Product,
		Byproducts: []string{}, ByproductNames: []string{}, Reagents: []string{}, Solvents: []string{}, Hazards: []string{}, Cautions: []string{}, Objections: []Objection{}, AtScale: []string{},
		Temperature: Span{set.Temperature[0], set.Temperature[1]}, Time: Span{set.Hours[0], set.Hours[1]},
		Share: s.Share.String(), Yield: Range(y).tidy(), Origin: set.Origin, Racemic: s.Racemic, Source: set.Source.Text, Judged: s, Set: set}
	if out.Origin == "" {
		out.Origin = "estimated"
	}
	_, avoided := c.scale.of(set)
	out.AtScale = append(out.AtScale, avoided...)
	for _, t := range s.Together {
		out.Together = append(out.Together, t.ID)
		out.Name += ", " + t.Name
	}
	for i, re := range s.Reactants {
		key := m.children[slices.Index(m.option.order, i)]
		smiles, name := w.Write(re.Molecule), w.Name(re.Molecule)
		if number[key] == 0 { // the form of the shelf row or of the item of From
			mat := c.material(key)
			smiles = mat.SMILES
			if mat.Name != "" {
				name = mat.Name
			}
		}
		out.Reactants = append(out.Reactants, smiles)
		out.ReactantNames = append(out.ReactantNames, name)
		out.Equivalents = append(out.Equivalents, tidy(re.Equivalents))
		out.MadeBy = append(out.MadeBy, number[key])
		out.Consumed = append(out.Consumed, re.Molecule)
	}
	for _, b := range s.Byproducts {
		out.Byproducts = append(out.Byproducts, w.Write(b.Molecule))
		out.ByproductNames = append(out.ByproductNames, w.called(b.Molecule))
	}
	for _, g := range set.Reagents {
		out.Reagents = append(out.Reagents, g.Name)
	}
	for _, v := range set.Solvents {
		out.Solvents = append(out.Solvents, v.Name)
	}
	out.Cautions = append(out.Cautions, set.Cautions...)
	for _, o := range s.Objections {
		out.Objections = append(out.Objections, Objection{string(o.Kind), o.Text})
	}
	return out
}

// tidy removes the noise of binary fractions from printed figures.
func tidy(x float64) float64 {
	const digits = 1e6
	return math.Round(x*digits) / digits
}

// lines describes the steps for the code: transform, conditions, reactants and product.
func (r *Route) lines() []string {
	var out []string
	for _, s := range r.Steps {
		reactants := slices.Sorted(slices.Values(s.Reactants))
		out = append(out, s.Transform+"/"+s.Conditions+" "+strings.Join(s.Together, "+")+": "+strings.Join(reactants, ".")+">>"+s.Product)
	}
	sort.Strings(out)
	return out
}

// alternatives lists the other ways to carry out the steps between the same molecules.
func (r *Route) alternatives(c *chemistry, list []making) {
	for i, m := range list {
		c.mu.RLock()
		options := c.options[m.key][m.tree.Edge]
		c.mu.RUnlock()
		for v := range options {
			o := &options[v]
			if v == m.tree.Variant {
				continue
			}
			y, _ := yieldOf(o.step, o.conditions)
			a := Alternative{Step: i + 1, Transform: o.step.Transform.ID, Name: o.step.Transform.Name, Conditions: o.conditions.ID, Reagents: []string{}, Yield: Range(y).tidy()}
			for _, g := range o.conditions.Reagents {
				a.Reagents = append(a.Reagents, g.Name)
			}
			r.Alternatives = append(r.Alternatives, a)
		}
	}
}

// doubt collects what makes a route doubtful, the gravest first.
func (r *Route) doubt(c *chemistry, p *Plan) {
	add := func(format string, args ...any) { r.Doubts = append(r.Doubts, fmt.Sprintf(format, args...)) }
	for _, s := range r.Steps {
		for _, o := range s.Objections {
			add("Step %d (%s): %s", s.Number, s.Name, o.Text)
		}
		if s.Share == reactions.ShareEven.String() || s.Share == reactions.ShareMinor.String() {
			add("Step %d (%s): the product is the %s among isomers that must be separated.", s.Number, s.Name,
				map[string]string{"even": "one of about equal amounts", "minor": "smaller part"}[s.Share])
		}
	}
	r.stereoDoubt(c, p, add)
	for _, s := range r.Steps {
		if s.Origin == "estimated" {
			add("Step %d (%s): conditions and yield are estimated, not published.", s.Number, s.Name)
		}
		if _, known := yieldOf(s.Judged, s.Set); !known {
			add("Step %d (%s): yield unknown, counted as low.", s.Number, s.Name)
		}
		if b := c.filter.bench; b != nil {
			for _, what := range b.approval(s.Set) {
				add("Step %d needs approval in this room: %s.", s.Number, what)
			}
			if n := b.batches(s.FlaskML); n > 1 {
				add("Step %d charges about %s L for %s g of target: the largest flask (%s, filled to two thirds) takes it in %d batches.", s.Number, figure(s.FlaskML/1000), figure(p.MakeG), b.LargestFlask.Value, n)
			}
		}
	}
	if n := r.Hazard.WithoutData; n > 0 {
		add("Hazards of %d %s were never looked up; counted as the gravest class.", n, plural(n, "material", "materials"))
	}
	if n := r.Materials.Unpriced; n > 0 {
		add("At least the price stated: %d of %d materials unpriced.", n, r.Materials.Of)
	}
	for _, s := range r.Short {
		add("Stock is short: %s.", s)
	}
	if len(r.StockUnknown) > 0 {
		add("How much is on the shelf is not written down: %s.", strings.Join(r.StockUnknown, ", "))
	}
}

// stereoDoubt says where marks of the target are met in the relative sense only.
func (r *Route) stereoDoubt(c *chemistry, p *Plan, add func(string, ...any)) {
	if len(p.Molecule.Centers()) == 0 {
		return
	}
	for i := range r.Steps {
		s := &r.Steps[i]
		for j := range s.Reactants {
			if c.racemicStart(s, j) {
				add("Racemic: %s is at hand without a mark; one enantiomer needs a resolved start or a resolution.", label(s.ReactantNames[j], s.Reactants[j]))
				return
			}
		}
		if s.Racemic {
			add("Racemic: step %d (%s) sets the marks relative to each other only.", s.Number, s.Name)
			return
		}
	}
}

// called is the name of a molecule, or its formula where it has none: metal salts and the like.
func (w *World) called(m *molecule.Molecule) string {
	if name := w.Name(m); name != "" {
		return name
	}
	return m.Formula().String()
}
