// Package pattern finds pieces of structure in molecules. A pattern is written like OpenSMILES and
// read as a query, with plain words for everything else; rules/patterns.md is its description.
//
// Text, query, plan and matcher stand in four files: parse.go reads the text into a Query, words.go
// adds what is said in words, compile.go orders the query atoms into a plan, match.go runs it.
// A Query is immutable once Compile has returned it and safe to share.
package pattern

import (
	"fmt"
	"sync/atomic"

	"shelfward/molecule"
)

// MaxAtoms is the largest number of atoms of one pattern; a textbook pattern has fewer than thirty.
const MaxAtoms = 64

// aromaticity of a query atom.
type aromaticity uint8

const (
	eitherAromatic aromaticity = iota
	onlyAromatic
	onlyAliphatic
)

// Bond orders as a set.
const (
	orderSingle uint8 = 1 << iota
	orderDouble
	orderTriple
	orderAromatic
	orderAny = orderSingle | orderDouble | orderTriple | orderAromatic
)

// QueryAtom is one atom of a pattern: every field narrows the match.
type QueryAtom struct {
	Class     int                // 0 none
	Elements  []molecule.Element // allowed elements, nil any
	Forbidden []molecule.Element // elements that do not match
	Hydrogens int                // exact number written, -1 free
	Charge    int8
	AnyCharge bool
	Isotope   uint16
	aromatic  aromaticity
	tests     []atomTest

	mask, value atomCode // words that the code of an atom answers
}

// QueryBond joins the query atoms A and B.
type QueryBond struct {
	A, B   int
	orders uint8
	tests  []bondTest
}

// Order returns the written order (1, 2, 3) where the bond can have only one, and 0 otherwise.
// Aromatic bonds give 0.
func (b QueryBond) Order() int {
	switch b.orders {
	case orderSingle:
		return 1
	case orderDouble:
		return 2
	case orderTriple:
		return 3
	}
	return 0
}

// Aromatic says that only an aromatic bond matches b.
func (b QueryBond) Aromatic() bool { return b.orders == orderAromatic }

// SingleElement returns the element where only one matches.
func (a QueryAtom) SingleElement() (molecule.Element, bool) {
	if len(a.Elements) == 1 {
		return a.Elements[0], true
	}
	return 0, false
}

// OnlyAromatic says that the atom matches aromatic atoms only.
func (a QueryAtom) OnlyAromatic() bool { return a.aromatic == onlyAromatic }

type (
	atomTest func(s *Subject, a int) bool
	bondTest func(s *Subject, b int) bool
)

// Query is a compiled pattern.
type Query struct {
	Text  string
	Atoms []QueryAtom
	Bonds []QueryBond
	Parts int   // connected pieces
	Part  []int // piece of each atom

	needed []need // lower bounds for a quick refusal
	plan   []planStep
	screen atomic.Pointer[screen] // made by the first match
}

// need is a number of atoms of one element that a match takes at least.
type need struct {
	element molecule.Element
	count   uint16
}

// AtomOfClass returns the index of the query atom with that class, or -1.
func (q *Query) AtomOfClass(class int) int {
	for i, a := range q.Atoms {
		if a.Class == class && class != 0 {
			return i
		}
	}
	return -1
}

// BondOf returns the index of the query bond between two query atoms, or -1.
func (q *Query) BondOf(a, b int) int {
	for i, bd := range q.Bonds {
		if bd.A == a && bd.B == b || bd.A == b && bd.B == a {
			return i
		}
	}
	return -1
}

// Error is a mistake in a pattern: the text, the 0-based byte position and what was expected.
type Error struct {
	Text     string
	Position int
	Message  string
}

func (e *Error) Error() string {
	return fmt.Sprintf("pattern %q: %s at column %d", e.Text, e.Message, e.Position+1)
}
