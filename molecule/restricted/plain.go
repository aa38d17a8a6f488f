package restricted

import "shelfward/molecule"

// plain lists the compounds in m as the tests see them: without stereo marks and isotopes, each
// connected part and the parts of the free form.
func plain(m *molecule.Molecule) []*molecule.Molecule {
	m = bare(m)
	if count, _ := m.Components(); count == 1 && !charged(m) {
		return []*molecule.Molecule{m}
	}
	seen := map[molecule.Key]bool{}
	var list []*molecule.Molecule
	for _, p := range append(m.Split(), m.FreeForm().Split()...) {
		if !seen[p.Key()] {
			seen[p.Key()] = true
			list = append(list, p)
		}
	}
	return list
}

// bare takes off stereo marks and isotopes and writes nitro groups, azides and diazo compounds with
// their charges, as the patterns do.
func bare(m *molecule.Molecule) *molecule.Molecule {
	if len(m.Centers()) > 0 || len(m.DoubleBonds()) > 0 {
		m = m.WithoutStereo()
	}
	labelled, uncharged := false, false
	for a := range m.NumAtoms() {
		at := m.Atom(a)
		labelled = labelled || at.Isotope != 0
		uncharged = uncharged || at.Element == 7 && at.Charge == 0 && bondSum(m, a) == 5
	}
	if !labelled && !uncharged {
		return m
	}
	b := m.Builder()
	for a := range b.Atoms {
		b.Atoms[a].Isotope = 0
	}
	if uncharged {
		separateCharges(m, b)
	}
	if plain, err := b.Build(); err == nil {
		return plain
	}
	return m
}

// separateCharges turns nitrogen with five bonds, N(=O)=O and N#N, into the charge-separated form.
func separateCharges(m *molecule.Molecule, b *molecule.Builder) {
	for a := range m.NumAtoms() {
		if m.Atom(a).Element != 7 || m.Atom(a).Charge != 0 || bondSum(m, a) != 5 {
			continue
		}
		for _, nb := range m.Neighbors(a) {
			other := m.Atom(int(nb.Atom))
			terminal := m.Degree(int(nb.Atom)) == 1 && other.Charge == 0 && other.Hydrogens == 0
			order := b.Bonds[nb.Bond].Order
			if terminal && (other.Element == 8 && order == 2 || other.Element == 7 && order == 3) {
				b.Bonds[nb.Bond].Order--
				b.Atoms[nb.Atom].Charge--
				b.Atoms[a].Charge++
				break
			}
		}
	}
}

func bondSum(m *molecule.Molecule, a int) int {
	sum := int(m.Atom(a).Hydrogens)
	for _, nb := range m.Neighbors(a) {
		sum += int(m.Bond(int(nb.Bond)).Order)
	}
	return sum
}

// charged reports whether a salt may be in m: a charge in all, or one on anything but N and O.
func charged(m *molecule.Molecule) bool {
	total, other := 0, false
	for a := range m.NumAtoms() {
		at := m.Atom(a)
		total += int(at.Charge)
		other = other || at.Charge != 0 && at.Element != 7 && at.Element != 8
	}
	return total != 0 || other
}
