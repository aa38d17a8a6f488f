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
	Class     int     `json:"class"` // 1 the cheapest: see purchaseClass
	ClassSays string  `json:"class_says"`
}

// The classes of purchase, the cheapest first. No price is known of what is not on the shelf: the class
// is an estimate from what the substance is.
var purchaseClasses = [...]string{1: "an everyday reagent", 2: "a small building block", 3: "a larger building block or one with stereo marks"}

// smallAtoms is the size, in atoms without hydrogens, up to which a building block counts as small.
const smallAtoms = 10

// purchaseClass estimates what a purchase costs: what stands in the list of reagents, then what is small
// and bears no marks, then the rest.
func (c *chemistry) purchaseClass(k search.Key) int {
	switch m := c.molecule(k); {
	case c.material(k).CAS != "":
		return 1
	case m.NumAtoms() <= smallAtoms && !marked(m):
		return 2
	}
	return 3
}

// maxOpenings is how many purchases are proposed where the options do not say.
const maxOpenings = 5

// openings proposes purchases, the cheapest class first; within one, substances with a known name.
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
		class := c.purchaseClass(x.Key)
		out = append(out, Opening{Class: class, ClassSays: purchaseClasses[class], SMILES: c.world.Write(m), Name: c.world.Name(m), MolarMass: m.Formula().MolarMass(), Steps: x.Steps,
			Why: fmt.Sprintf("%d %s from the target", x.Steps, plural(x.Steps, "step", "steps"))})
	}
	slices.SortStableFunc(out, func(a, b Opening) int {
		return cmp.Or(cmp.Compare(a.Class, b.Class), cmp.Compare(min(len(b.Name), 1), min(len(a.Name), 1)))
	})
	return out[:min(len(out), most)]
}
