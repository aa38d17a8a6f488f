package canon

import (
	"math/bits"
	"slices"
)

// partition is an ordered partition of the atoms into cells. A cell is named by the place of its
// first member in elems.
type partition struct {
	elems []int32 // atoms, cell after cell
	place []int32 // atom -> index in elems
	cell  []int32 // atom -> start of its cell
	size  []int32 // start -> size of the cell there
	cells int
}

func (p *partition) resize(n int) {
	if cap(p.elems) < n {
		room := make([]int32, 4*n)
		p.elems, p.place, p.cell, p.size = room[:n:n], room[n:2*n:2*n], room[2*n:3*n:3*n], room[3*n:]
	}
	p.elems, p.place, p.cell, p.size = p.elems[:n], p.place[:n], p.cell[:n], p.size[:n]
}

func (p *partition) copyFrom(q *partition) {
	p.resize(len(q.elems))
	copy(p.elems, q.elems)
	copy(p.place, q.place)
	copy(p.cell, q.cell)
	copy(p.size, q.size)
	p.cells = q.cells
}

// keyed is an atom with the key by which its cell is split.
type keyed struct {
	key  uint64
	atom int32
}

// refiner splits partitions until they are equitable and agree with the stereo signs.
type refiner struct {
	g         *Graph
	dirty     []bool   // by cell start: must be looked at again
	keys      []keyed  // one cell
	stereoKey []uint64 // by atom, for the stereo split
	trace     uint64   // invariant of the splits made so far
}

func mix(x uint64) uint64 {
	x *= 0x9e3779b97f4a7c15
	x ^= x >> 32
	x *= 0xd6e8feb86659fd93
	return x ^ x>>29
}

func (r *refiner) note(x uint64) {
	r.trace = bits.RotateLeft64(r.trace, 23)*0x9fb21c651e98df25 ^ mix(x)
}

// start makes the partition by colours alone.
func (r *refiner) start(p *partition) {
	n := len(r.g.Colours)
	p.resize(n)
	if cap(r.dirty) < n {
		r.dirty = make([]bool, n+n/2)
	}
	r.dirty = r.dirty[:n]
	clear(r.dirty)
	for i := range p.elems {
		p.elems[i], p.place[i], p.cell[i] = int32(i), int32(i), 0
	}
	p.cells = 0
	if n == 0 {
		return
	}
	p.size[0], p.cells = int32(n), 1
	r.keys = r.keys[:0]
	for a, c := range r.g.Colours {
		r.keys = append(r.keys, keyed{c, int32(a)})
	}
	r.split(p, 0)
	for s := int32(0); s < int32(n); s += p.size[s] {
		r.dirty[s] = p.size[s] > 1
	}
}

// refine makes p equitable and stable under stereo signs.
func (r *refiner) refine(p *partition) {
	for {
		r.equitable(p)
		if p.cells == len(p.elems) || len(r.g.Centers)+len(r.g.Axes) == 0 || !r.splitByStereo(p) {
			return
		}
	}
}

func (r *refiner) equitable(p *partition) {
	n := int32(len(p.elems))
	for again := true; again; {
		again = false
		for s := int32(0); s < n; s += p.size[s] {
			if !r.dirty[s] {
				continue
			}
			r.dirty[s] = false
			if p.size[s] > 1 && r.collect(p, s) {
				r.split(p, s)
				again = true
			}
		}
	}
}

// collect computes the keys of the cell at s and reports whether they differ.
func (r *refiner) collect(p *partition, s int32) bool {
	g := r.g
	r.keys = r.keys[:0]
	differ := false
	for _, a := range p.elems[s : s+p.size[s]] {
		sum := uint64(0)
		for _, nb := range g.Neighbors[g.First[a]:g.First[a+1]] {
			sum += mix(uint64(p.cell[nb.Atom])<<8 | uint64(g.BondColours[nb.Bond]) + 1)
		}
		r.keys = append(r.keys, keyed{sum, a})
		differ = differ || sum != r.keys[0].key
	}
	return differ
}

