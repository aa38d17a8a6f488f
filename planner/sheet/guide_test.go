package sheet_test

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shelfward/planner/sheet"
	"shelfward/rules"
)

// TestGuideAdds: a user's sheet.yaml adds to the built-in one; mistakes are told with their place.
func TestGuideAdds(t *testing.T) {
	table := theRoom(t).Reagents
	builtin, err := sheet.LoadGuide(rules.Files(), table)
	if err != nil {
		t.Fatal(err)
	}
	if len(builtin.Never) == 0 || len(builtin.Controls) == 0 || len(builtin.Holds) == 0 || len(builtin.Waste) == 0 || len(builtin.Emergency) == 0 {
		t.Fatalf("the built-in guide is empty: %+v", builtin)
	}
	for _, c := range []struct{ text, want string }{
		{"controls:\n- {codes: [H225], says: 'Bench 3 only.'}\n", ""},
		{"controls:\n- {acts: [no-such-act], says: 'x'}\n", `sheet.yaml:2:11: unknown act "no-such-act"`},
		{"holds:\n- {at: noon, says: 'x', otherwise: 'y'}\n", "start, run or end"},
		{"rinses:\n- {name: xyzzyum}\n", `"xyzzyum" is no reagent`},
		{"hold:\n- {}\n", "sheet.yaml:1"},
	} {
		dir := t.TempDir()
		if err := os.WriteFile(filepath.Join(dir, "sheet.yaml"), []byte(c.text), 0o644); err != nil {
			t.Fatal(err)
		}
		fsys, err := rules.Overlay(dir)
		if err != nil {
			t.Fatal(err)
		}
		g, err := sheet.LoadGuide(fsys, table)
		switch {
		case c.want == "" && (err != nil || len(g.Controls) != len(builtin.Controls)+1 || len(g.Never) != len(builtin.Never)):
			t.Errorf("%q: %v", c.text, err)
		case c.want != "" && (err == nil || !strings.Contains(err.Error(), c.want)):
			t.Errorf("%q: error %v, want %q", c.text, err, c.want)
		}
	}
}

// TestScaling: twice the target takes twice of everything, and the shopping list is the sum of the charges.
func TestScaling(t *testing.T) {
	for _, list := range [][]planned{routeA, routeB, routeC} {
		one, two := write(t, list, "X", 4, "checked"), write(t, list, "X", 8, "checked")
		sums := map[string]float64{}
		for i := range one.Steps {
			for k, c := range one.Steps[i].Charges {
				d := two.Steps[i].Charges[k]
				if off(d.MassG, 2*c.MassG) > 1e-9 || c.VolumeML > 0 && off(d.VolumeML, 2*c.VolumeML) > 1e-9 {
					t.Errorf("step %d, %s: %v g, %v mL at 4 g, %v g, %v mL at 8 g", i+1, c.Name, c.MassG, c.VolumeML, d.MassG, d.VolumeML)
				}
				if c.FromStep == 0 {
					sums[c.Name] += c.MassG
				}
			}
		}
		for _, l := range one.Stock {
			if off(l.MassG, sums[l.Name]) > 1e-9 {
				t.Errorf("%s: %v g to have ready, %v g charged", l.Name, l.MassG, sums[l.Name])
			}
		}
	}
}

// TestSameSheet: the same route prints the same bytes.
func TestSameSheet(t *testing.T) {
	var a, b bytes.Buffer
	if err := write(t, routeB, "B", 3, "").Text(&a); err != nil {
		t.Fatal(err)
	}
	if err := write(t, routeB, "B", 3, "").Text(&b); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(a.Bytes(), b.Bytes()) {
		t.Error("two sheets of the same route differ")
	}
}
