// Package reagent knows the reagents, catalysts and solvents of rules/reagents.yaml by all the names
// that chemists give them, and reads how chemists word the conditions of a step ('magnesium, dry
// ether, then dilute acid') as stages of substances and facts.
//
// It promises to say what it did not understand; it does not judge whether a step works. A Table is
// immutable after Load and safe for concurrent use.
package reagent

import (
	"fmt"
	"io/fs"
	"slices"
	"strings"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// Reagent is one entry of rules/reagents.yaml: a substance, a word for a class of substances, or a
// short name for several together.
type Reagent struct {
	Name   string   // the name used by transforms and on sheets
	Also   []string // other names of the same substance
	Alike  []string // names of close relatives that share its acts
	Like   *Reagent // of a close relative: the entry that stands in for it; nil for an entry of its own
	Class  bool     // a word for a class ('acid'), no substance
	Means  []string // names of the reagents a short name stands for; empty otherwise
	CAS    string   // empty if unknown
	SMILES string   // empty where one structure does not say it

	Form     string // solid, liquid, solution or gas, as supplied
	Supplied string // how the trade supplies it
	DryForm  string // name of what is meant when it is called dry or a gas; may be empty
	Strength Strength

	DensityGPerML  float64  // of the supplied liquid or solution; 0 unknown
	BoilsC         *float64 // nil unknown
	MeltsC         *float64
	FlashC         *float64 // nil: no flash point known
	Peroxides      string   // "A", "B" or empty: see rules/reagents.yaml
	MixesWithWater *bool    // nil unknown

	Hazards      []string // GHS codes
	HazardsKnown bool     // false: nobody looked; true with no Hazards: not classified
	Acts         []string // tags of rules/acts.yaml
	Caution      string
	Source       string

	place rules.Place
}

// Does reports whether the reagent carries an act.
func (r *Reagent) Does(act string) bool { return slices.Contains(r.Acts, act) }

// Substance reports whether the entry is a substance whose data are known: no class, no short name
// for several, no close relative of another entry.
func (r *Reagent) Substance() bool { return !r.Class && len(r.Means) == 0 && r.Like == nil }

// Table is the loaded list of reagents with its index of names and the wording of conditions.
type Table struct {
	all     []*Reagent
	byName  map[string]*Reagent // folded names, Also and Alike included
	byCAS   map[string]*Reagent
	names   []string // every name as written, for suggestions
	acts    map[string]string
	wording *wording

	structures func() structures // built on first use
}

// entry is a reagent as written.
type entry struct {
	rules.Place
	Name           rules.Text   `yaml:"name" need:"name: sodium hydroxide"`
	Also           []string     `yaml:"also"`
	Alike          []string     `yaml:"alike"`
	Class          bool         `yaml:"class"`
	Means          []string     `yaml:"means"`
	CAS            rules.Text   `yaml:"cas"`
	SMILES         rules.Text   `yaml:"smiles"`
	Form           rules.Text   `yaml:"form"`
	Supplied       string       `yaml:"supplied"`
	DryForm        string       `yaml:"dry_form"`
	Strength       rules.Text   `yaml:"strength"`
	Density        float64      `yaml:"density"`
	Boils          *float64     `yaml:"boils"`
	Melts          *float64     `yaml:"melts"`
	Flash          *float64     `yaml:"flash"`
	Peroxides      rules.Text   `yaml:"peroxides"`
	MixesWithWater *bool        `yaml:"mixes_with_water"`
	Hazards        rules.Text   `yaml:"hazards"`
	Acts           []rules.Text `yaml:"acts"`
	Caution        string       `yaml:"caution"`
	Source         string       `yaml:"source"`
}

// Load reads reagents.yaml, acts.yaml and wording.yaml of a rules file system, strictly. Errors are a
// rules.ErrorList with the place of every mistake.
func Load(fsys fs.FS) (*Table, error) {
	t := &Table{byName: map[string]*Reagent{}, byCAS: map[string]*Reagent{}}
	var acts struct {
		Acts map[string]string `yaml:"acts"`
	}
	if err := rules.ReadInto(fsys, "acts.yaml", &acts); err != nil {
		return nil, err
	}
	t.acts = acts.Acts
	var file struct {
		Reagents []entry `yaml:"reagents"`
	}
	if err := rules.ReadInto(fsys, "reagents.yaml", &file); err != nil {
		return nil, err
	}
	var errs rules.ErrorList
	for _, e := range file.Reagents {
		t.add(e, &errs)
	}
	for _, r := range t.all {
		for _, m := range r.Means {
			if _, ok := t.byName[fold(m)]; !ok {
				errs = append(errs, r.place.Errorf("%s means %q, which is no reagent%s", r.Name, m, t.didYouMean(m)))
			}
		}
		if _, ok := t.byName[fold(r.DryForm)]; r.DryForm != "" && !ok {
			errs = append(errs, r.place.Errorf("dry_form of %s is %q, which is no reagent%s", r.Name, r.DryForm, t.didYouMean(r.DryForm)))
		}
	}
	var err error
	if t.wording, err = loadWording(fsys); err != nil {
		errs.Add(rules.Place{}, err)
	}
	if err := errs.Err(); err != nil {
		return nil, err
	}
	t.structures = sync.OnceValue(t.indexStructures)
	return t, nil
}

// Builtin loads the embedded table once.
var Builtin = sync.OnceValues(func() (*Table, error) { return Load(rules.Files()) })

// add checks an entry and puts it into the table.
func (t *Table) add(e entry, errs *rules.ErrorList) {
	r := &Reagent{Name: e.Name.Value, Also: e.Also, Alike: e.Alike, Class: e.Class, Means: e.Means, CAS: e.CAS.Value, SMILES: e.SMILES.Value, Form: e.Form.Value,
		Supplied: e.Supplied, DryForm: e.DryForm, DensityGPerML: e.Density, BoilsC: e.Boils, MeltsC: e.Melts,
		FlashC: e.Flash, Peroxides: e.Peroxides.Value, MixesWithWater: e.MixesWithWater, Caution: e.Caution, Source: e.Source, place: e.Place}
	if r.Source == "" {
		r.Source = "memory"
	}
	for _, a := range e.Acts {
		if _, ok := t.acts[a.Value]; !ok {
			errs.Add(e.Place, a.Errorf(e.Path, "unknown act %q%s", a.Value, nearClause(a.Value, t.Acts())))
		}
		r.Acts = append(r.Acts, a.Value)
	}
	if e.Strength.Written() {
		s, err := ParseStrength(e.Strength.Value)
		if err != nil {
			errs.Add(e.Place, e.Strength.Errorf(e.Path, "strength: %v", err))
		}
		r.Strength = s
	}
	if err := CheckCAS(r.CAS); r.CAS != "" && err != nil {
		errs.Add(e.Place, e.CAS.Errorf(e.Path, "%v", err))
	}
	if forms := []string{"", "solid", "liquid", "solution", "gas"}; !slices.Contains(forms, r.Form) {
		errs.Add(e.Place, e.Form.Errorf(e.Path, "form is solid, liquid, solution or gas, not %q", r.Form))
	}
	if p := r.Peroxides; p != "" && p != "A" && p != "B" {
		errs.Add(e.Place, e.Peroxides.Errorf(e.Path, "peroxides is A or B, not %q", p))
	}
	if e.Hazards.Written() {
		r.HazardsKnown = true
		if e.Hazards.Value != "none" {
			r.Hazards = strings.Fields(e.Hazards.Value)
		}
	}
	t.all = append(t.all, r)
	for _, name := range append([]string{r.Name}, r.Also...) {
		t.addName(name, r, e.Place, errs)
	}
	for _, name := range r.Alike {
		t.addName(name, &Reagent{Name: name, Like: r, Form: r.Form, Acts: r.Acts, Class: r.Class, Source: r.Source, place: e.Place}, e.Place, errs)
	}
	if _, taken := t.byCAS[r.CAS]; r.CAS != "" && !taken {
		t.byCAS[r.CAS] = r // hydrogen chloride and hydrochloric acid share a number: the first answers
	}
}

func (t *Table) addName(name string, r *Reagent, p rules.Place, errs *rules.ErrorList) {
	key := fold(name)
	other, taken := t.byName[key]
	if taken && r.Like != nil && other.Like == r.Like {
		return // two spellings of one relative
	}
	if taken && other != r {
		errs.Add(p, p.Errorf("the name %q stands for %s already (%s)", name, other.Name, other.place))
		return
	}
	t.byName[key] = r
	t.names = append(t.names, name)
}

// All lists the reagents in the order of the file. Shared, read only.
func (t *Table) All() []*Reagent { return t.all }

// Facts lists the facts that a substance brings into a stage, as a hydroxide brings 'base' (wording.yaml).
func (t *Table) Facts(r *Reagent) []string {
	var list []string
	for _, act := range r.Acts {
		for _, fact := range t.wording.factsOfAct[act] {
			list = insert(list, fact)
		}
	}
	return list
}

// Acts lists the tags of rules/acts.yaml, sorted.
func (t *Table) Acts() []string {
	list := make([]string, 0, len(t.acts))
	for a := range t.acts {
		list = append(list, a)
	}
	slices.Sort(list)
	return list
}

// ActMeaning returns what a tag means, and whether there is such a tag.
func (t *Table) ActMeaning(act string) (string, bool) {
	m, ok := t.acts[act]
	return m, ok
}

// asIons returns a metal halide or oxide drawn with bonds as its ions; nil if it has no such bond. Bonds
// of a metal to carbon or hydrogen stay.
func asIons(m *molecule.Molecule) *molecule.Molecule {
	b := m.Builder()
	cut, any := make([]bool, len(b.Bonds)), false
	for i, bond := range b.Bonds {
		metal, other := int(bond.A), int(bond.B)
		if !b.Atoms[metal].Element.IsMetal() {
			metal, other = other, metal
		}
		switch b.Atoms[other].Element {
		case 8, 9, 17, 35, 53:
		default:
			continue
		}
		if !b.Atoms[metal].Element.IsMetal() || bond.Order != 1 {
			continue
		}
		b.Atoms[metal].Charge++
		b.Atoms[other].Charge--
		cut[i], any = true, true
	}
	if !any {
		return nil
	}
	b.RemoveBonds(cut)
	ions, err := b.Build()
	if err != nil {
		return nil
	}
	return ions
}

// structures is the index of reagents by structure.
type structures struct{ exact, seenThrough map[molecule.Key]*Reagent }

// indexStructures reads the structures of all substances. Of several that are one seen through, the
// free form answers: ethanol, not sodium ethoxide. A structure that cannot be read is left out here;
// the tests of the rules report it.
func (t *Table) indexStructures() structures {
	index := structures{map[molecule.Key]*Reagent{}, map[molecule.Key]*Reagent{}}
	put := func(to map[molecule.Key]*Reagent, key molecule.Key, r *Reagent) {
		if _, taken := to[key]; !taken {
			to[key] = r
		}
	}
	salts := map[molecule.Key]*Reagent{}
	for _, r := range t.all {
		m, err := r.Molecule()
		if err != nil || m == nil {
			continue
		}
		put(index.exact, m.Key(), r)
		if ions := asIons(m); ions != nil {
			put(index.exact, ions.Key(), r) // copper(I) chloride, drawn with a bond or as ions
		}
		if m.FreeForm().Key() == m.Key() {
			put(index.seenThrough, m.SeenThroughKey(), r)
		} else {
			put(salts, m.SeenThroughKey(), r)
		}
	}
	for key, r := range salts {
		put(index.seenThrough, key, r)
	}
	return index
}

// Molecule reads the structure of a reagent; nil without error if it has none.
func (r *Reagent) Molecule() (*molecule.Molecule, error) {
	if r.SMILES == "" {
		return nil, nil
	}
	m, err := smiles.Read(r.SMILES)
	if err != nil {
		return nil, fmt.Errorf("%s: %s: %w", r.place, r.Name, err)
	}
	return m, nil
}

// ByMolecule finds the reagent of a structure: exact first, then with salts and shifting hydrogens
// seen through.
func (t *Table) ByMolecule(m *molecule.Molecule) (*Reagent, bool) {
	index := t.structures()
	if r, ok := index.exact[m.Key()]; ok {
		return r, true
	}
	r, ok := index.seenThrough[m.SeenThroughKey()]
	return r, ok
}

// ByExact finds the reagent whose structure is exactly m.
func (t *Table) ByExact(m *molecule.Molecule) (*Reagent, bool) {
	r, ok := t.structures().exact[m.Key()]
	return r, ok
}

// nearClause makes ' (did you mean "x"?)' of the nearest known word, or nothing.
func nearClause(word string, known []string) string {
	if near := rules.Near(word, known); near != "" {
		return fmt.Sprintf(" (did you mean %q?)", near)
	}
	return ""
}

func (t *Table) didYouMean(name string) string { return nearClause(name, t.names) }
