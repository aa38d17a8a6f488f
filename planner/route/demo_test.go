package route_test

import (
	"encoding/json"
	"os"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
	"shelfward/planner"
	"shelfward/planner/route"
	"shelfward/rules"
)

// room opens the built-in rules with the shelf of the demo (testdata/lure-shelf.csv: amounts, prices
// and places invented).
func room(t *testing.T) *planner.Room {
	t.Helper()
	r, err := planner.Open(rules.Files(), []string{"testdata/lure-shelf.csv"}, "")
	if err != nil {
		t.Fatal(err)
	}
	return r
}

const lure = "CCCC(C)C(=O)CC" // 4-methylheptan-3-one

func plan(t *testing.T, o route.Options) *route.Plan {
	t.Helper()
	m, err := smiles.Read(lure)
	if err != nil {
		t.Fatal(err)
	}
	p, err := route.Make(t.Context(), room(t).World(), m, o)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// TestDemoRouteA: two halves by a Grignard reagent, then bleach: 2 steps, 34-47-59 %, worked by hand
// with the demo (0.45 x 0.75, 0.55 x 0.85, 0.65 x 0.90).
func TestDemoRouteA(t *testing.T) {
	p := plan(t, route.Options{MaxExpanded: 6, Count: 3, MaxSteps: 4})
	if len(p.Routes) == 0 {
		t.Fatal("no route")
	}
	r := &p.Routes[0]
	if got := r.Starts(); got != "propanal, 2-bromopentane" || len(r.Steps) != 2 || route.Percent(r.OverallYield) != "34-47-59" {
		t.Errorf("%s: %d steps from %s, yield %s", r.Code, len(r.Steps), got, route.Percent(r.OverallYield))
	}
	for _, m := range r.StartingMaterials {
		want := map[string]float64{"2-bromopentane": 2.46, "propanal": 2.139}[m.Name] // mol per mol: 1.15 and 1 over 0.4675
		if d := m.Mol - want; d > 0.005 || d < -0.005 {
			t.Errorf("%s: %v mol per mol, want %v", m.Name, m.Mol, want)
		}
	}
	if r.Materials.Unpriced != 0 || r.Hazard.WithoutData != 0 || r.AtomEconomy == nil {
		t.Errorf("gaps in %+v %+v", r.Materials, r.Hazard)
	}
	if len(r.Short) != 0 {
		t.Errorf("no amount was asked for, yet short: %q", r.Short)
	}
	asked := plan(t, route.Options{MaxExpanded: 6, Count: 3, MaxSteps: 4, MakeMol: 10 / 128.21})
	for i := range asked.Routes {
		if a := &asked.Routes[i]; a.Code == r.Code && (len(a.Short) != 1 || !strings.Contains(a.Short[0], "2-bromopentane")) {
			t.Errorf("10 g: short %q", a.Short)
		}
	}
	if len(asked.Routes) > 1 && asked.Routes[0].Code == r.Code {
		t.Error("10 g: a route without the stock stands first")
	}
}

// TestSameBytes: the plan is the same for any number of workers.
func TestSameBytes(t *testing.T) {
	var first string
	for _, workers := range []int{1, 2, 8} {
		p := plan(t, route.Options{MaxExpanded: 7, Count: 5, MaxSteps: 4, Workers: workers})
		p.Search.Seconds, p.Search.FirstAfter = 0, nil
		data, err := json.Marshal(p)
		if err != nil {
			t.Fatal(err)
		}
		if first == "" {
			first = string(data)
		} else if string(data) != first {
			t.Errorf("%d workers differ", workers)
		}
	}
}

func TestDemoPrint(t *testing.T) {
	if os.Getenv("DEMO") == "" {
		t.Skip()
	}
	m, err := smiles.Read(lure)
	if err != nil {
		t.Fatal(err)
	}
	cold := -20.0
	o := route.Options{MaxSteps: 5, Count: 10, Time: 15e9, Bench: &route.Bench{Coldest: &cold}, Avoid: strings.Fields(os.Getenv("AVOID")), RankBy: route.RankBy(os.Getenv("RANK"))}
	if os.Getenv("MAKE") != "" {
		o.MakeMol = 10 / 128.21
	}
	p, err := route.Make(t.Context(), room(t).World(), m, o)
	if err != nil {
		t.Fatal(err)
	}
	p.WriteText(os.Stdout)
	t.Logf("%+v", p.Search)
}
