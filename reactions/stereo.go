package reactions

import (
	"slices"

	"shelfward/molecule"
)

// stereo applies the relations of the script to one mapping, after its bonds have changed: additions
// and eliminations with a sense (syn, anti) and double bonds made with a geometry (cis, trans).
// It fails where the sense asked for is impossible, as an anti elimination in a ring whose hydrogen and
// leaving group lie on the same face.
func (e *editor) stereo(to []int32) error {
	for _, r := range e.s.relations {
		a, b := to[r.a], to[r.b]
		if a < 0 || b < 0 {
			continue
		}
		if r.all != nil {
			e.concertedAt(r, to)
			continue
		}
		switch r.word {
		case "cis", "trans":
			e.setGeometry(a, b, r.word == "cis")
		case "syn", "anti":
			if err := e.sense(a, b, r.word == "syn"); err != nil {
				return err
			}
		}
	}
	return nil
}

// original returns the molecule and atom that a builder atom was, ok false for atoms made.
func (e *editor) original(a int32) (m *molecule.Molecule, atom, offset int32, ok bool) {
	if int(a) >= e.p.atoms {
		return nil, 0, 0, false
	}
	which, atom := e.p.locate(a)
	return e.p.molecules[which], atom, e.p.offset[which], true
}

// sense decides between addition (the bond loses order) and elimination (it gains order).
func (e *editor) sense(a, b int32, syn bool) error {
	ma, ia, off, okA := e.original(a)
	mb, ib, _, okB := e.original(b)
	i := e.bond(a, b)
	if !okA || !okB || ma != mb || i < 0 {
		return nil
	}
	before := ma.BondBetween(int(ia), int(ib))
	if before < 0 {
		return nil
	}
	was, is := ma.Bond(before).Order, e.b.Bonds[i].Order
	switch {
	case was == 2 && is == 1:
		e.addAcross(ma, ia, ib, off, syn)
	case was == 3 && is == 2:
		p, r := e.soleLigand(a, b), e.soleLigand(b, a)
		if p >= 0 && r >= 0 {
			e.markDouble(i, a, p, r, syn)
		}
	case was == 1 && is == 2:
		return e.eliminate(ma, ia, ib, off, i, syn)
	}
	return nil
}

// heavyLigands lists the bonded atoms of a builder atom other than except.
func (e *editor) heavyLigands(a, except int32) []int32 {
	var out []int32
	for _, b := range e.b.Bonds {
		if b.Order == 0 || b.A != a && b.B != a {
			continue
		}
		if other := b.A + b.B - a; other != except && !e.dead[other] {
			out = append(out, other)
		}
	}
	return out
}

func (e *editor) soleLigand(a, except int32) int32 {
	if l := e.heavyLigands(a, except); len(l) == 1 {
		return l[0]
	}
	return -1
}

func (e *editor) setGeometry(a, b int32, cis bool) {
	i := e.bond(a, b)
	if i < 0 || e.b.Bonds[i].Order != 2 {
		return
	}
	for _, d := range e.b.DoubleBonds {
		if int(d.Bond) == i {
			return // the sense of the elimination has set it: the geometry named is for unmarked centres
		}
	}
	if p, r := e.seniorLigand(a, b), e.seniorLigand(b, a); p >= 0 && r >= 0 {
		e.markDouble(i, a, p, r, cis)
	}
}

// seniorLigand is the ligand of a that ranks higher by the first CIP rule (atomic numbers, sphere by
// sphere; IUPAC 2013 P-92.2, from memory), -1 where there is none or two of them rank alike.
func (e *editor) seniorLigand(a, except int32) int32 {
	l := e.heavyLigands(a, except)
	switch len(l) {
	case 1:
		return l[0]
	case 2:
		for depth := 1; depth <= 5; depth++ {
			switch x, y := e.sphere(l[0], a, depth), e.sphere(l[1], a, depth); {
			case x > y:
				return l[0]
			case x < y:
				return l[1]
			}
		}
	}
	return -1
}

// sphere writes the atomic numbers of the atoms at a distance from a ligand, highest first, away from the
// atom it hangs on; a double bond counts its far atom twice.
func (e *editor) sphere(ligand, from int32, depth int) string {
	type place struct{ at, from int32 }
	ring := []place{{ligand, from}}
	for d := 1; d < depth; d++ {
		var next []place
		for _, p := range ring {
			for _, b := range e.b.Bonds {
				if b.Order == 0 || b.A != p.at && b.B != p.at {
					continue
				}
				other := b.A + b.B - p.at
				if other == p.from || e.dead[other] {
					continue
				}
				for n := uint8(0); n < max(1, b.Order%4); n++ {
					next = append(next, place{other, p.at})
				}
			}
		}
		ring = next
	}
	numbers := make([]byte, len(ring))
	for i, p := range ring {
		numbers[i] = byte(e.b.Atoms[p.at].Element)
	}
	slices.Sort(numbers)
	slices.Reverse(numbers)
	return string(numbers)
}

