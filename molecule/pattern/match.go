package pattern

import (
	"slices"
	"sync"

	"shelfward/molecule"
)

// Subject is a molecule made ready for matching: it holds an index of the molecule's atoms and bonds and
// caches which atoms belong to which group. A Subject is not safe for concurrent use; the molecule in it is.
type Subject struct {
	M        *molecule.Molecule
	groups   *Groups
	atom     []atomCode
	bond     []uint8 // order bits and bondRingBit
	elements [2]uint64
	features features
	count    [119]uint16 // atoms per element, a quick refusal
	members  members

	atomRoom [24]atomCode // where atom and bond of most molecules lie
	bondRoom [28]uint8
}

// NewSubject prepares m; groups may be nil.
func NewSubject(m *molecule.Molecule, groups *Groups) *Subject {
	s := &Subject{M: m, groups: groups}
	s.index()
	return s
}

// Reset makes s the subject of another molecule, in the same memory.
func (s *Subject) Reset(m *molecule.Molecule, groups *Groups) {
	s.M, s.groups = m, groups
	s.elements, s.features, s.count = [2]uint64{}, features{}, [119]uint16{}
	s.members.at = s.members.at[:0]
	s.index()
	if groups != nil {
		s.members.reset(len(groups.list), len(s.atom))
	}
}

// Mapping gives for each query atom the atom of the molecule.
type Mapping []int32

// Each calls yield with every injective mapping of q into s, in a fixed order, until yield returns
// false. The mapping is reused: copy it to keep it.
func (q *Query) Each(s *Subject, yield func(Mapping) bool) {
	q.EachWithin(s, nil, yield)
}

// EachWithin is Each with a further filter: allowed says for a query atom whether an atom may take it.
func (q *Query) EachWithin(s *Subject, allowed func(queryAtom, a int) bool, yield func(Mapping) bool) {
	c := q.screened()
	if !q.possible(s, c) {
		return
	}
	x := newMatcher(q, s, c)
	x.allowed, x.yield = allowed, yield
	x.step(0)
	x.free()
}

// FitsAt says whether q occurs in s with its atom of class 1 on atoms[0], that of class 2 on atoms[1] and
// so on; what has a higher class or none goes anywhere. A negative entry fits no atom.
func (q *Query) FitsAt(s *Subject, atoms []int32) bool {
	c := q.screened()
	for _, i := range c.numbered {
		class := q.Atoms[i].Class
		if class > len(atoms) {
			continue
		}
		if a := atoms[class-1]; a < 0 || s.atom[a]&c.atoms[i].mask != c.atoms[i].value {
			return false
		}
	}
	if !q.possible(s, c) {
		return false
	}
	x := newMatcher(q, s, c)
	x.plan, x.pins = c.fromFirst, x.set
	for i := range x.pins {
		x.pins[i] = -1
		if class := q.Atoms[i].Class; class > 0 && class <= len(atoms) {
			x.pins[i] = atoms[class-1]
		}
	}
	found := !x.step(0)
	x.free()
	return found
}

// Matches says whether q occurs in s at all.
func (q *Query) Matches(s *Subject) bool {
	c := q.screened()
	if !q.possible(s, c) {
		return false
	}
	x := newMatcher(q, s, c)
	found := !x.step(0) // without yield the first mapping ends the search
	x.free()
	return found
}

// matcher is the state of one run; the depth of step is the number of query atoms, at most MaxAtoms.
type matcher struct {
	q       *Query
	s       *Subject
	screen  *screen
	allowed func(queryAtom, a int) bool
	yield   func(Mapping) bool
	collect bool  // gather sets of atoms instead of calling yield
	core    []int // the query atoms to mark in the set mark instead of calling yield
	mark    []uint64
	plan    []planStep
	pins    []int32 // per query atom the atom it must take, -1 any; nil: all are free
	to      []int32
	used    []bool
	sets    []int32 // the sets gathered, one after the other, each sorted
	set     []int32
}

var matchers = sync.Pool{New: func() any { return new(matcher) }}

func newMatcher(q *Query, s *Subject, c *screen) *matcher {
	x := matchers.Get().(*matcher)
	x.q, x.s, x.screen, x.plan = q, s, c, q.plan
	if cap(x.to) < len(q.Atoms) {
		x.to, x.set = make([]int32, MaxAtoms), make([]int32, MaxAtoms)
	}
	x.to, x.set = x.to[:len(q.Atoms)], x.set[:len(q.Atoms)]
	if n := len(s.atom); len(x.used) < n {
		x.used = make([]bool, n+n/2) // all false between runs
	}
	return x
}

// free gives x back. A run that panics keeps it.
func (x *matcher) free() {
	x.q, x.s, x.screen, x.allowed, x.yield, x.collect, x.core, x.mark, x.pins = nil, nil, nil, nil, nil, false, nil, nil, nil
	matchers.Put(x)
}

