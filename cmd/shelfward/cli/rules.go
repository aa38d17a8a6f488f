package cli

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"shelfward/molecule/restricted"
	"shelfward/molecule/smiles"
	"shelfward/reactions"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

func newRulesCommand(app *App) *cobra.Command {
	cmd := &cobra.Command{
		Use: "rules", Short: "the transforms: list, show, check, new", Args: cobra.ArbitraryArgs, RunE: subcommandOnly,
		Long:    "The textbook transforms that the planner searches with.\n" + exitHelp,
		Example: "  shelfward rules list ozon\n  shelfward rules check --rules my-rules",
	}
	cmd.AddCommand(&cobra.Command{
		Use: "list [WORD]", Short: "list the transforms, or those whose id, name or family holds a word", Args: cobra.ArbitraryArgs,
		Long:    "Lists id, family and name of every transform loaded.\n" + exitHelp,
		Example: "  shelfward rules list\n  shelfward rules list ozon",
		RunE:    func(_ *cobra.Command, args []string) error { return app.rulesList(strings.Join(args, " ")) },
	}, &cobra.Command{
		Use: "show ID", Short: "show one transform with its conditions, examples and sources", Args: exactly(1),
		Long:    "Shows the parts, the condition sets, the examples, the sources and the file of a transform.\n" + exitHelp,
		Example: "  shelfward rules show fischer-esterification",
		RunE:    func(_ *cobra.Command, args []string) error { return app.rulesShow(args[0]) },
	}, &cobra.Command{
		Use: "check [ID|FOLDER]...", Short: "check the rules and run their examples in both directions",
		Long: "Prints one line for each mistake: file, line, column, transform and what was expected. A FOLDER counts as one given\n" +
			"with --rules; with a folder and without an ID only the transforms of the folders are run.\n" + exitHelp,
		Example: "  shelfward rules check\n  shelfward rules check my-rules\n  shelfward rules check my-silylation --rules my-rules",
		RunE:    func(c *cobra.Command, args []string) error { return app.rulesCheck(c.Context(), args) },
	}, newRulesNewCommand(app))
	return cmd
}

// book loads the rules; every mistake is printed on its own line.
func (app *App) book() (*reactions.Book, error) {
	fsys, err := app.ruleFiles()
	if err != nil {
		return nil, err
	}
	b, err := app.loadBook(fsys)
	if err != nil {
		return b, failWith(exitUsage, err)
	}
	return b, nil
}

// rulesJSON is the object of rules list and show --json.
type rulesJSON struct {
	Transforms []ruleJSON `json:"transforms"`
	Doubts     []string   `json:"doubts"`
}

type ruleJSON struct {
	ID     string `json:"id"`
	Name   string `json:"name"`
	Family string `json:"family"`
	File   string `json:"file"`
	Text   string `json:"text,omitempty"` // show only
}

func (app *App) rulesList(word string) error {
	b, err := app.book()
	if err != nil {
		return err
	}
	object := rulesJSON{[]ruleJSON{}, []string{}}
	for _, t := range b.Transforms {
		if strings.Contains(strings.ToLower(t.ID+" "+t.Name+" "+t.Family), strings.ToLower(word)) {
			object.Transforms = append(object.Transforms, ruleJSON{ID: t.ID, Name: t.Name, Family: t.Family, File: t.File})
		}
	}
	if len(object.Transforms) == 0 {
		reason := fmt.Sprintf("no transform holds %q", word)
		object.Doubts = append(object.Doubts, reason)
		return app.nothing(object, reason)
	}
	if app.JSON {
		return printJSON(app.Out, object)
	}
	for _, t := range object.Transforms {
		fmt.Fprintf(app.Out, "%-44s  %-34s  %s\n", t.ID, t.Family, t.Name)
	}
	fmt.Fprintf(app.Out, "%d transforms\n", len(object.Transforms))
	return nil
}

