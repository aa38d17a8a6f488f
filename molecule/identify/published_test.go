package identify

import (
	"bytes"
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"testing"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/isomer"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

const published = "../../testdata/spectra"

// answer is one row of the answers of the published spectra.
type answer struct {
	File      string   `yaml:"file"`
	Structure string   `yaml:"structure"`
	Formula   string   `yaml:"formula"`
	Slow      bool     `yaml:"slow"`
	Accept    []string `yaml:"accept"`
	Source    string   `yaml:"source"`
}

func answers(t *testing.T) []answer {
	t.Helper()
	path := filepath.Join(published, "answers.yaml")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var f struct {
		Answers []answer `yaml:"answers"`
	}
	if err := rules.Decode(path, data, &f); err != nil {
		t.Fatal(err)
	}
	return f.Answers
}

func readMolecule(t *testing.T, text string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(text)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	return m.WithoutStereo()
}

// readData reads the evidence of a case file.
func readData(t *testing.T, path string) *Data {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	c, err := DecodeCase(path, data)
	if err != nil {
		t.Fatal(err)
	}
	d, err := c.Evidence.Read(path, os.DirFS(filepath.Dir(path)))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// TestPublishedRank asks for the right structure at the first place of every published case, up to
// structures that the evidence cannot tell apart. The slow ones run with SHELFWARD_SLOW=1.
func TestPublishedRank(t *testing.T) {
	slow := os.Getenv("SHELFWARD_SLOW") != ""
	quick := 0
	for _, a := range answers(t) {
		if !slow && (a.Slow || quick >= 14) {
			continue
		}
		quick++
		t.Run(a.File, func(t *testing.T) {
			d := readData(t, filepath.Join(published, a.File))
			r, err := Identify(context.Background(), d, Options{Expect: readMolecule(t, a.Structure), Time: 5 * time.Minute})
			if err != nil {
				t.Fatal(err)
			}
			if r.Formula != a.Formula {
				t.Errorf("formula %s, want %s", r.Formula, a.Formula)
			}
			if r.Complete && !r.Expected.Generated {
				t.Errorf("complete under %v, but %s was not built: an assumption is wrong", r.Assumed, a.Structure)
			}
			if r.Expected.Rank == 1 {
				return
			}
			first := ""
			if len(r.Candidates) > 0 {
				first = r.Candidates[0].SMILES
				key := readMolecule(t, first).FlatKey()
				if slices.ContainsFunc(a.Accept, func(x string) bool { return readMolecule(t, x).FlatKey() == key }) {
					return
				}
			}
			t.Errorf("%s at rank %d (0: not listed), first is %s", a.Structure, r.Expected.Rank, first)
		})
	}
}

// TestHardInferencesHold checks every inference used as hard against the right structure of every
// published case.
func TestHardInferencesHold(t *testing.T) {
	for _, a := range answers(t) {
		d := readData(t, filepath.Join(published, a.File))
		m := readMolecule(t, a.Structure)
		f := m.Formula()
		p := isomer.Problem{Formula: f}
		d.inferHard(&f, &p)
		var kinds [4]int
		carbonyls := map[int]bool{} // hydrogens on C=O carbons
		for i := range m.NumAtoms() {
			at := m.Atom(i)
			if at.Element != 6 {
				continue
			}
			kinds[min(at.Hydrogens, 3)]++
			for _, nb := range m.Neighbors(i) {
				if m.Bond(int(nb.Bond)).Order == 2 && m.Atom(int(nb.Atom)).Element == 8 {
					carbonyls[int(at.Hydrogens)] = true
				}
			}
		}
		for h, n := range kinds {
			if !p.Carbons[h].Holds(n) {
				t.Errorf("%s: %d carbons with %d hydrogens, the inference asks for %+v", a.File, n, h, p.Carbons[h])
			}
		}
		for _, piece := range p.Contains {
			if h := piece.Atoms[0].Hydrogens; h == isomer.AnyHydrogens && len(carbonyls) == 0 || h >= 0 && !carbonyls[int(h)] {
				t.Errorf("%s: no %s with %d hydrogens, though inferred", a.File, piece.Name, h)
			}
		}
	}
}

// TestGroupsHold checks the table of groups on the published cases: what it calls absent must not be
// there. Only groups that a pattern can name are checked.
func TestGroupsHold(t *testing.T) {
	patterns := map[string]string{
		"aldehyde": "[CH](=O)C", "ketone": "CC(=O)C", "nitrile": "C#N", "carboxylic acid": "C(=O)[OH]", "ester": "C(=O)[OH0]C",
		"nitro": "[N+](=O)[O-]", "alcohol": "C[OH]", "benzene ring": "c1ccccc1", "terminal alkyne": "C#[CH]", "oxirane": "C1OC1",
		"secondary amide": "C(=O)[NH]", "tertiary amide": "C(=O)[NH0](C)C", "alkene": "C=C", "tert-butyl": "C([CH3])([CH3])[CH3]",
	}
	for _, a := range answers(t) {
		d := readData(t, filepath.Join(published, a.File))
		m := readMolecule(t, a.Structure)
		f := m.Formula()
		for _, v := range d.judgeGroups(&f) {
			text, ok := patterns[v.Group]
			if !ok || v.Verdict != "absent" {
				continue
			}
			q, err := compilePiece(text)
			if err != nil {
				t.Fatalf("%s: %v", text, err)
			}
			has := Data{Contains: append((&Data{}).Contains, q)}
			if has.meetsPieces(m) {
				t.Errorf("%s: %s is called absent because %v, but %s has it", a.File, v.Group, v.Because, a.Structure)
			}
		}
	}
}

const demo = "../../testdata/demo"

// TestDemo: 1,684 isomers, 33 of them ketones, 13 under the kinds of carbon; the first is settled and
// the second the expected one. The thin twin is not settled.
func TestDemo(t *testing.T) {
	r, err := Identify(context.Background(), readData(t, filepath.Join(demo, "lure-4.yaml")), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if r.Generated != 13 || !r.Complete || !r.Settled {
		t.Errorf("generated %d, complete %v, settled %v; want 13, true, true", r.Generated, r.Complete, r.Settled)
	}
	for i, want := range []string{"CCCC(C)C(=O)CC", "CCCC(=O)C(C)CC"} {
		if got := readMolecule(t, r.Candidates[i].SMILES); got.FlatKey() != readMolecule(t, want).FlatKey() {
			t.Errorf("candidate %d is %s, want %s", i+1, r.Candidates[i].SMILES, want)
		}
	}
	for _, n := range []string{"leaves 1684 structures", "leaves 33 structures", "leaves 13 structures"} {
		if !slices.ContainsFunc(r.Assumed, func(a Assumption) bool { return bytes.Contains([]byte(a.Why), []byte(n)) }) {
			t.Errorf("no inference %q in %v", n, r.Assumed)
		}
	}
	thin, err := Identify(context.Background(), readData(t, filepath.Join(demo, "lure-4-thin.yaml")), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if thin.Settled || thin.Generated != 1684 || thin.NextMeasurement == "" {
		t.Errorf("thin: settled %v, generated %d, next %q", thin.Settled, thin.Generated, thin.NextMeasurement)
	}
}

// TestSameBytes: the same input gives the same bytes, with one worker or two.
func TestSameBytes(t *testing.T) {
	var want []byte
	for i, workers := range []int{1, 1, 2} {
		r, err := Identify(context.Background(), readData(t, filepath.Join(published, "methyl-3-aminobenzoate.yaml")), Options{Workers: workers, Time: 5 * time.Minute})
		if err != nil {
			t.Fatal(err)
		}
		got, err := json.Marshal(r)
		if err != nil {
			t.Fatal(err)
		}
		if i == 0 {
			want = got
		} else if !bytes.Equal(got, want) {
			t.Errorf("run %d with %d workers differs:\n%s\n%s", i+1, workers, got, want)
		}
	}
}

// TestTimeOut: a run that cannot finish says so and is not complete.
func TestTimeOut(t *testing.T) {
	r, err := Identify(context.Background(), readData(t, filepath.Join(published, "4-oxiran-2-yl-pyridine.yaml")), Options{Time: 100 * time.Millisecond})
	if err != nil {
		t.Fatal(err)
	}
	if r.Complete {
		t.Errorf("complete after 100 ms with %d structures", r.Generated)
	}
}

// TestContradiction: evidence that contradicts itself gives no candidate and says why.
func TestContradiction(t *testing.T) {
	for _, text := range []string{
		"evidence:\n  formula: C8H16O\n  mass:\n    molecular_ion: 100\n",
		"evidence:\n  formula: C8H16O\n  elements: {C: 50.0, H: 6.0}\n",
		"evidence:\n  formula: C8H15O\n",
		"evidence:\n  formula: C3H6O\n  contains: ['C#N']\n",
	} {
		c, err := DecodeCase("x.yaml", []byte(text))
		if err != nil {
			t.Fatal(err)
		}
		d, err := c.Evidence.Read("x.yaml", nil)
		if err != nil {
			t.Fatal(err)
		}
		r, err := Identify(context.Background(), d, Options{})
		if err != nil || r.Nothing == "" || len(r.Candidates) > 0 {
			t.Errorf("%q: nothing %q, %d candidates, error %v", text, r.Nothing, len(r.Candidates), err)
		}
	}
}

// TestCheck: the right target fits, a wrong one does not.
func TestCheck(t *testing.T) {
	d := readData(t, filepath.Join(demo, "lure-4.yaml"))
	if fits, misfits := d.Check(readMolecule(t, "CCCC(C)C(=O)CC")); len(fits) == 0 || len(misfits) > 0 {
		t.Errorf("right target: fits %v, misfits %v", fits, misfits)
	}
	if _, misfits := d.Check(readMolecule(t, "CCCCC(=O)CC")); len(misfits) == 0 {
		t.Error("a target of another formula has no misfit")
	}
}
