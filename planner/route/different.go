package route

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"shelfward/planner/search"
)

// madeBond is a bond of the target that a step of a route makes, by the kinds of place of its ends.
type madeBond struct {
	a, b   int32  // atoms of the target
	from   int    // steps between the one that makes it and the target
	carbon bool   // between two carbons
	by     string // transform
}

// madeBonds lists the bonds of the target that the steps of t make, those made last first.
func (c *chemistry) madeBonds(t *search.Tree) []madeBond {
	var list []madeBond
	onto := make([]int32, c.molecule(t.Key).NumAtoms())
	for a := range onto {
		onto[a] = int32(a)
	}
	c.collectBonds(t, onto, 0, &list)
	slices.SortStableFunc(list, func(x, y madeBond) int { return cmp.Compare(x.from, y.from) })
	return list
}

// collectBonds adds the bonds that the step of t makes; onto gives the target's atom for each of its own.
func (c *chemistry) collectBonds(t *search.Tree, onto []int32, from int, list *[]madeBond) {
	if t.Edge < 0 {
		return
	}
	o := c.option(t)
	s, m := o.step, o.step.Product
	for i := range m.NumBonds() {
		bond := m.Bond(i)
		if int(max(bond.A, bond.B)) >= len(onto) || onto[bond.A] < 0 || onto[bond.B] < 0 {
			continue
		}
		x, y := s.Origins[bond.A], s.Origins[bond.B]
		if x.Reactant >= 0 && x.Reactant == y.Reactant && s.Reactants[x.Reactant].Molecule.BondBetween(int(x.Atom), int(y.Atom)) >= 0 {
			continue
		}
		*list = append(*list, madeBond{onto[bond.A], onto[bond.B], from, m.Atom(int(bond.A)).Element == carbon && m.Atom(int(bond.B)).Element == carbon, s.Transform.ID})
	}
	for i, kid := range t.Children {
		below := make([]int32, c.molecule(kid.Key).NumAtoms())
		for a := range below {
			below[a] = -1
		}
		for a, from := range o.origins {
			if int(from.Child) == i && a < len(onto) && int(from.Atom) < len(below) {
				below[from.Atom] = onto[a]
			}
		}
		c.collectBonds(kid, below, from+1, list)
	}
}

// keyBonds picks from the bonds made the strategic ones: the carbon-carbon bonds made last, or where none
// is made, the bonds made last.
func keyBonds(made []madeBond) (key []madeBond) {
	for _, carbons := range []bool{true, false} {
		for _, b := range made {
			if b.carbon == carbons && (len(key) == 0 || key[0].from == b.from) {
				key = append(key, b)
			}
		}
		if len(key) > 0 {
			return key
		}
	}
	return nil
}

// places names bonds by the kinds of place of their ends in the molecule k, so that like places count as
// one.
func (c *chemistry) places(k search.Key, bonds []madeBond) string {
	orbits := c.molecule(k).Orbits()
	var out []string
	for _, b := range bonds {
		x, y := orbits[b.a], orbits[b.b]
		out = append(out, fmt.Sprint(min(x, y), "-", max(x, y)))
	}
	slices.Sort(out)
	return strings.Join(slices.Compact(out), " ")
}

// keyPlace is what tells routes apart for --different.
func (c *chemistry) keyPlace(t *search.Tree) string {
	return c.places(t.Key, keyBonds(c.madeBonds(t)))
}

// markBonds writes down the key bonds of a route and what tells its variants.
func (r *Route) markBonds(c *chemistry, t *search.Tree) {
	made := c.madeBonds(t)
	r.madePlaces = c.places(t.Key, made)
	key := keyBonds(made)
	for _, x := range key {
		r.keySteps = append(r.keySteps, x.by)
	}
	slices.Sort(r.keySteps)
	r.keySteps = slices.Compact(r.keySteps)
	b := c.molecule(t.Key).Builder()
	for _, x := range key {
		b.Atoms[x.a].Class, b.Atoms[x.b].Class = 1, 1
	}
	if m, err := b.Build(); err == nil && c.world.WriteClasses != nil {
		r.KeyBonds = c.world.WriteClasses(m)
	}
}

// markVariants names, for each route, an earlier one that makes the same bonds of the target from the same
// materials, the key bonds by the same reactions: in another order, or by way of other steps (the bromide
// made into the iodide first, say).
func markVariants(routes []Route) {
	type earlier struct {
		code  string
		steps string
	}
	first := map[string]earlier{}
	for i := range routes {
		r := &routes[i]
		if len(r.Steps) == 0 {
			continue
		}
		var steps, materials []string
		for _, s := range r.Steps {
			steps = append(steps, s.Transform)
		}
		for _, m := range r.StartingMaterials {
			materials = append(materials, m.SMILES)
		}
		slices.Sort(steps)
		slices.Sort(materials)
		sign, same := r.madePlaces+"\n"+strings.Join(r.keySteps, " ")+"\n"+strings.Join(materials, "\n"), strings.Join(steps, "\n")
		if r.madePlaces == "" { // no bond made: only another order is a variant
			sign += "\n" + same
		}
		if old, met := first[sign]; met {
			r.VariantOf, r.VariantBy = old.code, "the same bonds from the same materials by other steps"
			if old.steps == same {
				r.VariantBy = "the same reactions in another order"
			}
		} else {
			first[sign] = earlier{r.Code, same}
		}
	}
}
