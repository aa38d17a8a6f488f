package route

import "testing"

// TestBoundsBelowCosts: on the worked routes the bound of every molecule made lies at or below what it
// costs, in every order.
func TestBoundsBelowCosts(t *testing.T) {
	for _, by := range ranks {
		w := avoidWorld(t)
		target := mustRead(t, "CCC(C)=O")
		c := newChemistry(w, by, &filter{world: w}, nil, nil)
		_, bound := c.Bound(c.enter(target), 0)
		p := plan(t, w, "CCC(C)=O", Options{RankBy: by, Count: 9})
		if len(p.Routes) != 2 || p.Search.ProvenRoutes != 2 {
			t.Errorf("%s: %d routes, %d proven", by, len(p.Routes), p.Search.ProvenRoutes)
		}
		for _, r := range p.Routes {
			if r.Weight < bound {
				t.Errorf("%s: %s weighs %v, bound %v", by, r.Code, r.Weight, bound)
			}
		}
	}
}
