package name

// chainCandidates lists the carbon chains that can be parents, in both directions: through must
// (-1: anywhere), with the acid carbons of s at their ends or, where three or more would stand on a
// chain, beside it.
func (w *writer) chainCandidates(must int32, s spec) []*candidate {
	ends := make([]bool, w.m.NumAtoms()) // acid carbons that may only end a chain
	for _, g := range s.groups {
		if g.within && w.element(g.key) == 6 {
			ends[g.key] = true
		}
	}
	list := w.chains(must, s, ends, true)
	if len(s.groups) > 2 && s.groups[0].within && must < 0 {
		list = append(list, w.chains(must, s, ends, false)...)
	}
	return list
}

// chainAtom says whether carbon a may belong to a parent chain.
func (w *writer) chainAtom(a int32, s spec, ends []bool, within bool) bool {
	if w.element(a) != 6 || w.inRing(a) || a == s.blocked || !w.plain(a) {
		return false
	}
	if ends[a] {
		return within
	}
	if r := w.around(a); len(r.carbons)+r.hydrogens == 0 && w.noCarbonAcross(r) && len(r.doubles)+2*len(r.triples) >= 2 {
		return false // isocyanates, thiocyanates and the like are prefixes
	}
	if g := w.groupOf[a]; g != nil {
		switch g.class {
		case acid, nitrile:
			return a == s.attach
		case carbamicAcid, carbonEster, carbonHalide, urea:
			return false
		}
		if g.class == amidine && !g.within || len(g.hosts) == 1 && g.hosts[0] != a && w.element(g.hosts[0]) != 6 {
			return false
		}
	}
	return true
}

// noCarbonAcross says whether the multiple bonds of r lead to heteroatoms only.
func (w *writer) noCarbonAcross(r around) bool {
	for _, list := range [][]int32{r.doubles, r.triples} {
		for _, x := range list {
			if w.element(x) == 6 {
				return false
			}
		}
	}
	return true
}

// chains enumerates paths between ends of the carbon trees.
func (w *writer) chains(must int32, s spec, ends []bool, within bool) []*candidate {
	allowed := make([]bool, w.m.NumAtoms())
	for a := range allowed {
		allowed[a] = w.chainAtom(int32(a), s, ends, within)
	}
	if must >= 0 {
		allowed = w.reach(must, allowed)
	}
	degree := make([]int, len(allowed))
	for a := range allowed {
		if !allowed[a] {
			continue
		}
		for _, nb := range w.m.Neighbors(a) {
			if allowed[nb.Atom] {
				degree[a]++
			}
		}
	}
	var list []*candidate
	var path []int32
	var walk func(a, from int32)
	walk = func(a, from int32) {
		path = append(path, a)
		if degree[a] <= 1 && (from >= 0 || degree[a] == 0) {
			if must < 0 || contains(path, must) {
				order := append([]int32(nil), path...)
				list = append(list, &candidate{order: order, within: within, locants: numbersUpTo(len(order))})
			}
		}
		for _, nb := range w.m.Neighbors(int(a)) {
			if nb.Atom != from && allowed[nb.Atom] {
				walk(nb.Atom, a)
			}
		}
		path = path[:len(path)-1]
	}
	for a := range allowed {
		if allowed[a] && degree[a] <= 1 {
			walk(int32(a), -1)
		}
	}
	return longest(list, s)
}

// longest keeps the longest chains where nothing but length decides first.
func longest(list []*candidate, s spec) []*candidate {
	if len(s.groups) > 0 {
		return list
	}
	n := 0
	for _, c := range list {
		n = max(n, len(c.order))
	}
	kept := list[:0]
	for _, c := range list {
		if len(c.order) == n {
			kept = append(kept, c)
		}
	}
	return kept
}

// reach keeps the allowed atoms joined to a.
func (w *writer) reach(a int32, allowed []bool) []bool {
	kept := make([]bool, len(allowed))
	if !allowed[a] {
		return kept
	}
	kept[a] = true
	for stack := []int32{a}; len(stack) > 0; {
		x := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for _, nb := range w.m.Neighbors(int(x)) {
			if allowed[nb.Atom] && !kept[nb.Atom] {
				kept[nb.Atom] = true
				stack = append(stack, nb.Atom)
			}
		}
	}
	return kept
}

func contains(list []int32, a int32) bool {
	for _, x := range list {
		if x == a {
			return true
		}
	}
	return false
}

var plainNumbers = numbers(maxAtoms + 1)

// numbersUpTo are the locants 1 to n, shared.
func numbersUpTo(n int) []string { return plainNumbers[:n] }
