package pattern

import "shelfward/molecule"

// Subject is a molecule made ready for matching: it caches which atoms belong to which group. A
// Subject is not safe for concurrent use; the molecule in it is.
type Subject struct {
	M      *molecule.Molecule
	groups *Groups
	count  [119]uint16   // atoms per element, a quick refusal
	member []*groupAtoms // per group, filled on first use; nil before any group was asked for
}

// groupAtoms holds the instances of one group in one molecule.
type groupAtoms struct {
	in        []bool
	instances [][]int32
}

// NewSubject prepares m; groups may be nil.
func NewSubject(m *molecule.Molecule, groups *Groups) *Subject {
	s := &Subject{M: m, groups: groups}
	for a := 0; a < m.NumAtoms(); a++ {
		s.count[m.Atom(a).Element]++
	}
	return s
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
	for _, n := range q.needed {
		if s.count[n.element] < n.count {
			return
		}
	}
	x := matcher{q: q, s: s, allowed: allowed, yield: yield,
		to: make([]int32, len(q.Atoms)), used: make([]bool, s.M.NumAtoms())}
	x.step(0)
}

// Matches says whether q occurs in s at all.
func (q *Query) Matches(s *Subject) bool {
	found := false
	q.Each(s, func(Mapping) bool { found = true; return false })
	return found
}

// matcher is the state of one run; the depth of step is the number of query atoms, at most MaxAtoms.
type matcher struct {
	q       *Query
	s       *Subject
	allowed func(queryAtom, a int) bool
	yield   func(Mapping) bool
	to      []int32
	used    []bool
}

// step matches the plan from place k on and returns false when yield wanted no more.
func (x *matcher) step(k int) bool {
	if k == len(x.q.plan) {
		return x.yield(x.to)
	}
	st := &x.q.plan[k]
	if st.anchor < 0 {
		for a := 0; a < x.s.M.NumAtoms(); a++ {
			if !x.try(st, a, k) {
				return false
			}
		}
		return true
	}
	for _, n := range x.s.M.Neighbors(int(x.to[st.anchor])) {
		if !x.used[n.Atom] && x.bondFits(st.bond, int(n.Bond)) && !x.try(st, int(n.Atom), k) {
			return false
		}
	}
	return true
}

func (x *matcher) try(st *planStep, a, k int) bool {
	if x.used[a] || !x.atomFits(st.atom, a) {
		return true
	}
	for _, c := range st.closing {
		b := x.s.M.BondBetween(a, int(x.to[c.atom]))
		if b < 0 || !x.bondFits(c.bond, b) {
			return true
		}
	}
	x.to[st.atom], x.used[a] = int32(a), true
	more := x.step(k + 1)
	x.used[a] = false
	return more
}

func (x *matcher) atomFits(query, a int) bool {
	return x.q.Atoms[query].fits(x.s, a) && (x.allowed == nil || x.allowed(query, a))
}

func (qa *QueryAtom) fits(s *Subject, a int) bool {
	at := s.M.Atom(a)
	if qa.Elements != nil && !hasElement(qa.Elements, at.Element) || hasElement(qa.Forbidden, at.Element) {
		return false
	}
	if qa.aromatic != eitherAromatic && (qa.aromatic == onlyAromatic) != at.Aromatic {
		return false
	}
	if !qa.AnyCharge && qa.Charge != at.Charge || qa.Hydrogens >= 0 && qa.Hydrogens != hydrogens(s.M, a) {
		return false
	}
	if qa.Isotope != 0 && qa.Isotope != at.Isotope {
		return false
	}
	for _, t := range qa.tests {
		if !t(s, a) {
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

func (x *matcher) bondFits(query, b int) bool {
	qb := &x.q.Bonds[query]
	if qb.orders&orderBit(x.s.M.Bond(b)) == 0 {
		return false
	}
	for _, t := range qb.tests {
		if !t(x.s, b) {
			return false
		}
	}
	return true
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
	var sets [][]int32
	q.Each(s, func(to Mapping) bool {
		set := append([]int32(nil), to...)
		sortInt32(set)
		if !containsSet(sets, set) {
			sets = append(sets, set)
		}
		return true
	})
	return sets
}

func sortInt32(x []int32) {
	for i := 1; i < len(x); i++ {
		for j := i; j > 0 && x[j] < x[j-1]; j-- {
			x[j], x[j-1] = x[j-1], x[j]
		}
	}
}

func containsSet(sets [][]int32, set []int32) bool {
next:
	for _, s := range sets {
		if len(s) != len(set) {
			continue
		}
		for i := range s {
			if s[i] != set[i] {
				continue next
			}
		}
		return true
	}
	return false
}
