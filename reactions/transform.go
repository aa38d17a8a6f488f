package reactions

// Transform is one textbook reaction class, compiled; rules/transforms.md describes its source.
type Transform struct {
	ID, Name, Family string
	Conditions       []*Conditions
}

// Conditions is one reagent set of a transform. Amounts are equivalents per mole of the product at full yield.
type Conditions struct {
	ID                 string
	Reagents           []Charge
	Solvents           []Solvent
	Media              []string
	Order              string
	Temperature        [2]float64 // C
	Hours              [2]float64
	Yield              Range  // fractions 0-1
	Origin             string // published | near | class | estimated | own
	TriedAt            string
	Workup             []string
	WorkupMaterials    []string
	Watch              string
	Cautions           []string
	Needs              []string
	Uses, Gives        []Amount // balanced, per occurrence of the edit
	HeatKJ             float64  // evolved per mol, 0 unknown
	Gas                []Amount // mol gas per mol of product
	Source, Provenance string
	ReactantEquiv      map[int]float64 // part number (from 1) -> equivalents, where not 1
}

// Charge is a reagent charged to the flask.
type Charge struct {
	Name     string
	Equiv    float64
	Optional bool
	Like     []string
}

// Solvent is a solvent with its volume per gram of the first reactant.
type Solvent struct {
	Name   string
	MLPerG float64
}

// Amount is a number of molecules of a substance written as SMILES (in gives, '[*:9]' has been replaced).
type Amount struct {
	Count  float64
	SMILES string
}
