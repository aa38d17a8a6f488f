// Package matching finds a maximum matching of a general graph (J. Edmonds, Canad. J. Math. 17
// (1965) 449, breadth-first form with blossoms contracted by their base). It takes plain slices,
// knows no chemistry and does not recurse.
package matching

// Neighbor is one entry of a packed adjacency: the atom across and the bond between.
type Neighbor = struct{ Atom, Bond int32 }

// Matcher holds working memory that is reused between calls. Not safe for concurrent use.
type Matcher struct {
	mate, parent, base []int32
	outer              []bool
	onPath, inBlossom  []bool
	queue, touched     []int32
}

// Role says what a vertex may do in the matching.
type Role uint8

const (
	Absent   Role = iota // takes no part
	Optional             // may stay alone
	Required             // must be matched
)

// Match looks for a matching of the graph on the vertices that take part, over the bonds marked in
// usable, that covers every Required vertex. It returns the partner of each vertex (-1 none; valid
// until the next call) and the vertices that could not be covered, nil on success.
func (m *Matcher) Match(first []int32, nbrs []Neighbor, usable []bool, role []Role) (mate, alone []int32) {
	n := len(first) - 1
	m.grow(n)
	for i := range m.mate {
		m.mate[i] = -1
	}
	// A greedy start along the numbering settles most atoms of chains and rings.
	for a := 0; a < n; a++ {
		if role[a] != Required || m.mate[a] >= 0 {
			continue
		}
		if b := m.loneliest(first, nbrs, usable, role, int32(a)); b >= 0 {
			m.mate[a], m.mate[b] = b, int32(a)
		}
	}
	for a := 0; a < n; a++ {
		if role[a] == Required && m.mate[a] < 0 && !m.augment(first, nbrs, usable, role, int32(a), true) {
			alone = append(alone, int32(a))
		}
	}
	return m.mate, alone
}

// Largest is Match with as many Optional vertices covered as possible besides.
func (m *Matcher) Largest(first []int32, nbrs []Neighbor, usable []bool, role []Role) (mate, alone []int32) {
	if _, alone = m.Match(first, nbrs, usable, role); alone != nil {
		return m.mate, alone
	}
	for a := range m.mate {
		if role[a] == Optional && m.mate[a] < 0 {
			m.augment(first, nbrs, usable, role, int32(a), false)
		}
	}
	return m.mate, nil
}

func (m *Matcher) grow(n int) {
	if cap(m.mate) < n {
		c := n + n/2
		m.mate, m.parent, m.base = make([]int32, c), make([]int32, c), make([]int32, c)
		m.outer, m.onPath, m.inBlossom = make([]bool, c), make([]bool, c), make([]bool, c)
	}
	m.mate, m.parent, m.base = m.mate[:n], m.parent[:n], m.base[:n]
	m.outer, m.onPath, m.inBlossom = m.outer[:n], m.onPath[:n], m.inBlossom[:n]
}

// loneliest returns the free required neighbour of a with the fewest free neighbours, -1 if none.
func (m *Matcher) loneliest(first []int32, nbrs []Neighbor, usable []bool, role []Role, a int32) int32 {
	found, fewest := int32(-1), 1<<30
	for _, nb := range nbrs[first[a]:first[a+1]] {
		if !usable[nb.Bond] || role[nb.Atom] != Required || m.mate[nb.Atom] >= 0 {
			continue
		}
		free := 0
		for _, c := range nbrs[first[nb.Atom]:first[nb.Atom+1]] {
			if usable[c.Bond] && role[c.Atom] != Absent && m.mate[c.Atom] < 0 {
				free++
			}
		}
		if free < fewest {
			found, fewest = nb.Atom, free
		}
	}
	return found
}

