package route

import (
	"cmp"
	"fmt"
	"slices"

	"shelfward/planner/search"
)

// Opening is a single purchase that would open a route.
type Opening struct {
	SMILES    string  `json:"smiles"`
	Name      string  `json:"name"`
	Steps     int     `json:"steps"` // between it and the target
	MolarMass float64 `json:"molar_mass"`
	Why       string  `json:"why"`
}

// maxOpenings is how many purchases are proposed where the options do not say.
const maxOpenings = 5

// openings proposes purchases: substances with a known name first, as they can be bought.
func (c *chemistry) openings(found []search.Opening, most int) []Opening {
	if most <= 0 {
		most = maxOpenings
	}
	out := []Opening{}
	buying := *c.filter
	buying.onlyShelf = false
	for _, x := range found {
		m := c.molecule(x.Key)
		if !hasCarbon(m) || buying.material(c.material(x.Key), m) != nil {
			continue
		}
		out = append(out, Opening{SMILES: c.world.Write(m), Name: c.world.Name(m), MolarMass: m.Formula().MolarMass(), Steps: x.Steps,
			Why: fmt.Sprintf("%d %s from the target", x.Steps, plural(x.Steps, "step", "steps"))})
	}
	slices.SortStableFunc(out, func(a, b Opening) int { return cmp.Compare(min(len(b.Name), 1), min(len(a.Name), 1)) })
	return out[:min(len(out), most)]
}
