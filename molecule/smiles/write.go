package smiles

import (
	"slices"
	"strconv"
	"sync"

	"shelfward/molecule"
)

// writer is the working memory of Write, reused over molecules.
type writer struct {
	m        *molecule.Molecule
	rank     []int32
	classes  bool
	out      []byte
	seen     []int32 // atom -> time of visit from 1, 0 not yet
	parent   []int32
	via      []int32 // atom -> bond to its parent, -1
	size     []int32 // atoms in the subtree
	order    []int32 // atoms in order of visit
	cursor   []int32
	sorted   []molecule.Neighbor // adjacency in the order the walk takes
	first    []int32
	tree     []bool // bond is in the tree
	child    []int32
	childAt  []int32
	back     []molecule.Neighbor // closures per atom
	backAt   []int32
	digit    []int32 // bond -> closure number, 0 none
	taken    []bool  // closure numbers in use
	dir      []int8  // bond -> 1 '/', -1 '\', as written from its first atom
	dirH     []int8  // atom -> direction of the bond to its written hydrogen, nil or 0 none
	avoid    []bool  // bonds that must carry no mark
	partner  []int32 // atom -> 1+the atom across its marked double bond, 0
	marked   []int32 // atom -> 1+index of its centre, 0
	stack    []frame
	relation relation
}

type frame struct{ atom, next int32 }

var writers = sync.Pool{New: func() any { return new(writer) }}

// Write returns the canonical SMILES, stereo included. Atom classes are left out. Equal molecules
// give equal texts and different molecules different ones.
func Write(m *molecule.Molecule) string { return write(m, m.Ranks(), false) }

// WriteInOrder writes m with the atoms taken by rank, lowest first where there is a choice, and
// with atom classes. ranks is a permutation of the atoms.
func WriteInOrder(m *molecule.Molecule, ranks []int32) string { return write(m, ranks, true) }

func write(m *molecule.Molecule, ranks []int32, classes bool) string {
	w := writers.Get().(*writer)
	w.m, w.rank, w.classes = m, ranks, classes
	w.out = w.out[:0]
	w.walk()
	w.listChildren()
	w.listClosures()
	w.placeMarks()
	w.emit()
	s := string(w.out)
	w.m, w.rank = nil, nil
	writers.Put(w)
	return s
}

func ints(s []int32, n int) []int32 {
	if cap(s) < n {
		return make([]int32, n, n+n/2+8)
	}
	s = s[:n]
	clear(s)
	return s
}

// walk makes a depth-first forest. Multiple bonds are followed first, so that closures are mostly
// single bonds, then low ranks.
func (w *writer) walk() {
	m, n := w.m, w.m.NumAtoms()
	w.seen, w.parent, w.via, w.size = ints(w.seen, n), ints(w.parent, n), ints(w.via, n), ints(w.size, n)
	w.cursor, w.first = ints(w.cursor, n), ints(w.first, n+1)
	w.order = w.order[:0]
	w.sorted = w.sorted[:0]
	if cap(w.tree) < m.NumBonds() {
		w.tree = make([]bool, 2*m.NumBonds())
	}
	w.tree = w.tree[:m.NumBonds()]
	clear(w.tree)
	byRank := ints(w.childAt, n)
	w.childAt = byRank
	for a, r := range w.rank {
		byRank[r] = int32(a)
	}
	for a := 0; a < n; a++ {
		w.first[a] = int32(len(w.sorted))
		w.cursor[a] = w.first[a]
		for _, nb := range m.Neighbors(a) {
			w.sorted = append(w.sorted, nb)
			key := w.walkKey(nb)
			for k := len(w.sorted) - 1; k > int(w.first[a]) && w.walkKey(w.sorted[k-1]) > key; k-- {
				w.sorted[k], w.sorted[k-1] = w.sorted[k-1], nb
			}
		}
	}
	w.first[n] = int32(len(w.sorted))
	time := int32(0)
	for _, root := range byRank {
		if w.seen[root] != 0 {
			continue
		}
		at := root
		w.parent[root], w.via[root] = -1, -1
		time++
		w.seen[root] = time
		w.order = append(w.order, root)
		for at >= 0 {
			if w.cursor[at] == w.first[at+1] {
				at = w.parent[at]
				continue
			}
			nb := w.sorted[w.cursor[at]]
			w.cursor[at]++
			if w.seen[nb.Atom] != 0 {
				continue
			}
			time++
			w.seen[nb.Atom] = time
			w.parent[nb.Atom], w.via[nb.Atom] = at, nb.Bond
			w.tree[nb.Bond] = true
			w.order = append(w.order, nb.Atom)
			at = nb.Atom
		}
	}
}

