// Package formula finds the molecular formulas that agree with combustion analysis and mass
// spectra, and ranks them.
package formula

import (
	"context"

	"shelfward/molecule"
)

// Analysis is the mass fraction of one element in percent, one value per run; runs are averaged.
// A single 0 means that the element was looked for and is absent.
type Analysis struct {
	Element molecule.Element
	Percent []float64
}

// Ion is the species whose exact mass was measured.
type Ion uint8

const (
	IonM      Ion = iota // M+.
	IonMH                // [M+H]+
	IonMNa               // [M+Na]+
	IonMNH4              // [M+NH4]+
	IonMlessH            // [M-H]-
)

// ExactMass is an accurate m/z with the ion it belongs to.
type ExactMass struct {
	MZ  float64
	Ion Ion
	PPM float64 // tolerance; 0 means 5
}

// Peak is one line of a mass spectrum.
type Peak struct{ MZ, Intensity float64 }

// Evidence is what a formula must agree with. Zero values mean 'not measured'.
type Evidence struct {
	Analysis     []Analysis // elements not listed were not measured; oxygen never is
	Tolerance    float64    // absolute, in percent points; 0 means 0.4
	MolecularIon int        // nominal m/z of M+.
	MolarMass    float64    // g/mol, good to 1 %
	Exact        []ExactMass
	Peaks        []Peak // used for the isotope pattern and losses near the molecular ion

	// Bounds from other evidence; 0 or nil: none.
	MinCarbons, MinHydrogens int
	Hint                     []molecule.Element // elements known or suspected to be there
	// Score, if not nil, judges a formula by evidence this package does not know (integrals, numbers
	// of lines): the penalty (a drop in log-likelihood, 0 none) and its reason in words.
	Score func(f molecule.Formula) (penalty float64, reason string)

	MaxCandidates int // how many to return; 0 means 20
}

// Candidate is one formula with its residuals.
type Candidate struct {
	Formula   molecule.Formula
	MolarMass float64 // g/mol
	// Error is the root mean square of the residuals, each divided by its tolerance: 1 means 'at the limit'.
	Error   float64
	Penalty float64  // drop in log-likelihood that ranks the list, smallest first
	Reasons []string // residuals in words: 'C 58.2 found, 58.3 calculated'
}

// Result is the ranked list. Doubts are sentences for the head of the output.
type Result struct {
	Candidates []Candidate
	Doubts     []string
}

// Find ranks the formulas that agree with ev. An empty list comes with a doubt that says why. The
// error is for evidence that makes no sense or contradicts itself, and for ctx.
func Find(ctx context.Context, ev Evidence) (Result, error) { return find(ctx, ev) }
