// Package isomer generates constitutional isomers: every connected structure that meets the stated
// hard evidence, each once, without a memory of what was already seen.
//
// A Problem holds the evidence; Enumerate runs it and hands each structure to a callback; Estimate
// says beforehand how many there will be. The Kekulé forms of one aromatic compound count once.
// Stereoisomers are not distinguished.
package isomer

import (
	"context"

	"shelfward/molecule"
)

// Valences is the convention by which atoms may be bonded.
type Valences uint8

const (
	// Usual allows nitro, N-oxide, sulfoxide, sulfone, isocyanide, azide and P(V)=O or =S as well as
	// everything Standard allows.
	Usual Valences = iota
	// Standard is the convention of isomer tables: C4 N3 O2 S2 P3 B3 Si4 halogen 1, no charges.
	Standard
)

// Range bounds a count, both ends included. The zero Range means any count; use Exactly(0) for none.
type Range struct {
	Min, Max int
	Set      bool // false: any
}

// Exactly, AtLeast, AtMost and Between build a Range.
func Exactly(n int) Range      { return Range{n, n, true} }
func AtLeast(n int) Range      { return Range{n, 1 << 30, true} }
func AtMost(n int) Range       { return Range{0, n, true} }
func Between(lo, hi int) Range { return Range{lo, hi, true} }

// Holds reports whether n lies in r.
func (r Range) Holds(n int) bool { return !r.Set || r.Min <= n && n <= r.Max }

// AnyHydrogens as PieceAtom.Hydrogens leaves the number of hydrogens open.
const AnyHydrogens int8 = -1

// OrderAromatic is the order of an aromatic bond in a Piece. A piece that is a building block must
// then hold the whole aromatic ring.
const OrderAromatic uint8 = 4

// PieceAtom is an atom of a Piece.
type PieceAtom struct {
	Element   molecule.Element
	Charge    int8
	Hydrogens int8 // attached hydrogens, or AnyHydrogens; what valence is left over is bonded to other atoms
}

// PieceBond joins atoms A and B of a Piece; Order is 1 to 3 or OrderAromatic.
type PieceBond struct{ A, B, Order uint8 }

// Piece is a connected substructure with free valences.
type Piece struct {
	Name  string // used in errors and assumptions
	Atoms []PieceAtom
	Bonds []PieceBond

	kekule []uint8 // order of each bond in a Kekulé form where PieceOf knows it
}

// PieceOf turns a molecule into a Piece. An atom class n on an atom takes n of its hydrogens away
// and leaves n free valences there: [CH3:1] is a methyl group, [cH:1]1cc[cH:1]cc1 a benzene ring
// with two substituents para to each other, [OH:1][CH:1]=O an ester group -O-C(=O)-.
func PieceOf(name string, m *molecule.Molecule) (Piece, error) { return pieceOf(name, m) }

// Block is a Piece that is present Count times, disjoint from all other blocks. The valences that it
// leaves open at aromatic atoms are taken by single bonds.
type Block struct {
	Piece Piece
	Count int
}

// BondBan forbids a bond of the given order between two elements; Order 0 forbids every order. Single
// and double bonds between C, N, P, B and Si cannot be banned apart: aromatic compounds have both.
type BondBan struct {
	A, B  molecule.Element
	Order uint8
}

// Problem is the hard evidence. The zero value of every field but Formula means 'no restriction'.
type Problem struct {
	Formula  molecule.Formula
	Valences Valences

	// Carbons bounds the number of carbon atoms with 0, 1, 2 and 3 attached hydrogens, those inside
	// blocks counted.
	Carbons [4]Range
	// OnHetero bounds the hydrogens on all atoms other than carbon (exchangeable ones).
	OnHetero Range
	// Rings bounds the number of independent rings.
	Rings Range
	// NoRings forbids ring sizes: bit s set means that no bond may have a smallest ring of s members.
	NoRings uint64

	// Blocks are pieces known to be there and known not to overlap. The generator joins them whole:
	// this is what makes big molecules feasible.
	Blocks []Block
	// Contains are pieces that must occur, overlap allowed; they are tested on finished structures.
	Contains []Piece
	// Lacks are pieces that must not occur; branches are cut as soon as one stands.
	Lacks []Piece

	Bonds       []BondBan // forbidden bonds
	NoCumulated bool      // no atom with two double bonds (those inside one block excepted)
	NoSmallRing bool      // strain: no triple bond or cumulated bond in a ring under 8

	// Accept is a further test of finished structures; nil accepts all. It is called from several
	// goroutines at once and may set Structure.Score, which yield then sees.
	Accept func(s *Structure) bool
}

// Options bound a run. The zero value is one worker without limits.
type Options struct {
	Workers       int   // at most this many goroutines; results come in the same order for any number
	MaxStructures int64 // stop after so many structures; 0 no limit
}

// Atom is an atom of a generated structure.
type Atom struct {
	Element   molecule.Element
	Charge    int8
	Hydrogens uint8
}

// Bond is a bond of a generated structure in a Kekulé form; Order is 1 to 3.
type Bond struct{ A, B, Order uint8 }

// Structure is one generated structure. It is owned by the generator and valid only during the
// callback; Clone copies it.
type Structure struct {
	Atoms []Atom
	Bonds []Bond
	Score float64 // free for Accept to set

	built *molecule.Molecule // the molecule, where the generator had to build it
}

// Clone returns a copy that the caller owns.
func (s *Structure) Clone() *Structure {
	return &Structure{Atoms: append([]Atom(nil), s.Atoms...), Bonds: append([]Bond(nil), s.Bonds...), Score: s.Score}
}

// Materialise builds the molecule; rings and aromaticity are perceived.
func (s *Structure) Materialise() (*molecule.Molecule, error) {
	if s.built != nil {
		return s.built, nil
	}
	var b molecule.Builder
	for _, a := range s.Atoms {
		b.AddAtom(molecule.Atom{Element: a.Element, Charge: a.Charge, Hydrogens: a.Hydrogens})
	}
	for _, x := range s.Bonds {
		b.AddBond(int(x.A), int(x.B), x.Order)
	}
	return b.Build()
}

// Result says how a run ended.
type Result struct {
	Generated int64  // structures handed to yield
	Complete  bool   // true only if every structure that meets the Problem was handed over
	Stopped   string // why not, in words; empty if Complete
}

// Enumerate generates the structures of p and calls yield for each, always from one goroutine at a
// time and in an order that depends on p alone. It ends early, with Complete false, when ctx ends,
// MaxStructures is reached or yield returns false. An error means that p itself makes no sense
// (unknown element, a block that does not fit the valences); a problem without solutions is a
// Result of 0 with Complete true.
func Enumerate(ctx context.Context, p Problem, opt Options, yield func(s *Structure) bool) (Result, error) {
	return enumerate(ctx, p, opt, yield)
}

// Size is the outcome of Estimate.
type Size struct {
	Structures float64 // estimated number of structures before Accept
	Error      float64 // standard error of it; heavy tails make it optimistic
	Probes     int     // random descents made
}

// Estimate sizes the search by random probing of its tree (Knuth, Math. Comput. 29 (1975) 121).
// The same seed gives the same answer.
func Estimate(ctx context.Context, p Problem, probes int, seed uint64) (Size, error) {
	return estimate(ctx, p, probes, seed)
}
