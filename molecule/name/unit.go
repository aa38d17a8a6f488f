package name

import (
	"slices"
	"strings"
)

// candidate is a parent in one numbering: a chain, a ring system or a heteroatom parent.
type candidate struct {
	ring    *ringSystem // nil for the others
	order   []int32     // position -> atom
	base    string      // heteroatom and functional parents: "hydrazine", "carbamic"; empty otherwise
	locants []string
	within  bool   // chain: acid carbons at its ends belong to it
	group   *group // functional parent: the group that is the parent
	swapped bool   // functional parent: N and N' exchanged
}

// spec says what the name of a unit must express.
type spec struct {
	groups  []*group // the principal groups, all of one class
	attach  int32    // free valence: the atom, -1 for none
	double  bool     // the free valence is double
	blocked int32    // the atom that the unit is attached to, -1 for none
}

// place is a group at a position of the parent.
type place struct {
	*group
	at int
}

// branch is a substituent atom at a position of the parent.
type branch struct {
	at         int
	atom, from int32
	nitrogen   int // 0: on the skeleton; 1, 2, 3: on N, N', N'' of the group at position at
	group      int // index of the group for nitrogen > 0
}

// plan is a candidate with all that its name needs.
type plan struct {
	*candidate
	spec
	places     []place
	branches   []branch
	enes, ynes []int
	hydro      hydrogenation
	saturated  bool // a ring whose saturated name applies
	key        [][]int
	partnerOf  map[int]int // ring: first position of a multiple bond -> the other
	oxides     []string    // locants of ring atoms with additional oxygen
}

// plan works out c; nil if it cannot be named so.
func (w *writer) plan(c *candidate, s spec) *plan {
	p := &plan{candidate: c, spec: s}
	if !w.mark(c) {
		return nil
	}
	defer w.unmark(c)
	w.placeGroups(p)
	if len(s.groups) > 0 && len(p.places) == 0 {
		return nil
	}
	w.collectBranches(p)
	if !w.unsaturation(p) {
		return nil
	}
	w.makeKey(p)
	return p
}

// mark notes the positions of the atoms of c.
func (w *writer) mark(c *candidate) bool {
	for i, a := range c.order {
		w.position[a] = int32(i) + 1
		if !w.plain(a) && !w.chargeAllowed(a) {
			w.unmark(c)
			return false
		}
	}
	return true
}

func (w *writer) unmark(c *candidate) {
	for _, a := range c.order {
		w.position[a] = 0
	}
}

// chargeAllowed says whether a charged ring nitrogen is an N-oxide or, in an ion, a pyridinium.
func (w *writer) chargeAllowed(a int32) bool {
	if w.element(a) != 7 || w.charge(a) != 1 || !w.inRing(a) {
		return false
	}
	return a == w.cation || w.oxideOxygen(a) >= 0
}

// oxideOxygen is the O- on atom a, -1 if none.
func (w *writer) oxideOxygen(a int32) int32 {
	for _, nb := range w.m.Neighbors(int(a)) {
		if w.element(nb.Atom) == 8 && w.charge(nb.Atom) == -1 && w.degree(nb.Atom) == 1 {
			return nb.Atom
		}
	}
	return -1
}

// placeGroups finds the groups that c expresses as suffix.
func (w *writer) placeGroups(p *plan) {
	for _, g := range p.groups {
		switch {
		case p.group != nil:
			if p.group == g {
				p.places = append(p.places, place{g, 0})
			}
			continue
		case p.within && g.within:
			if i := w.position[g.key]; i > 0 {
				p.places = append(p.places, place{g, int(i) - 1})
			}
			continue
		case g.chain == "" && g.side == "" || g.within && p.ring == nil && p.base == "" && g.side == "":
			continue
		}
		if w.position[g.key] > 0 && !(len(g.hosts) == 1 && g.hosts[0] == g.key) {
			continue
		}
		if p.ring != nil || p.base != "" || g.side == "" || !p.within {
			for _, h := range g.hosts {
				if i := w.position[h]; i > 0 {
					p.places = append(p.places, place{g, int(i) - 1})
					break
				}
			}
		}
	}
	slices.SortStableFunc(p.places, func(x, y place) int { return x.at - y.at })
}

