package route

import (
	"context"
	"strings"
	"testing"

	"shelfward/reactions"
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

func TestBench(t *testing.T) {
	cold := -20.0
	for _, c := range []struct {
		bench Bench
		want  int // condition sets of the oxidation left
	}{
		{Bench{}, 2},
		{Bench{ColdestC: &cold}, 1},
		{Bench{Lacks: []string{"cold"}}, 1},
		{Bench{Lacks: []string{"cold"}, Has: []string{"cold -78"}}, 2},
		{Bench{Never: []string{"Cr"}}, 1},
	} {
		p := plan(t, avoidWorld(t), "CCC(C)=O", Options{Bench: &c.bench})
		if got := 1 + len(p.Routes[0].Alternatives); got != c.want {
			t.Errorf("%+v: %d condition sets, want %d", c.bench, got, c.want)
		}
	}
}

func TestStockSuffices(t *testing.T) {
	world := func() *World {
		f := newFakeBook(t)
		f.makes("short-way", "CCCCO", 0.5, "CCCCBr")
		f.makes("second-step", "CCCCO", 0.9, "CCCC=O")
		f.makes("first-step", "CCCC=O", 0.9, "CCC=O")
		b := newBottles()
		b.put(t, "1-bromobutane", "CCCCBr", func(m *Material) { m.StockMol = 0.2 })
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
