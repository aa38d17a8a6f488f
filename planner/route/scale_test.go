package route

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shelfward/reactions"
	"shelfward/rules"
)

// TestScale: what practice avoids at scale turns the order of two ways round, and is named.
func TestScale(t *testing.T) {
	w := avoidWorld(t)
	var err error
	if w.Scale, err = LoadScale(rules.Files()); err != nil {
		t.Fatal(err)
	}
	set := w.Transforms[0].Conditions
	set[0].Temperature, set[1].Temperature = [2]float64{-78, 0}, [2]float64{15, 25}
	set[0].HeatKJ, set[1].HeatKJ = 20, 20
	set[1].Needs = nil
	first := func(scale bool) *Step {
		return &plan(t, w, "CCC(C)=O", Options{AtScale: scale}).Routes[0].Steps[0]
	}
	if s := first(false); s.Conditions != "usual" || len(s.AtScale) != 0 {
		t.Errorf("in the small: %s, %q", s.Conditions, s.AtScale)
	}
	set[1].Reagents = []reactions.Charge{{Name: "bleach", Equiv: 1}} // chromium would be avoided too
	if s := first(true); s.Conditions != "chromic" || len(s.AtScale) != 0 {
		t.Errorf("at scale: %s, %q", s.Conditions, s.AtScale)
	}
	if p := plan(t, w, "CCC(C)=O", Options{AtScale: true, RankBy: Yield}); !strings.Contains(p.Minimised, "not weighed") {
		t.Errorf("by yield: %q", p.Minimised)
	}
}

// TestScaleRows tries every built-in row and a heat that nobody looked up.
func TestScaleRows(t *testing.T) {
	scale, err := LoadScale(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	mild := func() *reactions.Conditions {
		return &reactions.Conditions{Temperature: [2]float64{20, 25}, HeatKJ: 30}
	}
	for want, change := range map[string]func(*reactions.Conditions){
		"":                                       func(*reactions.Conditions) {},
		"bath below -40 C (-78 C)":               func(c *reactions.Conditions) { c.Needs = []string{"cold -78"} },
		"a gas is charged (hydrogen)":            func(c *reactions.Conditions) { c.Reagents = []reactions.Charge{{Name: "hydrogen"}} },
		"a gas comes off (CO2)":                  func(c *reactions.Conditions) { c.Gas = []reactions.Amount{{Count: 1, SMILES: "CO2"}} },
		"heat to be led away (about 400 kJ/mol)": func(c *reactions.Conditions) { c.HeatKJ = 400 },
		"heat to be led away (never looked up, counted)": func(c *reactions.Conditions) { c.HeatKJ = 0 },
		"chromatography": func(c *reactions.Conditions) { c.Workup = []string{"Chromatograph on silica."} },
		"a solvent that catches fire below -30 C and forms peroxides or static charge (diethyl ether)": func(c *reactions.Conditions) {
			c.Solvents = []reactions.Solvent{{Name: "diethyl ether"}}
		},
		"a toxic metal in product and waste (chromium trioxide)": func(c *reactions.Conditions) {
			c.Reagents = []reactions.Charge{{Name: "chromium trioxide"}}
		},
	} {
		c := mild()
		change(c)
		if adds, why := scale.of(c); strings.Join(why, "; ") != want || (adds > 0) != (want != "") {
			t.Errorf("%q: adds %g, %q", want, adds, why)
		}
	}
}

func TestScaleErrors(t *testing.T) {
	for text, want := range map[string]string{
		"avoided_at_scale:\n- {id: x, says: y, adds: -1, gas: true}\n": "scale.yaml:2:3: adds: -1",
		"avoided_at_scale:\n- {id: x, says: y, adds: 1}\n":             "scale.yaml:2:3: x tests nothing",
		"avoided_at_scale:\n- {id: x, says: y}\n":                      "adds",
	} {
		dir := t.TempDir()
		if err := os.WriteFile(filepath.Join(dir, "scale.yaml"), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		fsys, err := rules.Overlay(dir)
		if err == nil {
			_, err = LoadScale(fsys)
		}
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %v, want %q", text, err, want)
		}
	}
}