// collectBranches lists what hangs on the skeleton and on the nitrogens of the suffix.
func (w *writer) collectBranches(p *plan) {
	w.stamp++
	expressed := func(a int32) bool { return w.stamped[a] == w.stamp }
	for _, g := range p.places {
		for _, a := range g.used {
			w.stamped[a] = w.stamp
		}
	}
	for i, a := range p.order {
		if p.group != nil {
			break
		}
		oxygens := 0
		for _, nb := range w.m.Neighbors(int(a)) {
			b := nb.Atom
			if w.position[b] > 0 || expressed(b) || b == p.blocked {
				continue
			}
			if p.ring != nil && w.oxide(a, b) {
				oxygens++
				continue
			}
			p.branches = append(p.branches, branch{at: i, atom: b, from: a})
		}
		for range oxygens {
			p.oxides = append(p.oxides, p.locants[i])
		}
	}
	for k, g := range p.places {
		nitrogens := g.nitrogens
		if p.swapped && len(nitrogens) > 1 {
			nitrogens = append([]int32{nitrogens[1], nitrogens[0]}, nitrogens[2:]...)
		}
		for j, n := range nitrogens {
			for _, nb := range w.m.Neighbors(int(n)) {
				b := nb.Atom
				if w.position[b] > 0 || expressed(b) || b == p.blocked {
					continue
				}
				p.branches = append(p.branches, branch{at: g.at, atom: b, from: n, nitrogen: j + 1, group: k})
			}
		}
	}
}

// oxide says whether oxygen b on ring atom a is cited as oxide: N-oxides, sulfoxides, sulfones.
func (w *writer) oxide(a, b int32) bool {
	if w.element(b) != 8 || w.degree(b) != 1 || w.hydrogens(b) > 0 {
		return false
	}
	switch w.element(a) {
	case 7:
		return w.charge(a) == 1 && w.charge(b) == -1
	case 16, 34:
		return w.charge(b) == 0
	case 15:
		return w.charge(b) == 0
	}
	return false
}

// unsaturation fills the multiple bonds or the hydrogenation of p.
func (w *writer) unsaturation(p *plan) bool {
	switch {
	case p.base != "" || p.group != nil:
		return true
	case p.ring == nil:
		for i := 0; i+1 < len(p.order); i++ {
			switch w.m.Bond(w.m.BondBetween(int(p.order[i]), int(p.order[i+1]))).Order {
			case 2:
				p.enes = append(p.enes, i)
			case 3:
				p.ynes = append(p.ynes, i)
			}
		}
		return true
	case p.ring.kind == ringAlkane:
		return w.ringEnes(p)
	}
	return w.ringHydrogens(p)
}

// ringEnes lists the multiple bonds of a ring named as cycloalkane.
func (w *writer) ringEnes(p *plan) bool {
	for _, b := range p.ring.bonds {
		x := w.m.Bond(int(b))
		if x.Order == 1 {
			continue
		}
		i, j := int(w.position[x.A])-1, int(w.position[x.B])-1
		if i > j {
			i, j = j, i
		}
		if p.ring.rings == 1 && i == 0 && j == len(p.order)-1 && j > 1 {
			i, j = j, j+1 // the bond from the last atom to the first
		}
		if j != i+1 {
			if p.partnerOf == nil {
				p.partnerOf = map[int]int{}
			}
			if _, twice := p.partnerOf[i]; twice {
				return false
			}
			p.partnerOf[i] = j
		}
		if x.Order == 3 {
			p.ynes = append(p.ynes, i)
		} else {
			p.enes = append(p.enes, i)
		}
	}
	slices.Sort(p.enes)
	slices.Sort(p.ynes)
	all := slices.Concat(p.enes, p.ynes)
	slices.Sort(all)
	return len(slices.Compact(all)) == len(p.enes)+len(p.ynes)
}

// ringHydrogens works out the hydrogenation of a mancude ring.
func (w *writer) ringHydrogens(p *plan) bool {
	s := p.ring
	if s.skeleton == nil {
		s.skeleton = w.mancudeOf(s)
	}
	for _, b := range s.bonds {
		if w.m.Bond(int(b)).Order > 2 {
			return false
		}
	}
	var saturated, suffix positions
	for i, a := range p.order {
		if !w.innerDouble(a) {
			saturated |= 1 << uint(i)
		}
	}
	saturated &= s.skeleton.capable
	if s.saturated != "" && saturated == s.skeleton.capable {
		p.saturated = true
		return true
	}
	for _, g := range p.places {
		if g.double {
			suffix |= 1 << uint(g.at)
		}
	}
	if p.attach >= 0 && p.double {
		suffix |= 1 << uint(w.position[p.attach]-1)
	}
	var ok bool
	p.hydro, ok = s.hydrogenate(s.skeleton, saturated, suffix)
	return ok
}

