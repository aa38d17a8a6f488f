package name

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// ringEntry is a ring system with a retained name: its atoms in the order of their locants.
type ringEntry struct {
	name     string
	elements []molecule.Element
	next     [][]int8 // position -> neighbouring positions
	bonds    int
	locants  []string
	readOnly bool
}

// tables is what rules/names.yaml holds, ready for use.
type tables struct {
	ringWords [256][]ringWord
	words     *vocabulary
	rings     map[string][]*ringEntry // by signature
	ringNamed map[string]*ringEntry
	retained  map[string]string // Hantzsch-Widman name -> retained name
	system    map[string]string // retained name -> Hantzsch-Widman name
	whole     map[molecule.Key]string
	read      map[string]*molecule.Molecule
	ions      map[molecule.Key]string
	ionNamed  map[string]*molecule.Molecule
}

var loaded = sync.OnceValue(func() *tables {
	t, err := load()
	if err != nil {
		panic("name: " + err.Error())
	}
	return t
})

// load reads rules/names.yaml.
func load() (*tables, error) {
	var file struct {
		vocabularyFile `yaml:",inline"`
		Sources        []rules.Text `yaml:"sources"`
		Retained       []struct {
			Name   string `yaml:"name" need:"name: furan"`
			System string `yaml:"system" need:"system: oxole"`
		} `yaml:"retained_rings"`
		Rings []struct {
			rules.Place
			Name    string `yaml:"name" need:"name: quinoline"`
			SMILES  string `yaml:"smiles" need:"smiles: 'n1cccc2ccccc12'"`
			Locants string `yaml:"locants"`
			Only    string `yaml:"only"`
		} `yaml:"rings"`
		Whole []struct {
			rules.Place
			Name   string   `yaml:"name" need:"name: water"`
			SMILES string   `yaml:"smiles" need:"smiles: O"`
			Also   []string `yaml:"also"`
			Only   string   `yaml:"only"`
		} `yaml:"whole"`
		Ions []struct {
			rules.Place
			Name   string   `yaml:"name" need:"name: sodium"`
			SMILES string   `yaml:"smiles" need:"smiles: '[Na+]'"`
			Also   []string `yaml:"also"`
		} `yaml:"ions"`
	}
	if err := rules.ReadInto(rules.Files(), "names.yaml", &file); err != nil {
		return nil, err
	}
	words, err := file.vocabularyFile.compile()
	if err != nil {
		return nil, err
	}
	t := &tables{words: words, rings: map[string][]*ringEntry{}, ringNamed: map[string]*ringEntry{}, retained: map[string]string{}, system: map[string]string{},
		whole: map[molecule.Key]string{}, read: map[string]*molecule.Molecule{}, ions: map[molecule.Key]string{}, ionNamed: map[string]*molecule.Molecule{}}
	for _, r := range file.Retained {
		t.retained[r.System] = r.Name
		t.system[r.Name] = r.System
	}
	for _, r := range file.Rings {
		e, err := newRingEntry(r.Name, r.SMILES, r.Locants)
		if err != nil {
			return nil, r.Errorf("%s: %v", r.Name, err)
		}
		e.readOnly = r.Only == "read"
		if t.ringNamed[r.Name] != nil {
			return nil, r.Errorf("%s stands twice", r.Name)
		}
		t.ringNamed[r.Name] = e
		if !e.readOnly {
			k := signature(e.elements, e.bonds)
			t.rings[k] = append(t.rings[k], e)
		}
	}
	for _, r := range file.Whole {
		m, err := smiles.Read(r.SMILES)
		if err != nil {
			return nil, r.Errorf("%s: %v", r.Name, err)
		}
		if r.Only != "read" {
			t.whole[m.FlatKey()] = r.Name
		}
		for _, n := range append([]string{r.Name}, r.Also...) {
			if t.read[n] != nil {
				return nil, r.Errorf("%s stands twice", n)
			}
			t.read[n] = m
		}
	}
	for _, r := range file.Ions {
		m, err := smiles.Read(r.SMILES)
		if err != nil {
			return nil, r.Errorf("%s: %v", r.Name, err)
		}
		t.ions[m.FlatKey()] = r.Name
		for _, n := range append([]string{r.Name}, r.Also...) {
			t.ionNamed[n] = m
		}
	}
	t.listRingWords()
	return t, nil
}

// sortRingWords puts the longest words first.
func sortRingWords(list []ringWord) {
	slices.SortFunc(list, func(x, y ringWord) int {
		if len(x.word) != len(y.word) {
			return len(y.word) - len(x.word)
		}
		return strings.Compare(x.word, y.word)
	})
}

// newRingEntry makes an entry from a SMILES whose atoms stand in the order of their locants. Without
// explicit locants they are counted: fusion carbon atoms take the number before with a letter (P-25.3.1.3).
func newRingEntry(name, text, locants string) (*ringEntry, error) {
	m, err := smiles.Read(text)
	if err != nil {
		return nil, err
	}
	e := &ringEntry{name: name, bonds: m.NumBonds()}
	number, letter := 0, byte('a')
	for a := range m.NumAtoms() {
		e.elements = append(e.elements, m.Atom(a).Element)
		var next []int8
		for _, nb := range m.Neighbors(a) {
			next = append(next, int8(nb.Atom))
		}
		e.next = append(e.next, next)
		if m.Degree(a) > 2 && m.Atom(a).Element == 6 && number > 0 {
			e.locants = append(e.locants, strconv.Itoa(number)+string(letter))
			letter++
		} else {
			number++
			letter = 'a'
			e.locants = append(e.locants, strconv.Itoa(number))
		}
	}
	if locants != "" {
		e.locants = strings.Fields(locants)
		if len(e.locants) != m.NumAtoms() {
			return nil, fmt.Errorf("%d locants for %d atoms", len(e.locants), m.NumAtoms())
		}
	}
	return e, nil
}

// signature sorts ring systems by atoms, bonds and elements.
func signature(elements []molecule.Element, bonds int) string {
	var count [256]int
	for _, x := range elements {
		count[x]++
	}
	var b strings.Builder
	fmt.Fprint(&b, bonds)
	for x, n := range count {
		if n > 0 {
			b.WriteByte(' ')
			b.WriteString(strconv.Itoa(x))
			b.WriteByte(':')
			b.WriteString(strconv.Itoa(n))
		}
	}
	return b.String()
}
