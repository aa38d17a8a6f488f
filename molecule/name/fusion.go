package name

import (
	"slices"
	"strconv"
	"strings"

	"shelfward/molecule"
)

// Fusion names of two rings that share a bond (P-25.2, P-25.3): benzo heterocycles as
// 1,3-benzothiazole, others as pyrazolo[3,4-d]pyrimidine. Three rings and more have names only where
// rules/names.yaml lists them.

// ringPair is two rings that share the bond first-last. a leads from the neighbour of first to that of
// last in one ring, b in the other; the shared atoms are left out.
type ringPair struct {
	a, b        []int32
	first, last int32
	element     func(int32) molecule.Element
}

// numberings lists the orders that give heteroatoms, then fusion carbons, the lowest locants.
func (r *ringPair) numberings() (orders [][]int32, locants []string) {
	all := [][]int32{
		slices.Concat(r.a, []int32{r.last}, reversed(r.b), []int32{r.first}),
		slices.Concat(reversed(r.a), []int32{r.first}, r.b, []int32{r.last}),
		slices.Concat(r.b, []int32{r.last}, reversed(r.a), []int32{r.first}),
		slices.Concat(reversed(r.b), []int32{r.first}, r.a, []int32{r.last}),
	}
	orders = lowestOrders(all, r.numberingKey)
	return orders, r.locants(orders[0])
}

func (r *ringPair) fusionCarbon(a int32) bool {
	return (a == r.first || a == r.last) && r.element(a) == 6
}

// locants numbers the atoms of an order: fusion carbons take the number before with a letter.
func (r *ringPair) locants(order []int32) []string {
	list := make([]string, len(order))
	number, letter := 0, byte('a')
	for i, a := range order {
		if r.fusionCarbon(a) {
			list[i] = strconv.Itoa(number) + string(letter)
			letter++
		} else {
			number++
			letter = 'a'
			list[i] = strconv.Itoa(number)
		}
	}
	return list
}

func (r *ringPair) numberingKey(order []int32) []int {
	var hetero, carbons, fused, each []int
	number := 0
	at := make([]int, len(order))
	for i, a := range order {
		if r.fusionCarbon(a) {
			carbons = append(carbons, number)
			at[i] = number
			continue
		}
		number++
		at[i] = number
		if r.element(a) != 6 {
			hetero = append(hetero, number)
			if a == r.first || a == r.last {
				fused = append(fused, number)
			}
		}
	}
	for _, e := range heteroOrder {
		for i, a := range order {
			if r.element(a) == e {
				each = append(each, at[i])
			}
		}
	}
	return slices.Concat(hetero, carbons, fused, each)
}

// component is one of the two rings by itself: in the numberings of its own name.
type component struct {
	orders [][]int32
	name   string // with locants: "1,3-thiazole"; carbocycles: "cyclopenta"
	hetero int
}

// component names the ring of the atoms in cyc; false if it has no Hantzsch-Widman name.
func newComponent(cyc []int32, element func(int32) molecule.Element) (component, bool) {
	var c component
	n := len(cyc)
	for i := range n {
		forward, back := make([]int32, n), make([]int32, n)
		for k := range n {
			forward[k] = cyc[(i+k)%n]
			back[k] = cyc[((i-k)%n+n)%n]
		}
		c.orders = append(c.orders, forward, back)
	}
	for _, a := range cyc {
		if e := element(a); e != 6 {
			if heteroRank(e) == 0 {
				return c, false
			}
			c.hetero++
		}
	}
	if n < 5 || n > 10 {
		return c, false
	}
	if c.hetero == 0 {
		c.name = "cyclo" + stem(n) + "a"
		return c, true
	}
	c.orders = lowestOrders(c.orders, func(o []int32) []int {
		return append([]int{heteroRank(element(o[0])) + 100*boolInt(element(o[0]) == 6)}, heteroKeyOf(o, element)...)
	})
	elements := make([]molecule.Element, n)
	for i, a := range c.orders[0] {
		elements[i] = element(a)
	}
	c.name = retainedOr(loaded(), widman(elements, false))
	return c, true
}

// heteroKeyOf is heteroKey for any source of elements.
func heteroKeyOf(order []int32, element func(int32) molecule.Element) []int {
	var all, each []int
	for i, a := range order {
		if element(a) != 6 {
			all = append(all, i)
		}
	}
	for _, e := range heteroOrder {
		for i, a := range order {
			if element(a) == e {
				each = append(each, i)
			}
		}
	}
	return append(all, each...)
}

