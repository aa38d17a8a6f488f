package cli

import (
	"errors"
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"shelfward/molecule/restricted"
	"shelfward/molecule/smiles"
	"shelfward/reactions"
	"shelfward/rules"
)

func newRulesCommand(app *App) *cobra.Command {
	cmd := &cobra.Command{
		Use:   "rules",
		Short: "The transforms: list, show, check, new",
		Long:  "The textbook transforms that the planner searches with.\n" + exitHelp,
	}
	cmd.AddCommand(&cobra.Command{
		Use: "list [WORD]", Short: "list the transforms, or those whose id, name or family holds a word", Args: cobra.MaximumNArgs(1),
		Example: "  shelfward rules list\n  shelfward rules list ozon",
		RunE:    func(_ *cobra.Command, args []string) error { return app.rulesList(strings.Join(args, " ")) },
	}, &cobra.Command{
		Use: "show ID", Short: "show one transform with its conditions", Args: cobra.ExactArgs(1),
		Example: "  shelfward rules show fischer-esterification",
		RunE:    func(_ *cobra.Command, args []string) error { return app.rulesShow(args[0]) },
	}, &cobra.Command{
		Use: "check [ID]...", Short: "check the rules and run their examples in both directions",
		Example: "  shelfward rules check\n  shelfward rules check --rules my-rules",
		RunE:    func(c *cobra.Command, args []string) error { return app.rulesCheck(c, args) },
	})
	return cmd
}

// book loads the rules; every mistake is printed on its own line.
func (app *App) book() (*reactions.Book, error) {
	fsys, err := app.ruleFiles()
	if err != nil {
		return nil, err
	}
	b, err := reactions.Load(fsys)
	if err != nil {
		return b, failWith(exitUsage, err)
	}
	return b, nil
}

func (app *App) rulesList(word string) error {
	b, err := app.book()
	if err != nil {
		return err
	}
	n := 0
	for _, t := range b.Transforms {
		if !strings.Contains(strings.ToLower(t.ID+" "+t.Name+" "+t.Family), strings.ToLower(word)) {
			continue
		}
		n++
		fmt.Fprintf(app.Out, "%-44s  %-34s  %s\n", t.ID, t.Family, t.Name)
	}
	if n == 0 {
		return failWith(exitNothing, fmt.Errorf("no transform holds %q", word))
	}
	fmt.Fprintf(app.Out, "%d transforms\n", n)
	return nil
}

func (app *App) rulesShow(id string) error {
	b, err := app.book()
	if err != nil {
		return err
	}
	t := b.Transform(id)
	if t == nil {
		ids := make([]string, len(b.Transforms))
		for i, x := range b.Transforms {
			ids[i] = x.ID
		}
		return usageError("no transform %q; near: %s", id, strings.Join(rules.NearWords(id, ids, 3), ", "))
	}
	reactions.Describe(app.Out, t)
	return nil
}

func (app *App) rulesCheck(c *cobra.Command, ids []string) error {
	fsys, err := app.ruleFiles()
	if err != nil {
		return err
	}
	b, loadErr := reactions.Load(fsys)
	var list rules.ErrorList
	if errors.As(loadErr, &list) {
		for _, e := range list {
			fmt.Fprintln(app.Out, e)
		}
	} else if loadErr != nil {
		return failWith(exitUsage, loadErr)
	}
	screen, err := restricted.Load(fsys)
	if err != nil {
		return failWith(exitUsage, err)
	}
	faults, checked := 0, 0
	for _, t := range b.Transforms {
		if len(ids) > 0 && !contains(ids, t.ID) {
			continue
		}
		if err := c.Context().Err(); err != nil {
			return err
		}
		checked++
		found := append(b.Check(t), refusedExamples(screen, t)...)
		for _, f := range found {
			faults++
			fmt.Fprintln(app.Out, f)
		}
	}
	fmt.Fprintf(app.Out, "%d transforms checked, %d faults, %d load errors\n", checked, faults, len(list))
	if faults+len(list) > 0 {
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

func contains(list []string, x string) bool {
	for _, y := range list {
		if x == y {
			return true
		}
	}
	return false
}
