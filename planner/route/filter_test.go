package route

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shelfward/reactions"
	"shelfward/rules"
)

// avoidWorld: two ways to the same ketone, one by chromium, one by bleach; a third from a bromide.
func avoidWorld(t *testing.T) *World {
	f := newFakeBook(t)
	s := f.makes("alcohol-oxidation", "CCC(C)=O", 0.9, "CCC(C)O")
	s.Conditions = append(s.Conditions, &reactions.Conditions{ID: "chromic", Yield: s.Conditions[0].Yield, Origin: "class",
		Reagents: []reactions.Charge{{Name: "chromium trioxide", Equiv: 1}}, Temperature: [2]float64{-80, -70}, Needs: []string{"cold -78"}})
	s.Conditions[0].Reagents = []reactions.Charge{{Name: "bleach", Equiv: 1.1}}
	s.Conditions[0].Temperature, s.Conditions[0].Hours = [2]float64{15, 25}, [2]float64{1, 2}
	f.makes("from-bromide", "CCC(C)=O", 0.5, "CCBr", "CC=O")
	b := newBottles()
	b.put(t, "butan-2-ol", "CCC(C)O", func(m *Material) { m.Hazards, m.HazardsKnown = []string{"H226"}, true })
	b.put(t, "bromoethane", "CCBr", func(m *Material) { m.Hazards, m.HazardsKnown = []string{"H360FD"}, true })
	b.put(t, "acetaldehyde", "CC=O", nil)
	b.put(t, "chromium trioxide", "O=[Cr](=O)=O", nil)
	b.put(t, "bleach", "[Na+].[O-]Cl", nil)
	return f.world(b)
}

func TestAvoid(t *testing.T) {
	for _, c := range []struct{ word, want string }{
		{"", "alcohol-oxidation/usual +1 | from-bromide/usual"},
		{"Cr", "alcohol-oxidation/usual | from-bromide/usual"},
		{"chromium trioxide", "alcohol-oxidation/usual | from-bromide/usual"},
		{"Bleach", "alcohol-oxidation/chromic | from-bromide/usual"},
		{"H360", "alcohol-oxidation/usual +1"},
		{"h360d", "alcohol-oxidation/usual +1"},
		{"H361", "alcohol-oxidation/usual +1 | from-bromide/usual"},
		{"Br", "alcohol-oxidation/usual +1"},
		{"alcohol-oxidation", "from-bromide/usual"},
		{"butan-2-ol", "from-bromide/usual"},
	} {
		o := Options{}
		if c.word != "" {
			o.Avoid = []string{c.word}
		}
		p := plan(t, avoidWorld(t), "CCC(C)=O", o)
		var got []string
		for _, r := range p.Routes {
			text := r.Steps[0].Transform + "/" + r.Steps[0].Conditions
			if n := len(r.Alternatives); n > 0 {
				text += " +1"
			}
			got = append(got, text)
		}
		if g := strings.Join(got, " | "); g != c.want {
			t.Errorf("avoid %q: %s, want %s", c.word, g, c.want)
		}
		if (c.word != "") != (len(p.Avoided) == 1) {
			t.Errorf("avoid %q: stated %q", c.word, p.Avoided)
		}
	}
}

func TestAvoidUnknownWord(t *testing.T) {
	_, err := Make(context.Background(), avoidWorld(t), mustRead(t, "CCC(C)=O"), Options{Avoid: []string{"chromium trioxid"}})
	if err == nil || !strings.Contains(err.Error(), "chromium trioxide") {
		t.Errorf("error %v", err)
	}
	_, err = Make(context.Background(), avoidWorld(t), mustRead(t, "CCC(C)=O"), Options{RankBy: "beauty"})
	if err == nil {
		t.Error("rank by beauty: no error")
	}
}

// lookUp marks the hazards of every bottle as known.
func (b *bottles) lookUp() {
	for k, m := range b.bySeen {
		m.HazardsKnown = true
		b.bySeen[k] = m
	}
	for k, m := range b.byName {
		m.HazardsKnown = true
		b.byName[k] = m
	}
}

func benchWords(words ...string) (out []rules.Text) {
	for _, w := range words {
		out = append(out, rules.Text{Value: w})
	}
	return out
}

