package cip

import (
	"cmp"
	"slices"
)

// rule is one of the sequence rules, in their order.
type rule uint8

const (
	rule1a rule = iota // higher atomic number first
	rule1b             // a duplicate of an atom nearer the root first
	rule2              // higher mass number first
	rule3              // Z before E before double bonds without a label
	rule4a             // R and S before r and s before no label
	rule4b             // like before unlike
	rule4c             // r before s
	rule5              // R before S

	lastPlain = rule2 // the last rule that needs no labels of other marks
	lastRule  = rule5
)

// ranked is a branch with its place: equal places are branches that the rules do not order.
type ranked struct {
	node, place int32
}

// branches returns the branches of n away from the node from (-1: all), the senior first, ordered by
// the rules up to last.
func (t *tree) branches(n, from int32, last rule) []ranked {
	v := view{n, from, last}
	if list, ok := t.sorted[v]; ok {
		return list
	}
	first, end := t.children(n)
	list := make([]ranked, 0, end-first+1)
	if p := t.nodes[n].parent; p >= 0 && p != from {
		list = append(list, ranked{node: p})
	}
	for k := first; k < end; k++ {
		if k != from {
			list = append(list, ranked{node: k})
		}
	}
	slices.SortStableFunc(list, func(x, y ranked) int {
		c, _ := t.compare(y.node, x.node, n, last)
		return c
	})
	for i := 1; i < len(list); i++ {
		list[i].place = list[i-1].place
		if c, _ := t.compare(list[i-1].node, list[i].node, n, last); c != 0 {
			list[i].place = int32(i)
		}
	}
	t.sorted[v] = list
	return list
}

// compare compares the branches x and y that hang on the node from: positive where x is senior. It
// tells the rule that decided.
func (t *tree) compare(x, y, from int32, last rule) (int, rule) {
	for r := rule1a; r <= last; r++ {
		if c := t.compareBy(x, y, from, r); c != 0 {
			return c, r
		}
		if t.full {
			break
		}
	}
	return 0, last
}

func (t *tree) compareBy(x, y, from int32, r rule) int {
	switch r {
	case rule4b:
		return t.compareLikeness(x, y, from)
	case rule5:
		return compareLists(t.likeness(x, from, R, rule4c), t.likeness(y, from, R, rule4c))
	}
	return t.compareSpheres(x, y, from, r)
}

// pair is a node of either branch with the node it is reached from.
type pair struct{ x, fromX, y, fromY int32 }

// compareSpheres compares two branches by one rule, sphere after sphere, the substituents of senior
// nodes first (P-92.1).
func (t *tree) compareSpheres(x, y, from int32, r rule) int {
	if c := t.compareNodes(x, from, y, from, r); c != 0 {
		return c
	}
	queue := []pair{{x, from, y, from}}
	for i := 0; i < len(queue) && !t.full; i++ {
		p := queue[i]
		if r == rule1a { // before the deep order, the sets themselves
			if c := t.compareSets(p); c != 0 {
				return c
			}
		}
		xs, ys := t.branches(p.x, p.fromX, r), t.branches(p.y, p.fromY, r)
		for k := range min(len(xs), len(ys)) {
			if c := t.compareNodes(xs[k].node, p.x, ys[k].node, p.y, r); c != 0 {
				return c
			}
			queue = append(queue, pair{xs[k].node, p.x, ys[k].node, p.y})
		}
		if c := cmp.Compare(len(xs), len(ys)); c != 0 && r == rule1a {
			return c
		}
	}
	return 0
}

// compareSets compares the atomic numbers beside two nodes, highest first: cheap, and all that most
// comparisons need.
func (t *tree) compareSets(p pair) int {
	a, b := t.numbers(p.x, p.fromX), t.numbers(p.y, p.fromY)
	return slices.Compare(a, b)
}

func (t *tree) numbers(n, from int32) []int32 {
	first, end := t.children(n)
	list := make([]int32, 0, 8)
	if p := t.nodes[n].parent; p >= 0 && p != from {
		list = append(list, t.nodes[p].number)
	}
	for k := first; k < end; k++ {
		if k != from {
			list = append(list, t.nodes[k].number)
		}
	}
	slices.SortFunc(list, func(a, b int32) int { return cmp.Compare(b, a) })
	return list
}

