package hazard

import (
	"io/fs"
	"strings"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// Data holds the hazard tables.
type Data struct {
	ghs      ghs
	groups   []reactiveGroup
	pairs    map[[2]int]Pair // by positions in groups, the lower first
	results  map[string]string
	sources  map[string]string
	watched  []watchList
	standing string
	short    string
}

// Substance is one thing charged: by its reagent entry, its structure, or both.
type Substance struct {
	Name     string
	Reagent  *reagent.Reagent   // nil if it is none
	Molecule *molecule.Molecule // nil if unknown
}

// Load reads the hazard tables of a rules file system; users' files of the same names add to them.
// The names in them must stand in the table of reagents. Errors are a rules.ErrorList.
func Load(fsys fs.FS, reagents *reagent.Table) (*Data, error) {
	d := &Data{
		ghs:     ghs{statements: map[string]Statement{}, covers: map[string][]string{}, gravity: map[string]int{}},
		pairs:   map[[2]int]Pair{},
		results: map[string]string{},
		sources: map[string]string{},
	}
	var errs rules.ErrorList
	var tiers [][]string
	each(fsys, "ghs.yaml", &errs, func(f *ghsFile) {
		d.ghs.add(f, &errs)
		tiers = append(tiers, f.Gravest...)
	})
	d.ghs.rank(tiers)
	each(fsys, "incompatible.yaml", &errs, func(f *incompatibleFile) { d.addIncompatible(f, reagents, &errs) })
	each(fsys, "watched.yaml", &errs, func(f *watchedFile) { d.addWatched(f, reagents, &errs) })
	each(fsys, "cautions.yaml", &errs, func(f *struct {
		Standing string `yaml:"standing"`
		Short    string `yaml:"short"`
	}) {
		d.standing, d.short = strings.TrimSpace(f.Standing), strings.TrimSpace(f.Short)
	})
	for _, r := range reagents.All() {
		for _, code := range r.Hazards {
			if err := d.CheckCode(code); err != nil {
				errs = append(errs, &rules.Error{Path: "reagents.yaml", Text: r.Name + ": " + err.Error()})
			}
		}
	}
	if err := errs.Err(); err != nil {
		return nil, err
	}
	return d, nil
}

// each decodes every layer of a file.
func each[T any](fsys fs.FS, name string, errs *rules.ErrorList, use func(*T)) {
	layers, err := rules.Layers(fsys, name)
	if err != nil {
		errs.Add(rules.Place{Path: name}, err)
	}
	for _, layer := range layers {
		f := new(T)
		if err := rules.Decode(layer.Path, layer.Data, f); err != nil {
			errs.Add(rules.Place{Path: layer.Path}, err)
			continue
		}
		use(f)
	}
}

// Builtin loads the embedded tables once.
var Builtin = sync.OnceValues(func() (*Data, error) {
	reagents, err := reagent.Builtin()
	if err != nil {
		return nil, err
	}
	return Load(rules.Files(), reagents)
})

// StandingCaution is the sentence that every sheet carries; ShortCaution fits one line.
func (d *Data) StandingCaution() string { return d.standing }

// ShortCaution is the one-line form of StandingCaution.
func (d *Data) ShortCaution() string { return d.short }

// subject prepares the substance's structure for group patterns; nil without one.
func (s Substance) subject(groups *pattern.Groups) *pattern.Subject {
	m := s.Molecule
	if m == nil && s.Reagent != nil {
		m, _ = s.Reagent.Molecule()
	}
	if m == nil || groups == nil {
		return nil
	}
	return pattern.NewSubject(m, groups)
}
