package route

import (
	"context"
	"strings"
	"testing"
	"time"
)

// TestExplain: a dearer intermediate, one on a listed route, one that nothing makes, one that leads nowhere.
func TestExplain(t *testing.T) {
	f := newFakeBook(t)
	f.makes("direct", "CCCC(C)=O", 0.9, "CCCC#C")
	f.makes("oxidation", "CCCC(C)=O", 0.9, "CCCC(C)O")
	f.makes("addition", "CCCC(C)O", 0.8, "CCCC=O")
	f.makes("dead-end", "CCCC(C)=O", 0.8, "CCCC(C)=S")
	b := newBottles()
	for name, structure := range map[string]string{"pent-1-yne": "CCCC#C", "butanal": "CCCC=O", "propane": "CCC"} {
		b.put(t, name, structure, func(m *Material) { m.PricePerMol, m.HazardsKnown = 10, true })
	}
	w := f.world(b)
	for _, c := range []struct {
		x                   string
		count               int
		chosen, made, whole bool
		says                string
	}{
		{"CCCC(C)O", 1, false, true, true, "not chosen: through it the whole weighs about"},
		{"CCCC(C)O", 2, true, true, false, "chosen: on route"},
		{"CCCC#C", 1, true, false, false, "on the shelf: it is taken, not made"},
		{"CCCC(C)=S", 1, false, false, false, "it cannot be made: no way of at most 8 steps"},
		{"CCC", 1, false, false, false, "nothing leads on from it"},
	} {
		p := plan(t, w, "CCCC(C)=O", Options{Count: c.count})
		p.Routes = p.Routes[:c.count]
		if err := p.Explain(context.Background(), w, mustRead(t, c.x), Options{}); err != nil {
			t.Fatal(err)
		}
		e := p.Explained[0]
		if len(e.Routes) > 0 != c.chosen || (e.Made != nil) != c.made || (e.Through != nil) != c.whole || !strings.Contains(strings.Join(e.Says, "; "), c.says) {
			t.Errorf("%s, %d listed: %+v", c.x, c.count, e)
		}
		if e.Through != nil && *e.Through < p.Routes[0].Weight {
			t.Errorf("%s: through it %g, the first route %g", c.x, *e.Through, p.Routes[0].Weight)
		}
	}
}

func TestExplainTime(t *testing.T) {
	plan, each := ExplainTime(8*time.Second, 2)
	if plan+4*each != 8*time.Second || plan < 4*time.Second-1 {
		t.Errorf("8 s for two molecules: %v and four times %v", plan, each)
	}
	if plan, _ := ExplainTime(time.Second, 0); plan != time.Second {
		t.Errorf("nothing asked: %v", plan)
	}
}

// TestPurchaseClasses: what stands in the list of reagents comes before a small building block, that before
// a large one.
func TestPurchaseClasses(t *testing.T) {
	f := newFakeBook(t)
	f.makes("large", "CCCC(C)=O", 0.9, "CCCCCCCCCCCC(C)=O")
	f.makes("small", "CCCC(C)=O", 0.9, "CCCC(C)=S")
	f.makes("everyday", "CCCC(C)=O", 0.5, "CCCO")
	b := newBottles()
	b.put(t, "propanol", "CCCO", func(m *Material) { m.OnShelf, m.CAS = false, "71-23-8" })
	b.put(t, "propane", "CCC", nil)
	p := plan(t, f.world(b), "CCCC(C)=O", Options{})
	var got []string
	for _, o := range p.WouldOpen {
		got = append(got, o.SMILES)
		if o.ClassSays == "" {
			t.Errorf("%s: class %d has no words", o.SMILES, o.Class)
		}
	}
	if g := strings.Join(got, " "); g != "CCCO CCCC(C)=S CCCCCCCCCCCC(C)=O" {
		t.Errorf("purchases in the order %s", g)
	}
}