// split sorts r.keys (the members of the cell at s) and cuts the cell where keys change. Members
// of every new cell but the first make their neighbours' cells dirty: within a cell all counts
// towards the old cell agree, so that the first new cell follows from the others.
func (r *refiner) split(p *partition, s int32) {
	k := r.keys
	if len(k) <= 48 {
		for i := 1; i < len(k); i++ {
			x := k[i]
			j := i
			for ; j > 0 && k[j-1].key > x.key; j-- {
				k[j] = k[j-1]
			}
			k[j] = x
		}
	} else {
		slices.SortFunc(k, func(x, y keyed) int {
			if x.key < y.key {
				return -1
			} else if x.key > y.key {
				return 1
			}
			return int(x.atom - y.atom)
		})
	}
	start := s
	for i, x := range k {
		at := s + int32(i)
		if i > 0 && x.key != k[i-1].key {
			p.size[start] = at - start
			start = at
			p.cells++
			r.note(x.key + uint64(at))
		}
		p.elems[at], p.place[x.atom], p.cell[x.atom] = x.atom, at, start
	}
	p.size[start] = s + int32(len(k)) - start
	for at := s + p.size[s]; at < s+int32(len(k)); at++ {
		r.touch(p, p.elems[at])
	}
}

// touch marks the cells next to atom a.
func (r *refiner) touch(p *partition, a int32) {
	for _, nb := range r.g.Neighbors[r.g.First[a]:r.g.First[a+1]] {
		if c := p.cell[nb.Atom]; p.size[c] > 1 {
			r.dirty[c] = true
		}
	}
}

// individualise makes atom a a cell of its own at the end of its cell.
func (r *refiner) individualise(p *partition, a int32) {
	s := p.cell[a]
	last := s + p.size[s] - 1
	other := p.elems[last]
	at := p.place[a]
	p.elems[at], p.elems[last] = other, a
	p.place[other], p.place[a] = at, last
	p.size[s]--
	p.size[last] = 1
	p.cell[a] = last
	p.cells++
	r.note(uint64(last))
	r.touch(p, a)
}

// splitByStereo gives each marked atom a key from its sign, where the cells settle it, and splits
// the cells by it. It reports whether any cell was split.
func (r *refiner) splitByStereo(p *partition) bool {
	n := len(p.elems)
	if cap(r.stereoKey) < n {
		r.stereoKey = make([]uint64, n+n/2)
	}
	r.stereoKey = r.stereoKey[:n]
	clear(r.stereoKey)
	for i := range r.g.Centers {
		c := &r.g.Centers[i]
		r.stereoKey[c.Atom] += mix(2 + c.sign(p.cell))
	}
	for i := range r.g.Axes {
		x := &r.g.Axes[i]
		key := mix(6 + x.sign(p.cell))
		r.stereoKey[x.A] += key
		r.stereoKey[x.B] += key
	}
	any := false
	for s := int32(0); s < int32(n); {
		size := p.size[s]
		if size > 1 {
			r.keys = r.keys[:0]
			differ := false
			for _, a := range p.elems[s : s+size] {
				r.keys = append(r.keys, keyed{r.stereoKey[a], a})
				differ = differ || r.stereoKey[a] != r.keys[0].key
			}
			if differ {
				r.split(p, s)
				any = true
			}
		}
		s += size
	}
	return any
}

// sign is the sense of c relative to an order of the atoms: 0 where two ligands stand equal,
// 1 or 2 otherwise. A ligand that is no atom comes first.
func (c *Center) sign(order []int32) uint64 {
	var v [4]int32
	for i, l := range c.Ligands {
		v[i] = -1
		if l >= 0 {
			v[i] = order[l]
		}
	}
	odd := c.Clockwise
	for i := 1; i < 4; i++ {
		for j := i; j > 0 && v[j-1] >= v[j]; j-- {
			if v[j-1] == v[j] {
				return 0
			}
			v[j-1], v[j] = v[j], v[j-1]
			odd = !odd
		}
	}
	if odd {
		return 2
	}
	return 1
}

// sign is the sense of x relative to an order of the atoms: 0 where the two ligands of one end
// stand equal, else whether the later ligand of A and the later one of B lie on one side.
func (x *Axis) sign(order []int32) uint64 {
	together := x.Together
	if x.OtherA >= 0 {
		if order[x.OtherA] == order[x.LigandA] {
			return 0
		}
		if order[x.OtherA] > order[x.LigandA] {
			together = !together
		}
	}
	if x.OtherB >= 0 {
		if order[x.OtherB] == order[x.LigandB] {
			return 0
		}
		if order[x.OtherB] > order[x.LigandB] {
			together = !together
		}
	}
	if together {
		return 2
	}
	return 1
}
