// Package reactions applies textbook transforms to molecules in both directions, judges what a step
// would really give, and says under which conditions it is run.
package reactions

import "shelfward/molecule"

// Share says how much of the wanted product a step gives beside its competitors.
type Share uint8

// Shares, from the wanted product alone to a trace.
const (
	ShareMain Share = iota
	ShareEven
	ShareMinor
	ShareTrace
)

// String returns "main", "even", "minor" or "trace".
func (s Share) String() string { return [...]string{"main", "even", "minor", "trace"}[s] }

// Kind classifies an objection.
type Kind string

// The kinds of objection that a judgement may raise.
const (
	KindGroup        Kind = "group"
	KindSite         Kind = "site"
	KindOverReaction Kind = "over-reaction"
	KindStereo       Kind = "stereo"
	KindNoReaction   Kind = "no-reaction"
	KindNoTransform  Kind = "no-transform"
	KindOther        Kind = "other"
)

// Objection is a reason to doubt a step. Fatal ones make it unsound.
type Objection struct {
	Kind   Kind
	Text   string // one plain sentence
	Source string // where the judgement comes from; empty for plain counting
	Fatal  bool
}

// Range is low, usual and high of a quantity.
type Range struct{ Low, Usual, High float64 }

// Reactant is one carbon-giving material of a step.
type Reactant struct {
	Molecule    *molecule.Molecule
	Equivalents float64 // moles charged per mole of product at full yield
	Count       int     // molecules consumed per molecule of product
}

// Origin is where a reactant-side atom of the product comes from.
type Origin struct {
	Reactant int32 // index into Step.Reactants, -1: from a reagent
	Atom     int32 // atom of that reactant's molecule
}

// Step is one transform carried out on given molecules in one flask, already run forwards and judged.
type Step struct {
	Transform  *Transform
	Together   []*Transform  // further changes in the same flask, in order; empty for most steps
	Conditions []*Conditions // condition sets that may be used, the usual one first; never empty
	Reactants  []Reactant    // distinct molecules, in the order of the transform's parts
	Product    *molecule.Molecule
	Byproducts []Byproduct
	Origins    []Origin // per atom of Product
	Share      Share
	Fraction   float64 // estimated fraction of the wanted product among the isomers formed, 0-1
	Racemic    bool    // the product's marks are relative only
	Objections []Objection
}

// Byproduct is a molecule set free, with its count per molecule of product.
type Byproduct struct {
	Molecule *molecule.Molecule
	Count    float64
}
