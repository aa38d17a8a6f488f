package route

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

func TestCommonOpenings(t *testing.T) {
	buy := func(smiles string, mass float64) Opening { return Opening{SMILES: smiles, MolarMass: mass} }
	small, big, rare, alone := buy("C", 16), buy("CC", 30), buy("CCC", 44), buy("CCCC", 58)
	got := CommonOpenings(map[int][]Opening{
		3: {big, small, rare}, 7: {small, big, big}, 9: {rare, big}, 12: {rare}, 20: {}, 31: {alone},
	})
	want := "CC opens 3 +3 [3 7 9], CCC opens 3 +1 [3 9 12], CCCC opens 1 +1 [31]"
	text := ""
	for i, c := range got {
		if i > 0 {
			text += ", "
		}
		text += fmt.Sprintf("%s opens %d +%d %v", c.SMILES, c.Opens, c.More, c.Targets)
	}
	if text != want {
		t.Errorf("%s\nwant\n%s", text, want)
	}
	if got := CommonOpenings(nil); got == nil || len(got) != 0 {
		t.Errorf("%v, want an empty list", got)
	}
}

// TestCommonOpeningsFirst: the first purchase opens as many targets as any one purchase can, and no
// smaller one opens as many.
func TestCommonOpeningsFirst(t *testing.T) {
	random := rand.New(rand.NewPCG(4, 4))
	for round := range 200 {
		opens, count, mass := map[int][]Opening{}, map[string]int{}, map[string]float64{}
		for target := range 12 {
			for n := range 15 {
				if random.IntN(4) == 0 {
					x := Opening{SMILES: fmt.Sprint("C", n), MolarMass: float64(random.IntN(3))}
					if m, ok := mass[x.SMILES]; ok {
						x.MolarMass = m
					}
					mass[x.SMILES] = x.MolarMass
					opens[target] = append(opens[target], x)
					count[x.SMILES]++
				}
			}
		}
		first := CommonOpenings(opens)[0]
		for smiles, n := range count {
			if n > first.Opens || n == first.Opens && mass[smiles] < first.MolarMass {
				t.Fatalf("round %d: %s opens %d (%v g/mol), first is %+v", round, smiles, n, mass[smiles], first)
			}
		}
	}
}