// markDouble marks bond i: p hangs on end a, r on the other end.
func (e *editor) markDouble(i int, a, p, r int32, together bool) {
	if e.b.Bonds[i].A != a {
		p, r = r, p
	}
	e.b.DoubleBonds = append(e.b.DoubleBonds, molecule.DoubleBond{Bond: int32(i), A: p, B: r, Together: together})
}

// sides returns the two spectator ligands of each end of the double bond ia=ib of m: p and r lie on the
// same side, q and s on the other. ok is false where the geometry is unknown or does not exist.
func sides(m *molecule.Molecule, ia, ib int32) (p, q, r, s int32, ok bool) {
	la, lb := spectators(m, ia, ib), spectators(m, ib, ia)
	if len(la) != 2 || len(lb) != 2 || la[0] == la[1] || lb[0] == lb[1] {
		return 0, 0, 0, 0, false
	}
	bond := int32(m.BondBetween(int(ia), int(ib)))
	together, known := false, false
	for _, d := range m.DoubleBonds() {
		if d.Bond == bond {
			p, r, together, known = d.A, d.B, d.Together, true
			if m.Bond(int(bond)).A != ia {
				p, r = r, p
			}
		}
	}
	if !known {
		if p, r, known = ringSides(m, ia, ib, -1, -1); !known {
			return 0, 0, 0, 0, false
		}
		together = true
	}
	q, s = other(la, p), other(lb, r)
	if !together {
		r, s = s, r
	}
	return p, q, r, s, true
}

// spectators lists the ligands of a other than b: neighbours and hydrogens.
func spectators(m *molecule.Molecule, a, b int32) []int32 {
	var out []int32
	for _, n := range m.Neighbors(int(a)) {
		if n.Atom != b {
			out = append(out, n.Atom)
		}
	}
	for h := uint8(0); h < m.Atom(int(a)).Hydrogens; h++ {
		out = append(out, molecule.LigandHydrogen)
	}
	return out
}

func other(pair []int32, x int32) int32 {
	if pair[0] == x {
		return pair[1]
	}
	return pair[0]
}

// ringSides returns the ring neighbours of a small ring through the bond: they lie on the same side. A
// ring that the edit opens, because x leaves ia or y leaves ib, does not count.
func ringSides(m *molecule.Molecule, ia, ib, x, y int32) (p, r int32, ok bool) {
	for _, ring := range m.Rings() {
		n := len(ring)
		if n >= 8 {
			continue
		}
		for k := range ring {
			first, second := ring[k], ring[(k+1)%n]
			before, after := ring[(k+n-1)%n], ring[(k+2)%n]
			if first == ib && second == ia {
				first, second, before, after = ia, ib, after, before
			}
			if first == ia && second == ib && before != x && after != y {
				return before, after, true
			}
		}
	}
	return 0, 0, false
}

// gainedLigand is the ligand that an atom gained in the edit: an atom or a hydrogen.
func (e *editor) gainedLigand(a int32) int32 {
	if g, ok := e.gained.sole(a); ok {
		return g
	}
	return molecule.LigandHydrogen
}

// addAcross marks both ends of a double bond that became single: the new ligands came from one face
// (syn) or from both faces (anti). The mirror image forms as well: the marks are relative.
//
// With the double bond in the plane, p and r up, both new ligands above: from the new ligand the
// order p, q, far end runs counter-clockwise at the first end, r, s, far end clockwise at the second.
func (e *editor) addAcross(m *molecule.Molecule, ia, ib, off int32, syn bool) {
	p, q, r, s, ok := sides(m, ia, ib)
	if !ok {
		return
	}
	a, b := ia+off, ib+off
	shift := func(l int32) int32 {
		if l >= 0 {
			return l + off
		}
		return l
	}
	e.b.Centers = append(e.b.Centers,
		molecule.Center{Atom: a, Ligands: [4]int32{e.gainedLigand(a), shift(p), shift(q), b}, Clockwise: false},
		molecule.Center{Atom: b, Ligands: [4]int32{e.gainedLigand(b), shift(r), shift(s), a}, Clockwise: syn})
}

// eliminate sets the geometry of the double bond made, from the marks of both centres.
func (e *editor) eliminate(m *molecule.Molecule, ia, ib, off int32, bond int, syn bool) error {
	ca, okA := centerAt(m, ia)
	cb, okB := centerAt(m, ib)
	a, b := ia+off, ib+off
	if !okA || !okB {
		return nil
	}
	x, y := e.lostLigand(a, off), e.lostLigand(b, off)
	p, q, turnA, ok1 := seenFrom(ca, x, ib)
	r, s, turnB, ok2 := seenFrom(cb, y, ia)
	if !ok1 || !ok2 {
		return nil
	}
	// turn is true for clockwise; syn with p beside r needs counter-clockwise at a, clockwise at b
	together := (!turnA == turnB) == syn
	if pr, rr, inRing := ringSides(m, ia, ib, x, y); inRing {
		cis := together
		if pr != p {
			cis = !cis
		}
		if rr != r {
			cis = !cis
		}
		if !cis {
			return errNoFit
		}
		return nil
	}
	if p < 0 {
		p, together = q, !together
	}
	if r < 0 {
		r, together = s, !together
	}
	if p < 0 || r < 0 {
		return nil
	}
	e.markDouble(bond, a, p+off, r+off, together)
	return nil
}

