package molecule

import "shelfward/molecule/matching"

// The aromaticity model. A ring of the relevant cycles is a candidate when every atom in it can
// give 0, 1 or 2 electrons to the ring; a candidate, or the outline of up to six fused candidates
// (rings of at most 24 atoms that share one bond), is aromatic when the electrons can sum to 4n+2. Exocyclic double
// bonds to a more electronegative atom leave no electron (tropone, pyridone and quinones count so:
// the first two are aromatic, the last is not); those to carbon leave one. It is the model of the
// reference toolkit, restated from its published description (the "RDKit book", section
// "Aromaticity"), so that lower-case text means the same to both.

// maxFused is how many fused rings are tried together, maxFusedRing the largest ring that fuses.
const (
	maxFused     = 6
	maxFusedRing = 24
)

// donor says how many electrons an atom can give to a ring.
type donor uint8

const (
	donorNone   donor = iota // no place in an aromatic ring
	donorVacant              // an empty p orbital
	donorOne
	donorTwo
	donorAny // '*'
)

// aromaticity is working memory of the perception.
type aromaticity struct {
	donors    []donor
	rings     [][]int32 // candidate rings, as atoms
	bonds     [][]int32 // the same, as bonds
	neighbors [][]int32 // candidate rings that share exactly one bond
	done      []bool    // candidate already in a fused system
	count     []int32   // by atom or bond, zero between uses
	system    []int32   // rings of the fused system at hand
	arena     []int32
}

// outerElectrons counts the electrons outside closed shells (the column of the periodic table);
// defaultValence is the valence of the elements that can stand in an aromatic ring.
var outerElectrons = [119]int8{
	1: 1, 2: 2, 3: 1, 4: 2, 5: 3, 6: 4, 7: 5, 8: 6, 9: 7, 10: 8, 11: 1, 12: 2, 13: 3, 14: 4, 15: 5, 16: 6, 17: 7, 18: 8,
	19: 1, 20: 2, 21: 3, 22: 4, 23: 5, 24: 6, 25: 7, 26: 8, 27: 9, 28: 10, 29: 11, 30: 2, 31: 3, 32: 4, 33: 5, 34: 6, 35: 7, 36: 8,
	37: 1, 38: 2, 39: 3, 40: 4, 41: 5, 42: 6, 43: 7, 44: 8, 45: 9, 46: 10, 47: 11, 48: 2, 49: 3, 50: 4, 51: 5, 52: 6, 53: 7, 54: 8,
	55: 1, 56: 2, 57: 3, 72: 4, 73: 5, 74: 6, 75: 7, 76: 8, 77: 9, 78: 10, 79: 11, 80: 2, 81: 3, 82: 4, 83: 5, 84: 6, 85: 7, 86: 8,
	87: 1, 88: 2,
}

var defaultValence = [119]int8{1: 1, 5: 3, 6: 4, 7: 3, 8: 2, 9: 1, 13: 3, 14: 4, 15: 3, 16: 2, 17: 1, 34: 2, 52: 2}

func (p *perceiver) perceiveAromaticity() {
	if len(p.relevant) == 0 {
		return
	}
	p.findCandidates()
	ar := &p.aromatic
	if len(ar.rings) == 0 {
		return
	}
	p.linkCandidates()
	for i := range ar.rings {
		if !ar.done[i] {
			p.fusedSystem(int32(i))
		}
	}
	for i := range p.m.bonds {
		if x := &p.m.bonds[i]; x.Aromatic {
			p.m.atoms[x.A].Aromatic, p.m.atoms[x.B].Aromatic = true, true
		}
	}
	p.settleInner()
}

// settleInner makes double bonds inside an aromatic outline single where the outline alone can take
// all double bonds (octalene), so that the Kekulé form found first leaves no trace.
func (p *perceiver) settleInner() {
	m := p.m
	inner := func(x *Bond) bool {
		return x.Ring && !x.Aromatic && x.Order == 2 && m.atoms[x.A].Aromatic && m.atoms[x.B].Aromatic
	}
	any := false
	for i := range m.bonds {
		any = any || inner(&m.bonds[i])
	}
	if !any {
		return
	}
	p.usable = sizedBools(p.usable, len(m.bonds))
	p.role = make([]matching.Role, len(m.atoms))
	for i := range m.bonds {
		x := &m.bonds[i]
		p.usable[i] = x.Aromatic
		if x.Order == 2 && (x.Aromatic || inner(x)) {
			p.role[x.A], p.role[x.B] = matching.Required, matching.Required
		}
	}
	mate, alone := p.matcher.Match(m.first, m.neighbors, p.usable, p.role)
	if alone != nil {
		return
	}
	for i := range m.bonds {
		x := &m.bonds[i]
		if x.Aromatic || inner(x) {
			x.Order = 1
			if mate[x.A] == x.B {
				x.Order = 2
			}
		}
	}
}

