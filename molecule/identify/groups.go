package identify

import (
	"shelfward/molecule"
)

// judgeGroups is the table of functional groups.
func (d *Data) judgeGroups(f *molecule.Formula) []GroupVerdict { return []GroupVerdict{} }
