package pattern

// screen is what a query compares with the index of a molecule.
type screen struct {
	atoms    []atomScreen
	features features
	sets     [][2]uint64 // the molecule must have an element of each

	numbered  []int      // atoms with a class
	fromFirst []planStep // a plan that begins at class 1, where there is one
}

// atomScreen is a query atom in the form of atomCode.
type atomScreen struct {
	mask, value atomCode
	elements    [2]uint64 // allowed elements, where several are
	several     bool
	slow        bool // something is left that the code does not hold
	likeFirst   bool // a symmetry of the query takes the atom matched first to this one
}

// screened makes the screen when the query is first matched.
func (q *Query) screened() *screen {
	if s := q.screen.Load(); s != nil {
		return s
	}
	s := &screen{atoms: make([]atomScreen, len(q.Atoms))}
	for i := range q.Atoms {
		s.atoms[i] = q.Atoms[i].screen()
		if x := &s.atoms[i]; x.several {
			s.sets = append(s.sets, x.elements)
		}
	}
	q.addFacts(s)
	q.markLikeFirst(s)
	for i := range q.Atoms {
		if q.Atoms[i].Class > 0 {
			s.numbered = append(s.numbered, i)
		}
	}
	s.fromFirst = q.planFrom(q.AtomOfClass(1))
	q.screen.Store(s)
	return s
}

func (qa *QueryAtom) screen() atomScreen {
	x := atomScreen{mask: qa.mask, value: qa.value, slow: len(qa.tests) > 0 || len(qa.Forbidden) > 0 || qa.Isotope != 0}
	if len(qa.Elements) == 1 {
		x.mask |= elementMask
		x.value |= atomCode(qa.Elements[0]) << elementShift
	} else if qa.Elements != nil {
		x.several = true
		for _, e := range qa.Elements {
			x.elements[e>>6] |= 1 << (e & 63)
		}
	}
	if qa.aromatic != eitherAromatic {
		x.mask |= aromaticBit
		if qa.aromatic == onlyAromatic {
			x.value |= aromaticBit
		}
	}
	if !qa.AnyCharge {
		x.mask |= chargeMask
		x.value |= codeOfCharge(qa.Charge)
	}
	if qa.Hydrogens >= 0 {
		if x.mask&hydrogensMask != 0 && x.value&hydrogensMask != atomCode(min(qa.Hydrogens, 15))<<hydrogensShift {
			x.mask, x.value = 0, 1 // letters and words contradict each other: no atom fits
			return x
		}
		x.mask |= hydrogensMask
		x.value |= atomCode(min(qa.Hydrogens, 15)) << hydrogensShift
	}
	return x
}

// need narrows qa to atoms whose code has value under mask; false where it is narrowed otherwise already.
func (qa *QueryAtom) need(mask, value atomCode) bool {
	if both := qa.mask & mask; qa.value&both != value&both {
		return false
	}
	qa.mask |= mask
	qa.value |= value
	return true
}

// addFacts collects the facts that a molecule must have.
func (q *Query) addFacts(s *screen) {
	known := func(i int, mask atomCode) (uint64, bool) {
		x := &s.atoms[i]
		return uint64(x.value & mask), x.mask&mask == mask
	}
	f := &s.features
	for i := range q.Atoms {
		for _, k := range []struct {
			kind uint64
			mask atomCode
		}{{factE, elementMask}, {factEACH, knownEACH}, {factEAS, knownEAS}} {
			if c, ok := known(i, k.mask); ok {
				f.add(k.kind, c)
			}
		}
	}
	for i, b := range q.Bonds {
		order, one := singleBit(b.orders)
		if !one {
			continue
		}
		a, okA := known(b.A, knownEA)
		c, okC := known(b.B, knownEA)
		if okA && okC {
			f.add(factBond, bondFact(a, c, order))
		}
		if x, ok := known(b.A, knownEAH); ok && okC {
			f.add(factBondH, x<<32|c<<4|order)
		}
		if x, ok := known(b.B, knownEAH); ok && okA {
			f.add(factBondH, x<<32|a<<4|order)
		}
		if x, ok := known(b.A, knownEAS); ok {
			if y, ok := known(b.B, knownEAS); ok {
				f.add(factBondShape, bondFact(x, y, order))
			}
		}
		for _, d := range q.Bonds[:i] {
			q.addPath(f, b, d, known)
		}
	}
}

// addPath adds the path of two bonds that share an atom.
func (q *Query) addPath(f *features, b, d QueryBond, known func(int, atomCode) (uint64, bool)) {
	orderB, okB := singleBit(b.orders)
	orderD, okD := singleBit(d.orders)
	if !okB || !okD {
		return
	}
	for _, p := range [4][3]int{{b.A, b.B, d.A}, {b.A, b.B, d.B}, {b.B, b.A, d.A}, {b.B, b.A, d.B}} {
		outer, middle := p[0], p[1]
		other := p[2]
		far := d.A + d.B - other // the end of d that is not other
		if other != middle || far == outer {
			continue
		}
		x, ok1 := known(outer, knownEA)
		y, ok2 := known(middle, knownEA)
		z, ok3 := known(far, knownEA)
		if ok1 && ok2 && ok3 {
			f.add(factPath, pathFact(x, orderB, y, orderD, z))
		}
	}
}

func singleBit(orders uint8) (order uint64, one bool) {
	return orderIndex(orders), orders != 0 && orders&(orders-1) == 0
}

// possible says that nothing in the index of s rules the query out.
func (q *Query) possible(s *Subject, x *screen) bool {
	if !x.features.within(&s.features) {
		return false
	}
	for _, set := range x.sets {
		if set[0]&s.elements[0]|set[1]&s.elements[1] == 0 {
			return false
		}
	}
	for _, n := range q.needed {
		if s.count[n.element] < n.count {
			return false
		}
	}
	return true
}

// maxSymmetric bounds the queries whose symmetry is looked for.
const maxSymmetric = 8

// markLikeFirst finds the atoms that a symmetry of the query exchanges with the atom matched first.
// Where only sets of atoms are wanted, the first atom can then take the lowest place of them all.
func (q *Query) markLikeFirst(s *screen) {
	if q.Parts != 1 || len(q.Atoms) > maxSymmetric {
		return
	}
	image := make([]int, len(q.Atoms))
	for v := range q.Atoms {
		for i := range image {
			image[i] = -1
		}
		s.atoms[v].likeFirst = v != q.plan[0].atom && q.extendImage(s, image, 0, v)
	}
}

// extendImage takes the atom of step k to v and looks for images of the rest.
func (q *Query) extendImage(s *screen, image []int, k, v int) bool {
	u := q.plan[k].atom
	x, y := s.atoms[u], s.atoms[v]
	x.likeFirst, y.likeFirst = false, false
	if x != y || x.slow {
		return false
	}
	for i := range image {
		if image[i] == v {
			return false
		}
	}
	for _, b := range q.Bonds {
		other := b.A + b.B - u
		if b.A != u && b.B != u || image[other] < 0 {
			continue
		}
		c := q.BondOf(v, image[other])
		if c < 0 || q.Bonds[c].orders != b.orders || len(b.tests)+len(q.Bonds[c].tests) > 0 {
			return false
		}
	}
	image[u] = v
	if k+1 == len(q.plan) {
		return true
	}
	for w := range q.Atoms {
		if q.extendImage(s, image, k+1, w) {
			return true
		}
	}
	image[u] = -1
	return false
}
