package molecule_test

import (
	"math"
	"strings"
	"testing"

	"shelfward/molecule"
)

// TestFormulas checks text, masses and unsaturation against hand values: molar masses from the IUPAC
// abridged weights (sum by hand), monoisotopic masses from the tabulated isotope masses.
func TestFormulas(t *testing.T) {
	for _, c := range []struct {
		smiles, hill       string
		molarMass, exactDa float64
		unsaturation       float64
	}{
		{"O", "H2O", 18.015, 18.010565, 0},
		{"CO", "CH4O", 32.042, 32.026215, 0},
		{"CCCCCC(=O)CC", "C8H16O", 128.215, 128.120115, 1},
		{"c1ccccc1", "C6H6", 78.114, 78.046950, 4},
		{"Cn1cnc2c1c(=O)n(C)c(=O)n2C", "C8H10N4O2", 194.194, 194.080376, 6},
		{"ClC(Cl)Cl", "CHCl3", 119.37, 117.914383, 0},
		{"Brc1ccccc1", "C6H5Br", 157.01, 155.957463, 4},
		{"CS(C)=O", "C2H6OS", 78.13, 78.013936, 0},
		{"[Na+].[Cl-]", "ClNa", 58.44, 57.958622, 0},
		{"C[N+](C)(C)C", "C4H12N+", 74.147, 74.096426, -0.5},
		{"[O-]S(=O)(=O)[O-]", "O4S(2-)", 96.06, 95.952827, 1},
		{"[13CH4]", "CH4", 16.043, 16.031300, 0},
		{"[Li]CCCC", "C4H9Li", 64.056, 64.086429, 0},
		{"C[Si](C)(C)C", "C4H12Si", 88.225, 88.070827, 0},
		{"OB(O)c1ccccc1", "C6H7BO2", 121.93, 122.053910, 4},
		{"Ic1ccccc1", "C6H5I", 204.01, 203.943594, 4},
	} {
		f := readMolecule(t, c.smiles).Formula()
		if f.String() != c.hill {
			t.Errorf("%s: formula %s, want %s", c.smiles, f, c.hill)
		}
		if got := f.MolarMass(); math.Abs(got-c.molarMass) > 0.011 {
			t.Errorf("%s: molar mass %.3f, want %.3f", c.smiles, got, c.molarMass)
		}
		if got := f.MonoisotopicMass(); math.Abs(got-c.exactDa) > 2e-5 {
			t.Errorf("%s: monoisotopic mass %.6f, want %.6f", c.smiles, got, c.exactDa)
		}
		if got := f.Unsaturation(); got != c.unsaturation {
			t.Errorf("%s: unsaturation %g, want %g", c.smiles, got, c.unsaturation)
		}
		if back, err := molecule.ParseFormula(f.String()); err != nil || back != f {
			t.Errorf("%s does not read back: %v", f, err)
		}
	}
}

func TestParseFormula(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"C8H16O", "C8H16O"}, {"OC8H16", "C8H16O"}, {"CH3CH2OH", "C2H6O"}, {"CO", "CO"}, {"Co", "Co"}, {"NaCl", "ClNa"}, {"H", "H"}, {"HBr", "BrH"},
		{"NH4+", "H4N+"}, {"SO4--", "O4S(2-)"}, {"SO4(2-)", "O4S(2-)"}, {"Ca+2", "Ca(2+)"}, {"C0H2", "H2"},
	} {
		f, err := molecule.ParseFormula(c.text)
		if err != nil || f.String() != c.want {
			t.Errorf("%s: %s %v, want %s", c.text, f, err, c.want)
		}
	}
	for _, c := range []struct{ text, message string }{
		{"", "column 1"}, {"c8H16", "column 1"}, {"C8x", "column 3"}, {"C8H16 O", "column 6"}, {"(CH3)2O", "column 1"}, {"C99999999", "column 2"},
		{"8C", "column 1"}, {"C+x", "column 2"}, {"CX", "column 2"}, {"C\u00e9", "found \"é\""}, {"C1000000C5", "column 10"},
	} {
		if _, err := molecule.ParseFormula(c.text); err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("%q: %v, want %q", c.text, err, c.message)
		}
	}
}

func TestElements(t *testing.T) {
	seen := map[string]bool{}
	for e := molecule.Element(1); e < 119; e++ {
		s := e.Symbol()
		if back, ok := molecule.ElementBySymbol(s); !ok || back != e || seen[s] {
			t.Errorf("element %d: symbol %q", e, s)
		}
		seen[s] = true
		// The weight lies near the isotope mass: a slip of a digit or a row would show.
		if w, m := e.Weight(), e.MonoisotopicMassDa(); (w == 0) != (m == 0) || w != 0 && math.Abs(w-m)/w > 0.025 {
			t.Errorf("%s: weight %g, isotope mass %g", s, w, m)
		}
	}
	if _, ok := molecule.ElementBySymbol("Xx"); ok {
		t.Error("Xx is an element")
	}
	for _, s := range []string{"Li", "Mg", "Zn", "Cu", "Pd", "Sn", "Al"} {
		if e, _ := molecule.ElementBySymbol(s); !e.IsMetal() {
			t.Errorf("%s is no metal", s)
		}
	}
	for _, s := range []string{"B", "Si", "P", "Se", "I", "H", "Te"} {
		if e, _ := molecule.ElementBySymbol(s); e.IsMetal() {
			t.Errorf("%s is a metal", s)
		}
	}
}
