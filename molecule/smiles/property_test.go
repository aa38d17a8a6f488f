package smiles

import (
	"bufio"
	"fmt"
	"math/rand"
	"os"
	"strconv"
	"strings"
	"testing"
)

// graphene is a sheet of w by h hexagon columns, written by its bonds with ring closures.
func graphene(w, h int) string {
	// brick-wall lattice: atom (x, y), bonds along x, and along y where x+y is even
	var s strings.Builder
	open := map[[4]int]int{}
	next := 1
	for y := 0; y < h; y++ {
		for x := 0; x < 2*w; x++ {
			if x == 2*w-1 && (y == 0 || y == h-1) {
				continue // would hang outside the sheet
			}
			if x == 0 && y > 0 {
				s.WriteByte('.')
			}
			s.WriteByte('c')
			if (x+y)%2 == 0 && y+1 < h {
				open[[4]int{x, y, x, y + 1}] = next
				fmt.Fprintf(&s, "%%(%d)", next)
				next++
			}
			if n, ok := open[[4]int{x, y - 1, x, y}]; ok {
				fmt.Fprintf(&s, "%%(%d)", n)
			}
		}
	}
	return s.String()
}

// corpus reads the first column of the reference file.
func corpus(t testing.TB) []string {
	t.Helper()
	f, err := os.Open("../../testdata/canonical/reference.tsv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var list []string
	for s := bufio.NewScanner(f); s.Scan(); {
		if line := s.Text(); line != "" && line[0] != '#' {
			list = append(list, strings.Split(line, "\t")[0])
		}
	}
	return list
}

// TestRandomOrders writes each molecule in random orders and reads it back: one key, one text.
func TestRandomOrders(t *testing.T) {
	r := rand.New(rand.NewSource(3))
	for _, text := range corpus(t) {
		m, err := Read(text)
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		want := Write(m)
		for range 4 {
			ranks := make([]int32, m.NumAtoms())
			for i, p := range r.Perm(len(ranks)) {
				ranks[i] = int32(p)
			}
			drawn := WriteInOrder(m, ranks)
			back, err := Read(drawn)
			if err != nil {
				t.Errorf("%s written as %s: %v", text, drawn, err)
				continue
			}
			if got := Write(back); got != want || back.Key() != m.Key() {
				t.Errorf("%s written as %s becomes %s, want %s", text, drawn, got, want)
			}
		}
	}
}

// TestReference compares with the reference toolkit: the columns are three drawings of one
// molecule and one drawing of another, all from it.
func TestReference(t *testing.T) {
	f, err := os.Open("../../testdata/canonical/reference.tsv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	n := 0
	for s := bufio.NewScanner(f); s.Scan(); {
		line := s.Text()
		if line == "" || line[0] == '#' {
			continue
		}
		n++
		c := strings.Split(line, "\t")
		texts := make([]string, 4)
		for i := range 4 {
			m, err := Read(c[i])
			if err != nil {
				t.Errorf("%s: %v", c[i], err)
				continue
			}
			texts[i] = Write(m)
			if i == 0 {
				if got := m.Formula().String(); got != c[4] {
					t.Errorf("%s: formula %s, want %s", c[i], got, c[4])
				}
				aromatic := 0
				for a := 0; a < m.NumAtoms(); a++ {
					if m.Atom(a).Aromatic {
						aromatic++
					}
				}
				if got := fmt.Sprint(aromatic, " ", len(m.Rings())); got != c[5] {
					t.Errorf("%s: aromatic atoms and rings %s, want %s", c[i], got, c[5])
				}
			}
		}
		if texts[0] != texts[1] || texts[0] != texts[2] {
			t.Errorf("three drawings of %s become %s, %s, %s", c[0], texts[0], texts[1], texts[2])
		}
		if texts[3] == texts[0] {
			t.Errorf("%s and %s are different but both become %s", c[0], c[3], texts[0])
		}
	}
	if n < 300 {
		t.Errorf("only %d rows", n)
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

func FuzzRead(f *testing.F) {
	addCorpus(f)
	for _, s := range []string{"C", "c1ccccc1", "F/C=C/F", "C[C@H](N)C(=O)O", "[13CH3:7][Na+]", "C1CC%(12)C1C%12", "[nH]1cccc1", "*1cccc*1",
		"[H]/N=C/C", "C[S@+]1([O-])CC1", "O=C1C=CC(=O)C=C1.[Cl-]", "C/C=C/C=CC(/[H])=C/C", "[N@]1(C)CC1C", "c1ccc2c(c1)[se]c1ccccc12", "B\n0"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		m, err := Read(text)
		if err != nil {
			if e := err.(*Error); e.Caret() == "" || strings.Contains(e.Error(), "\n") {
				t.Errorf("%q: bad error %v", text, err)
			}
			return
		}
		if m.NumAtoms() > 200 {
			return
		}
		out := Write(m)
		back, err := Read(out)
		if err != nil {
			t.Fatalf("%q is written %q, which does not read: %v", text, out, err)
		}
		if back.Key() != m.Key() || Write(back) != out {
			t.Fatalf("%q is written %q, which reads as %q", text, out, Write(back))
		}
		m.SeenThroughKey()
		m.FreeForm()
	})
}

func BenchmarkReadWrite(b *testing.B) {
	list := corpus(b)
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		m, err := Read(list[i%len(list)])
		if err != nil {
			b.Fatal(err)
		}
		Write(m)
	}
}

func BenchmarkRead(b *testing.B) {
	list := corpus(b)
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := Read(list[i%len(list)]); err != nil {
			b.Fatal(err)
		}
	}
}
