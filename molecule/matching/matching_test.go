package matching

import (
	"math/rand"
	"testing"
)

// pack makes the arrays of a graph from an edge list.
func pack(n int, edges [][2]int32) (first []int32, nbrs []Neighbor, usable []bool) {
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
	usable = make([]bool, len(edges))
	for i := range usable {
		usable[i] = true
	}
	return first, nbrs, usable
}

// force tries all matchings: the fewest required vertices left alone, and with all of them
// covered the most vertices covered.
func force(edges [][2]int32, role []Role) (alone, covered int) {
	n := len(role)
	alone, covered = n+1, 0
	used := make([]bool, n)
	var try func(i int)
	try = func(i int) {
		if i == len(edges) {
			left, c := 0, 0
			for a, u := range used {
				if u {
					c++
				} else if role[a] == Required {
					left++
				}
			}
			if left < alone || left == alone && c > covered {
				alone, covered = left, c
			}
			return
		}
		try(i + 1)
		if e := edges[i]; !used[e[0]] && !used[e[1]] && role[e[0]] != Absent && role[e[1]] != Absent {
			used[e[0]], used[e[1]] = true, true
			try(i + 1)
			used[e[0]], used[e[1]] = false, false
		}
	}
	try(0)
	return alone, covered
}

func TestAgainstForce(t *testing.T) {
	r := rand.New(rand.NewSource(11))
	var m Matcher
	for round := range 4000 {
		n := 2 + r.Intn(7)
		var edges [][2]int32
		for i := int32(0); i < int32(n); i++ {
			for j := int32(0); j < i; j++ {
				if r.Intn(5) < 2 {
					edges = append(edges, [2]int32{i, j})
				}
			}
		}
		if len(edges) > 12 {
			edges = edges[:12]
		}
		role := make([]Role, n)
		for i := range role {
			role[i] = Role(1 + r.Intn(8))
			if role[i] > Required {
				role[i] = Required
			}
			if r.Intn(10) == 0 {
				role[i] = Absent
			}
		}
		first, nbrs, usable := pack(n, edges)
		wantAlone, wantCovered := force(edges, role)
		mate, alone := m.Match(first, nbrs, usable, role)
		check(t, edges, role, mate)
		if len(alone) != wantAlone {
			t.Fatalf("round %d: edges %v roles %v: %d alone, want %d", round, edges, role, len(alone), wantAlone)
		}
		if wantAlone > 0 {
			continue
		}
		mate, _ = m.Largest(first, nbrs, usable, role)
		check(t, edges, role, mate)
		covered := 0
		for _, p := range mate {
			if p >= 0 {
				covered++
			}
		}
		if covered != wantCovered {
			t.Fatalf("round %d: edges %v roles %v: %d covered, want %d", round, edges, role, covered, wantCovered)
		}
	}
}

// TestReach compares with matchings that leave another vertex free.
func TestReach(t *testing.T) {
	r := rand.New(rand.NewSource(12))
	var m Matcher
	tried := 0
	for tried < 600 {
		n := 3 + 2*r.Intn(4)
		var edges [][2]int32
		for i := int32(0); i < int32(n); i++ {
			for j := int32(0); j < i; j++ {
				if r.Intn(3) == 0 {
					edges = append(edges, [2]int32{i, j})
				}
			}
		}
		role := make([]Role, n)
		for i := range role {
			role[i] = Required
		}
		first, nbrs, usable := pack(n, edges)
		role[0] = Absent
		mate, alone := m.Match(first, nbrs, usable, role)
		if alone != nil {
			continue
		}
		tried++
		mate = append([]int32(nil), mate...)
		role[0] = Required
		reached := append([]bool(nil), m.Reach(first, nbrs, usable, role, mate, 0)...)
		for v := 1; v < n; v++ {
			role[v] = Absent
			_, alone := m.Match(first, nbrs, usable, role)
			role[v] = Required
			if reached[v] != (alone == nil) {
				t.Fatalf("edges %v matching %v: vertex %d reached %v", edges, mate, v, reached[v])
			}
		}
	}
}

// check says that mate is a matching over the edges.
func check(t *testing.T, edges [][2]int32, role []Role, mate []int32) {
	t.Helper()
	for a, b := range mate {
		if b < 0 {
			continue
		}
		found := false
		for _, e := range edges {
			found = found || int(e[0]) == a && e[1] == b || int(e[1]) == a && e[0] == b
		}
		if !found || int(mate[b]) != a || role[a] == Absent {
			t.Fatalf("edges %v roles %v: %v is no matching", edges, role, mate)
		}
	}
}

// TestLongChain: no recursion, and a chain matched from one end needs one long augmentation at most.
func TestLongChain(t *testing.T) {
	n := 20_000
	var edges [][2]int32
	role := make([]Role, n)
	for i := range n {
		role[i] = Required
		if i > 0 {
			edges = append(edges, [2]int32{int32(i - 1), int32(i)})
		}
	}
	first := make([]int32, n+1)
	var nbrs []Neighbor
	for a := range n {
		first[a] = int32(len(nbrs))
		if a > 0 {
			nbrs = append(nbrs, Neighbor{Atom: int32(a - 1), Bond: int32(a - 1)})
		}
		if a+1 < n {
			nbrs = append(nbrs, Neighbor{Atom: int32(a + 1), Bond: int32(a)})
		}
	}
	first[n] = int32(len(nbrs))
	usable := make([]bool, len(edges))
	for i := range usable {
		usable[i] = true
	}
	var m Matcher
	if _, alone := m.Match(first, nbrs, usable, role); alone != nil {
		t.Errorf("%d atoms left alone", len(alone))
	}
}
