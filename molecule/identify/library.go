package identify

import (
	"fmt"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/isomer"
	"shelfward/molecule/smiles"
	"shelfward/molecule/spectra"
	"shelfward/rules"
)

// counted elements of a block or formula; others rule the block search out.
const (
	iC = iota
	iH
	iN
	iO
	iS
	iP
	iF
	iCl
	iBr
	iI
	iSi
	numCounted
)

var countedElement = [numCounted]molecule.Element{6, 1, 7, 8, 16, 15, 9, 17, 35, 53, 14}

type counts [numCounted]int

// countsOf translates a formula; ok is false if it holds another element or a charge.
func countsOf(f *molecule.Formula) (c counts, ok bool) {
	rest := int32(0)
	for _, n := range f.Count {
		rest += n
	}
	for i, el := range countedElement {
		c[i] = int(f.Count[el])
		rest -= f.Count[el]
	}
	return c, rest == 0 && f.Charge == 0
}

func (c counts) minus(d counts, times int) (counts, bool) {
	for i := range c {
		c[i] -= d[i] * times
		if c[i] < 0 {
			return c, false
		}
	}
	return c, true
}

// window is a range of shifts in which some atoms of a block may show.
type window struct {
	lo, hi float32
	n      int
}

// buildingBlock is a functional block or a ring system with a number of groups on it.
type buildingBlock struct {
	name    string
	atoms   counts
	pi      int // unsaturation: rings and multiple bonds
	rings   int
	sites   int // free valences
	carbonH [4]int
	heteroH int
	acyl    int // C=O carbons that also carry O, N, S or a halogen
	oxo     int // C=O carbons
	shows   string
	cost    float32
	carbon  []window
	proton  []window
	// pieces are the arrangements of the free valences (substitution patterns of a ring system).
	pieces []isomer.Piece
	// ringSystem says that the block is an aromatic ring system.
	ringSystem bool
}

type blockFile struct {
	Sources map[string]string `yaml:"sources"`
	Blocks  []struct {
		rules.Place
		Name      string      `yaml:"name" need:"name: ester"`
		Piece     rules.Text  `yaml:"piece" need:"piece: '[OH:1][CH:1]=O'"`
		Carbons   [][]float64 `yaml:"carbons"`
		Hydrogens [][]float64 `yaml:"hydrogens"`
		Shows     string      `yaml:"shows"`
		Cost      float64     `yaml:"cost"`
		Source    string      `yaml:"source" need:"source: textbook"`
		Known     string      `yaml:"known" need:"known: 'memory'"`
	} `yaml:"blocks"`
}

// library holds the blocks, ring systems first by size.
type library struct {
	functional []*buildingBlock
	rings      []*buildingBlock
}

var loadLibrary = sync.OnceValues(readLibrary)

// maxRingSites bounds the groups on one ring system.
const maxRingSites = 6

func readLibrary() (*library, error) {
	const name = "blocks.yaml"
	var f blockFile
	fsys := rules.Files()
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return nil, err
	}
	lib := &library{}
	for _, r := range f.Blocks {
		if _, ok := f.Sources[r.Source]; !ok {
			return nil, r.Errorf("the source %q is not listed under sources", r.Source)
		}
		b, err := newBlock(r.Name, r.Piece.Value)
		if err != nil {
			return nil, r.Piece.Errorf(rules.PathOf(fsys, name), "%v", err)
		}
		b.shows, b.cost = r.Shows, float32(r.Cost)
		for _, w := range r.Carbons {
			b.carbon = append(b.carbon, window{float32(w[0]), float32(w[1]), 1})
		}
		for _, w := range r.Hydrogens {
			b.proton = append(b.proton, window{float32(w[0]), float32(w[1]), 1})
		}
		lib.functional = append(lib.functional, b)
	}
	systems, err := spectra.RingSystems()
	if err != nil {
		return nil, err
	}
	for _, s := range systems {
		for k := range maxRingSites + 1 {
			blocks, err := ringBlocks(s, k)
			if err != nil {
				return nil, err
			}
			lib.rings = append(lib.rings, blocks...)
		}
	}
	return lib, nil
}

// newBlock reads a functional block.
func newBlock(name, text string) (*buildingBlock, error) {
	m, err := smiles.Read(text)
	if err != nil {
		return nil, err
	}
	p, err := isomer.PieceOf(name, m)
	if err != nil {
		return nil, err
	}
	b := &buildingBlock{name: name, pieces: []isomer.Piece{p}}
	b.count(m)
	return b, nil
}