// baseKey orders components by their claim to be the base (P-25.2.1): the least is the base.
func (c *component) baseKey(element func(int32) molecule.Element) []int {
	nitrogen, top := 0, 99
	var counts [16]int
	kinds := 0
	order := c.orders[0]
	for _, a := range order {
		e := element(a)
		if e == 6 {
			continue
		}
		if e == 7 {
			nitrogen = 1
		} else {
			top = min(top, heteroRank(e))
		}
		if counts[heteroRank(e)]++; counts[heteroRank(e)] == 1 {
			kinds++
		}
	}
	if nitrogen == 1 {
		top = 0
	}
	key := []int{-nitrogen, top, -len(order), -c.hetero, -kinds}
	for _, n := range counts {
		key = append(key, -n)
	}
	return append(key, heteroKeyOf(order, element)...)
}

// nameFusion names two ortho-fused rings of five and more members; false if it does not know how.
func (w *writer) nameFusion(s *ringSystem) bool {
	var heads []int32
	for _, a := range s.atoms {
		if w.ringDegree(a) == 3 {
			heads = append(heads, a)
		}
	}
	if len(heads) != 2 {
		return false
	}
	paths := w.bridges(s, heads[0], heads[1])
	if len(paths) != 3 {
		return false
	}
	slices.SortStableFunc(paths, func(x, y []int32) int { return len(x) - len(y) })
	if len(paths[0]) != 0 || len(paths[1]) < 3 {
		return false
	}
	r := &ringPair{a: paths[1], b: paths[2], first: heads[0], last: heads[1], element: w.element}
	name, ok := r.name()
	if !ok {
		return false
	}
	s.orders, s.locants = r.numberings()
	s.name, s.kind, s.ok = name, ringMancude, true
	return true
}

// name is the fusion name of the pair.
func (r *ringPair) name() (string, bool) {
	x, ok := newComponent(append([]int32{r.first}, append(slices.Clone(r.a), r.last)...), r.element)
	y, ok2 := newComponent(append([]int32{r.first}, append(slices.Clone(r.b), r.last)...), r.element)
	if !ok || !ok2 || x.hetero+y.hetero == 0 {
		return "", false
	}
	if slices.Compare(y.baseKey(r.element), x.baseKey(r.element)) < 0 {
		x, y = y, x
	}
	if y.hetero == 0 && len(y.orders[0]) == 6 {
		return r.benzoName(&x), true
	}
	return r.pairName(&x, &y)
}

// benzoName is the name of a benzene ring fused to a heterocycle (P-25.2.2.4).
func (r *ringPair) benzoName(c *component) string {
	orders, locants := r.numberings()
	var at []string
	for _, e := range heteroOrder {
		for i, a := range orders[0] {
			if r.element(a) == e {
				at = append(at, locants[i])
			}
		}
	}
	body := c.name
	if i := strings.LastIndexByte(body, '-'); i >= 0 {
		body = body[i+1:]
	}
	return strings.Join(at, ",") + "-" + elideO("benzo", body)
}

// elideO joins benzo and the rest: benzofuran, benzoxazole.
func elideO(a, b string) string {
	if strings.IndexByte("aeiou", b[0]) >= 0 {
		a = strings.TrimSuffix(a, "o")
	}
	return a + b
}

// pairName is attached[x,y-letter]base.
func (r *ringPair) pairName(base, attached *component) (string, bool) {
	letter, low := -1, []int(nil)
	for _, o := range base.orders {
		i, j := slices.Index(o, r.first), slices.Index(o, r.last)
		from, to := r.first, r.last
		if (i+1)%len(o) != j {
			i, j, from, to = j, i, to, from
		}
		if letter >= 0 && i > letter {
			continue
		}
		for _, q := range attached.orders {
			k, l := slices.Index(q, from)+1, slices.Index(q, to)+1
			key := []int{min(k, l), max(k, l), k}
			if letter < 0 || i < letter || slices.Compare(key, low) < 0 {
				letter, low = i, key
			}
		}
	}
	place := ""
	if attached.hetero > 0 {
		x, y := low[0], low[1]
		if low[2] != x {
			x, y = y, x
		}
		place = strconv.Itoa(x) + "," + strconv.Itoa(y) + "-"
	}
	return fusionPrefix(attached.name) + "[" + place + string(rune('a'+letter)) + "]" + bracketLocants(base.name), true
}

