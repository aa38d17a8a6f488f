package compare

import (
	"bytes"
	"encoding/json"
	"strings"
	"testing"

	"shelfward/planner/route"
)

// rows makes three routes with invented figures: the second has gaps in hazards and prices.
func rows() *route.Plan {
	p := &route.Plan{Target: route.Target{SMILES: "CCCC"}, MakeG: 10, From: []string{}, Doubts: []string{}}
	for i, code := range []string{"aaaa001", "bbbb002", "cccc003"} {
		r := route.Route{Code: code, Steps: make([]route.Step, i+1), LongestRun: i + 1, GravestClass: 4 - i, Days: 2,
			WorstBranchYield: route.Range{Usual: 0.5 + 0.1*float64(i)}, Waste: route.WasteFigures{WithoutWater: 5}}
		r.Materials = route.PriceFigures{Price: float64(30 - 10*i), Of: 4}
		p.Routes = append(p.Routes, r)
	}
	p.Routes[2].Materials = route.PriceFigures{Price: 1, Unpriced: 2, Of: 4}
	p.Routes[2].Hazard.WithoutData, p.Routes[2].GravestClass = 1, 0
	return p
}

func TestFirsts(t *testing.T) {
	table := FromPlan(rows())
	want := map[string]string{"steps": "aaaa001", "longest run": "aaaa001", "working days": "aaaa001 bbbb002 cccc003", "yield": "cccc003",
		"hazard": "bbbb002", "cost": "bbbb002", "waste": "aaaa001 bbbb002 cccc003"}
	for _, f := range table.FirstBy {
		if got := strings.Join(f.Codes, " "); got != want[f.Column] {
			t.Errorf("first by %s: %s, want %s", f.Column, got, want[f.Column])
		}
		if gap := f.Column == "hazard" || f.Column == "cost"; gap != (f.Clause != "") {
			t.Errorf("%s: clause %q", f.Column, f.Clause)
		}
	}
	if len(table.FirstBy) != len(want) {
		t.Errorf("%d columns", len(table.FirstBy))
	}
}

func TestTextAndJSON(t *testing.T) {
	var b bytes.Buffer
	if err := FromPlan(rows()).WriteText(&b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"aaaa001", "at least 1.00", "all alike", "steps / longest run", "1 with gaps in the data left aside"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("%q is missing in\n%s", want, b.String())
		}
	}
	data, err := json.Marshal(FromPlan(&route.Plan{}))
	if err != nil || !strings.Contains(string(data), `"rows":[]`) {
		t.Errorf("%s %v", data, err)
	}
}
