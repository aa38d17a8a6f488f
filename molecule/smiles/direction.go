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
// one single bond at either end; a single bond may serve two double bonds. Where that would put
// marks on both sides of a double bond that has none, a hydrogen is written out to carry one.
func (w *writer) placeMarks() {
	nb := w.m.NumBonds()
	if cap(w.dir) < nb {
		w.dir = make([]int8, 2*nb)
	}
	w.dir = w.dir[:nb]
	clear(w.dir)
	w.dirH = nil
	if len(w.m.DoubleBonds()) == 0 {
		return
	}
	w.partner = ints(w.partner, w.m.NumAtoms())
	for _, d := range w.m.DoubleBonds() {
		x := w.m.Bond(int(d.Bond))
		w.partner[x.A], w.partner[x.B] = x.B+1, x.A+1
	}
	ordered := slices.Clone(w.m.DoubleBonds())
	slices.SortFunc(ordered, func(x, y molecule.DoubleBond) int { return int(w.time(x) - w.time(y)) })
	w.avoid = nil
	for range 4 { // each round can bring a neighbour into trouble; chains of them are short
		w.relation.reset(nb + w.m.NumAtoms())
		for _, d := range ordered {
			w.relateEnds(d)
		}
		if !w.strayMarks() {
			break
		}
	}
	w.setDirections()
}

// setDirections gives each group of related bonds its signs: the bond written first gets '/'.
func (w *writer) setDirections() {
	nb := int32(w.m.NumBonds())
	set := func(b int32, sign int8) {
		if b < nb {
			w.dir[b] = sign
		} else {
			w.dirH[b-nb] = sign
		}
	}
	w.dirH = make([]int8, w.m.NumAtoms())
	bonds := w.bondsInOrder()
	done := make([]bool, len(bonds))
	for i, b := range bonds {
		if done[i] {
			continue
		}
		root, sign := w.relation.find(b)
		for k, c := range bonds {
			if r, s := w.relation.find(c); r == root {
				set(c, s*sign)
				done[k] = true
			}
		}
	}
}

// strayMarks looks for double bonds without geometry that would be read with one, notes their
// neighbours to be avoided and reports whether there are new ones.
func (w *writer) strayMarks() bool {
	found := false
	for b := 0; b < w.m.NumBonds(); b++ {
		x := w.m.Bond(b)
		if x.Order != 2 || x.Aromatic || w.partner[x.A] == x.B+1 {
			continue
		}
		var stray []int32
		for _, end := range [2]int32{x.A, x.B} {
			at := len(stray)
			for _, nb := range w.m.Neighbors(int(end)) {
				if w.relation.used[nb.Bond] {
					stray = append(stray, nb.Bond)
				}
			}
			if len(stray) == at {
				stray = nil
				break
			}
		}
		if stray == nil || !w.canBeMarked(b) {
			continue
		}
		if w.avoid == nil {
			w.avoid = make([]bool, w.m.NumBonds())
		}
		for _, s := range stray {
			found = found || !w.avoid[s]
			w.avoid[s] = true
		}
	}
	return found
}

// canBeMarked says that a reader keeps marks around double bond b.
func (w *writer) canBeMarked(b int) bool {
	x := w.m.Bond(b)
	if r := w.m.SmallestBondRing(b); r > 0 && r < 8 {
		return false
	}
	for _, end := range [2]int32{x.A, x.B} {
		if w.m.Degree(int(end)) < 2 || w.m.Degree(int(end)) > 3 {
			return false
		}
	}
	return true
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
	nb := int32(w.m.NumBonds())
	key := func(b int32) int64 {
		if b >= nb {
			return int64(w.seen[b-nb])<<32 | 2<<32
		}
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
			if !w.startsAt(x.A, la.Bond) {
				sign = -sign
			}
			if !w.startsAt(x.B, lb.Bond) {
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
	if int(b) >= w.m.NumBonds() {
		return
	}
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

// startsAt says that end is the first written atom of bond b; bonds to written hydrogens start there.
func (w *writer) startsAt(end, b int32) bool {
	return int(b) >= w.m.NumBonds() || w.firstWritten(end, b)
}

// choices lists the single bonds at end beside the double bond to partner, in order of preference:
// marked already, in the tree, low rank; then its hydrogen, then bonds to be avoided. The bond to
// the hydrogen of atom a has the number NumBonds + a.
func (w *writer) choices(end, partner int32) []molecule.Neighbor {
	var list []molecule.Neighbor
	for _, nb := range w.sorted[w.first[end]:w.first[end+1]] {
		if nb.Atom != partner {
			list = append(list, nb)
		}
	}
	if w.avoid != nil && len(list) == 1 && w.m.Atom(int(end)).Hydrogens == 1 {
		list = append(list, molecule.Neighbor{Atom: -1, Bond: int32(w.m.NumBonds()) + end})
	}
	grade := func(nb molecule.Neighbor) int {
		g := 0
		switch {
		case nb.Atom < 0:
			return 4
		case w.avoid != nil && w.avoid[nb.Bond]:
			g = 8
		}
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
