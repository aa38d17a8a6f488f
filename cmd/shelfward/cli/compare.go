package cli

import (
	"context"
	"fmt"
	"os"

	"github.com/spf13/cobra"

	"shelfward/planner/compare"
)

type compareOptions struct {
	app      *App
	flags    planFlags
	eachFrom []string
	html     string
}

func newCompareCommand(app *App) *cobra.Command {
	o := &compareOptions{app: app}
	cmd := &cobra.Command{
		Use: "compare TARGET", Short: "the routes, or the first from each start, side by side", Args: exactly(1),
		Long:    "TARGET is as for routes, or a plan file written by `routes --out`.\n" + exitHelp,
		Example: "  shelfward compare testdata/demo/lure-4.yaml\n  shelfward compare 'CCCC(C)C(=O)CC' --each-from propanal --each-from 'ethyl propanoate'\n  shelfward compare testdata/demo/lure-4.yaml --html routes.html",
		RunE:    func(c *cobra.Command, args []string) error { return o.run(c.Context(), args[0]) },
	}
	o.flags.bind(cmd)
	cmd.Flags().StringArrayVar(&o.eachFrom, "each-from", nil, "compare the first route from each of these starts (repeatable)")
	cmd.Flags().StringVar(&o.html, "html", "", "write the comparison with a plot as an HTML page to this file")
	return cmd
}

func (o *compareOptions) run(ctx context.Context, text string) error {
	if err := o.flags.check(); err != nil {
		return err
	}
	j, err := o.app.openFor(ctx, text, func(doubts []string) any { return compare.FromPlan(emptyPlan(doubts)) })
	if err != nil {
		return err
	}
	table, err := o.table(ctx, j)
	if err != nil {
		return err
	}
	if o.html != "" && len(table.Rows) > 0 {
		err := writeWhole(o.html, func(f *os.File) error { return table.HTML(f, o.app.headerLines(j), j.room.Hazards.ShortCaution()) })
		if err != nil {
			return err
		}
	}
	if o.app.JSON {
		if err := printJSON(o.app.Out, table); err != nil {
			return err
		}
	} else {
		o.app.header(j)
		if err := table.WriteText(o.app.Out); err != nil {
			return err
		}
		fmt.Fprintln(o.app.Out, "\n"+j.room.Hazards.ShortCaution())
	}
	if len(table.Rows) == 0 {
		return failWith(exitNothing, errSilent)
	}
	return nil
}

func (o *compareOptions) table(ctx context.Context, j *job) (*compare.Table, error) {
	if j.plan != nil {
		if err := o.app.screen(j); err != nil {
			return nil, err
		}
		return compare.FromPlan(j.plan), nil
	}
	opt, err := o.app.options(j, &o.flags)
	if err != nil {
		return nil, err
	}
	if len(o.eachFrom) == 0 {
		p, err := o.app.plan(ctx, j, opt)
		if err != nil {
			return nil, err
		}
		return compare.FromPlan(p), nil
	}
	starts, err := j.resolveAll("--each-from", o.eachFrom)
	if err != nil {
		return nil, err
	}
	if err := o.app.screen(j); err != nil {
		return nil, err
	}
	t, _, err := compare.EachFrom(ctx, j.room.World(), j.target, starts, opt)
	return t, failWith(exitUsage, err)
}
