package shelf

import (
	"bytes"
	"slices"

	"shelfward/molecule"
)

// Sizes of a sample: a shelf of at most maxSample structures stands for itself; of a larger one up to
// perSize structures of every size up to maxSampleAtoms do.
const (
	maxSample      = 500
	perSize        = 12
	maxSampleAtoms = 40
)

// sample chooses the structures that stand for a shelf where looking at every item would take too long:
// it depends on the structures alone, not on the order of the rows. What is chosen among those of one
// size are the ones with the lowest keys, and keys are hashes: a fair draw.
type sample struct {
	all   []sampled // while there are few
	many  bool
	sizes [maxSampleAtoms + 1][]sampled // by number of atoms, in order of key
}

type sampled struct {
	key molecule.Key
	row uint32
	m   *molecule.Molecule
}

// add looks at one structure; rows come in rising order.
func (s *sample) add(row uint32, m *molecule.Molecule) {
	x := sampled{m.Key(), row, m}
	if n := m.NumAtoms(); n <= maxSampleAtoms {
		list := s.sizes[n]
		at, found := slices.BinarySearchFunc(list, x, func(a, b sampled) int { return bytes.Compare(a.key[:], b.key[:]) })
		if !found && at < perSize {
			list = slices.Insert(list, at, x)
			s.sizes[n] = list[:min(len(list), perSize)]
		}
	}
	if s.many || slices.ContainsFunc(s.all, func(o sampled) bool { return o.key == x.key }) {
		return
	}
	if s.all = append(s.all, x); len(s.all) > maxSample {
		s.many, s.all = true, nil
	}
}

// chosen lists the sample in the order of the rows, each structure once.
func (s *sample) chosen() []sampled {
	if !s.many {
		return s.all
	}
	list := slices.Concat(s.sizes[:]...)
	slices.SortFunc(list, func(a, b sampled) int { return int(int64(a.row) - int64(b.row)) })
	return list
}

// tally is what planning asks about a whole shelf: the least price of one mol of carbon among the items
// with a price, and the most carbon in one molecule of an item without.
type tally struct {
	Priced         bool    `json:"priced"`
	CarbonPrice    float64 `json:"carbon_price"` // with Priced
	UnpricedCarbon int     `json:"unpriced_carbon"`
}

func (t *tally) add(it *Item) {
	n := it.Molecule.Formula().Count[6]
	if n == 0 {
		return
	}
	if price := it.PricePerMol() / float64(n); price >= 0 { // false for NaN
		t.merge(tally{Priced: true, CarbonPrice: price})
	} else {
		t.UnpricedCarbon = max(t.UnpricedCarbon, int(n))
	}
}

func (t *tally) merge(o tally) {
	if o.Priced && (!t.Priced || o.CarbonPrice < t.CarbonPrice) {
		t.Priced, t.CarbonPrice = true, o.CarbonPrice
	}
	t.UnpricedCarbon = max(t.UnpricedCarbon, o.UnpricedCarbon)
}
