package route

import "testing"

func TestMeets(t *testing.T) {
	for _, c := range []struct {
		material, wanted string
		ok, racemic      bool
	}{
		{"CC(O)CC", "CC(O)CC", true, false},
		{"C[C@H](O)CC", "C[C@H](O)CC", true, false},
		{"C[C@H](O)CC", "C[C@@H](O)CC", false, false},
		{"CC(O)CC", "C[C@@H](O)CC", true, true},
		{"C[C@H](O)CC", "CC(O)CC", true, false},
		{"CC(O)C(N)C", "C[C@@H](O)[C@H](N)C", false, false},
		{"C/C=C/C", "CC=CC", true, false},
		{"CC=CC", "C/C=C/C", false, false},
		{"CCO", "CCN", false, false},
	} {
		ok, racemic := meets(mustRead(t, c.material), mustRead(t, c.wanted))
		if ok != c.ok || racemic != c.racemic {
			t.Errorf("%s for %s: %v %v", c.material, c.wanted, ok, racemic)
		}
	}
}

func TestRacemicStart(t *testing.T) {
	world := func() *World {
		f := newFakeBook(t)
		f.makes("inversion", "N[C@@H](C)CC", 0.8, "O[C@H](C)CC")
		b := newBottles()
		b.put(t, "butan-2-ol", "OC(C)CC", nil)
		return f.world(b)
	}
	p := plan(t, world(), "N[C@@H](C)CC", Options{})
	if len(p.Routes) != 1 || !hasDoubt(&p.Routes[0], "Racemic") {
		t.Errorf("routes %+v", p.Routes)
	}
	if p = plan(t, world(), "N[C@@H](C)CC", Options{OneEnantiomer: true}); len(p.Routes) != 0 {
		t.Errorf("one enantiomer from a racemate: %+v", p.Routes)
	}
}

func TestWouldOpen(t *testing.T) {
	f := newFakeBook(t)
	f.makes("last", "CCCCCO", 0.8, "CCCCC=O", "N")
	f.makes("first", "CCCCC=O", 0.8, "CCCCCl")
	b := newBottles()
	b.put(t, "water", "O", nil)
	p := plan(t, f.world(b), "CCCCCO", Options{})
	if len(p.Routes) != 0 || len(p.WouldOpen) != 2 || p.WouldOpen[0].SMILES != "CCCCC=O" || p.WouldOpen[1].Steps != 2 {
		t.Errorf("%+v", p.WouldOpen)
	}
}
