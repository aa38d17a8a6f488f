package ring

import "slices"

// blockFinder finds the cycles of one block (2-connected piece) in local numbering.
type blockFinder struct {
	atoms []int32    // local -> atom
	ends  [][2]int32 // local bond -> local atoms
	first []int32
	nbrs  []Neighbor

	depth, pred, queue []int32
	reach              []bool   // reached from the root by a shortest path over smaller atoms only
	seen               []int32  // mark for disjointness, by root and candidate
	families           []family // candidate cycle families
	rows               []uint64 // reduced basis, words per row
	pivots             []int32
	pathP, pathQ       []int32
	preds              []int32 // arena of predecessor trees, one per root
	bits, scratch      []uint64
}

// family is a set of cycles of equal length through root: root..p, then q..root, where p and q are
// joined by a bond (middle < 0) or by the atom middle.
type family struct {
	length, root, p, q, middle int32
}

func (b *blockFinder) reset() {
	b.atoms, b.ends = b.atoms[:0], b.ends[:0]
}

func (b *blockFinder) adjacency() {
	n := len(b.atoms)
	b.first = zeroed(b.first, n+1)
	for _, e := range b.ends {
		b.first[e[0]]++
		b.first[e[1]]++
	}
	sum := int32(0)
	for i, c := range b.first {
		b.first[i] = sum
		sum += c
	}
	if cap(b.nbrs) < int(sum) {
		b.nbrs = make([]Neighbor, sum, 2*sum)
	}
	b.nbrs = b.nbrs[:sum]
	for i := len(b.ends) - 1; i >= 0; i-- {
		e := b.ends[i]
		b.nbrs[b.first[e[0]]] = Neighbor{Atom: e[1], Bond: int32(i)}
		b.first[e[0]]++
		b.nbrs[b.first[e[1]]] = Neighbor{Atom: e[0], Bond: int32(i)}
		b.first[e[1]]++
	}
	copy(b.first[1:], b.first[:n])
	b.first[0] = 0
}

// walkCycle writes the atoms of a block that is one cycle into r, in cyclic order.
func (b *blockFinder) walkCycle(r []int32) []int32 {
	at, via := int32(0), int32(-1)
	for {
		r = append(r, b.atoms[at])
		nb := b.nbrs[b.first[at]]
		if nb.Bond == via {
			nb = b.nbrs[b.first[at]+1]
		}
		at, via = nb.Atom, nb.Bond
		if at == 0 {
			return r
		}
	}
}

// theta handles a block with one ring more than a cycle: two branch atoms joined by three chains.
// The two shorter pairs of chains are a basis; the third pair is relevant only where it is no
// longer than the second.
func (b *blockFinder) theta(f *Finder, out *Rings) {
	start := int32(0)
	for b.first[start+1]-b.first[start] != 3 {
		start++
	}
	var chains [3][]int32 // inner atoms of the chains, as local atoms
	room := b.queue[:0]
	end := int32(-1)
	for k := range chains {
		at := len(room)
		via := b.nbrs[b.first[start]+int32(k)]
		for b.first[via.Atom+1]-b.first[via.Atom] == 2 {
			room = append(room, via.Atom)
			next := b.nbrs[b.first[via.Atom]]
			if next.Bond == via.Bond {
				next = b.nbrs[b.first[via.Atom]+1]
			}
			via = next
		}
		end = via.Atom
		chains[k] = room[at:len(room):len(room)]
	}
	b.queue = room
	sortChains(&chains)
	pair := func(x, y []int32) []int32 {
		r := append(f.arena(len(x)+len(y)+2), b.atoms[start])
		for _, a := range x {
			r = append(r, b.atoms[a])
		}
		r = append(r, b.atoms[end])
		for i := len(y) - 1; i >= 0; i-- {
			r = append(r, b.atoms[y[i]])
		}
		return r
	}
	first, second := pair(chains[0], chains[1]), pair(chains[0], chains[2])
	out.Basis = append(out.Basis, first, second)
	out.Relevant = append(out.Relevant, first, second)
	if len(chains[0]) == len(chains[1]) {
		out.Relevant = append(out.Relevant, pair(chains[1], chains[2]))
	}
}

// sortChains puts short chains first, otherwise in the order found.
func sortChains(c *[3][]int32) {
	for i := 1; i < 3; i++ {
		for j := i; j > 0 && len(c[j]) < len(c[j-1]); j-- {
			c[j], c[j-1] = c[j-1], c[j]
		}
	}
}

