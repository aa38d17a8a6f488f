package name

import (
	"fmt"
	"slices"
	"sort"
	"strconv"
	"strings"

	"shelfward/molecule"
)

// Polycyclic von Baeyer names (P-23.2.5): main ring as large as possible, then main bridge as large as
// possible, main ring divided as evenly as possible, low superscripts; then heteroatoms.

// maxCageRings and maxCageAtoms bound the systems named so: the search is over all rings through the system.
const (
	maxCageRings = 5
	maxCageAtoms = 24
	maxCageRuns  = 20000
)

// cageBridge is a secondary bridge: its length and the positions it joins, high before low.
type cageBridge struct {
	length    int
	low, high int
	atoms     []int32 // from the atom at high to the atom at low
}

// cagePlan is one numbering of a cage with what decides between numberings.
type cagePlan struct {
	order   []int32
	key     []int
	bridges []cageBridge
	sizes   [3]int
}

// nameCage names s as tricyclo..., tetracyclo..., pentacyclo...; s.ok stays false if it cannot.
func (w *writer) nameCage(s *ringSystem) {
	if s.rings > maxCageRings || len(s.atoms) > maxCageAtoms {
		return
	}
	for _, a := range s.atoms {
		if w.m.Atom(int(a)).Aromatic || w.ringDegree(a) > 3 && w.spiroIn(a, s) {
			return
		}
		if e := w.element(a); e != 6 && heteroRank(e) == 0 {
			return
		}
	}
	c := &cageSearch{w: w, s: s, next: map[int32][]int32{}}
	for _, a := range s.atoms {
		for _, nb := range w.m.Neighbors(int(a)) {
			if w.m.Bond(int(nb.Bond)).Ring {
				c.next[a] = append(c.next[a], nb.Atom)
			}
		}
	}
	c.rings()
	if c.runs > maxCageRuns || len(c.best) == 0 {
		return
	}
	for _, p := range c.best {
		s.orders = append(s.orders, p.order)
	}
	s.orders = lowestOrders(s.orders, w.heteroKey)
	first := c.best[0]
	elements := make([]molecule.Element, len(s.atoms))
	for i, a := range s.orders[0] {
		elements[i] = w.element(a)
	}
	s.locants = numbers(len(s.atoms))
	s.name = replacement(elements, s.locants) + first.descriptor() + stem(len(s.atoms))
	s.kind, s.ok = ringAlkane, true
}

// spiroIn says whether a is joined to the rest by two pairs of bonds that meet only in a.
func (w *writer) spiroIn(a int32, s *ringSystem) bool {
	seen := map[int32]bool{a: true}
	start := int32(-1)
	for _, nb := range w.m.Neighbors(int(a)) {
		if w.m.Bond(int(nb.Bond)).Ring {
			start = nb.Atom
			break
		}
	}
	seen[start] = true
	for stack := []int32{start}; len(stack) > 0; {
		x := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for _, nb := range w.m.Neighbors(int(x)) {
			if w.m.Bond(int(nb.Bond)).Ring && !seen[nb.Atom] {
				seen[nb.Atom] = true
				stack = append(stack, nb.Atom)
			}
		}
	}
	return len(seen) < len(s.atoms)
}

// cageSearch tries main rings and main bridges.
type cageSearch struct {
	w    *writer
	s    *ringSystem
	next map[int32][]int32
	size int // of the largest main ring found
	main [][]int32
	best []cagePlan
	runs int
}

// rings collects the largest rings through the system, then tries each as main ring.
func (c *cageSearch) rings() {
	used := map[int32]bool{}
	var path []int32
	var walk func(first, at int32)
	walk = func(first, at int32) {
		if c.runs++; c.runs > maxCageRuns {
			return
		}
		path = append(path, at)
		used[at] = true
		for _, y := range c.next[at] {
			if y == first && len(path) > 2 && path[1] < at {
				if len(path) > c.size {
					c.size, c.main = len(path), nil
				}
				if len(path) == c.size {
					c.main = append(c.main, slices.Clone(path))
				}
			}
			if !used[y] && y > first {
				walk(first, y)
			}
		}
		used[at] = false
		path = path[:len(path)-1]
	}
	atoms := slices.Clone(c.s.atoms)
	slices.Sort(atoms)
	for _, a := range atoms {
		walk(a, a)
	}
	for _, ring := range c.main {
		c.bridges(ring)
	}
}

