package route

import (
	"testing"
)

// TestWaysOut: an intermediate from which three steps lead on, one of them the route's own, one to a dead
// end, one back to where it came from.
func TestWaysOut(t *testing.T) {
	f := newFakeBook(t)
	f.makes("last", "CCCC(=O)C", 0.9, "CCCC(O)C")
	f.makes("around", "CCCC(=O)C", 0.5, "CCCC(Cl)C")
	f.makes("chloride", "CCCC(Cl)C", 0.9, "CCCC(O)C")
	f.makes("needs-partner", "CCCC(=O)C", 0.5, "CCCC(O)C", "N#CC#N") // nobody has the partner
	f.makes("first", "CCCC(O)C", 0.9, "CCCC=O", "CBr")
	f.makes("back", "CCCC=O", 0.9, "CCCC(O)C")
	s := f.makes("second-set", "CCCC(=O)C", 0.8, "CCCC(O)C") // the same molecules: other conditions
	s.Conditions[0].ID = "other"
	b := newBottles()
	b.put(t, "butanal", "CCCC=O", nil)
	b.put(t, "bromomethane", "CBr", nil)
	p := plan(t, f.world(b), "CCCC(=O)C", Options{})
	r := p.Routes[0]
	if len(r.Steps) != 2 || len(r.WaysOut) != 1 {
		t.Fatalf("%d steps, ways out %+v", len(r.Steps), r.WaysOut)
	}
	if w := r.WaysOut[0]; w.Step != 1 || w.Conditions != 1 || w.Steps != 1 || w.Product != "CCCC(C)O" {
		t.Errorf("ways out %+v", w)
	}
}
