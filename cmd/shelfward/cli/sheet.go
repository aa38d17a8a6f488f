package cli

import (
	"bytes"
	"context"
	"fmt"
	"os"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"shelfward/molecule"
	"shelfward/molecule/spectra"
	"shelfward/planner/route"
	"shelfward/planner/sheet"
)

type sheetOptions struct {
	app    *App
	flags  planFlags
	route  string
	accept string
	html   string
}

func newSheetCommand(app *App) *cobra.Command {
	o := &sheetOptions{app: app}
	cmd := &cobra.Command{
		Use: "sheet TARGET --route CODE --make 5g", Short: "the route sheet for the bench, scaled", Args: exactly(1),
		Long: "TARGET is as for routes, or a plan file written by `routes --out`. A route is named by its code; a number is\n" +
			"understood together with a plan file or the options that made the list.\n" + exitHelp,
		Example: "  shelfward sheet testdata/demo/lure-4.yaml --make 10g\n  shelfward sheet 'CCCC(C)C(=O)CC' --make 5g --html sheet.html",
		RunE:    func(c *cobra.Command, args []string) error { return o.run(c.Context(), args[0]) },
	}
	o.flags.bind(cmd)
	cmd.Flags().StringVar(&o.route, "route", "", "code of the route (default: the first)")
	cmd.Flags().StringVar(&o.accept, "accept", "", "reason for working at full scale in spite of doubts; it is printed")
	cmd.Flags().StringVar(&o.html, "html", "", "write the sheet as an HTML page to this file")
	return cmd
}

func (o *sheetOptions) run(ctx context.Context, text string) error {
	if err := o.flags.check(); err != nil {
		return err
	}
	j, err := o.app.openFor(ctx, text, func(doubts []string) any { return emptySheet(doubts) })
	if err != nil {
		return err
	}
	p, makeMol, err := o.planFor(ctx, j)
	if err != nil {
		return err
	}
	if len(p.Routes) == 0 {
		return o.app.noSheet(j, p)
	}
	r, err := p.Route(o.route)
	if err != nil {
		return failWith(exitUsage, err)
	}
	if len(r.Steps) == 0 {
		return o.app.noSheet(j, p)
	}
	s, err := o.app.makeSheet(j, p, r, makeMol, o.accept)
	if err != nil {
		return failWith(exitUsage, err)
	}
	return o.app.printSheet(j, s, o.html)
}

func (o *sheetOptions) planFor(ctx context.Context, j *job) (*route.Plan, float64, error) {
	opt, err := o.app.options(j, &o.flags)
	if err != nil {
		return nil, 0, err
	}
	if opt.MakeMol == 0 {
		return nil, 0, usageError("--make is missing: say how much, for example --make 5g")
	}
	if j.plan == nil {
		p, err := o.app.plan(ctx, j, opt)
		return p, opt.MakeMol, err
	}
	if err := o.app.screen(j); err != nil {
		return nil, 0, err
	}
	if err := j.plan.Restore(ctx, j.room.World()); err != nil {
		return nil, 0, failWith(exitUsage, err)
	}
	return j.plan, opt.MakeMol, nil
}

// makeSheet writes the sheet of one route. It looks at a handful of molecules and needs no cancelling.
func (app *App) makeSheet(j *job, p *route.Plan, r *route.Route, makeMol float64, accept string) (*sheet.Sheet, error) {
	d := j.room.Desk()
	d.Watch = watchLines
	return sheet.Make(context.Background(), d, p, r, sheet.Options{MakeMol: makeMol, Accept: accept, Evidence: j.evidence, Invented: j.room.Invented,
		Version: Version, Printed: time.Now().Format("2006-01-02 15:04")})
}

func (app *App) printSheet(j *job, s *sheet.Sheet, htmlFile string) error {
	if htmlFile != "" {
		if err := writeWhole(htmlFile, func(f *os.File) error { return s.HTML(f) }); err != nil {
			return err
		}
	}
	if app.JSON {
		return printJSON(app.Out, sheetJSON(s))
	}
	app.header(j)
	return s.Text(app.Out)
}

// sheetJSON leaves out what JSON cannot hold: molecules, and amounts that nobody stated.
func sheetJSON(s *sheet.Sheet) map[string]any {
	var text bytes.Buffer
	_ = s.Text(&text)
	steps := []any{}
	for i := range s.Steps {
		steps = append(steps, stepJSON(&s.Steps[i]))
	}
	return map[string]any{"code": s.Code, "target": map[string]any{"smiles": s.Target.SMILES, "name": s.Target.Name, "formula": s.Target.Formula, "molar_mass": s.Target.MolarMass},
		"make_g": s.MakeG, "asked_g": s.AskedG, "comes_out_g": []float64{s.LowG, s.HighG}, "steps": steps, "stock": stockJSON(s), "doubts": append([]string{}, s.Doubts...),
		"hazards_unknown": append([]string{}, s.Unknown...), "watched": append([]string{}, s.Watched...), "caution": s.Caution, "text": text.String()}
}

func stepJSON(st *sheet.Step) map[string]any {
	charges := []any{}
	for _, c := range st.Charges {
		charges = append(charges, map[string]any{"role": c.Role, "name": c.Name, "cas": c.CAS, "form": c.Form, "from_step": c.FromStep, "equivalents": c.Equiv, "mmol": c.Mmol,
			"mass_g": c.MassG, "volume_ml": c.VolumeML, "hazards": append([]string{}, c.Hazards...), "hazards_known": c.Known, "limiting": c.Limiting})
	}
	operations, holds := []string{}, []any{}
	for _, t := range st.Tasks {
		if t.Hold() {
			holds = append(holds, map[string]any{"ask": t.Text, "otherwise": t.Otherwise})
		} else {
			operations = append(operations, t.Text)
		}
	}
	lists := func(list []string) []string { return append([]string{}, list...) }
	return map[string]any{"number": st.Number, "transform": st.Transform, "name": st.Name, "charges": charges, "operations": operations, "holds": holds,
		"flags": lists(st.Flags), "objections": lists(st.Objections), "origin": st.Origin, "mixture": lists(st.Mixture), "controls": lists(st.Controls), "waste": lists(st.Waste),
		"crude": lists(st.Crude), "watch": lists(st.Watch), "expected_g": []float64{st.ExpectLowG, st.ExpectG, st.ExpectHighG}, "theory_g": st.TheoryG, "sure_factor": st.SureFactor}
}

func stockJSON(s *sheet.Sheet) []any {
	out := []any{}
	for _, l := range s.Stock {
		out = append(out, map[string]any{"name": l.Name, "cas": l.CAS, "form": l.Form, "steps": l.Steps, "mass_g": l.MassG, "volume_ml": l.VolumeML, "sure_g": l.SureG,
			"on_shelf": l.OnShelf, "short": l.Short})
	}
	return out
}

// watchLines lists the bands and signals that vanish and appear in a step, from the same tables that
// identification uses.
func watchLines(from []*molecule.Molecule, to *molecule.Molecule) []string {
	vanish, appear := spectra.Watch(from, to)
	out := []string{}
	line := func(word string, signs []spectra.Sign) {
		var list []string
		for _, s := range signs {
			list = append(list, fmt.Sprintf("%s %s (%s)", s.Method, s.Place, s.What))
		}
		if len(list) > 0 {
			out = append(out, word+": "+strings.Join(list, "; "))
		}
	}
	line("vanishes", vanish)
	line("appears", appear)
	return append(out, "calculated from tables: where to look, not a criterion")
}
