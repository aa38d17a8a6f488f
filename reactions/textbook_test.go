package reactions

import (
	"context"
	"os"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"

	"shelfward/molecule"
	"shelfward/rules"
)

// textbookSyntheses is testdata/routes/textbook.yaml.
type textbookSyntheses struct {
	Syntheses []struct {
		Name, Target, Source string
		Start, Materials     []string
		Steps                []struct {
			From []string
			To   string
		}
	}
}

// TestTextbookSyntheses takes every step of some scores of textbook syntheses backwards: the product
// must be proposed from just these materials, and the forward look at it may raise no fatal objection.
func TestTextbookSyntheses(t *testing.T) {
	data, err := os.ReadFile("../testdata/routes/textbook.yaml")
	if err != nil {
		t.Fatal(err)
	}
	var all textbookSyntheses
	if err := yaml.Unmarshal(data, &all); err != nil {
		t.Fatal(err)
	}
	if len(all.Syntheses) < 40 {
		t.Fatalf("%d syntheses, expected at least 40", len(all.Syntheses))
	}
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	for _, s := range all.Syntheses {
		t.Run(s.Name, func(t *testing.T) {
			if last := s.Steps[len(s.Steps)-1].To; !sameSeenThrough(t, last, s.Target) {
				t.Errorf("the last step gives %s, not the target %s", last, s.Target)
			}
			for _, step := range s.Steps {
				if why := b.proposes(t, step.From, step.To); why != "" {
					t.Errorf("%s >> %s: %s", strings.Join(step.From, "."), step.To, why)
				}
			}
		})
	}
}

func sameSeenThrough(t *testing.T, a, b string) bool {
	key := func(s string) molecule.Key { return read(t, s).FreeForm().WithoutStereo().SeenThroughKey() }
	return key(a) == key(b)
}

// proposes looks for a step without fatal objection that makes the product from the reactants alone
// (carbon-free ones apart); otherwise it says what stands in the way.
func (b *Book) proposes(t *testing.T, from []string, to string) string {
	have := map[molecule.Key]bool{}
	for _, r := range from {
		have[read(t, r).FreeForm().WithoutStereo().SeenThroughKey()] = true
	}
	stocked := func(m *molecule.Molecule) bool { return have[m.WithoutStereo().SeenThroughKey()] }
	steps, err := b.Expand(context.Background(), read(t, to).FreeForm(), stocked)
	if err != nil {
		t.Fatal(err)
	}
	why := "no transform proposes it"
	for _, step := range steps {
		if !madeOf(step, have) {
			continue
		}
		why = ""
		for _, o := range step.Objections {
			if o.Fatal {
				why = step.Transform.ID + ": " + o.Text
			}
		}
		if why == "" {
			return ""
		}
	}
	return why
}

func madeOf(step *Step, have map[molecule.Key]bool) bool {
	for _, r := range step.Reactants {
		if carbons(r.Molecule) > 0 && !have[r.Molecule.WithoutStereo().SeenThroughKey()] {
			return false
		}
	}
	return true
}
