package reactions

import (
	"math/bits"
	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// covering says how a product formed stands to the product wanted.
type covering struct {
	ok      bool // the same constitution
	exact   bool // the same stereo marks, or the wanted one asks for fewer
	mirror  bool // equal after taking the mirror image
	open    int  // marks wanted that the step leaves open
	wrong   bool // a mark comes out otherwise
	openRaw bool // what is open is a double bond's geometry
}

// cover compares a product with the target.
func cover(product, target *molecule.Molecule) covering {
	if product.Key() == target.Key() {
		return covering{ok: true, exact: true}
	}
	if product.FlatKey() != target.FlatKey() {
		if product.SeenThroughKey() != target.SeenThroughKey() {
			return covering{}
		}
		if noMarks(product) || noMarks(target) {
			return covering{ok: true, exact: noMarks(target), open: len(target.Centers()) + len(target.DoubleBonds())}
		}
		return covering{ok: true, exact: true} // another tautomer of the same compound
	}
	if noMarks(target) {
		return covering{ok: true, exact: true}
	}
	if product.Mirror().Key() == target.Key() {
		return covering{ok: true, mirror: true}
	}
	return coverPartly(product, target)
}

func noMarks(m *molecule.Molecule) bool { return len(m.Centers())+len(m.DoubleBonds()) == 0 }

// maxMarks bounds the search over subsets of marks.
const maxMarks = 8

// coverPartly looks for the fewest marks that must be left out of product or target to make them equal.
func coverPartly(product, target *molecule.Molecule) covering {
	pm, tm := len(product.Centers())+len(product.DoubleBonds()), len(target.Centers())+len(target.DoubleBonds())
	if pm > maxMarks || tm > maxMarks {
		return covering{ok: true, wrong: true}
	}
	keys, mirrors := map[molecule.Key]bool{}, map[molecule.Key]bool{}
	keys[product.Key()], mirrors[product.Mirror().Key()] = true, true
	for drop := 1; drop <= tm; drop++ {
		for _, less := range withoutMarks(target, drop) {
			if keys[less.Key()] || mirrors[less.Key()] {
				c := covering{ok: true, open: drop, mirror: !keys[less.Key()]}
				c.openRaw = len(less.DoubleBonds()) < len(target.DoubleBonds())
				return c
			}
		}
	}
	for drop := 1; drop <= pm; drop++ { // the target says less than the product has
		for _, less := range withoutMarks(product, drop) {
			if less.Key() == target.Key() {
				return covering{ok: true, exact: true}
			}
			if less.Mirror().Key() == target.Key() {
				return covering{ok: true, mirror: true}
			}
		}
	}
	return covering{ok: true, wrong: true}
}

// withoutMarks returns m with every choice of n marks left out.
func withoutMarks(m *molecule.Molecule, n int) []*molecule.Molecule {
	c, d := len(m.Centers()), len(m.DoubleBonds())
	var out []*molecule.Molecule
	for set := 0; set < 1<<(c+d); set++ {
		if bits.OnesCount(uint(set)) != n {
			continue
		}
		b := m.Builder()
		b.Centers, b.DoubleBonds = nil, nil
		for i, x := range m.Centers() {
			if set&(1<<i) == 0 {
				b.Centers = append(b.Centers, x)
			}
		}
		for i, x := range m.DoubleBonds() {
			if set&(1<<(c+i)) == 0 {
				b.DoubleBonds = append(b.DoubleBonds, x)
			}
		}
		if less, err := b.Build(); err == nil {
			out = append(out, less)
		}
	}
	return out
}

// atomsOf maps the atoms of a onto those of b, which has the same constitution.
func atomsOf(a, b *molecule.Molecule) []int32 {
	ra, rb := a.Ranks(), b.Ranks()
	if a.Key() != b.Key() {
		ra, rb = a.WithoutStereo().Ranks(), b.WithoutStereo().Ranks()
	}
	at := make([]int32, len(rb))
	for i, r := range rb {
		at[r] = int32(i)
	}
	out := make([]int32, len(ra))
	for i, r := range ra {
		if int(r) < len(at) {
			out[i] = at[r]
		}
	}
	return out
}

func written(m *molecule.Molecule) string { return smiles.Write(m) }
