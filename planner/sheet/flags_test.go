package sheet_test

import (
	"bytes"
	"context"
	"math"
	"slices"
	"strings"
	"testing"

	"shelfward/planner/route"
	"shelfward/planner/sheet"
	"shelfward/reactions"
)

// under writes the sheet of one oxidation step as if it ran under other conditions.
func under(t *testing.T, set *reactions.Conditions, grams float64) *sheet.Step {
	t.Helper()
	r := theRoom(t)
	p, ro := assemble(t, r, lure, "X", []planned{bleach})
	if set.Yield == (reactions.Range{}) {
		set.Yield = reactions.Range{Low: 0.7, Usual: 0.8, High: 0.9}
	}
	if set.TriedAt == "" {
		set.TriedAt = "5-50 g"
	}
	ro.Steps[0].Set, ro.Steps[0].Yield = set, route.Range(set.Yield)
	s, err := sheet.Make(context.Background(), r.Desk(), p, ro, sheet.Options{MakeMol: grams / 128.21})
	if err != nil {
		t.Fatal(err)
	}
	return &s.Steps[0]
}

func charges(names ...string) (out []reactions.Charge) {
	for _, n := range names {
		out = append(out, reactions.Charge{Name: n, Equiv: 1.2})
	}
	return out
}

func solvents(names ...string) (out []reactions.Solvent) {
	for _, n := range names {
		out = append(out, reactions.Solvent{Name: n, MLPerG: 10})
	}
	return out
}

// TestStopFlags: pairs and limits that stop a step, and their harmless twins. Sources of the pairs stand in
// rules/incompatible.yaml and rules/sheet.yaml; the limits are common practice.
func TestStopFlags(t *testing.T) {
	room := [2]float64{20, 25}
	for _, c := range []struct {
		name  string
		set   reactions.Conditions
		grams float64
		want  string // part of a stop flag; with '!' before it no flag may hold it
	}{
		{"cyanide with acid", reactions.Conditions{Reagents: charges("sodium cyanide", "acetic acid"), Temperature: room}, 5, "pH plan"},
		{"cyanide with acid in the work-up", reactions.Conditions{Reagents: charges("sodium cyanide"), WorkupMaterials: []string{"hydrochloric acid"}, Temperature: room}, 5, "pH plan"},
		{"cyanide in alkali", reactions.Conditions{Reagents: charges("sodium cyanide", "sodium hydroxide"), Solvents: solvents("water"), Temperature: room}, 5, "!pH plan"},
		{"azide in dichloromethane", reactions.Conditions{Reagents: charges("sodium azide"), Solvents: solvents("dichloromethane"), Temperature: room}, 5, "polyazides"},
		{"azide in dimethylformamide", reactions.Conditions{Reagents: charges("sodium azide"), Solvents: solvents("N,N-dimethylformamide"), Temperature: room}, 5, "!polyazides"},
		{"azide with acid", reactions.Conditions{Reagents: charges("sodium azide", "sulfuric acid"), Temperature: room}, 5, "hydrazoic"},
		{"hydride in dimethylformamide", reactions.Conditions{Reagents: charges("sodium hydride"), Solvents: solvents("N,N-dimethylformamide"), Temperature: room}, 5, "run away"},
		{"hydride in tetrahydrofuran", reactions.Conditions{Reagents: charges("sodium hydride"), Solvents: solvents("tetrahydrofuran"), Temperature: room}, 5, "!run away"},
		{"ether at 60 C", reactions.Conditions{Solvents: solvents("diethyl ether"), Temperature: [2]float64{60, 70}}, 5, "impossible in an open flask"},
		{"ether at reflux", reactions.Conditions{Solvents: solvents("diethyl ether"), Temperature: [2]float64{20, 36}}, 5, "!boils"},
		{"much hydrogen", reactions.Conditions{Reagents: charges("hydrogen"), Solvents: solvents("ethyl acetate"), Temperature: room}, 90, "no balloon"},
		{"little hydrogen", reactions.Conditions{Reagents: charges("hydrogen"), Solvents: solvents("ethyl acetate"), Temperature: room}, 5, "!no balloon"},
		{"much gas", reactions.Conditions{Gas: []reactions.Amount{{Count: 1, SMILES: "CO2"}}, Temperature: room, Hours: [2]float64{2, 4}}, 95, "outlet and scrubber"},
		{"heat past the boiling point", reactions.Conditions{Solvents: solvents("diethyl ether"), HeatKJ: 250, Temperature: [2]float64{0, 10}}, 5, "boiling point of diethyl ether"},
		{"little heat", reactions.Conditions{Solvents: solvents("diethyl ether"), HeatKJ: 20, Temperature: [2]float64{0, 10}}, 5, "!boiling point"},
		{"closed vessel", reactions.Conditions{Solvents: solvents("toluene"), Needs: []string{"autoclave"}, Temperature: room}, 5, "closed vessel"},
		{"beyond the bench", reactions.Conditions{Temperature: room}, 150, "outside ordinary bench work"},
		{"ten times what was tried", reactions.Conditions{Temperature: room, TriedAt: "0.1-2 g"}, 40, "25 times the scale"},
		{"as tried", reactions.Conditions{Temperature: room, TriedAt: "1-50 g"}, 40, "!times the scale"},
		{"acetone at the sink", reactions.Conditions{Reagents: charges("sodium hypochlorite solution"), Temperature: room}, 5, "acetone (rinsing glass"},
	} {
		if c.set.Hours == ([2]float64{}) {
			c.set.Hours = [2]float64{1, 2}
		}
		s := under(t, &c.set, c.grams)
		want, none := strings.CutPrefix(c.want, "!")
		if got := slices.ContainsFunc(s.Flags, func(f string) bool { return strings.Contains(f, want) }); got == none {
			t.Errorf("%s: flags %q, want %q", c.name, s.Flags, c.want)
		}
	}
}