// bridges tries every bridge over the main ring as main bridge.
func (c *cageSearch) bridges(ring []int32) {
	place := map[int32]int{}
	for i, a := range ring {
		place[a] = i
	}
	var path []int32
	used := map[int32]bool{}
	var walk func(from, at int32)
	walk = func(from, at int32) {
		if c.runs++; c.runs > maxCageRuns {
			return
		}
		for _, y := range c.next[at] {
			if p, on := place[y]; on {
				if y != from && p > place[from] && !(len(path) == 0 && (p == place[from]+1 || place[from] == 0 && p == len(ring)-1)) {
					c.number(ring, place[from], p, slices.Clone(path))
				}
				continue
			}
			if !used[y] {
				used[y] = true
				path = append(path, y)
				walk(from, y)
				path = path[:len(path)-1]
				used[y] = false
			}
		}
	}
	for _, a := range ring {
		if len(c.next[a]) > 2 {
			walk(a, a)
		}
	}
}

// number tries the eight numberings of a bicycle of ring and main bridge.
func (c *cageSearch) number(ring []int32, i, j int, bridge []int32) {
	n := len(ring)
	arc := func(from, to int) []int32 { // ring atoms strictly between, going up
		var l []int32
		for k := (from + 1) % n; k != to; k = (k + 1) % n {
			l = append(l, ring[k])
		}
		return l
	}
	x, y := arc(i, j), reversed(arc(j, i)) // both from head i to head j
	for _, swap := range []bool{false, true} {
		a, b := x, y
		if swap {
			a, b = y, x
		}
		if len(a) < len(b) {
			continue
		}
		c.finish(ring[i], ring[j], a, b, bridge)
		c.finish(ring[j], ring[i], reversed(a), reversed(b), reversed(bridge))
	}
}

// finish numbers the secondary bridges and compares the plan with the best so far. a, b and bridge lead
// from head first to head second.
func (c *cageSearch) finish(first, second int32, a, b, bridge []int32) {
	order := slices.Concat([]int32{first}, a, []int32{second}, reversed(b), bridge)
	p := cagePlan{sizes: [3]int{len(a), len(b), len(bridge)}}
	position := map[int32]int{}
	for i, x := range order {
		position[x] = i + 1
	}
	key := []int{-len(bridge), -len(b)}
	if c.worse(key) {
		return
	}
	bridges, ok := c.secondary(order, second, position)
	if !ok {
		return
	}
	for _, s := range bridges {
		// Secondary bridges are numbered from the end nearer the highest numbered bridgehead (P-23.2.5.1.3).
		order = append(order, s.atoms...)
	}
	p.order, p.bridges = order, bridges
	for _, s := range bridges {
		key = append(key, -s.length)
	}
	var low []int
	for _, s := range bridges {
		low = append(low, s.low, s.high)
	}
	sort.Ints(low)
	key = append(key, low...)
	for _, s := range bridges {
		key = append(key, s.low, s.high)
	}
	p.key = key
	k := -1
	if len(c.best) > 0 {
		k = slices.Compare(p.key, c.best[0].key)
	}
	if k < 0 {
		c.best = append(c.best[:0], p)
	} else if k == 0 && len(c.best) < maxMappings {
		c.best = append(c.best, p)
	}
}

// worse says whether the beginning of a key already loses.
func (c *cageSearch) worse(key []int) bool {
	return len(c.best) > 0 && slices.Compare(key, c.best[0].key[:len(key)]) > 0
}

