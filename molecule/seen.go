package molecule

import (
	"encoding/binary"

	"shelfward/molecule/canon"
)

// SeenThroughKey is the exact identity of the form in which salts are free acids and bases,
// charge-separated forms are one, hydrogens that shift between N, O and S along a conjugated path
// stand at no particular place, and a simple enol is its ketone. Hydrogens never move from carbon
// to carbon or between carbon and a heteroatom but for that enol; rings never open. The key depends
// on no choice of tautomer: atoms that exchange hydrogens share them in the labelled graph.
func (m *Molecule) SeenThroughKey() Key {
	if id := m.seen.Load(); id != nil {
		return id.key
	}
	id := &identity{key: seenThrough(m)}
	m.seen.Store(id)
	return id.key
}

func seenThrough(m *Molecule) Key {
	m = m.FreeForm()
	if n := m.oneChargeForm(); n != nil {
		m = n
	}
	shared := findMobile(m)
	if n := m.ketoForm(shared); n != nil {
		m = n
		shared = findMobile(m)
	}
	if shared == nil {
		return m.Key()
	}
	return m.sharedKey(shared)
}

// oneChargeForm returns m with its charges drawn the one way, nil if nothing changes.
func (m *Molecule) oneChargeForm() *Molecule {
	look := false
	for a := range m.atoms {
		x := &m.atoms[a]
		look = look || x.Charge > 0 || x.Element == 7 && x.Charge == 0 && m.Degree(a)+int(x.Hydrogens) < 5 && m.bondSum(a)+int(x.Hydrogens) == 5
	}
	if !look {
		return nil
	}
	b := m.Builder()
	if !chargeForms(b) {
		return nil
	}
	n, err := b.Build()
	if err != nil {
		return nil
	}
	return n
}

// bondSum adds the bond orders at a, hydrogens not counted.
func (m *Molecule) bondSum(a int) int {
	sum := 0
	for _, nb := range m.Neighbors(a) {
		sum += int(m.bonds[nb.Bond].Order)
	}
	return sum
}

// ketoForm returns m with simple enols as ketones or aldehydes, nil if there is none. Simple: C=C-OH
// outside aromatic rings, no other heteroatom on either carbon, and the oxygen in no group of
// mobile hydrogens that reaches nitrogen or sulfur.
func (m *Molecule) ketoForm(shared *mobile) *Molecule {
	var b *Builder
	for o := range m.atoms {
		x := &m.atoms[o]
		if x.Element != 8 || x.Hydrogens != 1 || x.Charge != 0 || m.Degree(o) != 1 {
			continue
		}
		if shared != nil && shared.hetero[shared.group[o]] {
			continue
		}
		c := m.Neighbors(o)[0]
		double := m.simpleEnol(o, int(c.Atom))
		if double < 0 {
			continue
		}
		if b == nil {
			b = m.Builder()
		}
		if b.Bonds[double].Order != 2 {
			continue // already used by another enol
		}
		b.Bonds[double].Order = 1
		b.Bonds[c.Bond].Order = 2
		b.Atoms[o].Hydrogens = 0
		b.Atoms[m.Other(double, int(c.Atom))].Hydrogens++
	}
	if b == nil {
		return nil
	}
	n, err := b.Build()
	if err != nil {
		return nil
	}
	return n
}

// simpleEnol returns the C=C bond of an enol with oxygen o on carbon c, or -1.
func (m *Molecule) simpleEnol(o, c int) int {
	if m.atoms[c].Element != 6 || m.atoms[c].Aromatic || m.atoms[c].Charge != 0 {
		return -1
	}
	double := -1
	for _, nb := range m.Neighbors(c) {
		if int(nb.Atom) != o && m.atoms[nb.Atom].Element != 6 {
			return -1
		}
		if m.bonds[nb.Bond].Order == 2 {
			double = int(nb.Bond)
		}
	}
	if double < 0 {
		return -1
	}
	beta := m.Other(double, c)
	if m.atoms[beta].Aromatic || m.atoms[beta].Charge != 0 || m.bondSum(beta) != m.Degree(beta)+1 {
		return -1
	}
	for _, nb := range m.Neighbors(beta) {
		if m.atoms[nb.Atom].Element != 6 {
			return -1
		}
	}
	return double
}