// findCandidates classifies ring atoms and keeps the rings whose atoms can all take part.
func (p *perceiver) findCandidates() {
	m, ar := p.m, &p.aromatic
	n := max(len(m.atoms), len(m.bonds))
	if cap(ar.donors) < len(m.atoms) {
		ar.donors = make([]donor, 2*len(m.atoms))
	}
	ar.donors = ar.donors[:len(m.atoms)]
	if len(ar.count) < n {
		ar.count = make([]int32, 2*n)
	}
	ar.rings, ar.bonds, ar.arena = ar.rings[:0], ar.bonds[:0], ar.arena[:0]
	for a := range ar.donors {
		ar.donors[a] = 255
	}
	for _, r := range p.relevant {
		ok, known := true, false
		for _, a := range r {
			if ar.donors[a] == 255 {
				ar.donors[a] = p.donorOf(int(a))
			}
			if ok = ok && ar.donors[a] != donorNone; !ok {
				break
			}
			known = known || m.atoms[a].Element != 0
		}
		if ok && known {
			ar.rings = append(ar.rings, r)
		}
	}
	for _, r := range ar.rings {
		at := len(ar.arena)
		for i, a := range r {
			next := r[0]
			if i+1 < len(r) {
				next = r[i+1]
			}
			ar.arena = append(ar.arena, int32(m.BondBetween(int(a), int(next))))
		}
		ar.bonds = append(ar.bonds, ar.arena[at:])
	}
	for i := range ar.bonds {
		ar.bonds[i] = ar.bonds[i][:len(ar.rings[i])]
	}
}

// donorOf counts the electrons that ring atom a can give.
func (p *perceiver) donorOf(a int) donor {
	m := p.m
	x := &m.atoms[a]
	multiples, ringMultiple, outside := 0, false, -1
	for _, nb := range m.Neighbors(a) {
		y := &m.bonds[nb.Bond]
		if y.Order < 2 {
			continue
		}
		multiples++
		if y.Ring {
			ringMultiple = true
		} else {
			outside = int(nb.Atom)
		}
	}
	if multiples > 1 || x.Element > 18 && x.Element != 34 && x.Element != 52 {
		return donorNone
	}
	if x.Element == 0 {
		if ringMultiple {
			return donorOne
		}
		return donorAny
	}
	degree := m.Degree(a) + int(x.Hydrogens)
	sum := int(p.sum[a]) + int(x.Hydrogens)
	valence := int(defaultValence[x.Element])
	if valence <= 1 || degree > 3 {
		return donorNone
	}
	if e := int(x.Element) - int(x.Charge); e < 1 || e > 118 || defaultValence[e] > 0 && sum > int(defaultValence[e]) {
		return donorNone
	}
	radicals := p.radicals(a, sum)
	if radicals > 0 && (x.Element != 6 || x.Charge != 0) {
		return donorNone
	}
	pairs := max(int(outerElectrons[x.Element])-valence-int(x.Charge), 0)
	electrons := valence - degree + pairs - radicals
	if electrons > 1 && int(p.sum[a])-m.Degree(a) > 1 {
		electrons = 1
	}
	steals := outside >= 0 && moreElectronegative(m.atoms[outside].Element, x.Element)
	switch {
	case electrons < 0:
		return donorNone
	case electrons == 0:
		switch {
		case outside >= 0:
			return donorVacant
		case ringMultiple:
			return donorOne
		}
		return donorNone
	case electrons == 1:
		switch {
		case outside >= 0 && steals:
			return donorVacant
		case multiples > 0:
			return donorOne
		case x.Charge == 1:
			return donorVacant
		}
		return donorNone
	}
	if steals {
		electrons--
	}
	if electrons%2 == 1 {
		return donorOne
	}
	return donorTwo
}

// radicals counts the unpaired electrons of atom a whose bonds and hydrogens sum to total.
func (p *perceiver) radicals(a, total int) int {
	x := &p.m.atoms[a]
	outer := int(outerElectrons[x.Element])
	r := max(8-outer-total+int(x.Charge), 0)
	if s := outer - total - int(x.Charge); s >= 0 {
		r = min(r, s)
	}
	return r
}

// moreElectronegative compares by outer electrons, then by row.
func moreElectronegative(e, f Element) bool {
	if outerElectrons[e] != outerElectrons[f] {
		return outerElectrons[e] > outerElectrons[f]
	}
	return e < f
}

