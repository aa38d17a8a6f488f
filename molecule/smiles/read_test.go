package smiles

import (
	"errors"
	"strings"
	"testing"
)

// TestSpecification goes through the examples of the OpenSMILES specification 1.0 (opensmiles.org):
// texts in one group are one molecule. Third column: hydrogens of the first atom, or -1.
func TestSpecification(t *testing.T) {
	for _, c := range []struct {
		group   string
		formula string
	}{
		// 3.1 atoms
		{"[U] [U]", "U"}, {"[Pb]", "Pb"}, {"[He]", "He"}, {"[*]", "*"}, {"[CH4] C", "CH4"}, {"[ClH] Cl", "ClH"}, {"[ClH1] Cl", "ClH"},
		{"[Cl-]", "Cl-"}, {"[OH1-] [OH-]", "HO-"}, {"[Cu+2] [Cu++]", "Cu(2+)"}, {"[13CH4]", "CH4"}, {"[2H+]", "H+"}, {"[238U]", "U"},
		{"N", "H3N"}, {"Cl", "ClH"}, {"[OH3+]", "H3O+"}, {"[NH4+]", "H4N+"}, {"[O-][N+](=O)C O=N(=O)C", "CH3NO2"}, {"CN=[N+]=[N-] CN=N#N", "CH3N3"}, {"[O-][n+]1ccccc1 O=n1ccccc1", "C5H5NO"}, {"[CH2:2]=C C=C", "C2H4"},
		{"[Na+].[Cl-]", "ClNa"}, {"[H+]", "H+"}, {"[H][H]", "H2"}, {"[H]C([H])([H])[H] C", "CH4"}, {"[SiH4]", "H4Si"}, {"[PH5]", "H5P"},
		// 3.2 bonds
		{"CC C-C", "C2H6"}, {"C=C", "C2H4"}, {"C#N N#C", "CHN"}, {"CCO OCC C(O)C", "C2H6O"}, {"O=C=O", "CO2"}, {"[Ga+]$[As-]", "AsGa"},
		// 3.3 branches
		{"CC(C)C(=O)O OC(=O)C(C)C", "C4H8O2"}, {"FC(F)F C(F)(F)F", "CHF3"}, {"O=Cl(=O)(=O)[O-] [O-][Cl+3]([O-])([O-])[O-] [O-][Cl+](=O)(=O)[O-]", "ClO4-"}, {"OI(=O)=O O[I+2]([O-])[O-]", "HIO3"},
		{"CCCC(C(=O)O)CCC", "C8H16O2"}, {"C(C(C(C(C(C(C(C(C(C)))))))))", "C10H22"}, {"FS(F)(F)(F)(F)F", "F6S"},
		// 3.4 rings
		{"C1CCCCC1 C=1CCCCC=1.C N1CCCCC1.C C%11CCCCC%11 C%(123)CCCCC%(123) C1CCCCC%01", ""},
		{"C1=CCCCC1 C=1CCCCC1 C1CCCCC=1 C=1CCCCC=1", "C6H10"}, {"C0CCCCC0 C1CCCCC1 C%01CCCCC1", "C6H12"},
		{"C1CCCCC1C1CCCCC1 C1CCCCC1C2CCCCC2", "C12H22"}, {"C12(CCCCC1)CCCCC2", "C11H20"},
		{"C1.C1 CC", "C2H6"}, {"c1c2c3c4cc1.Br2.Cl3.Cl4 Clc1c(Cl)cccc1Br", "C6H3BrCl2"},
		// 3.5 aromaticity
		{"c1ccccc1 C1=CC=CC=C1 C1C=CC=CC=1 c:1:c:c:c:c:c1", "C6H6"}, {"c1ccc2CCCc2c1 C1=CC=CC(CCC2)=C12", "C9H10"},
		{"c1occc1 C1OC=CC=1", "C4H4O"}, {"c1ccc1 C1=CC=C1", "C4H4"}, {"n1ccccc1 C1=CC=NC=C1", "C5H5N"}, {"O=c1[nH]cccc1 O=C1NC=CC=C1", "C5H5NO"},
		{"Cn1cccc1", "C5H7N"}, {"c1ccccc1-c2ccccc2 c1ccccc1c2ccccc2", "C12H10"}, {"[se]1cccc1", "C4H4Se"}, {"[te]1cccc1", "C4H4Te"},
		{"[as]1ccccc1", "C5H5As"}, {"b1ccccc1", "C5H5B"}, {"p1ccccc1", "C5H5P"}, {"s1cccc1", "C4H4S"}, {"[nH]1cccc1 N1C=CC=C1", "C4H5N"},
		// 3.7 disconnected
		{"[Na+].[O-]c1ccccc1 c1cc([O-].[Na+])ccc1", "C6H5NaO"}, {"C1.O2.C12 CCO.C", ""}, {"[NH4+].[NH4+].[O-]S(=O)(=O)[S-]", "H8N2O3S2"},
		// 3.9 stereo
		{"N[C@](C)(F)C(=O)O N[C@@](F)(C)C(=O)O", "C3H6FNO2"}, {"N[C@@H](C)C(=O)O N[C@H](C(=O)O)C [C@H](N)(C)C(=O)O C[C@H](N)C(=O)O N[C@TH2H](C)C(=O)O", "C3H7NO2"},
		{"OC(=O)[C@H](C)N OC(=O)[C@TH1H](C)N [C@@](C)(N)([H])C(O)=O", ""},
		{"C[C@H]1CCCCO1 O1CCCC[C@@H]1C", "C6H12O"}, {"F[C@]1(Cl)CCCO1", ""},
		{"F/C=C/F F\\C=C\\F C(\\F)=C/F", "C2H2F2"}, {"F/C=C\\F F\\C=C/F C(/F)=C/F", "C2H2F2"}, {"F/C(CC)=C/F F\\C(CC)=C\\F", ""},
		{"F/C=C/C/C=C\\C", "C6H9F"}, {"F/C=C/CC=CC", "C6H9F"}, {"CC/C=C/1CCCC(C)C1 CC/C=C1CCCC(C)C\\1", ""},
		{"N[C@@H](C)[C@@H](C)O", ""}, {"C(C)=C", "C3H6"},
		{"C/C=N/[H] [H]/N=C/C", "C2H5N"}, {"[H]/C(C)=C/C C/C=C\\C", "C4H8"}, {"[H]/N=C(C)C N=C(C)C", "C3H7N"},
		{"[NH]=[N+]=[N-]", "HN3"}, {"[2H]C([2H])([2H])O", "CH4O"}, {"NC(Br)=[C@]=C(O)C NC(Br)=[C@AL1]=C(O)C", ""},
		{"C[Pt@SP1](F)(Cl)[H] C[PtH](F)Cl", ""}, {"*c1ccccc1", "*C6H5"}, {"[CH3-] [CH3-1]", "CH3-"}, {"[Fe+++] [Fe+3]", "Fe(3+)"},
		{"[O--] [O-2]", "O(2-)"}, {"C[S@](=O)CC [S@](C)(=O)CC", "C3H8OS"},
	} {
		var first string
		for i, text := range strings.Fields(c.group) {
			m, err := Read(text)
			if err != nil {
				t.Errorf("%s: %v", text, err)
				continue
			}
			if c.formula == "" && i > 0 && (c.group[:3] == "C1C" || c.group[:3] == "C1.") {
				continue // read only
			}
			if c.formula != "" && hillWithStar(m.Formula().String()) != hillWithStar(c.formula) {
				t.Errorf("%s: formula %s, want %s", text, m.Formula(), c.formula)
			}
			if got := Write(m); i == 0 {
				first = got
			} else if got != first {
				t.Errorf("%s is %s, but the first of its group is %s", text, got, first)
			}
		}
	}
}

