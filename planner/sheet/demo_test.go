package sheet_test

import (
	"bytes"
	"context"
	"flag"
	"math"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"unicode/utf8"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/planner"
	"shelfward/planner/route"
	"shelfward/planner/sheet"
	"shelfward/reactions"
	"shelfward/rules"
)

var update = flag.Bool("update", false, "rewrite the golden sheets")

// The demonstration: 4-methylheptan-3-one from the shelf of an ant-lure workshop; amounts, prices and
// places invented. The three routes and the table of amounts were worked out by hand before the program.
var room = sync.OnceValues(func() (*planner.Room, error) {
	return planner.Open(rules.Files(), []string{"../../testdata/demo/lure-shelf.csv"}, "")
})

func theRoom(t *testing.T) *planner.Room {
	t.Helper()
	r, err := room()
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func read(t *testing.T, s string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(s)
	if err != nil {
		t.Fatalf("%s: %v", s, err)
	}
	return m
}

// planned is a step as a test writes it: which conditions of which transform make the product of what.
type planned struct{ transform, conditions, product, from string }

const lure = "CCCC(C)C(=O)CC"

var (
	bleach = planned{"secondary-alcohol-to-ketone", "hypochlorite", lure, "CCCC(C)C(O)CC"}
	routeA = []planned{{"grignard-aldehyde-branched", "magnesium-in-the-flask", "CCCC(C)C(O)CC", "CCC=O.CCCC(C)Br"}, bleach}
	routeB = []planned{
		{"aldol-condensation-aldehydes", "dilute-hydroxide", "CCC=C(C)C=O", "CCC=O"},
		{"conjugated-alkene-hydrogenation", "palladium-balloon", "CCCC(C)C=O", "CCC=C(C)C=O"},
		{"grignard-aldehyde", "ready-grignard-reagent", "CCCC(C)C(O)CC", "CCCC(C)C=O.CC[Mg]Br"}, bleach}
	routeC = []planned{
		{"claisen-condensation", "alcohol-free-ethoxide", "CCC(=O)C(C)C(=O)OCC", "CCC(=O)OCC"},
		{"keto-ester-second-alkylation", "ethoxide-in-ethanol", "CCCC(C)(C(=O)CC)C(=O)OCC", "CCC(=O)C(C)C(=O)OCC.CCCBr"},
		{"ketonic-cleavage-acid", "hydrobromic-acid-reflux", lure, "CCCC(C)(C(=O)CC)C(=O)OCC"}}
)

// assemble makes the plan of one route from the judged steps of the loaded rules.
func assemble(t *testing.T, r *planner.Room, target, code string, list []planned) (*route.Plan, *route.Route) {
	t.Helper()
	w := r.World()
	out := &route.Route{Code: code, LongestRun: len(list), OverallYield: route.Range{Low: 1, Usual: 1, High: 1}}
	made := map[molecule.Key]int{}
	for i, p := range list {
		judged := find(t, w, p)
		s := route.Step{Number: i + 1, Transform: p.transform, Name: judged.Transform.Name, Conditions: p.conditions, Product: smiles.Write(judged.Product), Judged: judged,
			Share: judged.Share.String()}
		for _, c := range judged.Conditions {
			if c.ID == p.conditions {
				s.Set, s.Origin = c, c.Origin
			}
		}
		if s.Set == nil {
			t.Fatalf("%s has no conditions %s", p.transform, p.conditions)
		}
		s.Yield = route.Range(s.Set.Yield)
		for _, re := range judged.Reactants {
			s.Reactants, s.Equivalents = append(s.Reactants, smiles.Write(re.Molecule)), append(s.Equivalents, re.Equivalents)
			s.MadeBy = append(s.MadeBy, made[re.Molecule.Key()])
		}
		for _, o := range judged.Objections {
			s.Objections = append(s.Objections, route.Objection{Kind: string(o.Kind), Text: o.Text})
		}
		made[judged.Product.Key()] = i + 1
		out.Steps = append(out.Steps, s)
		y := &out.OverallYield
		y.Low, y.Usual, y.High = y.Low*s.Yield.Low, y.Usual*s.Yield.Usual, y.High*s.Yield.High
	}
	return &route.Plan{Target: route.Target{SMILES: target}}, out
}

// judgedSteps keeps what find found; tests of this package run one after another.
var judgedSteps = map[planned]*reactions.Step{}

// find looks a judged step up by its transform and what it consumes.
func find(t *testing.T, w *route.World, p planned) *reactions.Step {
	t.Helper()
	if s := judgedSteps[p]; s != nil {
		return s
	}
	want := map[molecule.Key]bool{}
	for _, part := range strings.Split(p.from, ".") {
		want[read(t, part).Key()] = true
	}
	steps, err := w.Book.Expand(t.Context(), read(t, p.product), func(m *molecule.Molecule) bool { return want[m.Key()] })
	if err != nil {
		t.Fatal(err)
	}
	var met []string
	for _, s := range steps {
		if s.Transform.ID != p.transform {
			continue
		}
		fits := len(s.Reactants) == len(want)
		for _, re := range s.Reactants {
			fits = fits && want[re.Molecule.Key()]
			met = append(met, smiles.Write(re.Molecule))
		}
		if fits {
			judgedSteps[p] = s
			return s
		}
	}
	t.Fatalf("no step %s from %s to %s; that transform takes %v", p.transform, p.from, p.product, met)
	return nil
}

func write(t *testing.T, list []planned, code string, grams float64, accept string) *sheet.Sheet {
	t.Helper()
	r := theRoom(t)
	p, ro := assemble(t, r, list[len(list)-1].product, code, list)
	s, err := sheet.Make(context.Background(), r.Desk(), p, ro, sheet.Options{MakeMol: grams / read(t, p.Target.SMILES).Formula().MolarMass(), Accept: accept, Version: "test"})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestDemoAmounts: the table of amounts for 10 g, worked by hand from equivalents, usual yields and the
// shelf's purities; g or mL as supplied within 1 %.
func TestDemoAmounts(t *testing.T) {
	for _, c := range []struct {
		code    string
		list    []planned
		name    string
		step    int
		pureG   float64 // 0: not checked
		massG   float64
		volume  float64
		limited bool
	}{
		{"A", routeA, "2-bromopentane", 1, 29.0, 30.5, 25.2, false},
		{"A", routeA, "propanal", 1, 9.7, 9.99, 12.5, true},
		{"A", routeA, "magnesium", 1, 5.1, 5.16, 0, false},
		{"A", routeA, "sodium hypochlorite solution", 2, 0, 62.8, 52, false},
		{"B", routeB, "propanal", 1, 20.2, 20.8, 26.0, true},
		{"B", routeB, "hydrogen", 2, 0, 0, 3591, false},
		{"B", routeB, "ethylmagnesium bromide", 3, 0, 0, 44.9, false},
		{"B", routeB, "sodium hypochlorite solution", 4, 0, 62.8, 52, false},
		{"C", routeC, "ethyl propanoate", 1, 79.1, 79.9, 89.8, true},
		{"C", routeC, "sodium ethoxide", 1, 26.3, 27.7, 0, false},
		{"C", routeC, "sodium ethoxide", 2, 13.2, 13.9, 0, false},
		{"C", routeC, "1-bromopropane", 2, 26.2, 26.5, 19.6, false},
	} {
		s := write(t, c.list, c.code, 10, "the amounts are checked")
		found := false
		for _, ch := range s.Steps[c.step-1].Charges {
			if ch.Name != c.name || ch.Role == "work-up" || ch.Role == "solvent" {
				continue
			}
			found = true
			if c.pureG > 0 && off(ch.Mmol/1000*ch.MolarMass, c.pureG) > 0.01 {
				t.Errorf("%s step %d, %s: %.4g g pure, want %v", c.code, c.step, c.name, ch.Mmol/1000*ch.MolarMass, c.pureG)
			}
			if off(ch.MassG, c.massG) > 0.01 || off(ch.VolumeML, c.volume) > 0.01 {
				t.Errorf("%s step %d, %s: %.4g g, %.4g mL, want %v g, %v mL", c.code, c.step, c.name, ch.MassG, ch.VolumeML, c.massG, c.volume)
			}
			if ch.Limiting != c.limited {
				t.Errorf("%s step %d, %s: limiting %v", c.code, c.step, c.name, ch.Limiting)
			}
		}
		if !found {
			t.Errorf("%s step %d: no %s", c.code, c.step, c.name)
		}
	}
}

// off is the relative deviation; a wanted 0 must be 0.
func off(got, want float64) float64 {
	if want == 0 {
		return math.Abs(got)
	}
	return math.Abs(got-want) / want
}

// TestGolden compares the printed sheets of the three routes with testdata; -update rewrites them.
func TestGolden(t *testing.T) {
	for _, c := range []struct {
		code string
		list []planned
	}{{"A", routeA}, {"B", routeB}, {"C", routeC}} {
		var got bytes.Buffer
		if err := write(t, c.list, c.code, 10, "").Text(&got); err != nil {
			t.Fatal(err)
		}
		for i, line := range strings.Split(got.String(), "\n") {
			if n := utf8.RuneCountInString(line); n > 100 {
				t.Errorf("route %s, line %d has %d characters: %s", c.code, i+1, n, line)
			}
		}
		path := filepath.Join("testdata", "route-"+strings.ToLower(c.code)+".txt")
		if *update {
			if err := os.WriteFile(path, got.Bytes(), 0o644); err != nil {
				t.Fatal(err)
			}
			continue
		}
		want, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(got.Bytes(), want) {
			t.Errorf("the sheet of route %s differs from %s (go test ./planner/sheet -update, then read the difference): %s", c.code, path, firstDifference(got.String(), string(want)))
		}
	}
}

func firstDifference(got, want string) string {
	a, b := strings.Split(got, "\n"), strings.Split(want, "\n")
	for i := range a {
		if i >= len(b) || a[i] != b[i] {
			return "first new line: " + a[i]
		}
	}
	return "it is shorter"
}
