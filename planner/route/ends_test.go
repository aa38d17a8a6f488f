package route

import (
	"context"
	"math"
	"os"
	"slices"
	"testing"

	"shelfward/planner/search"
)

// proofOf searches for the proof of the first route of a synthesis, from both ends or from the target's
// alone with the same bound on the last step.
func (s *synthesis) proofOf(t testing.TB, both bool, most int) *search.Result {
	w := worldWith(t, s.bottles(t))
	c := newChemistry(w, Balanced, &filter{world: w}, s.from(t), nil)
	c.lookFromShelf(context.Background())
	if !both {
		c.reach = &reach{c: c, sets: c.reach.sets}
		c.guesser.reach = c.reach
	}
	o := search.Options{Count: 1, MaxSteps: len(s.Steps) + 1, MaxExpanded: most, Accept: c.oneWayEach}
	c.wants.enterInto(&o, c)
	r, err := search.Find(context.Background(), c, c.enter(mustRead(t, s.Target)), o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// TestBothEnds prints, for the textbook syntheses of three and more steps, how many molecules are opened up
// to the proof of the first route from both ends (those run forwards counted too) and from the target's
// end alone. Slow.
func TestBothEnds(t *testing.T) {
	if os.Getenv("SHELFWARD_SLOW") == "" {
		t.Skip("set SHELFWARD_SLOW to run")
	}
	const most = 600
	var ratios []float64
	for _, s := range textbook(t) {
		if len(s.Steps) < 3 {
			continue
		}
		both, one := s.proofOf(t, true, most), s.proofOf(t, false, most)
		opened := both.Expanded + both.Forward
		t.Logf("%-45s %d steps: %4d and %4d forwards from both ends (%s), %4d from the target's (%s)", s.Name, len(s.Steps), both.Expanded, both.Forward, both.Stopped, one.Expanded, one.Stopped)
		if both.ProvenRoutes > 0 && one.ProvenRoutes > 0 && math.Abs(both.Routes[0].Cost-one.Routes[0].Cost) > 1e-9 {
			t.Errorf("%s: the first route costs %v from both ends and %v from one", s.Name, both.Routes[0].Cost, one.Routes[0].Cost)
		}
		if one.ProvenRoutes > 0 && both.ProvenRoutes == 0 {
			t.Errorf("%s: proven from one end only", s.Name)
		}
		if both.ProvenRoutes == 0 {
			continue // neither
		}
		ratio := float64(opened) / float64(one.Expanded) // where that did not end, at most this
		if ratios = append(ratios, ratio); ratio > 1.2 {
			t.Errorf("%s: %.2f times as many molecules from both ends", s.Name, ratio)
		}
	}
	slices.Sort(ratios)
	median := ratios[len(ratios)/2]
	t.Logf("%d proven; median ratio %.2f, largest %.2f", len(ratios), median, ratios[len(ratios)-1])
	if median > 0.5 {
		t.Errorf("median ratio %.2f, want at most 0.5", median)
	}
}
