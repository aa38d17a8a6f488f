package molecule_test

import (
	"slices"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
)

// TestForms: tautomers that a chemist draws, counted by hand.
func TestForms(t *testing.T) {
	for _, c := range []struct {
		drawn string
		other []string
	}{
		{"CCO", nil},
		{"O=c1cccc[nH]1", []string{"Oc1ccccn1"}},
		{"Cc1cnc[nH]1", []string{"Cc1c[nH]cn1"}},
		{"CC(=O)NC", []string{"CN=C(C)O"}},
		{"CC(=O)CC(C)=O", nil}, // an enol of carbon is no such form
	} {
		m, err := smiles.Read(c.drawn)
		if err != nil {
			t.Fatal(err)
		}
		var got, want []string
		for _, f := range m.Forms() {
			got = append(got, smiles.Write(f))
			if f.SeenThroughKey() != m.SeenThroughKey() {
				t.Errorf("%s: %s is another compound", c.drawn, smiles.Write(f))
			}
		}
		for _, s := range c.other {
			f, _ := smiles.Read(s)
			want = append(want, smiles.Write(f))
		}
		slices.Sort(got)
		slices.Sort(want)
		if strings.Join(got, " ") != strings.Join(want, " ") {
			t.Errorf("%s: %v, want %v", c.drawn, got, want)
		}
	}
}

func TestSimpleEnol(t *testing.T) {
	for text, want := range map[string]bool{"C=CO": true, "CC=O": false, "Oc1ccccc1": false, "CC(O)=CC(C)=O": true, "COC=C": false, "OC1=CCCCC1": true} {
		m, err := smiles.Read(text)
		if err != nil {
			t.Fatal(err)
		}
		if got := m.SimpleEnol(); got != want {
			t.Errorf("%s: %v", text, got)
		}
	}
}
