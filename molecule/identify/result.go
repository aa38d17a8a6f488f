package identify

// Result is what identification found; it maps one to one to the JSON of the command.
type Result struct {
	Formula      string         `json:"formula"`
	Unsaturation float64        `json:"unsaturation"`
	Formulas     []FormulaLine  `json:"formulas"`
	Groups       []GroupVerdict `json:"groups"`
	Candidates   []Candidate    `json:"candidates"`
	// Generated counts the structures that meet the hard evidence and were built.
	Generated int64 `json:"generated"`
	// Assumed lists every inference used as hard evidence.
	Assumed []Assumption `json:"assumed"`
	// Complete is true only if the enumeration was exhaustive under Assumed.
	Complete bool      `json:"complete"`
	Expected *Expected `json:"expected,omitempty"`
	// Settled: one structure remains, or the second fits worse by Margin.
	Settled bool    `json:"settled"`
	Margin  float64 `json:"margin"`
	// NextMeasurement is the one that would tell most, in words; empty when settled.
	NextMeasurement string   `json:"next_measurement"`
	Doubts          []string `json:"doubts"`
	// Nothing says why there is no candidate; empty otherwise.
	Nothing string `json:"nothing,omitempty"`
}

// FormulaLine is one formula considered.
type FormulaLine struct {
	Formula   string   `json:"formula"`
	MolarMass float64  `json:"molar_mass"`
	Error     float64  `json:"error"`
	Reasons   []string `json:"reasons"`
}

// GroupVerdict says about one functional group: present, possible or absent.
type GroupVerdict struct {
	Group   string   `json:"group"`
	Verdict string   `json:"verdict"`
	Because []string `json:"because"`
}

// Candidate is one structure with its rank. Score is the log-likelihood difference to the first.
type Candidate struct {
	Rank    int      `json:"rank"`
	SMILES  string   `json:"smiles"`
	Name    string   `json:"name"`
	Score   float64  `json:"score"`
	Fits    []string `json:"fits"`
	Misfits []string `json:"misfits"`
}

// Assumption is an inference used as hard evidence.
type Assumption struct {
	What string `json:"what"`
	Why  string `json:"why"`
}

// Expected answers whether an expected structure was generated and where it stands (0: not listed).
type Expected struct {
	Generated bool `json:"generated"`
	Rank      int  `json:"rank"`
}
