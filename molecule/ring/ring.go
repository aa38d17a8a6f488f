// Package ring finds the rings of a graph: which bonds lie in a ring, a minimum cycle basis, and
// the relevant cycles (the union of all minimum bases, which does not depend on the numbering).
// It takes plain slices and knows no chemistry. Chains cost linear time and no recursion.
//
// Relevant cycles follow P. Vismara, Electron. J. Combin. 4 (1997) R9; blocks follow R. Tarjan,
// SIAM J. Comput. 1 (1972) 146.
package ring

// Neighbor is one entry of a packed adjacency: the atom across and the bond between.
type Neighbor = struct{ Atom, Bond int32 }

// Rings is what Finder.Find reports.
type Rings struct {
	// Basis is a minimum cycle basis, each ring its atoms in cyclic order, short rings first
	// inside each block of the graph. It is valid until the next call.
	Basis [][]int32
	// Relevant are the relevant cycles; it shares the rings of Basis where the two agree. When a
	// block has more than maxRelevant of them only one per family is listed. It is valid until the
	// next call.
	Relevant [][]int32
}

// maxRelevant bounds the relevant cycles listed per block: a chain of n fused large rings has 2^n.
const maxRelevant = 600

// Finder holds working memory that is reused between calls. Not safe for concurrent use.
type Finder struct {
	order, low  []int32 // visiting time from 1, and the earliest time reachable
	next        []int32 // next adjacency entry to look at
	via         []int32 // bond by which the atom was reached
	path        []int32 // atoms of the current depth-first path
	bonds       []int32 // bonds not yet assigned to a block
	local       []int32 // atom -> index inside the block, -1 outside
	used        []bool  // bond already pushed
	block       blockFinder
	intsForRing []int32 // arena for rings
	basis       [][]int32
	relevant    [][]int32
}

// Find perceives the rings of the graph with atoms 0..len(first)-2; the neighbours of atom a are
// nbrs[first[a]:first[a+1]]. inRing (one entry per bond) is filled.
func (f *Finder) Find(first []int32, nbrs []Neighbor, inRing []bool) Rings {
	n := len(first) - 1
	f.order, f.low = zeroed(f.order, n), zeroed(f.low, n)
	f.next, f.via = sized(f.next, n), sized(f.via, n)
	f.path, f.bonds = f.path[:0], f.bonds[:0]
	f.intsForRing = f.intsForRing[:0]
	if cap(f.used) < len(inRing) {
		f.used = make([]bool, len(inRing)+len(inRing)/2)
	}
	f.used = f.used[:len(inRing)]
	clear(f.used)
	clear(inRing)
	if len(f.local) < n {
		f.local = make([]int32, n)
		for i := range f.local {
			f.local[i] = -1
		}
	}
	copy(f.next, first[:n])
	out := Rings{Basis: f.basis[:0], Relevant: f.relevant[:0]}
	time := int32(0)
	for root := int32(0); root < int32(n); root++ {
		if f.order[root] != 0 {
			continue
		}
		time++
		f.order[root], f.low[root], f.via[root] = time, time, -1
		f.path = append(f.path, root)
		for len(f.path) > 0 {
			a := f.path[len(f.path)-1]
			if f.next[a] < first[a+1] {
				nb := nbrs[f.next[a]]
				f.next[a]++
				if f.used[nb.Bond] {
					continue
				}
				f.used[nb.Bond] = true
				f.bonds = append(f.bonds, nb.Bond, a, nb.Atom)
				if f.order[nb.Atom] == 0 {
					time++
					f.order[nb.Atom], f.low[nb.Atom], f.via[nb.Atom] = time, time, nb.Bond
					f.path = append(f.path, nb.Atom)
				} else {
					f.low[a] = min(f.low[a], f.order[nb.Atom])
				}
				continue
			}
			f.path = f.path[:len(f.path)-1]
			if len(f.path) == 0 {
				break
			}
			up := f.path[len(f.path)-1]
			f.low[up] = min(f.low[up], f.low[a])
			if f.low[a] >= f.order[up] {
				f.closeBlock(f.via[a], inRing, &out)
			}
		}
	}
	f.basis, f.relevant = out.Basis, out.Relevant
	return out
}

// closeBlock takes the bonds back to and including bond from the stack: they form one block.
func (f *Finder) closeBlock(bond int32, inRing []bool, out *Rings) {
	i := len(f.bonds) - 3
	for f.bonds[i] != bond {
		i -= 3
	}
	edges := f.bonds[i:]
	if len(edges) > 3 {
		for k := 0; k < len(edges); k += 3 {
			inRing[edges[k]] = true
		}
		f.ringsOfBlock(edges, out)
	}
	f.bonds = f.bonds[:i]
}

// ringsOfBlock adds the rings of one block, given as triples bond, atom, atom.
func (f *Finder) ringsOfBlock(edges []int32, out *Rings) {
	b := &f.block
	b.reset()
	for k := 0; k < len(edges); k += 3 {
		b.ends = append(b.ends, [2]int32{f.localIndex(edges[k+1]), f.localIndex(edges[k+2])})
	}
	for _, a := range b.atoms {
		f.local[a] = -1
	}
	b.adjacency()
	if len(b.ends) == len(b.atoms) {
		r := b.walkCycle(f.arena(len(b.atoms)))
		out.Basis = append(out.Basis, r)
		out.Relevant = append(out.Relevant, r)
		return
	}
	if len(b.ends) == len(b.atoms)+1 {
		b.theta(f, out)
		return
	}
	b.find(f, out)
}

func (f *Finder) localIndex(a int32) int32 {
	if f.local[a] < 0 {
		f.local[a] = int32(len(f.block.atoms))
		f.block.atoms = append(f.block.atoms, a)
	}
	return f.local[a]
}

// arena returns an empty slice with room for n atoms.
func (f *Finder) arena(n int) []int32 {
	if cap(f.intsForRing)-len(f.intsForRing) < n {
		f.intsForRing = make([]int32, 0, max(4*n, 256))
	}
	at := len(f.intsForRing)
	f.intsForRing = f.intsForRing[:at+n]
	return f.intsForRing[at : at : at+n]
}

func sized(s []int32, n int) []int32 {
	if cap(s) < n {
		return make([]int32, n, n+n/2)
	}
	return s[:n]
}

func zeroed(s []int32, n int) []int32 {
	s = sized(s, n)
	clear(s)
	return s
}