// TestBleachWaste: the pairs of the oxidation with hypochlorite in acetic acid are intended, on one line
// with their control; acetone and the ammonium chloride of the Grignard step are not, and stop it.
func TestBleachWaste(t *testing.T) {
	s := write(t, routeA, "A", 8, "")
	last := s.Steps[1]
	flags := strings.Join(last.Flags, "\n")
	if !strings.Contains(flags, "ammonium chloride (step 1") || !strings.Contains(flags, "acetone (rinsing glass") {
		t.Errorf("flags: %s", flags)
	}
	lines := 0
	for _, m := range last.Mixture {
		if strings.HasPrefix(m, "Meet on purpose;") {
			lines++
			if n := strings.Count(m, "sodium hypochlorite solution"); n != 3 {
				t.Errorf("%d pairs of hypochlorite, want 3 (acid, alcohol, ketone): %s", n, m)
			}
		}
	}
	if lines != 1 {
		t.Errorf("%d lines of intended pairs", lines)
	}
}

// TestShortage: the shelf has 25 g of 95 % bromide, the route wants 30.5 g for 10 g of target.
func TestShortage(t *testing.T) {
	s := write(t, routeA, "A", 10, "")
	if want := "2-bromopentane: short by 5.5 g: 8.2 g of target with what is there (30.5 g of 95 % needed, the shelf has 25.0 g); or buy, or make it from pentan-2-ol."; len(s.Doubts) == 0 || plain(s.Doubts[0]) != want {
		t.Errorf("%q", s.Doubts)
	}
	if s := write(t, routeA, "A", 8, ""); len(s.Doubts) != 0 {
		t.Errorf("8 g: %q", s.Doubts)
	}
}

// TestComesOut: 10 g at usual yields is 7.2 g at low ones (0.3375/0.4675) and 12.5 g at high ones
// (0.585/0.4675); to be sure, the first step is charged 1.385 times.
func TestComesOut(t *testing.T) {
	s := write(t, routeA, "A", 10, "")
	if off(s.LowG, 7.219) > 0.001 || off(s.HighG, 12.51) > 0.001 || off(s.SureFactor, 1.3852) > 0.001 {
		t.Errorf("low %v, high %v, factor %v", s.LowG, s.HighG, s.SureFactor)
	}
	if got := s.Steps[1].SureFactor; off(got, 0.85/0.75) > 1e-6 {
		t.Errorf("last step: factor %v", got)
	}
}