// TestLeftOut: what the wishes keep out is counted, by ways among what was opened and by routes among
// those that would come first without them, and what they met is named.
func TestLeftOut(t *testing.T) {
	cold := -20.0
	for _, c := range []struct {
		o     Options
		says  string // of the first reason
		met   string
		ways  int
		codes int // routes left
	}{
		{Options{Avoid: []string{"butan-2-ol"}}, "1 route uses butan-2-ol", "butan-2-ol", 1, 1},
		{Options{Avoid: []string{"H360"}}, "1 route charges a material with H360", "bromoethane", 1, 1},
		{Options{Avoid: []string{"from-bromide"}}, "1 route uses from-bromide", "from-bromide", 1, 1},
		{Options{Bench: &Bench{Coldest: &cold}}, "0 routes need a bath of -80 C", "", 1, 2},
		{Options{Bench: &Bench{Lacks: benchWords("cold")}}, "0 routes need cold -78", "", 1, 2},
		{Options{MaxHazard: "H226"}, "1 route charges something graver than H226", "bromoethane H360FD", 1, 1},
		{Options{MaxHazard: "2"}, "1 route charges something graver than class 2", "bromoethane H360FD", 1, 1},
	} {
		w := avoidWorld(t)
		w.Materials.(*bottles).lookUp()
		p := plan(t, w, "CCC(C)=O", c.o)
		if len(p.LeftOut) == 0 {
			t.Fatalf("%+v: nothing left out", c.o)
		}
		l := p.LeftOut[0]
		if l.Says != c.says || strings.Join(l.Matched, ", ") != c.met || l.Ways != c.ways || len(p.Routes) != c.codes || p.LeftOutOf != 2 {
			t.Errorf("%+v: %+v of %d, %d routes", c.o, l, p.LeftOutOf, len(p.Routes))
		}
	}
}

func TestOnlyShelf(t *testing.T) {
	w := avoidWorld(t)
	w.Transforms[0].Conditions[0].Reagents[0].Name = "no such bottle"
	p := plan(t, w, "CCC(C)=O", Options{OnlyShelf: true})
	if len(p.Routes) != 2 || p.Routes[0].Steps[0].Conditions != "chromic" {
		t.Errorf("routes %+v", p.Routes)
	}
	if len(p.LeftOut) != 1 || strings.Join(p.LeftOut[0].Matched, "") != "no such bottle" {
		t.Errorf("left out %+v", p.LeftOut)
	}
}

func TestBenchErrors(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"coldest: 20\nhottest: 10\n", "coldest: 20 C is above hottest: 10 C"},
		{"largest_flask: big\n", "1:16: largest_flask: \"big\": a volume such as 2 L"},
		{"largest_flask: 0 L\n", "1:16: largest_flask: \"0 L\": a volume above 0"},
		{"coldest: -20\nlacks: [hydrogenator]\n", "2:9: lacks: \"hydrogenator\" is nothing that the loaded rules need"},
		{"needs_approval: [moonlight]\n", "1:18: needs_approval: \"moonlight\" is nothing"},
		{"never: [bleech]\n", "1:9: never: \"bleech\": no reagent"},
		{"lack: [hydrogen]\n", "lacks"},
	} {
		path := filepath.Join(t.TempDir(), "bench.yaml")
		if err := os.WriteFile(path, []byte(c.text), 0o600); err != nil {
			t.Fatal(err)
		}
		b, err := LoadBench(path)
		if err == nil {
			_, err = Make(context.Background(), avoidWorld(t), mustRead(t, "CCC(C)=O"), Options{Bench: b})
		}
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: %v, want %q", c.text, err, c.want)
		}
	}
}

// TestBatches: a flask is filled to two thirds.
func TestBatches(t *testing.T) {
	b := &Bench{flaskML: 1500}
	for ml, want := range map[float64]int{0: 1, 999: 1, 1000: 1, 1001: 2, 2500: 3} {
		if got := b.batches(ml); got != want {
			t.Errorf("%g mL in a flask of 1.5 L: %d batches, want %d", ml, got, want)
		}
	}
	if (*Bench)(nil).batches(1e6) != 1 {
		t.Error("without a bench file there is no limit")
	}
}

