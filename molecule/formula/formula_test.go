package formula

import (
	"bufio"
	"context"
	"fmt"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"shelfward/molecule"
)

// published is one line of testdata/formulas/published.tsv.
type published struct {
	name, formula string
	ev            Evidence
	signals       Signals
}

func readPublished(t testing.TB) []published {
	file, err := os.Open("../../testdata/formulas/published.tsv")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	number := func(s string) float64 {
		if s == "-" {
			return 0
		}
		x, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return x
	}
	var list []published
	lines := bufio.NewScanner(file)
	for lines.Scan() {
		if strings.HasPrefix(lines.Text(), "#") {
			continue
		}
		x := strings.Split(lines.Text(), "\t")
		p := published{name: x[0], formula: x[1]}
		p.ev.Analysis = analysis(t, x[2])
		p.ev.MolecularIon, p.ev.MolarMass = int(number(x[3])), number(x[4])
		if x[5] != "-" {
			w := strings.Fields(x[5])
			ion, err := ParseIon(w[1])
			if err != nil {
				t.Fatal(err)
			}
			p.ev.Exact = []ExactMass{{number(w[0]), ion, number(w[2])}}
		}
		if x[6] != "-" {
			for _, w := range strings.Fields(x[6]) {
				mz, intensity, _ := strings.Cut(w, ":")
				p.ev.Peaks = append(p.ev.Peaks, Peak{number(mz), number(intensity)})
			}
		}
		p.signals = Signals{int(number(x[7])), int(number(x[8])), int(number(x[9]))}
		list = append(list, p)
	}
	return list
}

// analysis reads 'C=61.2 H=11.9/11.8', runs separated by a slash.
func analysis(t testing.TB, text string) (list []Analysis) {
	if text == "-" {
		return nil
	}
	for _, w := range strings.Fields(text) {
		symbol, values, _ := strings.Cut(w, "=")
		e, ok := molecule.ElementBySymbol(symbol)
		if !ok {
			t.Fatalf("element %q", symbol)
		}
		a := Analysis{Element: e}
		for _, v := range strings.Split(values, "/") {
			x, err := strconv.ParseFloat(v, 64)
			if err != nil {
				t.Fatal(err)
			}
			a.Percent = append(a.Percent, x)
		}
		list = append(list, a)
	}
	return list
}

// The right formula is always among the candidates, and first where NMR helps to judge.
func TestPublished(t *testing.T) {
	first := 0
	list := readPublished(t)
	for _, p := range list {
		bare, err := Find(context.Background(), p.ev)
		if err != nil {
			t.Fatalf("%s: %v", p.name, err)
		}
		if rank(bare, p.formula) == 1 {
			first++
		} else if rank(bare, p.formula) == 0 {
			t.Errorf("%s: %s is not among %d formulas", p.name, p.formula, len(bare.Candidates))
		}
		p.ev.Score = p.signals.Score
		judged, err := Find(context.Background(), p.ev)
		if err != nil {
			t.Fatalf("%s: %v", p.name, err)
		}
		if got := rank(judged, p.formula); got != 1 {
			t.Errorf("%s: %s has rank %d; first is %s", p.name, p.formula, got, judged.Candidates[0].Formula)
		}
	}
	if first < len(list)-1 {
		t.Errorf("without NMR the right formula is first for %d of %d compounds", first, len(list))
	}
}

func rank(r Result, want string) int {
	for i, c := range r.Candidates {
		if c.Formula.String() == want {
			return i + 1
		}
	}
	return 0
}

// What textbooks calculate for a formula must lead back to it: simulated analyses with random
// errors below the tolerance, and exact masses within 3 ppm.
func TestSimulated(t *testing.T) {
	for _, tc := range []struct {
		formula string
		ev      func(f molecule.Formula) Evidence
		within  int
	}{
		{"C6H5Br", withExact(IonM, 1.5), 1},
		{"C7H6O2", withExact(IonMlessH, -2), 1},
		{"C8H10N4O2", withExact(IonMH, 1), 1},
		{"C9H8O4", withExact(IonMNa, -1), 1},
		{"C10H12O2", withExact(IonMNH4, 2), 1},
		{"C6H12O6", withExact(IonMNa, 1), 2},
		{"C12H10S", withExact(IonM, 1), 1},
		{"C8H7ClO", withExact(IonM, 1), 3},
	} {
		f, err := molecule.ParseFormula(tc.formula)
		if err != nil {
			t.Fatal(err)
		}
		r, err := Find(context.Background(), tc.ev(f))
		if err != nil {
			t.Fatal(err)
		}
		if got := rank(r, tc.formula); got == 0 || got > tc.within {
			t.Errorf("%s: rank %d, want at most %d", tc.formula, got, tc.within)
		}
	}
}

func withExact(ion Ion, off float64) func(molecule.Formula) Evidence {
	return func(f molecule.Formula) Evidence {
		mz := f.MonoisotopicMass() + ion.shift()
		return Evidence{Exact: []ExactMass{{MZ: mz * (1 + off*1e-6), Ion: ion}}}
	}
}

