package pattern

import (
	"testing"

	"shelfward/molecule/smiles"
)

// TestSieve: no query that occurs in a molecule is passed over, and some are.
func TestSieve(t *testing.T) {
	var queries []*Query
	for _, text := range []string{"[C:1](=[O:2])[OH:3]", "[c:1]Br", "[N:1]#[C:2]", "[CH3:1][CH2:2]", "[C:1]=[C:2]", "[OH:1][c:2]", "[*:1]Cl"} {
		q, err := Compile(text, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		queries = append(queries, q)
	}
	v := NewSieve(queries)
	for _, text := range []string{"CCC(=O)O", "Oc1ccc(Br)cc1", "N#CCC", "C=CCl", "C"} {
		m, err := smiles.Read(text)
		if err != nil {
			t.Fatal(err)
		}
		s := NewSubject(m, nil)
		left := map[int]bool{}
		for i := v.Next(s, 0); i >= 0; i = v.Next(s, i+1) {
			left[i] = true
		}
		if len(left) == len(queries) {
			t.Errorf("%s: nothing is passed over", text)
		}
		for i, q := range queries {
			if q.Matches(s) && !left[i] {
				t.Errorf("%s: %s is passed over", text, q.Text)
			}
		}
	}
}
