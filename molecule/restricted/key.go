package restricted

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"slices"

	"shelfward/molecule"
)

// keySalt separates these keys from hashes made for anything else.
const keySalt = "shelfward restricted list 1\n"

// refinements is the number of rounds of neighbourhood refinement: enough to tell apart what small
// molecules of one formula can differ in.
const refinements = 12

// Key returns the opaque key of one connected compound for the lists of restricted.yaml. Stereo,
// isotopes, charges and the place of hydrogens on N, O and S do not count, so that salts, labelled
// compounds and most tautomers share a key. It does not depend on the canonical numbering: lists stay
// valid when that changes. Compounds that differ only in what the refinement of atom neighbourhoods
// (Weisfeiler and Leman, 1968, from memory) cannot see share a key too.
func Key(m *molecule.Molecule) string {
	labels := make([]uint64, m.NumAtoms())
	for a := range labels {
		h := uint8(0)
		if m.Atom(a).Element == 6 {
			h = hydrogensOf(m, a)
		}
		labels[a] = mix(uint64(m.Atom(a).Element)<<8 | uint64(h))
	}
	next := make([]uint64, len(labels))
	for range refinements {
		refine(m, labels, next)
		labels, next = next, labels
	}
	kept := next[:0]
	for a, l := range labels {
		if !isHydrogen(m, a) {
			kept = append(kept, l)
		}
	}
	slices.Sort(kept)
	text := []byte(keySalt)
	for _, l := range kept {
		text = binary.BigEndian.AppendUint64(text, l)
	}
	sum := sha256.Sum256(text)
	return hex.EncodeToString(sum[:12])
}

// refine gives each atom a label made of its own and the sum of the mixed labels around it.
func refine(m *molecule.Molecule, labels, next []uint64) {
	for a, own := range labels {
		around, degree := uint64(0), uint64(0)
		for _, nb := range m.Neighbors(a) {
			if !isHydrogen(m, int(nb.Atom)) {
				around += mix(labels[nb.Atom])
				degree++
			}
		}
		next[a] = mix(own ^ mix(around+degree))
	}
}

// mix spreads a number over 64 bits (the finaliser of SplitMix64, Steele, Lea and Flood, 2014, from
// memory). The keys of restricted.yaml depend on it: it must never change.
func mix(x uint64) uint64 {
	x += 0x9e3779b97f4a7c15
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}

// isHydrogen reports whether an atom of the graph is a hydrogen on something else.
func isHydrogen(m *molecule.Molecule, a int) bool {
	return m.Atom(a).Element == 1 && m.Degree(a) == 1
}

// hydrogensOf counts all hydrogens on an atom, those that are atoms of the graph too.
func hydrogensOf(m *molecule.Molecule, a int) uint8 {
	h := m.Atom(a).Hydrogens
	for _, nb := range m.Neighbors(a) {
		if m.Atom(int(nb.Atom)).Element == 1 {
			h++
		}
	}
	return h
}
