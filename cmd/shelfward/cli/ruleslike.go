package cli

import (
	"fmt"
	"io"
	"strings"
	"text/tabwriter"

	"shelfward/planner"
	"shelfward/planner/shelf"
	"shelfward/reactions/sketch"
)

// usesListed is how many shelf molecules are named that a new transform would use, and would not.
const usesListed = 5

// likeJSON is the object of `rules new --like --json`.
type likeJSON struct {
	File      string   `json:"file"`
	Reactants []string `json:"reactants"`
	Products  []string `json:"products"`
	Changes   []string `json:"changes"`
	Balance   string   `json:"balance"` // what the reagents must bring (+) and take (-)
	Takes     []useRow `json:"takes"`
	Misses    []useRow `json:"misses"`
	Doubts    []string `json:"doubts"`
}

type useRow struct {
	Part int    `json:"part"`
	Name string `json:"name"`
	Why  string `json:"why,omitempty"`
}

// writeLike reads a transform off a drawing, writes it and tries it on the shelf.
func (o *rulesNewOptions) writeLike(id, path, dir string) error {
	reactants, products, err := o.app.reaction(o.like)
	if err != nil {
		return err
	}
	fsys, err := o.app.ruleFiles()
	if err != nil {
		return err
	}
	if err := o.app.declineProducts(fsys, products); err != nil {
		return err
	}
	s, err := sketch.Read(reactants, products)
	if err != nil {
		return usageError("--like: %v", err)
	}
	plain := *o.app
	plain.RuleDirs = nil // other unfinished files of the folder are no reason to write none
	room, err := plain.room(nil, "")
	if err != nil {
		return err
	}
	takes, misses, err := s.Try(shelfItems(room), room.Book.Groups(), usesListed)
	if err != nil {
		return err
	}
	if err := writeNew(path, skeleton(id, s.Core(), agentLines(room, s), s.Example())); err != nil {
		return err
	}
	if o.app.JSON {
		left, right := s.Parts()
		return printJSON(o.app.Out, likeJSON{path, left, right, s.Changes, s.Balance(), useRows(takes), useRows(misses), notNil(s.Doubts)})
	}
	for _, d := range s.Doubts {
		fmt.Fprintln(o.app.Out, "doubt: "+d)
	}
	printSketch(o.app.Out, s)
	printUses(o.app.Out, "shelf molecules that it would use", takes)
	printUses(o.app.Out, "shelf molecules that one condition keeps out", misses)
	_, err = fmt.Fprintf(o.app.Out, "\n%s written; fill in what says FILL, then: shelfward rules check %s --rules %s\n", path, id, dir)
	return err
}

// itemsTried bounds how much of a large shelf a new transform is tried on.
const itemsTried = 5000

func shelfItems(room *planner.Room) []sketch.Item {
	var items []sketch.Item
	room.Shelf.Each(func(it *shelf.Item) bool {
		if it.Molecule != nil {
			items = append(items, sketch.Item{Name: it.Name, Molecule: it.Molecule.FreeForm()})
		}
		return len(items) < itemsTried
	})
	return items
}

// agentLines writes the agents drawn as reagents, by the names of the list of reagents.
func agentLines(room *planner.Room, s *sketch.Sketch) string {
	var sb strings.Builder
	for _, m := range s.Agents {
		if r, ok := room.Reagents.ByMolecule(m); ok {
			fmt.Fprintf(&sb, "    - {name: %s, equiv: 1.0}          # as drawn; FILL the equivalents\n", r.Name)
		}
	}
	if sb.Len() == 0 {
		return skeletonReagents
	}
	return sb.String()
}

func printSketch(w io.Writer, s *sketch.Sketch) {
	left, right := s.Parts()
	fmt.Fprintf(w, "  from  %s\n  to    %s\n", strings.Join(left, "  +  "), strings.Join(right, "  +  "))
	for _, c := range s.Changes {
		fmt.Fprintln(w, "  "+c)
	}
	if b := s.Balance(); b != "" {
		fmt.Fprintf(w, "  the reagents must bring (+) and take (-): %s\n", b)
	}
}

func printUses(w io.Writer, title string, uses []sketch.Use) {
	fmt.Fprintf(w, "\n%s:\n", title)
	if len(uses) == 0 {
		fmt.Fprintln(w, "  none")
		return
	}
	tw := tabwriter.NewWriter(w, 2, 4, 2, ' ', 0)
	for _, u := range uses {
		why := ""
		if u.Why != "" {
			why = "\tneeds " + u.Why
		}
		fmt.Fprintf(tw, "  %s\tas part %d%s\n", u.Name, u.Part, why)
	}
	tw.Flush()
}

func useRows(uses []sketch.Use) []useRow {
	rows := []useRow{}
	for _, u := range uses {
		rows = append(rows, useRow{u.Part, u.Name, u.Why})
	}
	return rows
}

func notNil(list []string) []string { return append([]string{}, list...) }
