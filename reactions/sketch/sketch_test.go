package sketch_test

import (
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
	"shelfward/molecule/smiles"
	"shelfward/reactions/sketch"
)

func sides(t *testing.T, drawn string) (reactants, products []*molecule.Molecule) {
	t.Helper()
	parts := strings.Split(drawn, ">>")
	return read(t, strings.Split(parts[0], ".")...), read(t, strings.Split(parts[1], ".")...)
}

// TestChanges checks which bonds are found to change. Source: textbook mechanisms, common practice.
func TestChanges(t *testing.T) {
	for _, c := range []struct {
		name, drawn string
		changes     []string
		balance     string
	}{
		{"mesylation", "CCCCO.CS(=O)(=O)Cl>>CCCCOS(C)(=O)=O", []string{"breaks S4-Cl7", "makes O2-S4 (single)"}, ""},
		{"an ester loses its alkoxide at the acyl carbon", "CCC(=O)OCC>>CCC(=O)O", []string{"breaks C1-O3", "makes C1-O5 (single)"}, "+ 2 H + 1 O"},
		{"an aryl methyl ether loses its methyl", "COc1ccccc1>>Oc1ccccc1", []string{"breaks C1-O2"}, "+ 2 H"},
		{"of acid and alcohol the acid loses its oxygen", "CC(=O)O.CCO>>CC(=O)OCC", []string{"breaks C1-O3", "makes C1-O5 (single)"}, ""},
		{"diene and dienophile", "C=CC=C.C=CC(C)=O>>CC(=O)C1CCC=CC1",
			[]string{"changes C1-C2 from double to single", "changes C2-C3 from single to double", "changes C3-C4 from double to single",
				"changes C5-C6 from double to single", "makes C5-C1 (single)", "makes C6-C4 (single)"}, ""},
		{"atom numbers decide: an allyl group turns round", "[CH3:1][CH:2]=[CH:3][CH2:4][O:5]c1[cH:6]cccc1>>[CH3:1][CH:2]([CH:3]=[CH2:4])[c:6]1ccccc1[OH:5]",
			[]string{"changes C1-C2 from double to single", "changes C2-C3 from single to double", "breaks C3-O4", "makes C1-C6 (single)"}, ""},
	} {
		r, p := sides(t, c.drawn)
		s, err := sketch.Read(r, p)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		got, want := slices.Sorted(slices.Values(s.Changes)), slices.Sorted(slices.Values(c.changes))
		if !slices.Equal(got, want) {
			t.Errorf("%s: %s\n got %q\nwant %q", c.name, c.drawn, got, want)
		}
		if s.Balance() != c.balance {
			t.Errorf("%s: balance %q, want %q", c.name, s.Balance(), c.balance)
		}
	}
}

// TestAgents checks that what gives no carbon is no part of the transform.
func TestAgents(t *testing.T) {
	r, p := sides(t, "CC(=O)CCC(=O)OCC.[BH4-].[Na+].C1CCOC1>>CC(O)CCC(=O)OCC")
	s, err := sketch.Read(r, p)
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Reactants) != 1 || len(s.Agents) != 3 {
		t.Errorf("%d reactants and %d agents, want 1 and 3", len(s.Reactants), len(s.Agents))
	}
}

// TestRefusals checks that a drawing that is no transform is refused with the reason.
func TestRefusals(t *testing.T) {
	for drawn, want := range map[string]string{
		"CCO>>CCO":              "nothing changes",
		"CCBr>>CCC#N":           "1 carbon atoms of the product come from none",
		"O>>CC":                 "no reactant gives carbon",
		"[CH3:1]O>>[OH:1]C":     "atom number 1 is C among the reactants and O",
		"[CH3:1][OH:1]>>C[O:1]": "stands twice",
	} {
		r, p := sides(t, drawn)
		if _, err := sketch.Read(r, p); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: error %v, want one with %q", drawn, err, want)
		}
	}
}

// TestDrawingOrder checks that the changes do not depend on the order in which atoms were drawn.
func TestDrawingOrder(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 11))
	for _, drawn := range []string{
		"CC(=O)O.CCO>>CC(=O)OCC", "Brc1ccccc1.OB(O)c1ccc(C)cc1>>Cc1ccc(cc1)-c1ccccc1", "CC(=O)CCC(C)=O.N>>Cc1ccc(C)[nH]1", "C=CC=C.C=CC(C)=O>>CC(=O)C1CCC=CC1",
	} {
		r, p := sides(t, drawn)
		first, err := sketch.Read(r, p)
		if err != nil {
			t.Fatal(err)
		}
		for range 20 {
			again, err := sketch.Read(shuffled(t, rng, r), shuffled(t, rng, p))
			if err != nil {
				t.Fatal(err)
			}
			if a, b := unnumbered(first.Changes), unnumbered(again.Changes); !slices.Equal(a, b) {
				t.Errorf("%s: %q, drawn in another order %q", drawn, a, b)
			}
		}
	}
}

// unnumbered leaves the element symbols of changes: classes follow the drawing.
func unnumbered(changes []string) []string {
	out := make([]string, len(changes))
	for i, c := range changes {
		words := strings.Fields(strings.Map(func(r rune) rune {
			if r >= '0' && r <= '9' {
				return -1
			}
			return r
		}, c))
		ends := strings.Split(words[1], "-")
		slices.Sort(ends)
		words[1] = strings.Join(ends, "-")
		out[i] = strings.Join(words, " ")
	}
	slices.Sort(out)
	return out
}

func shuffled(t *testing.T, rng *rand.Rand, ms []*molecule.Molecule) []*molecule.Molecule {
	t.Helper()
	var out []*molecule.Molecule
	for _, i := range rng.Perm(len(ms)) {
		ranks := make([]int32, ms[i].NumAtoms())
		for a, r := range rng.Perm(len(ranks)) {
			ranks[a] = int32(r)
		}
		out = append(out, read(t, smiles.WriteInOrder(ms[i], ranks))...)
	}
	return out
}

// TestTry checks what a sketch says of shelf molecules.
func TestTry(t *testing.T) {
	r, p := sides(t, "CCCCO.CS(=O)(=O)Cl>>CCCCOS(C)(=O)=O")
	s, err := sketch.Read(r, p)
	if err != nil {
		t.Fatal(err)
	}
	var items []sketch.Item
	for _, text := range []string{"CCO", "CC(=O)OC", "Oc1ccccc1", "CCCC", "CS(=O)(=O)Cl"} {
		items = append(items, sketch.Item{Name: text, Molecule: read(t, text)[0]})
	}
	takes, misses, err := s.Try(items, pattern.NewGroups(), 5)
	if err != nil {
		t.Fatal(err)
	}
	want := []sketch.Use{{1, "CCO", ""}, {2, "CS(=O)(=O)Cl", ""}}
	if !slices.Equal(takes, want) {
		t.Errorf("takes %v, want %v", takes, want)
	}
	want = []sketch.Use{{1, "CC(=O)OC", "O2: hydrogens 1"}, {1, "Oc1ccccc1", "C1: not aromatic"}}
	if !slices.Equal(misses, want) {
		t.Errorf("misses %v, want %v", misses, want)
	}
}