// bracketLocants turns the locants of a component into bracketed ones: "[1,3]thiazole".
func bracketLocants(name string) string {
	i := strings.LastIndexByte(name, '-')
	if i < 0 || name[0] < '0' || name[0] > '9' {
		return name
	}
	return "[" + name[:i] + "]" + name[i+1:]
}

// fusionPrefixes are the short forms of attached components (P-25.2.2.1).
var fusionPrefixes = map[string]string{"furan": "furo", "thiophene": "thieno", "imidazole": "imidazo", "pyridine": "pyrido", "pyrimidine": "pyrimido"}

// fusionPrefix is the name of a component attached to a base: "pyrazolo", "[1,2,4]triazolo".
func fusionPrefix(name string) string {
	if p, ok := fusionPrefixes[name]; ok {
		return p
	}
	if strings.HasPrefix(name, "cyclo") {
		return name
	}
	return bracketLocants(strings.TrimSuffix(name, "e")) + "o"
}

// fusedAt reads a fusion name at the beginning of s.
func fusedAt(s string) (*skeleton, int) {
	if k, n := benzoAt(s); k != nil {
		return k, n
	}
	attached, n := attachedAt(s)
	if attached == nil || n >= len(s) || s[n] != '[' {
		return nil, 0
	}
	c := strings.IndexByte(s[n:], ']')
	if c < 0 {
		return nil, 0
	}
	place := s[n+1 : n+c]
	n += c + 1
	base, k := componentAt(s[n:])
	if base == nil {
		return nil, 0
	}
	pair := fuse(attached, base, place)
	if pair == nil {
		return nil, 0
	}
	return pair, n + k
}

// componentAt reads a base component, its locants in brackets: "[1,3]thiazole", "pyridine".
func componentAt(s string) (*skeleton, int) {
	if strings.HasPrefix(s, "[") {
		c := strings.IndexByte(s, ']')
		if c < 0 {
			return nil, 0
		}
		k, n := widmanAt(s[1:c] + "-" + s[c+1:])
		if k == nil || !k.mancude {
			return nil, 0
		}
		return k, n + 1
	}
	if s == "" {
		return nil, 0
	}
	for _, r := range loaded().ringWords[s[0]] {
		if strings.HasPrefix(s, r.word) && len(r.skeleton.bonds) == len(r.skeleton.elements) && r.skeleton.mancude {
			return r.skeleton, len(r.word)
		}
	}
	if k, n := widmanAt(s); k != nil && k.mancude {
		return k, n
	}
	return nil, 0
}

// attachedAt reads an attached component: "thieno", "[1,2,4]triazolo", "cyclopenta".
func attachedAt(s string) (*skeleton, int) {
	for full, short := range fusionPrefixes {
		if strings.HasPrefix(s, short+"[") {
			k, n := componentAt(full)
			if n != len(full) {
				return nil, 0
			}
			return k, len(short)
		}
	}
	if tail, ok := strings.CutPrefix(s, "cyclo"); ok {
		for _, f := range stemsAt(tail) {
			if strings.HasPrefix(tail[f.length:], "a[") {
				return cycleSkeleton(f.size), len("cyclo") + f.length + 1
			}
		}
		return nil, 0
	}
	if strings.HasPrefix(s, "[") && strings.IndexByte(s, ']') < 0 {
		return nil, 0
	}
	// The prefix ends in o before a bracket; the component's name has no final e there.
	from := 0
	if s[0] == '[' {
		from = strings.IndexByte(s, ']') + 1
	}
	i := strings.IndexByte(s[from:], '[')
	if i < 2 || s[from+i-1] != 'o' {
		return nil, 0
	}
	word := s[:from+i-1]
	k, n := componentAt(word)
	if k == nil || n != len(word) {
		return nil, 0
	}
	return k, len(word) + 1
}