func (w *writer) walkKey(nb molecule.Neighbor) int32 {
	if x := w.m.Bond(int(nb.Bond)); x.Order > 1 && !x.Aromatic {
		return w.rank[nb.Atom]
	}
	return w.rank[nb.Atom] + 1<<20
}

// listChildren packs the children of each atom, small branches first so that the longest is the
// main chain.
func (w *writer) listChildren() {
	n := w.m.NumAtoms()
	for i := len(w.order) - 1; i >= 0; i-- {
		a := w.order[i]
		w.size[a]++
		if p := w.parent[a]; p >= 0 {
			w.size[p] += w.size[a]
		}
	}
	w.childAt = ints(w.childAt, n+1)
	w.child = w.child[:0]
	for a := 0; a < n; a++ {
		w.childAt[a] = int32(len(w.child))
		for _, nb := range w.sorted[w.first[a]:w.first[a+1]] {
			if w.tree[nb.Bond] && w.parent[nb.Atom] == int32(a) {
				w.child = append(w.child, nb.Atom)
			}
		}
		kids := w.child[w.childAt[a]:]
		for i := 1; i < len(kids); i++ {
			x := kids[i]
			j := i
			for ; j > 0 && w.childLess(x, kids[j-1]); j-- {
				kids[j] = kids[j-1]
			}
			kids[j] = x
		}
	}
	w.childAt[n] = int32(len(w.child))
}

func (w *writer) childLess(x, y int32) bool {
	if w.size[x] != w.size[y] {
		return w.size[x] < w.size[y]
	}
	return w.rank[x] < w.rank[y]
}

// listClosures packs the closure bonds of each atom: those that end here, then those that begin.
func (w *writer) listClosures() {
	n := w.m.NumAtoms()
	w.backAt = ints(w.backAt, n+1)
	w.back = w.back[:0]
	w.digit = ints(w.digit, w.m.NumBonds())
	for a := 0; a < n; a++ {
		w.backAt[a] = int32(len(w.back))
		for _, nb := range w.sorted[w.first[a]:w.first[a+1]] {
			if w.tree[nb.Bond] {
				continue
			}
			w.back = append(w.back, nb)
			for k := len(w.back) - 1; k > int(w.backAt[a]) && w.backKey(a, w.back[k-1]) > w.backKey(a, nb); k-- {
				w.back[k], w.back[k-1] = w.back[k-1], nb
			}
		}
	}
	w.backAt[n] = int32(len(w.back))
}

// backKey sorts closures of a: ends (partner written before) by time, then beginnings by time.
func (w *writer) backKey(a int, nb molecule.Neighbor) int32 {
	if t := w.seen[nb.Atom]; t < w.seen[a] {
		return t
	}
	return w.seen[nb.Atom] + 1<<20
}

// firstWritten says whether a is the end of bond b that stands first in the text.
func (w *writer) firstWritten(a, b int32) bool {
	x := w.m.Bond(int(b))
	return w.seen[a] < w.seen[x.A+x.B-a]
}