// step matches the plan from place k on and returns false when no more is wanted.
func (x *matcher) step(k int) bool {
	if k == len(x.plan) {
		switch {
		case x.collect:
			x.addSet()
			return true
		case x.core != nil:
			for _, i := range x.core {
				a := x.to[i]
				x.mark[a>>6] |= 1 << (a & 63)
			}
			return true
		case x.yield == nil:
			return false
		}
		return x.yield(x.to)
	}
	st := &x.plan[k]
	c := &x.screen.atoms[st.atom]
	if st.anchor < 0 {
		if x.pins != nil && x.pins[st.atom] >= 0 {
			a := int(x.pins[st.atom])
			return x.s.atom[a]&c.mask != c.value || x.used[a] || x.try(st, c, a, k)
		}
		for a, code := range x.s.atom {
			if code&c.mask == c.value && !x.used[a] && !x.try(st, c, a, k) {
				return false
			}
		}
		return true
	}
	bond := &x.q.Bonds[st.bond]
	for _, n := range x.s.M.Neighbors(int(x.to[st.anchor])) {
		if x.s.atom[n.Atom]&c.mask != c.value || bond.orders&x.s.bond[n.Bond] == 0 || x.used[n.Atom] {
			continue
		}
		if bond.tests != nil && !bond.testsFit(x.s, int(n.Bond)) {
			continue
		}
		if !x.try(st, c, int(n.Atom), k) {
			return false
		}
	}
	return true
}

// try takes atom a, whose code fits, for the query atom of st.
func (x *matcher) try(st *planStep, c *atomScreen, a, k int) bool {
	if x.collect && c.likeFirst && int32(a) < x.to[x.q.plan[0].atom] {
		return true // the same set is found from a
	}
	if c.several && c.elements[x.s.atom[a]&elementMask>>6]>>(x.s.atom[a]&63)&1 == 0 {
		return true
	}
	if x.pins != nil && x.pins[st.atom] >= 0 && x.pins[st.atom] != int32(a) {
		return true
	}
	if c.slow && !x.q.Atoms[st.atom].restFits(x.s, a) || x.allowed != nil && !x.allowed(st.atom, a) {
		return true
	}
	for _, cl := range st.closing {
		b := x.s.M.BondBetween(a, int(x.to[cl.atom]))
		if b < 0 || x.q.Bonds[cl.bond].orders&x.s.bond[b] == 0 || !x.q.Bonds[cl.bond].testsFit(x.s, b) {
			return true
		}
	}
	x.to[st.atom], x.used[a] = int32(a), true
	more := x.step(k + 1)
	x.used[a] = false
	return more
}

// restFits checks what the code of an atom does not hold.
func (qa *QueryAtom) restFits(s *Subject, a int) bool {
	if qa.Isotope != 0 && qa.Isotope != s.M.Atom(a).Isotope || hasElement(qa.Forbidden, s.M.Atom(a).Element) {
		return false
	}
	for _, t := range qa.tests {
		if !t(s, a) {
			return false
		}
	}
	return true
}

func (qb *QueryBond) testsFit(s *Subject, b int) bool {
	for _, t := range qb.tests {
		if !t(s, b) {
			return false
		}
	}
	return true
}

func hasElement(set []molecule.Element, e molecule.Element) bool {
	for _, x := range set {
		if x == e {
			return true
		}
	}
	return false
}

// hydrogens counts attached hydrogens, those kept as atoms of the graph included.
func hydrogens(m *molecule.Molecule, a int) int {
	n := int(m.Atom(a).Hydrogens)
	for _, nb := range m.Neighbors(a) {
		if m.Atom(int(nb.Atom)).Element == 1 {
			n++
		}
	}
	return n
}

func orderBit(b molecule.Bond) uint8 {
	switch {
	case b.Aromatic:
		return orderAromatic
	case b.Order == 2:
		return orderDouble
	case b.Order == 3:
		return orderTriple
	}
	return orderSingle
}

// AtomSets returns the distinct sets of atoms that q's mappings cover, each sorted, in order of discovery.
func (q *Query) AtomSets(s *Subject) [][]int32 {
	c := q.screened()
	if !q.possible(s, c) {
		return nil
	}
	x := newMatcher(q, s, c)
	x.collect, x.sets = true, x.sets[:0]
	x.step(0)
	sets := x.gathered()
	x.free()
	return sets
}

// few holds the result of most calls in one piece of memory.
type few struct {
	sets  [2][]int32
	atoms [12]int32
}

// gathered copies the sets found.
func (x *matcher) gathered() [][]int32 {
	if len(x.sets) == 0 {
		return nil
	}
	n := len(x.set)
	var sets [][]int32
	var all []int32
	if small := (*few)(nil); len(x.sets) <= len(small.atoms) && len(x.sets) <= n*len(small.sets) {
		small = new(few)
		sets, all = small.sets[:0], small.atoms[:0]
	} else {
		sets, all = make([][]int32, 0, len(x.sets)/n), make([]int32, 0, len(x.sets))
	}
	all = append(all, x.sets...)
	for i := 0; i < len(all); i += n {
		sets = append(sets, all[i:i+n:i+n])
	}
	return sets
}

// addSet adds the set of the atoms mapped to, unless it is there.
func (x *matcher) addSet() {
	n := copy(x.set, x.to)
	slices.Sort(x.set)
	for i := len(x.sets) - n; i >= 0; i -= n { // equal sets are found soon after each other
		if slices.Equal(x.sets[i:i+n], x.set) {
			return
		}
	}
	x.sets = append(x.sets, x.set...)
}
