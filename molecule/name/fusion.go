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
// componentAt reads a base component, its locants in brackets: "[1,3]thiazole", "pyridine".
// attachedAt reads an attached component: "thieno", "[1,2,4]triazolo", "cyclopenta".
// fuse joins two rings as the place "3,4-d" or "b" says.
// skeleton lays the pair out in its numbering.
// benzoAt reads "1,3-benzothiazole": a benzene ring fused to a heterocycle, numbered from the heterocycle.
// heteroBody reads a heterocycle without locants: its size and its heteroatoms as cited.
