package spectra

import "shelfward/molecule"

// Predictor predicts spectra of one molecule after another, reusing its working memory. It is not
// safe for concurrent use; make one for each goroutine.
type Predictor struct {
	t *tables
	m *molecule.Molecule
	n int // atoms

	el       []uint8
	hyd      []uint8
	deg      []uint8
	charge   []int8
	aromatic []bool
	ring     []uint8 // size of the smallest ring, 0 none
	sp       []hybrid
	carbonyl []Carbonyl // class of a C=O carbon, 0 for others
	nb       [][]molecule.Neighbor
	order    []uint8 // by bond

	systemCode []uint64 // environment code of an aromatic atom within its ring system
	class      []uint64 // symmetry class
	scratch    []uint64
	dist       []int16
	queue      []int32
	ringOf     [][]int32 // rings of the molecule
}

// hybrid is the bonding state of an atom.
type hybrid uint8

const (
	single   hybrid = iota // only single bonds
	double                 // one double bond
	triple                 // a triple bond
	cumulene               // two double bonds
	arene                  // aromatic
)

// NewPredictor returns a Predictor over the built-in tables.
func NewPredictor() *Predictor { return &Predictor{t: mustTables()} }

func grow[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n, 2*n)
	}
	return s[:n]
}

// perceive fills the flat arrays for m.
func (p *Predictor) perceive(m *molecule.Molecule) {
	n := m.NumAtoms()
	p.m, p.n = m, n
	p.el, p.hyd, p.deg, p.charge = grow(p.el, n), grow(p.hyd, n), grow(p.deg, n), grow(p.charge, n)
	p.aromatic, p.ring, p.sp, p.carbonyl = grow(p.aromatic, n), grow(p.ring, n), grow(p.sp, n), grow(p.carbonyl, n)
	p.nb, p.systemCode, p.class = grow(p.nb, n), grow(p.systemCode, n), grow(p.class, n)
	p.scratch, p.dist, p.queue = grow(p.scratch, n), grow(p.dist, n), grow(p.queue, n)
	p.order = grow(p.order, m.NumBonds())
	for b := range m.NumBonds() {
		p.order[b] = m.Bond(b).Order
	}
	for a := range n {
		at := m.Atom(a)
		p.el[a], p.hyd[a], p.charge[a], p.aromatic[a] = uint8(at.Element), at.Hydrogens, at.Charge, at.Aromatic
		p.nb[a] = m.Neighbors(a)
		p.deg[a] = uint8(len(p.nb[a]))
		p.ring[a] = 0
		if m.InRing(a) {
			p.ring[a] = uint8(min(m.SmallestRing(a), 255))
		}
	}
	p.ringOf = m.Rings()
	for a := range n {
		p.sp[a] = p.hybridOf(a)
	}
	for a := range n {
		p.carbonyl[a] = p.carbonylOf(a)
	}
	p.codeSystems()
	p.codeClasses()
}

func (p *Predictor) hybridOf(a int) hybrid {
	if p.aromatic[a] {
		return arene
	}
	h := single
	for _, nb := range p.nb[a] {
		switch p.order[nb.Bond] {
		case 3:
			return triple
		case 2:
			if h == double {
				h = cumulene
			} else {
				h = double
			}
		}
	}
	return h
}

const (
	hydrogen = 1
	boron    = 5
	carbon   = 6
	nitrogen = 7
	oxygen   = 8
	fluorine = 9
	silicon  = 14
	phosphor = 15
	sulfur   = 16
	chlorine = 17
	bromine  = 35
	iodine   = 53
)

func isHalogen(el uint8) bool { return molecule.Element(el).IsHalogen() }

// doubleTo returns the neighbour of a across a double bond with the given element, or -1.
func (p *Predictor) doubleTo(a int, el uint8) int {
	for _, nb := range p.nb[a] {
		if p.order[nb.Bond] == 2 && p.el[nb.Atom] == el {
			return int(nb.Atom)
		}
	}
	return -1
}

// mix is a 64-bit mixer (the finaliser of SplitMix64, Steele, Lea and Flood 2014).
func mix(x uint64) uint64 {
	x += 0x9e3779b97f4a7c15
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}

// codeSystems gives every aromatic atom a code of its place in its own aromatic system: element,
// ring nitrogen type, exocyclic C=O, refined over the aromatic bonds until every parent is told apart.
// Groups on the ring do not count.
func (p *Predictor) codeSystems() {
	for a := range p.n {
		p.systemCode[a] = 0
		if !p.aromatic[a] {
			continue
		}
		c := uint64(p.el[a])
		if p.el[a] == nitrogen {
			switch {
			case p.ringDegree(a) == 3:
				c += 300
			case p.deg[a] == 3 || p.charge[a] > 0:
				c += 200
			case p.hyd[a] > 0:
				c += 100
			}
		}
		if p.el[a] == carbon && p.isExoCarbonyl(a) {
			c += 1000
		}
		p.systemCode[a] = mix(c)
	}
	for range 7 {
		for a := range p.n {
			if !p.aromatic[a] {
				continue
			}
			sum := uint64(0)
			for _, nb := range p.nb[a] {
				if p.aromatic[nb.Atom] && p.aromaticBond(nb) {
					sum += mix(p.systemCode[nb.Atom])
				}
			}
			p.scratch[a] = mix(p.systemCode[a]*31 + sum)
		}
		for a := range p.n {
			if p.aromatic[a] {
				p.systemCode[a] = p.scratch[a]
			}
		}
	}
}

func (p *Predictor) aromaticBond(nb molecule.Neighbor) bool { return p.m.Bond(int(nb.Bond)).Aromatic }

// ringDegree counts the aromatic bonds of a.
func (p *Predictor) ringDegree(a int) int {
	n := 0
	for _, nb := range p.nb[a] {
		if p.aromaticBond(nb) {
			n++
		}
	}
	return n
}

func (p *Predictor) isExoCarbonyl(a int) bool {
	for _, nb := range p.nb[a] {
		if p.order[nb.Bond] == 2 && p.el[nb.Atom] == oxygen && !p.aromaticBond(nb) {
			return true
		}
	}
	return false
}

// codeClasses refines elements, hydrogens and bonds to symmetry classes. Equal classes mean
// equivalent atoms except in highly regular cages, where too many may be called equivalent.
func (p *Predictor) codeClasses() {
	for a := range p.n {
		c := uint64(p.el[a])<<16 | uint64(p.hyd[a])<<8 | uint64(p.deg[a])<<4 | uint64(uint8(p.charge[a])&15)
		if p.aromatic[a] {
			c |= 1 << 30
		}
		p.class[a] = mix(c | uint64(p.ring[a])<<32)
	}
	distinct := p.countClasses()
	for {
		for a := range p.n {
			sum := uint64(0)
			for _, nb := range p.nb[a] {
				o := uint64(p.order[nb.Bond])
				if p.aromaticBond(nb) {
					o = 5
				}
				sum += mix(p.class[nb.Atom] + o*0x51ed27)
			}
			p.scratch[a] = mix(p.class[a]*7 + sum)
		}
		copy(p.class[:p.n], p.scratch[:p.n])
		now := p.countClasses()
		if now == distinct {
			return
		}
		distinct = now
	}
}

func (p *Predictor) countClasses() int {
	count := 0
	for a := range p.n {
		fresh := true
		for b := range a {
			if p.class[b] == p.class[a] {
				fresh = false
				break
			}
		}
		if fresh {
			count++
		}
	}
	return count
}
