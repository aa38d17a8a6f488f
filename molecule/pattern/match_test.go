package pattern

import (
	"fmt"
	"math/rand"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// plainMappings is a matcher without index, plan and pool: it tries the query atoms in the order written.
func plainMappings(q *Query, s *Subject) map[string]bool {
	found := map[string]bool{}
	to := make([]int32, 0, len(q.Atoms))
	fits := func(i, a int) bool {
		qa, at := &q.Atoms[i], s.M.Atom(a)
		if qa.Elements != nil && !slices.Contains(qa.Elements, at.Element) || slices.Contains(qa.Forbidden, at.Element) {
			return false
		}
		if qa.aromatic != eitherAromatic && (qa.aromatic == onlyAromatic) != at.Aromatic || !qa.AnyCharge && qa.Charge != at.Charge {
			return false
		}
		if qa.Hydrogens >= 0 && qa.Hydrogens != hydrogens(s.M, a) || qa.Isotope != 0 && qa.Isotope != at.Isotope {
			return false
		}
		shape := map[string]atomCode{"sp3": shapeSP3, "sp2": shapeSP2, "sp": shapeSP}[Hybridisation(s.M, a)]
		if qa.mask&shapeMask != 0 && qa.value&shapeMask>>shapeShift != shape || qa.mask&ringBit != 0 && (qa.value&ringBit != 0) != s.M.InRing(a) {
			return false
		}
		heavy := counted["heavy neighbours"](s.M, a)
		if qa.mask&heavyMask != 0 && int(qa.value&heavyMask>>heavyShift) != heavy {
			return false
		}
		if qa.mask&hydrogensMask != 0 && int(qa.value&hydrogensMask>>hydrogensShift) != hydrogens(s.M, a) {
			return false
		}
		for _, t := range qa.tests {
			if !t(s, a) {
				return false
			}
		}
		return true
	}
	var step func()
	step = func() {
		i := len(to)
		if i == len(q.Atoms) {
			found[fmt.Sprint(to)] = true
			return
		}
	next:
		for a := range s.M.NumAtoms() {
			if slices.Contains(to, int32(a)) || !fits(i, a) {
				continue
			}
			for k := range q.Bonds {
				b := &q.Bonds[k]
				if max(b.A, b.B) != i {
					continue
				}
				x := s.M.BondBetween(a, int(to[min(b.A, b.B)]))
				if x < 0 || b.orders&orderBit(s.M.Bond(x)) == 0 || !b.testsFit(s, x) {
					continue next
				}
			}
			to = append(to, int32(a))
			step()
			to = to[:i]
		}
	}
	step()
	return found
}

// TestAgainstPlain compares with a plain matcher: sixty groups and random pieces of molecules in molecules
// of the corpus that the canonical strings are tested on.
func TestAgainstPlain(t *testing.T) {
	c, groups := sixty(t)
	r := rand.New(rand.NewSource(5))
	var set []*molecule.Molecule
	for i, row := range corpusTexts(t) {
		if i%17 == 0 {
			if m, err := smiles.Read(row); err == nil && m.NumAtoms() < 40 {
				set = append(set, m)
			}
		}
	}
	var queries []*Query
	for i := range c.Patterns {
		queries = append(queries, c.Patterns[i].query)
	}
	for range 60 {
		if q := pieceOf(set[r.Intn(len(set))], r); q != nil {
			queries = append(queries, q)
		}
	}
	if len(set) < 20 || len(queries) < 100 {
		t.Fatalf("only %d molecules and %d queries", len(set), len(queries))
	}
	pairs := 0
	for _, m := range set {
		s := NewSubject(m, groups)
		for _, q := range queries {
			want := plainMappings(q, s)
			got := map[string]bool{}
			sets := map[string]bool{}
			q.Each(s, func(to Mapping) bool {
				got[fmt.Sprint([]int32(to))] = true
				sorted := slices.Sorted(slices.Values(to))
				sets[fmt.Sprint(sorted)] = true
				return true
			})
			if len(got) != len(want) {
				t.Fatalf("%s in %s: %d mappings, expected %d", q.Text, smiles.Write(m), len(got), len(want))
			}
			for k := range got {
				if !want[k] {
					t.Fatalf("%s in %s: mapping %s is none", q.Text, smiles.Write(m), k)
				}
			}
			if n := len(q.AtomSets(s)); n != len(sets) || q.Matches(s) != (n > 0) {
				t.Fatalf("%s in %s: %d sets, expected %d", q.Text, smiles.Write(m), n, len(sets))
			}
			if len(got) > 0 {
				pairs++
			}
		}
	}
	if pairs < 200 {
		t.Errorf("only %d pairs matched", pairs)
	}
}

// corpusTexts reads the first column of testdata/canonical/reference.tsv.
func corpusTexts(t testing.TB) []string {
	t.Helper()
	var list []string
	for _, line := range strings.Split(readFile(t, "../../testdata/canonical/reference.tsv"), "\n") {
		if line != "" && line[0] != '#' {
			list = append(list, strings.Split(line, "\t")[0])
		}
	}
	return list
}

// pieceOf makes a pattern of up to six connected atoms of m; some atoms ask for their hydrogens.
func pieceOf(m *molecule.Molecule, r *rand.Rand) *Query {
	if m.NumAtoms() == 0 {
		return nil
	}
	atoms := []int32{int32(r.Intn(m.NumAtoms()))}
	for range 1 + r.Intn(5) {
		nbs := m.Neighbors(int(atoms[r.Intn(len(atoms))]))
		if len(nbs) == 0 {
			break
		}
		if a := nbs[r.Intn(len(nbs))].Atom; !slices.Contains(atoms, a) {
			atoms = append(atoms, a)
		}
	}
	var text strings.Builder
	ring, digit := map[[2]int32]int{}, 1
	for i, a := range atoms { // one atom after the other, bonds by ring digits
		if i > 0 {
			text.WriteByte('.')
		}
		x := m.Atom(int(a))
		symbol := x.Element.Symbol()
		if x.Aromatic {
			symbol = strings.ToLower(symbol)
		}
		fmt.Fprintf(&text, "[%s", symbol)
		if r.Intn(3) == 0 {
			fmt.Fprintf(&text, "H%d", hydrogens(m, int(a)))
		}
		if x.Charge != 0 {
			fmt.Fprintf(&text, "%+d", x.Charge)
		}
		text.WriteByte(']')
		for _, other := range atoms {
			b := m.BondBetween(int(a), int(other))
			if other == a || b < 0 {
				continue
			}
			key := [2]int32{min(a, other), max(a, other)}
			if ring[key] == 0 {
				ring[key] = digit
				digit++
			}
			sign := map[uint8]string{orderSingle: "-", orderDouble: "=", orderTriple: "#", orderAromatic: ":"}[orderBit(m.Bond(b))]
			fmt.Fprintf(&text, "%s%%%02d", sign, ring[key])
		}
	}
	q, err := Compile(text.String(), nil, nil)
	if err != nil {
		return nil
	}
	return q
}

// TestNothingPerCall: looking for a group that is not there, or asking whether it is, allocates nothing.
func TestNothingPerCall(t *testing.T) {
	c, groups := sixty(t)
	m, err := smiles.Read("CC(=O)Nc1ccc(OCC(O)CO)cc1")
	if err != nil {
		t.Fatal(err)
	}
	s := NewSubject(m, groups)
	all := func() {
		for i := range c.Patterns {
			c.Patterns[i].query.Matches(s)
		}
	}
	all()
	if n := testing.AllocsPerRun(50, all); n > 1 { // a collection may empty the pool once
		t.Errorf("%.0f allocations", n)
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

func FuzzCompile(f *testing.F) {
	addCorpus(f)
	c, _ := sixty(f)
	for _, p := range c.Patterns {
		f.Add(p.Pattern, "1", "sp3")
	}
	f.Add("[13CH3+:7]%12.C~*-%12", "7", "hydrogens at least 1")
	f.Add("C1CC1", "1-2", "ring size 3-5")
	m, err := smiles.Read("CC(=O)Nc1ccc(OCC(O)C[N+](=O)[O-])cc1.[13CH4].C1CC1")
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, text, key, word string) {
		q, err := Compile(text, Where{key: {word}}, nil)
		if err != nil {
			q, err = Compile(text, nil, nil)
		}
		if err != nil || len(q.Atoms) > 5 { // many loose parts that nearly match take long
			return
		}
		s := NewSubject(m, nil)
		n := 0
		q.Each(s, func(Mapping) bool { n++; return n < 5000 })
		if (n > 0) != q.Matches(s) {
			t.Fatalf("%q: %d mappings", text, n)
		}
	})
}
