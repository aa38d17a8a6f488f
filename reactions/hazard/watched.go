package hazard

import (
	"slices"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// Flag says that a list watches a substance; the plan is allowed.
type Flag struct {
	Substance string // its name
	List      string // the list's name
	Publisher string
	Text      string // the line for the sheet
}

type watchedFile struct {
	Lists []struct {
		rules.Place
		ID        string       `yaml:"id" need:"id: national"`
		Name      string       `yaml:"name" need:"name: '...'"`
		Publisher string       `yaml:"publisher" need:"publisher: '...'"`
		Says      string       `yaml:"says" need:"says: '...'"`
		Names     []string     `yaml:"names"`
		SMILES    []rules.Text `yaml:"smiles"`
	} `yaml:"lists"`
}

// watchList is one list, compiled.
type watchList struct {
	name, publisher, says string
	reagents              []string // canonical names
	keys                  []molecule.Key
}

func (d *Data) addWatched(f *watchedFile, reagents *reagent.Table, errs *rules.ErrorList) {
	for _, l := range f.Lists {
		w := watchList{name: l.Name, publisher: l.Publisher, says: l.Says}
		for _, name := range l.Names {
			r, ok := reagents.Named(name)
			if !ok {
				errs.Add(l.Place, l.Place.Errorf("list %s: %q is no reagent", l.ID, name))
				continue
			}
			w.reagents = append(w.reagents, r.Name)
			if m, err := r.Molecule(); err == nil && m != nil {
				w.keys = append(w.keys, m.Key())
			}
		}
		for _, text := range l.SMILES {
			m, err := smiles.Read(text.Value)
			if err != nil {
				errs.Add(l.Place, text.Errorf(l.Path, "list %s: %v", l.ID, err))
				continue
			}
			w.keys = append(w.keys, m.Key())
		}
		d.watched = append(d.watched, w)
	}
}

// Watched lists what official and site lists say of a substance, in the order of the file. A reagent is
// known by its name, anything else by its exact structure: sodium cyanide is not hydrogen cyanide.
func (d *Data) Watched(s Substance) []Flag {
	var key molecule.Key
	if s.Molecule != nil {
		key = s.Molecule.Key()
	}
	var flags []Flag
	for _, w := range d.watched {
		if s.Reagent != nil && slices.Contains(w.reagents, s.Reagent.Name) || s.Reagent == nil && s.Molecule != nil && slices.Contains(w.keys, key) {
			flags = append(flags, Flag{Substance: s.Name, List: w.name, Publisher: w.publisher, Text: s.Name + ": " + w.says})
		}
	}
	return flags
}
