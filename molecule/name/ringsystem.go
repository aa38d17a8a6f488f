package name

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"shelfward/molecule"
)

// ringKind says how the degree of hydrogenation of a ring system is expressed.
type ringKind uint8

const (
	ringAlkane  ringKind = iota // endings ane, ene, yne: cyclohexene, bicyclo[2.2.1]hept-2-ene
	ringMancude                 // from the ring with most double bonds: hydro prefixes, indicated hydrogen
)

// ringSystem is a set of rings that share atoms, with the numberings that its name allows.
type ringSystem struct {
	atoms     []int32
	bonds     []int32
	rings     int
	kind      ringKind
	name      string // ringMancude: "quinoline"; ringAlkane: what stands before ane: "cyclohex"
	saturated string // name of the saturated ring if it has one: "piperidine"
	locants   []string
	orders    [][]int32 // numberings: position -> atom
	free      int       // ringMancude: indicated hydrogens that the ring always has
	ok        bool
	biphenyl  bool
	equal     bool // all positions of the unsubstituted ring are alike
	seniority []int
	skeleton  *mancude // ringMancude: made when first needed
}

// maxRingAtoms bounds the ring systems that are named; the sets below are bit masks.
const maxRingAtoms = 40

// findRings collects the ring systems of the molecule.
func (w *writer) findRings() {
	m := w.m
	w.ringOf = make([]int32, m.NumAtoms())
	for a := range w.ringOf {
		w.ringOf[a] = -1
	}
	var stack []int32
	for a := range m.NumAtoms() {
		if w.ringOf[a] >= 0 || !m.InRing(a) {
			continue
		}
		id := int32(len(w.rings))
		s := &ringSystem{}
		w.ringOf[a] = id
		for stack = append(stack[:0], int32(a)); len(stack) > 0; {
			x := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			s.atoms = append(s.atoms, x)
			for _, nb := range m.Neighbors(int(x)) {
				if !m.Bond(int(nb.Bond)).Ring {
					continue
				}
				if x < nb.Atom {
					s.bonds = append(s.bonds, nb.Bond)
				}
				if w.ringOf[nb.Atom] < 0 {
					w.ringOf[nb.Atom] = id
					stack = append(stack, nb.Atom)
				}
			}
		}
		s.rings = len(s.bonds) - len(s.atoms) + 1
		w.rings = append(w.rings, s)
	}
	for _, s := range w.rings {
		w.nameRing(s)
	}
}

// nameRing finds the name and numberings of s; s.ok stays false if there are none.
func (w *writer) nameRing(s *ringSystem) {
	if len(s.atoms) > maxRingAtoms {
		return
	}
	switch {
	case s.rings == 1:
		w.nameMonocycle(s)
	case w.nameRetained(s):
	case s.rings == 2 && w.nameFusion(s):
	case s.rings == 2:
		w.nameBicycle(s)
	default:
		w.nameCage(s)
	}
	if !s.ok {
		return
	}
	s.seniority = w.ringSeniority(s)
	if s.kind == ringMancude {
		s.free = w.spareHydrogens(s)
	}
}

func (w *writer) element(a int32) molecule.Element { return w.m.Atom(int(a)).Element }

// cycle lists the atoms of a monocycle in order.
func (w *writer) cycle(s *ringSystem) []int32 {
	start := slices.Min(s.atoms)
	order := []int32{start}
	prev, at := int32(-1), start
	for {
		next := int32(-1)
		for _, nb := range w.m.Neighbors(int(at)) {
			if w.m.Bond(int(nb.Bond)).Ring && nb.Atom != prev {
				next = nb.Atom
				break
			}
		}
		if next == start || next < 0 {
			return order
		}
		order = append(order, next)
		prev, at = at, next
	}
}

// heteroRank orders heteroatoms as replacement prefixes are cited (P-15.4.3.? , Table 1.5): the lower the more senior.
// heteroOrder lists the heteroatom elements by seniority.
// heteroKey is compared to find the numbering with low locants for heteroatoms: all together, then
// in order of seniority.
// lowestOrders keeps the numberings with the least key.
// numbers are the plain locants 1 to n.
// nameMonocycle names a single ring: cycloalkane, benzene, Hantzsch-Widman or retained.
func boolInt(b bool) int {
	if b {
		return 1
	}
	return 0
}