// emit writes the text.
func (w *writer) emit() {
	w.taken = w.taken[:0]
	w.marked = ints(w.marked, w.m.NumAtoms())
	for i, c := range w.m.Centers() {
		w.marked[c.Atom] = int32(i) + 1
	}
	for _, root := range w.order {
		if w.parent[root] >= 0 {
			continue
		}
		if len(w.out) > 0 {
			w.out = append(w.out, '.')
		}
		w.atom(root)
		w.stack = append(w.stack[:0], frame{root, w.childAt[root]})
		for len(w.stack) > 0 {
			f := &w.stack[len(w.stack)-1]
			last := w.childAt[f.atom+1]
			if f.next > w.childAt[f.atom] && f.next < last {
				w.out = append(w.out, ')')
			}
			if f.next == last {
				w.stack = w.stack[:len(w.stack)-1]
				continue
			}
			c := w.child[f.next]
			f.next++
			if f.next < last {
				w.out = append(w.out, '(')
			}
			w.bond(w.via[c])
			w.atom(c)
			w.stack = append(w.stack, frame{c, w.childAt[c]})
		}
	}
}

// bond writes the symbol of bond b, if any is needed.
func (w *writer) bond(b int32) {
	x := w.m.Bond(int(b))
	switch {
	case w.dir[b] > 0: // also beside a double bond on an aromatic ring, where the bond is single in any Kekulé form
		w.out = append(w.out, '/')
	case w.dir[b] < 0:
		w.out = append(w.out, '\\')
	case x.Aromatic:
	case x.Order == 2:
		w.out = append(w.out, '=')
	case x.Order == 3:
		w.out = append(w.out, '#')
	case x.Order == 4:
		w.out = append(w.out, '$')
	case w.readAromatic(x.A, x.Ring) && w.readAromatic(x.B, x.Ring):
		w.out = append(w.out, '-')
	}
}

// readAromatic says that a reader may take an unwritten bond between a and its like as aromatic.
func (w *writer) readAromatic(a int32, ring bool) bool {
	x := w.m.Atom(int(a))
	return x.Aromatic || x.Element == 0 && ring
}

// closures writes the ring digits of a. Numbers that end here are free again after this atom only.
func (w *writer) closures(a int32) {
	list := w.back[w.backAt[a]:w.backAt[a+1]]
	for _, nb := range list {
		d := w.digit[nb.Bond]
		if d == 0 {
			d = 1
			for int(d) < len(w.taken) && w.taken[d] {
				d++
			}
			for len(w.taken) <= int(d) {
				w.taken = append(w.taken, false)
			}
			w.taken[d] = true
			w.digit[nb.Bond] = d
			w.bond(nb.Bond)
		}
		switch {
		case d < 10:
			w.out = append(w.out, byte('0'+d))
		case d < 100:
			w.out = append(w.out, '%', byte('0'+d/10), byte('0'+d%10))
		default:
			w.out = append(w.out, "%("...)
			w.out = strconv.AppendInt(w.out, int64(d), 10)
			w.out = append(w.out, ')')
		}
	}
	for _, nb := range list {
		if w.seen[nb.Atom] < w.seen[a] {
			w.taken[w.digit[nb.Bond]] = false
		}
	}
}

// atom writes atom a with its closures.
func (w *writer) atom(a int32) {
	x := w.m.Atom(int(a))
	if w.bare(a, &x) {
		w.symbol(&x)
	} else {
		w.bracket(a, &x)
	}
	w.closures(a)
	if w.dirH != nil && w.dirH[a] != 0 {
		w.out = append(w.out, '(', "\\?/"[w.dirH[a]+1])
		w.out = append(w.out, "[H])"...)
	}
}

func (w *writer) symbol(x *molecule.Atom) {
	s := x.Element.Symbol()
	if !x.Aromatic || x.Element == 0 {
		w.out = append(w.out, s...)
		return
	}
	w.out = append(w.out, s[0]+'a'-'A')
	w.out = append(w.out, s[1:]...)
}

