package pattern

import (
	"bufio"
	"os"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// counted60 is testdata/patterns/patterns.yaml.
type counted60 struct {
	Unread []string
	Groups []struct {
		ID, Pattern string
		Where       Where
		Core        []int
	}
	Patterns []struct {
		Name, Pattern, Smarts string
		Where                 Where
		Structures, Matches   int
		query                 *Query
	}
}

func sixty(t testing.TB) (*counted60, *Groups) {
	t.Helper()
	text, err := os.ReadFile("../../testdata/patterns/patterns.yaml")
	if err != nil {
		t.Fatal(err)
	}
	var c counted60
	if err := yaml.Unmarshal(text, &c); err != nil {
		t.Fatal(err)
	}
	groups := NewGroups()
	for _, g := range c.Groups {
		if err := groups.Add(g.ID, "", []string{g.Pattern}, g.Where, g.Core); err != nil {
			t.Fatal(err)
		}
	}
	for i := range c.Patterns {
		p := &c.Patterns[i]
		if p.query, err = Compile(p.Pattern, p.Where, groups); err != nil {
			t.Fatal(p.Name, err)
		}
	}
	return &c, groups
}

// openSet reads the open structure set; the test is skipped where it is not installed. The variable
// SHELFWARD_STRUCTURES names another place.
func openSet(t testing.TB) []*molecule.Molecule {
	t.Helper()
	path := os.Getenv("SHELFWARD_STRUCTURES")
	if path == "" {
		path = "/usr/share/RDKit/Data/NCI/first_5K.smi"
	}
	f, err := os.Open(path)
	if err != nil {
		t.Skip("the open structure set is not installed: ", err)
	}
	defer f.Close()
	var list []*molecule.Molecule
	for s := bufio.NewScanner(f); s.Scan(); {
		fields := strings.Fields(s.Text())
		if len(fields) == 0 {
			continue
		}
		m, err := smiles.Read(fields[0])
		if err != nil {
			continue
		}
		list = append(list, m)
	}
	return list
}

// TestCounts: structures and unique matches of sixty functional groups are those of the reference.
func TestCounts(t *testing.T) {
	c, groups := sixty(t)
	var set []*molecule.Molecule
	unread := map[molecule.Key]bool{}
	for _, text := range c.Unread {
		m, err := smiles.Read(text)
		if err != nil {
			t.Fatal(err)
		}
		unread[m.Key()] = true
	}
	for _, m := range openSet(t) {
		if !unread[m.Key()] {
			set = append(set, m)
		}
	}
	structures, matches := make([]int, len(c.Patterns)), make([]int, len(c.Patterns))
	for _, m := range set {
		s := NewSubject(m, groups)
		for i := range c.Patterns {
			if n := len(c.Patterns[i].query.AtomSets(s)); n > 0 {
				structures[i]++
				matches[i] += n
			}
		}
	}
	for i, p := range c.Patterns {
		if structures[i] != p.Structures || matches[i] != p.Matches {
			t.Errorf("%s: %d structures, %d matches; the reference has %d and %d", p.Name, structures[i], matches[i], p.Structures, p.Matches)
		}
	}
	if len(set) != 4993 {
		t.Errorf("%d structures, expected 4993", len(set))
	}
}

func readFile(t testing.TB, path string) string {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}