// count fills atoms, hydrogens by carrier, sites and unsaturation from a molecule whose atom classes
// are free valences.
func (b *buildingBlock) count(m *molecule.Molecule) {
	for a := range m.NumAtoms() {
		at := m.Atom(a)
		h := int(at.Hydrogens) - int(at.Class)
		b.sites += int(at.Class)
		for i, el := range countedElement {
			if el == at.Element {
				b.atoms[i]++
			}
		}
		b.atoms[iH] += h
		if at.Element == 6 {
			b.carbonH[min(h, 3)]++
			if oxo, acyl := carbonylAt(m, a); oxo {
				b.oxo++
				if acyl {
					b.acyl++
				}
			}
		} else {
			b.heteroH += h
		}
	}
	for i := range m.NumBonds() {
		bond := m.Bond(i)
		b.pi += int(bond.Order) - 1
		if bond.Order == 2 { // S=O and P=O do not count as unsaturation in the usual sense
			for _, x := range []int32{bond.A, bond.B} {
				if el := m.Atom(int(x)).Element; el == 16 && m.Degree(int(x)) > 1 && m.Atom(int(bond.A+bond.B-x)).Element == 8 || el == 15 {
					b.pi--
				}
			}
		}
	}
	b.rings = m.NumBonds() - m.NumAtoms() + 1
	b.pi += b.rings
}

// carbonylAt reports whether carbon a has a double-bonded O, and beside it a single-bonded O, N, S or
// halogen.
func carbonylAt(m *molecule.Molecule, a int) (oxo, acyl bool) {
	for _, nb := range m.Neighbors(a) {
		el, order := m.Atom(int(nb.Atom)).Element, m.Bond(int(nb.Bond)).Order
		oxo = oxo || el == 8 && order == 2
		acyl = acyl || el != 6 && order == 1
	}
	return oxo, acyl
}

// ringBlocks makes the blocks of a ring system with k groups: one piece for each substitution
// pattern, the patterns with a group on nitrogen in a block of their own. None where the system has
// fewer places.
func ringBlocks(s spectra.RingSystem, k int) ([]*buildingBlock, error) {
	var places []int
	for a := range s.Molecule.NumAtoms() {
		if s.Molecule.Atom(a).Hydrogens > 0 {
			places = append(places, a)
		}
	}
	if k > len(places) || k == 0 || len(places) > 8 && k > 3 || s.Name != "benzene" && k > 4 {
		return nil, nil
	}
	var blocks []*buildingBlock
	seen := map[molecule.Key]bool{}
	chosen := make([]int, k)
	var choose func(at, from int) error
	choose = func(at, from int) error {
		if at == k {
			var err error
			blocks, err = addPattern(blocks, s, chosen, seen)
			return err
		}
		for i := from; i < len(places); i++ {
			chosen[at] = places[i]
			if err := choose(at+1, i+1); err != nil {
				return err
			}
		}
		return nil
	}
	if err := choose(0, 0); err != nil {
		return nil, err
	}
	for _, b := range blocks {
		b.ringWindows(s, k)
	}
	return blocks, nil
}

// addPattern adds the piece with free valences on the chosen atoms to the block of its kind, unless an
// equivalent one is there.
func addPattern(blocks []*buildingBlock, s spectra.RingSystem, chosen []int, seen map[molecule.Key]bool) ([]*buildingBlock, error) {
	marked, classed := s.Molecule.Builder(), s.Molecule.Builder()
	for _, a := range chosen {
		marked.Atoms[a].Isotope = 200
		classed.Atoms[a].Class = 1
	}
	m, err := marked.Build()
	if err != nil {
		return nil, err
	}
	if seen[m.FlatKey()] {
		return blocks, nil
	}
	seen[m.FlatKey()] = true
	m, err = classed.Build()
	if err != nil {
		return nil, err
	}
	p, err := isomer.PieceOf(fmt.Sprintf("%s with %d groups", s.Name, len(chosen)), m)
	if err != nil {
		return nil, err
	}
	fresh := &buildingBlock{name: s.Name, ringSystem: true}
	fresh.count(m)
	for _, b := range blocks {
		if b.carbonH == fresh.carbonH && b.heteroH == fresh.heteroH {
			b.pieces = append(b.pieces, p)
			return blocks, nil
		}
	}
	fresh.pieces = []isomer.Piece{p}
	return append(blocks, fresh), nil
}

// ringWindows gives the ranges in which the ring's carbons and hydrogens may stand.
func (b *buildingBlock) ringWindows(s spectra.RingSystem, k int) {
	lowC, highC, lowH, highH, carbons, hydrogens := float32(200), float32(0), float32(20), float32(0), 0, 0
	for i, c := range s.Carbon {
		if c == 0 {
			continue
		}
		carbons++
		lowC, highC = min(lowC, float32(c)), max(highC, float32(c))
		if h := float32(s.Proton[i]); h > 0 {
			hydrogens++
			lowH, highH = min(lowH, h), max(highH, h)
		}
	}
	hydrogens = min(hydrogens, b.carbonH[1])
	with := min(k, carbons)
	// a free place is moved by its ortho and para groups (two ortho O: -28), a place with a group by that
	upField := float32(min(k, 3))
	b.carbon = append(b.carbon, window{lowC - 6 - 12*upField, highC + 9, carbons - with}, window{lowC - 8 - 11*upField, highC + 36, with})
	b.proton = append(b.proton, window{lowH - 0.95, highH + 1.1, hydrogens})
}