// linkCandidates fills the neighbour lists of candidate rings.
func (p *perceiver) linkCandidates() {
	ar := &p.aromatic
	for len(ar.neighbors) < len(ar.rings) {
		ar.neighbors = append(ar.neighbors, nil)
	}
	if cap(ar.done) < len(ar.rings) {
		ar.done = make([]bool, 2*len(ar.rings))
	}
	ar.done = ar.done[:len(ar.rings)]
	for i := range ar.rings {
		ar.neighbors[i] = ar.neighbors[i][:0]
		ar.done[i] = false
	}
	if len(ar.rings) == 1 {
		return
	}
	for i := range ar.rings {
		if len(ar.rings[i]) > maxFusedRing {
			continue
		}
		for _, b := range ar.bonds[i] {
			ar.count[b] = 1
		}
		for j := i + 1; j < len(ar.rings); j++ {
			if len(ar.rings[j]) > maxFusedRing {
				continue
			}
			shared := int32(0)
			for _, b := range ar.bonds[j] {
				shared += ar.count[b]
			}
			if shared == 1 {
				ar.neighbors[i] = append(ar.neighbors[i], int32(j))
				ar.neighbors[j] = append(ar.neighbors[j], int32(i))
			}
		}
		for _, b := range ar.bonds[i] {
			ar.count[b] = 0
		}
	}
}

// fusedSystem marks the aromatic rings of the fused system of candidate ring start: single rings
// first, then connected sets of two and more, until every bond is settled.
func (p *perceiver) fusedSystem(start int32) {
	ar := &p.aromatic
	ar.done[start] = true
	system := append(ar.system[:0], start)
	defer func() { ar.system = system }()
	for i := 0; i < len(system); i++ {
		for _, j := range ar.neighbors[system[i]] {
			if !ar.done[j] {
				ar.done[j] = true
				system = append(system, j)
			}
		}
	}
	for size := 1; size <= min(len(system), maxFused) && !p.settled(system); size++ {
		p.connectedSets(system, size)
	}
}

// settled says that every bond of the system is aromatic.
func (p *perceiver) settled(system []int32) bool {
	for _, r := range system {
		for _, b := range p.aromatic.bonds[r] {
			if !p.m.bonds[b].Aromatic {
				return false
			}
		}
	}
	return true
}

// maxSets bounds the sets of fused rings tried per size in giant systems.
const maxSets = 200_000

// connectedSets tries every connected set of size rings exactly once: sets are grown from their
// first ring by rings later in the system (S. Wernicke's ESU enumeration).
func (p *perceiver) connectedSets(system []int32, size int) {
	ar := &p.aromatic
	if size == 1 {
		for i := range system {
			p.tryRings(system[i : i+1])
		}
		return
	}
	order := make([]int32, len(ar.rings))
	for i, r := range system {
		order[r] = int32(i)
	}
	near := make([]bool, len(ar.rings)) // in the set or beside it
	left := maxSets
	var grow func(set, front []int32)
	grow = func(set, front []int32) {
		if len(set) == size {
			left--
			p.tryRings(set)
			return
		}
		for len(front) > 0 && left > 0 {
			r := front[len(front)-1]
			front = front[:len(front)-1]
			wider := append(make([]int32, 0, len(front)+6), front...)
			var added []int32
			for _, j := range ar.neighbors[r] {
				if order[j] > order[set[0]] && !near[j] {
					near[j] = true
					added = append(added, j)
				}
			}
			grow(append(set, r), append(wider, added...))
			for _, j := range added {
				near[j] = false
			}
		}
	}
	for _, r := range system {
		clear(near)
		near[r] = true
		var front []int32
		for _, j := range ar.neighbors[r] {
			if order[j] > order[r] {
				near[j] = true
				front = append(front, j)
			}
		}
		set := append(make([]int32, 0, size), r)
		grow(set, front)
	}
}

// tryRings marks the outline of a set of rings as aromatic if its electrons fit. Atoms in three
// rings of the set lie inside it and are not counted.
func (p *perceiver) tryRings(set []int32) {
	m, ar := p.m, &p.aromatic
	least, most, unknown := 0, 0, 0
	for _, r := range set {
		for _, a := range ar.rings[r] {
			ar.count[a]++
		}
	}
	for _, r := range set {
		for _, a := range ar.rings[r] {
			c := ar.count[a]
			ar.count[a] = 0
			if c != 1 && c != 2 {
				continue
			}
			switch ar.donors[a] {
			case donorOne:
				least, most = least+1, most+1
			case donorTwo:
				least, most = least+2, most+2
			case donorAny:
				most += 2
				unknown++
			}
		}
	}
	fits := unknown <= 1 && (most == 2 || most >= 6 && (most-2)/4*4+2 >= least)
	if !fits {
		return
	}
	for _, r := range set {
		for _, b := range ar.bonds[r] {
			ar.count[b]++
		}
	}
	for _, r := range set {
		for _, a := range ar.rings[r] {
			m.atoms[a].Aromatic = true
		}
		for _, b := range ar.bonds[r] {
			if ar.count[b] == 1 {
				m.bonds[b].Aromatic = true
			}
		}
	}
	for _, r := range set {
		for _, b := range ar.bonds[r] {
			ar.count[b] = 0
		}
	}
}
