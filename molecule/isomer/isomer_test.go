package isomer

import (
	"bufio"
	"context"
	"os"
	"sort"
	"strconv"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

func formulaOf(t testing.TB, text string) molecule.Formula {
	t.Helper()
	f, err := molecule.ParseFormula(text)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func pieceFrom(t testing.TB, text string) Piece {
	t.Helper()
	m, err := smiles.Read(text)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	p, err := PieceOf(text, m)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// label names a structure by its canonical string. Package molecule draws a double bond inside an
// aromatic outline (CC1=CC2=C1C=C2) like the single one (CC1=CC2=CC=C12) where it can; the reference
// toolkit keeps the two apart, and so do the counts: the label says which it is.
func label(t testing.TB, s *Structure) string {
	t.Helper()
	m, err := s.Materialise()
	if err != nil {
		t.Fatalf("%+v: %v", *s, err)
	}
	text := smiles.Write(m)
	for _, b := range s.Bonds {
		if x := m.Bond(m.BondBetween(int(b.A), int(b.B))); b.Order == 2 && x.Order == 1 && !x.Aromatic {
			return text + " with an inner double bond"
		}
	}
	return text
}

// count runs p and returns the number of structures.
func count(t testing.TB, p Problem) int64 {
	t.Helper()
	r, err := Enumerate(context.Background(), p, Options{}, nil)
	if err != nil {
		t.Fatal(err)
	}
	if !r.Complete {
		t.Fatalf("%s: stopped: %s", p.Formula, r.Stopped)
	}
	return r.Generated
}

// keys runs p and returns the sorted canonical strings; it fails if one comes twice.
func keys(t testing.TB, p Problem) []string {
	t.Helper()
	var list []string
	_, err := Enumerate(context.Background(), p, Options{}, func(s *Structure) bool {
		m, err := s.Materialise()
		if err != nil {
			t.Fatalf("%+v: %v", *s, err)
		}
		if got := m.Formula(); got != p.Formula {
			t.Fatalf("%s has the formula %s, want %s", smiles.Write(m), got, p.Formula)
		}
		list = append(list, label(t, s))
		return true
	})
	if err != nil {
		t.Fatal(err)
	}
	sort.Strings(list)
	for i := 1; i < len(list); i++ {
		if list[i] == list[i-1] {
			t.Errorf("%s: %s comes twice", p.Formula, list[i])
		}
	}
	return list
}

// lines reads a tab-separated file without its comments.
func lines(t testing.TB, name string) (rows [][]string) {
	t.Helper()
	file, err := os.Open("../../testdata/isomers/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	for in := bufio.NewScanner(file); in.Scan(); {
		if !strings.HasPrefix(in.Text(), "#") {
			rows = append(rows, strings.Split(in.Text(), "\t"))
		}
	}
	return rows
}

func number(t testing.TB, s string) int64 {
	t.Helper()
	n, err := strconv.ParseInt(s, 10, 64)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func TestCounts(t *testing.T) {
	for _, row := range lines(t, "counts.tsv") {
		p := Problem{Formula: formulaOf(t, row[0]), Valences: Standard}
		if got, want := count(t, p), number(t, row[1]); got != want {
			t.Errorf("%s: %d isomers, want %d", row[0], got, want)
		}
		p.Rings = Exactly(0)
		if got, want := count(t, p), number(t, row[2]); got != want {
			t.Errorf("%s: %d without rings, want %d", row[0], got, want)
		}
	}
}

// Each structure is a molecule of its own for the canonical labelling, which knows nothing of codes.
func TestDistinct(t *testing.T) {
	for _, f := range []string{"C6H6", "C7H6", "C8H6", "C6H6O", "C4H5N3"} {
		keys(t, Problem{Formula: formulaOf(t, f), Valences: Standard})
	}
	for _, f := range []string{"C2H5NO2", "C2H6OS", "C3H3N3", "C2H7O3P", "C5H5NO", "C2H4N4"} {
		keys(t, Problem{Formula: formulaOf(t, f)})
	}
}

// rawSink takes every code, all Kekulé forms included.
type rawSink struct {
	work workspace
	give func(s *Structure)
}

func (r *rawSink) node(*search, int) verdict { return descend }
func (r *rawSink) leaf(s *search) bool {
	r.work.write(s)
	r.give(&r.work.structure)
	return true
}

// The Kekulé forms that are left out are those, and only those, of compounds that are counted.
func TestKekuleForms(t *testing.T) {
	for _, f := range []string{"C6H6", "C7H6", "C8H6", "C4H3N3", "C3H3N3O"} {
		p := Problem{Formula: formulaOf(t, f)}
		c, err := compile(p)
		if err != nil {
			t.Fatal(err)
		}
		all := map[string]bool{}
		forms := 0
		var s search
		sink := &rawSink{give: func(st *Structure) {
			forms++
			all[label(t, st)] = true
		}}
		c.plans(func(pl *plan) bool {
			s.start(pl, sink)
			return s.visit(0)
		})
		list := keys(t, p)
		if f == "C8H6" && forms == len(list) {
			t.Errorf("%s: no Kekulé form was merged", f)
		}
		if len(list) != len(all) {
			t.Errorf("%s: %d compounds, the forms make %d", f, len(list), len(all))
		}
		for _, k := range list {
			delete(all, k)
		}
		for k := range all {
			t.Errorf("%s: %s is missing", f, k)
			break
		}
	}
}

// Random formulas counted by programs that share nothing with this one: all Kekulé forms, and compounds.
func TestMultigraphs(t *testing.T) {
	for _, row := range lines(t, "multigraphs.tsv") {
		p := Problem{Formula: formulaOf(t, row[0]), Valences: Standard}
		c, err := compile(p)
		if err != nil {
			t.Fatal(err)
		}
		forms := int64(0)
		var s search
		sink := &rawSink{give: func(*Structure) { forms++ }}
		c.plans(func(pl *plan) bool {
			s.start(pl, sink)
			return s.visit(0)
		})
		if want := number(t, row[1]); forms != want {
			t.Errorf("%s: %d forms, want %d", row[0], forms, want)
		}
		if got, want := count(t, p), number(t, row[2]); got != want {
			t.Errorf("%s: %d compounds, want %d", row[0], got, want)
		}
	}
}

// Alkyl chlorides are rooted trees: OEIS A000598 (values from memory, C1 to C20).
func TestChlorides(t *testing.T) {
	known := []int64{1, 1, 2, 4, 8, 17, 39, 89, 211, 507, 1238, 3057, 7639, 19241, 48865, 124906, 321198, 830219, 2156010, 5622109}
	for i, want := range known {
		n := i + 1
		if n > 14 && os.Getenv("SHELFWARD_SLOW") == "" {
			break
		}
		p := Problem{Formula: molecule.Formula{}, Valences: Standard}
		p.Formula.Count[6], p.Formula.Count[1], p.Formula.Count[17] = int32(n), int32(2*n+1), 1
		if got := count(t, p); got != want {
			t.Errorf("%s: %d isomers, want %d", p.Formula, got, want)
		}
	}
}
