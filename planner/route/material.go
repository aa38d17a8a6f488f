// Package route turns what the search finds into routes a chemist can read: distinct steps in bench
// order, figures, ranking, codes, the plan file and plain text.
//
// A route's figures are computed on its distinct steps; what the search minimised (Weight) is the cost
// of the route as a tree, in which an intermediate used twice is paid twice. A gap in the data never
// wins: an unknown hazard counts as the gravest class, an unknown price as far above any known one, an
// unknown yield as low, and the route says so.
package route

import (
	"math"

	"shelfward/molecule"
)

// Material is what is known about one substance that may be charged to a flask.
type Material struct {
	Name, CAS string
	SMILES    string // in the form of the shelf row, canonical
	OnShelf   bool
	MolarMass float64 // g/mol of the substance itself

	MassPerMol    float64 // g of the supplied form that hold one mol; MolarMass if pure
	WaterPerMol   float64 // g of water in that mass
	DensityGPerML float64 // of the supplied form, 0 unknown
	PricePerMol   float64 // NaN unknown
	Currency      string
	StockMol      float64 // NaN unknown

	Hazards      []string // GHS H codes
	HazardsKnown bool     // false: never looked up
}

// sound replaces masses that are not numbers, so that sums stay figures.
func (m *Material) sound() {
	if math.IsNaN(m.MolarMass) {
		m.MolarMass = 0
	}
	if math.IsNaN(m.MassPerMol) {
		m.MassPerMol, m.WaterPerMol = m.MolarMass, 0
	}
	if math.IsNaN(m.WaterPerMol) {
		m.WaterPerMol = 0
	}
}

// Price returns the price per mol used for ranking and whether it is known.
func (m *Material) Price() (perMol float64, known bool) {
	if math.IsNaN(m.PricePerMol) {
		return unknownPrice, false
	}
	return m.PricePerMol, true
}

// unknownPrice stands for a price that is not known, per mol, wherever routes are ordered. It lies far
// above the dearest bench chemical, so that emptying a price field never moves a route up.
const unknownPrice = 1e5

// Materials looks substances up on the shelf and in the list of reagents. It must be safe for several
// goroutines.
type Materials interface {
	// Molecule describes a molecule that a step consumes. OnShelf is true only if the shelf holds it
	// (salts and tautomers seen through). A molecule that is known nowhere gets its computed mass.
	Molecule(m *molecule.Molecule) Material
	// OtherMarks returns the structure of a shelf item that is m but for stereo marks (salts and
	// tautomers seen through), one without marks if there is one; nil if there is none.
	OtherMarks(m *molecule.Molecule) *molecule.Molecule
	// CarbonPrice returns the least price of one mol of carbon in any item of the shelf with a price
	// (priced is false if there is none), and the most carbon atoms in an item without (0: none).
	CarbonPrice() (perMol float64, priced bool, unpricedCarbon int)
	// Named describes a reagent or solvent by the name that conditions use; ok is false if no list
	// knows the name.
	Named(name string) (mat Material, ok bool)
}

// unnamed is the material of a name that no list knows.
func unnamed(name string) Material {
	return Material{Name: name, PricePerMol: math.NaN(), StockMol: math.NaN()}
}

// Computed is the material of a molecule known from its structure alone.
func Computed(m *molecule.Molecule, smiles string) Material {
	mass := m.Formula().MolarMass()
	return Material{SMILES: smiles, MolarMass: mass, MassPerMol: mass, PricePerMol: math.NaN(), StockMol: math.NaN()}
}
