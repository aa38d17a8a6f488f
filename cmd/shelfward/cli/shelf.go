package cli

import (
	"fmt"
	"os"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"shelfward/planner/shelf"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
)

func newShelfCommand(app *App) *cobra.Command {
	cmd := &cobra.Command{Use: "shelf", Short: "what is on the shelf: list, find, check", Long: "The shelf: the built-in example, or the files given with --shelf.\n" + exitHelp}
	cmd.AddCommand(&cobra.Command{
		Use: "list", Short: "list the shelf", Args: cobra.NoArgs, Example: "  shelfward shelf list\n  shelfward shelf list --shelf testdata/demo/lure-shelf.csv",
		RunE: func(*cobra.Command, []string) error { return app.shelfList("") },
	}, &cobra.Command{
		Use: "find WORD", Short: "find items by name, synonym, CAS number or structure", Args: cobra.ExactArgs(1), Example: "  shelfward shelf find propanal",
		RunE: func(_ *cobra.Command, args []string) error { return app.shelfList(args[0]) },
	}, &cobra.Command{
		Use: "check FILE", Short: "check a shelf file row by row", Args: cobra.ExactArgs(1), Example: "  shelfward shelf check testdata/demo/lure-shelf.csv",
		RunE: func(_ *cobra.Command, args []string) error { return app.shelfCheck(args[0]) },
	})
	return cmd
}

func (app *App) shelfList(word string) error {
	room, err := app.openRoom(nil, "")
	if err != nil {
		return err
	}
	items := room.Shelf.Items()
	if word != "" {
		items = findItems(room.Shelf, word)
		if len(items) == 0 {
			return failWith(exitNothing, fmt.Errorf("nothing on the shelf is called %q", word))
		}
	}
	if app.JSON {
		return printJSON(app.Out, shelfJSON(items))
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
	var out []*shelf.Item
	for _, it := range s.Items() {
		if strings.Contains(strings.ToLower(it.Name+" "+strings.Join(it.Synonyms, " ")), strings.ToLower(word)) {
			out = append(out, it)
		}
	}
	return out
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

func shelfJSON(items []*shelf.Item) map[string]any {
	list := []any{}
	for _, it := range items {
		list = append(list, map[string]any{"name": it.Name, "cas": it.CAS, "smiles": it.SMILES, "amount": it.Amount.String(),
			"strength": strengthText(it), "hazards": append([]string{}, it.Hazards...), "hazards_known": it.HazardsKnown, "location": it.Location})
	}
	return map[string]any{"items": list, "doubts": []string{}}
}

func (app *App) shelfCheck(path string) error {
	if err := checkFile(path); err != nil {
		return err
	}
	fsys, err := app.ruleFiles()
	if err != nil {
		return err
	}
	reagents, err := reagent.Load(fsys)
	if err != nil {
		return failWith(exitUsage, err)
	}
	hazards, err := hazard.Load(fsys, reagents)
	if err != nil {
		return failWith(exitUsage, err)
	}
	rep, err := shelf.ReadFile(path, &shelf.Known{Reagents: reagents, Hazards: hazards})
	if err != nil {
		if os.IsNotExist(err) {
			return usageError("%s: no such file", path)
		}
		return failWith(exitUsage, err)
	}
	for _, row := range rep.Rows {
		if it := row.Item; it != nil {
			fmt.Fprintf(app.Out, "%s:%d: %s read from its %s: %s\n", path, it.Line, it.Name, it.ReadAs, it.SMILES)
		}
	}
	for _, e := range rep.Errs {
		fmt.Fprintln(app.Out, e)
	}
	fmt.Fprintf(app.Out, "%d rows read, %d mistakes\n", len(rep.Items()), len(rep.Errs))
	if len(rep.Errs) > 0 {
		return failWith(exitUsage, errSilent)
	}
	return nil
}