// makeKey fills what decides between parents and numberings (P-44, P-45, P-31.1.4).
func (w *writer) makeKey(p *plan) {
	kind := []int{2, 0}
	var senior []int
	multiple := 0
	switch {
	case p.group != nil:
		kind = []int{0, 0}
	case p.base != "":
		kind = []int{0, heteroParentRank(p.base)}
	case p.ring != nil:
		kind = []int{1, 0}
		senior = p.ring.seniority
		for _, b := range p.ring.bonds {
			multiple += int(w.m.Bond(int(b)).Order) - 1
		}
	default:
		senior = []int{-len(p.order)}
		multiple = len(p.enes) + len(p.ynes)
	}
	var suffix, skeleton, each []int
	for _, g := range p.places {
		suffix = append(suffix, g.at)
	}
	if p.attach >= 0 {
		suffix = append(suffix, int(w.position[p.attach])-1)
	}
	slices.Sort(suffix)
	indicated, hydro := p.hydro.key()
	skeleton = append(append(append(skeleton, hydro...), p.enes...), p.ynes...)
	slices.Sort(skeleton)
	for _, b := range p.branches {
		each = append(each, p.branchRank(b))
	}
	slices.Sort(each)
	p.key = [][]int{{-len(p.places)}, kind, senior, {-multiple, -len(p.enes)}, indicated, suffix, skeleton, p.enes, {-len(each)}, each}
}

// branchRank orders the locants of branches: N before 1.
func (p *plan) branchRank(b branch) int {
	if b.nitrogen > 0 {
		return -1000 + 10*p.places[b.group].at + b.nitrogen
	}
	return b.at
}

// compareKeys compares two plans by their keys.
func compareKeys(x, y *plan) int {
	for i := range x.key {
		if c := slices.Compare(x.key[i], y.key[i]); c != 0 {
			return c
		}
	}
	return 0
}

// choose names the senior plan of the candidates; empty if none can be named.
func (w *writer) choose(candidates []*candidate, s spec) string {
	var top []*plan
	for _, c := range candidates {
		p := w.plan(c, s)
		if p == nil {
			continue
		}
		k := -1
		if len(top) > 0 {
			k = compareKeys(p, top[0])
		}
		if k < 0 {
			top = append(top[:0], p)
		} else if k == 0 {
			top = append(top, p)
		}
	}
	if len(top) == 0 {
		w.fail = true
		return ""
	}
	return w.first(top)
}

// maxTies bounds the equal plans written out.
const maxTies = 64

// first writes the tied plans and takes the one whose prefixes in alphabetical order have the lowest
// locants (P-31.1.4.3.4), then the first in the alphabet.
func (w *writer) first(top []*plan) string {
	best := ""
	var bestKey []int
	for i, p := range top {
		if i == maxTies {
			break
		}
		list := w.affixes(p)
		if w.fail {
			return ""
		}
		var key []int
		for _, g := range grouped(list) {
			for _, x := range g {
				key = append(key, x.rank)
			}
		}
		name := w.write(p, list)
		if w.fail {
			return ""
		}
		c := -1
		if best != "" {
			if c = slices.Compare(key, bestKey); c == 0 {
				c = strings.Compare(name, best)
			}
		}
		if c < 0 {
			best, bestKey = name, key
		}
	}
	return best
}

// affixes names the branches of p.
func (w *writer) affixes(p *plan) []affix {
	var list []affix
	for _, b := range p.branches {
		x := affix{rank: p.branchRank(b), sub: w.prefix(b.atom, b.from)}
		if b.nitrogen > 0 {
			x.locant = "N"
			if len(p.places) > 1 {
				if len(p.places[b.group].nitrogens) > 1 {
					w.fail = true
				}
				x.locant += p.locants[p.places[b.group].at]
			}
			x.locant += strings.Repeat("'", b.nitrogen-1)
		} else {
			x.locant = p.locants[b.at]
		}
		list = append(list, x)
	}
	return list
}
