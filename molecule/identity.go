package molecule

import (
	"encoding/binary"
	"encoding/hex"
)

// Key identifies a molecule: a 128-bit hash of its canonical certificate.
type Key [16]byte

// String writes k in hexadecimal.
func (k Key) String() string { return hex.EncodeToString(k[:]) }

// identity is the outcome of one labelling.
type identity struct {
	key    Key
	places []int32 // ranks, then orbits
}

func (id *identity) ranks() []int32  { n := len(id.places) / 2; return id.places[:n:n] }
func (id *identity) orbits() []int32 { return id.places[len(id.places)/2:] }

// label labels m with or without its stereo marks.
func (m *Molecule) label(stereo bool) *identity {
	p := perceivers.Get().(*perceiver)
	p.fillGraph(m, stereo)
	l := p.worker.Label(&p.graph)
	p.graph.First, p.graph.Neighbors = nil, nil
	perceivers.Put(p)
	id := &identity{places: l.Ranks[:2*len(l.Ranks)]}
	binary.BigEndian.PutUint64(id.key[:8], l.Hash[0])
	binary.BigEndian.PutUint64(id.key[8:], l.Hash[1])
	return id
}

func (m *Molecule) exactIdentity() *identity {
	if id := m.exact.Load(); id != nil {
		return id
	}
	id := m.label(true)
	m.exact.Store(id)
	return id
}

func (m *Molecule) flatIdentity() *identity {
	if !m.HasStereo() {
		return m.exactIdentity()
	}
	if id := m.flat.Load(); id != nil {
		return id
	}
	id := m.label(false)
	m.flat.Store(id)
	return id
}

// Ranks gives each atom its place in the canonical order (a permutation): shared, read only.
func (m *Molecule) Ranks() []int32 { return m.exactIdentity().ranks() }

// Orbits gives each atom the lowest index of the atoms equivalent to it by symmetry, stereo
// included: shared, read only. Mirror-related (enantiotopic) atoms are equivalent where no mark
// tells them apart.
func (m *Molecule) Orbits() []int32 { return m.exactIdentity().orbits() }

// FlatOrbits is Orbits with stereo left out.
func (m *Molecule) FlatOrbits() []int32 { return m.flatIdentity().orbits() }

// Key is the exact identity: constitution, isotopes, charges and stereo marks; never atom classes.
// It is the same on every machine and in every run of one version of the program.
func (m *Molecule) Key() Key { return m.exactIdentity().key }

// FlatKey is the identity without stereo.
func (m *Molecule) FlatKey() Key { return m.flatIdentity().key }

// Sketch is a hash of the atoms with their neighbours and bonds that equal molecules share, stereo left out.
// Different molecules may share it as well, but it costs a fraction of Key: where two sketches differ, no
// key need be made.
func (m *Molecule) Sketch() uint64 {
	sum := uint64(0)
	for a := range m.atoms {
		around := uint64(0)
		for _, nb := range m.Neighbors(a) {
			b := &m.bonds[nb.Bond]
			order := uint64(b.Order)
			if b.Aromatic {
				order = uint64(OrderAromatic)
			}
			around += stir(atomColour(&m.atoms[nb.Atom], m.Degree(int(nb.Atom))) ^ order<<56)
		}
		sum += stir(around + atomColour(&m.atoms[a], m.Degree(a)))
	}
	return sum
}

func stir(x uint64) uint64 {
	x *= 0x9e3779b97f4a7c15
	x ^= x >> 32
	x *= 0xd6e8feb86659fd93
	return x ^ x>>29
}
