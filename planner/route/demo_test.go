package route_test

import (
	"os"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
	"shelfward/planner"
	"shelfward/planner/route"
	"shelfward/rules"
)

// room opens the built-in rules with the shelf of the demo (testdata/lure-shelf.csv: amounts, prices
// and places invented).
func room(t *testing.T) *planner.Room {
	t.Helper()
	r, err := planner.Open(rules.Files(), []string{"testdata/lure-shelf.csv"}, "")
	if err != nil {
		t.Fatal(err)
	}
	return r
}

const lure = "CCCC(C)C(=O)CC" // 4-methylheptan-3-one

func TestDemoPrint(t *testing.T) {
	if os.Getenv("DEMO") == "" {
		t.Skip()
	}
	m, err := smiles.Read(lure)
	if err != nil {
		t.Fatal(err)
	}
	cold := -20.0
	o := route.Options{MaxSteps: 5, Count: 10, Time: 15e9, Bench: &route.Bench{ColdestC: &cold}, Avoid: strings.Fields(os.Getenv("AVOID")), RankBy: route.RankBy(os.Getenv("RANK"))}
	if os.Getenv("MAKE") != "" {
		o.MakeMol = 10 / 128.21
	}
	p, err := route.Make(t.Context(), room(t).World(), m, o)
	if err != nil {
		t.Fatal(err)
	}
	p.WriteText(os.Stdout)
	t.Logf("%+v", p.Search)
}