// bare says whether a can be written without brackets: a reader would fill in the same hydrogens.
func (w *writer) bare(a int32, x *molecule.Atom) bool {
	if x.Charge != 0 || x.Isotope != 0 || w.marked[a] != 0 || w.classes && x.Class != 0 {
		return false
	}
	sum := 0
	for _, nb := range w.m.Neighbors(int(a)) {
		b := w.m.Bond(int(nb.Bond))
		if b.Aromatic {
			sum++
		} else {
			sum += int(b.Order)
		}
	}
	h := int(x.Hydrogens)
	if x.Aromatic {
		switch x.Element {
		case 0:
			return h == 0
		case 6:
			return h == max(0, 3-sum)
		case 7:
			return h == 0 && (sum == 2 || sum == 3)
		case 15:
			return h == 0 && (sum == 2 || sum == 3)
		case 8, 16:
			return h == 0 && sum == 2
		case 5:
			return h == 0 && sum == 3
		}
		return false
	}
	switch x.Element {
	case 0:
		return h == 0
	case 5:
		return sum+h == 3
	case 6:
		return sum+h == 4
	case 7:
		return sum+h == 3 || sum == 5 && h == 0
	case 8:
		return sum+h == 2
	case 15:
		return sum+h == 3 || sum+h == 5 && sum > 3
	case 16:
		return sum+h == 2 || sum+h == 4 && sum > 2 || sum+h == 6 && sum > 4
	case 9, 17, 35, 53:
		return sum+h == 1
	}
	return false
}

// bracket writes a with everything spelled out.
func (w *writer) bracket(a int32, x *molecule.Atom) {
	if w.dirH != nil && w.dirH[a] != 0 {
		x.Hydrogens--
	}
	w.out = append(w.out, '[')
	if x.Isotope != 0 {
		w.out = strconv.AppendInt(w.out, int64(x.Isotope), 10)
	}
	w.symbol(x)
	if k := w.marked[a]; k != 0 {
		w.mark(a, w.m.Centers()[k-1])
	}
	if x.Hydrogens > 0 {
		w.out = append(w.out, 'H')
		if x.Hydrogens > 1 {
			w.out = strconv.AppendInt(w.out, int64(x.Hydrogens), 10)
		}
	}
	if c := int64(x.Charge); c != 0 {
		sign := byte('+')
		if c < 0 {
			sign, c = '-', -c
		}
		w.out = append(w.out, sign)
		if c > 1 {
			w.out = strconv.AppendInt(w.out, c, 10)
		}
	}
	if w.classes && x.Class != 0 {
		w.out = append(w.out, ':')
		w.out = strconv.AppendInt(w.out, int64(x.Class), 10)
	}
	w.out = append(w.out, ']')
}

// mark writes @ or @@: the sense of c in the order in which the ligands of a are written.
func (w *writer) mark(a int32, c molecule.Center) {
	var written [4]int32
	n := 0
	add := func(l int32) {
		if n < 4 {
			written[n] = l
			n++
		}
	}
	if p := w.parent[a]; p >= 0 {
		add(p)
	}
	if slices.Contains(c.Ligands[:], molecule.LigandHydrogen) {
		add(molecule.LigandHydrogen)
	}
	for _, nb := range w.back[w.backAt[a]:w.backAt[a+1]] {
		add(nb.Atom)
	}
	for _, k := range w.child[w.childAt[a]:w.childAt[a+1]] {
		add(k)
	}
	if slices.Contains(c.Ligands[:], molecule.LigandLonePair) {
		add(molecule.LigandLonePair)
	}
	clockwise := c.Clockwise
	if n == 4 && written[3] == molecule.LigandLonePair {
		sum := 0
		for _, nb := range w.m.Neighbors(int(a)) {
			sum += int(w.m.Bond(int(nb.Bond)).Order)
		}
		if lonePairTurned(int(w.backAt[a+1]-w.backAt[a]), sum) {
			clockwise = !clockwise
		}
	}
	l := c.Ligands
	for i := range l { // count the swaps that turn the stored order into the written one
		for j := i; j < 4; j++ {
			if l[j] == written[i] {
				if j != i {
					l[i], l[j] = l[j], l[i]
					clockwise = !clockwise
				}
				break
			}
		}
	}
	w.out = append(w.out, '@')
	if clockwise {
		w.out = append(w.out, '@')
	}
}
