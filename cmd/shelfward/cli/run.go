package cli

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

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
		Use: "run CASE.yaml", Short: "the whole job: evidence, target, ranked routes, route sheet", Args: exactly(1),
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
	if err := o.flags.check(); err != nil {
		return err
	}
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
	p, err := o.app.plan(ctx, j, opt) // a declined target ends here, before anything is printed
	if err != nil {
		return err
	}
	if !o.app.JSON && j.found != nil {
		printIdentified(o.app.Out, j, path)
		fmt.Fprintln(o.app.Out)
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
		return usageError("--out %s: cannot make this folder: %v", o.out, plainReason(err))
	}
	if err := p.Save(filepath.Join(o.out, "plan.json")); err != nil {
		return usageError("--out %s: cannot write: %v", o.out, plainReason(err))
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
	outlines := []outlineJSON{}
	for i := 0; i < len(j.found.Candidates) && i < 2; i++ {
		one, err := o.outline(ctx, j, j.found.Candidates[i].SMILES)
		if err != nil {
			return err
		}
		outlines = append(outlines, one)
	}
	if o.app.JSON {
		doubts := append([]string{"the evidence does not settle the target: no amounts"}, j.found.Doubts...)
		if err := printJSON(o.app.Out, map[string]any{"identify": j.found, "plan": nil, "outlines": outlines, "doubts": doubts}); err != nil {
			return err
		}
	} else {
		printIdentified(o.app.Out, j, path)
		printOutlines(o.app.Out, outlines)
	}
	if len(j.found.Candidates) == 0 {
		return failWith(exitNothing, errSilent)
	}
	return nil
}

// outlineJSON holds the routes to one candidate, without amounts.
type outlineJSON struct {
	Target string             `json:"target"`
	Echo   string             `json:"-"`
	Note   string             `json:"note"` // why there is no route; empty otherwise
	Routes []outlineRouteJSON `json:"routes"`
}

type outlineRouteJSON struct {
	Code  string   `json:"code"`
	Steps []string `json:"steps"`
}

func (o *runOptions) outline(ctx context.Context, j *job, text string) (outlineJSON, error) {
	out := outlineJSON{Target: text, Routes: []outlineRouteJSON{}}
	m, err := smiles.Read(text)
	if err != nil {
		return out, err
	}
	one := *j
	one.target, one.name, one.readAs = m, j.room.Name(m), "a candidate"
	out.Echo = one.echo()
	if v := j.room.Restricted.Target(m); v.Declined() {
		out.Note = v.Text
		return out, nil
	}
	opt, err := o.app.options(&one, &o.flags)
	if err != nil {
		return out, err
	}
	opt.MakeMol, opt.Count = 0, 2
	p, err := route.Make(ctx, one.room.World(), m, opt)
	if err != nil {
		return out, failWith(exitUsage, err)
	}
	for _, r := range p.Routes {
		line := outlineRouteJSON{Code: r.Code, Steps: []string{}}
		for _, s := range r.Steps {
			line.Steps = append(line.Steps, s.Name)
		}
		out.Routes = append(out.Routes, line)
	}
	if len(p.Routes) == 0 {
		out.Note = strings.Join(append([]string{"no route was found"}, p.Doubts...), ": ")
	}
	return out, nil
}

func printOutlines(w io.Writer, outlines []outlineJSON) {
	if len(outlines) == 0 {
		return
	}
	fmt.Fprintln(w, "\nThe target is not settled: outline routes for the first two candidates, no amounts.")
	for _, one := range outlines {
		fmt.Fprintln(w, "\n"+one.Echo)
		for _, r := range one.Routes {
			if len(r.Steps) == 0 {
				fmt.Fprintf(w, "  %s: on the shelf already\n", r.Code)
				continue
			}
			fmt.Fprintf(w, "  %s: %s\n", r.Code, strings.Join(r.Steps, ", then "))
		}
		if one.Note != "" {
			fmt.Fprintln(w, "  "+one.Note)
		}
	}
}
