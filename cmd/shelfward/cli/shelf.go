package cli

import (
	"fmt"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"shelfward/planner"
	"shelfward/planner/shelf"
)

func newShelfCommand(app *App) *cobra.Command {
	cmd := &cobra.Command{Use: "shelf", Short: "what is on the shelf: list, find, check, import", Args: cobra.ArbitraryArgs, RunE: subcommandOnly,
		Long:    "The shelf: the built-in example, or the files given with --shelf.\n" + exitHelp,
		Example: "  shelfward shelf list\n  shelfward shelf check testdata/demo/lure-shelf.csv"}
	cmd.AddCommand(&cobra.Command{
		Use: "list", Short: "list the shelf", Args: exactly(0),
		Long: "Lists every item with structure, amount, strength, hazards and place; of a shelf with an index the first 1,000.\n" + exitHelp, Example: "  shelfward shelf list\n  shelfward shelf list --shelf testdata/demo/lure-shelf.csv",
		RunE: func(*cobra.Command, []string) error { return app.shelfList("") },
	}, &cobra.Command{
		Use: "find WORD", Short: "find items by name, synonym, CAS number or structure", Args: exactly(1),
		Long: "WORD is a name or a part of one, a synonym, a CAS number or SMILES.\n" + exitHelp, Example: "  shelfward shelf find propanal",
		RunE: func(_ *cobra.Command, args []string) error { return app.shelfList(args[0]) },
	}, &cobra.Command{
		Use: "check FILE", Short: "check a shelf file row by row", Args: exactly(1),
		Long: "Says for each row how it was read, and for each mistake the line and what was expected.\n" + exitHelp, Example: "  shelfward shelf check testdata/demo/lure-shelf.csv",
		RunE: func(_ *cobra.Command, args []string) error { return app.shelfCheck(args[0]) },
	}, newShelfImportCommand(app))
	return cmd
}

func (app *App) shelfList(word string) error {
	room, err := app.room(nil, "")
	if err != nil {
		return err
	}
	items, more := listed(room.Shelf)
	if word != "" {
		items, more = findItems(room.Shelf, word), 0
		if len(items) == 0 && room.Shelf.Err() == nil {
			reason := fmt.Sprintf("nothing on the shelf is called %q", word)
			return app.nothing(shelfJSON(nil, reason), reason)
		}
	}
	if err := room.Shelf.Err(); err != nil {
		return failWith(exitUsage, err)
	}
	var doubts []string
	if more > 0 {
		doubts = append(doubts, fmt.Sprintf("the first %d of %d items; `shelfward shelf find` looks for one", len(items), len(items)+more))
	}
	if app.JSON {
		return printJSON(app.Out, shelfJSON(items, doubts...))
	}
	for _, d := range doubts {
		fmt.Fprintln(app.Out, d)
	}
	if room.Invented {
		fmt.Fprintln(app.Out, "shelf: the built-in example; its amounts, places and prices are INVENTED")
	}
	tw := tabwriter.NewWriter(app.Out, 2, 4, 2, ' ', 0)
	fmt.Fprintln(tw, "name\tCAS\tstructure\tamount\tstrength\thazards\tplace")
	for _, it := range items {
		fmt.Fprintf(tw, "%s\t%s\t%s\t%s\t%s\t%s\t%s\n", it.Name, it.CAS, it.SMILES, it.Amount, strengthText(it), hazardText(it), it.Location)
	}
	if err := tw.Flush(); err != nil {
		return err
	}
	fmt.Fprintf(app.Out, "%d items\n", len(items))
	return nil
}

// maxListed bounds what is listed of a shelf that may hold millions of items.
const maxListed = 1000

// listed gives the items to list, and how many more there are.
func listed(s *shelf.Shelf) (items []*shelf.Item, more int) {
	s.Each(func(it *shelf.Item) bool {
		items = append(items, it)
		return !s.Indexed() || len(items) < maxListed
	})
	return items, s.Len() - len(items)
}

// findItems looks up by exact name, number or structure, else by part of the name.
func findItems(s *shelf.Shelf, word string) []*shelf.Item {
	if items := s.FindText(word); len(items) > 0 {
		return items
	}
	if rd, err := s.Resolve(word); err == nil {
		if items := s.Find(rd.Molecule); len(items) > 0 {
			return items
		}
	}
	return s.Containing(word, maxListed)
}

