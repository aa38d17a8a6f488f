package name

import (
	"math/bits"
	"slices"
)

// positions is a set of ring positions, one bit each.
type positions uint64

func (p positions) size() int { return bits.OnesCount64(uint64(p)) }

// list gives the members in ascending order.
func (p positions) list() []int {
	var l []int
	for ; p != 0; p &= p - 1 {
		l = append(l, bits.TrailingZeros64(uint64(p)))
	}
	return l
}

// mancude is the ring skeleton as far as double bonds go.
type mancude struct {
	next    []positions // position -> neighbouring positions
	capable positions   // positions that can bear a double bond
}

// mancudeOf takes the skeleton from the first numbering; all numberings of a ring give the same.
func (w *writer) mancudeOf(s *ringSystem) *mancude {
	order := s.orders[0]
	k := &mancude{next: make([]positions, len(order))}
	for i, a := range order {
		switch w.element(a) {
		case 8, 16, 34, 52:
			continue
		case 7, 15, 33, 5:
			if w.ringDegree(a) > 2 && w.plain(a) {
				continue
			}
		}
		k.capable |= 1 << uint(i)
	}
	for i, a := range order {
		for j, b := range order {
			if x := w.m.BondBetween(int(a), int(b)); i != j && x >= 0 && w.m.Bond(x).Ring {
				k.next[i] |= 1 << uint(j)
			}
		}
	}
	return k
}

// pairs is the size of the largest matching within set. Any vertex that has a neighbour is covered
// by some largest matching, so that no vertex need be tried unmatched.
func (k *mancude) pairs(set positions) int {
	best, bestDegree := -1, 99
	for _, i := range set.list() {
		if d := (k.next[i] & set).size(); d > 0 && d < bestDegree {
			best, bestDegree = i, d
			if d == 1 {
				break
			}
		}
	}
	if best < 0 {
		return 0
	}
	most := 0
	for _, j := range (k.next[best] & set).list() {
		rest := set &^ (1<<uint(best) | 1<<uint(j))
		most = max(most, 1+k.pairs(rest))
		if 2*most+1 >= set.size() {
			break
		}
	}
	return most
}

// perfect says whether set can be paired off whole.
func (k *mancude) perfect(set positions) bool {
	return set.size()%2 == 0 && 2*k.pairs(set) == set.size()
}

// spareHydrogens is the number of indicated hydrogens that the ring needs in any form.
func (w *writer) spareHydrogens(s *ringSystem) int {
	k := w.mancudeOf(s)
	return k.capable.size() - 2*k.pairs(k.capable)
}

// hydrogenation says how a ring in a given numbering comes from its mancude parent.
type hydrogenation struct {
	indicated positions // 1H-
	added     positions // (2H) behind the locants of the suffix
	hydro     positions // dihydro
	all       bool      // hydro prefixes saturate the whole ring: their locants may be left out
}

// maxSubsets bounds the subsets tried for indicated and added hydrogen.
const maxSubsets = 20000

// hydrogenate distributes the saturated positions over indicated hydrogen, added hydrogen and hydro
// prefixes (P-31.1.4.2.4, P-31.1.4.3.4). suffix are the positions whose suffix needs two free
// valences (one, ylidene). False if the ring cannot be written so.
func (s *ringSystem) hydrogenate(k *mancude, saturated, suffix positions) (hydrogenation, bool) {
	saturated &= k.capable
	suffix &= saturated
	var low hydrogenation
	lowCost, tried := 1<<30, 0
	subsets(saturated, s.free, func(y positions) {
		rest := suffix &^ y
		base := (y &^ suffix).size()
		if suffix == 0 {
			base = 0
		}
		if base >= lowCost {
			return
		}
		if suffix == 0 {
			if tried++; tried < maxSubsets && k.perfect(k.capable&^y) {
				low, lowCost = hydrogenation{indicated: y, hydro: saturated &^ y}, 0
			}
			return
		}
		for n := 0; base+n < lowCost && n <= (saturated&^y&^suffix).size(); n++ {
			found := false
			subsets(saturated&^y&^suffix, n, func(a positions) {
				if tried++; found || tried > maxSubsets {
					return
				}
				if k.perfect(k.capable &^ (y | rest | a)) {
					found = true
					low, lowCost = hydrogenation{indicated: y, added: a, hydro: saturated &^ (y | rest | a)}, base+n
				}
			})
			if found || tried > maxSubsets {
				break
			}
		}
	})
	if lowCost == 1<<30 || low.hydro.size()%2 == 1 {
		return low, false
	}
	low.all = saturated == k.capable && suffix == 0
	return low, true
}

// subsets calls f with each subset of set of size n, low members first.
func subsets(set positions, n int, f func(positions)) {
	members := set.list()
	if n > len(members) {
		return
	}
	var choose func(from, left int, chosen positions)
	choose = func(from, left int, chosen positions) {
		if left == 0 {
			f(chosen)
			return
		}
		for i := from; i <= len(members)-left; i++ {
			choose(i+1, left-1, chosen|1<<uint(members[i]))
		}
	}
	choose(0, n, 0)
}

// ranked lists sets of positions for comparison.
func (h hydrogenation) key() (indicated, hydro []int) {
	hydro = append(h.hydro.list(), h.added.list()...)
	slices.Sort(hydro)
	return h.indicated.list(), hydro
}