func TestBench(t *testing.T) {
	cold := -20.0
	for _, c := range []struct {
		bench Bench
		want  int // condition sets of the oxidation left
	}{
		{Bench{}, 2},
		{Bench{Coldest: &cold}, 1},
		{Bench{Lacks: benchWords("cold")}, 1},
		{Bench{Lacks: benchWords("cold"), Has: benchWords("cold -78")}, 2},
		{Bench{Lacks: benchWords("Bleach")}, 1},
		{Bench{Never: benchWords("Cr")}, 1},
	} {
		p := plan(t, avoidWorld(t), "CCC(C)=O", Options{Bench: &c.bench})
		if got := 1 + len(p.Routes[0].Alternatives); got != c.want {
			t.Errorf("%+v: %d condition sets, want %d", c.bench, got, c.want)
		}
	}
}

func TestStockSuffices(t *testing.T) {
	bromide := 0.2
	world := func() *World {
		f := newFakeBook(t)
		f.makes("short-way", "CCCCO", 0.5, "CCCCBr")
		f.makes("second-step", "CCCCO", 0.9, "CCCC=O")
		f.makes("first-step", "CCCC=O", 0.9, "CCC=O")
		b := newBottles()
		b.put(t, "1-bromobutane", "CCCCBr", func(m *Material) { m.StockMol = bromide })
		b.put(t, "propanal", "CCC=O", func(m *Material) { m.StockMol = 10 })
		return f.world(b)
	}
	for _, c := range []struct {
		mol   float64
		first string
	}{{0, "short-way"}, {0.09, "short-way"}, {0.11, "first-step"}} {
		p := plan(t, world(), "CCCCO", Options{MakeMol: c.mol})
		if got := p.Routes[0].Steps[0].Transform; got != c.first {
			t.Errorf("make %v mol: %s first, want %s", c.mol, got, c.first)
		}
	}
	p := plan(t, world(), "CCCCO", Options{MakeMol: 0.11})
	if r := p.Routes[1]; len(r.Short) != 1 || !strings.Contains(r.Short[0], "1-bromobutane") || len(p.Doubts) == 0 {
		t.Errorf("short %q, doubts %q", r.Short, p.Doubts)
	}
	if p.Search.ProvenRoutes != 2 {
		t.Errorf("both routes there are stand in order; %d proven", p.Search.ProvenRoutes)
	}
	bromide = math.NaN() // an amount that nobody wrote down moves no route up
	for _, mol := range []float64{0.09, 0.11} {
		q := plan(t, world(), "CCCCO", Options{MakeMol: mol})
		if r := q.Routes[1]; r.Stock() != "unknown" || len(r.StockUnknown) != 1 || r.Steps[0].Transform != "short-way" {
			t.Errorf("make %v mol, stock not written down: %q, %v", mol, r.Stock(), r.StockUnknown)
		}
	}
	bromide = 0.2
	if p = plan(t, world(), "CCCCO", Options{MakeMol: 0.11, MaxExpanded: 1}); len(p.Routes) != 1 || p.Search.ProvenBest {
		t.Errorf("one route that is short of stock, search cut off: %+v", p.Search)
	}
}

func TestShelfAndFrom(t *testing.T) {
	p := plan(t, avoidWorld(t), "CCC(C)O", Options{})
	if len(p.Routes) != 1 || len(p.Routes[0].Steps) != 0 || !p.Target.OnShelf {
		t.Errorf("target on the shelf: %+v", p.Routes)
	}
	p = plan(t, avoidWorld(t), "CCC(C)O", Options{MakeAnyway: true})
	if len(p.Routes) != 0 || !p.Search.Exhausted {
		t.Errorf("nothing makes it: %+v", p.Search)
	}
	w := avoidWorld(t)
	p = plan(t, w, "CCC(C)=O", Options{From: plan(t, w, "CCBr", Options{}).molecules()})
	if len(p.Routes) != 1 || p.Routes[0].Steps[0].Transform != "from-bromide" {
		t.Errorf("from bromoethane: %+v", p.Routes)
	}
}
