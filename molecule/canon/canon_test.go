package canon

import (
	"bufio"
	"math/rand"
	"os"
	"slices"
	"testing"
)

// graph makes a Graph with one colour from an edge list.
func graph(n int, edges [][2]int32) *Graph {
	g := &Graph{Colours: make([]uint64, n), First: make([]int32, n+1), BondColours: make([]uint8, len(edges))}
	for _, e := range edges {
		g.First[e[0]+1]++
		g.First[e[1]+1]++
	}
	for i := range n {
		g.First[i+1] += g.First[i]
	}
	g.Neighbors = make([]Neighbor, 2*len(edges))
	at := slices.Clone(g.First)
	for i, e := range edges {
		g.BondColours[i] = 1
		g.Neighbors[at[e[0]]] = Neighbor{e[1], int32(i)}
		at[e[0]]++
		g.Neighbors[at[e[1]]] = Neighbor{e[0], int32(i)}
		at[e[1]]++
	}
	return g
}

// graph6 reads one line of the graph6 format for fewer than 63 vertices.
func graph6(line string) (n int, edges [][2]int32) {
	n = int(line[0]) - 63
	k := 0
	for j := int32(1); j < int32(n); j++ {
		for i := int32(0); i < j; i++ {
			if (line[1+k/6]-63)>>(5-k%6)&1 == 1 {
				edges = append(edges, [2]int32{i, j})
			}
			k++
		}
	}
	return n, edges
}

func shuffled(n int, edges [][2]int32, r *rand.Rand) [][2]int32 {
	to := r.Perm(n)
	out := make([][2]int32, len(edges))
	for i, k := range r.Perm(len(edges)) {
		out[i] = [2]int32{int32(to[edges[k][0]]), int32(to[edges[k][1]])}
	}
	return out
}

// TestClassesOfGraphs: as many hashes as classes, whatever the numbering. Regular graphs are what
// refinement alone cannot split.
func TestClassesOfGraphs(t *testing.T) {
	for _, name := range []string{"cubic14", "quartic11", "connected7"} {
		f, err := os.Open("../../testdata/graphs/" + name + ".g6")
		if err != nil {
			t.Fatal(err)
		}
		var w Worker
		r := rand.New(rand.NewSource(5))
		seen := map[[2]uint64]string{}
		for s := bufio.NewScanner(f); s.Scan(); {
			n, edges := graph6(s.Text())
			first := w.Label(graph(n, edges))
			if other := seen[first.Hash]; other != "" {
				t.Errorf("%s: %s and %s share a hash", name, s.Text(), other)
			}
			seen[first.Hash] = s.Text()
			for range 3 {
				again := w.Label(graph(n, shuffled(n, edges, r)))
				if again.Hash != first.Hash {
					t.Errorf("%s: %s has two hashes", name, s.Text())
				}
				if count(again.Orbits) != count(first.Orbits) {
					t.Errorf("%s: %s has %d or %d orbits", name, s.Text(), count(first.Orbits), count(again.Orbits))
				}
			}
		}
		f.Close()
	}
}

func count(orbits []int32) int {
	n := 0
	for i, o := range orbits {
		if int(o) == i {
			n++
		}
	}
	return n
}

// TestOrbitsByForce compares the orbits with those found by trying every permutation.
func TestOrbitsByForce(t *testing.T) {
	r := rand.New(rand.NewSource(9))
	var w Worker
	for range 300 {
		n := 2 + r.Intn(5)
		var edges [][2]int32
		for i := int32(0); i < int32(n); i++ {
			for j := int32(0); j < i; j++ {
				if r.Intn(2) == 0 {
					edges = append(edges, [2]int32{i, j})
				}
			}
		}
		g := graph(n, edges)
		for i := range g.Colours {
			g.Colours[i] = uint64(r.Intn(2))
		}
		got := w.Label(g).Orbits
		want := forceOrbits(g, edges)
		if !slices.Equal(got, want) {
			t.Errorf("edges %v colours %v: orbits %v, want %v", edges, g.Colours, got, want)
		}
	}
}

func forceOrbits(g *Graph, edges [][2]int32) []int32 {
	n := len(g.Colours)
	joined := map[[2]int32]bool{}
	for _, e := range edges {
		joined[[2]int32{min(e[0], e[1]), max(e[0], e[1])}] = true
	}
	orbit := make([]int32, n)
	for i := range orbit {
		orbit[i] = int32(i)
	}
	perm := make([]int32, n)
	used := make([]bool, n)
	var place func(i int)
	place = func(i int) {
		if i == n {
			for a, b := range perm {
				orbit[max(int32(a), b)] = min(orbit[max(int32(a), b)], orbit[min(int32(a), b)], int32(a), b)
			}
			return
		}
		for b := range n {
			if used[b] || g.Colours[b] != g.Colours[i] {
				continue
			}
			ok := true
			for a := range i {
				x, y := perm[a], int32(b)
				ok = ok && joined[[2]int32{int32(a), int32(i)}] == joined[[2]int32{min(x, y), max(x, y)}]
			}
			if ok {
				used[b], perm[i] = true, int32(b)
				place(i + 1)
				used[b] = false
			}
		}
	}
	place(0)
	for i := range orbit { // orbits of a group: the lowest image is reached directly
		orbit[i] = orbit[orbit[i]]
	}
	return orbit
}

// TestSymmetricGraphsStayCheap bounds the leaves met, not the time: hypercubes, complete bipartite
// graphs, a long path, a binary tree.
func TestSymmetricGraphsStayCheap(t *testing.T) {
	cube := func(d int) (int, [][2]int32) {
		var e [][2]int32
		for i := int32(0); i < 1<<d; i++ {
			for b := 0; b < d; b++ {
				if j := i ^ 1<<b; j > i {
					e = append(e, [2]int32{i, j})
				}
			}
		}
		return 1 << d, e
	}
	tree := func(n int) (int, [][2]int32) {
		var e [][2]int32
		for i := int32(1); i < int32(n); i++ {
			e = append(e, [2]int32{i, (i - 1) / 2})
		}
		return n, e
	}
	check := func(name string, n int, edges [][2]int32, most int) {
		var w Worker
		w.Label(graph(n, edges))
		if w.search.leaves > most {
			t.Errorf("%s: %d leaves, at most %d expected", name, w.search.leaves, most)
		}
	}
	n, e := cube(6)
	check("6-cube", n, e, 60)
	n, e = tree(1023)
	check("binary tree", n, e, 600)
	var path [][2]int32
	for i := int32(1); i < 1900; i++ {
		path = append(path, [2]int32{i - 1, i})
	}
	check("path", 1900, path, 2)
}