// softBond is the bond colour of conjugated pieces whose double bonds have no fixed place, and of
// the bonds to the shared hydrogens; ring flags stay.
const softBond = 6

// sharedKey labels m with one extra atom per group of mobile hydrogens, bonded to all that share them.
func (m *Molecule) sharedKey(shared *mobile) Key {
	p := perceivers.Get().(*perceiver)
	defer perceivers.Put(p)
	p.fillGraph(m, true)
	g := &p.graph
	marks := g.Axes[:0]
	w := &mobileWork{m: m}
	w.classify()
	w.pieces()
	for i, x := range g.Axes {
		d := m.doubleBonds[i]
		if !shared.soft[x.A] || !shared.soft[x.B] || w.fixedDouble(int(d.Bond), shared) {
			marks = append(marks, x)
		}
	}
	g.Axes = marks
	for a := range m.atoms {
		x := m.atoms[a]
		degree := m.Degree(a)
		x.Aromatic = x.Aromatic && !shared.softRing(m, a)
		if shared.group[a] != 0 {
			x.Hydrogens = 0
			degree++
		}
		g.Colours[a] = atomColour(&x, degree)
	}
	for i := range m.bonds {
		switch x := &m.bonds[i]; {
		case shared.soft[x.A] && shared.soft[x.B]:
			g.BondColours[i] = softBond | g.BondColours[i]&8
		case shared.soft[x.A] || shared.soft[x.B]:
			g.BondColours[i] = x.Order | g.BondColours[i]&8
		}
	}
	m.addGroups(g, shared)
	// Marks that meant something in one tautomer may say nothing now.
	keepCenter, keepAxis, _ := p.worker.DropVoid(g) // where too many depend on each other all stay
	if keepCenter != nil || keepAxis != nil {
		g.Centers, g.Axes = filter(g.Centers, keepCenter), filter(g.Axes, keepAxis)
	}
	l := p.worker.Label(g)
	var key Key
	binary.BigEndian.PutUint64(key[:8], l.Hash[0])
	binary.BigEndian.PutUint64(key[8:], l.Hash[1])
	p.graph = canon.Graph{}
	return key
}

// softRing says that the aromaticity of a depends on where mobile hydrogens stand: a is soft or,
// giving a lone pair to the ring, beside a soft atom.
func (s *mobile) softRing(m *Molecule, a int) bool {
	for _, nb := range m.Neighbors(a) {
		if s.soft[nb.Atom] {
			return true
		}
	}
	return s.soft[a]
}

func filter[T any](list []T, keep []bool) []T {
	var out []T
	for i, x := range list {
		if keep[i] {
			out = append(out, x)
		}
	}
	return out
}

// addGroups appends the extra atoms and packs the adjacency anew.
func (m *Molecule) addGroups(g *canon.Graph, shared *mobile) {
	n := len(m.atoms)
	first := make([]int32, 0, n+shared.groups+1)
	var nbs []Neighbor
	members := make([][]Neighbor, shared.groups+1)
	bond := int32(len(m.bonds))
	for a := 0; a < n; a++ {
		first = append(first, int32(len(nbs)))
		nbs = append(nbs, m.Neighbors(a)...)
		if k := shared.group[a]; k != 0 {
			nbs = append(nbs, Neighbor{Atom: int32(n) + k - 1, Bond: bond})
			members[k] = append(members[k], Neighbor{Atom: int32(a), Bond: bond})
			g.BondColours = append(g.BondColours, softBond)
			bond++
		}
	}
	for k := 1; k <= shared.groups; k++ {
		first = append(first, int32(len(nbs)))
		nbs = append(nbs, members[k]...)
		g.Colours = append(g.Colours, 1<<60|uint64(shared.hydro[k]))
	}
	g.First, g.Neighbors = append(first, int32(len(nbs))), nbs
}