func centerAt(m *molecule.Molecule, a int32) (molecule.Center, bool) {
	for _, c := range m.Centers() {
		if c.Atom == a {
			return c, true
		}
	}
	return molecule.Center{}, false
}

// lostLigand is the ligand that an atom lost in the edit, in the numbering of its molecule.
func (e *editor) lostLigand(a, off int32) int32 {
	if l, ok := e.lost.sole(a); ok {
		return l - off
	}
	return molecule.LigandHydrogen
}

// seenFrom returns, seen from ligand x, the two ligands other than far in the order p, q, far, and
// whether that order runs clockwise.
func seenFrom(c molecule.Center, x, far int32) (p, q int32, clockwise, ok bool) {
	c, ok = lookFrom(c, x)
	if !ok {
		return 0, 0, false, false
	}
	l := c.Ligands
	switch far {
	case l[3]:
		return l[1], l[2], c.Clockwise, true
	case l[2]:
		return l[3], l[1], c.Clockwise, true
	case l[1]:
		return l[2], l[3], c.Clockwise, true
	}
	return 0, 0, false, false
}

// lookFrom rewrites a centre so that x stands first.
func lookFrom(c molecule.Center, x int32) (molecule.Center, bool) {
	for k, l := range c.Ligands {
		if l == x {
			if k != 0 {
				c.Ligands[0], c.Ligands[k] = c.Ligands[k], c.Ligands[0]
				c.Clockwise = !c.Clockwise
			}
			return c, true
		}
	}
	return c, false
}

// mendMarks carries the old marks over the edit: a centre whose ligand was replaced keeps or inverts as
// its course says, or loses its mark; a double bond keeps its geometry while its ligands stay.
func (e *editor) mendMarks() {
	if len(e.b.Centers)+len(e.b.DoubleBonds) == 0 {
		return
	}
	sum, arom, degree := e.bondSums()
	fresh := map[int32]bool{}
	var kept []molecule.Center
	for i := len(e.b.Centers) - 1; i >= 0; i-- { // marks set by a relation stand last and win
		c := e.b.Centers[i]
		if e.dead[c.Atom] || fresh[c.Atom] || arom[c.Atom] > 0 || e.b.Atoms[c.Atom].Element == 6 && sum[c.Atom] != degree[c.Atom] {
			continue
		}
		if e.mendCenter(&c, e.courseOf(c.Atom)) {
			fresh[c.Atom] = true
			kept = append(kept, c)
		}
	}
	e.b.Centers = kept
	bonds := e.b.DoubleBonds[:0]
	for _, d := range e.b.DoubleBonds {
		if e.mendDouble(&d) {
			bonds = append(bonds, d)
		}
	}
	e.b.DoubleBonds = bonds
}

// courseOf is the stereo course that the script gives an atom, empty if none.
func (e *editor) courseOf(a int32) string {
	for _, c := range e.course {
		if c.atom == a {
			return c.word
		}
	}
	return ""
}

// mendCenter replaces the ligand that left by the one that came; false drops the mark.
func (e *editor) mendCenter(c *molecule.Center, course string) bool {
	missing, place := 0, -1
	have := map[int32]bool{}
	for k, l := range c.Ligands {
		have[l] = true
		gone := l >= 0 && (e.dead[l] || e.bond(c.Atom, l) < 0)
		gone = gone || l == molecule.LigandHydrogen && e.b.Atoms[c.Atom].Hydrogens != 1
		if gone {
			missing++
			place = k
		}
	}
	if missing == 0 {
		return true
	}
	if missing > 1 || course != "keep" && course != "invert" {
		return false
	}
	incoming := molecule.LigandHydrogen
	for _, l := range e.heavyLigands(c.Atom, -1) {
		if !have[l] {
			incoming = l
		}
	}
	if incoming == molecule.LigandHydrogen && (have[molecule.LigandHydrogen] || e.b.Atoms[c.Atom].Hydrogens != 1) {
		return false
	}
	c.Ligands[place] = incoming
	if course == "invert" {
		c.Clockwise = !c.Clockwise
	}
	return true
}

// mendDouble keeps a mark while the bond is double; a ligand that was replaced hands on its place.
func (e *editor) mendDouble(d *molecule.DoubleBond) bool {
	b := e.b.Bonds[d.Bond]
	if b.Order != 2 {
		return false
	}
	okA, okB := e.mendLigand(&d.A, b.A, b.B), e.mendLigand(&d.B, b.B, b.A)
	return okA && okB
}

func (e *editor) mendLigand(l *int32, end, far int32) bool {
	if !e.dead[*l] && e.bond(*l, end) >= 0 {
		return true
	}
	if g, ok := e.gained.sole(end); ok && !e.dead[g] && g != far {
		*l = g
		return true
	}
	return false
}
