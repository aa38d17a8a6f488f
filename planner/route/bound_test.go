package route

import (
	"context"
	"fmt"
	"math"
	"os"
	"slices"
	"testing"

	"gopkg.in/yaml.v3"

	"shelfward/molecule"
	"shelfward/planner/search"
)

// everyday stands on every shelf of these tests.
var everyday = []string{"O", "CO", "CCO", "CC(C)=O", "O=C=O", "N", "CI", "CBr", "C#N", "C=O", "CC(=O)O", "CN(C)C=O"}

// synthesis is one of testdata/routes/textbook.yaml.
type synthesis struct {
	Name, Target string
	Start        []string
	Steps        []struct {
		From []string
		To   string
	}
}

func textbook(t testing.TB) []synthesis {
	t.Helper()
	data, err := os.ReadFile("../../testdata/routes/textbook.yaml")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Syntheses []synthesis }
	if err := yaml.Unmarshal(data, &file); err != nil {
		t.Fatal(err)
	}
	return file.Syntheses
}

// bottles is the shelf of a synthesis: what it starts from, what its steps take beside, and everyday things.
func (s *synthesis) bottles(t testing.TB) *bottles {
	b := newBottles()
	made := map[molecule.Key]bool{}
	for _, x := range s.Steps {
		made[mustRead(t, x.To).SeenThroughKey()] = true
	}
	list := slices.Clone(s.Start)
	for _, x := range s.Steps {
		list = append(list, x.From...)
	}
	for i, text := range append(list, everyday...) {
		m := mustRead(t, text)
		if _, twice := b.bySeen[m.SeenThroughKey()]; !twice && !made[m.SeenThroughKey()] {
			b.put(t, fmt.Sprintf("item %d", i), text, nil)
		}
	}
	return b
}

func (s *synthesis) from(t testing.TB) (list []*molecule.Molecule) {
	for _, text := range s.Start {
		if m := mustRead(t, text); len(list) < search.MaxFrom {
			list = append(list, m)
		}
	}
	return list
}

// opened makes a chemistry whose search has opened a number of molecules, with both tables filled.
func (s *synthesis) opened(t testing.TB, by RankBy, molecules int) *chemistry {
	w := worldWith(t, s.bottles(t))
	c := newChemistry(w, by, &filter{world: w}, s.from(t), nil)
	c.lookFromShelf(context.Background())
	o := search.Options{Cost: by.cost(), Count: 5, MaxSteps: 6, MaxExpanded: molecules}
	for _, m := range c.from {
		o.From = append(o.From, c.enter(m))
	}
	if _, err := search.Find(context.Background(), c, c.enter(mustRead(t, s.Target)), o); err != nil {
		t.Fatal(err)
	}
	if _, err := c.reach.second(context.Background(), 2); err != nil {
		t.Fatal(err)
	}
	return c
}

// TestBoundNeverExceeds: at every molecule opened, for every way found to make it and every way of dealing
// out the starts owed, the bound lies at or below the cost of the step on the bounds (or leaf costs) of
// what it consumes. By induction it then lies at or below the true cost.
func TestBoundNeverExceeds(t *testing.T) {
	list := textbook(t)
	checked, tight, stride := 0, 0, 7
	if os.Getenv("SHELFWARD_SLOW") != "" {
		stride = 1
	}
	for i := 0; i < len(list); i += stride {
		by := ranks[i/stride%len(ranks)]
		c := list[i].opened(t, by, 12)
		for k := range c.options {
			checkBound(t, c, k, list[i].Name, &checked, &tight)
		}
	}
	t.Logf("%d ways checked, %d where the bound is met", checked, tight)
	if checked < 20000 || tight < 50 {
		t.Error("too easy")
	}
}

func checkBound(t *testing.T, c *chemistry, k search.Key, name string, checked, tight *int) {
	if c.required(k) {
		return
	}
	for owed := range uint8(c.reach.sets) {
		steps, bound := c.Bound(k, owed)
		for i := range c.options[k] {
			e := c.edge(c.options[k][i])
			eachDeal(&e, owed, func(part []uint8) {
				costs := make([]float64, len(part))
				run := 0
				for j, child := range e.Children {
					n, cost := c.least1(child.Key, part[j])
					costs[j], run = cost, max(run, n+1)
				}
				least := math.Inf(1)
				for v := range e.Variants {
					least = min(least, c.by.cost().Combine(&e.Variants[v], costs))
				}
				*checked++
				if bound > least+1e-9 || steps > run {
					t.Errorf("%s by %s: %s owing %b: bound %v in %d steps, but %s on %v costs %v in %d", name, c.by, c.world.Write(c.molecule(k)), owed,
						bound, steps, c.options[k][i][0].step.Transform.ID, part, least, run)
				}
				if bound > least-1e-9 {
					*tight++
				}
			})
		}
	}
}

// least1 is the least of taking a molecule and of the bound of making it.
func (c *chemistry) least1(k search.Key, owed uint8) (steps int, cost float64) {
	leaf, ok := c.Leaf(k)
	for i, f := range c.from {
		if search.Key(f.Key()) == k {
			if owed&^(1<<i) == 0 {
				return 0, leaf
			}
			return math.MaxInt32, math.Inf(1)
		}
	}
	if ok && owed == 0 {
		return 0, leaf
	}
	return c.Bound(k, owed)
}

// eachDeal deals the items owed out to the children that give atoms, in every way.
func eachDeal(e *search.Edge, owed uint8, yield func(part []uint8)) {
	able := make([]bool, len(e.Children))
	for _, o := range e.Origins {
		if o.Child >= 0 {
			able[o.Child] = true
		}
	}
	part := make([]uint8, len(e.Children))
	var deal func(bit uint8)
	deal = func(bit uint8) {
		switch {
		case bit == 0 || bit > owed:
			yield(part)
		case owed&bit == 0:
			deal(bit << 1)
		default:
			for j := range part {
				if able[j] {
					part[j] |= bit
					deal(bit << 1)
					part[j] &^= bit
				}
			}
		}
	}
	deal(1)
}

// TestBoundsOfWorkedRoutes: in every order the worked routes stay proven.
func TestBoundsOfWorkedRoutes(t *testing.T) {
	for _, by := range ranks {
		w := avoidWorld(t)
		p := plan(t, w, "CCC(C)=O", Options{RankBy: by, Count: 9})
		if len(p.Routes) != 2 || p.Search.ProvenRoutes != 2 {
			t.Errorf("%s: %d routes, %d proven", by, len(p.Routes), p.Search.ProvenRoutes)
		}
	}
}
