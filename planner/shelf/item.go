// Package shelf holds what the user has: it reads shelf files row by row, finds items by text or by
// structure, and works out amounts, strengths and prices of the forms supplied.
//
// It promises a line for every row that it could not read, and that nothing it could not understand
// is silently taken for something else. It knows nothing of routes. A Shelf is immutable once made
// and safe for concurrent use.
package shelf

import (
	"math"

	"shelfward/molecule"
	"shelfward/reactions/reagent"
)

// Item is one bottle, tin or cylinder.
type Item struct {
	Name     string   // as written, or the name that the lists know; may be empty
	Synonyms []string // other names
	CAS      string
	SMILES   string             // as written, or the lists' structure; empty if unknown
	Molecule *molecule.Molecule // nil if the structure is unknown
	Reagent  *reagent.Reagent   // the entry of the list of reagents, nil if there is none
	ReadAs   string             // SMILES, CAS number or name: what the structure was read from; empty if unknown

	Amount         Amount  // zero if not stated
	PurityFraction float64 // 0-1; 0 not stated
	Strength       reagent.Strength
	DensityGPerML  float64 // of the form supplied; 0 unknown
	Price          float64 // per Pack; NaN unknown
	Currency       string
	Pack           Amount

	Hazards      []string // GHS codes
	HazardsKnown bool     // true with no Hazards: looked up, not classified

	Location, Opened, Tested, Expires, Note string
	Extra                                   []Field // columns that the program does not know, kept as they are

	File string // where the row stands; "built-in" for the built-in shelf
	Line int    // from 1
}

// Field is a column that the program does not know.
type Field struct{ Name, Value string }

// MolarMass returns g/mol of the substance itself, NaN if its structure is unknown.
func (it *Item) MolarMass() float64 {
	if it.Molecule == nil {
		return math.NaN()
	}
	return it.Molecule.Formula().MolarMass()
}

// litresPerMolGas is the volume of one mol of gas at 20 C and 1 atm (ideal gas law).
const litresPerMolGas = 24.06

// GramsPerMol returns the mass of the supplied form that holds one mol of the substance: its molar
// mass divided by purity or strength. For a solution by molarity the density is needed; NaN if it is
// not known.
func (it *Item) GramsPerMol() float64 {
	mass := it.MolarMass()
	switch {
	case it.Strength.MassFraction > 0:
		return mass / it.Strength.MassFraction
	case it.Strength.MolarM > 0:
		if it.DensityGPerML == 0 {
			return math.NaN()
		}
		return 1000 / it.Strength.MolarM * it.DensityGPerML
	case it.PurityFraction > 0:
		return mass / it.PurityFraction
	}
	return mass
}

// MillilitresPerMol returns the volume of the supplied form that holds one mol; NaN for a solid, or if
// the density is not known.
func (it *Item) MillilitresPerMol() float64 {
	if it.Strength.MolarM > 0 {
		return 1000 / it.Strength.MolarM
	}
	if it.gas() {
		return litresPerMolGas * 1000
	}
	if it.DensityGPerML == 0 {
		return math.NaN()
	}
	return it.GramsPerMol() / it.DensityGPerML
}

// gas reports whether the item is sold as a gas.
func (it *Item) gas() bool {
	return it.Reagent != nil && it.Reagent.Form == "gas" && !it.Strength.Known()
}

// Mol returns the amount of substance in an amount of the supplied form; NaN if it cannot be known.
func (it *Item) Mol(a Amount) float64 {
	switch {
	case a.Mol > 0:
		return a.Mol
	case a.Grams > 0:
		return a.Grams / it.GramsPerMol()
	case a.Millilitres > 0:
		return a.Millilitres / it.MillilitresPerMol()
	}
	return math.NaN()
}

// StockMol returns how much of the substance stands on the shelf; NaN if the row does not say.
func (it *Item) StockMol() float64 { return it.Mol(it.Amount) }

// PricePerMol returns the price of one mol of the substance; NaN unknown.
func (it *Item) PricePerMol() float64 { return it.Price / it.Mol(it.Pack) }

// PricePerGram returns the price of one gram of the supplied form; NaN unknown.
func (it *Item) PricePerGram() float64 {
	switch {
	case it.Pack.Grams > 0:
		return it.Price / it.Pack.Grams
	case it.Pack.Millilitres > 0 && it.DensityGPerML > 0 && !it.gas():
		return it.Price / (it.Pack.Millilitres * it.DensityGPerML)
	}
	return it.PricePerMol() / it.GramsPerMol()
}
