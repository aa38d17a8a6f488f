package shelf

import (
	"strings"

	"shelfward/molecule"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
)

// Known is what the reader of rows asks: the list of reagents, the rows of the built-in shelf, the
// hazard codes, and how names of compounds are read.
type Known struct {
	Reagents *reagent.Table
	Hazards  *hazard.Data

	// Structure reads a systematic name; nil, or false, if it cannot.
	Structure func(name string) (*molecule.Molecule, bool)
	// Name writes the name of a structure; nil, or empty, if none is known.
	Name func(m *molecule.Molecule) string

	builtin []*Item // the rows of the built-in shelf, while a user's file is read
}

// CheckHazard says what is wrong with a hazard code.
func (k *Known) CheckHazard(code string) error {
	if k.Hazards == nil {
		return nil
	}
	return k.Hazards.CheckCode(code)
}

// byCAS finds the structure of a CAS number in the lists; nil if none has it.
func (k *Known) byCAS(number string) *molecule.Molecule {
	for _, it := range k.builtin {
		if it.CAS == number {
			return it.Molecule
		}
	}
	for _, re := range k.Reagents.All() {
		if re.CAS == number && re.SMILES != "" {
			if m, err := re.Molecule(); err == nil {
				return m
			}
		}
	}
	return nil
}

// byName finds the structure of a name: a row of the built-in shelf, a reagent, a systematic name.
func (k *Known) byName(name string) *molecule.Molecule {
	for _, it := range k.builtin {
		if it.called(name) {
			return it.Molecule
		}
	}
	if re, ok := k.Reagents.Named(name); ok && re.Substance() {
		if m, err := re.Molecule(); err == nil && m != nil {
			return m
		}
	}
	if k.Structure != nil {
		if m, ok := k.Structure(name); ok {
			return m
		}
	}
	return nil
}

// nameOf writes a name for a structure; empty if none is known.
func (k *Known) nameOf(m *molecule.Molecule) string {
	if re, ok := k.Reagents.ByExact(m); ok {
		return re.Name
	}
	if k.Name != nil {
		return k.Name(m)
	}
	return ""
}

// called reports whether the item has the name, capitals aside.
func (it *Item) called(name string) bool {
	if strings.EqualFold(it.Name, name) {
		return true
	}
	for _, s := range it.Synonyms {
		if strings.EqualFold(s, name) {
			return true
		}
	}
	return false
}
