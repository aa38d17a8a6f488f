package molecule_test

import (
	"bufio"
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