func hillWithStar(s string) string { return strings.TrimSuffix(strings.TrimPrefix(s, "*"), "*") }

// TestErrors checks the column and a word of the message.
func TestErrors(t *testing.T) {
	for _, c := range []struct {
		text    string
		column  int
		message string
	}{
		{"", 1, "found nothing"}, {"C(", 2, "never closed"}, {"C)", 2, "closes nothing"}, {"C()C", 3, "inside the branch"},
		{"C1CC", 2, "never closed"}, {"C11", 3, "itself"}, {"C12CC12", 7, "bonded already"}, {"C=1CC#1", 7, "two different bonds"},
		{"=C", 1, "before the bond"}, {"C==C", 3, "after the bond"}, {"C=", 3, "found the end"}, {"C.", 3, "after '.'"}, {".C", 1, "before '.'"},
		{"C..C", 3, "before '.'"}, {"C=.C", 3, "found '.'"}, {"(C)C", 1, "before '('"}, {"C=(C)C", 2, "inside its bracket"}, {"1CC1", 1, "before the ring closure"},
		{"[C", 1, "never closed"}, {"[", 1, "never closed"}, {"[]", 2, "element symbol"}, {"[Xx]", 2, "element symbol"}, {"[C@@@]", 5, "expected ']'"},
		{"[CH4", 1, "never closed"}, {"[C:]", 4, "atom class"}, {"[C+99]", 3, "charge"}, {"[1234C]", 5, "more than 3 digits"}, {"[C@TH3]", 6, "from 1 to 2"},
		{"C%1", 4, "two digits"}, {"C%(1", 5, "')'"}, {"C%()", 4, "')'"}, {"CX", 2, "expected an atom"}, {"CLi", 2, "expected an atom"}, {"NaCl", 2, "expected an atom"},
		{"Hg", 1, "[Hg]"}, {"C C", 2, "blank"}, {"C\u00e9", 2, "'é'"}, {"CC]", 3, "closes no bracket"}, {"c1ccnc1", 5, "[nH]"}, {"c1cccc1", 6, "double bonds"},
		{"cc", 1, "ring"}, {"Cc", 2, "ring"}, {"C(C)(C)(C)(C)C", 1, "5 bonds"}, {"CN(C)(C)C", 2, "[N+]"}, {"OC(=O)(=O)C", 2, "C has"}, {"CO(C)C", 2, "O has"},
		{"[CH5]", 1, "5 bonds"}, {"F/C(\\Cl)=C/F", 6, "one side"}, {"C/C(=C/F)\\F", 11, "one side"}, {"[HH]", 3, "no hydrogens"}, {"CC(C", 3, "never closed"},
		{"CCl=C", 2, "Cl has"}, {"[C-]#[O-]", 6, "O- has"}, {"C-=C", 3, "after the bond"}, {"[Na+", 1, "never closed"}, {"C1CC-.C1", 6, "found '.'"},
	} {
		_, err := Read(c.text)
		var e *Error
		if !errors.As(err, &e) {
			t.Errorf("%q: no error of the right type (%v)", c.text, err)
			continue
		}
		if e.Column() != c.column || !strings.Contains(e.Message, c.message) {
			t.Errorf("%q: %v; want column %d and %q", c.text, err, c.column, c.message)
		}
		if strings.Contains(e.Error(), "\n") {
			t.Errorf("%q: the message has several lines", c.text)
		}
		lines := strings.Split(e.Caret(), "\n")
		if len(lines) != 2 || !strings.HasSuffix(lines[1], "^") {
			t.Errorf("%q: caret %q", c.text, e.Caret())
		}
	}
}

