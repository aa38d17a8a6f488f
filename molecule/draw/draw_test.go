package draw

import (
	"math"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
)

// TestLayoutKeepsAtomsApart lays ordinary molecules out: bonds near one unit, no two atoms on one place.
func TestLayoutKeepsAtomsApart(t *testing.T) {
	for _, s := range []string{"CCCC(C)C(=O)CC", "c1ccc2ccccc2c1", "CC(=O)Oc1ccccc1C(=O)O", "C1CC2CCC1C2", "C1CCC2(CC1)OCCO2", "OC(=O)CCCCC(=O)O", "CC#CCC", "[Na+].[O-]C(=O)C"} {
		m, err := smiles.Read(s)
		if err != nil {
			t.Fatal(err)
		}
		at := Layout(m)
		for b := 0; b < m.NumBonds(); b++ {
			bd := m.Bond(b)
			if d := at[bd.A].sub(at[bd.B]).length(); math.Abs(d-1) > 0.45 {
				t.Errorf("%s: bond %d is %.2f units long", s, b, d)
			}
		}
		for a := range at {
			for b := a + 1; b < len(at); b++ {
				if d := at[a].sub(at[b]).length(); d < 0.4 {
					t.Errorf("%s: atoms %d and %d stand %.2f units apart", s, a, b, d)
				}
			}
		}
	}
}

func TestSVGNamesAtoms(t *testing.T) {
	m, err := smiles.Read("CC(=O)O")
	if err != nil {
		t.Fatal(err)
	}
	got := SVG(m, Options{Title: "acetic <acid>"})
	for _, want := range []string{"acetic &lt;acid&gt;", "OH", "<line"} {
		if !strings.Contains(got, want) {
			t.Errorf("the picture lacks %q:\n%s", want, got)
		}
	}
}
