package draw

import (
	"bytes"
	"image/png"
	"math"
	"regexp"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

func mustRead(t *testing.T, text string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(text)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// written joins the texts of a drawing, label by label.
func written(d *Drawing) string {
	var list []string
	for _, s := range d.Shapes {
		if t, ok := s.(Text); ok {
			text := ""
			for _, r := range t.Runs {
				text += r.Text
			}
			list = append(list, text)
		}
	}
	return strings.Join(list, " ")
}

// TestLabels reads what is written at atoms, from left to right.
func TestLabels(t *testing.T) {
	for _, c := range []struct{ smiles, want string }{
		{"O", "H2O"}, {"Cl", "HCl"}, {"C", "CH4"}, {"[NH4+]", "NH4+"}, {"CC", ""}, {"[13CH3]O", "H313C OH"},
		{"C[N+](=O)[O-]", "N+ O O−"}, {"[Ca+2]", "Ca2+"}, {"C=C=C", "C"}, {"C[CH2]", "H2C"},
	} {
		if got := written(Structure(mustRead(t, c.smiles), Options{})); got != c.want {
			t.Errorf("%s: written %q, want %q", c.smiles, got, c.want)
		}
	}
}

// TestHydrogensTurnAway looks at the side on which hydrogens stand: never over a bond.
func TestHydrogensTurnAway(t *testing.T) {
	for _, c := range []struct {
		neighbors []Point
		want      hydrogensAt
	}{
		{[]Point{{1, 0.5}}, left}, {[]Point{{-1, 0.5}}, right}, {[]Point{{0, 1}}, right},
		{[]Point{{-1, -0.5}, {1, -0.5}}, below}, {[]Point{{-1, 0.5}, {1, 0.5}}, above}, {[]Point{{1, 0.5}, {1, -0.5}}, left},
	} {
		if got := hydrogenSide(molecule.Atom{Element: 7, Hydrogens: 1}, c.neighbors); got != c.want {
			t.Errorf("%v: side %d, want %d", c.neighbors, got, c.want)
		}
	}
}

// TestHabits checks how molecules are held, as chemists are used to see them.
func TestHabits(t *testing.T) {
	at := func(text string) (*molecule.Molecule, []Point) { m := mustRead(t, text); return m, Layout(m) }
	_, p := at("c1ccccc1")
	upright := 0
	for i := range p {
		if d := p[(i+1)%6].sub(p[i]); math.Abs(d.X) < 1e-6 {
			upright++
		}
	}
	if upright != 2 {
		t.Errorf("benzene has %d upright bonds, 2 expected", upright)
	}
	m, p := at("CCCCCCCC(=O)O")
	last := m.NumAtoms() - 1
	if p[last].X-p[0].X < 5 {
		t.Errorf("octanoic acid: the acid end is not to the right: %v, %v", p[0], p[last])
	}
	if p[last-1].Y < p[last-2].Y {
		t.Error("octanoic acid: the carbonyl group does not point up")
	}
	for i := 0; i+2 < last-2; i++ {
		if math.Abs(p[i].Y-p[i+2].Y) > 1e-6 {
			t.Errorf("octanoic acid: atoms %d and %d of the zig-zag stand at different heights", i, i+2)
		}
	}
	_, p = at("CC#CC")
	if d := p[3].sub(p[0]).length(); math.Abs(d-3) > 1e-6 {
		t.Errorf("but-2-yne is not straight: its ends stand %.3f apart", d)
	}
	_, p = at("c1ccc2ccccc2c1")
	if a, b := p[3], p[8]; math.Abs(a.X-b.X) > 1e-6 {
		t.Errorf("naphthalene does not lie across: %v, %v", a, b)
	}
	m, p = at("C[C@@]12CCC3C(CCC4=CC(=O)CC[C@]34C)C1CC[C@@H]2O")
	if oh := m.NumAtoms() - 1; p[oh].X < p[11].X+3 || p[oh].Y < p[11].Y+2 {
		t.Error("a steroid does not lie with ring A to the lower left")
	}
}

// TestLongChainsTurnBack draws a chain of two hundred atoms in rows that fit on a page, without overlaps.
func TestLongChainsTurnBack(t *testing.T) {
	p := Layout(mustRead(t, strings.Repeat("C", 200)))
	lo, hi := p[0], p[0]
	for i, q := range p {
		lo, hi = Point{min(lo.X, q.X), min(lo.Y, q.Y)}, Point{max(hi.X, q.X), max(hi.Y, q.Y)}
		for j := range i {
			if d := q.sub(p[j]).length(); d < 0.9 {
				t.Fatalf("atoms %d and %d stand %.2f apart", j, i, d)
			}
		}
	}
	if wide := hi.X - lo.X; wide > 30 {
		t.Errorf("%.1f bond lengths wide, at most 30 expected (a last piece stays in its row)", wide)
	}
	if acid := Layout(mustRead(t, strings.Repeat("C", 17)+"C(=O)O")); acid[17].X-acid[0].X < 14 {
		t.Error("stearic acid does not lie straight")
	}
}

func TestSchemeMarksBonds(t *testing.T) {
	r := Reaction{Reactants: []*molecule.Molecule{mustRead(t, "[CH3:1][C:2](=[O:3])[OH:4]"), mustRead(t, "[OH:5][CH3:6]")},
		Products: []*molecule.Molecule{mustRead(t, "[CH3:1][C:2](=[O:3])[O:5][CH3:6]")}, Above: []string{"H2SO4"}, Below: []string{"reflux"}}
	made := madeBonds(r.Products[0], bondsByClass(r.Reactants))
	count := 0
	for b, x := range made {
		if x {
			count++
			if bd := r.Products[0].Bond(b); bd.A != 1 || bd.B != 3 {
				t.Errorf("bond %d-%d is marked as made", bd.A, bd.B)
			}
		}
	}
	if count != 1 {
		t.Errorf("%d bonds marked as made, 1 expected", count)
	}
	text := Scheme(r, Options{}).SVG()
	above, below := height(t, text, "H2SO4"), height(t, text, "reflux")
	if above >= below {
		t.Errorf("the reagent stands at height %s, the conditions at %s", above, below)
	}
}

// height is the y of a text in an SVG, as it is written.
func height(t *testing.T, svg, text string) string {
	t.Helper()
	found := regexp.MustCompile(`y="(\d+\.\d)"[^>]*>` + text).FindStringSubmatch(svg)
	if found == nil {
		t.Fatalf("no %q in %s", text, svg)
	}
	return found[1]
}

// TestPNG decodes what is written: its size, ink on the ground of the style, nothing at the edges.
func TestPNG(t *testing.T) {
	for _, st := range []Style{Screen, Print, Dark} {
		d := Structure(mustRead(t, "OCc1ccccc1"), Options{Style: st})
		var b bytes.Buffer
		if err := d.WritePNG(&b, 2); err != nil {
			t.Fatal(err)
		}
		img, err := png.Decode(&b)
		if err != nil {
			t.Fatal(err)
		}
		if w := img.Bounds().Dx(); w != int(math.Ceil(2*d.Width)) {
			t.Errorf("%s: %d pixels wide, drawing %.1f points", st.Name, w, d.Width)
		}
		ground, other := img.At(0, 0), 0
		for y := range img.Bounds().Dy() {
			for x := range img.Bounds().Dx() {
				if img.At(x, y) != ground {
					other++
					if x < 4 || y < 4 || x >= img.Bounds().Dx()-4 || y >= img.Bounds().Dy()-4 {
						t.Fatalf("%s: ink at the edge", st.Name)
					}
				}
			}
		}
		if other < 500 {
			t.Errorf("%s: %d pixels of ink", st.Name, other)
		}
	}
}
