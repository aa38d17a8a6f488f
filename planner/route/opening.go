package route

// Opening is a single purchase that would open a route.
type Opening struct {
	SMILES string `json:"smiles"`
	Name   string `json:"name"`
	Steps  int    `json:"steps"`
	Why    string `json:"why"`
}