func strengthText(it *shelf.Item) string {
	if it.Strength.Known() {
		return it.Strength.String()
	}
	if it.PurityFraction > 0 {
		return fmt.Sprintf("%.3g %%", 100*it.PurityFraction)
	}
	return ""
}

func hazardText(it *shelf.Item) string {
	switch {
	case !it.HazardsKnown:
		return "unknown"
	case len(it.Hazards) == 0:
		return "none"
	}
	return strings.Join(it.Hazards, " ")
}

func shelfJSON(items []*shelf.Item, doubts ...string) map[string]any {
	list := []any{}
	for _, it := range items {
		list = append(list, map[string]any{"name": it.Name, "cas": it.CAS, "smiles": it.SMILES, "amount": it.Amount.String(),
			"strength": strengthText(it), "hazards": append([]string{}, it.Hazards...), "hazards_known": it.HazardsKnown, "location": it.Location})
	}
	return map[string]any{"items": list, "doubts": append([]string{}, doubts...)}
}

func (app *App) shelfCheck(path string) error {
	if shelf.IsIndex(path) {
		return app.indexCheck(path)
	}
	if err := checkFile(path); err != nil {
		return err
	}
	fsys, err := app.ruleFiles()
	if err != nil {
		return err
	}
	rep, err := planner.CheckShelf(fsys, path)
	if err != nil {
		return failWith(exitUsage, err)
	}
	w := app.Out
	if app.JSON {
		if len(rep.Errs) == 0 {
			return printJSON(app.Out, checkJSON(rep))
		}
		w = app.ErrOut // status 2 prints no object
	}
	for _, row := range rep.Rows {
		if it := row.Item; it != nil {
			fmt.Fprintf(w, "%s:%d: %s\n", path, it.Line, readingText(it))
		}
	}
	for _, e := range rep.Errs {
		fmt.Fprintln(w, e)
	}
	fmt.Fprintf(w, "%d rows read, %d mistakes\n", len(rep.Items()), len(rep.Errs))
	if len(rep.Errs) > 0 {
		return failWith(exitUsage, errSilent)
	}
	return nil
}

// indexCheck reads every row of an index again and looks its molecule up.
func (app *App) indexCheck(path string) error {
	app.Shelves = []string{path}
	room, err := app.room(nil, "")
	if err != nil {
		return err
	}
	rows, structures, lost := 0, 0, 0
	room.Shelf.Each(func(it *shelf.Item) bool {
		rows++
		if it.Molecule != nil {
			structures++
			if !room.Shelf.Has(it.Molecule) {
				lost++
			}
		}
		return true
	})
	err = room.Shelf.Err()
	if err == nil && (lost > 0 || rows != room.Shelf.Len()) {
		err = fmt.Errorf("%s: %d of %d rows cannot be found: make it again with `shelfward shelf import`", path, max(lost, room.Shelf.Len()-rows), room.Shelf.Len())
	}
	if err != nil {
		return failWith(exitUsage, err)
	}
	if app.JSON {
		return printJSON(app.Out, map[string]any{"rows": []any{}, "count": rows, "structures": structures, "doubts": []string{}})
	}
	_, err = fmt.Fprintf(app.Out, "%s: an index of %d rows, %d with a structure; every row can be read and every structure found\n", path, rows, structures)
	return err
}

// readingText says how a row was read.
func readingText(it *shelf.Item) string {
	name := it.Name
	if name == "" {
		name = it.SMILES
	}
	switch {
	case it.Molecule == nil:
		return name + ": no structure is known for this name; the item is kept as a reagent by name only"
	case it.Name == "":
		return fmt.Sprintf("%s read from its %s", name, it.ReadAs)
	}
	return fmt.Sprintf("%s read from its %s: %s", name, it.ReadAs, it.SMILES)
}

func checkJSON(rep *shelf.Report) map[string]any {
	rows := []any{}
	for _, it := range rep.Items() {
		rows = append(rows, map[string]any{"line": it.Line, "name": it.Name, "read_as": it.ReadAs, "smiles": it.SMILES, "text": readingText(it)})
	}
	return map[string]any{"rows": rows, "doubts": []string{}}
}
