package route

import (
	"bytes"
	"context"
	"math"
	"strings"
	"testing"

	"shelfward/reactions"
)

// mendWorld: butanal and methyl bromide make an alcohol (two sets), which is oxidised; the alcohol can be
// made from the ketone's enol ether too, butanal leads on by another way, and a third way starts afresh.
func mendWorld(t *testing.T) *World {
	f := newFakeBook(t)
	f.makes("oxidation", "CCCC(C)=O", 0.9, "CCCC(C)O")
	s := f.makes("addition", "CCCC(C)O", 0.8, "CCCC=O", "CBr")
	other := *s.Conditions[0]
	other.ID, other.Reagents, other.Yield = "cold", []reactions.Charge{{Name: "magnesium", Equiv: 1}}, reactions.Range{Low: 0.6, Usual: 0.7, High: 0.8}
	s.Conditions = append(s.Conditions, &other)
	f.makes("hydration", "CCCC(C)O", 0.6, "CCCC=C")
	f.makes("aldehyde", "CCCC=O", 0.9, "CCCCO")
	f.makes("onward", "CCCC(C)=O", 0.5, "CCCC=O", "CS")
	f.makes("afresh", "CCCC(C)=O", 0.3, "CCCC#C")
	b := newBottles()
	for name, structure := range map[string]string{"butan-1-ol": "CCCCO", "bromomethane": "CBr", "pent-1-ene": "CCCC=C", "methanethiol": "CS", "pent-1-yne": "CCCC#C"} {
		b.put(t, name, structure, func(m *Material) { m.PricePerMol, m.StockMol, m.HazardsKnown = 10, 100, true })
	}
	return f.world(b)
}

func mended(t *testing.T, have []InHand) (*Mend, *Route) {
	t.Helper()
	w := mendWorld(t)
	p := plan(t, w, "CCCC(C)=O", Options{MakeMol: 1, Count: 9})
	for i := range p.Routes {
		r := &p.Routes[i]
		if len(r.Steps) == 3 && r.Steps[1].Transform == "addition" {
			m, err := p.Mend(context.Background(), w, r, 2, have, Options{})
			if err != nil {
				t.Fatal(err)
			}
			return m, r
		}
	}
	t.Fatal("the route by addition is missing")
	return nil, nil
}

func TestMend(t *testing.T) {
	m, r := mended(t, nil)
	var got []string
	for _, w := range m.Ways {
		text := w.Kind + ":"
		for _, s := range w.Steps {
			text += " " + s.Transform + "/" + s.Conditions
		}
		got = append(got, text)
	}
	want := "conditions: addition/cold | product: hydration/usual | onward: onward/usual | shelf: "
	if g := strings.Join(got, " | "); !strings.HasPrefix(g, want) || !strings.Contains(g, "shelf: afresh/usual") {
		t.Errorf("ways %s\nwant %s", g, want)
	}
	if len(m.InHand) != 1 || !m.InHand[0].Assumed || m.InHand[0].Step != 1 || m.InHand[0].SMILES != "CCCC=O" {
		t.Errorf("in hand %+v", m.InHand)
	}
	first := m.Ways[0]
	if y := first.Lost.Yield; math.Abs(y.Planned-0.8*0.9) > 1e-6 || math.Abs(y.Now-0.7*0.9) > 1e-6 || first.Lost.From != "hand" {
		t.Errorf("other conditions lose %+v", first.Lost)
	}
	if first.Lost.Days != daysOf(&r.Steps[1]) || len(first.Then) != 1 || first.Then[0] != 3 {
		t.Errorf("other conditions: %g days lost, then %v", first.Lost.Days, first.Then)
	}
	// 1 mol of target at the planned yields took 1/(0.9*0.8) mol of butanal; at 70 % it gives 0.875 mol
	if g := first.Enough / m.Target.MolarMass; math.Abs(g-0.875) > 1e-3 || len(first.Doubts) == 0 {
		t.Errorf("what is in hand gives %g mol, doubts %q", g, first.Doubts)
	}
	last := m.Ways[len(m.Ways)-1]
	if last.Kind != BackToShelf || last.Lost.From != "shelf" || !strings.Contains(strings.Join(last.Lost.Material, " "), "of CCCC=O in hand") {
		t.Errorf("back to the shelf loses %+v", last.Lost)
	}
	var b bytes.Buffer
	if err := m.WriteText(&b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"Other conditions for the same step", "Another way to the same product", "Another way on from what is in hand", "Back to the shelf", "assumed, the planned amount"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("%q is missing in\n%s", want, b.String())
		}
	}
}

// TestMendHave: what is said to be in hand counts; nothing in hand leads nowhere.
func TestMendHave(t *testing.T) {
	x := mustRead(t, "CCCC=O")
	m, _ := mended(t, []InHand{{x, 0.5}})
	if h := m.InHand; len(h) != 1 || h[0].Assumed || math.Abs(h[0].G-0.5*x.Formula().MolarMass()) > 1e-3 {
		t.Errorf("in hand %+v", h)
	}
	if g := m.Ways[0].Enough / m.Target.MolarMass; math.Abs(g-0.5*0.7*0.9) > 1e-3 {
		t.Errorf("0.5 mol give %g mol", g)
	}
	m, _ = mended(t, []InHand{{x, 0}})
	if len(m.InHand) != 0 || !strings.Contains(strings.Join(m.None, " "), "nothing is in hand") {
		t.Errorf("in hand %+v, none %q", m.InHand, m.None)
	}
	for _, w := range m.Ways {
		if w.Kind == OtherOnward {
			t.Errorf("onward with nothing in hand: %+v", w)
		}
	}
}

func TestMendErrors(t *testing.T) {
	w := mendWorld(t)
	p := plan(t, w, "CCCC(C)=O", Options{})
	for _, step := range []int{0, -1, 9} {
		if _, err := p.Mend(context.Background(), w, &p.Routes[0], step, nil, Options{}); err == nil || !strings.Contains(err.Error(), "has steps 1 to") {
			t.Errorf("step %d: %v", step, err)
		}
	}
	taken := plan(t, w, "CBr", Options{})
	if _, err := taken.Mend(context.Background(), w, &taken.Routes[0], 1, nil, Options{}); err == nil {
		t.Error("a route without steps: no error")
	}
}
