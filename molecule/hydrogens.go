package molecule

// FoldHydrogens turns plain hydrogen atoms (one single bond to an atom other than hydrogen or '*',
// natural, uncharged, no class) into hydrogen counts and moves the marks that name them. A hydrogen
// stays where it is the only ligand that fixes the geometry at its end of a double bond. It
// returns the new index of each old atom, -1 for those folded, or nil if nothing changed.
func (b *Builder) FoldHydrogens() []int32 {
	host := make([]int32, len(b.Atoms)) // hydrogen -> atom it is folded into, -1 for others
	degree := make([]int32, len(b.Atoms))
	for a := range host {
		host[a] = -1
	}
	plain := func(a int32) bool {
		x := &b.Atoms[a]
		return x.Element == 1 && x.Charge == 0 && x.Isotope == 0 && x.Class == 0 && (x.Hydrogens == 0 || x.Hydrogens == AutoHydrogens)
	}
	for _, x := range b.Bonds {
		degree[x.A]++
		degree[x.B]++
		for _, e := range [2][2]int32{{x.A, x.B}, {x.B, x.A}} {
			if other := b.Atoms[e[1]].Element; plain(e[0]) && x.Order == 1 && other != 1 && other != 0 {
				host[e[0]] = e[1]
			}
		}
	}
	drop := make([]bool, len(b.Atoms))
	any := false
	for a := range b.Atoms {
		drop[a] = host[a] >= 0 && degree[a] == 1
		any = any || drop[a]
	}
	if !any {
		return nil
	}
	b.moveMarks(host, drop)
	b.countFolded(host, drop)
	return b.RemoveAtoms(drop)
}

// moveMarks frees the marks from hydrogens that are to go, or keeps those that must stay.
func (b *Builder) moveMarks(host []int32, drop []bool) {
	for i := range b.DoubleBonds {
		d := &b.DoubleBonds[i]
		x := b.Bonds[d.Bond]
		for _, end := range [2]struct {
			ligand        *int32
			atom, partner int32
		}{{&d.A, x.A, x.B}, {&d.B, x.B, x.A}} {
			h := *end.ligand
			if !drop[h] {
				continue
			}
			other := int32(-1)
			for _, y := range b.Bonds {
				if y.A == end.atom && y.B != h && y.B != end.partner {
					other = y.B
				}
				if y.B == end.atom && y.A != h && y.A != end.partner {
					other = y.A
				}
			}
			if other < 0 || drop[other] {
				drop[h] = false
				continue
			}
			*end.ligand = other
			d.Together = !d.Together
		}
	}
	for i := range b.Centers {
		for k, l := range b.Centers[i].Ligands {
			if l >= 0 && drop[l] {
				b.Centers[i].Ligands[k] = LigandHydrogen
			}
		}
	}
}

// countFolded adds the hydrogens to the counts of their hosts. A host whose count is to be filled
// gets it fixed first where the fill depends on the bonds that vanish.
func (b *Builder) countFolded(host []int32, drop []bool) {
	sum := make([]int16, len(b.Atoms))
	aromatic := make([]bool, len(b.Atoms))
	for _, x := range b.Bonds {
		for _, a := range [2]int32{x.A, x.B} {
			if x.Order == OrderAromatic {
				aromatic[a] = true
				sum[a]++
			} else {
				sum[a] += int16(x.Order)
			}
		}
	}
	for h, gone := range drop {
		if !gone {
			continue
		}
		x := &b.Atoms[host[h]]
		if x.Hydrogens == AutoHydrogens {
			if aromatic[host[h]] && x.Element == 6 {
				continue // filled to four either way
			}
			x.Hydrogens = 0
			if !aromatic[host[h]] {
				x.Hydrogens = fillUp(x, sum[host[h]])
			}
		}
		if x.Hydrogens < 250 {
			x.Hydrogens++
		}
	}
}

// FoldSpareHydrogens returns m with hydrogen atoms folded that stayed for a mark which was dropped
// as void; m itself if there are none.
func (m *Molecule) FoldSpareHydrogens() *Molecule {
	for a := range m.atoms {
		if m.atoms[a].Element == 1 && m.Degree(a) == 1 {
			b := m.Builder()
			if b.FoldHydrogens() == nil {
				return m
			}
			return mustBuild(b)
		}
	}
	return m
}