// find adds the basis and the relevant cycles of the block. Cycles are looked for up to a length
// that doubles until the basis is complete, so that large blocks of small rings stay cheap.
func (b *blockFinder) find(f *Finder, out *Rings) {
	want := len(b.ends) - len(b.atoms) + 1
	for limit := int32(4); ; limit *= 2 {
		b.collect(limit)
		slices.SortStableFunc(b.families, func(x, y family) int { return int(x.length - y.length) })
		if b.choose(want, f, out) {
			return
		}
	}
}

// collect lists the candidate families with atoms at most limit bonds away from their root.
func (b *blockFinder) collect(limit int32) {
	n := len(b.atoms)
	b.families = b.families[:0]
	b.seen = zeroed(b.seen, n)
	b.depth, b.pred = sized(b.depth, n), sized(b.pred, n)
	if cap(b.reach) < n {
		b.reach = make([]bool, 2*n)
	}
	b.reach = b.reach[:n]
	stamp := int32(0)
	for root := int32(0); root < int32(n); root++ {
		b.search(root, limit)
		for _, y := range b.queue[1:] {
			if !b.reach[y] {
				continue
			}
			nb := b.nbrs[b.first[y]:b.first[y+1]]
			for i, z := range nb {
				if !b.known(z.Atom) || (z.Atom != root && !b.reach[z.Atom]) {
					continue
				}
				switch {
				case b.depth[z.Atom] == b.depth[y] && z.Atom < y:
					if stamp++; b.disjoint(y, z.Atom, root, stamp) {
						b.families = append(b.families, family{2*b.depth[y] + 1, root, y, z.Atom, -1})
					}
				case b.depth[z.Atom]+1 == b.depth[y]:
					for _, q := range nb[i+1:] {
						if b.known(q.Atom) && b.depth[q.Atom]+1 == b.depth[y] && b.reach[q.Atom] && z.Atom != root {
							if stamp++; b.disjoint(z.Atom, q.Atom, root, stamp) {
								b.families = append(b.families, family{2 * b.depth[y], root, z.Atom, q.Atom, y})
							}
						}
					}
				}
			}
		}
	}
}

func (b *blockFinder) known(a int32) bool { return b.depth[a] >= 0 }

// search runs breadth first from root; reach marks the atoms smaller than root that a shortest
// path over such atoms leads to, pred their predecessor on it.
func (b *blockFinder) search(root, limit int32) {
	for i := range b.depth {
		b.depth[i] = -1
		b.reach[i] = false
	}
	b.queue = append(b.queue[:0], root)
	b.depth[root], b.pred[root] = 0, -1
	for i := 0; i < len(b.queue); i++ {
		a := b.queue[i]
		if b.depth[a] == limit {
			break
		}
		for _, nb := range b.nbrs[b.first[a]:b.first[a+1]] {
			c := nb.Atom
			if b.depth[c] < 0 {
				b.depth[c] = b.depth[a] + 1
				b.queue = append(b.queue, c)
			}
			if b.depth[c] == b.depth[a]+1 && c < root && !b.reach[c] && (a == root || b.reach[a]) {
				b.reach[c], b.pred[c] = true, a
			}
		}
	}
}

// disjoint says that the chosen shortest paths from p and from q meet only at root.
func (b *blockFinder) disjoint(p, q, root, stamp int32) bool {
	for a := p; a != root; a = b.pred[a] {
		b.seen[a] = stamp
	}
	for a := q; a != root; a = b.pred[a] {
		if b.seen[a] == stamp {
			return false
		}
	}
	return true
}

// choose goes through the families by length, keeps those independent of shorter cycles as
// relevant and those independent of all kept so far as basis. It reports whether the basis is
// complete; otherwise nothing is added to out.
func (b *blockFinder) choose(want int, f *Finder, out *Rings) bool {
	words := (len(b.ends) + 63) / 64
	b.rows, b.pivots = b.rows[:0], b.pivots[:0]
	basisAt, relevantAt := len(out.Basis), len(out.Relevant)
	for i := 0; i < len(b.families); {
		length, shorter := b.families[i].length, len(b.pivots)
		if shorter == want {
			break
		}
		for ; i < len(b.families) && b.families[i].length == length; i++ {
			b.trace(b.families[i])
			bits := b.cycleBits(words)
			b.reduce(bits, words, 0, shorter)
			if zero(bits) {
				continue
			}
			r := f.arena(int(length))
			for _, a := range b.pathP {
				r = append(r, b.atoms[a])
			}
			out.Relevant = append(out.Relevant, r)
			b.reduce(bits, words, shorter, len(b.pivots))
			if !zero(bits) {
				b.addRow(bits)
				out.Basis = append(out.Basis, r)
			}
			if len(out.Relevant)-relevantAt < maxRelevant {
				b.others(b.families[i], f, out, relevantAt)
			}
		}
	}
	if len(b.pivots) < want {
		out.Basis, out.Relevant = out.Basis[:basisAt], out.Relevant[:relevantAt]
		return false
	}
	return true
}

