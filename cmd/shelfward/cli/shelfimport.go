package cli

import (
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"time"

	"github.com/spf13/cobra"

	"shelfward/planner"
	"shelfward/planner/shelf"
	"shelfward/rules"
)

// importOptions is the command `shelf import`.
type importOptions struct {
	app     *App
	to      string
	skipBad bool
}

func newShelfImportCommand(app *App) *cobra.Command {
	o := &importOptions{app: app}
	cmd := &cobra.Command{
		Use: "import FILE... --to INDEX", Short: "make an index of shelf files of any size",
		Args: func(c *cobra.Command, args []string) error {
			if len(args) == 0 {
				return usageError("expected `%s`, found no file", c.UseLine())
			}
			return nil
		},
		Long: "Reads tables (.csv, .tsv), SMILES one a line with a name behind (.smi) and SD files (.sdf), some or millions of rows,\n" +
			"and writes one index file that opens at once and is given as --shelf INDEX wherever a shelf file may stand. Data\n" +
			"fields of an SD file count under the names of the columns (price, pack, hazards ...).\n" +
			"A row with a mistake is reported with its line; then nothing is written, unless --skip-bad leaves such rows out.\n" +
			"The index holds copies of the rows: change the files, then import them again.\n" + exitHelp,
		Example: "  shelfward shelf import testdata/demo/lure-shelf.csv --to lure.index\n  shelfward shelf import suppliers.sdf own.csv --to all.index --skip-bad",
		RunE:    func(c *cobra.Command, args []string) error { return o.run(c.Context(), args) },
	}
	cmd.Flags().StringVar(&o.to, "to", "", "the index file to write (needed)")
	cmd.Flags().BoolVar(&o.skipBad, "skip-bad", false, "leave rows with mistakes out and go on")
	return cmd
}

func (o *importOptions) run(ctx context.Context, files []string) error {
	if o.to == "" {
		return usageError("shelf import: --to INDEX is missing: the file to write")
	}
	for _, file := range files {
		if shelf.IsIndex(file) {
			return usageError("%s: this is an index already; import the files it was made of", file)
		}
		if filepath.Clean(file) == filepath.Clean(o.to) {
			return usageError("--to %s: the index would take the place of a file that is read", o.to)
		}
	}
	fsys, err := o.app.ruleFiles()
	if err != nil {
		return err
	}
	rep, err := planner.ImportShelf(ctx, fsys, files, o.to, shelf.ImportOptions{Workers: o.app.workers(), SkipBad: o.skipBad, Progress: o.progress(),
		Bad: func(e *rules.Error) { fmt.Fprintln(o.app.ErrOut, "shelfward: "+e.Error()) }})
	switch {
	case errors.Is(err, context.Canceled):
		return errors.New("interrupted: no index was written")
	case err != nil:
		return failWith(exitUsage, err)
	}
	if o.app.JSON {
		return printJSON(o.app.Out, map[string]any{"index": o.to, "rows": rep.Rows, "structures": rep.Structures, "left_out": rep.Bad, "doubts": importDoubts(rep)})
	}
	for _, d := range importDoubts(rep) {
		fmt.Fprintln(o.app.Out, d)
	}
	_, err = fmt.Fprintf(o.app.Out, "%s: %d rows, %d with a structure\n", o.to, rep.Rows, rep.Structures)
	return err
}

// importDoubts says what the index does not hold.
func importDoubts(rep shelf.ImportReport) []string {
	if rep.Bad == 0 {
		return []string{}
	}
	return []string{fmt.Sprintf("%d rows with mistakes were left out", rep.Bad)}
}

// progress tells how far the import is, every two seconds.
func (o *importOptions) progress() func(int) {
	if o.app.Quiet {
		return nil
	}
	began := time.Now()
	last := began
	return func(rows int) {
		if now := time.Now(); now.Sub(last) > 2*time.Second {
			last = now
			fmt.Fprintf(o.app.ErrOut, "importing: %d rows, %.0f a second\n", rows, float64(rows)/now.Sub(began).Seconds())
		}
	}
}
