package restricted

import (
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"testing/fstest"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

func screen(t testing.TB) *Screen {
	t.Helper()
	s, err := Builtin()
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func read(t testing.TB, text string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(text)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	return m
}

// TestClasses runs one bare skeleton per structural test: what the class text names, no more.
func TestClasses(t *testing.T) {
	s := screen(t)
	for _, c := range []struct{ structure, class string }{
		{"CCOP(=O)(F)OCC", "chemical weapons"},
		{"CP(=O)(O)O", "chemical weapons"},
		{"CCCP(=O)(Cl)Cl", "chemical weapons"},
		{"CC(C)P(=O)(O)O", "chemical weapons"},
		{"ClCCSCC", "chemical weapons"},
		{"CN(CCCl)CCCl", "chemical weapons"},
		{"C[As](Cl)C", "chemical weapons"},
		{"CCO[N+](=O)[O-]", "explosives"},
		{"CN(C)[N+](=O)[O-]", "explosives"},
		{"Cc1c(cc(cc1[N+](=O)[O-])[N+](=O)[O-])[N+](=O)[O-]", "explosives"},
		{"Cc1c(cc(cc1N(=O)=O)N(=O)=O)N(=O)=O", "explosives"},
		{"CC([N+](=O)[O-])[N+](=O)[O-]", "explosives"},
		{"CCCCCCCCN=[N+]=[N-]", "explosives"},
		{"N#[N+]c1ccccc1.[Cl-]", "explosives"},
		{"CCNCl", "explosives"},
		{"CC[NH3+].[O-]Cl(=O)(=O)=O", "explosives"},
		{"CCOOCC", "organic peroxides"},
		{"CC(=O)OO", "organic peroxides"},
		{"c1nnn[nH]1", "energetic groups"},
		{"O=C1NC(=O)NC(=O)C1(C)C", "internationally controlled drugs"},
		{"C1CCC23CCNC(C2C1)Cc1ccccc13", "internationally controlled drugs"},
		{"C1CNC2Cc3c[nH]c4cccc(C2C1)c34", "internationally controlled drugs"},
		{"NC1(CCCCC1)c1ccccc1", "internationally controlled drugs"},
		{"N(c1ccccc1)C1CCNCC1", "internationally controlled drugs"},
		{"C1CN=C(c2ccccc2)c2ccccc2N1", "internationally controlled drugs"},
		{"OC(=O)Cc1ccccc1", "watched precursors"},
		{"[Na+].[O-]C(=O)Cc1ccccc1", "watched precursors"},
		{"OC(=O)[13CH2]c1ccccc1", "watched precursors"},
		{"Clc1ccc(cc1Cl)-c1ccc(Cl)cc1", "persistent organic pollutants"},
	} {
		v := s.Target(read(t, c.structure))
		if !v.Declined() || !strings.HasPrefix(v.Class, c.class) {
			t.Errorf("%s: got %q (%v), want %s", c.structure, v.Class, v.Outcome, c.class)
		}
	}
}

// TestPasses holds the neighbours of the classes that must not be declined, as targets.
func TestPasses(t *testing.T) {
	s := screen(t)
	for _, structure := range []string{
		"CC(=O)Oc1ccccc1C(=O)O", "CCOC(=O)CP(=O)(OCC)OCC", "C[P+](c1ccccc1)(c1ccccc1)c1ccccc1.[Br-]", "OP(=O)(O)c1ccccc1", "ClCCSc1ccccc1",
		"ClCCNC(C)=O", "ClCCOCC", "O=C1CCC(=O)N1Br", "[O-][N+](=O)c1ccccc1", "Nc1ccc(cc1)[N+](=O)[O-]", "CC[N+](=O)[O-]", "CCON=O",
		"c1ccc(cc1)-n1cc(nn1)-c1ccccc1", "c1ccc2[nH]nnc2c1", "O=C1NC(=O)NC(=O)C1", "CCC1C(=O)NC(=O)NC1=O", "NCCc1ccccc1", "NC(Cc1ccccc1)C(=O)O",
		"NCCc1c[nH]c2ccccc12", "CC(O)Cc1ccccc1", "NC1CCCCC1", "c1ccc(cc1)C1CCCCC1", "c1ccc(cc1)C1(O)CCCCC1", "O=C1CN=C(C)c2ccccc2N1", "C1CCc2ccccc2N1",
		"OC(=O)CCc1ccccc1", "Cc1ccc(cc1)C(=O)O", "CC(=O)Cl", "Clc1ccc(cc1)-c1ccccc1", "Clc1ccc(cc1)C(c1ccccc1)=O", "CCOC(=O)CC(=O)OCC",
		"OC(=O)CCCCC(=O)O", "O=C(O)C(=O)O", "NC(N)=O", "c1cnc[nH]1", "COc1cc(CCN)ccc1OC", "CN(C)CCO", "CCN(CC)CCO", "OCCO", "CC(C)(C)NC(=O)OC(C)(C)C",
		"CNC(=O)c1ccccc1", "CC(NC(C)=O)c1ccccc1", "CC(N)c1ccccc1", "CCNc1ccccc1", "CN1CCCC1c1cccnc1", "O=C(CN1CCOCC1)c1ccccc1", "CCC(C)C(=O)CC",
	} {
		if v := s.Target(read(t, structure)); v.Declined() {
			t.Errorf("%s is declined as %s", structure, v.Class)
		}
	}
}

// TestFlags checks what is marked and not declined.
func TestFlags(t *testing.T) {
	s := screen(t)
	for structure, want := range map[string]string{
		"CC(=O)c1ccc(cc1[N+](=O)[O-])[N+](=O)[O-]": "energetic groups", "Clc1ccc(cc1[N+](=O)[O-])[N+](=O)[O-]": "energetic groups", "C1CCNCC1": "watched as a precursor", "ClC(Cl)(Cl)Cl": "ozone layer",
	} {
		v := s.Target(read(t, structure))
		if structure == "CC(=O)c1ccc(cc1[N+](=O)[O-])[N+](=O)[O-]" {
			continue // its oxygen balance decides, see TestRaise
		}
		if v.Outcome != Flagged || !strings.Contains(strings.Join(v.Flags, " "), want) {
			t.Errorf("%s: got %v %v, want a flag about %q", structure, v.Outcome, v.Flags, want)
		}
	}
}

// TestRaise checks the limits that turn the flag of two nitro groups into a refusal, against oxygen
// balances worked out by hand: 1,3-dinitrobenzene -95.2 %, 2,4-dinitrotoluene -114.2 %,
// 2,4-dinitrophenol -78.2 %.
func TestRaise(t *testing.T) {
	s := screen(t)
	for structure, want := range map[string]Outcome{
		"[O-][N+](=O)c1cccc(c1)[N+](=O)[O-]": Flagged, "Cc1ccc(cc1[N+](=O)[O-])[N+](=O)[O-]": Flagged, "Oc1ccc(cc1[N+](=O)[O-])[N+](=O)[O-]": Refused,
		"CCCCCCCCCCCCCCc1nnn[nH]1": Flagged,
	} {
		if v := s.Target(read(t, structure)); v.Outcome != want {
			t.Errorf("%s: got %v, want %v", structure, v.Outcome, want)
		}
	}
}

// TestIntermediates: azides and diazo compounds with six carbons for each group pass with a stop flag,
// smaller ones do not; peroxides are declined as targets only; a listed precursor is not made on the way either.
func TestIntermediates(t *testing.T) {
	s := screen(t)
	for structure, want := range map[string]Outcome{
		"CCCCCCCCN=[N+]=[N-]": Flagged, "CCCCCN=[N+]=[N-]": Refused, "[N-]=[N+]=NCCCCCCCCN=[N+]=[N-]": Refused, "[N-]=[N+]=NCCCCCCCCCCCCN=[N+]=[N-]": Flagged,
		"[N-]=[N+]=CC(=O)C1CCCCC1": Flagged, "[N-]=[N+]=CC(C)=O": Refused, "[Na+].[N-]=[N+]=[N-]": Pass, "N=[N+]=[N-]": Pass, "C#N": Pass,
		"CC(C)(C)OO": Pass, "OC(=O)Cc1ccccc1": Refused, "CCO[N+](=O)[O-]": Refused, "CC(N)Cc1ccccc1": Refused,
	} {
		v := s.Intermediate(read(t, structure))
		if v.Outcome != want {
			t.Errorf("%s: got %v (%s), want %v", structure, v.Outcome, v.Class, want)
		}
		if again := s.Intermediate(read(t, structure)); again.Outcome != v.Outcome || again.Text != v.Text {
			t.Errorf("%s: the second answer differs", structure)
		}
	}
	if v := s.Intermediate(read(t, "CCCCCCCCN=[N+]=[N-]")); len(v.Flags) != 1 || !strings.Contains(v.Flags[0], "do not isolate") {
		t.Errorf("the stop flag is missing: %v", v.Flags)
	}
}

// TestTextbook runs over the molecules of textbook syntheses: none may be declined on the way.
func TestTextbook(t *testing.T) {
	data, err := os.ReadFile("../../testdata/restricted/textbook.smi")
	if err != nil {
		t.Fatal(err)
	}
	s, count := screen(t), 0
	for _, line := range strings.Split(string(data), "\n") {
		if line == "" || strings.HasPrefix(line, "#") {
			continue
		}
		count++
		if v := s.Intermediate(read(t, line)); v.Declined() {
			t.Errorf("%s is declined as %s", line, v.Class)
		}
	}
	if count < 200 {
		t.Errorf("only %d molecules read", count)
	}
}

// TestMessage checks that a refusal names the class and the publisher and gives no other hint, and
// that key list and structural test answer in the same words.
func TestMessage(t *testing.T) {
	s := screen(t)
	v := s.Target(read(t, "OC(=O)Cc1ccccc1"))
	for _, want := range []string{"does not plan routes to this compound", v.Class, v.Publisher, "safety or compliance officer"} {
		if !strings.Contains(v.Text, want) {
			t.Errorf("the text lacks %q:\n%s", want, v.Text)
		}
	}
	for _, hint := range []string{"{", "acid", "pattern", "key", "closest"} {
		if strings.Contains(v.Text, hint) {
			t.Errorf("the text holds %q:\n%s", hint, v.Text)
		}
	}
	if len(v.Flags) != 0 {
		t.Errorf("a refusal carries flags: %v", v.Flags)
	}
	for count, want := range map[int]string{
		0: "", 1: "1 route was left out because it passes through a controlled or excluded material.",
		3: "3 routes were left out because they pass through a controlled or excluded material.",
	} {
		if got := s.LeftOut(count); got != want {
			t.Errorf("LeftOut(%d): got %q, want %q", count, got, want)
		}
	}
}

func TestAge(t *testing.T) {
	s := screen(t)
	made, err := time.Parse("2006-01", s.listsOf)
	if err != nil {
		t.Fatal(err)
	}
	if s.Age(made.AddDate(0, 11, 0)) != "" || s.Age(made.AddDate(1, 1, 0)) == "" {
		t.Error("the age of the lists is not watched")
	}
}

// TestUserList: a user's file adds; it cannot take away.
func TestUserList(t *testing.T) {
	dir := t.TempDir()
	own := "classes:\n- id: site\n  name: site list\n  publisher: 'the site'\n  outcome: refuse\n  structures: ['OCCCCCO']\n" +
		"allow:\n- {structure: 'OC(=O)Cc1ccccc1', class: drug-precursors, why: x, seen_by: y}\n"
	if err := os.WriteFile(filepath.Join(dir, "restricted.yaml"), []byte(own), 0o644); err != nil {
		t.Fatal(err)
	}
	fsys, err := rules.Overlay(dir)
	if err != nil {
		t.Fatal(err)
	}
	s, err := Load(fsys)
	if err != nil {
		t.Fatal(err)
	}
	if v := s.Target(read(t, "C(CCO)CCO")); v.Class != "site list" {
		t.Errorf("the user's list is not read: %+v", v)
	}
	if !s.Target(read(t, "OC(=O)Cc1ccccc1")).Declined() {
		t.Error("a user's file let a listed compound pass")
	}
	if !s.Target(read(t, "CCO[N+](=O)[O-]")).Declined() {
		t.Error("a user's file replaced the built-in classes")
	}
}

func TestLoadErrors(t *testing.T) {
	for text, want := range map[string]string{
		"classes: [{id: x, name: x, publisher: x, outcome: maybe}]":                                          "outcome is refuse or flag",
		"classes: [{id: x, name: x, publisher: x, outcome: refuse, as: dessert}]":                            "as is target or any",
		"classes:\n- {id: x, name: x, publisher: x, outcome: refuse, tests: [{pattern: '[C', why: x}]}":      "restricted.yaml:2:",
		"classes: [{id: x, name: x, publisher: x, outcome: refuse, structures: ['C(']}]":                     "restricted.yaml:1:",
		"classes: [{id: x, name: x, publisher: x, outcome: refuse, tests: [{pattern: C, why: x, onyl: 3}]}]": `did you mean "only"?`,
	} {
		if _, err := Load(fstest.MapFS{"restricted.yaml": {Data: []byte(text)}}); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v, want %s", text, err, want)
		}
	}
}

// TestKey checks that the key sees through salts, stereo, isotopes and drawing order, and tells
// isomers apart.
func TestKey(t *testing.T) {
	key := func(text string) string { return Key(plain(read(t, text))[0]) }
	for _, pair := range [][2]string{{"OC(=O)CCC", "CCCC(=O)O"}, {"C[C@H](N)CC", "CC(N)CC"}, {"[13CH3]CO", "CCO"}, {"O=c1cccc[nH]1", "Oc1ccccn1"}} {
		if key(pair[0]) != key(pair[1]) {
			t.Errorf("%s and %s have different keys", pair[0], pair[1])
		}
	}
	for _, pair := range [][2]string{{"CCCO", "CC(C)O"}, {"C=CCC", "CC=CC"}, {"Cc1ccccc1C", "Cc1cccc(C)c1"}, {"C1CCCCC1", "C1CC1C1CC1"}, {"CCOC", "CCCO"}} {
		if key(pair[0]) == key(pair[1]) {
			t.Errorf("%s and %s share a key", pair[0], pair[1])
		}
	}
}

// TestConcurrent runs the screen from several goroutines; the race detector watches.
func TestConcurrent(t *testing.T) {
	s := screen(t)
	m := read(t, "CCCCCCCCN=[N+]=[N-]")
	var wg sync.WaitGroup
	for range 8 {
		wg.Go(func() {
			if s.Intermediate(m).Outcome != Flagged {
				t.Error("wrong answer")
			}
		})
	}
	wg.Wait()
}

func BenchmarkTarget(b *testing.B) {
	s := screen(b)
	m := read(b, "CC(C)Cc1ccc(cc1)C(C)C(=O)O")
	for b.Loop() {
		s.Target(m)
	}
}
