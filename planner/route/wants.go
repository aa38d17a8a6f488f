package route

import (
	"fmt"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/planner/search"
	"shelfward/reactions"
)

// wants is what every route owes, in the order of the bits of the search: each item of from, one item of
// any, each molecule of via.
type wants struct {
	from, any, via []*molecule.Molecule
}

// check refuses more than the search can owe, and wishes that contradict each other.
func (w *wants) check(target *molecule.Molecule) error {
	if n := w.bits(); n > search.MaxOwed {
		return fmt.Errorf("--from, --from-any and --via ask for %d things on every route; at most %d are possible", n, search.MaxOwed)
	}
	for _, v := range w.via {
		if isVia(v, target) {
			return fmt.Errorf("--via: the target itself is on every route")
		}
		for _, s := range w.starts() {
			if ok, _ := meets(s, v); ok {
				return fmt.Errorf("--via: a starting material of --from is taken, not made on the way")
			}
		}
	}
	return nil
}

// settle drops what is met anyhow: one of several, if one of them is consumed by every route.
func (w *wants) settle() {
	for _, a := range w.any {
		if slices.ContainsFunc(w.from, func(f *molecule.Molecule) bool { return f.SeenThroughKey() == a.SeenThroughKey() }) {
			w.any = nil
			return
		}
	}
}

// starts lists all items that count as in stock because they were named.
func (w *wants) starts() []*molecule.Molecule {
	return append(slices.Clone(w.from), w.any...)
}

func (w *wants) bits() int { return len(w.from) + min(len(w.any), 1) + len(w.via) }

// startBit is the bit that start i of starts pays.
func (w *wants) startBit(i int) uint8 { return 1 << min(i, len(w.from)) }

// viaBits are the bits that making m pays, stereo marks seen through if loosely.
func (w *wants) viaBits(m *molecule.Molecule, loosely bool) (bits uint8) {
	for i, v := range w.via {
		if isVia(v, m) || loosely && flatKey(v) == flatKey(m) {
			bits |= 1 << (w.bits() - len(w.via) + i)
		}
	}
	return bits
}

// isVia says whether m counts as the molecule v that was asked for on the way: the same one, salts and
// tautomers seen through, any stereoisomer where v is drawn without marks.
func isVia(v, m *molecule.Molecule) bool {
	return v.SeenThroughKey() == m.SeenThroughKey() || !marked(v) && flatKey(v) == flatKey(m)
}

// enterInto writes the wants into the options of a search.
func (w *wants) enterInto(o *search.Options, c *chemistry) {
	for _, m := range w.from {
		o.From = append(o.From, c.enter(m))
	}
	for _, m := range w.any {
		o.FromAny = append(o.FromAny, c.enter(m))
	}
	for _, v := range w.via {
		o.Via = append(o.Via, func(k search.Key) bool { return isVia(v, c.molecule(k)) })
	}
}

// Ban is one step that may not be used, as it was written.
type Ban struct {
	Text      string
	Reactants []*molecule.Molecule // each as written between dots
	Salts     []*molecule.Molecule // neighbours taken together, as one salt
	Product   *molecule.Molecule
}

// bans says whether s is the step. The materials written and those consumed must agree as far as both go:
// reagents may be written or not, and so may the lesser material.
func (b *Ban) bans(s *reactions.Step) bool {
	if !isVia(b.Product, s.Product) {
		return false
	}
	consumed := func(v *molecule.Molecule) bool {
		return slices.ContainsFunc(s.Reactants, func(r reactions.Reactant) bool { return isVia(v, r.Molecule) })
	}
	written := func(r reactions.Reactant) bool {
		is := func(v *molecule.Molecule) bool { return isVia(v, r.Molecule) }
		return slices.ContainsFunc(b.Reactants, is) || slices.ContainsFunc(b.Salts, is)
	}
	all := true
	for _, v := range b.Reactants {
		all = all && consumed(v)
	}
	return all || !slices.ContainsFunc(s.Reactants, func(r reactions.Reactant) bool { return !written(r) })
}

// wanted says in words what every route was asked to hold besides the items of From.
func (p *Plan) wanted() (lines []string) {
	if len(p.FromAny) > 0 {
		lines = append(lines, "every route consumes one of: "+strings.Join(p.FromAny, ", "))
	}
	if len(p.Via) > 0 {
		lines = append(lines, "every route goes through: "+strings.Join(p.Via, ", "))
	}
	if p.Different {
		lines = append(lines, "one route for each key bond: the carbon-carbon bonds made last, or the bonds made last where none is made")
	}
	return lines
}