// compareNodes compares two nodes by what the rule looks at.
func (t *tree) compareNodes(x, fromX, y, fromY int32, r rule) int {
	if t.compared++; t.compared > maxCompared {
		t.full = true
	}
	a, b := &t.nodes[x], &t.nodes[y]
	switch r {
	case rule1a:
		return cmp.Compare(a.number, b.number)
	case rule1b:
		if a.duplicate && b.duplicate {
			return cmp.Compare(b.original, a.original)
		}
	case rule2:
		return cmp.Compare(a.massDa, b.massDa)
	case rule3:
		return cmp.Compare(axisPlace[t.axisBetween(x, fromX)], axisPlace[t.axisBetween(y, fromY)])
	case rule4a:
		return cmp.Compare(centerPlace[a.label], centerPlace[b.label])
	case rule4c:
		return cmp.Compare(lowerPlace[a.label], lowerPlace[b.label])
	}
	return 0
}

var (
	axisPlace   = map[Label]int{Z: 2, E: 1}
	centerPlace = map[Label]int{R: 2, S: 2, LowerR: 1, LowerS: 1}
	lowerPlace  = map[Label]int{LowerR: 2, LowerS: 1}
)

// axisBetween is the label of the double bond between a node and the one it is reached from.
func (t *tree) axisBetween(n, from int32) Label {
	if t.nodes[n].parent == from {
		return t.nodes[n].axis
	}
	return t.nodes[from].axis
}

// compareLikeness is rule 4b: each branch is read against its own reference label, the one that most
// of its senior labelled nodes have; where they are of two minds, both readings are compared in order.
func (t *tree) compareLikeness(x, y, from int32) int {
	a, b := t.readings(x, from), t.readings(y, from)
	for i := range min(len(a), len(b)) {
		if c := compareLists(a[i], b[i]); c != 0 {
			return c
		}
	}
	return 0
}

func (t *tree) readings(n, from int32) [][]int8 {
	classes := t.labelled(n, from, rule4a)
	for _, c := range classes {
		balance := 0
		for _, k := range c {
			switch t.nodes[k].label {
			case R:
				balance++
			case S:
				balance--
			}
		}
		switch {
		case balance > 0:
			return [][]int8{t.readClasses(classes, R)}
		case balance < 0:
			return [][]int8{t.readClasses(classes, S)}
		}
		a, b := t.readClasses(classes, R), t.readClasses(classes, S)
		if compareLists(a, b) < 0 {
			a, b = b, a
		}
		return [][]int8{a, b}
	}
	return nil
}

// likeness reads a branch against a given reference.
func (t *tree) likeness(n, from int32, reference Label, last rule) []int8 {
	return t.readClasses(t.labelled(n, from, last), reference)
}

// readClasses writes 1 for each label like the reference and -1 for each unlike, in order of
// seniority; within a class of equals the like ones first.
func (t *tree) readClasses(classes [][]int32, reference Label) []int8 {
	var list []int8
	for _, c := range classes {
		for _, like := range [2]bool{true, false} {
			for _, k := range c {
				if (t.nodes[k].label == reference) == like {
					list = append(list, map[bool]int8{true: 1, false: -1}[like])
				}
			}
		}
	}
	return list
}

func compareLists(a, b []int8) int { return slices.Compare(a, b) }

// labelled returns the nodes with label R or S of a branch, in classes of equals under the rules up to
// last, sphere after sphere, the senior classes first. Classes without such a node are left out.
func (t *tree) labelled(n, from int32, last rule) [][]int32 {
	type entry struct{ node, from, class int32 }
	sphere := []entry{{n, from, 0}}
	var out [][]int32
	for len(sphere) > 0 && !t.full {
		class := int32(-1)
		for _, e := range sphere {
			if l := t.nodes[e.node].label; l != R && l != S {
				continue
			}
			if e.class != class {
				out, class = append(out, nil), e.class
			}
			out[len(out)-1] = append(out[len(out)-1], e.node)
		}
		var next []entry
		for i := 0; i < len(sphere); {
			j := i
			for j < len(sphere) && sphere[j].class == sphere[i].class {
				j++
			}
			// The nodes i..j are equals: their branches at one place form one class.
			base := int32(len(next))
			var group []entry
			for ; i < j; i++ {
				for _, b := range t.branches(sphere[i].node, sphere[i].from, last) {
					group = append(group, entry{b.node, sphere[i].node, base + b.place})
				}
			}
			slices.SortStableFunc(group, func(x, y entry) int { return cmp.Compare(x.class, y.class) })
			next = append(next, group...)
		}
		sphere = next
	}
	return out
}
