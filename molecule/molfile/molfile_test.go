package molfile

import (
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

func read(t testing.TB, text string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(text)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	return m
}

// row makes an atom line.
func row(x, y, z float64, symbol, rest string) string {
	return fmt.Sprintf("%10.4f%10.4f%10.4f %-3s%s\n", x, y, z, symbol, rest)
}

// star is a carbon with F, Cl, Br and one more neighbour, or a hydrogen where that is missing;
// stereo is the stereo field of the bond to Br. Fluorine lies east, chlorine northwest, bromine southwest.
func star(fourth string, stereo int) string {
	s := "star\n\n\n"
	n := 4
	if fourth != "" {
		n = 5
	}
	s += fmt.Sprintf("%3d%3d  0  0  0  0  0  0  0  0999 V2000\n", n, n-1)
	s += row(0, 0, 0, "C", "") + row(1, 0, 0, "F", "") + row(-0.5, 0.87, 0, "Cl", "") + row(-0.5, -0.87, 0, "Br", "")
	if fourth != "" {
		s += row(0.3, 1, 0, fourth, "")
	}
	s += "  1  2  1  0\n  1  3  1  0\n" + fmt.Sprintf("  1  4  1%3d\n", stereo)
	if fourth != "" {
		s += "  1  5  1  0\n"
	}
	return s + "M  END\n"
}

// TestWedges: seen from the reader (in front of the page) F, Cl, Br run counterclockwise. With Br
// in front the hydrogen points back: from the hydrogen they run clockwise, which SMILES writes
// [C@@] with the hydrogen first. Worked out by hand.
func TestWedges(t *testing.T) {
	for _, c := range []struct {
		text, want string
	}{
		{star("", 0), "FC(Cl)Br"},
		{star("", 1), "[C@@H](F)(Cl)Br"},
		{star("", 6), "[C@H](F)(Cl)Br"},
		{star("", 4), "FC(Cl)Br"},
		// The same with the hydrogen drawn between F and Cl: seen from Br, F, H, Cl run counterclockwise.
		{star("H", 1), "Br[C@](F)([H])Cl"},
		// Br in front, F, I, Cl in the page counterclockwise: seen from Br counterclockwise.
		{star("I", 1), "Br[C@](F)(I)Cl"},
		{star("I", 6), "Br[C@@](F)(I)Cl"},
	} {
		r, err := Read(strings.NewReader(c.text))
		if err != nil {
			t.Errorf("%v in\n%s", err, c.text)
			continue
		}
		if got, want := smiles.Write(r.Molecule), smiles.Write(read(t, c.want)); got != want {
			t.Errorf("got %s, want %s in\n%s", got, want, c.text)
		}
	}
}

// TestDrawingsThatSayNothing: wedges that contradict each other or mean no tetrahedron leave the centre
// open, and are counted. Seen from the raised F (in front) Cl, Br, I run counterclockwise.
func TestDrawingsThatSayNothing(t *testing.T) {
	cross := func(marks ...int) string { // F east, Cl north, Br west, I south
		s := "cross\n\n\n  5  4  0  0  0  0  0  0  0  0999 V2000\n" + row(0, 0, 0, "C", "") +
			row(1, 0, 0, "F", "") + row(0, 1, 0, "Cl", "") + row(-1, 0, 0, "Br", "") + row(0, -1, 0, "I", "")
		for i, m := range marks {
			s += fmt.Sprintf("  1%3d  1%3d\n", i+2, m)
		}
		return s + "M  END\n"
	}
	allene := "allene\n\n\n  6  5  0  0  0  0  0  0  0  0999 V2000\n" + row(0, 0, 0, "C", "") + row(1, 0, 0, "C", "") + row(2, 0, 0, "C", "") +
		row(-0.5, 0.8, 0, "F", "") + row(-0.5, -0.8, 0, "Cl", "") + row(2.5, 0.8, 0, "Br", "") +
		"  1  2  2  0\n  2  3  2  0\n  1  4  1  1\n  1  5  1  0\n  3  6  1  0\nM  END\n"
	up := "FC(Cl)(Br)I"
	for _, c := range []struct {
		name, text, want string
		leftOut          int
	}{
		{"one wedge", cross(1, 0, 0, 0), "F[C@](Cl)(Br)I", 0},
		{"two opposite wedges", cross(1, 0, 1, 0), "F[C@](Cl)(Br)I", 0},
		{"a wedge beside a hash", cross(1, 6, 0, 0), "F[C@](Cl)(Br)I", 0},
		{"two wedges side by side", cross(1, 1, 0, 0), up, 1},
		{"a wedge against a hash", cross(1, 0, 6, 0), up, 1},
		{"a wavy bond", cross(1, 0, 0, 4), up, 0},
		{"wedges at an allene", allene, "FC(Cl)=C=CBr", 1},
	} {
		r, err := Read(strings.NewReader(c.text))
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		if got, want := smiles.Write(r.Molecule), smiles.Write(read(t, c.want)); got != want || r.Molecule.MarksLeftOut() != c.leftOut {
			t.Errorf("%s: %s, %d left out; want %s, %d", c.name, got, r.Molecule.MarksLeftOut(), want, c.leftOut)
		}
	}
}

// TestSpaceAndParity: the same centre from 3D coordinates and from the parity of the atom line.
func TestSpaceAndParity(t *testing.T) {
	head := "x\n\n\n  4  3  0  0  0  0  0  0  0  0999 V2000\n"
	bonds := "  1  2  1  0\n  1  3  1  0\n  1  4  1  0\nM  END\n"
	space := head + row(0, 0, 0, "C", "") + row(1, 0, 0.3, "F", "") + row(-0.5, 0.87, 0.3, "Cl", "") + row(-0.5, -0.87, 0.3, "Br", "") + bonds
	// Parity 1: hydrogen behind, F, Cl, Br in rising order clockwise.
	parity := head + row(0, 0, 0, "C", " 0  0  1") + row(0, 0, 0, "F", "") + row(0, 0, 0, "Cl", "") + row(0, 0, 0, "Br", "") + bonds
	for _, c := range []struct{ text, want string }{{space, "[C@@H](F)(Cl)Br"}, {parity, "[C@H](F)(Cl)Br"}} {
		r, err := Read(strings.NewReader(c.text))
		if err != nil {
			t.Fatal(err)
		}
		if got, want := smiles.Write(r.Molecule), smiles.Write(read(t, c.want)); got != want {
			t.Errorf("got %s, want %s", got, want)
		}
	}
}

// TestRoundTrip writes and reads back without coordinates (double bond marks are lost) and with
// atoms on a spiral, where nothing lies on a line.
func TestRoundTrip(t *testing.T) {
	for _, text := range []string{
		"C[C@H](N)C(=O)O", "C/C=C/C", "C/C=C\\C=C\\C", "[13CH4]", "[Na+].[O-]c1ccccc1", "C[N+](=O)[O-]", "[2H]C(Cl)(Cl)Cl", "C[S@](=O)c1ccccc1",
		"c1cc[nH]c1", "Cn1cnc2c1c(=O)n(C)c(=O)n2C", "[CH3]", "C[Mg]Br", "[CH2]", "O[C@H]1CC[C@@H](O)CC1", "CP(C)(C)(C)C", "*c1ccccc1", "[H][H]",
		"N[C@@H](CS)C(=O)N[C@@H](C)C(=O)O", "C[Si](C)(C)Cl", "OB(O)c1ccccc1", "[NH4+].[Cl-]", "CC=CC", "[Cu+2]", "Cl[Sn](Cl)(Cl)Cl", "[CH3:4]O", "C[N@]1CC1C",
	} {
		m := read(t, text)
		var spiral []Point
		for a := range m.NumAtoms() {
			f := float64(a)
			spiral = append(spiral, Point{X: math.Round(1e4*(1+f)*math.Cos(2.4*f)) / 1e4, Y: math.Round(1e4*(1+f)*math.Sin(2.4*f)) / 1e4})
		}
		for _, points := range [][]Point{nil, spiral} {
			var out strings.Builder
			if err := WriteSD(&out, &Record{Molecule: m, Title: text, Coordinates: points, Fields: []Field{{"NAME", "a\n\nb"}, {"N", "1"}}}); err != nil {
				t.Fatal(err)
			}
			r, err := Read(strings.NewReader(out.String()))
			if err != nil {
				t.Errorf("%s: %v in\n%s", text, err, out.String())
				continue
			}
			want := m
			if points == nil && len(m.DoubleBonds()) > 0 {
				b := m.Builder()
				b.DoubleBonds = nil
				if want, err = b.Build(); err != nil {
					t.Fatal(err)
				}
			}
			if got := r.Molecule; got.Key() != want.Key() {
				t.Errorf("%s becomes %s, drawn %v:\n%s", text, smiles.Write(got), points != nil, out.String())
			}
			if name, _ := r.Field("NAME"); name != "a\n \nb" || len(r.Fields) != 2 || r.Title != text {
				t.Errorf("%s: title %q, fields %q", text, r.Title, r.Fields)
			}
		}
	}
}

const methane = "methane\n\n\n  1  0  0  0  0  0  0  0  0  0999 V2000\n    0.0000    0.0000    0.0000 C   0  0\nM  END\n"

// TestErrorsAndRecovery reads every good record around bad ones and checks place and text.
func TestErrorsAndRecovery(t *testing.T) {
	bad := []struct {
		text, message string
		line          int // inside the record
	}{
		{"x\n\n\nnonsense\n", "counts of atoms", 4},
		{"x\n\n\n  1  0  0  0  0  0  0  0  0  0999 V3000\n", "BEGIN CTAB", 5},
		{"x\n\n\n  2  1  0\n" + row(0, 0, 0, "C", "") + row(0, 0, 0, "C", "") + "  1  3  1  0\nM  END\n", "names atom 3", 7},
		{"x\n\n\n  2  1  0\n" + row(0, 0, 0, "C", "") + row(0, 0, 0, "C", "") + "  1  2  8  0\nM  END\n", "bond type 8", 7},
		{"x\n\n\n  1  0  0\n" + row(0, 0, 0, "Xx", "") + "M  END\n", "element symbol", 5},
		{"x\n\n\n  1  0  0\n    0.0000    a.0000    0.0000 C   0\nM  END\n", "coordinate", 5},
		{"x\n\n\n  2  0  0\n" + row(0, 0, 0, "C", ""), "end of the record", 6},
		{"x\n\n\n  2  1  0\n" + row(0, 0, 0, "F", "") + row(0, 0, 0, "O", "") + "  1  2  3  0\nM  END\n", "atom 1: F has 3 bonds", 5},
		{"x\n\n\n  1  0  0\n" + row(0, 0, 0, "C", "") + "M  CHG  1   2   1\nM  END\n", "atom and value", 6},
		{"x\n\n\n  1  0  0\n" + row(0, 0, 0, "C", "") + "M  END\nstray text\n", "data field", 7},
		{"x\n\n\n  1  0  0\n" + strings.Repeat("y", 200_000) + "\nM  END\n", "longer than", 5},
	}
	var file strings.Builder
	var starts []int
	line := 1
	add := func(s string) {
		file.WriteString(s)
		line += strings.Count(s, "\n")
	}
	for _, b := range bad {
		add(methane + "> <ID>\n7\n\n$$$$\n")
		starts = append(starts, line)
		add(b.text + "$$$$\n")
	}
	add(methane)
	r := NewReader(strings.NewReader(file.String()))
	good, failed := 0, 0
	for n := 1; ; n++ {
		rec, err := r.Next()
		if err == io.EOF {
			break
		}
		if err == nil {
			good++
			if rec.Number != n || smiles.Write(rec.Molecule) != "C" || rec.Title != "methane" {
				t.Errorf("record %d: %v", n, rec)
			}
			continue
		}
		var e *Error
		if !errors.As(err, &e) {
			t.Fatalf("record %d: %v", n, err)
		}
		b := bad[failed]
		if e.Record != n || e.Line != starts[failed]+b.line-1 || !strings.Contains(e.Message, b.message) {
			t.Errorf("got %v; want record %d, line %d, %q", e, n, starts[failed]+b.line-1, b.message)
		}
		failed++
	}
	if good != len(bad)+1 || failed != len(bad) {
		t.Errorf("%d good and %d bad records, want %d and %d", good, failed, len(bad)+1, len(bad))
	}
}

func TestLineEndsAndBlanks(t *testing.T) {
	r := NewReader(strings.NewReader(strings.ReplaceAll(methane+"> <A>\nx\n\n$$$$\n\n\n", "\n", "\r\n")))
	rec, err := r.Next()
	if err != nil || smiles.Write(rec.Molecule) != "C" || len(rec.Fields) != 1 {
		t.Fatalf("%v %v", rec, err)
	}
	if _, err := r.Next(); err != io.EOF {
		t.Errorf("after the last record: %v", err)
	}
	if _, err := Read(strings.NewReader("")); err == nil {
		t.Error("an empty file is read")
	}
	if rec, err := Read(strings.NewReader(strings.TrimPrefix(methane, "methane"))); err != nil || rec.Title != "" {
		t.Errorf("without a title: %v", err)
	}
}

func TestChargesAndIsotopes(t *testing.T) {
	one := func(symbol, rest, properties string) string {
		return "x\n\n\n  1  0  0  0  0  0  0  0  0  0999 V2000\n" + row(0, 0, 0, symbol, rest) + properties + "M  END\n"
	}
	for _, c := range []struct{ text, want string }{
		{one("O", " 0  5", ""), "[OH-]"}, {one("N", " 0  3", ""), "[NH4+]"}, {one("C", " 1  0", ""), "[13CH4]"}, {one("D", "", ""), "[2H]"},
		{one("N", " 0  3", "M  CHG  1   1  -1\n"), "[NH2-]"}, {one("C", "", "M  ISO  1   1  14\n"), "[14CH4]"}, {one("C", "", "M  RAD  1   1   2\n"), "[CH3]"},
		{one("C", "", "M  RAD  1   1   3\n"), "[CH2]"}, {one("C", " 0  0  0  0  0 15", ""), "[C]"}, {one("P", " 0  0  0  0  0  5", ""), "[PH5]"}, {one("Na", " 0  3", ""), "[Na+]"},
		{one("R#", "", ""), "*"}, {one("Rb", "", ""), "[Rb]"}, {one("C", " 0  4", ""), "[CH3]"},
	} {
		r, err := Read(strings.NewReader(c.text))
		if err != nil {
			t.Errorf("%s: %v", c.want, err)
			continue
		}
		if got := smiles.Write(r.Molecule); got != c.want {
			t.Errorf("got %s, want %s in\n%s", got, c.want, c.text)
		}
	}
}

func TestReadReaction(t *testing.T) {
	part := "$MOL\n" + methane
	text := "$RXN\nburning\n\n\n  2  1\n" + part + part + part
	r, err := ReadReaction(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	if r.Title != "burning" || len(r.Reactants) != 2 || len(r.Products) != 1 || len(r.Agents) != 0 {
		t.Errorf("read %+v", r)
	}
	for _, c := range []struct{ text, message string }{
		{"", "$RXN"}, {"$RXN V3000\n\n\n\n", "COUNTS"}, {"$RXN\n\n\n\n  x  1\n", "counts"}, {"$RXN\n\n\n\n  1  1\n" + part, "$MOL"}, {methane, "expected $RXN"},
	} {
		if _, err := ReadReaction(strings.NewReader(c.text)); err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("%q: %v, want %q", c.text, err, c.message)
		}
	}
}

// addCorpus adds what earlier fuzzing found worth keeping: one input a line, its strings quoted as in Go.
func addCorpus(f *testing.F) {
	f.Helper()
	data, err := os.ReadFile("testdata/corpus.txt")
	if err != nil {
		f.Fatal(err)
	}
	for line := range strings.Lines(string(data)) {
		var values []any
		for _, quoted := range strings.Split(strings.TrimSuffix(line, "\n"), "\t") {
			text, err := strconv.Unquote(quoted)
			if err != nil {
				f.Fatalf("%s: %v", quoted, err)
			}
			values = append(values, text)
		}
		f.Add(values...)
	}
}

func FuzzReader(f *testing.F) {
	addCorpus(f)
	f.Add(methane + "$$$$\n" + star("I", 1))
	f.Add(star("H", 6) + "> <A>\nb\n$$$$\n")
	f.Add("$RXN\n\n\n\n  1  1\n$MOL\n" + methane)
	for _, path := range []string{"testdata/reference.sdf", "testdata/reference_3.rxn"} {
		text, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(string(text[:min(len(text), 12_000)]))
	}
	f.Fuzz(func(t *testing.T, text string) {
		r := NewReader(strings.NewReader(text))
		for n := 0; n < 1000; n++ {
			rec, err := r.Next()
			if err == io.EOF {
				break
			}
			var e *Error
			if err != nil {
				if !errors.As(err, &e) {
					t.Fatalf("error of another type: %v", err)
				}
				continue
			}
			if rec.Molecule.NumAtoms() == 0 || rec.Molecule.NumAtoms() > 100 {
				continue
			}
			var out strings.Builder
			if err := Write(&out, rec); err != nil {
				if !strings.Contains(err.Error(), "coordinates below") {
					t.Fatal(err)
				}
				continue
			}
			back, err := Read(strings.NewReader(out.String()))
			if err != nil || back.Molecule.FlatKey() != rec.Molecule.FlatKey() {
				t.Fatalf("written and read back: %v\n%s", err, out.String())
			}
		}
		ReadReaction(strings.NewReader(text))
	})
}