// fullyUnsaturated says whether each atom of s has a double bond inside it.
func (w *writer) fullyUnsaturated(s *ringSystem) bool {
	for _, a := range s.atoms {
		if !w.innerDouble(a) {
			return false
		}
	}
	return true
}

// innerDouble says whether ring atom a has a double bond that lies in a ring.
func (w *writer) innerDouble(a int32) bool {
	for _, nb := range w.m.Neighbors(int(a)) {
		if b := w.m.Bond(int(nb.Bond)); b.Ring && b.Order == 2 {
			return true
		}
	}
	return false
}

// replacement writes replacement prefixes: "2-oxa-5-aza" for bicyclo[2.2.1]heptane (P-22.2.3, P-23.3).
// widman is the Hantzsch-Widman name of a monocycle (P-22.2.2), with locants where it has two or
// more heteroatoms: "1,3-oxazole". The elements stand in the order of the numbering.
// elide joins a and b without the final a of a before a vowel.
// widmanEnding is the stem of ring size and saturation (P-22.2.2.1.1, Table 2.5).
// nameRetained looks for s among the ring systems with retained names.
func (w *writer) nameRetained(s *ringSystem) bool {
	elements := make([]molecule.Element, len(s.atoms))
	for i, a := range s.atoms {
		elements[i] = w.element(a)
	}
	for _, e := range loaded().rings[signature(elements, len(s.bonds))] {
		if orders := w.mappings(e, s); orders != nil {
			s.orders, s.locants, s.name, s.ok = orders, e.locants, e.name, true
			s.kind = ringMancude
			if strings.HasSuffix(e.name, "ane") {
				s.kind, s.name = ringAlkane, strings.TrimSuffix(e.name, "ane")
			}
			return true
		}
	}
	return false
}

// maxMappings bounds the numberings kept of one ring system; no entry has as many.
const maxMappings = 200

// mappings lists the ways to lay e over s.
func (w *writer) mappings(e *ringEntry, s *ringSystem) [][]int32 {
	var found [][]int32
	order := make([]int32, 0, len(e.elements))
	used := make([]bool, w.m.NumAtoms())
	var extend func()
	extend = func() {
		i := len(order)
		if i == len(e.elements) {
			found = append(found, slices.Clone(order))
			return
		}
		try := func(a int32) {
			if len(found) >= maxMappings || used[a] || w.element(a) != e.elements[i] || w.ringDegree(a) != len(e.next[i]) {
				return
			}
			for _, k := range e.next[i] {
				if int(k) < i {
					b := w.m.BondBetween(int(a), int(order[k]))
					if b < 0 || !w.m.Bond(b).Ring {
						return
					}
				}
			}
			used[a] = true
			order = append(order, a)
			extend()
			order = order[:i]
			used[a] = false
		}
		for _, k := range e.next[i] {
			if int(k) < i {
				for _, nb := range w.m.Neighbors(int(order[k])) {
					if w.m.Bond(int(nb.Bond)).Ring {
						try(nb.Atom)
					}
				}
				return
			}
		}
		if i == 0 {
			for _, a := range s.atoms {
				try(a)
			}
		}
	}
	extend()
	return found
}

// ringDegree counts the ring bonds of a.
func (w *writer) ringDegree(a int32) int {
	n := 0
	for _, nb := range w.m.Neighbors(int(a)) {
		if w.m.Bond(int(nb.Bond)).Ring {
			n++
		}
	}
	return n
}

