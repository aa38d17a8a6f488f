package sheet_test

import (
	"strings"
	"testing"

	"shelfward/planner/sheet"
	"shelfward/reactions/reagent"
)

// supplied reads a strength as a shelf file writes it.
func supplied(t *testing.T, text string) sheet.Supply {
	t.Helper()
	st, err := reagent.ParseStrength(text)
	if err != nil {
		t.Fatal(err)
	}
	return sheet.Supply{Strength: st, Solution: true}
}

func with(s sheet.Supply, molarMass, density float64) sheet.Supply {
	s.MolarMass, s.DensityGPerML = molarMass, density
	return s
}

// plain writes no-break spaces as spaces.
func plain(s string) string { return strings.ReplaceAll(s, "\u00a0", " ") }