// secondary finds the bridges beside the main bicycle. All must end on the main bicycle; bridges between
// bridges are not named.
func (c *cageSearch) secondary(order []int32, second int32, position map[int32]int) ([]cageBridge, bool) {
	var list []cageBridge
	done := map[int32]bool{}
	main := map[[2]int32]bool{}
	ringSize := c.size
	edge := func(x, y int32) { main[[2]int32{x, y}], main[[2]int32{y, x}] = true, true }
	for i := 0; i+1 < ringSize; i++ {
		edge(order[i], order[i+1])
	}
	edge(order[ringSize-1], order[0])
	// The main bridge runs from main bridgehead 1 to the second head.
	at := order[0]
	for _, x := range order[ringSize:] {
		edge(at, x)
		at = x
	}
	edge(at, second)
	for _, x := range order {
		for _, y := range c.next[x] {
			if position[y] > 0 && position[x] > position[y] && !main[[2]int32{x, y}] {
				list = append(list, cageBridge{0, position[y], position[x], nil})
			}
			if position[y] > 0 || done[y] {
				continue
			}
			var path []int32
			from, at := x, y
			for position[at] == 0 {
				if len(c.next[at]) != 2 || done[at] {
					return nil, false
				}
				done[at] = true
				path = append(path, at)
				nextAtom := c.next[at][0]
				if nextAtom == from {
					nextAtom = c.next[at][1]
				}
				from, at = at, nextAtom
			}
			if at == x {
				return nil, false
			}
			low, high := position[x], position[at]
			if low > high {
				low, high = high, low
			} else {
				path = reversed(path)
			}
			list = append(list, cageBridge{len(path), low, high, path})
		}
	}
	// Larger secondary bridges come first, then those whose atoms are numbered first, at higher numbered
	// bridgeheads; bonds without atoms in ascending order.
	slices.SortStableFunc(list, func(x, y cageBridge) int {
		if x.length != y.length {
			return y.length - x.length
		}
		if x.length == 0 {
			return 100*(x.low-y.low) + x.high - y.high
		}
		if x.high != y.high {
			return y.high - x.high
		}
		return y.low - x.low
	})
	return list, true
}

// descriptor is "tricyclo[5.2.1.0^2,6]".
func (p *cagePlan) descriptor() string {
	word := map[int]string{1: "tri", 2: "tetra", 3: "penta", 4: "hexa"}[len(p.bridges)]
	text := fmt.Sprintf("%scyclo[%d.%d.%d", word, p.sizes[0], p.sizes[1], p.sizes[2])
	for _, b := range p.bridges {
		text += "." + strconv.Itoa(b.length) + "^" + strconv.Itoa(b.low) + "," + strconv.Itoa(b.high)
	}
	return text + "]"
}

// polycycleAt reads "tricyclo[5.2.1.0^2,6]dec" at the beginning of s.
func polycycleAt(s string) (*skeleton, int) {
	count := 0
	for n, w := range map[int]string{3: "tricyclo[", 4: "tetracyclo[", 5: "pentacyclo[", 6: "hexacyclo["} {
		if strings.HasPrefix(s, w) {
			count = n
		}
	}
	c := strings.IndexByte(s, ']')
	if count == 0 || c < 0 {
		return nil, 0
	}
	parts := strings.Split(s[strings.IndexByte(s, '[')+1:c], ".")
	if len(parts) != count+1 {
		return nil, 0
	}
	var size [3]int
	for i := range size {
		n, err := strconv.Atoi(parts[i])
		if err != nil || n < 0 || n > maxStem {
			return nil, 0
		}
		size[i] = n
	}
	if size[0] < size[1] || size[0]+size[1]+size[2] > maxStem-2 || size[1] == 0 {
		return nil, 0
	}
	k := bicycleSkeleton(size[0], size[1], size[2])
	for _, p := range parts[3:] {
		var length, low, high int
		if n, err := fmt.Sscanf(p, "%d^%d,%d", &length, &low, &high); n != 3 || err != nil {
			return nil, 0
		}
		n := len(k.elements)
		if length < 0 || length > maxStem || low < 1 || low >= high || high > n || n+length > maxStem {
			return nil, 0
		}
		prev := high - 1
		for range length {
			k.elements = append(k.elements, 6)
			k.bonds = append(k.bonds, [2]int{prev, len(k.elements) - 1})
			prev = len(k.elements) - 1
		}
		if slices.Contains(k.bonds, [2]int{low - 1, prev}) || slices.Contains(k.bonds, [2]int{prev, low - 1}) {
			return nil, 0
		}
		k.bonds = append(k.bonds, [2]int{low - 1, prev})
	}
	k.locants = numbers(len(k.elements))
	word := stem(len(k.elements))
	if !strings.HasPrefix(s[c+1:], word) {
		return nil, 0
	}
	return k, c + 1 + len(word)
}