// nameBicycle names bridged and spiro systems of two rings by von Baeyer's method (P-23, P-24.2.1).
func (w *writer) nameBicycle(s *ringSystem) {
	for _, a := range s.atoms {
		if w.m.Atom(int(a)).Aromatic {
			return // the position of the double bonds would be an accident of the drawing
		}
		if e := w.element(a); e != 6 && heteroRank(e) == 0 {
			return
		}
	}
	var heads []int32
	for _, a := range s.atoms {
		if w.ringDegree(a) > 2 {
			heads = append(heads, a)
		}
	}
	head := ""
	switch {
	case len(heads) == 1 && w.ringDegree(heads[0]) == 4:
		paths := w.bridges(s, heads[0], heads[0])
		if len(paths) != 2 {
			return
		}
		small, large := paths[0], paths[1]
		if len(small) > len(large) {
			small, large = large, small
		}
		head = fmt.Sprintf("spiro[%d.%d]", len(small), len(large))
		add := func(x, y []int32) {
			for _, p := range [][]int32{x, reversed(x)} {
				for _, q := range [][]int32{y, reversed(y)} {
					s.orders = append(s.orders, slices.Concat(p, heads, q))
				}
			}
		}
		add(small, large)
		if len(small) == len(large) {
			add(large, small)
		}
	case len(heads) == 2:
		paths := w.bridges(s, heads[0], heads[1])
		if len(paths) != 3 {
			return
		}
		slices.SortStableFunc(paths, func(x, y []int32) int { return len(y) - len(x) })
		head = fmt.Sprintf("bicyclo[%d.%d.%d]", len(paths[0]), len(paths[1]), len(paths[2]))
		for _, p := range permutations3 {
			x, y, z := paths[p[0]], paths[p[1]], paths[p[2]]
			if len(x) < len(y) || len(y) < len(z) {
				continue
			}
			s.orders = append(s.orders,
				slices.Concat(heads[:1], x, heads[1:], reversed(y), z),
				slices.Concat(heads[1:], reversed(x), heads[:1], y, reversed(z)))
		}
	default:
		return
	}
	s.orders = lowestOrders(s.orders, w.heteroKey)
	s.locants = numbers(len(s.atoms))
	elements := make([]molecule.Element, len(s.atoms))
	for i, a := range s.orders[0] {
		elements[i] = w.element(a)
	}
	s.name = replacement(elements, s.locants) + head + stem(len(s.atoms))
	s.kind, s.ok = ringAlkane, true
}

var permutations3 = [...][3]int{{0, 1, 2}, {0, 2, 1}, {1, 0, 2}, {1, 2, 0}, {2, 0, 1}, {2, 1, 0}}

func reversed(x []int32) []int32 {
	y := slices.Clone(x)
	slices.Reverse(y)
	return y
}

// bridges lists the chains of ring atoms from head a to head b, without the heads; for a == b the
// two loops of a spiro atom, each once.
func (w *writer) bridges(s *ringSystem, a, b int32) [][]int32 {
	var paths [][]int32
	done := map[int32]bool{}
	for _, nb := range w.m.Neighbors(int(a)) {
		if !w.m.Bond(int(nb.Bond)).Ring || done[nb.Atom] {
			continue
		}
		var path []int32
		prev, at := a, nb.Atom
		for at != b {
			path = append(path, at)
			done[at] = true
			next := int32(-1)
			for _, q := range w.m.Neighbors(int(at)) {
				if w.m.Bond(int(q.Bond)).Ring && q.Atom != prev {
					next = q.Atom
					break
				}
			}
			if next < 0 || len(path) > len(s.atoms) {
				return nil
			}
			prev, at = at, next
		}
		paths = append(paths, path)
	}
	return paths
}

// ringSeniority is compared between rings (P-44.2): the least is senior.
func (w *writer) ringSeniority(s *ringSystem) []int {
	hetero, nitrogen, top := 0, 0, 99
	var counts [16]int
	for _, a := range s.atoms {
		e := w.element(a)
		if e == 6 {
			continue
		}
		hetero++
		if e == 7 {
			nitrogen = 1
		} else {
			top = min(top, heteroRank(e))
		}
		counts[heteroRank(e)]++
	}
	key := []int{-boolInt(hetero > 0), -nitrogen}
	if nitrogen == 0 {
		key = append(key, top)
	} else {
		key = append(key, 0)
	}
	key = append(key, -s.rings, -len(s.atoms), -hetero)
	for _, n := range counts {
		key = append(key, -n)
	}
	// Low locants of the heteroatoms.
	return append(key, cmp.Compare(s.name, ""))
}
