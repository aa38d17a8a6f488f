package molecule

import (
	"fmt"
	"math/bits"
	"sync"

	"shelfward/molecule/canon"
	"shelfward/molecule/matching"
	"shelfward/molecule/ring"
)

// AutoHydrogens in Atom.Hydrogens asks the Builder to fill hydrogens up to the lowest normal valence.
const AutoHydrogens uint8 = 255

// OrderAromatic is the bond order of aromatic input; Build assigns a Kekulé form by maximum matching.
const OrderAromatic uint8 = 5

// MaxAtoms is the largest molecule that Build accepts: far above what a bench chemist draws, and
// small enough that a hostile text costs milliseconds.
const MaxAtoms = 2000

// MaxRings is the most independent rings that Build accepts (C60 has 31); it bounds the search for the
// smallest ones as MaxAtoms does the rest.
const MaxRings = 1000

// Builder collects atoms and bonds; Build perceives and freezes them. Not safe for concurrent use.
type Builder struct {
	Atoms       []Atom
	Bonds       []Bond // Ring is ignored; Order may be OrderAromatic
	Centers     []Center
	DoubleBonds []DoubleBond
	LeftOut     int // stereo marks of the input that neither list can hold; see Molecule.MarksLeftOut
}

// Error says which atom or bond (index, -1 none) a molecule could not be built for.
type Error struct {
	Atom, Bond int
	Text       string
}

func (e *Error) Error() string { return e.Text }

// AddAtom appends a and returns its index, which stays valid until RemoveAtoms.
func (b *Builder) AddAtom(a Atom) int {
	b.Atoms = append(b.Atoms, a)
	return len(b.Atoms) - 1
}

// AddBond appends a bond and returns its index, which stays valid until RemoveAtoms or RemoveBonds.
func (b *Builder) AddBond(a1, a2 int, order uint8) int {
	b.Bonds = append(b.Bonds, Bond{A: int32(a1), B: int32(a2), Order: order})
	return len(b.Bonds) - 1
}

// perceiver is the working memory of Build, reused over molecules.
type perceiver struct {
	m         *Molecule
	finder    ring.Finder
	matcher   matching.Matcher
	inRing    []bool
	usable    []bool
	role      []matching.Role
	sum       []int16 // bond orders per atom, aromatic ones counted 1 until they are assigned
	relevant  [][]int32
	aromatic  aromaticity
	graph     canon.Graph
	worker    canon.Worker
	neighborN []int32
}

var perceivers = sync.Pool{New: func() any { return new(perceiver) }}

// Build perceives and freezes; the Builder may be reused. Errors are *Error. The aromatic flags of
// the input say only where Kekulé bonds must be found (bonds of OrderAromatic); the flags of the
// result come from the bonds. Marks that say nothing (equal ligands, rings under 8) are dropped.
// Hydrogen atoms stay atoms; FoldHydrogens turns them into counts.
func (b *Builder) Build() (*Molecule, error) {
	p := perceivers.Get().(*perceiver)
	m, err := p.build(b)
	p.m = nil
	p.relevant = nil
	perceivers.Put(p)
	return m, err
}

func (p *perceiver) build(b *Builder) (*Molecule, error) {
	if len(b.Atoms) > MaxAtoms {
		return nil, &Error{-1, -1, fmt.Sprintf("the structure has %d atoms; at most %d are accepted", len(b.Atoms), MaxAtoms)}
	}
	if rings := len(b.Bonds) - len(b.Atoms); rings > MaxRings {
		return nil, &Error{-1, -1, fmt.Sprintf("the structure has %d rings; at most %d are accepted", rings, MaxRings)}
	}
	m := newMolecule(len(b.Atoms), len(b.Bonds))
	copy(m.atoms, b.Atoms)
	copy(m.bonds, b.Bonds)
	m.leftOut = uint16(min(b.LeftOut, MaxAtoms))
	p.m = m
	if err := p.connect(); err != nil {
		return nil, err
	}
	p.findRings()
	if err := p.assignBonds(); err != nil {
		return nil, err
	}
	p.perceiveAromaticity()
	if len(b.Centers)+len(b.DoubleBonds) > 0 {
		if err := p.keepStereo(b); err != nil {
			return nil, err
		}
	}
	return m, nil
}