// TestScoutRun: a doubtful step holds the whole route at 1 g unless a reason is given.
func TestScoutRun(t *testing.T) {
	r := theRoom(t)
	for _, c := range []struct {
		accept string
		grams  float64
		makeG  float64
		say    string
	}{
		{"", 10, sheet.ScoutGrams, "scout run of 1.00 g"},
		{"", 0.5, 0.5, "a scout run"},
		{"tried twice at 1 g", 10, 10, "tried twice at 1 g"},
	} {
		p, ro := assemble(t, r, lure, "A", routeA)
		ro.Steps[0].Objections = []route.Objection{{Kind: "site", Text: "the position moves"}}
		s, err := sheet.Make(context.Background(), r.Desk(), p, ro, sheet.Options{MakeMol: c.grams / s8(t), Accept: c.accept})
		if err != nil {
			t.Fatal(err)
		}
		if off(s.MakeG, c.makeG) > 1e-6 || len(s.Doubts) == 0 || !strings.Contains(s.Doubts[0], c.say) {
			t.Errorf("accept %q: %v g, doubts %q", c.accept, s.MakeG, s.Doubts)
		}
		if s.Steps[0].OriginMark != "E" || s.Steps[1].OriginMark != "C" {
			t.Errorf("weakest origins %s %s, want E C", s.Steps[0].OriginMark, s.Steps[1].OriginMark)
		}
	}
}

func s8(t *testing.T) float64 { return read(t, lure).Formula().MolarMass() }

// TestUnsound: an unsound step gets no amounts.
func TestUnsound(t *testing.T) {
	r := theRoom(t)
	p, ro := assemble(t, r, lure, "A", []planned{bleach})
	judged := *ro.Steps[0].Judged
	judged.Objections = []reactions.Objection{{Kind: "group", Text: "it burns", Fatal: true}}
	ro.Steps[0].Judged = &judged
	if _, err := sheet.Make(context.Background(), r.Desk(), p, ro, sheet.Options{MakeMol: 0.01, Accept: "all the same"}); err == nil || !strings.Contains(err.Error(), "it burns") {
		t.Errorf("error %v", err)
	}
	for _, bad := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, err := sheet.Make(context.Background(), r.Desk(), p, ro, sheet.Options{MakeMol: bad}); err == nil {
			t.Errorf("%v mol: no error", bad)
		}
	}
}

// TestUnknownHazards: what nobody has looked up is printed as unknown, never left out.
func TestUnknownHazards(t *testing.T) {
	s := under(t, &reactions.Conditions{Reagents: charges("a thing that no list knows"), Temperature: [2]float64{20, 25}, Hours: [2]float64{1, 1}}, 5)
	if text := strings.Join(s.Hazards, "\n"); !strings.Contains(text, "a thing that no list knows") || !strings.Contains(text, "UNKNOWN, nobody has looked them up") || !strings.Contains(text, "made here") {
		t.Errorf("hazards %q", s.Hazards)
	}
}

// TestHolds: hold points stand where the work stops, each with its negative answer.
func TestHolds(t *testing.T) {
	s := write(t, routeB, "B", 5, "")
	grignard := s.Steps[2]
	at := func(part string) int {
		return slices.IndexFunc(grignard.Tasks, func(x sheet.Task) bool { return strings.Contains(x.Text, part) })
	}
	titrated, add, quench, proven, peroxide, takeDown := at("titrated today"), at("Add the titrated"), at("Pour slowly"), at("Quench is complete"), at("Peroxide strip"), at("Extract with")
	if !(0 <= titrated && titrated < add && add < quench && quench < proven && proven <= peroxide && peroxide < takeDown) {
		t.Errorf("order %v of %+v", []int{titrated, add, quench, proven, peroxide, takeDown}, grignard.Tasks)
	}
	for _, x := range grignard.Tasks {
		if x.Hold() && x.Otherwise == "" {
			t.Errorf("no answer if not: %q", x.Text)
		}
	}
}

// TestHTML: the page holds every step, escapes what it prints and loads nothing from elsewhere.
func TestHTML(t *testing.T) {
	s := write(t, routeA, "A", 10, "")
	s.Evidence = []string{"<script>alert(1)</script>"}
	var page bytes.Buffer
	if err := s.HTML(&page); err != nil {
		t.Fatal(err)
	}
	text := page.String()
	for _, want := range []string{"Step 1 of 2", "Step 2 of 2", "Nobody has tried it", "&lt;script&gt;", "<svg"} {
		if !strings.Contains(text, want) {
			t.Errorf("the page lacks %q", want)
		}
	}
	for _, never := range []string{"<script", "<link", "src=", "@import", "ZgotmplZ"} {
		if strings.Contains(text, never) {
			t.Errorf("the page holds %q", never)
		}
	}
}
