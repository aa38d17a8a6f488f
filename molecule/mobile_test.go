package molecule

import (
	"math/rand"
	"testing"

	"shelfward/molecule/matching"
)

// tautomer moves one hydrogen from x to y in a copy of m, double bonds rearranged along; nil if no
// path leads there. It is an independent check of the groups: it only makes structures.
func tautomer(m *Molecule, x, y int) *Molecule {
	w := &mobileWork{m: m}
	if !w.classify() {
		return nil
	}
	w.pieces()
	if !w.donor[x] || !w.pi[y] || !mobileElement(m.atoms[y].Element) || w.piece[x] != w.piece[y] {
		return nil
	}
	for a := range w.role {
		w.role[a] = matching.Absent
		if w.piece[a] == w.piece[x] && (w.pi[a] && a != y || a == x) {
			w.role[a] = matching.Required
		}
	}
	var mt matching.Matcher
	mate, alone := mt.Match(m.first, m.neighbors, w.usable, w.role)
	if alone != nil {
		return nil
	}
	b := m.Builder()
	for i := range b.Bonds {
		z := &b.Bonds[i]
		if w.role[z.A] == matching.Absent && w.role[z.B] == matching.Absent || w.piece[z.A] != w.piece[x] || w.piece[z.B] != w.piece[x] {
			continue
		}
		if w.pi[z.A] && w.pi[z.B] && z.Order == 2 || w.usable[i] {
			z.Order = 1
			if mate[z.A] == z.B {
				z.Order = 2
			}
		}
	}
	b.Atoms[x].Hydrogens--
	b.Atoms[y].Hydrogens++
	t, err := b.Build()
	if err != nil {
		return nil
	}
	return t
}

// molecules with mobile hydrogens, built without a reader: m.Builder of SMILES is not at hand in
// this package, so a few ring systems are written as bonds.
func mobileExamples(t *testing.T) map[string]*Molecule {
	t.Helper()
	build := func(elements string, bonds ...[3]int) *Molecule {
		b := &Builder{}
		for _, e := range elements {
			x, _ := ElementBySymbol(string(e))
			b.AddAtom(Atom{Element: x, Hydrogens: AutoHydrogens})
		}
		for _, x := range bonds {
			b.AddBond(x[0], x[1], uint8(x[2]))
		}
		m, err := b.Build()
		if err != nil {
			t.Fatal(err)
		}
		return m
	}
	return map[string]*Molecule{
		// C0 C1 N2 C3 N4: imidazole with a methyl group C5
		"methylimidazole": build("CCNCNC", [3]int{0, 1, 2}, [3]int{1, 2, 1}, [3]int{2, 3, 2}, [3]int{3, 4, 1}, [3]int{4, 0, 1}, [3]int{1, 5, 1}),
		"uracil": build("NCNCCCOO", [3]int{0, 1, 1}, [3]int{1, 2, 1}, [3]int{2, 3, 1}, [3]int{3, 4, 1}, [3]int{4, 5, 2}, [3]int{5, 0, 1},
			[3]int{1, 6, 2}, [3]int{3, 7, 2}),
		"guanine": build("NCNCCCNCNNO", [3]int{0, 1, 1}, [3]int{1, 2, 2}, [3]int{2, 3, 1}, [3]int{3, 4, 2}, [3]int{4, 5, 1}, [3]int{5, 0, 1},
			[3]int{4, 6, 1}, [3]int{6, 7, 2}, [3]int{7, 8, 1}, [3]int{8, 3, 1}, [3]int{1, 9, 1}, [3]int{5, 10, 2}),
		"guanidine": build("CNNNC", [3]int{0, 1, 2}, [3]int{0, 2, 1}, [3]int{0, 3, 1}, [3]int{3, 4, 1}),
		"thioamide": build("CCSN", [3]int{0, 1, 1}, [3]int{1, 2, 2}, [3]int{1, 3, 1}),
		"enaminone": build("NCCCO", [3]int{0, 1, 1}, [3]int{1, 2, 2}, [3]int{2, 3, 1}, [3]int{3, 4, 2}),
		"azophenol": build("OCCCCCCNNC", [3]int{0, 1, 1}, [3]int{1, 2, 2}, [3]int{2, 3, 1}, [3]int{3, 4, 2}, [3]int{4, 5, 1}, [3]int{5, 6, 2}, [3]int{6, 1, 1}, [3]int{4, 7, 1}, [3]int{7, 8, 2}, [3]int{8, 9, 1}),
		"biguanide": build("NCNNCNNC", [3]int{0, 1, 1}, [3]int{1, 2, 2}, [3]int{1, 3, 1}, [3]int{3, 4, 1}, [3]int{4, 5, 2}, [3]int{4, 6, 1}, [3]int{6, 7, 1}),
		"barbiturate": build("NCNCCCOOO", [3]int{0, 1, 1}, [3]int{1, 2, 1}, [3]int{2, 3, 1}, [3]int{3, 4, 1}, [3]int{4, 5, 1}, [3]int{5, 0, 1},
			[3]int{1, 6, 2}, [3]int{3, 7, 2}, [3]int{5, 8, 2}),
	}
}

// TestKeyOfRandomTautomers walks at random over hydrogen shifts: the key never changes.
func TestKeyOfRandomTautomers(t *testing.T) {
	for name, m := range mobileExamples(t) {
		r := rand.New(rand.NewSource(8))
		want := m.SeenThroughKey()
		seen := map[Key]bool{}
		at := m
		for range 400 {
			next := tautomer(at, r.Intn(m.NumAtoms()), r.Intn(m.NumAtoms()))
			if next == nil {
				continue
			}
			at = next
			seen[at.Key()] = true
			if at.SeenThroughKey() != want {
				t.Errorf("%s: a tautomer has another key", name)
				break
			}
		}
		if len(seen) < 2 {
			t.Errorf("%s: only %d tautomers met", name, len(seen))
		}
	}
}
