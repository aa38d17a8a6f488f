package draw_test

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/draw"
	"shelfward/molecule/molfile"
	"shelfward/molecule/smiles"
)

// TestDrawingsReadBack writes drawings as molfiles, places and wedges alone, and reads them with the reader of
// molfiles, which knows nothing of this package: the same molecule must come back. Once with wedges as a
// molfile has them, once with the hydrogens that the picture shows.
func TestDrawingsReadBack(t *testing.T) {
	data, err := os.ReadFile("testdata/stereo.smi")
	if err != nil {
		t.Fatal(err)
	}
	total, wrong := 0, 0
	for _, text := range strings.Fields(string(data)) {
		m, err := smiles.Read(text)
		if err != nil {
			t.Fatal(err)
		}
		for _, shown := range []bool{false, true} {
			total++
			d := draw.Place(m, shown)
			if got := readBack(t, d); got != smiles.Write(m) {
				wrong++
				t.Errorf("%s (hydrogens shown: %v): drawn and read back as\n%s, want\n%s", text, shown, got, smiles.Write(m))
			}
		}
	}
	t.Logf("%d drawings, %d read back otherwise", total, wrong)
}

// readBack is the canonical text of a drawing written as a V2000 molfile and read again.
func readBack(t *testing.T, d *draw.Placed) string {
	t.Helper()
	r, err := molfile.NewReader(strings.NewReader(plainMolfile(d))).Next()
	if err != nil {
		t.Fatal(err)
	}
	return smiles.Write(r.Molecule)
}

// plainMolfile writes the drawing without any help of the molfile writer.
func plainMolfile(d *draw.Placed) string {
	m := d.Molecule
	var b bytes.Buffer
	atoms, bonds := m.NumAtoms()+len(d.Hydrogens), m.NumBonds()+len(d.Hydrogens)
	fmt.Fprintf(&b, "\n\n\n%3d%3d  0  0  0  0  0  0  0  0999 V2000\n", atoms, bonds)
	charges, isotopes := "", ""
	for a := range m.NumAtoms() {
		x := m.Atom(a)
		valence := 0
		for _, nb := range m.Neighbors(a) {
			valence += int(m.Bond(int(nb.Bond)).Order)
		}
		if valence += int(x.Hydrogens); valence == 0 {
			valence = 15
		}
		fmt.Fprintf(&b, "%10.4f%10.4f%10.4f %-3s 0  0  0  0  0%3d  0  0  0  0  0  0\n", d.At[a].X, d.At[a].Y, 0.0, x.Element.Symbol(), valence)
		if x.Charge != 0 {
			charges += fmt.Sprintf("M  CHG  1 %3d %3d\n", a+1, x.Charge)
		}
		if x.Isotope != 0 {
			isotopes += fmt.Sprintf("M  ISO  1 %3d %3d\n", a+1, x.Isotope)
		}
	}
	for _, h := range d.Hydrogens {
		fmt.Fprintf(&b, "%10.4f%10.4f%10.4f H   0  0  0  0  0  0  0  0  0  0  0  0\n", h.At.X, h.At.Y, 0.0)
	}
	code := map[bool]int{true: 1, false: 6}
	for i := range m.NumBonds() {
		x := m.Bond(i)
		from, to, stereo := x.A, x.B, 0
		for _, w := range d.Wedges {
			if int(w.Bond) == i {
				from, to, stereo = w.From, x.A+x.B-w.From, code[w.Up]
			}
		}
		if stereo == 0 && x.Order == 2 && open(m, i) {
			stereo = 3
		}
		fmt.Fprintf(&b, "%3d%3d%3d%3d\n", from+1, to+1, x.Order, stereo)
	}
	for i, h := range d.Hydrogens {
		fmt.Fprintf(&b, "%3d%3d%3d%3d\n", h.Center+1, m.NumAtoms()+i+1, 1, code[h.Up])
	}
	fmt.Fprintf(&b, "%s%sM  END\n", charges, isotopes)
	return b.String()
}

// open says that double bond b has no mark, so that what the drawing shows of it is to be read as nothing.
func open(m *molecule.Molecule, b int) bool {
	for _, d := range m.DoubleBonds() {
		if int(d.Bond) == b {
			return false
		}
	}
	return !m.Bond(b).Ring || m.SmallestBondRing(b) >= 8
}

// TestLayoutIgnoresOrder writes the molecules in random orders: the same atoms must stand at the same places.
func TestLayoutIgnoresOrder(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for _, file := range []string{"testdata/stereo.smi", "testdata/sample.smi"} {
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		for _, text := range strings.Fields(string(data)) {
			m, err := smiles.Read(text)
			if err != nil {
				t.Fatal(err)
			}
			want := canonicalPlaces(m)
			order := make([]int32, m.NumAtoms())
			for i, x := range rng.Perm(len(order)) {
				order[i] = int32(x)
			}
			other, err := smiles.Read(smiles.WriteInOrder(m, order))
			if err != nil {
				t.Fatal(err)
			}
			for i, p := range canonicalPlaces(other) {
				if math.Hypot(p.X-want[i].X, p.Y-want[i].Y) > 1e-9 {
					t.Errorf("%s: in another order atom %d stands elsewhere", text, i)
					break
				}
			}
		}
	}
}

func canonicalPlaces(m *molecule.Molecule) []draw.Point {
	out := make([]draw.Point, m.NumAtoms())
	ranks := m.Ranks()
	for a, p := range draw.Layout(m) {
		out[ranks[a]] = p
	}
	return out
}