// connect checks the bonds and packs the adjacency.
func (p *perceiver) connect() error {
	m := p.m
	n := len(m.atoms)
	for i := range m.bonds {
		x := &m.bonds[i]
		if x.A < 0 || x.B < 0 || int(x.A) >= n || int(x.B) >= n {
			return &Error{-1, i, fmt.Sprintf("bond %d names an atom that does not exist", i+1)}
		}
		if x.A == x.B {
			return &Error{int(x.A), i, "an atom is bonded to itself"}
		}
		if x.Order < 1 || x.Order > OrderAromatic {
			return &Error{-1, i, fmt.Sprintf("bond order %d; expected 1 to 4 or aromatic", x.Order)}
		}
		m.first[x.A]++
		m.first[x.B]++
	}
	sum := int32(0)
	for a, c := range m.first {
		m.first[a] = sum
		sum += c
	}
	for i := range m.bonds {
		x := &m.bonds[i]
		m.neighbors[m.first[x.A]] = Neighbor{Atom: x.B, Bond: int32(i)}
		m.first[x.A]++
		m.neighbors[m.first[x.B]] = Neighbor{Atom: x.A, Bond: int32(i)}
		m.first[x.B]++
	}
	copy(m.first[1:], m.first[:n])
	m.first[0] = 0
	for a := range m.atoms {
		nbs := m.Neighbors(a)
		for i, x := range nbs {
			for _, y := range nbs[:i] {
				if x.Atom == y.Atom {
					return &Error{a, int(x.Bond), "two bonds join the same two atoms"}
				}
			}
		}
	}
	return nil
}

// findRings fills the ring data of m and the relevant cycles.
func (p *perceiver) findRings() {
	m := p.m
	p.inRing = sizedBools(p.inRing, len(m.bonds))
	p.relevant = nil
	if len(m.bonds) == 0 {
		return
	}
	rings := p.finder.Find(m.first, m.neighbors, p.inRing)
	p.relevant = rings.Relevant
	m.rings = compact(rings.Basis)
	for i := range m.bonds {
		m.bonds[i].Ring = p.inRing[i]
	}
	if len(m.rings) > 0 {
		m.bondRing = make([]uint16, len(m.bonds))
	}
	for _, r := range m.rings {
		size := uint16(len(r)) // at most MaxAtoms
		for i, a := range r {
			b := m.BondBetween(int(a), int(r[(i+1)%len(r)]))
			if m.bondRing[b] == 0 || size < m.bondRing[b] {
				m.bondRing[b] = size
			}
		}
	}
}

// compact copies rings into as little memory as they need.
func compact(rings [][]int32) [][]int32 {
	if len(rings) == 0 {
		return nil
	}
	total := 0
	for _, r := range rings {
		total += len(r)
	}
	out, atoms := make([][]int32, len(rings)), make([]int32, 0, total)
	for i, r := range rings {
		at := len(atoms)
		atoms = append(atoms, r...)
		out[i] = atoms[at:len(atoms):len(atoms)]
	}
	return out
}

func sizedBools(s []bool, n int) []bool {
	if cap(s) < n {
		return make([]bool, n, n+n/2)
	}
	return s[:n]
}

// Fingerprint is a 128-bit hash of a Builder.
type Fingerprint [2]uint64

// Fingerprint hashes what b holds, in its order: Builders with equal fingerprints build equal molecules,
// numbering included. It costs a small part of Build.
func (b *Builder) Fingerprint() Fingerprint {
	h := Fingerprint{uint64(len(b.Atoms))<<32 | uint64(len(b.Bonds)), uint64(len(b.Centers))<<32 | uint64(len(b.DoubleBonds))}
	h.mix(uint64(b.LeftOut))
	for i := range b.Atoms {
		x := &b.Atoms[i]
		h.mix(uint64(x.Element) | uint64(uint8(x.Charge))<<8 | uint64(x.Hydrogens)<<16 | uint64(x.Isotope)<<24 | uint64(x.Class)<<40)
	}
	for i := range b.Bonds {
		x := &b.Bonds[i]
		h.mix(uint64(uint16(x.A)) | uint64(uint16(x.B))<<16 | uint64(x.Order)<<32)
	}
	for _, c := range b.Centers {
		h.mix(uint64(uint32(c.Atom)) | flag(c.Clockwise)<<32)
		h.mix(uint64(uint32(c.Ligands[0])) | uint64(uint32(c.Ligands[1]))<<32)
		h.mix(uint64(uint32(c.Ligands[2])) | uint64(uint32(c.Ligands[3]))<<32)
	}
	for _, d := range b.DoubleBonds {
		h.mix(uint64(uint32(d.Bond)) | flag(d.Together)<<32)
		h.mix(uint64(uint32(d.A)) | uint64(uint32(d.B))<<32)
	}
	return h
}

// mix folds a word into both lanes of h.
func (h *Fingerprint) mix(x uint64) {
	hi, lo := bits.Mul64(h[0]^x, 0x9e3779b97f4a7c15)
	h[0] = hi ^ lo ^ h[1]
	hi, lo = bits.Mul64(h[1]+(x^0xd6e8feb86659fd93), 0xe7037ed1a0b428db)
	h[1] = hi ^ lo + x
}
