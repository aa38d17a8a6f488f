package route

import (
	"cmp"
	"fmt"
	"slices"
)

// order ranks the routes: with an amount asked for, those whose stock is known to suffice first; then by weight;
// ties by steps, yield, hazard data, price and waste, and by code at last. It keeps count of them.
func (p *Plan) order(count int) {
	before := make([]string, len(p.Routes))
	for i := range p.Routes {
		before[i] = p.Routes[i].Code
	}
	slices.SortStableFunc(p.Routes, func(a, b Route) int {
		if p.MakeAsked {
			if c := cmp.Compare(a.enough(), b.enough()); c != 0 {
				return c
			}
		}
		return compareRoutes(&a, &b)
	})
	for i := range p.Routes {
		if r := &p.Routes[i]; p.MakeAsked && r.enough() == 0 && i < len(before) && before[i] != r.Code && len(p.Routes) > 1 {
			p.Doubts = append(p.Doubts, fmt.Sprintf("Routes for which the stock is not known to suffice at %s g stand behind the others.", figure(p.MakeG)))
			break
		}
	}
	if len(p.Routes) > count {
		p.Routes = p.Routes[:count]
	}
}

// compareRoutes is the order of routes when stock plays no part.
func compareRoutes(a, b *Route) int {
	return cmp.Or(
		cmp.Compare(a.Weight, b.Weight),
		cmp.Compare(len(a.Steps), len(b.Steps)),
		cmp.Compare(a.LongestRun, b.LongestRun),
		cmp.Compare(b.WorstBranchYield.Usual, a.WorstBranchYield.Usual),
		cmp.Compare(a.Hazard.WithoutData, b.Hazard.WithoutData),
		cmp.Compare(a.Materials.Unpriced, b.Materials.Unpriced),
		cmp.Compare(a.Materials.Price, b.Materials.Price),
		cmp.Compare(a.Waste.WithoutWater, b.Waste.WithoutWater),
		cmp.Compare(a.Code, b.Code))
}
