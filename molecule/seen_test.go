package molecule_test

import (
	"bufio"
	"math/rand"
	"os"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

func readMolecule(t testing.TB, text string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(text)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	return m
}

// pairs reads a table of two structures and a reason per line.
func pairs(t *testing.T, path string) [][3]string {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var list [][3]string
	for s := bufio.NewScanner(f); s.Scan(); {
		if strings.HasPrefix(s.Text(), "#") || s.Text() == "" {
			continue
		}
		p := strings.Split(s.Text(), "\t")
		list = append(list, [3]string{p[0], p[1], p[2]})
	}
	return list
}

func TestSeenThroughSame(t *testing.T) {
	list := pairs(t, "../testdata/identity/same.tsv")
	if len(list) < 50 {
		t.Fatalf("only %d pairs", len(list))
	}
	for _, p := range list {
		a, b := readMolecule(t, p[0]), readMolecule(t, p[1])
		if a.SeenThroughKey() != b.SeenThroughKey() {
			t.Errorf("%s and %s must match: %s (free forms %s, %s)", p[0], p[1], p[2], smiles.Write(a.FreeForm()), smiles.Write(b.FreeForm()))
		}
	}
}

func TestSeenThroughDifferent(t *testing.T) {
	list := pairs(t, "../testdata/identity/different.tsv")
	if len(list) < 50 {
		t.Fatalf("only %d pairs", len(list))
	}
	for _, p := range list {
		a, b := readMolecule(t, p[0]), readMolecule(t, p[1])
		if a.SeenThroughKey() == b.SeenThroughKey() {
			t.Errorf("%s and %s must not match: %s (free forms %s, %s)", p[0], p[1], p[2], smiles.Write(a.FreeForm()), smiles.Write(b.FreeForm()))
		}
	}
}

// TestSeenThroughNumbering: the key does not depend on the numbering, nor does the free form.
func TestSeenThroughNumbering(t *testing.T) {
	for _, path := range []string{"../testdata/identity/same.tsv", "../testdata/identity/different.tsv"} {
		for i, p := range pairs(t, path) {
			for _, text := range p[:2] {
				m := readMolecule(t, text)
				for seed := range int64(4) {
					n := renumber(t, m, rand.New(rand.NewSource(seed+int64(i))))
					if n.SeenThroughKey() != m.SeenThroughKey() || n.FreeForm().Key() != m.FreeForm().Key() {
						t.Errorf("%s: another key or free form (%s, %s) for another numbering", text, smiles.Write(n.FreeForm()), smiles.Write(m.FreeForm()))
					}
				}
			}
		}
	}
}

func TestFreeForm(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"CC(=O)O", "CC(=O)O"}, {"[Na+].[Cl-]", "[Na+].[Cl-]"}, {"CC(=O)[O-].[Na+]", "CC(=O)O"}, {"C[NH3+].[Cl-]", "CN"}, {"C[N+](C)(C)C.[I-]", "C[N+](C)(C)C"},
		{"[O-]c1ccc([NH3+])cc1", "Oc1ccc(N)cc1"}, {"C[N+](C)(C)CC(=O)[O-]", "C[N+](C)(C)CC(=O)[O-]"}, {"[Li+].[CH3-]", "[Li]C"}, {"[K+].[K+].[O-]C(=O)C(=O)[O-]", "OC(=O)C(=O)O"},
		{"C=O.[Na+].[Cl-]", "C=O.[Na+].[Cl-]"}, {"CC(=O)[O-].C[NH3+]", "CC(=O)O.CN"}, {"C[S-].[Na+]", "CS"}, {"[Na+].[O-][N+](=O)c1ccccc1", "[Na+].[O-][N+](=O)c1ccccc1"},
		{"CC(=O)[O-].[Cu+]", "CC(=O)[O-].[Cu+]"}, {"[Na+].[Na+].[Na+].[O-]P([O-])([O-])=O", "[Na+].[Na+].[Na+].[O-]P([O-])([O-])=O"}, {"Cl.NCC(=O)OC", "NCC(=O)OC"},
		{"Cl.CC(=O)OC", "Cl.CC(=O)OC"}, {"[Mg+2].[Cl-].[CH-]=C", "C=C[Mg]Cl"}, {"C1=CC=C[CH-]1.[Na+]", "[Na]C1C=CC=C1"},
	} {
		m := readMolecule(t, c.text)
		if got, want := smiles.Write(m.FreeForm()), smiles.Write(readMolecule(t, c.want)); got != want {
			t.Errorf("%s: free form %s, want %s", c.text, got, want)
		}
		if f := m.FreeForm(); f.FreeForm().Key() != f.Key() {
			t.Errorf("%s: the free form %s has another free form", c.text, smiles.Write(f))
		}
	}
}

// TestSeenThroughLarge: many mobile hydrogens in one conjugated piece, bounded by work, not by luck.
func TestSeenThroughLarge(t *testing.T) {
	for name, text := range map[string]string{
		"aramid":      strings.Repeat("NC(=O)c1ccc(cc1)", 90) + "N",
		"polyaniline": strings.Repeat("Nc1ccc(cc1)N=C1C=CC(=N", 30) + "C" + strings.Repeat(")C=C1", 30),
		"peptide":     strings.Repeat("NC(C)C(=O)", 190) + "O",
		"polyguanide": strings.Repeat("NC(=N)", 300) + "N",
		"many acids":  strings.TrimSuffix(strings.Repeat("CC(=O)[O-].[Na+].", 150), "."),
	} {
		m := readMolecule(t, text)
		if m.SeenThroughKey() != readMolecule(t, smiles.Write(m)).SeenThroughKey() {
			t.Errorf("%s: the key depends on the text", name)
		}
	}
}
