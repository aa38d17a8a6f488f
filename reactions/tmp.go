package reactions

import "shelfward/molecule"

func freeForm(m *molecule.Molecule) *molecule.Molecule { return m }
func seenKey(m *molecule.Molecule) molecule.Key        { return m.FlatKey() }
