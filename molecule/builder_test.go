package molecule_test

import (
	"slices"
	"strings"
	"sync"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

const auto = molecule.AutoHydrogens

// chain makes a Builder of carbons in a row.
func chain(n int) *molecule.Builder {
	b := &molecule.Builder{}
	for i := range n {
		b.AddAtom(molecule.Atom{Element: 6, Hydrogens: auto})
		if i > 0 {
			b.AddBond(i-1, i, 1)
		}
	}
	return b
}

func TestBuildErrors(t *testing.T) {
	for _, c := range []struct {
		name       string
		make       func() *molecule.Builder
		atom, bond int
		text       string
	}{
		{"too large", func() *molecule.Builder { return chain(2001) }, -1, -1, "2001 atoms; at most 2000"},
		{"missing atom", func() *molecule.Builder { b := chain(2); b.AddBond(0, 5, 1); return b }, -1, 1, "does not exist"},
		{"negative atom", func() *molecule.Builder { b := chain(2); b.AddBond(-1, 1, 1); return b }, -1, 1, "does not exist"},
		{"itself", func() *molecule.Builder { b := chain(2); b.AddBond(1, 1, 1); return b }, 1, 1, "itself"},
		{"twice", func() *molecule.Builder { b := chain(2); b.AddBond(1, 0, 1); return b }, 0, 1, "two bonds"},
		{"order 0", func() *molecule.Builder { b := chain(2); b.AddBond(0, 1, 0); return b }, -1, 1, "order 0"},
		{"order 9", func() *molecule.Builder { b := chain(2); b.AddBond(0, 1, 9); return b }, -1, 1, "order 9"},
		{"five bonds", func() *molecule.Builder { b := chain(2); b.Atoms[1].Hydrogens = 4; return b }, 1, -1, "5 bonds"},
		{"aromatic", func() *molecule.Builder {
			b := chain(5)
			b.AddBond(4, 0, 1)
			for i := range b.Bonds {
				b.Bonds[i].Order = molecule.OrderAromatic
			}
			return b
		}, 4, -1, "aromatic ring"},
	} {
		_, err := c.make().Build()
		e, ok := err.(*molecule.Error)
		if !ok || e.Bond != c.bond || c.name != "aromatic" && e.Atom != c.atom || !strings.Contains(e.Text, c.text) {
			t.Errorf("%s: %#v, want atom %d, bond %d, %q", c.name, err, c.atom, c.bond, c.text)
		}
	}
}

// TestHydrogensFilled is the valence model: hydrogens of one atom with bonds of a given sum.
func TestHydrogensFilled(t *testing.T) {
	for _, c := range []struct {
		symbol  string
		charge  int8
		bondSum int
		want    uint8
	}{
		{"C", 0, 0, 4}, {"C", 0, 3, 1}, {"C", 1, 2, 1}, {"C", -1, 2, 1}, {"N", 0, 0, 3}, {"N", 0, 3, 0}, {"N", 0, 4, 0}, {"N", 0, 5, 0}, {"N", 1, 1, 3},
		{"N", -1, 1, 1}, {"O", 0, 1, 1}, {"O", -1, 0, 1}, {"O", 1, 2, 1}, {"F", 0, 0, 1}, {"Cl", 0, 1, 0}, {"Cl", 0, 2, 1}, {"S", 0, 1, 1}, {"S", 0, 3, 1},
		{"S", 0, 5, 1}, {"P", 0, 1, 2}, {"P", 0, 4, 1}, {"P", 1, 2, 2}, {"B", 0, 0, 3}, {"B", -1, 1, 3}, {"Si", 0, 1, 3}, {"Se", 0, 1, 1}, {"I", 0, 0, 1}, {"Br", 0, 1, 0},
		{"Na", 0, 0, 0}, {"Mg", 0, 1, 0}, {"Fe", 0, 0, 0}, {"Zn", 2, 0, 0},
	} {
		e, _ := molecule.ElementBySymbol(c.symbol)
		if got := molecule.FilledHydrogens(molecule.Atom{Element: e, Charge: c.charge}, c.bondSum); got != c.want {
			t.Errorf("%s%+d with bonds %d: %d hydrogens, want %d", c.symbol, c.charge, c.bondSum, got, c.want)
		}
	}
}

func TestAccessors(t *testing.T) {
	m := readMolecule(t, "C1CC2CC1CC2C.O")
	if m.NumAtoms() != 9 || m.NumBonds() != 9 || len(m.Rings()) != 2 {
		t.Fatalf("%d atoms, %d bonds, %d rings", m.NumAtoms(), m.NumBonds(), len(m.Rings()))
	}
	for b := range m.NumBonds() {
		x := m.Bond(b)
		if m.BondBetween(int(x.A), int(x.B)) != b || m.BondBetween(int(x.B), int(x.A)) != b || m.Other(b, int(x.A)) != int(x.B) {
			t.Errorf("bond %d is not found between its atoms", b)
		}
		if x.Ring != (m.SmallestBondRing(b) > 0) {
			t.Errorf("bond %d: ring %v, smallest %d", b, x.Ring, m.SmallestBondRing(b))
		}
	}
	if m.BondBetween(0, 8) != -1 || m.InRing(7) || m.SmallestRing(7) != 0 || m.SmallestRing(0) != 5 || m.Degree(2) != 3 {
		t.Error("wrong neighbourhood")
	}
	if n, label := m.Components(); n != 2 || label[8] != 1 || label[0] != 0 {
		t.Errorf("components %d %v", n, label)
	}
	parts := m.Split()
	if len(parts) != 2 || smiles.Write(parts[1]) != "O" {
		t.Errorf("split into %d", len(parts))
	}
	if joined := molecule.Join(parts...); joined.Key() != m.Key() {
		t.Errorf("joined again: %s", smiles.Write(joined))
	}
}

// TestSplitKeepsStereo: marks move with their atoms.
func TestSplitKeepsStereo(t *testing.T) {
	m := readMolecule(t, "C/C=C/C.C[C@H](N)C(=O)O.C[S@](=O)CC")
	var texts []string
	for _, p := range m.Split() {
		texts = append(texts, smiles.Write(p))
	}
	want := []string{smiles.Write(readMolecule(t, "C/C=C/C")), smiles.Write(readMolecule(t, "C[C@H](N)C(=O)O")), smiles.Write(readMolecule(t, "C[S@](=O)CC"))}
	if !slices.Equal(texts, want) {
		t.Errorf("%v, want %v", texts, want)
	}
}

// TestRemove cuts a bond and takes out atoms; indices are mapped and marks follow.
func TestRemove(t *testing.T) {
	b := readMolecule(t, "OCC/C=C/[C@H](N)F").Builder()
	drop := make([]bool, len(b.Atoms))
	drop[0] = true
	to := b.RemoveAtoms(drop)
	if to[0] != -1 || to[1] != 0 || len(b.Bonds) != 6 {
		t.Fatalf("mapping %v, %d bonds", to, len(b.Bonds))
	}
	b.Atoms[0].Hydrogens = 3
	m, err := b.Build()
	if err != nil {
		t.Fatal(err)
	}
	if got, want := smiles.Write(m), smiles.Write(readMolecule(t, "CC/C=C/[C@H](N)F")); got != want {
		t.Errorf("got %s, want %s", got, want)
	}
}

// TestVoidMarks: marks that say nothing vanish, in any dress.
func TestVoidMarks(t *testing.T) {
	for _, c := range []struct {
		text   string
		center int
		double int
	}{
		{"C[C@H](C)O", 0, 0}, {"C[C@H](O)N", 1, 0}, {"C/C=C(/C)C", 0, 0}, {"C/C=C/C", 0, 1}, {"C[C@H]1CCCCC1", 0, 0}, {"C[C@H]1CC[C@H](C)CC1", 2, 0},
		{"C[C@H]1CC[CH](C)CC1", 0, 0}, {"C1CCC/C=C/C1", 0, 0}, {"C1CCC/C=C\\CC1", 0, 1}, {"C[N@](CC)CCC", 0, 0}, {"C[N@+](CC)(CCC)C=C", 1, 0},
		{"C[C@H](O)[C@@H](O)[C@H](O)C", 3, 0}, {"C[C@H](O)[C@H](O)[C@@H](O)C", 2, 0}, {"C[C@H](O)[C@H](O)[C@@H](C)O", 3, 0}, {"C[P@](F)Cl", 1, 0}, {"C[S@](=O)C", 0, 0}, {"O=[S@](C)CC", 1, 0},
		{"CC/C=N/O", 0, 1}, {"[H]/N=C(/C)CC", 0, 1}, {"F/C=C=C/F", 0, 0}, {"C[C@](C)(C)O", 0, 0}, {"C[C@@H2]O", 0, 0},
		{"[C@@H](O)(C)C(=O)[C@H](O)C", 2, 0}, {"C[C@]12CCC[C@@]1(C)CC2", 2, 0},
	} {
		m, err := smiles.Read(c.text)
		if err != nil {
			t.Errorf("%s: %v", c.text, err)
			continue
		}
		if len(m.Centers()) != c.center || len(m.DoubleBonds()) != c.double {
			t.Errorf("%s: %d centres and %d double bonds marked, want %d and %d", c.text, len(m.Centers()), len(m.DoubleBonds()), c.center, c.double)
		}
	}
}

// TestConcurrentUse: one molecule labelled from many goroutines (run with -race).
func TestConcurrentUse(t *testing.T) {
	m := readMolecule(t, "C[C@H](N)C(=O)O.[Na+].Oc1ccccn1")
	want := smiles.Write(m)
	var wait sync.WaitGroup
	for range 16 {
		wait.Go(func() {
			if smiles.Write(m) != want || m.SeenThroughKey() != m.SeenThroughKey() {
				t.Error("different answers")
			}
			m.Orbits()
			m.FlatKey()
		})
	}
	wait.Wait()
}
