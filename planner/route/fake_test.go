package route

import (
	"context"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions"
)

// fakeBook answers from a list of hand-made steps.
type fakeBook struct {
	t     testing.TB
	steps map[molecule.Key][]*reactions.Step
}

func newFakeBook(t testing.TB) *fakeBook {
	return &fakeBook{t, map[molecule.Key][]*reactions.Step{}}
}

func (f *fakeBook) Expand(ctx context.Context, m *molecule.Molecule, _ reactions.Stocked) ([]*reactions.Step, error) {
	return f.steps[m.Key()], ctx.Err()
}

// makes adds a step: product, usual yield, then the reactants. Every atom of the product is said to
// come from the first atom of one of the reactants, in turn.
func (f *fakeBook) makes(id, product string, yield float64, reactants ...string) *reactions.Step {
	p := mustRead(f.t, product)
	s := &reactions.Step{Product: p, Fraction: 1,
		Transform: &reactions.Transform{ID: id, Name: id},
		Conditions: []*reactions.Conditions{{ID: "usual", Yield: reactions.Range{Low: yield, Usual: yield, High: yield}, Origin: "class",
			Temperature: [2]float64{0, 25}, Hours: [2]float64{1, 2}}}}
	for _, r := range reactants {
		s.Reactants = append(s.Reactants, reactions.Reactant{Molecule: mustRead(f.t, r), Equivalents: 1, Count: 1})
	}
	for a := range p.NumAtoms() {
		s.Origins = append(s.Origins, reactions.Origin{Reactant: int32(a % len(reactants)), Atom: 0})
	}
	f.steps[p.Key()] = append(f.steps[p.Key()], s)
	return s
}

// world makes a world of the fake book and a shelf.
func (f *fakeBook) world(b *bottles) *World {
	w := &World{Book: f, Materials: b, Shelf: b.list, ShelfItems: len(b.list), Gravity: testGravity,
		Name: func(*molecule.Molecule) string { return "" }, Write: smiles.Write, Read: smiles.Read}
	seen := map[string]bool{}
	for _, list := range f.steps {
		for _, s := range list {
			if !seen[s.Transform.ID] {
				seen[s.Transform.ID] = true
				w.Transforms = append(w.Transforms, &reactions.Transform{ID: s.Transform.ID, Conditions: s.Conditions})
			}
		}
	}
	return w
}

func plan(t testing.TB, w *World, target string, o Options) *Plan {
	t.Helper()
	p, err := Make(context.Background(), w, mustRead(t, target), o)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// molecules returns the target of a plan as a list.
func (p *Plan) molecules() []*molecule.Molecule { return []*molecule.Molecule{p.Molecule} }

func hasDoubt(r *Route, word string) bool {
	for _, d := range r.Doubts {
		if strings.Contains(d, word) {
			return true
		}
	}
	return false
}
