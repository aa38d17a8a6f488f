package compare

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"fmt"
	"math"
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

// TestUnbeaten: the first has the fewest steps, the second nothing better than the third but its known
// figures, the third gaps where it would come first; a fourth is the first with more waste.
func TestUnbeaten(t *testing.T) {
	p := rows()
	worse := p.Routes[0]
	worse.Code, worse.Waste.WithoutWater = "dddd004", 9
	p.Routes = append(p.Routes, worse)
	table := FromPlan(p)
	if got := strings.Join(table.Unbeaten, " "); got != "aaaa001 bbbb002 cccc003" {
		t.Errorf("unbeaten: %s", got)
	}
	if got := strings.Join(table.Rows[3].BeatenBy, " "); got != "aaaa001" {
		t.Errorf("the fourth is beaten by %q", got)
	}
	for _, r := range table.Rows[:3] {
		if r.BeatenBy == nil || len(r.BeatenBy) > 0 {
			t.Errorf("%s beaten by %v", r.Code, r.BeatenBy)
		}
	}
	// a gap never helps: with its price emptied the third loses to a copy that has one
	full := p.Routes[2]
	full.Code, full.Materials.Unpriced, full.Hazard.WithoutData, full.GravestClass = "eeee005", 0, 0, 4
	p.Routes = append(p.Routes, full)
	if got := strings.Join(FromPlan(p).Rows[2].BeatenBy, " "); got != "eeee005" {
		t.Errorf("the third, with gaps, is beaten by %q", got)
	}
}

func TestPlot(t *testing.T) {
	p := rows()
	p.Routes[1].WaysOut = []route.WayOut{{Step: 1, Product: "CCO", Name: "<ethanol>", Conditions: 1}}
	p.Doubts = []string{"A & B"}
	var b bytes.Buffer
	if err := FromPlan(p).HTML(&b, []string{"target: <butane>"}, "caution"); err != nil {
		t.Fatal(err)
	}
	page := b.String()
	if n := strings.Count(page, "<circle"); n != 3*len(columns) {
		t.Errorf("%d dots for 3 routes in %d columns", n, len(columns))
	}
	if n := strings.Count(page, ">not known<"); n != 2 {
		t.Errorf("%d columns with gaps, want hazard and cost", n)
	}
	for _, want := range []string{"target: &lt;butane&gt;", "A &amp; B", "from &lt;ethanol&gt; (step 1): 1 other set of conditions for the next step, no other way on"} {
		if !strings.Contains(page, want) {
			t.Errorf("%q is missing", want)
		}
	}
	if err := xml.Unmarshal([]byte(FromPlan(p).plot()), new(struct{})); err != nil {
		t.Errorf("plot: %v", err)
	}
	p.Routes = p.Routes[:1]
	if FromPlan(p).plot() != "" {
		t.Error("one route needs no plot")
	}
}

// TestDotsApart: letters of one strip never lie on each other, and the left end is the least figure.
func TestDotsApart(t *testing.T) {
	p := rows()
	for i := range 30 {
		r := p.Routes[i%3]
		r.Code = fmt.Sprint("r", i)
		r.Waste.WithoutWater = float64(i * i % 17)
		p.Routes = append(p.Routes, r)
	}
	table := FromPlan(p)
	for i := range columns {
		dots, rows := table.dots(&columns[i], 0, 17)
		for j := range dots {
			for k := range j {
				if dots[j].row == dots[k].row && math.Abs(dots[j].x-dots[k].x) < 2*dotRadius {
					t.Errorf("%s: %s lies on %s", columns[i].name, dots[j].letter, dots[k].letter)
				}
			}
			if dots[j].row >= rows {
				t.Errorf("row %d of %d", dots[j].row, rows)
			}
		}
	}
	if letterOf(25)+letterOf(26)+letterOf(52) != "ZAABA" {
		t.Errorf("letters %s %s %s", letterOf(25), letterOf(26), letterOf(52))
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
