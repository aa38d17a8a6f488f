package route

import (
	"cmp"
	"slices"
)

// CommonOpening is a single purchase that would open routes to several targets.
type CommonOpening struct {
	SMILES    string  `json:"smiles"`
	Name      string  `json:"name"`
	MolarMass float64 `json:"molar_mass"`
	Opens     int     `json:"opens"` // targets that it opens alone
	More      int     `json:"more"`  // of them, those that nothing before it in the list opens
	Targets   []int   `json:"targets"`
}

// maxCommon is how many purchases CommonOpenings proposes.
const maxCommon = 5

// CommonOpenings proposes purchases for a list of targets without a route: opens holds, by number of the
// target, the single purchases that would each open one. First comes the purchase that opens most of them,
// then the one that opens most of the rest, and so on; of equals the smaller molecule.
func CommonOpenings(opens map[int][]Opening) []CommonOpening {
	by := map[string]*CommonOpening{}
	for target, list := range opens {
		for _, x := range list {
			c := by[x.SMILES]
			if c == nil {
				c = &CommonOpening{SMILES: x.SMILES, Name: x.Name, MolarMass: x.MolarMass}
				by[x.SMILES] = c
			}
			if !slices.Contains(c.Targets, target) {
				c.Targets = append(c.Targets, target)
			}
		}
	}
	var all []*CommonOpening
	for _, c := range by {
		slices.Sort(c.Targets)
		c.Opens = len(c.Targets)
		all = append(all, c)
	}
	slices.SortFunc(all, func(a, b *CommonOpening) int {
		return cmp.Or(cmp.Compare(a.MolarMass, b.MolarMass), cmp.Compare(a.SMILES, b.SMILES))
	})
	out := []CommonOpening{}
	opened := map[int]bool{}
	for len(out) < maxCommon {
		var chosen *CommonOpening
		most := 0
		for _, c := range all {
			more := 0
			for _, target := range c.Targets {
				if !opened[target] {
					more++
				}
			}
			if more > most {
				chosen, most = c, more
			}
		}
		if chosen == nil {
			break
		}
		chosen.More = most
		out = append(out, *chosen)
		for _, target := range chosen.Targets {
			opened[target] = true
		}
	}
	return out
}
