package molecule

// Limits of Forms: what is drawn in more ways than this is rare at the bench, and longer conjugated paths
// than these bonds do not occur in one exchange of a hydrogen there.
const (
	maxForms    = 12
	maxFormPath = 8
)

// Forms returns the other drawings of m that differ by hydrogens shifted between N, O and S along a
// conjugated path (lactam and lactim, the two azoles, amidines), at most maxForms, in a fixed order. All
// have the SeenThroughKey of m. Stereo marks are dropped.
func (m *Molecule) Forms() []*Molecule {
	if findMobile(m.FreeForm()) == nil {
		return nil
	}
	if len(m.centers)+len(m.doubleBonds) > 0 {
		m = m.WithoutStereo()
	}
	want := m.SeenThroughKey()
	list, seen := []*Molecule{m}, map[Key]bool{m.FlatKey(): true}
	for i := 0; i < len(list) && len(list) <= maxForms; i++ {
		list[i].eachShift(func(n *Molecule) {
			if k := n.FlatKey(); !seen[k] && len(list) <= maxForms && n.SeenThroughKey() == want {
				seen[k] = true
				list = append(list, n)
			}
		})
	}
	return list[1:]
}

// eachShift moves one hydrogen from a heteroatom over an alternating path to another.
func (m *Molecule) eachShift(yield func(*Molecule)) {
	for x := range m.atoms {
		if m.atoms[x].Hydrogens == 0 || !mobileElement(m.atoms[x].Element) {
			continue
		}
		path := []int32{}
		on := map[int32]bool{int32(x): true}
		var walk func(a int32, order uint8)
		walk = func(a int32, order uint8) {
			for _, nb := range m.Neighbors(int(a)) {
				if m.bonds[nb.Bond].Order != order || on[nb.Atom] || len(path) >= maxFormPath {
					continue
				}
				path = append(path, nb.Bond)
				on[nb.Atom] = true
				if order == 2 && mobileElement(m.atoms[nb.Atom].Element) && m.atoms[nb.Atom].Charge == 0 {
					if n := m.shifted(int32(x), nb.Atom, path); n != nil {
						yield(n)
					}
				}
				walk(nb.Atom, 3-order)
				on[nb.Atom] = false
				path = path[:len(path)-1]
			}
		}
		walk(int32(x), 1)
	}
}

// shifted returns m with a hydrogen of from at to and the bonds of path exchanged, nil if that cannot be.
func (m *Molecule) shifted(from, to int32, path []int32) *Molecule {
	b := m.Builder()
	b.Atoms[from].Hydrogens--
	b.Atoms[to].Hydrogens++
	for _, bond := range path {
		b.Bonds[bond].Order = 3 - m.bonds[bond].Order
	}
	n, err := b.Build()
	if err != nil {
		return nil
	}
	return n
}

// SimpleEnol says that m is drawn as the enol of a ketone or aldehyde, as SeenThroughKey reads it.
func (m *Molecule) SimpleEnol() bool {
	for o := range m.atoms {
		x := &m.atoms[o]
		if x.Element == 8 && x.Hydrogens == 1 && x.Charge == 0 && m.Degree(o) == 1 && m.simpleEnol(o, int(m.Neighbors(o)[0].Atom)) >= 0 {
			return m.ketoForm(findMobile(m)) != nil
		}
	}
	return false
}