func TestCaret(t *testing.T) {
	_, err := Read("CCOC(=O)c1ccnc1")
	var e *Error
	if !errors.As(err, &e) {
		t.Fatal(err)
	}
	if got, want := e.Caret(), "CCOC(=O)c1ccnc1\n            ^"; got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// TestLargeInput: long lines are read or refused in bounded time and memory, without recursion.
func TestLargeInput(t *testing.T) {
	for _, c := range []struct {
		name, text, message string
	}{
		{"1,900 carbons", strings.Repeat("C", 1900), ""},
		{"1,900 open branches", strings.Repeat("C(", 950) + "C" + strings.Repeat(")C", 950), ""},
		{"1,900 atoms in fused rings", "C1CCCCC1" + strings.Repeat("C1CCCCC1", 236), ""},
		{"ladder", "C1C2" + strings.Repeat("C1C2", 400) + "C1C2", ""},
		{"2,500 carbons", strings.Repeat("C", 2500), "2500 atoms; at most 2000"},
		{"10 MB of carbons", strings.Repeat("C", 10<<20), "10485760 characters"},
		{"10 MB of brackets", strings.Repeat("(", 10<<20), "characters"},
		{"100,000 open branches", "C" + strings.Repeat("(C", 90_000), "never closed"},
		{"binary", "C" + string([]byte{0, 1, 2, 0xff}), "expected"},
		{"long conjugated chain", "C" + strings.Repeat("/C=C", 600) + "/C", ""},
		{"many stereocentres", "C" + strings.Repeat("[C@H](O)", 600) + "C", ""},
		{"ring of 60 equal centres", "O[C@H]1" + strings.Repeat("[C@H](O)", 58) + "[C@H]1O", ""},
		{"ring of 62 mixed centres", "O[C@H]1" + strings.Repeat("[C@H](O)[C@@H](O)[C@H](O)[C@H](O)", 15) + "[C@H]1O", ""},
		{"dendrimer", dendrimer(7), ""},
		{"300 components", strings.TrimSuffix(strings.Repeat("CCO.", 300), "."), ""},
		{"graphene", graphene(14, 14), ""},
	} {
		m, err := Read(c.text)
		if c.message != "" {
			if err == nil || !strings.Contains(err.Error(), c.message) {
				t.Errorf("%s: error %v, want %q", c.name, err, c.message)
			}
			continue
		}
		if err != nil {
			t.Errorf("%s: %.200v", c.name, err)
			continue
		}
		text := Write(m)
		back, err := Read(text)
		if err != nil || back.Key() != m.Key() {
			t.Errorf("%s: what is written does not read back the same (%v)", c.name, err)
		}
	}
}

func dendrimer(depth int) string {
	if depth == 0 {
		return "C"
	}
	return "N(C" + dendrimer(depth-1) + ")C" + dendrimer(depth-1)
}
