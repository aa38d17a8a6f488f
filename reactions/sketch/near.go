package sketch

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// Use is a molecule that a part of the sketch would take, or would not take and why.
type Use struct {
	Part int // from 1
	Name string
	Why  string // the condition that keeps it out; empty where it is used
}

// Item is a named molecule to be tried.
type Item struct {
	Name     string
	Molecule *molecule.Molecule
}

// Try lists up to count items that some reactant part would take and up to count that miss one by a single
// condition, in order of the items, the parts taking turns.
func (s *Sketch) Try(items []Item, groups *pattern.Groups, count int) (takes, misses []Use, err error) {
	subjects := make([]*pattern.Subject, len(items))
	for i, it := range items {
		subjects[i] = pattern.NewSubject(it.Molecule, groups)
	}
	var taken, missed [][]Use
	for i, p := range s.Left {
		q, err := compile(p, groups)
		if err != nil {
			return nil, nil, err
		}
		looser, err := p.loosened(groups)
		if err != nil {
			return nil, nil, err
		}
		var yes, no []Use
		for k, subject := range subjects {
			if q.Matches(subject) {
				yes = append(yes, Use{i + 1, items[k].Name, ""})
				continue
			}
			for _, l := range looser {
				if l.query.Matches(subject) {
					no = append(no, Use{i + 1, items[k].Name, l.condition})
					break
				}
			}
		}
		taken, missed = append(taken, yes), append(missed, no)
	}
	return inTurns(taken, count), inTurns(missed, count), nil
}

// inTurns takes one from each list after the other.
func inTurns(lists [][]Use, count int) []Use {
	var out []Use
	for k := 0; len(out) < count; k++ {
		any := false
		for _, l := range lists {
			if k < len(l) && len(out) < count {
				out = append(out, l[k])
				any = true
			}
		}
		if !any {
			break
		}
	}
	return out
}

func compile(p Part, groups *pattern.Groups) (*pattern.Query, error) {
	w := pattern.Where{}
	for _, a := range p.Atoms {
		if len(a.Words) > 0 {
			w[strconv.Itoa(a.Class)] = a.Words
		}
	}
	return pattern.Compile(p.Text(), w, groups)
}

// loose is a part without one of its conditions.
type loose struct {
	condition string
	query     *pattern.Query
}

// loosened returns the part without each of its words and written hydrogens in turn, and with each carbon
// aromatic or not.
func (p Part) loosened(groups *pattern.Groups) ([]loose, error) {
	var out []loose
	add := func(condition string, change func(c *CoreAtom), i int) error {
		q := Part{slices.Clone(p.Atoms), p.Bonds}
		q.Atoms[i].Words = slices.Clone(q.Atoms[i].Words)
		change(&q.Atoms[i])
		c, err := compile(q, groups)
		if err != nil {
			return fmt.Errorf("%s: %w", q.Text(), err)
		}
		out = append(out, loose{condition, c})
		return nil
	}
	for i, a := range p.Atoms {
		name := fmt.Sprintf("%s%d", a.Element.Symbol(), a.Class)
		for k, word := range a.Words {
			if err := add(name+": "+word, func(c *CoreAtom) { c.Words = slices.Delete(c.Words, k, k+1) }, i); err != nil {
				return nil, err
			}
		}
		if a.Hydrogens >= 0 {
			if err := add(fmt.Sprintf("%s: hydrogens %d", name, a.Hydrogens), func(c *CoreAtom) { c.Hydrogens = -1 }, i); err != nil {
				return nil, err
			}
		}
		if a.Element == carbon {
			word := map[bool]string{true: "aromatic", false: "not aromatic"}[a.Aromatic]
			if err := add(name+": "+word, func(c *CoreAtom) {
				c.Words = slices.DeleteFunc(c.Words, func(w string) bool { return strings.HasPrefix(w, "sp") })
				c.Words = append(c.Words, "aromatic or not")
			}, i); err != nil {
				return nil, err
			}
		}
	}
	return out, nil
}