// fuse joins two rings as the place "3,4-d" or "b" says.
func fuse(attached, base *skeleton, place string) *skeleton {
	x, y := 1, 2
	if i := strings.IndexByte(place, '-'); i >= 0 {
		parts := strings.Split(place[:i], ",")
		if len(parts) != 2 {
			return nil
		}
		var err1, err2 error
		x, err1 = strconv.Atoi(parts[0])
		y, err2 = strconv.Atoi(parts[1])
		if err1 != nil || err2 != nil {
			return nil
		}
		place = place[i+1:]
	}
	n, m := len(base.elements), len(attached.elements)
	if len(place) != 1 || place[0] < 'a' || int(place[0]-'a') >= n || x < 1 || y < 1 || x > m || y > m {
		return nil
	}
	step := 1
	if y == x-1 || x == 1 && y == m && m > 2 {
		step = -1
	} else if y != x+1 && !(x == m && y == 1) {
		return nil
	}
	p := int(place[0] - 'a')
	var elements []molecule.Element
	element := func(a int32) molecule.Element { return elements[a] }
	r := &ringPair{element: element}
	ring := func(list []molecule.Element, from, step, count int) []int32 {
		var path []int32
		for i := range count {
			path = append(path, int32(len(elements)))
			elements = append(elements, list[((from+i*step)%len(list)+len(list))%len(list)])
		}
		return path
	}
	heads := ring(base.elements, p, 1, 2)
	r.first, r.last = heads[0], heads[1]
	r.a = reversed(ring(base.elements, p+2, 1, n-2))
	if attached.elements[x-1] != elements[0] || attached.elements[y-1] != elements[1] {
		return nil
	}
	r.b = reversed(ring(attached.elements, y-1+step, step, m-2))
	return r.skeleton(elements)
}

// skeleton lays the pair out in its numbering.
func (r *ringPair) skeleton(elements []molecule.Element) *skeleton {
	orders, locants := r.numberings()
	s := &skeleton{locants: locants, mancude: true}
	first, last := 0, 0
	for i, a := range orders[0] {
		s.elements = append(s.elements, elements[a])
		if i > 0 {
			s.bonds = append(s.bonds, [2]int{i - 1, i})
		}
		if a == r.first {
			first = i
		}
		if a == r.last {
			last = i
		}
	}
	s.bonds = append(s.bonds, [2]int{len(orders[0]) - 1, 0}, [2]int{min(first, last), max(first, last)})
	return s
}

// benzoAt reads "1,3-benzothiazole": a benzene ring fused to a heterocycle, numbered from the heterocycle.
func benzoAt(s string) (*skeleton, int) {
	i := 0
	for i < len(s) && (s[i] >= '0' && s[i] <= '9' || s[i] == ',') {
		i++
	}
	if i == 0 || !strings.HasPrefix(s[i:], "-benz") {
		return nil, 0
	}
	at := strings.Split(s[:i], ",")
	body := i + len("-benz")
	for _, skip := range []string{"o", ""} {
		if !strings.HasPrefix(s[body:], skip) {
			continue
		}
		size, elements, n := heteroBody(s[body+len(skip):], len(at))
		if n == 0 || size < 5 {
			continue
		}
		r := &ringPair{first: int32(size + 3), last: int32(size - 2)}
		all := make([]molecule.Element, size+4)
		for k := range all {
			all[k] = 6
		}
		for k, l := range at {
			x, err := strconv.Atoi(l)
			if err != nil || x < 1 || x > size-2 || all[x-1] != 6 {
				return nil, 0
			}
			all[x-1] = elements[k]
		}
		for k := range size - 2 {
			r.a = append(r.a, int32(k))
		}
		for k := size + 2; k > size-2; k-- {
			r.b = append(r.b, int32(k))
		}
		r.element = func(a int32) molecule.Element { return all[a] }
		return r.skeleton(all), body + len(skip) + n
	}
	return nil, 0
}

// heteroBody reads a heterocycle without locants: its size and its heteroatoms as cited.
func heteroBody(s string, count int) (size int, elements []molecule.Element, n int) {
	if s == "" {
		return 0, nil, 0
	}
	for _, r := range loaded().ringWords[s[0]] {
		if !strings.HasPrefix(s, r.word) || len(r.skeleton.bonds) != len(r.skeleton.elements) {
			continue
		}
		for _, e := range heteroOrder {
			for _, x := range r.skeleton.elements {
				if x == e {
					elements = append(elements, e)
				}
			}
		}
		if len(elements) == count && r.skeleton.mancude {
			return len(r.skeleton.elements), elements, len(r.word)
		}
		return 0, nil, 0
	}
	// Locants at will: only the kinds of atoms and the size are wanted.
	var locants []string
	for i := range count {
		locants = append(locants, strconv.Itoa(i+1))
	}
	prefix := strings.Join(locants, ",") + "-"
	k, n := widmanAt(prefix + s)
	if k == nil || !k.mancude {
		return 0, nil, 0
	}
	return len(k.elements), k.elements[:count], n - len(prefix)
}