// The exact masses of well-known ions, from the tables of mass-spectrometry textbooks (memory):
// protonated caffeine 195.0877, sodiated glucose 203.0526, benzoate 121.0295.
func TestIonMasses(t *testing.T) {
	for _, tc := range []struct {
		formula string
		ion     Ion
		mz      float64
	}{{"C8H10N4O2", IonMH, 195.0877}, {"C6H12O6", IonMNa, 203.0526}, {"C7H6O2", IonMlessH, 121.0295}, {"C6H6", IonM, 78.0464}} {
		f, err := molecule.ParseFormula(tc.formula)
		if err != nil {
			t.Fatal(err)
		}
		if got := f.MonoisotopicMass() + tc.ion.shift(); math.Abs(got-tc.mz) > 0.0001 {
			t.Errorf("%s %s: m/z %.4f, want %.4f", tc.formula, tc.ion, got, tc.mz)
		}
	}
}

// Relative intensities of M+2 as textbooks give them (memory): Cl 32 %, Cl2 64 %, Br 97 %, S 4.5 %.
func TestIsotopePattern(t *testing.T) {
	for _, tc := range []struct {
		formula string
		k       int
		want    float64
	}{{"CH3Cl", 2, 0.32}, {"CH2Cl2", 2, 0.64}, {"CH3Br", 2, 0.97}, {"H2S", 2, 0.045}, {"C10H8", 1, 0.108}} {
		f, err := molecule.ParseFormula(tc.formula)
		if err != nil {
			t.Fatal(err)
		}
		if got := IsotopePattern(f, 4)[tc.k-1]; math.Abs(got-tc.want) > 0.006 {
			t.Errorf("%s: M+%d %.3f, want %.3f", tc.formula, tc.k, got, tc.want)
		}
	}
}

func TestEvidenceWords(t *testing.T) {
	for _, tc := range []struct {
		name string
		ev   Evidence
		want string // first formula, or the beginning of the doubt or error
	}{
		{"repeat runs are averaged", Evidence{Analysis: analysis(t, "C=61.9/62.3 H=10.3/10.3"), MolecularIon: 116}, "C6H12O2"},
		{"nitrogen absent", Evidence{Analysis: analysis(t, "C=52.1 H=13.1 N=0"), MolecularIon: 46}, "C2H6O"},
		{"nothing fits", Evidence{Analysis: analysis(t, "C=10 H=60"), MolecularIon: 100}, "No formula of a closed-shell molecule"},
		{"no mass", Evidence{Analysis: analysis(t, "C=40.0 H=6.7 N=0 S=0 Cl=0 Br=0")}, "CH2O"},
		{"nothing", Evidence{}, "Neither a mass nor"},
		{"too much", Evidence{Analysis: analysis(t, "C=80 H=30")}, "error: the combustion analysis adds up to 110.00 %"},
		{"oxygen", Evidence{Analysis: analysis(t, "O=30")}, "error: combustion analysis does not measure oxygen"},
		{"iodine by analysis", Evidence{Analysis: analysis(t, "C=35.3 H=2.5 I=62.2")}, "C6H5I"},
		{"chlorine by isotopes", Evidence{MolecularIon: 112, Peaks: []Peak{{112, 100}, {114, 33}, {77, 60}}}, "C6H5Cl"},
		{"sulfur by isotopes", Evidence{MolecularIon: 84, Peaks: []Peak{{84, 100}, {85, 5.5}, {86, 4.6}}}, "C4H4S"},
	} {
		r, err := Find(context.Background(), tc.ev)
		got := strings.Join(r.Doubts, " ")
		switch {
		case err != nil:
			got = "error: " + err.Error()
		case len(r.Candidates) > 0:
			got = r.Candidates[0].Formula.String()
		}
		if !strings.HasPrefix(got, tc.want) {
			t.Errorf("%s: %s, want %s", tc.name, got, tc.want)
		}
	}
}

func TestParseIon(t *testing.T) {
	for text, want := range map[string]Ion{"M+.": IonM, "[M]+.": IonM, "[M]+•": IonM, "M+H": IonMH, "[M+H]+": IonMH, "[M + Na]+": IonMNa, "M+NH4": IonMNH4, "[M-H]-": IonMlessH} {
		if got, err := ParseIon(text); err != nil || got != want {
			t.Errorf("%s: %v %v, want %v", text, got, err, want)
		}
	}
	if _, err := ParseIon("M+K"); err == nil {
		t.Error("M+K was taken")
	}
}

// Every formula must be a closed-shell one that meets the bounds, whatever the mass.
func TestSound(t *testing.T) {
	for mz := 60; mz < 300; mz += 17 {
		r, err := Find(context.Background(), Evidence{MolecularIon: mz, MaxCandidates: 1000})
		if err != nil {
			t.Fatal(err)
		}
		seen := map[string]bool{}
		for _, c := range r.Candidates {
			s := c.Formula.String()
			if u := c.Formula.Unsaturation(); u < 0 || u != math.Trunc(u) || seen[s] {
				t.Errorf("m/z %d: %s (unsaturation %g, seen before: %v)", mz, s, u, seen[s])
			}
			seen[s] = true
		}
	}
}

// An exact mass alone near m/z 1000 must stay interactive.
func BenchmarkExactMass(b *testing.B) {
	for _, mz := range []float64{250.1234, 500.2345, 999.4567} {
		b.Run(fmt.Sprintf("%.0f", mz), func(b *testing.B) {
			n := 0
			for range b.N {
				r, err := Find(context.Background(), Evidence{Exact: []ExactMass{{MZ: mz, Ion: IonMH}}, MaxCandidates: 1 << 20})
				if err != nil {
					b.Fatal(err)
				}
				n = len(r.Candidates)
			}
			b.ReportMetric(float64(n), "formulas")
		})
	}
}
