package cli

import (
	"context"
	"fmt"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"shelfward/molecule/identify"
	"shelfward/molecule/smiles"
	"shelfward/planner/compare"
	"shelfward/planner/route"
)

type runOptions struct {
	app    *App
	flags  planFlags
	out    string
	accept string
}

func newRunCommand(app *App) *cobra.Command {
	o := &runOptions{app: app}
	cmd := &cobra.Command{
		Use: "run CASE.yaml", Short: "the whole job: evidence, target, ranked routes, route sheet", Args: cobra.ExactArgs(1),
		Long: "Identifies the target from the evidence of a case file, plans and compares routes and prints the sheet of the first.\n" +
			"Where the evidence does not settle the target it prints candidates, the next measurement and outline routes for the\n" +
			"first two, and no amounts. --out writes the parts as files.\n" + exitHelp,
		Example: "  shelfward run testdata/demo/lure-4.yaml",
		RunE:    func(c *cobra.Command, args []string) error { return o.run(c.Context(), args[0]) },
	}
	o.flags.bind(cmd)
	cmd.Flags().StringVar(&o.out, "out", "", "folder for plan.json, sheet.html and sheet.txt")
	cmd.Flags().StringVar(&o.accept, "accept", "", "reason for working at full scale in spite of doubts; it is printed")
	return cmd
}

func (o *runOptions) run(ctx context.Context, path string) error {
	j, err := o.app.readCase(path)
	if err != nil {
		return err
	}
	if err := o.app.settle(ctx, j, path, identify.Options{Count: 10}); err != nil {
		return err
	}
	if j.target == nil {
		return o.unsettled(ctx, j, path)
	}
	opt, err := o.app.options(j, &o.flags)
	if err != nil {
		return err
	}
	if !o.app.JSON && j.found != nil {
		printIdentified(o.app.Out, j, path)
		fmt.Fprintln(o.app.Out)
	}
	p, err := o.app.plan(ctx, j, opt)
	if err != nil {
		return err
	}
	if o.app.JSON {
		return o.asJSON(j, p, opt.MakeMol)
	}
	return o.asText(j, p, opt.MakeMol)
}

func (o *runOptions) asText(j *job, p *route.Plan, makeMol float64) error {
	o.app.header(j)
	if len(p.Routes) == 0 {
		if err := p.WriteText(o.app.Out); err != nil {
			return err
		}
		return nothingFound(p)
	}
	if err := compare.FromPlan(p).WriteText(o.app.Out); err != nil {
		return err
	}
	fmt.Fprintln(o.app.Out)
	if err := p.WriteText(o.app.Out); err != nil {
		return err
	}
	fmt.Fprintln(o.app.Out)
	if makeMol == 0 {
		fmt.Fprintln(o.app.Out, "No amount was asked for (make: in the case file, or --make): no sheet.")
		return o.files(j, p, 0)
	}
	if len(p.Routes[0].Steps) > 0 {
		s, err := o.app.makeSheet(j, p, &p.Routes[0], makeMol, o.accept)
		if err != nil {
			return failWith(exitUsage, err)
		}
		if err := s.Text(o.app.Out); err != nil {
			return err
		}
	}
	return o.files(j, p, makeMol)
}

// files writes the parts into the folder of --out.
func (o *runOptions) files(j *job, p *route.Plan, makeMol float64) error {
	if o.out == "" {
		return nil
	}
	if err := os.MkdirAll(o.out, 0o755); err != nil {
		return usageError("--out: %v", plainReason(err))
	}
	if err := p.Save(filepath.Join(o.out, "plan.json")); err != nil {
		return usageError("--out: %v", err)
	}
	if makeMol == 0 || len(p.Routes[0].Steps) == 0 {
		return nil
	}
	s, err := o.app.makeSheet(j, p, &p.Routes[0], makeMol, o.accept)
	if err != nil {
		return failWith(exitUsage, err)
	}
	if err := writeWhole(filepath.Join(o.out, "sheet.txt"), func(f *os.File) error { return s.Text(f) }); err != nil {
		return err
	}
	return writeWhole(filepath.Join(o.out, "sheet.html"), func(f *os.File) error { return s.HTML(f) })
}

func (o *runOptions) asJSON(j *job, p *route.Plan, makeMol float64) error {
	all := map[string]any{"identify": j.found, "plan": p, "doubts": append([]string{}, p.Doubts...)}
	if makeMol > 0 && len(p.Routes) > 0 && len(p.Routes[0].Steps) > 0 {
		s, err := o.app.makeSheet(j, p, &p.Routes[0], makeMol, o.accept)
		if err != nil {
			return failWith(exitUsage, err)
		}
		all["sheet"] = sheetJSON(s)
	}
	if err := o.files(j, p, makeMol); err != nil {
		return err
	}
	if err := printJSON(o.app.Out, all); err != nil {
		return err
	}
	return nothingFound(p)
}

// unsettled prints candidates and outline routes of the first two, no amounts.
func (o *runOptions) unsettled(ctx context.Context, j *job, path string) error {
	if o.app.JSON {
		return printJSON(o.app.Out, map[string]any{"identify": j.found, "plan": nil,
			"doubts": append(append([]string{}, j.found.Doubts...), "the evidence does not settle the target: no amounts")})
	}
	printIdentified(o.app.Out, j, path)
	if len(j.found.Candidates) == 0 {
		return failWith(exitNothing, errSilent)
	}
	fmt.Fprintln(o.app.Out, "\nThe target is not settled: outline routes for the first two candidates, no amounts.")
	for i, c := range j.found.Candidates {
		if i == 2 {
			break
		}
		if err := o.outline(ctx, j, c.SMILES); err != nil {
			return err
		}
	}
	return nil
}

func (o *runOptions) outline(ctx context.Context, j *job, text string) error {
	m, err := smiles.Read(text)
	if err != nil {
		return err
	}
	one := *j
	one.target, one.name, one.readAs = m, j.room.Name(m), "a candidate"
	opt, err := o.app.options(&one, &o.flags)
	if err != nil {
		return err
	}
	opt.MakeMol, opt.Count = 0, 2
	p, err := o.app.plan(ctx, &one, opt)
	if err != nil {
		return err
	}
	fmt.Fprintln(o.app.Out, "\n"+one.echo())
	for _, r := range p.Routes {
		fmt.Fprintf(o.app.Out, "  %s:", r.Code)
		for _, s := range r.Steps {
			fmt.Fprintf(o.app.Out, " %d %s;", s.Number, s.Name)
		}
		fmt.Fprintln(o.app.Out)
	}
	if len(p.Routes) == 0 {
		fmt.Fprintln(o.app.Out, "  no route was found")
	}
	return nil
}
