package name

// Two benzene rings joined by a single bond have a name of their own (P-28.2.3): 1,1'-biphenyl. Other
// ring assemblies are named as a ring with a ring substituent.

// biphenylName is the parent; biphenylLocants its positions, those of the second ring primed.
const biphenylName = "1,1'-biphenyl"

var biphenylLocants = []string{"1", "1'", "2", "2'", "3", "3'", "4", "4'", "5", "5'", "6", "6'"}

// findBiphenyls lists the pairs of joined benzene rings as ring systems beside w.rings.
func (w *writer) findBiphenyls() {
	for b := range w.m.NumBonds() {
		x := w.m.Bond(b)
		if x.Ring || x.Order != 1 || !w.inRing(x.A) || !w.inRing(x.B) {
			continue
		}
		r, s := w.rings[w.ringOf[x.A]], w.rings[w.ringOf[x.B]]
		if r == s || r.name != "benzene" || s.name != "benzene" {
			continue
		}
		pair := &ringSystem{rings: 1, kind: ringMancude, name: biphenylName, locants: biphenylLocants, ok: true, biphenyl: true}
		pair.atoms = append(append(pair.atoms, r.atoms...), s.atoms...)
		pair.bonds = append(append(pair.bonds, r.bonds...), s.bonds...)
		for _, p := range r.orders {
			for _, q := range s.orders {
				if p[0] == x.A && q[0] == x.B {
					pair.orders = append(pair.orders, alternate(p, q), alternate(q, p))
				}
			}
		}
		pair.seniority = w.ringSeniority(pair)
		pair.skeleton = w.mancudeOf(pair)
		w.biphenyls = append(w.biphenyls, pair)
	}
}

// alternate interleaves two orders of equal length.
func alternate(p, q []int32) []int32 {
	list := make([]int32, 0, 2*len(p))
	for i := range p {
		list = append(list, p[i], q[i])
	}
	return list
}

// ringParents are the candidates with the ring of atom a: the ring itself and the biphenyls it belongs
// to, without those that hold the blocked atom.
func (w *writer) ringParents(a, blocked int32) []*candidate {
	list := ringCandidates(w.rings[w.ringOf[a]])
	for _, r := range w.biphenyls {
		if contains(r.atoms, a) && !contains(r.atoms, blocked) {
			list = append(list, ringCandidates(r)...)
		}
	}
	return list
}
