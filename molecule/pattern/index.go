package pattern

import (
	"math/bits"

	"shelfward/molecule"
)

// atomCode packs what words and letters ask of an atom most often, so that one comparison under a mask
// answers them together: element, aromaticity, charge, hydrogens, heavy neighbours, shape, ring.
type atomCode uint32

const (
	elementShift   = 0 // 8 bits
	aromaticBit    = 1 << 8
	chargeShift    = 9 // 5 bits, charge + 15
	hydrogensShift = 14
	heavyShift     = 18
	shapeShift     = 22 // 2 bits: shapeOf
	ringBit        = 1 << 24

	elementMask   atomCode = 0xff << elementShift
	chargeMask    atomCode = 0x1f << chargeShift
	hydrogensMask atomCode = 0xf << hydrogensShift
	heavyMask     atomCode = 0xf << heavyShift
	shapeMask     atomCode = 3 << shapeShift
)

// Shapes, as in Hybridisation.
const (
	shapeSP3 = iota
	shapeSP2
	shapeSP
)

// bondRingBit stands beside the order bits in the code of a bond.
const bondRingBit uint8 = 1 << 4

// featureWords is the size of the feature index in words of 64 bits.
const featureWords = 8

// features is a set of hashed facts about a molecule or asked by a query: kinds of atoms, of bonds with
// their ends, of paths of two bonds. Which facts is fixed, whatever patterns there are. A query whose
// facts are not all among those of the molecule cannot occur in it.
type features [featureWords]uint64

func (f *features) add(kind, fact uint64) {
	h := (fact<<4 | kind) * 0x9e3779b97f4a7c15
	h ^= h >> 29
	h *= 0xbf58476d1ce4e5b9
	f[h>>61] |= 1 << (h >> 55 & 63)
}

// within says that all facts of f are in g.
func (f *features) within(g *features) bool {
	for i, w := range f {
		if w&^g[i] != 0 {
			return false
		}
	}
	return true
}

// Kinds of facts. The letters say what is known of an atom: E element, A aromatic or not, C charge,
// H hydrogens, S shape.
const (
	factE uint64 = iota
	factEACH
	factEAS
	factBond      // EA-order-EA
	factBondShape // EAS-order-EAS
	factBondH     // EAH-order-EA
	factPath      // EA-order-EA-order-EA
	factBranch    // EA with three EA neighbours
)

const (
	knownEA   = elementMask | aromaticBit
	knownEAH  = knownEA | hydrogensMask
	knownEAS  = knownEA | shapeMask
	knownEACH = knownEAH | chargeMask
)

// bondFact and pathFact do not depend on the direction.
func bondFact(a, b, order uint64) uint64 {
	return min(a, b)<<36 | max(a, b)<<4 | order
}

func pathFact(a, orderA, middle, orderB, b uint64) uint64 {
	x, y := a<<3|orderA, b<<3|orderB
	return min(x, y)<<40 ^ max(x, y)<<20 ^ middle
}

// orderIndex numbers the order bits.
func orderIndex(bit uint8) uint64 { return uint64(bits.TrailingZeros8(bit)) }

// index fills the codes and features of s.
func (s *Subject) index() {
	m := s.M
	n, nb := m.NumAtoms(), m.NumBonds()
	if s.atom, s.bond = s.atomRoom[:], s.bondRoom[:]; n > len(s.atom) || nb > len(s.bond) {
		s.atom, s.bond = make([]atomCode, n), make([]uint8, nb)
	}
	s.atom, s.bond = s.atom[:n:n], s.bond[:nb:nb]
	for b := range s.bond {
		x := m.Bond(b)
		c := orderBit(x)
		if x.Ring {
			c |= bondRingBit
		}
		s.bond[b] = c
	}
	for a := range s.atom {
		c, x := s.codeOf(a)
		s.atom[a] = c
		s.count[x.Element]++
		s.elements[x.Element>>6] |= 1 << (x.Element & 63)
		s.features.add(factE, uint64(c&elementMask))
		s.features.add(factEACH, uint64(c&knownEACH))
		s.features.add(factEAS, uint64(c&knownEAS))
	}
	for a := range s.atom {
		s.indexAround(a)
	}
}

func (s *Subject) codeOf(a int) (atomCode, molecule.Atom) {
	x := s.M.Atom(a)
	c := atomCode(x.Element) << elementShift
	if x.Aromatic {
		c |= aromaticBit
	}
	hydrogens, heavy, doubles, shape := int(x.Hydrogens), 0, 0, shapeSP3
	for _, nb := range s.M.Neighbors(a) {
		if s.M.Atom(int(nb.Atom)).Element == 1 {
			hydrogens++
		} else {
			heavy++
		}
		switch b := s.bond[nb.Bond]; {
		case b&orderAromatic != 0:
			shape = shapeSP2
			doubles = -8 // aromatic bonds decide
		case b&orderTriple != 0 && doubles >= 0:
			shape = shapeSP
		case b&orderDouble != 0:
			doubles++
		}
		if s.bond[nb.Bond]&bondRingBit != 0 {
			c |= ringBit
		}
	}
	switch {
	case shape != shapeSP3:
	case doubles == 1:
		shape = shapeSP2
	case doubles > 1:
		shape = shapeSP
	}
	c |= codeOfCharge(x.Charge) | atomCode(min(hydrogens, 15))<<hydrogensShift | atomCode(min(heavy, 15))<<heavyShift | atomCode(shape)<<shapeShift
	return c, x
}

func codeOfCharge(q int8) atomCode { return atomCode(max(0, min(31, int(q)+15))) << chargeShift }

// indexAround adds the facts about the bonds of a and the paths through it.
func (s *Subject) indexAround(a int) {
	f := &s.features
	c := uint64(s.atom[a])
	nbs := s.M.Neighbors(a)
	for i, x := range nbs {
		order := orderIndex(s.bond[x.Bond] &^ bondRingBit)
		d := uint64(s.atom[x.Atom])
		f.add(factBondH, (c&uint64(knownEAH))<<32|(d&uint64(knownEA))<<4|order)
		if int(x.Atom) > a {
			f.add(factBond, bondFact(c&uint64(knownEA), d&uint64(knownEA), order))
			f.add(factBondShape, bondFact(c&uint64(knownEAS), d&uint64(knownEAS), order))
		}
		for _, y := range nbs[:i] {
			e := uint64(s.atom[y.Atom])
			f.add(factPath, pathFact(d&uint64(knownEA), order, c&uint64(knownEA), orderIndex(s.bond[y.Bond]&^bondRingBit), e&uint64(knownEA)))
		}
	}
}