func (app *App) rulesShow(id string) error {
	b, err := app.book()
	if err != nil {
		return err
	}
	t := b.Transform(id)
	if t == nil {
		return usageError("no transform %q%s", id, nearIDs(b, id))
	}
	if !app.JSON {
		reactions.Describe(app.Out, t)
		return nil
	}
	var text strings.Builder
	reactions.Describe(&text, t)
	return printJSON(app.Out, rulesJSON{[]ruleJSON{{t.ID, t.Name, t.Family, t.File, text.String()}}, []string{}})
}

// nearIDs is the tail of a message about an unknown id.
func nearIDs(b *reactions.Book, id string) string {
	ids := make([]string, len(b.Transforms))
	for i, x := range b.Transforms {
		ids[i] = x.ID
	}
	near := rules.NearWords(id, ids, 3)
	if len(near) == 0 {
		return "; `shelfward rules list` names them all"
	}
	return "; near: " + strings.Join(near, ", ")
}

func (app *App) rulesCheck(ctx context.Context, args []string) error {
	ids := app.takeFolders(args)
	fsys, err := app.ruleFiles()
	if err != nil {
		return err
	}
	b, loadErr := app.loadBook(fsys)
	var list rules.ErrorList
	if loadErr != nil && !errors.As(loadErr, &list) {
		return failWith(exitUsage, loadErr)
	}
	blanks, err := app.blanks()
	if err != nil {
		return err
	}
	for _, id := range ids {
		if b.Transform(id) == nil && len(list)+len(blanks) == 0 {
			return usageError("no transform %q%s", id, nearIDs(b, id))
		}
	}
	screen, err := restricted.Load(fsys)
	if err != nil {
		return failWith(exitUsage, err)
	}
	table, err := reagent.Load(fsys)
	if err != nil {
		return failWith(exitUsage, err)
	}
	lines := checkLines(list, blanks)
	checked, read := 0, 0
	for _, t := range b.Transforms {
		if !app.wantsCheck(t, ids) {
			continue
		}
		if err := ctx.Err(); err != nil {
			return err
		}
		checked++
		if t.HasReadSource() {
			read++
		}
		for _, f := range slices.Concat(t.CheckNames(table), b.Check(t), refusedExamples(screen, t)) {
			lines = append(lines, f.String())
		}
	}
	return app.printCheck(checked, read, lines)
}

// wantsCheck picks the transforms to run: those named, else those of the user's folders, else all.
func (app *App) wantsCheck(t *reactions.Transform, ids []string) bool {
	if len(ids) > 0 {
		return slices.Contains(ids, t.ID)
	}
	return len(app.RuleDirs) == 0 || !strings.HasPrefix(t.File, "rules/"+rules.TransformFolder+"/")
}

// printCheck writes the mistakes: on standard output, but with --json, which prints no object beside
// status 2, as messages.
func (app *App) printCheck(checked, read int, mistakes []string) error {
	if app.JSON && len(mistakes) == 0 {
		return printJSON(app.Out, map[string]any{"checked": checked, "read_source": read, "mistakes": []string{}, "doubts": []string{}})
	}
	w := app.Out
	if app.JSON {
		w = app.ErrOut
	}
	for _, line := range mistakes {
		fmt.Fprintln(w, line)
	}
	fmt.Fprintf(w, "%d of %d transforms have an example whose source was read\n", read, checked)
	fmt.Fprintf(w, "%d transforms checked, %d mistakes\n", checked, len(mistakes))
	if len(mistakes) > 0 {
		return failWith(exitUsage, errSilent)
	}
	return nil
}

// refusedExamples finds examples that make what this program does not plan: such a rule is refused.
func refusedExamples(screen *restricted.Screen, t *reactions.Transform) []reactions.Fault {
	var faults []reactions.Fault
	for _, ex := range t.Examples {
		m, err := smiles.Read(ex.To)
		if err != nil {
			continue
		}
		if v := screen.Intermediate(m); v.Declined() {
			faults = append(faults, reactions.Fault{Place: ex.File, Transform: t.ID, Text: "refused: the example makes a compound of the class " + v.Class})
		}
	}
	return faults
}
