package route

import (
	"fmt"
	"maps"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/planner/search"
)

// sources returns, for each atom of the molecule at t, the leaf it comes from; the zero key where a reagent
// brought it.
func (c *chemistry) sources(t *search.Tree) []search.Key {
	out := make([]search.Key, c.molecule(t.Key).NumAtoms())
	if t.Edge < 0 {
		for a := range out {
			out[a] = t.Key
		}
		return out
	}
	below := make([][]search.Key, len(t.Children))
	for i, kid := range t.Children {
		below[i] = c.sources(kid)
	}
	for a, o := range c.option(t).origins {
		switch {
		case o.Child < 0 || a >= len(out):
		case t.Children[o.Child].Edge < 0: // whatever its form, all of it is the leaf
			out[a] = t.Children[o.Child].Key
		case int(o.Atom) < len(below[o.Child]):
			out[a] = below[o.Child][o.Atom]
		}
	}
	return out
}

// traceAtoms says which atoms of the target come from which starting material.
func (r *Route) traceAtoms(c *chemistry, t *search.Tree) {
	number := map[search.Key]int{}
	list := c.sources(t)
	for _, k := range list {
		if k == (search.Key{}) || number[k] > 0 {
			continue
		}
		text := c.material(k).SMILES
		for i := range r.StartingMaterials {
			if r.StartingMaterials[i].SMILES == text {
				number[k] = i + 1
			}
		}
	}
	b := c.molecule(t.Key).Builder()
	counts := make([]map[molecule.Element]int, len(r.StartingMaterials)+1)
	for a, k := range list {
		n := number[k]
		b.Atoms[a].Class = uint16(n)
		if counts[n] == nil {
			counts[n] = map[molecule.Element]int{}
		}
		counts[n][b.Atoms[a].Element]++
	}
	for i := range r.StartingMaterials {
		r.StartingMaterials[i].Gives = heavyFormula(counts[i+1])
	}
	r.FromReagents = heavyFormula(counts[0])
	if m, err := b.Build(); err == nil && c.world.WriteClasses != nil {
		r.TargetByStart = c.world.WriteClasses(m)
	}
}

// heavyFormula writes counts of atoms without hydrogen, carbon first, then by symbol.
func heavyFormula(counts map[molecule.Element]int) string {
	var text strings.Builder
	one := func(e molecule.Element) {
		switch n := counts[e]; {
		case n == 1:
			text.WriteString(e.Symbol())
		case n > 1:
			fmt.Fprintf(&text, "%s%d", e.Symbol(), n)
		}
	}
	one(carbon)
	others := slices.DeleteFunc(slices.Collect(maps.Keys(counts)), func(e molecule.Element) bool { return e == carbon || e == 1 })
	slices.SortFunc(others, func(a, b molecule.Element) int { return strings.Compare(a.Symbol(), b.Symbol()) })
	for _, e := range others {
		one(e)
	}
	return text.String()
}

// writeAtoms prints which starting material gives which atoms of the target.
func (r *Route) writeAtoms(t *writer) {
	if r.TargetByStart == "" {
		return
	}
	var parts []string
	for i, m := range r.StartingMaterials {
		gives := m.Gives
		if gives == "" {
			gives = "none"
		}
		parts = append(parts, fmt.Sprintf("%d %s %s", i+1, label(m.Name, m.SMILES), gives))
	}
	if r.FromReagents != "" {
		parts = append(parts, "reagents "+r.FromReagents)
	}
	t.line("  atoms of the target: %s", strings.Join(parts, "; "))
	t.line("    %s", r.TargetByStart)
}
