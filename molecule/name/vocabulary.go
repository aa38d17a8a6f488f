package name

import (
	"fmt"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// vocabularyFile is the part of rules/names.yaml that only the reader needs.
type vocabularyFile struct {
	Suffixes []wordRow `yaml:"suffixes"`
	Radicals []wordRow `yaml:"radicals"`
	Parents  []wordRow `yaml:"parents"`
	Roots    []rootRow `yaml:"acid_roots"`
	Classes  []wordRow `yaml:"classes"`
}

type wordRow struct {
	rules.Place
	Name    string `yaml:"name" need:"name: amino"`
	SMILES  string `yaml:"smiles" need:"smiles: N"`
	Locants string `yaml:"locants"`
	Order   int    `yaml:"order"`
	Kind    string `yaml:"kind"`
	Radical bool   `yaml:"radical"`
	Ester   string `yaml:"ester"`
	Only    string `yaml:"only"`
}

type rootRow struct {
	rules.Place
	Root    string `yaml:"root" need:"root: acet"`
	SMILES  string `yaml:"smiles" need:"smiles: 'C(=O)(O)C'"`
	Locants string `yaml:"locants"`
	Only    string `yaml:"only"`
}

// template is a piece of structure that a word stands for.
type template struct {
	name    string
	atoms   []molecule.Atom
	bonds   []molecule.Bond
	locants []string // per atom; empty for none
	esters  []int    // atoms that ester groups hang on
	free    int      // the atom with the free valence, -1 none
	order   int      // order of the bond to what it hangs on
	end     bool     // suffix: the first atom is the end of the chain
	radical bool     // suffix: makes a radical
	full    bool     // radical: every free valence must be taken (oxy, carbonyl)
	cation  bool     // suffix ium: a charge on its atom
	single  bool     // class word: one radical only, the other hydrogens stay (alcohol)
	ester   string   // "O": only where the ester word says O
}

// vocabulary is the words by name. Several templates may share a name.
type vocabulary struct {
	suffixes map[string][]*template
	radicals map[string]*template
	parents  map[string][]*template
	roots    map[string]*template
	classes  map[string]*template // words behind radicals: alcohol, ether, ketone
	// names, longest first, by first letter
	suffixNames, radicalNames, parentNames, rootNames [256][]string
}

// word turns a row into its template.
func (r *wordRow) word() (*template, error) {
	t, err := newTemplate(r.Name, r.SMILES, r.Locants)
	if err != nil {
		return nil, r.Errorf("%s: %v", r.Name, err)
	}
	t.order = max(1, r.Order)
	t.end = r.Kind == "end"
	t.full = r.Kind == "full"
	t.cation = r.Kind == "cation"
	t.single = r.Kind == "single"
	t.radical = r.Radical
	t.ester = r.Ester
	return t, nil
}

func newTemplate(name, text, locants string) (*template, error) {
	m, err := smiles.Read(text)
	if err != nil {
		return nil, err
	}
	t := &template{name: name, free: -1, order: 1}
	for a := range m.NumAtoms() {
		x := m.Atom(a)
		switch x.Class {
		case 1:
			t.esters = append(t.esters, a)
		case 2:
			t.free = a
		}
		x.Class = 0
		t.atoms = append(t.atoms, x)
	}
	for b := range m.NumBonds() {
		t.bonds = append(t.bonds, m.Bond(b))
	}
	t.locants = make([]string, len(t.atoms))
	if locants != "" {
		list := strings.Fields(locants)
		if len(list) != len(t.atoms) {
			return nil, fmt.Errorf("%d locants for %d atoms", len(list), len(t.atoms))
		}
		for i, l := range list {
			if l != "-" {
				t.locants[i] = l
			}
		}
	}
	return t, nil
}

// compile makes the vocabulary.
func (f *vocabularyFile) compile() (*vocabulary, error) {
	v := &vocabulary{suffixes: map[string][]*template{}, radicals: map[string]*template{}, parents: map[string][]*template{}, roots: map[string]*template{}, classes: map[string]*template{}}
	for i := range f.Suffixes {
		t, err := f.Suffixes[i].word()
		if err != nil {
			return nil, err
		}
		v.suffixes[t.name] = append(v.suffixes[t.name], t)
	}
	for i := range f.Radicals {
		t, err := f.Radicals[i].word()
		if err != nil {
			return nil, err
		}
		if t.free < 0 {
			t.free = 0
		}
		v.radicals[t.name] = t
	}
	for i := range f.Parents {
		t, err := f.Parents[i].word()
		if err != nil {
			return nil, err
		}
		v.parents[t.name] = append(v.parents[t.name], t)
	}
	for _, r := range f.Roots {
		t, err := newTemplate(r.Root, r.SMILES, r.Locants)
		if err != nil {
			return nil, r.Errorf("%s: %v", r.Root, err)
		}
		v.roots[r.Root] = t
	}
	for i := range f.Classes {
		t, err := f.Classes[i].word()
		if err != nil {
			return nil, err
		}
		v.classes[t.name] = t
	}
	index(&v.suffixNames, v.suffixes)
	index(&v.radicalNames, v.radicals)
	index(&v.parentNames, v.parents)
	index(&v.rootNames, v.roots)
	return v, nil
}

// index lists the names of a map by first letter, longest first.
func index[T any](list *[256][]string, words map[string]T) {
	for n := range words {
		list[n[0]] = append(list[n[0]], n)
	}
	for i := range list {
		slices.SortFunc(list[i], func(x, y string) int {
			if len(x) != len(y) {
				return len(y) - len(x)
			}
			return strings.Compare(x, y)
		})
	}
}

// at lists the names of an index that stand at the beginning of s, longest first.
func at(list *[256][]string, s string) []string {
	if s == "" {
		return nil
	}
	var found []string
	for _, n := range list[s[0]] {
		if strings.HasPrefix(s, n) {
			found = append(found, n)
		}
	}
	return found
}
