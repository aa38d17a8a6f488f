package reactions

import (
	"context"
	"slices"

	"shelfward/molecule"
)

// Products runs every transform forwards on start, alone and with each of the partners, and returns what
// forms, each molecule once, in a fixed order. Sites that a preference model calls dead are left out; the
// media are not looked at: the answer is a guide to what is one step away, not a judgement.
func (b *Book) Products(ctx context.Context, start *molecule.Molecule, partners []*molecule.Molecule) ([]*molecule.Molecule, error) {
	cache := b.newWorkspace()
	x := cache.of(start.FreeForm())
	var mates []*subject
	for _, p := range partners {
		if s := cache.of(p.FreeForm()); s.key != x.key {
			mates = append(mates, s)
		}
	}
	var out []*molecule.Molecule
	seen := map[molecule.Key]bool{x.key: true}
	collect := func(outs []outcome) {
		for i := range outs {
			if outs[i].blocked != "" || !outs[i].takes(0) {
				continue
			}
			for _, p := range outs[i].pieces {
				if k := p.m.Key(); !seen[k] && carbons(p.m) > 0 {
					seen[k] = true
					out = append(out, p.m)
				}
			}
		}
	}
	for _, t := range b.Transforms {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if !t.anyPart(x) {
			continue
		}
		collect(t.run(cache, []*subject{x}))
		if len(t.part[forward]) < 2 {
			continue
		}
		for _, m := range mates {
			if t.anyPart(m) {
				collect(t.run(cache, []*subject{x, m}))
			}
		}
	}
	return out, nil
}

// takes says whether an outcome uses the molecule with an index.
func (o *outcome) takes(which int) bool { return slices.Contains(o.copies, which) }

// anyPart says whether some reactant part lies on the molecule.
func (t *Transform) anyPart(s *subject) bool {
	for i := range t.part[forward] {
		if t.part[forward][i].query.Matches(s.Subject) {
			return true
		}
	}
	return false
}
