package route

import (
	"context"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// TestAtomsAndKeyBonds: the acetoacetic ester synthesis of heptan-2-one from its two starts: four carbons
// come from the bromide, the carbon-carbon bond made last joins them to the other three, and going by way of
// the iodide is a variant.
func TestAtomsAndKeyBonds(t *testing.T) {
	b := newBottles()
	for _, x := range []string{"CCOC(=O)CC(C)=O", "CCCCBr", "CCO"} {
		b.put(t, "bottle of "+x, x, nil)
	}
	w := worldWith(t, b)
	w.WriteClasses = writeMapped
	target := mustRead(t, "CCCCCC(C)=O")
	o := Options{Count: 4, MaxSteps: 3, MaxExpanded: 12}
	o.From = append(o.From, b.list[:2]...)
	p, err := Make(context.Background(), w, target, o)
	if err != nil || len(p.Routes) < 3 {
		t.Fatalf("%v: %d routes", err, len(p.Routes))
	}
	r := &p.Routes[0]
	var gives []string
	for _, m := range r.StartingMaterials {
		gives = append(gives, m.SMILES+" "+m.Gives)
	}
	if g := strings.Join(gives, ", "); !strings.Contains(g, "CCCCBr C4") || !strings.Contains(g, "OCC C3O") || r.FromReagents != "" {
		t.Errorf("%s; reagents %q", g, r.FromReagents)
	}
	if n := strings.Count(r.KeyBonds, ":1]"); n != 2 || !strings.Contains(r.KeyBonds, "CCC[CH2:1][CH2:1]C(") {
		t.Errorf("key bonds %s", r.KeyBonds)
	}
	first, variant := map[string]*Route{}, 0
	for i := range p.Routes {
		r := &p.Routes[i]
		first[r.Code] = r
		if r.VariantOf == "" {
			continue
		}
		variant++
		if of := first[r.VariantOf]; of == nil || of.Weight > r.Weight || of.KeyBonds != r.KeyBonds {
			t.Errorf("%s is called a variant of %s", r.Code, r.VariantOf)
		}
	}
	if variant == 0 {
		t.Error("no variant among the routes")
	}
	o.Different = true
	p, err = Make(context.Background(), w, target, o)
	if err != nil {
		t.Fatal(err)
	}
	seen := map[string]bool{}
	for i := range p.Routes {
		r := &p.Routes[i]
		if seen[r.KeyBonds] || r.VariantOf != "" {
			t.Errorf("%s: key bonds %s again", r.Code, r.KeyBonds)
		}
		seen[r.KeyBonds] = true
	}
}

var writeMapped = func(m *molecule.Molecule) string { return smiles.WriteInOrder(m, m.Ranks()) }

// TestWants: one of several starts, an intermediate on the way, a step banned.
func TestWants(t *testing.T) {
	f := newFakeBook(t)
	f.makes("last", "CCCCO", 0.9, "CCCC=O")
	f.makes("other", "CCCCO", 0.8, "CCCCBr")
	f.makes("mid", "CCCC=O", 0.9, "CCCC#N")
	f.makes("mid2", "CCCC=O", 0.7, "CCCC(=O)O")
	b := newBottles()
	for _, x := range []string{"CCCCBr", "CCCC#N", "CCCC(=O)O"} {
		b.put(t, x, x, nil)
	}
	w := f.world(b)
	lists := func(o Options) string {
		o.Count = 9
		var out []string
		for _, r := range plan(t, w, "CCCCO", o).Routes {
			out = append(out, r.Steps[0].Transform)
		}
		return strings.Join(out, " ")
	}
	nitrile, acid, aldehyde := mustRead(t, "CCCC#N"), mustRead(t, "CCCC(=O)O"), mustRead(t, "CCCC=O")
	for _, c := range []struct {
		name, want string
		o          Options
	}{
		{"all", "other mid mid2", Options{}},
		{"any", "mid mid2", Options{FromAny: []*molecule.Molecule{nitrile, acid}}},
		{"any of those consumed anyhow", "mid2", Options{From: []*molecule.Molecule{acid}, FromAny: []*molecule.Molecule{nitrile, acid}}},
		{"via", "mid mid2", Options{Via: []*molecule.Molecule{aldehyde}}},
		{"via and any", "mid2", Options{Via: []*molecule.Molecule{aldehyde}, FromAny: []*molecule.Molecule{acid}}},
		{"not", "other mid2", Options{Bans: []Ban{{Text: "x", Reactants: []*molecule.Molecule{nitrile}, Product: aldehyde}}}},
		{"not at all", "other", Options{Bans: []Ban{{Text: "x", Product: aldehyde}}}},
	} {
		if got := lists(c.o); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
	if _, err := Make(context.Background(), w, mustRead(t, "CCCCO"), Options{Via: []*molecule.Molecule{mustRead(t, "CCCCO")}}); err == nil {
		t.Error("the target as an intermediate: no error")
	}
}
