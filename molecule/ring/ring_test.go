package ring

import (
	"math/rand"
	"slices"
	"testing"
)

func pack(n int, edges [][2]int32) (first []int32, nbrs []Neighbor) {
	first = make([]int32, n+1)
	for a := range n {
		first[a] = int32(len(nbrs))
		for i, e := range edges {
			if int(e[0]) == a {
				nbrs = append(nbrs, Neighbor{Atom: e[1], Bond: int32(i)})
			}
			if int(e[1]) == a {
				nbrs = append(nbrs, Neighbor{Atom: e[0], Bond: int32(i)})
			}
		}
	}
	first[n] = int32(len(nbrs))
	return first, nbrs
}

// allCycles lists the simple cycles as bond sets (graphs of at most 64 bonds).
func allCycles(n int, edges [][2]int32) []uint64 {
	first, nbrs := pack(n, edges)
	found := map[uint64]bool{}
	on := make([]bool, n)
	var walk func(root, at int32, bits uint64)
	walk = func(root, at int32, bits uint64) {
		for _, nb := range nbrs[first[at]:first[at+1]] {
			if bits>>nb.Bond&1 == 1 {
				continue
			}
			if nb.Atom == root {
				found[bits|1<<nb.Bond] = true
				continue
			}
			if nb.Atom > root && !on[nb.Atom] {
				on[nb.Atom] = true
				walk(root, nb.Atom, bits|1<<nb.Bond)
				on[nb.Atom] = false
			}
		}
	}
	for r := range int32(n) {
		walk(r, r, 0)
	}
	var list []uint64
	for c := range found {
		list = append(list, c)
	}
	return list
}

func size(c uint64) int {
	n := 0
	for ; c != 0; c &= c - 1 {
		n++
	}
	return n
}

// inSpan says whether c is a sum of members of set.
func inSpan(c uint64, set []uint64) bool {
	var rows []uint64
	reduce := func(x uint64) uint64 {
		for _, r := range rows {
			x = min(x, x^r)
		}
		return x
	}
	for _, s := range set {
		if s = reduce(s); s != 0 {
			rows = append(rows, s)
			slices.SortFunc(rows, func(x, y uint64) int {
				if x > y {
					return -1
				}
				return 1
			})
		}
	}
	return reduce(c) == 0
}

// TestAgainstAllCycles compares with the definitions on random graphs: a cycle is relevant when it
// is no sum of shorter ones; a basis has as many rings as independent cycles and the least total.
func TestAgainstAllCycles(t *testing.T) {
	r := rand.New(rand.NewSource(4))
	var f Finder
	for round := range 1500 {
		n := 3 + r.Intn(7)
		var edges [][2]int32
		for i := int32(1); i < int32(n); i++ {
			edges = append(edges, [2]int32{i, int32(r.Intn(int(i)))})
		}
		for range r.Intn(5) {
			e := [2]int32{int32(r.Intn(n)), int32(r.Intn(n))}
			if e[0] != e[1] && !slices.Contains(edges, e) && !slices.Contains(edges, [2]int32{e[1], e[0]}) {
				edges = append(edges, e)
			}
		}
		r.Shuffle(len(edges), func(i, j int) { edges[i], edges[j] = edges[j], edges[i] })
		first, nbrs := pack(n, edges)
		inRing := make([]bool, len(edges))
		got := f.Find(first, nbrs, inRing)
		all := allCycles(n, edges)
		var want []uint64
		total := uint64(0)
		for _, c := range all {
			var shorter []uint64
			for _, d := range all {
				if size(d) < size(c) {
					shorter = append(shorter, d)
				}
			}
			if !inSpan(c, shorter) {
				want = append(want, c)
			}
			total |= c
		}
		relevant := bitsOf(t, first, nbrs, got.Relevant)
		slices.Sort(want)
		slices.Sort(relevant)
		if !slices.Equal(want, relevant) {
			t.Fatalf("round %d: edges %v: relevant %b, want %b", round, edges, relevant, want)
		}
		for i := range edges {
			if inRing[i] != (total>>i&1 == 1) {
				t.Fatalf("round %d: edges %v: bond %d in a ring: %v", round, edges, i, inRing[i])
			}
		}
		basis := bitsOf(t, first, nbrs, got.Basis)
		if len(basis) != len(edges)-n+1 {
			t.Fatalf("round %d: edges %v: basis of %d", round, edges, len(basis))
		}
		for i, b := range basis {
			if !slices.Contains(want, b) || inSpan(b, append(slices.Clone(basis[:i]), basis[i+1:]...)) {
				t.Fatalf("round %d: edges %v: bad basis %b", round, edges, basis)
			}
		}
	}
}

func bitsOf(t *testing.T, first []int32, nbrs []Neighbor, rings [][]int32) []uint64 {
	t.Helper()
	var list []uint64
	for _, r := range rings {
		c := uint64(0)
		for i, a := range r {
			next := r[(i+1)%len(r)]
			at := slices.IndexFunc(nbrs[first[a]:first[a+1]], func(nb Neighbor) bool { return nb.Atom == next })
			if at < 0 {
				t.Fatalf("ring %v is not closed", r)
			}
			c |= 1 << nbrs[int(first[a])+at].Bond
		}
		list = append(list, c)
	}
	return list
}

// TestManyRings: a chain of fused six-rings, a chain of large rings and a complete graph.
func TestManyRings(t *testing.T) {
	var f Finder
	var edges [][2]int32
	n := 2
	edges = append(edges, [2]int32{0, 1})
	a, b := int32(0), int32(1)
	for range 400 { // ladder of six-rings
		x := int32(n)
		n += 4
		edges = append(edges, [2]int32{a, x}, [2]int32{x, x + 1}, [2]int32{b, x + 2}, [2]int32{x + 2, x + 3}, [2]int32{x + 1, x + 3})
		a, b = x+1, x+3
	}
	first, nbrs := pack(n, edges)
	got := f.Find(first, nbrs, make([]bool, len(edges)))
	if len(got.Basis) != 400 || len(got.Relevant) != 400 {
		t.Errorf("ladder: %d rings, %d relevant, want 400", len(got.Basis), len(got.Relevant))
	}
	edges, n = nil, 12 // K12
	for i := int32(0); i < 12; i++ {
		for j := int32(0); j < i; j++ {
			edges = append(edges, [2]int32{i, j})
		}
	}
	first, nbrs = pack(n, edges)
	got = f.Find(first, nbrs, make([]bool, len(edges)))
	if len(got.Basis) != 66-11 || len(got.Relevant) != 220 {
		t.Errorf("complete graph: %d rings, %d relevant, want 55 and 220", len(got.Basis), len(got.Relevant))
	}
}