// augment covers root along an alternating path, or reports that none exists. A path may also end
// at an optional vertex that then loses its partner, where exchange allows it.
func (m *Matcher) augment(first []int32, nbrs []Neighbor, usable []bool, role []Role, root int32, exchange bool) bool {
	for i := range m.parent {
		m.parent[i], m.base[i], m.outer[i] = -1, int32(i), false
	}
	m.outer[root] = true
	m.queue = append(m.queue[:0], root)
	for i := 0; i < len(m.queue); i++ {
		a := m.queue[i]
		for _, nb := range nbrs[first[a]:first[a+1]] {
			b := nb.Atom
			if !usable[nb.Bond] || role[b] == Absent || m.base[a] == m.base[b] || m.mate[a] == b {
				continue
			}
			if b == root || (m.mate[b] >= 0 && m.parent[m.mate[b]] >= 0) {
				if v := m.contract(a, b, role); v >= 0 && exchange {
					end := m.mate[v]
					m.mate[v] = -1
					m.flip(end)
					return true
				}
				continue
			}
			if m.parent[b] >= 0 {
				continue
			}
			m.parent[b] = a
			if m.mate[b] < 0 {
				m.flip(b)
				return true
			}
			c := m.mate[b]
			m.outer[c] = true
			m.queue = append(m.queue, c)
			if exchange && role[c] == Optional {
				m.mate[c] = -1
				m.flip(b)
				return true
			}
		}
	}
	return false
}

// Reach returns the vertices that an alternating path of even length leads to from the free vertex
// root: those that could be free in its place. mate is a matching of the vertices with a role other
// than Absent that leaves only root free among them. The result is valid until the next call.
func (m *Matcher) Reach(first []int32, nbrs []Neighbor, usable []bool, role []Role, mate []int32, root int32) []bool {
	m.grow(len(first) - 1)
	copy(m.mate, mate)
	for i := range m.parent {
		m.parent[i], m.base[i], m.outer[i] = -1, int32(i), false
	}
	m.outer[root] = true
	m.queue = append(m.queue[:0], root)
	for i := 0; i < len(m.queue); i++ {
		a := m.queue[i]
		for _, nb := range nbrs[first[a]:first[a+1]] {
			b := nb.Atom
			switch {
			case !usable[nb.Bond] || role[b] == Absent || m.base[a] == m.base[b] || m.mate[a] == b:
			case b == root || m.mate[b] >= 0 && m.parent[m.mate[b]] >= 0:
				m.contract(a, b, role)
			case m.parent[b] < 0 && m.mate[b] >= 0:
				m.parent[b] = a
				c := m.mate[b]
				m.outer[c] = true
				m.queue = append(m.queue, c)
			}
		}
	}
	return m.outer
}

// flip exchanges matched and unmatched bonds from the free inner vertex b back to the root.
func (m *Matcher) flip(b int32) {
	for b >= 0 {
		a := m.parent[b]
		next := m.mate[a]
		m.mate[b], m.mate[a] = a, b
		b = next
	}
}

// contract closes the blossom that the bond a-b makes. It returns an optional vertex that became
// outer by it (an even path leads there from the root), or -1.
func (m *Matcher) contract(a, b int32, role []Role) int32 {
	optional := int32(-1)
	base := m.meet(a, b)
	clear(m.inBlossom)
	m.climb(a, base, b)
	m.climb(b, base, a)
	for v := range m.base {
		if m.inBlossom[m.base[v]] {
			m.base[v] = base
			if !m.outer[v] {
				m.outer[v] = true
				m.queue = append(m.queue, int32(v))
				if role[v] == Optional {
					optional = int32(v)
				}
			}
		}
	}
	return optional
}

// meet returns the base where the tree paths of a and b join.
func (m *Matcher) meet(a, b int32) int32 {
	clear(m.onPath)
	for {
		a = m.base[a]
		m.onPath[a] = true
		if m.mate[a] < 0 {
			break
		}
		a = m.parent[m.mate[a]]
	}
	for {
		b = m.base[b]
		if m.onPath[b] {
			return b
		}
		b = m.parent[m.mate[b]]
	}
}

// climb marks the blossom from v up to base and turns the parents round.
func (m *Matcher) climb(v, base, child int32) {
	for m.base[v] != base {
		m.inBlossom[m.base[v]] = true
		m.inBlossom[m.base[m.mate[v]]] = true
		m.parent[v] = child
		child = m.mate[v]
		v = m.parent[m.mate[v]]
	}
}
