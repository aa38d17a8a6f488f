package reactions

import (
	"context"
	"sort"
	"strings"
	"testing"
	"testing/fstest"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// hardForms is a small rule set with one transform for each hard form of the engine; textbook
// chemistry, no single source (memory).
const hardForms = `
family: hard forms
transforms:
- id: ozonolysis
  name: ozonolysis with reductive work-up
  reactants: ['[C:1]=[C:2]']
  products: ['[C:1]=[O:3]', '[C:2]=[O:4]']
  everywhere: true
  choices: {part 2: ['[CH2:2]=[O:4]', same]}
  conditions:
  - {id: ozone, yield: [60, 75, 90], media: [ozone], uses: ['2 [O]']}
  source: {text: textbook, provenance: memory}
  examples:
  - {from: [C1CCC=CC1], to: 'O=CCCCCC=O'}
  - {from: ['CC(C)=C(C)C'], to: 'CC(C)=O'}
  rejects:
  - {from: [C1CCCCC1], to: 'O=CCCCCC=O', why: no double bond}
- id: ester-hydrolysis
  name: ester hydrolysis
  reactants: ['[C:1](=[O:2])[O:3][C:4]']
  products: ['[C:1](=[O:2])[OH:5]', '[OH:3][C:4]']
  where: {4: [sp3]}
  everywhere: true
  choices: {part 1: ['C[C:1](=[O:2])[OH:5]'], part 2: ['[OH:3][CH3:4]', '[OH:3][CH2:4]C']}
  stereo: {4: free}
  conditions:
  - {id: base, yield: [60, 75, 90], media: [hot-aqueous-base], uses: [O]}
  source: {text: textbook, provenance: memory}
  examples:
  - {from: ['O=C1CCCCO1'], to: 'OCCCCC(=O)O'}
  - {from: ['COC(=O)c1cc(C(=O)OC)cc(C(=O)OC)c1'], to: 'OC(=O)c1cc(C(=O)O)cc(C(=O)O)c1'}
  rejects:
  - {from: ['CC(N)=O'], to: 'CC(=O)O', why: an amide}
- id: dieckmann
  name: Claisen and Dieckmann condensation
  reactants: ['[C:1](=[O:2])[O:3][C:4]', '[C:5][C:6](=[O:7])[O:8][C:9]']
  products: ['[C:1](=[O:2])[C:5][C:6](=[O:7])[O:8][C:9]', '[OH:3][C:4]']
  where: {5: [hydrogens at least 2, sp3], 4: [sp3], 9: [sp3]}
  choices: {part 2: ['[OH:3][CH2:4]C', '[OH:3][CH3:4]']}
  closes: 5-6
  conditions:
  - {id: ethoxide, yield: [40, 50, 65], media: []}
  source: {text: textbook, provenance: memory}
  examples:
  - {from: ['CCC(=O)OCC'], to: 'CCC(=O)C(C)C(=O)OCC'}
  - {from: ['CCOC(=O)CCCCC(=O)OCC'], to: 'CCOC(=O)C1CCCC1=O'}
  rejects:
  - {from: ['CCOC(=O)CCCC(=O)OCC'], to: 'CCOC(=O)C1CCC1=O', why: no ring of four}
- id: cyanide
  name: SN2 with cyanide
  reactants: ['[C:1][*:9]', '[CH:2]#[N:3]']
  products: ['[C:1][C:2]#[N:3]']
  where: {1: [sp3, carbon neighbours 0-2], 9: [one of Cl Br I]}
  choices: {9: [Br, Cl, I]}
  stereo: {1: invert}
  conditions:
  - {id: dmso, yield: [60, 75, 90], media: [cyanide]}
  source: {text: textbook, provenance: memory}
  examples:
  - {from: [CCCCBr, 'C#N'], to: 'CCCCC#N'}
  - {from: ['C[C@H](Br)CCC', 'C#N'], to: 'C[C@@H](C#N)CCC'}
  rejects:
  - {from: ['CC(C)(C)Br', 'C#N'], to: 'CC(C)(C)C#N', why: tertiary}
- id: dihydroxylation
  name: syn dihydroxylation
  reactants: ['[C:1]=[C:2]']
  products: ['[C:1]([OH:3])[C:2][OH:4]']
  stereo: {1-2: syn}
  everywhere: true
  conditions:
  - {id: osmium, yield: [60, 75, 90], media: [osmium], uses: [OO]}
  source: {text: textbook, provenance: memory}
  examples:
  - {from: ['C/C=C\C'], to: 'C[C@@H](O)[C@H](C)O'}
  - {from: ['C1CCC=CC1'], to: 'O[C@@H]1CCCC[C@@H]1O'}
  rejects:
  - {from: ['C/C=C/C'], to: 'C[C@@H](O)[C@H](C)O', why: the E alkene gives the other diol}
  - {from: ['C1CCC=CC1'], to: 'O[C@@H]1CCCC[C@H]1O', why: syn only}
- id: metathesis
  name: ring-closing metathesis
  reactants: ['[C:1]=[C:2]', '[C:3]=[C:4]']
  products: ['[C:1]=[C:3]', '[C:2]=[C:4]']
  choices: {part 2: ['[CH2:2]=[CH2:4]']}
  closes: 5-8
  conditions:
  - {id: ru, yield: [60, 75, 90], media: []}
  source: {text: textbook, provenance: memory}
  examples:
  - {from: ['C=CCN(C(C)=O)CC=C'], to: 'CC(=O)N1CC=CC1'}
  rejects:
  - {from: ['CCCC'], to: 'C=C', why: no alkene}
`

func testBook(t *testing.T, text string) *Book {
	t.Helper()
	fsys := fstest.MapFS{
		"groups.yaml":          {Data: []byte("groups: []\n")},
		"tolerance.yaml":       {Data: []byte("media:\n" + mediaRows("ozone", "hot-aqueous-base", "cyanide", "osmium"))},
		"transforms/hard.yaml": {Data: []byte(text)},
	}
	b, err := Load(fsys)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func mediaRows(ids ...string) string {
	var s strings.Builder
	for _, id := range ids {
		s.WriteString("- {id: " + id + ", name: " + id + "}\n")
	}
	return s.String()
}

func TestHardForms(t *testing.T) {
	b := testBook(t, hardForms)
	for _, tr := range b.Transforms {
		for _, f := range b.Check(tr) {
			t.Error(f)
		}
	}
}

func read(t testing.TB, s string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(s)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// precursors lists what Expand proposes, sorted.
func precursors(t *testing.T, b *Book, id, target string) []string {
	t.Helper()
	steps, err := b.Expand(context.Background(), read(t, target), nil)
	if err != nil {
		t.Fatal(err)
	}
	var out []string
	for _, s := range steps {
		if s.Transform.ID != id {
			continue
		}
		var names []string
		for _, r := range s.Reactants {
			names = append(names, smiles.Write(r.Molecule))
		}
		sort.Strings(names)
		out = append(out, strings.Join(names, "."))
	}
	sort.Strings(out)
	return out
}

func TestExpand(t *testing.T) {
	b := testBook(t, hardForms)
	for _, c := range []struct {
		id, target string
		want       int
	}{
		{"ozonolysis", "O=CCCCCC=O", 1},
		{"ester-hydrolysis", "OCCCCC(=O)O", 1},
		{"ester-hydrolysis", "OC(=O)c1cc(C(=O)O)cc(C(=O)O)c1", 3},
		{"metathesis", "CC(=O)N1CC=CC1", 1},
	} {
		got := precursors(t, b, c.id, c.target)
		t.Log(c.id, c.target, got)
		if len(got) < c.want {
			t.Errorf("%s of %s: %d proposals, want at least %d: %v", c.id, c.target, len(got), c.want, got)
		}
	}
}
