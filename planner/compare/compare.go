// Package compare puts routes side by side: the routes of one plan, or the first route from each of
// several starts. It says which row comes first in each column, and never lets a gap in the data win
// a column.
package compare

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/planner/route"
)

// Row is one route with the start it was asked for.
type Row struct {
	From     string   `json:"from"` // SMILES of the start, several joined by dots; empty if none was asked for
	FromName string   `json:"from_name"`
	BeatenBy []string `json:"beaten_by"` // codes of rows nowhere worse and somewhere better; a gap counts as worst
	route.Route
}

// First names the row that comes first in a column.
type First struct {
	Column string   `json:"column"` // steps, longest run, yield, hazard, cost, waste
	Codes  []string `json:"codes"`  // several on a tie
	Clause string   `json:"clause"` // what the data leave open; empty if nothing
}

// Table is the comparison.
type Table struct {
	Target route.Target `json:"target"`
	route.Kept
	MakeG    float64  `json:"make_g"`
	Asked    bool     `json:"make_asked"` // the amount was asked for, and stock looked at
	Rows     []Row    `json:"rows"`
	Missing  []string `json:"missing"`  // starts without a route, with the reason
	Unbeaten []string `json:"unbeaten"` // codes of the rows that no other beats in every column
	FirstBy  []First  `json:"first_by"`
	Doubts   []string `json:"doubts"`
}

// FromPlan compares the routes of a plan.
func FromPlan(p *route.Plan) *Table {
	t := empty(p)
	from := strings.Join(p.From, ".")
	for _, r := range p.Routes {
		t.Rows = append(t.Rows, Row{From: from, Route: r})
	}
	t.FirstBy, t.Unbeaten = firsts(t.Rows), unbeaten(t.Rows)
	return t
}

func empty(p *route.Plan) *Table {
	return &Table{Target: p.Target, Kept: p.Kept, MakeG: p.MakeG, Asked: p.MakeAsked, Rows: []Row{}, Missing: []string{}, FirstBy: []First{}, Unbeaten: []string{}, Doubts: p.Doubts}
}

// EachFrom plans the target once from each start, with the options otherwise alike, and compares the
// first routes. Starts without a route are named in Missing. It also returns the plans, in order.
func EachFrom(ctx context.Context, w *route.World, target *molecule.Molecule, starts []*molecule.Molecule, o route.Options) (*Table, []*route.Plan, error) {
	var t *Table
	var plans []*route.Plan
	for i, start := range starts {
		one := o
		one.Count = 1
		one.From = append(slices.Clone(o.From), start)
		p, err := route.Make(ctx, w, target, one)
		if err != nil {
			return nil, nil, err
		}
		if t == nil {
			t = empty(p)
			t.Doubts = []string{}
		}
		plans = append(plans, p)
		name := w.Name(start)
		called := name
		if called == "" {
			called = w.Write(start)
		}
		if len(p.Routes) == 0 {
			why := fmt.Sprintf("no route of at most %d steps exists under the rules and shelf items loaded", p.MaxSteps)
			if !p.Search.Exhausted {
				why = "no route was found before the search was stopped"
			}
			t.Missing = append(t.Missing, called+": "+why)
			continue
		}
		for _, d := range p.Doubts {
			t.Doubts = append(t.Doubts, "From "+called+": "+d)
		}
		r := p.Routes[0]
		r.Rank = i + 1
		t.Rows = append(t.Rows, Row{From: w.Write(start), FromName: name, Route: r})
	}
	if t != nil {
		t.FirstBy, t.Unbeaten = firsts(t.Rows), unbeaten(t.Rows)
	}
	return t, plans, nil
}
