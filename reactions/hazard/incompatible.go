package hazard

import (
	"cmp"
	"slices"
	"strings"

	"shelfward/molecule/pattern"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// Pair is what two groups of substances give when they meet.
type Pair struct {
	Gives  []string // ids of results: heat, toxic gas ...
	Note   string   // may be empty
	Source string   // id of a source
}

// Clash is a pair found in a list of substances.
type Clash struct {
	A, B           string // names of the substances
	GroupA, GroupB string // names of their groups, in words
	Pair
}

// reactiveGroup is a set of substances that react alike.
type reactiveGroup struct {
	id, name string
	acts     []string
	groups   []string // functional groups
	names    []string // canonical reagent names
}

type incompatibleFile struct {
	Sources map[string]string `yaml:"sources"`
	Results map[string]string `yaml:"results"`
	Groups  []struct {
		rules.Place
		ID     string   `yaml:"id" need:"id: alcohol"`
		Name   string   `yaml:"name" need:"name: alcohol, glycol"`
		Acts   []string `yaml:"acts"`
		Groups []string `yaml:"groups"`
		Names  []string `yaml:"names"`
	} `yaml:"groups"`
	Pairs []struct {
		rules.Place
		Between [2]string `yaml:"between" need:"between: [cyanide, mineral-acid]"`
		Gives   []string  `yaml:"gives" need:"gives: [toxic gas]"`
		Source  string    `yaml:"source" need:"source: practice"`
		Note    string    `yaml:"note"`
	} `yaml:"pairs"`
}

func (d *Data) addIncompatible(f *incompatibleFile, reagents *reagent.Table, errs *rules.ErrorList) {
	for id, text := range f.Sources {
		d.sources[id] = text
	}
	for id, text := range f.Results {
		d.results[id] = text
	}
	for _, g := range f.Groups {
		group := reactiveGroup{id: g.ID, name: g.Name, acts: g.Acts, groups: g.Groups}
		for _, act := range g.Acts {
			if _, ok := reagents.ActMeaning(act); !ok {
				errs.Add(g.Place, g.Place.Errorf("group %s: unknown act %q", g.ID, act))
			}
		}
		for _, name := range g.Names {
			r, ok := reagents.Named(name)
			if !ok {
				errs.Add(g.Place, g.Place.Errorf("group %s: %q is no reagent", g.ID, name))
				continue
			}
			group.names = append(group.names, r.Name)
		}
		d.groups = append(d.groups, group)
	}
	for _, p := range f.Pairs {
		a, b := d.groupIndex(p.Between[0]), d.groupIndex(p.Between[1])
		if a < 0 || b < 0 {
			errs.Add(p.Place, p.Place.Errorf("unknown group in %v", p.Between))
			continue
		}
		for _, id := range p.Gives {
			if _, ok := d.results[id]; !ok {
				errs.Add(p.Place, p.Place.Errorf("unknown result %q", id))
			}
		}
		if _, ok := d.sources[p.Source]; !ok {
			errs.Add(p.Place, p.Place.Errorf("unknown source %q", p.Source))
		}
		d.pairs[[2]int{min(a, b), max(a, b)}] = Pair{Gives: p.Gives, Note: p.Note, Source: p.Source}
	}
}

func (d *Data) groupIndex(id string) int {
	return slices.IndexFunc(d.groups, func(g reactiveGroup) bool { return g.id == id })
}

// GroupIDs lists the ids of the reactive groups that a substance belongs to, in the order of the
// file. groups may be nil: then only acts and names count.
func (d *Data) GroupIDs(s Substance, groups *pattern.Groups) []string {
	var ids []string
	for _, g := range d.memberOf(s, groups) {
		ids = append(ids, d.groups[g].id)
	}
	return ids
}

func (d *Data) memberOf(s Substance, groups *pattern.Groups) []int {
	var list []int
	subject := s.subject(groups)
	for i, g := range d.groups {
		if g.has(s) || subject != nil && slices.ContainsFunc(g.groups, func(id string) bool { return groups.Has(id) && len(subject.Instances(id)) > 0 }) {
			list = append(list, i)
		}
	}
	return list
}

// has decides by act and name.
func (g reactiveGroup) has(s Substance) bool {
	if s.Reagent == nil {
		return slices.Contains(g.names, s.Name)
	}
	return slices.Contains(g.names, s.Reagent.Name) || slices.ContainsFunc(g.acts, s.Reagent.Does)
}

// graveResults orders clashes: the first of these that a pair gives decides.
var graveResults = []string{"explosion", "toxic gas", "fire", "flammable gas", "polymerisation", "late start", "gas", "heat"}

// Clashes finds the pairs that must not meet uncontrolled in a list of substances (a flask, a waste
// bottle), the gravest first; two substances give one clash, with the gravest pair of their groups.
// A substance does not clash with itself. groups may be nil.
func (d *Data) Clashes(list []Substance, groups *pattern.Groups) []Clash {
	members := make([][]int, len(list))
	for i, s := range list {
		members[i] = d.memberOf(s, groups)
	}
	var clashes []Clash
	for i := range list {
		for j := i + 1; j < len(list); j++ {
			if list[i].Name == list[j].Name {
				continue
			}
			if c, ok := d.worst(list[i], list[j], members[i], members[j]); ok {
				clashes = append(clashes, c)
			}
		}
	}
	slices.SortStableFunc(clashes, func(a, b Clash) int {
		return cmp.Or(cmp.Compare(a.gravity(), b.gravity()), strings.Compare(a.A+a.B, b.A+b.B))
	})
	return clashes
}

// worst returns the gravest pair between the groups of two substances.
func (d *Data) worst(a, b Substance, groupsA, groupsB []int) (best Clash, found bool) {
	for _, ga := range groupsA {
		for _, gb := range groupsB {
			p, ok := d.pairs[[2]int{min(ga, gb), max(ga, gb)}]
			if !ok {
				continue
			}
			c := Clash{A: a.Name, B: b.Name, GroupA: d.groups[ga].name, GroupB: d.groups[gb].name, Pair: p}
			if !found || c.gravity() < best.gravity() || c.gravity() == best.gravity() && len(c.Gives) > len(best.Gives) {
				best, found = c, true
			}
		}
	}
	return best, found
}

func (p Pair) gravity() int {
	for i, r := range graveResults {
		if slices.Contains(p.Gives, r) {
			return i
		}
	}
	return len(graveResults)
}

// Says writes the clash as one line for a sheet.
func (c Clash) Says() string {
	text := c.A + " with " + c.B + ": " + strings.Join(c.Gives, ", ")
	if c.Note != "" {
		text += " (" + c.Note + ")"
	}
	return text
}

// Result explains a result id in words; Source names a source id in full. Empty if unknown.
func (d *Data) Result(id string) string { return d.results[id] }

// Source names the source of a pair in full.
func (d *Data) Source(id string) string { return d.sources[id] }
