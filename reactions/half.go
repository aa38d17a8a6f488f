package reactions

import (
	"slices"
	"sort"

	"shelfward/molecule"
)

// otherHalf builds the co-product that makes the reactant symmetrical: the acid that goes with the acyl
// group of a target to one anhydride, the second carbonyl compound of a symmetrical alkene. Each atom of
// the missing part takes over what hangs, in the target, on its counterpart in the same reactant part, or in
// the part that must be the same molecule (the aldehyde of a disproportionation).
// It returns nil where there is no counterpart or what hangs on it runs back into the pattern.
func (t *Transform) otherHalf(target *molecule.Molecule, part int, s site) *molecule.Molecule {
	at := t.laidSlots(s)
	b := &molecule.Builder{}
	pq := &t.part[backward][part]
	index := make([]int, len(pq.query.Atoms))
	twins := 0
	for q, qa := range pq.query.Atoms {
		el, ok := qa.SingleElement()
		if !ok {
			return nil
		}
		index[q] = b.AddAtom(molecule.Atom{Element: el, Charge: qa.Charge, Hydrogens: molecule.AutoHydrogens})
		if qa.Hydrogens >= 0 {
			b.Atoms[index[q]].Hydrogens = uint8(qa.Hydrogens)
		}
	}
	for _, qb := range pq.query.Bonds {
		order, definite := writtenOrder(qb)
		if !definite {
			return nil
		}
		b.AddBond(index[qb.A], index[qb.B], order)
	}
	for q := range pq.query.Atoms {
		slot := t.script.slotOf[backward][pq.first+q]
		twin := t.script.twin[slot]
		if twin < 0 {
			twin = t.inSamePart(slot)
		}
		if twin < 0 || at[twin] < 0 {
			continue
		}
		twins++
		if !copyBranches(b, index[q], target, at[twin], at) {
			return nil
		}
	}
	if twins == 0 {
		return nil
	}
	m, err := b.Build()
	if err != nil {
		return nil
	}
	return m
}

// laidSlots gives each slot its target atom, -1 where it is not laid.
func (t *Transform) laidSlots(s site) []int32 {
	at := make([]int32, len(t.script.slots))
	for i := range at {
		at[i] = -1
	}
	for part, m := range s {
		t.layPart(at, part, m, 0)
	}
	return at
}

// counterpart returns the slot of the same reactant part whose surroundings there are alike, -1 if none.
func (s *script) counterpart(slot int) int {
	q := s.slots[slot].at[forward]
	if q < 0 {
		return -1
	}
	mine := s.reactantSurroundings(q)
	for other := range s.side[forward].Atoms {
		if other != q && s.partOf(forward, other) == s.partOf(forward, q) && slices.Equal(mine, s.reactantSurroundings(other)) {
			return s.slotOf[forward][other]
		}
	}
	return -1
}

// inSamePart returns the slot at the same place of the other reactant part that must be the same molecule, -1 if none.
func (t *Transform) inSamePart(slot int) int {
	q := t.script.slots[slot].at[forward]
	if q < 0 || len(t.same) != 2 {
		return -1
	}
	parts := t.part[forward]
	mine, other := parts[t.same[0]], parts[t.same[1]]
	if p := t.script.partOf(forward, q); p == t.same[1] {
		mine, other = other, mine
	} else if p != t.same[0] {
		return -1
	}
	if len(mine.query.Atoms) != len(other.query.Atoms) {
		return -1
	}
	return t.script.slotOf[forward][other.first+q-mine.first]
}

// reactantSurroundings is the element of a reactant query atom and its sorted bonds (order, element).
func (s *script) reactantSurroundings(q int) []int {
	side := s.side[forward]
	el, _ := side.Atoms[q].SingleElement()
	var around []int
	for _, b := range side.Bonds {
		far := -1
		if b.A == q {
			far = b.B
		} else if b.B == q {
			far = b.A
		}
		if far >= 0 {
			order, _ := writtenOrder(b)
			other, _ := side.Atoms[far].SingleElement()
			around = append(around, int(order)<<8|int(other))
		}
	}
	sort.Ints(around)
	return append([]int{int(el)}, around...)
}

// copyBranches hangs on atom `on` of b a copy of everything that hangs on atom a of the target outside the
// laid atoms; false where a branch leads back to them.
func copyBranches(b *molecule.Builder, on int, target *molecule.Molecule, a int32, laid []int32) bool {
	inPattern := map[int32]bool{}
	for _, x := range laid {
		if x >= 0 {
			inPattern[x] = true
		}
	}
	copied := map[int32]int{a: on}
	queue := []int32{a}
	seenBond := map[int32]bool{}
	for len(queue) > 0 {
		x := queue[0]
		queue = queue[1:]
		for _, n := range target.Neighbors(int(x)) {
			if seenBond[n.Bond] {
				continue
			}
			if inPattern[n.Atom] {
				if x != a {
					return false
				}
				continue
			}
			seenBond[n.Bond] = true
			if _, done := copied[n.Atom]; !done {
				at := target.Atom(int(n.Atom))
				at.Aromatic, at.Class = false, 0
				copied[n.Atom] = b.AddAtom(at)
				queue = append(queue, n.Atom)
			}
			b.AddBond(copied[x], copied[n.Atom], target.Bond(int(n.Bond)).Order)
		}
	}
	return true
}
