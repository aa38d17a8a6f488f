package name

// heteroParents lists the parents whose skeleton is not carbon: hydrazine, diazene, hydroxylamine,
// silane (P-68), in both numberings.
func (w *writer) heteroParents() []*candidate {
	var list []*candidate
	for a := range w.m.NumAtoms() {
		x := int32(a)
		if w.inRing(x) || !w.plain(x) {
			continue
		}
		switch w.element(x) {
		case 14:
			list = append(list, &candidate{order: []int32{x}, base: "silane", locants: []string{"1"}})
		case 15:
			if d := w.degree(x) + w.hydrogens(x); d == 3 && len(w.around(x).doubles) == 0 {
				list = append(list, &candidate{order: []int32{x}, base: "phosphane", locants: []string{"1"}})
			} else if r := w.around(x); d == 4 && len(r.doubles) == 1 && w.element(r.doubles[0]) == 6 {
				list = append(list, &candidate{order: []int32{x}, base: "phosphorane", locants: []string{"1"}})
			}
		case 7:
			list = append(list, w.nitrogenParents(x)...)
		}
	}
	return list
}

func (w *writer) nitrogenParents(x int32) []*candidate {
	var list []*candidate
	for _, nb := range w.m.Neighbors(int(x)) {
		y := nb.Atom
		if w.inRing(y) || !w.plain(y) {
			continue
		}
		order := int(w.m.Bond(int(nb.Bond)).Order)
		switch {
		case w.element(y) == 7 && order == 1 && !w.nitroso(x) && !w.nitroso(y) && w.nitrogens(x) == 1 && w.nitrogens(y) == 1:
			list = append(list, &candidate{order: []int32{x, y}, base: "hydrazine", locants: numbersUpTo(2)})
		case w.element(y) == 7 && order == 2 && w.nitrogens(x) == 1 && w.nitrogens(y) == 1:
			list = append(list, &candidate{order: []int32{x, y}, base: "diazene", locants: numbersUpTo(2)})
		case w.element(y) == 8 && order == 1 && w.nitrogens(x) == 0 && !w.acylNitrogen(x):
			list = append(list, &candidate{order: []int32{x, y}, base: "hydroxylamine", locants: []string{"N", "O"}})
		}
	}
	return list
}

// nitrogens counts the nitrogen neighbours of x.
func (w *writer) nitrogens(x int32) int {
	n := 0
	for _, nb := range w.m.Neighbors(int(x)) {
		if w.element(nb.Atom) == 7 {
			n++
		}
	}
	return n
}

// acylNitrogen says whether x is the nitrogen of an amide.
func (w *writer) acylNitrogen(x int32) bool {
	for _, nb := range w.m.Neighbors(int(x)) {
		if w.groupAcyl(nb.Atom, x) && w.m.Bond(int(nb.Bond)).Order == 1 {
			return true
		}
	}
	return false
}

// heteroParentRank orders the heteroatom parents (P-41, P-44.1.2).
func heteroParentRank(base string) int {
	switch base {
	case "hydroxylamine":
		return 1
	case "hydrazine", "diazene":
		return 2
	case "phosphane", "phosphorane":
		return 3
	}
	return 5
}
