package identify

import (
	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// compilePiece reads a piece of contains or lacks, written as a pattern.
func compilePiece(text string) (*pattern.Query, error) { return pattern.Compile(text, nil, nil) }

// meetsPieces reports whether m holds every piece of contains and none of lacks.
func (d *Data) meetsPieces(m *molecule.Molecule) bool {
	if len(d.Contains) == 0 && len(d.Lacks) == 0 {
		return true
	}
	s := pattern.NewSubject(m, nil)
	for _, q := range d.Contains {
		if !q.Matches(s) {
			return false
		}
	}
	for _, q := range d.Lacks {
		if q.Matches(s) {
			return false
		}
	}
	return true
}
