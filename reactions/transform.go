package reactions

import (
	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// Transform is one textbook reaction class, compiled; rules/transforms.md describes its source. It is
// immutable and safe to share.
type Transform struct {
	ID, Name, Family, Summary string
	Conditions                []*Conditions
	Reactants, Products       []string // the parts as written
	Everywhere                bool
	Once                      bool // the reagent is measured for one reaction: the product meets no more of it
	Dangers                   []string
	Source                    Source
	File                      string // file and line of its definition
	Examples, Rejects         []Example

	script       *script
	part         [2][]partQuery // per side
	choices      map[int][]*molecule.Molecule
	combinations []fragments         // of the choices, see fragmentChoices
	partChoices  map[int][]coproduct // product part -> molecules that the target need not contain
	same         []int               // reactant parts (from 0) that must be one kind of molecule
	closes       ringSizes
	prefers      []preference
	goesOn       []goesOn
}

// partQuery is one part of a side, compiled alone: its query atoms are those of the side from first on.
type partQuery struct {
	query       *pattern.Query
	first       int
	significant []int // query atoms whose place makes a difference to the outcome
}

// coproduct is a molecule that completes a product part backwards; same stands for the target itself.
type coproduct struct {
	m       *molecule.Molecule
	classAt map[int]int32
	laid    partMatch // the part on m, nil: it does not fit, or same
	same    bool
}

// goesOn says that the product reacts again with a partner that fits the query.
type goesOn struct {
	part  int // from 0
	query *pattern.Query
	why   string
}

// preference is a preference model laid on the atoms of a transform.
type preference struct {
	model  *model
	slots  []int
	rho    float64
	ortho  float64 // further factor for ortho to any substituent, by the bulk of the electrophile
	needs  float64
	hasMin bool
	whyNot string
}

// Example is a checked use of a transform: From gives To.
type Example struct {
	From    []string
	To      string
	With    string // id of a condition set, empty: the first
	Share   Share
	Objects bool // an objection is expected
	Why     string
	Source  Source // where it is reported; without Text: textbook chemistry from memory
	File    string
}

// Conditions is one reagent set of a transform. Amounts are equivalents per mole of the product at full yield.
type Conditions struct {
	ID              string
	Reagents        []Charge
	Solvents        []Solvent
	Media           []string
	OnlyWith        []string // facts that a description must state
	NeverWith       []string
	Order           string
	Temperature     [2]float64 // C
	Hours           [2]float64
	Yield           Range  // fractions 0-1
	Origin          string // published | near | class | estimated | own
	TriedAt         string
	Workup          []string
	WorkupMaterials []string
	Watch           string
	Cautions        []string
	Needs           []string
	Uses, Gives     []Amount // balanced, per occurrence of the edit
	HeatKJ          float64  // evolved per mol, 0 unknown
	Gas             []Amount // mol gas per mol of product, by formula
	Together        []string // ids of transforms that run in the same flask
	Source          Source
	ReactantEquiv   map[int]float64 // reactant part (from 1) -> equivalents, where not 1
	File            string

	applies map[int][]*molecule.Molecule
}

// Charge is a reagent charged to the flask.
type Charge struct {
	Name     string
	Equiv    float64
	Optional bool
	Like     []string
	Note     string
}

// Solvent is a solvent with its volume per gram of the first reactant.
type Solvent struct {
	Name   string
	MLPerG float64
}

// Amount is a number of molecules of a substance written as SMILES; in Gives '[*:9]' stands for what
// left with class 9.
type Amount struct {
	Count  float64
	SMILES string

	read  *molecule.Molecule // of SMILES, nil in Gas
	stars []int              // classes of its stars
}
