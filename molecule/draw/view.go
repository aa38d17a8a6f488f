package draw

import (
	"cmp"
	"slices"

	"shelfward/molecule"
	"shelfward/molecule/ring"
)

// view is a molecule renumbered by its canonical order. Everything that lays out works on it, so that the
// picture does not depend on the order of the atoms in the input.
type view struct {
	m       *molecule.Molecule
	n       int
	first   []int32
	nbrs    []molecule.Neighbor // bonds keep the numbers of the molecule
	rings   [][]int32
	system  []int32 // ring -> ring system
	systems int
	arena   []int32
	inRing  []bool // by bond
	finder  ring.Finder
	tally   []int32
}

// load fills v with m.
func (v *view) load(m *molecule.Molecule) {
	n := m.NumAtoms()
	v.m, v.n = m, n
	ranks := m.Ranks()
	v.first = resize(v.first, n+1)
	v.tally = resize(v.tally, n)
	for a, r := range ranks {
		v.tally[r] = int32(a)
	}
	v.nbrs = v.nbrs[:0]
	for r := range n {
		v.first[r] = int32(len(v.nbrs))
		start := len(v.nbrs)
		for _, nb := range m.Neighbors(int(v.tally[r])) {
			v.nbrs = append(v.nbrs, molecule.Neighbor{Atom: ranks[nb.Atom], Bond: nb.Bond})
		}
		list := v.nbrs[start:]
		for i := 1; i < len(list); i++ {
			for j := i; j > 0 && list[j].Atom < list[j-1].Atom; j-- {
				list[j], list[j-1] = list[j-1], list[j]
			}
		}
	}
	v.first[n] = int32(len(v.nbrs))
	v.arena, v.rings = v.arena[:0], v.rings[:0]
	for _, r := range m.Rings() {
		start := len(v.arena)
		for _, a := range r {
			v.arena = append(v.arena, ranks[a])
		}
		v.rings = append(v.rings, v.arena[start:len(v.arena):len(v.arena)])
	}
	v.findSystems()
	if v.ambiguous() {
		v.inRing = resize(v.inRing, m.NumBonds())
		v.rings = v.rings[:0]
		for _, r := range v.finder.Find(v.first, v.nbrs, v.inRing).Basis {
			v.rings = append(v.rings, r)
		}
		v.findSystems()
	}
}

func resize[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n, n+n/2+8)
	}
	s = s[:n]
	clear(s)
	return s
}

func (v *view) neighbors(a int32) []molecule.Neighbor { return v.nbrs[v.first[a]:v.first[a+1]] }
func (v *view) degree(a int32) int                    { return int(v.first[a+1] - v.first[a]) }

// atom returns the atom of the molecule behind a place in the order.
func (v *view) atom(a int32) molecule.Atom { return v.m.Atom(int(v.tally[a])) }

// joined returns the bond between two atoms, or -1.
func (v *view) joined(a, b int32) int32 {
	for _, nb := range v.neighbors(a) {
		if nb.Atom == b {
			return nb.Bond
		}
	}
	return -1
}

// findSystems writes each ring from its lowest atom towards the lower neighbour, sorts the rings, and joins
// those that share a bond into systems.
func (v *view) findSystems() {
	for _, r := range v.rings {
		at := 0
		for i := range r {
			if r[i] < r[at] {
				at = i
			}
		}
		rotate(r, at)
		if n := len(r); r[n-1] < r[1] {
			slices.Reverse(r[1:])
		}
	}
	slices.SortFunc(v.rings, func(r, s []int32) int {
		if c := cmp.Compare(len(r), len(s)); c != 0 {
			return c
		}
		return slices.Compare(r, s)
	})
	v.system = resize(v.system, len(v.rings))
	for i := range v.system {
		v.system[i] = int32(i)
	}
	for i, r := range v.rings {
		for j := range i {
			if v.system[i] != v.system[j] && common(r, v.rings[j]) > 1 {
				old, now := max(v.system[i], v.system[j]), min(v.system[i], v.system[j])
				for k := range i + 1 {
					if v.system[k] == old {
						v.system[k] = now
					}
				}
			}
		}
	}
	v.systems = 0
	for i := range v.system { // number them in order of their first ring
		if v.system[i] == int32(i) {
			v.system[i] = int32(v.systems)
			v.systems++
		} else {
			v.system[i] = v.system[v.system[i]]
		}
	}
}

// rotate makes r start at its entry k.
func rotate(r []int32, k int) {
	slices.Reverse(r[:k])
	slices.Reverse(r[k:])
	slices.Reverse(r)
}

// common counts the atoms that two rings share.
func common(r, s []int32) int {
	n := 0
	for _, a := range r {
		for _, b := range s {
			if a == b {
				n++
			}
		}
	}
	return n
}

// ambiguous says that the cycle basis may depend on the numbering of the input: rings bridge each other, or a
// system is large enough to be a cage.
func (v *view) ambiguous() bool {
	size := 0
	for i, r := range v.rings {
		mates := 0
		for j := range v.rings {
			if v.system[i] == v.system[j] {
				mates++
				if j < i && common(r, v.rings[j]) > 2 {
					return true
				}
			}
		}
		size = max(size, mates)
	}
	return size > 4
}
