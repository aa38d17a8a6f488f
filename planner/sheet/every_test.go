package sheet_test

import (
	"bytes"
	"context"
	"os"
	"strings"
	"testing"
	"unicode/utf8"

	"shelfward/planner/route"
	"shelfward/planner/sheet"
)

// TestEveryConditionSet prints a sheet under each condition set of the loaded rules: none fails, no line is
// wider than the page, and every reagent and solvent that the rules charge has an amount, or a doubt at the head says why not. It takes a while:
// SHELFWARD_SLOW=1 runs it.
func TestEveryConditionSet(t *testing.T) {
	if os.Getenv("SHELFWARD_SLOW") == "" {
		t.Skip("SHELFWARD_SLOW is not set")
	}
	r := theRoom(t)
	for _, tr := range r.Book.Transforms {
		for _, set := range tr.Conditions {
			p, ro := assemble(t, r, lure, "X", []planned{bleach})
			ro.Steps[0].Set, ro.Steps[0].Yield = set, route.Range(set.Yield)
			s, err := sheet.Make(context.Background(), r.Desk(), p, ro, sheet.Options{MakeMol: 0.05})
			if err != nil {
				t.Errorf("%s: %v", set.File, err)
				continue
			}
			var text bytes.Buffer
			if err := s.Text(&text); err != nil {
				t.Fatal(err)
			}
			for _, line := range strings.Split(text.String(), "\n") {
				if utf8.RuneCountInString(line) > 100 {
					t.Errorf("%s: wide line %q", set.File, line)
				}
			}
			for _, c := range s.Steps[0].Charges {
				if c.Role != "work-up" && c.MassG == 0 && c.VolumeML == 0 && !strings.Contains(strings.Join(s.Doubts, "\n"), c.Name+": no") {
					t.Errorf("%s: no amount of %s (%s), %v equivalents", set.File, c.Name, plain(c.Form), c.Equiv)
				}
			}
		}
	}
}
