package pattern

import "slices"

// members holds which atoms of one molecule belong to which group, each group found when first asked for.
type members struct {
	words int      // 64-bit words that a set of atoms takes
	known []uint64 // groups looked for
	some  []uint64 // groups that occur
	in    []uint64 // per group the atoms of its core
	at    []int16  // per group 1 + its place in lists, 0 not listed yet
	lists [][][]int32
	room  []int32 // of the lists
}

// reset makes room for the groups of a molecule of n atoms; all are unknown.
func (ms *members) reset(groups, n int) {
	ms.words = (n + 63) / 64
	ms.known, ms.some = zeroed(ms.known, (groups+63)/64), zeroed(ms.some, (groups+63)/64)
	ms.in = sized(ms.in, groups*ms.words) // cleared group by group
	ms.at = zeroed(ms.at, groups)
	ms.lists, ms.room = ms.lists[:0], ms.room[:0]
}

func sized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

func zeroed[T any](s []T, n int) []T {
	s = sized(s, n)
	clear(s)
	return s
}

// core is the set of atoms of a group.
func (ms *members) core(g int) []uint64 { return ms.in[g*ms.words : (g+1)*ms.words] }

// occurs finds the atoms of a group, once, and says whether there are any. A group can only ask for
// earlier groups, so there is no circle.
func (s *Subject) occurs(g int) bool {
	ms := &s.members
	if len(ms.at) == 0 {
		ms.reset(len(s.groups.list), len(s.atom))
	}
	if ms.known[g>>6]>>(g&63)&1 == 0 {
		ms.known[g>>6] |= 1 << (g & 63)
		if s.find(g) {
			ms.some[g>>6] |= 1 << (g & 63)
		}
	}
	return ms.some[g>>6]>>(g&63)&1 != 0
}

// find marks the atoms of a group.
func (s *Subject) find(g int) (found bool) {
	in := s.members.core(g)
	clear(in)
	for qi, q := range s.groups.list[g].Queries {
		c := q.screened()
		if !q.possible(s, c) {
			continue
		}
		x := newMatcher(q, s, c)
		x.core, x.mark = s.groups.list[g].core[qi], in
		x.step(0)
		x.free()
	}
	for _, w := range in {
		found = found || w != 0
	}
	return found
}

// list finds the occurrences of a group.
func (s *Subject) list(g int) [][]int32 {
	if !s.occurs(g) {
		return nil
	}
	ms := &s.members
	if ms.at[g] > 0 {
		return ms.lists[ms.at[g]-1]
	}
	var sets [][]int32
	for qi, q := range s.groups.list[g].Queries {
		core := s.groups.list[g].core[qi]
		q.Each(s, func(to Mapping) bool {
			at := len(ms.room)
			for _, c := range core {
				ms.room = append(ms.room, to[c])
			}
			set := ms.room[at:len(ms.room):len(ms.room)]
			slices.Sort(set)
			if slices.ContainsFunc(sets, func(old []int32) bool { return slices.Equal(old, set) }) {
				ms.room = ms.room[:at]
			} else {
				sets = append(sets, set)
			}
			return true
		})
	}
	ms.lists = append(ms.lists, sets)
	ms.at[g] = int16(len(ms.lists))
	return sets
}

// InGroup says whether atom a belongs to the core of the group with an index, see Groups.Index.
func (s *Subject) InGroup(group, a int) bool { return s.inGroup(group, a) }

func (s *Subject) inGroup(g, a int) bool {
	return s.occurs(g) && s.members.core(g)[a>>6]>>(a&63)&1 != 0
}

// In says whether atom a belongs to the core of the group; an unknown id is in no molecule.
func (s *Subject) In(id string, a int) bool {
	g := s.groups.index(id)
	return g >= 0 && s.inGroup(g, a)
}

// Instances returns the occurrences of a group, each the sorted atoms of its core: shared, read only,
// valid until Reset.
func (s *Subject) Instances(id string) [][]int32 {
	g := s.groups.index(id)
	if g < 0 {
		return nil
	}
	return s.list(g)
}

// InstancesOf is Instances for the group with an index, see Groups.Index.
func (s *Subject) InstancesOf(group int) [][]int32 { return s.list(group) }
