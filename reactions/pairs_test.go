package reactions

import (
	"context"
	"os"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"

	"shelfward/molecule"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// pairCase is one entry of testdata/pairs: a step that works and its twin that does not.
type pairCase struct {
	Theme     string   `yaml:"theme"`
	Right     string   `yaml:"right"`
	Wrong     string   `yaml:"wrong"`
	With      []string `yaml:"with"`
	WrongWith []string `yaml:"wrong_with"`
	Objection []string `yaml:"objection"`
	Why       string   `yaml:"why"`
}

// TestTextbookPairs judges steps with and without a fault: the one must be sound, the other must not, and
// an objection of a fitting kind must say so.
func TestTextbookPairs(t *testing.T) {
	text, err := os.ReadFile("../testdata/pairs/textbook.yaml")
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Pairs []pairCase `yaml:"pairs"`
	}
	if err := yaml.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Pairs) < 60 {
		t.Fatalf("%d pairs, at least 60 were expected", len(file.Pairs))
	}
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	table, err := reagent.Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range file.Pairs {
		if j := judgePair(t, b, table, p.Right, p.With); j.Verdict != Sound {
			t.Errorf("%s: %s is %s, sound was expected: %v", p.Theme, p.Right, j.Verdict, j.Objections)
		}
		with := p.With
		if p.WrongWith != nil {
			with = p.WrongWith
		}
		j := judgePair(t, b, table, p.Wrong, with)
		if j.Verdict == Sound {
			t.Errorf("%s: %s is sound; %s", p.Theme, p.Wrong, p.Why)
		} else if !fitting(j.Objections, p.Objection) {
			t.Errorf("%s: %s: objections %v, one of %v was expected", p.Theme, p.Wrong, j.Objections, p.Objection)
		}
	}
}

func judgePair(t *testing.T, b *Book, table *reagent.Table, step string, with []string) Judgement {
	t.Helper()
	from, to, ok := strings.Cut(step, " >> ")
	if !ok {
		t.Fatalf("%q: reactants >> product was expected", step)
	}
	j, err := b.Judge(context.Background(), []*molecule.Molecule{read(t, from)}, []*molecule.Molecule{read(t, to)},
		table.ReadList(with, nil), true, table)
	if err != nil {
		t.Fatal(err)
	}
	return j
}

func fitting(list []Objection, kinds []string) bool {
	for _, o := range list {
		for _, k := range kinds {
			if string(o.Kind) == k {
				return true
			}
		}
	}
	return false
}
