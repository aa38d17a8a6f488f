package name

import "shelfward/molecule"

// saltName names a molecule of several components.
func saltName(m *molecule.Molecule) string { return "" }

// polyolEster names esters of one polyol with one acid: propane-1,2,3-triyl triacetate.
func (w *writer) polyolEster(s spec) string { return "" }

// readsBack says whether the name is one that this package reads as m.
func readsBack(name string, m *molecule.Molecule) bool {
	r, err := Read(name)
	return err == nil && r.FlatKey() == m.FlatKey()
}
