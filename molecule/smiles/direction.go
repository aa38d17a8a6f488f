package smiles

import (
	"slices"

	"shelfward/molecule"
)

// relation joins bonds whose directions depend on each other: a union-find with the sign of each
// bond relative to its root.
type relation struct {
	up   []int32
	sign []int8
	used []bool // bond carries a mark
}

func (r *relation) reset(n int) {
	r.up = ints(r.up, n)
	if cap(r.sign) < n {
		r.sign, r.used = make([]int8, 2*n), make([]bool, 2*n)
	}
	r.sign, r.used = r.sign[:n], r.used[:n]
	for i := range r.up {
		r.up[i], r.sign[i], r.used[i] = int32(i), 1, false
	}
}

func (r *relation) find(b int32) (root int32, sign int8) {
	sign = 1
	for r.up[b] != b {
		sign *= r.sign[b]
		b = r.up[b]
	}
	return b, sign
}

// relate demands direction(b) = sign * direction(c) and reports whether that is possible.
func (r *relation) relate(b, c int32, sign int8) bool {
	rb, sb := r.find(b)
	rc, sc := r.find(c)
	if rb == rc {
		return sb == sign*sc
	}
	r.up[rb], r.sign[rb] = rc, sb*sign*sc
	return true
}

// placeMarks chooses the bonds that carry / and \ and their directions. Each double bond relates
// one single bond at either end; a single bond may serve two double bonds.
func (w *writer) placeMarks() {
	nb := w.m.NumBonds()
	if cap(w.dir) < nb {
		w.dir = make([]int8, 2*nb)
	}
	w.dir = w.dir[:nb]
	clear(w.dir)
	marks := w.m.DoubleBonds()
	if len(marks) == 0 {
		return
	}
	w.relation.reset(nb)
	w.partner = ints(w.partner, w.m.NumAtoms())
	for _, d := range marks {
		x := w.m.Bond(int(d.Bond))
		w.partner[x.A], w.partner[x.B] = x.B+1, x.A+1
	}
	ordered := slices.Clone(marks)
	slices.SortFunc(ordered, func(x, y molecule.DoubleBond) int { return int(w.time(x) - w.time(y)) })
	for _, d := range ordered {
		w.relateEnds(d)
	}
	bonds := w.bondsInOrder()
	for _, b := range bonds {
		if !w.relation.used[b] || w.dir[b] != 0 {
			continue
		}
		root, sign := w.relation.find(b)
		for _, c := range bonds { // the first bond of each group is written '/'
			if r, s := w.relation.find(c); r == root && w.relation.used[c] {
				w.dir[c] = s * sign
			}
		}
	}
}

// time is when the first end of d is written.
func (w *writer) time(d molecule.DoubleBond) int32 {
	x := w.m.Bond(int(d.Bond))
	return min(w.seen[x.A], w.seen[x.B])
}

// bondsInOrder lists the bonds that carry marks in the order they are written.
func (w *writer) bondsInOrder() []int32 {
	var list []int32
	for b, used := range w.relation.used {
		if used {
			list = append(list, int32(b))
		}
	}
	key := func(b int32) int64 {
		x := w.m.Bond(int(b))
		i, j := w.seen[x.A], w.seen[x.B]
		if w.tree[b] { // written before its second atom
			return int64(max(i, j))<<32 | 1<<31
		}
		return int64(min(i, j))<<32 | 1<<32 | int64(max(i, j)) // with the digits of its first atom
	}
	slices.SortFunc(list, func(b, c int32) int {
		if key(b) < key(c) {
			return -1
		}
		return 1
	})
	return list
}

// relateEnds picks a single bond at each end of d, such as already carry marks first, and relates
// their directions.
func (w *writer) relateEnds(d molecule.DoubleBond) {
	x := w.m.Bond(int(d.Bond))
	for _, la := range w.choices(x.A, x.B) {
		for _, lb := range w.choices(x.B, x.A) {
			together := d.Together != (la.Atom != d.A) != (lb.Atom != d.B)
			// up(l) at its end: direction + if written towards l, - if from it.
			sign := int8(1)
			if !together {
				sign = -1
			}
			if !w.firstWritten(x.A, la.Bond) {
				sign = -sign
			}
			if !w.firstWritten(x.B, lb.Bond) {
				sign = -sign
			}
			if w.relation.relate(la.Bond, lb.Bond, sign) {
				w.use(la.Bond)
				w.use(lb.Bond)
				return
			}
		}
	}
}

// use lets bond b carry a mark: where another single bond at the same end of a marked double bond
// carries one, the two point to opposite sides.
func (w *writer) use(b int32) {
	if w.relation.used[b] {
		return
	}
	w.relation.used[b] = true
	x := w.m.Bond(int(b))
	for _, end := range [2]int32{x.A, x.B} {
		if w.partner[end] == 0 {
			continue
		}
		for _, nb := range w.m.Neighbors(int(end)) {
			if nb.Bond == b || nb.Atom == w.partner[end]-1 || !w.relation.used[nb.Bond] {
				continue
			}
			sign := int8(-1)
			if w.firstWritten(end, nb.Bond) != w.firstWritten(end, b) {
				sign = 1
			}
			w.relation.relate(nb.Bond, b, sign)
		}
	}
}

// choices lists the single bonds at end beside the double bond to partner, in order of preference:
// marked already, in the tree, low rank.
func (w *writer) choices(end, partner int32) []molecule.Neighbor {
	var list []molecule.Neighbor
	for _, nb := range w.sorted[w.first[end]:w.first[end+1]] {
		if nb.Atom != partner {
			list = append(list, nb)
		}
	}
	grade := func(nb molecule.Neighbor) int {
		g := 0
		if !w.relation.used[nb.Bond] {
			g += 2
		}
		if !w.tree[nb.Bond] {
			g++
		}
		return g
	}
	slices.SortStableFunc(list, func(x, y molecule.Neighbor) int { return grade(x) - grade(y) })
	return list
}
