package molecule

// Builder returns a Builder that holds a copy of m (Kekulé orders, explicit hydrogen counts, stereo
// marks), to be edited and built again. Atom and bond indices are kept.
func (m *Molecule) Builder() *Builder {
	b := &Builder{
		Atoms:       append(make([]Atom, 0, len(m.atoms)+4), m.atoms...),
		Bonds:       append(make([]Bond, 0, len(m.bonds)+4), m.bonds...),
		Centers:     append([]Center(nil), m.centers...),
		DoubleBonds: append([]DoubleBond(nil), m.doubleBonds...),
		LeftOut:     int(m.leftOut),
	}
	for i := range b.Atoms {
		b.Atoms[i].Aromatic = false
	}
	for i := range b.Bonds {
		b.Bonds[i].Aromatic = false
	}
	return b
}

// Split returns the connected components as molecules of their own, in order of first atom.
func (m *Molecule) Split() []*Molecule {
	count, label := m.Components()
	if count <= 1 {
		return []*Molecule{m}
	}
	parts := make([]*Molecule, count)
	for k := range parts {
		keep := make([]bool, len(m.atoms))
		for a, l := range label {
			keep[a] = l == int32(k)
		}
		parts[k] = m.Part(keep)
	}
	return parts
}

// Part returns the atoms marked in keep with the bonds between them, as a molecule of its own.
// No bond may lead out of them; use a Builder to cut bonds. It panics if a bond does.
func (m *Molecule) Part(keep []bool) *Molecule {
	b := m.Builder()
	drop := make([]bool, len(keep))
	for a, k := range keep {
		drop[a] = !k
	}
	for _, x := range m.bonds {
		if keep[x.A] != keep[x.B] {
			panic("molecule: Part cuts a bond")
		}
	}
	b.RemoveAtoms(drop)
	return mustBuild(b)
}

// mustBuild builds what is known to be a valid molecule.
func mustBuild(b *Builder) *Molecule {
	m, err := b.Build()
	if err != nil {
		panic("molecule: rebuilding a valid molecule: " + err.Error())
	}
	return m
}

// Join puts several molecules into one graph; atoms keep their order, shifted. It returns nil if
// the whole has more than MaxAtoms atoms.
func Join(ms ...*Molecule) *Molecule {
	if len(ms) == 1 {
		return ms[0]
	}
	b := &Builder{}
	for _, m := range ms {
		b.Append(m.Builder())
	}
	if len(b.Atoms) > MaxAtoms {
		return nil
	}
	return mustBuild(b)
}

// Append adds the atoms, bonds and marks of c behind those of b and returns by how much the atom
// and bond indices of c were shifted.
func (b *Builder) Append(c *Builder) (atomShift, bondShift int) {
	da, db := int32(len(b.Atoms)), int32(len(b.Bonds))
	b.LeftOut += c.LeftOut
	b.Atoms = append(b.Atoms, c.Atoms...)
	for _, x := range c.Bonds {
		x.A, x.B = x.A+da, x.B+da
		b.Bonds = append(b.Bonds, x)
	}
	for _, x := range c.Centers {
		x.Atom += da
		for i, l := range x.Ligands {
			if l >= 0 {
				x.Ligands[i] = l + da
			}
		}
		b.Centers = append(b.Centers, x)
	}
	for _, x := range c.DoubleBonds {
		x.Bond, x.A, x.B = x.Bond+db, x.A+da, x.B+da
		b.DoubleBonds = append(b.DoubleBonds, x)
	}
	return int(da), int(db)
}

// RemoveAtoms takes out the marked atoms with their bonds and every stereo mark that names them;
// the rest moves up. It returns the new index of each old atom, -1 for those gone.
func (b *Builder) RemoveAtoms(drop []bool) []int32 {
	to := make([]int32, len(b.Atoms))
	n := int32(0)
	for a := range b.Atoms {
		if drop[a] {
			to[a] = -1
			continue
		}
		b.Atoms[n] = b.Atoms[a]
		to[a] = n
		n++
	}
	b.Atoms = b.Atoms[:n]
	gone := make([]bool, len(b.Bonds))
	for i, x := range b.Bonds {
		gone[i] = to[x.A] < 0 || to[x.B] < 0
	}
	b.RemoveBonds(gone)
	for i := range b.Bonds {
		x := &b.Bonds[i]
		x.A, x.B = to[x.A], to[x.B]
	}
	centers := b.Centers[:0]
	for _, c := range b.Centers {
		ok := to[c.Atom] >= 0
		for i, l := range c.Ligands {
			if l >= 0 {
				c.Ligands[i] = to[l]
				ok = ok && to[l] >= 0
			}
		}
		if c.Atom = to[c.Atom]; ok {
			centers = append(centers, c)
		}
	}
	b.Centers = centers
	marks := b.DoubleBonds[:0]
	for _, d := range b.DoubleBonds {
		if d.A, d.B = to[d.A], to[d.B]; d.A >= 0 && d.B >= 0 {
			marks = append(marks, d)
		}
	}
	b.DoubleBonds = marks
	return to
}

// RemoveBonds takes out the marked bonds and the marks of double bonds among them; the rest moves
// up. It returns the new index of each old bond, -1 for those gone. Marks of centres that lose a
// ligand are dropped by Build.
func (b *Builder) RemoveBonds(drop []bool) []int32 {
	to := make([]int32, len(b.Bonds))
	n := int32(0)
	for i := range b.Bonds {
		if drop[i] {
			to[i] = -1
			continue
		}
		b.Bonds[n] = b.Bonds[i]
		to[i] = n
		n++
	}
	b.Bonds = b.Bonds[:n]
	marks := b.DoubleBonds[:0]
	for _, d := range b.DoubleBonds {
		if d.Bond = to[d.Bond]; d.Bond >= 0 {
			marks = append(marks, d)
		}
	}
	b.DoubleBonds = marks
	return to
}

// Mirror returns the mirror image: every tetrahedral mark turned round, double bonds as they are.
func (m *Molecule) Mirror() *Molecule {
	if len(m.centers) == 0 {
		return m
	}
	c := m.shallow()
	c.centers = append([]Center(nil), m.centers...)
	for i := range c.centers {
		c.centers[i].Clockwise = !c.centers[i].Clockwise
	}
	c.doubleBonds = m.doubleBonds
	return c
}

// WithoutStereo drops all stereo marks.
func (m *Molecule) WithoutStereo() *Molecule {
	if !m.HasStereo() {
		return m
	}
	return m.shallow()
}

// shallow returns a molecule that shares all of m but the stereo marks and what depends on them.
func (m *Molecule) shallow() *Molecule {
	return &Molecule{atoms: m.atoms, bonds: m.bonds, first: m.first, neighbors: m.neighbors, rings: m.rings, bondRing: m.bondRing,
		redraw: m.redraw, leftOut: m.leftOut}
}

// EqualsMirror says whether m is the same as its mirror image: no centre is marked, or the marks
// make a meso form. Unmarked centres say nothing and are not looked at.
func (m *Molecule) EqualsMirror() bool {
	return len(m.centers) == 0 || m.Key() == m.Mirror().Key()
}