// trace writes the prototype of fam into pathP, local atoms in cyclic order.
func (b *blockFinder) trace(fam family) {
	if b.queue[0] != fam.root || b.depth[fam.p] < 0 {
		b.search(fam.root, int32(len(b.atoms)))
	}
	b.pathP = b.pathP[:0]
	for a := fam.p; a != fam.root; a = b.pred[a] {
		b.pathP = append(b.pathP, a)
	}
	b.pathP = append(b.pathP, fam.root)
	slices.Reverse(b.pathP)
	if fam.middle >= 0 {
		b.pathP = append(b.pathP, fam.middle)
	}
	for a := fam.q; a != fam.root; a = b.pred[a] {
		b.pathP = append(b.pathP, a)
	}
}

// cycleBits sets the bond bits of the cycle in pathP.
func (b *blockFinder) cycleBits(words int) []uint64 {
	if cap(b.bits) < words {
		b.bits = make([]uint64, words)
	}
	bits := b.bits[:words]
	clear(bits)
	for i, a := range b.pathP {
		c := b.pathP[(i+1)%len(b.pathP)]
		for _, nb := range b.nbrs[b.first[a]:b.first[a+1]] {
			if nb.Atom == c {
				bits[nb.Bond/64] |= 1 << (nb.Bond % 64)
				break
			}
		}
	}
	return bits
}

// reduce adds (modulo 2) the rows from..to whose pivot is set in bits. Every row is free of the
// pivots of the rows before it, so one pass is enough.
func (b *blockFinder) reduce(bits []uint64, words, from, to int) {
	for r := from; r < to; r++ {
		p := b.pivots[r]
		if bits[p/64]>>(p%64)&1 != 0 {
			for w, x := range b.rows[r*words : (r+1)*words] {
				bits[w] ^= x
			}
		}
	}
}

func (b *blockFinder) addRow(bits []uint64) {
	for w, x := range bits {
		if x != 0 {
			p := int32(w * 64)
			for x&1 == 0 {
				x >>= 1
				p++
			}
			b.pivots = append(b.pivots, p)
			break
		}
	}
	b.rows = append(b.rows, bits...)
}

func zero(bits []uint64) bool {
	for _, x := range bits {
		if x != 0 {
			return false
		}
	}
	return true
}

// others adds the further cycles of fam: all pairs of shortest paths root..p and root..q. All of
// them are relevant when one is.
func (b *blockFinder) others(fam family, f *Finder, out *Rings, relevantAt int) {
	if b.single(fam.p, fam.root) && b.single(fam.q, fam.root) {
		return
	}
	left := b.allPaths(fam.p, fam.root)
	right := b.allPaths(fam.q, fam.root)
	prototype := slices.Clone(b.pathP)
	for _, l := range left {
		for _, r := range right {
			if len(out.Relevant)-relevantAt >= maxRelevant {
				return
			}
			ring := append(make([]int32, 0, fam.length), fam.root)
			for i := len(l) - 1; i >= 0; i-- {
				ring = append(ring, l[i])
			}
			if fam.middle >= 0 {
				ring = append(ring, fam.middle)
			}
			ring = append(ring, r...)
			if slices.Equal(ring, prototype) {
				continue
			}
			for i, a := range ring {
				ring[i] = b.atoms[a]
			}
			out.Relevant = append(out.Relevant, ring)
		}
	}
}

// single says that only one shortest path leads from a to root over reached atoms.
func (b *blockFinder) single(a, root int32) bool {
	for ; a != root; a = b.pred[a] {
		ways := 0
		for _, nb := range b.nbrs[b.first[a]:b.first[a+1]] {
			if b.before(nb.Atom, a, root) {
				ways++
			}
		}
		if ways > 1 {
			return false
		}
	}
	return true
}

func (b *blockFinder) before(c, a, root int32) bool {
	return b.depth[c] >= 0 && b.depth[c]+1 == b.depth[a] && (c == root || b.reach[c])
}

// allPaths lists the shortest paths from a back to root (root left out), at most maxRelevant.
func (b *blockFinder) allPaths(a, root int32) [][]int32 {
	paths := [][]int32{{}}
	if a == root {
		return paths
	}
	paths = [][]int32{{a}}
	for d := b.depth[a]; d > 1; d-- {
		var longer [][]int32
		for _, p := range paths {
			last := p[len(p)-1]
			for _, nb := range b.nbrs[b.first[last]:b.first[last+1]] {
				if b.before(nb.Atom, last, root) && len(longer) < maxRelevant {
					longer = append(longer, append(slices.Clone(p), nb.Atom))
				}
			}
		}
		paths = longer
	}
	return paths
}
