package pattern

import (
	"fmt"
	"strconv"
	"strings"
)

// Group is a functional group: one or more queries and the classes that count as the group itself.
type Group struct {
	ID, Name string
	Queries  []*Query
	core     [][]int // per query: the query atoms of the core
}

// Groups is a registry of groups. It is immutable once filled and safe to share.
type Groups struct {
	list []*Group
	byID map[string]int
}

// NewGroups returns an empty registry.
func NewGroups() *Groups { return &Groups{byID: map[string]int{}} }

// Add compiles a group; its words may name groups added before. core lists classes, empty means all
// numbered atoms, or all atoms where none is numbered.
func (g *Groups) Add(id, name string, patterns []string, where Where, core []int) error {
	if _, double := g.byID[id]; double {
		return fmt.Errorf("group %q is defined twice", id)
	}
	grp := &Group{ID: id, Name: name}
	for _, text := range patterns {
		q, err := Compile(text, where.within(text, len(patterns)), g)
		if err != nil {
			return err
		}
		grp.Queries = append(grp.Queries, q)
		grp.core = append(grp.core, coreAtoms(q, core))
	}
	g.byID[id] = len(g.list)
	g.list = append(g.list, grp)
	return nil
}

func coreAtoms(q *Query, classes []int) []int {
	var at []int
	for i, a := range q.Atoms {
		if a.Class == 0 {
			continue
		}
		wanted := len(classes) == 0
		for _, c := range classes {
			wanted = wanted || c == a.Class
		}
		if wanted {
			at = append(at, i)
		}
	}
	if len(at) == 0 {
		for i := range q.Atoms {
			at = append(at, i)
		}
	}
	return at
}

// Index numbers the groups from 0 in order of definition; -1 for an unknown id.
func (g *Groups) Index(id string) int { return g.index(id) }

func (g *Groups) index(id string) int {
	if g == nil {
		return -1
	}
	if i, ok := g.byID[id]; ok {
		return i
	}
	return -1
}

// Has says whether the id names a group; IDs lists all in order of definition; Name gives its name.
func (g *Groups) Has(id string) bool { return g.index(id) >= 0 }

// IDs lists all group ids in order of definition.
func (g *Groups) IDs() []string {
	ids := make([]string, len(g.list))
	for i, x := range g.list {
		ids[i] = x.ID
	}
	return ids
}

// Name returns the name of a group, or its id where it has none.
func (g *Groups) Name(id string) string {
	if i := g.index(id); i >= 0 && g.list[i].Name != "" {
		return g.list[i].Name
	}
	return id
}

// within keeps the keys whose classes text has, where a group has several alternative patterns.
func (w Where) within(text string, alternatives int) Where {
	if alternatives < 2 {
		return w
	}
	return w.Within(text)
}

// Within keeps the words about classes that text has; a text that does not parse keeps all.
func (w Where) Within(text string) Where {
	q, err := Parse(text)
	if err != nil {
		return w
	}
	kept := Where{}
keys:
	for key, words := range w {
		for _, c := range strings.Split(key, "-") {
			if n, err := strconv.Atoi(c); err != nil || q.AtomOfClass(n) < 0 {
				continue keys
			}
		}
		kept[key] = words
	}
	return kept
}
