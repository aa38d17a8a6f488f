package cli

import (
	"context"
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"shelfward/planner/route"
)

type mendOptions struct {
	app   *App
	flags planFlags
	route string
	step  int
	have  []string
}

func newMendCommand(app *App) *cobra.Command {
	o := &mendOptions{app: app}
	cmd := &cobra.Command{
		Use: "mend PLAN --route CODE --step N", Short: "what to do when a step of a route fails, and what each way loses", Args: exactly(1),
		Long: "PLAN is a plan file written by `routes --out`, or a TARGET as for routes. First come other conditions for the same\n" +
			"step, then another way to its product, then another way on from what is in hand, then another route from the shelf.\n" +
			"Without --have, what earlier steps made for the failed one is taken as in hand, in the planned amount.\n" + exitHelp,
		Example: "  shelfward routes 'CCCC(C)C(=O)CC' --out plan.json\n  shelfward mend plan.json --step 1 --have 'propanal=6 g'",
		RunE:    func(c *cobra.Command, args []string) error { return o.run(c.Context(), args[0]) },
	}
	o.flags.bind(cmd)
	cmd.Flags().StringVar(&o.route, "route", "", "code of the route (default: the first)")
	cmd.Flags().IntVar(&o.step, "step", 0, "number of the step that failed")
	cmd.Flags().StringArrayVar(&o.have, "have", nil, "what is in hand: 'SMILES=6 g', '0 g' for none left (repeatable)")
	return cmd
}

func (o *mendOptions) run(ctx context.Context, text string) error {
	if err := o.flags.check(); err != nil {
		return err
	}
	if o.step < 1 {
		return usageError("--step is missing: say which step failed, for example --step 2")
	}
	j, err := o.app.openFor(ctx, text, func(doubts []string) any { return emptyMend(doubts) })
	if err != nil {
		return err
	}
	m, err := o.mend(ctx, j)
	if err != nil {
		return err
	}
	if o.app.JSON {
		if err := printJSON(o.app.Out, m); err != nil {
			return err
		}
	} else {
		o.app.header(j)
		if err := m.WriteText(o.app.Out); err != nil {
			return err
		}
		fmt.Fprintln(o.app.Out, "\n"+j.room.Hazards.ShortCaution())
	}
	if len(m.Ways) == 0 {
		return failWith(exitNothing, errSilent)
	}
	return nil
}

func (o *mendOptions) mend(ctx context.Context, j *job) (*route.Mend, error) {
	opt, err := o.app.options(j, &o.flags)
	if err != nil {
		return nil, err
	}
	have, err := o.inHand(j)
	if err != nil {
		return nil, err
	}
	w := j.room.World()
	p := j.plan
	if p == nil {
		if p, err = o.app.plan(ctx, j, opt); err != nil {
			return nil, err
		}
	} else {
		if err := o.app.screen(j); err != nil {
			return nil, err
		}
		if err := p.Restore(ctx, w); err != nil {
			return nil, failWith(exitUsage, err)
		}
	}
	if len(p.Routes) == 0 {
		return nil, o.app.nothing(emptyMend(p.Doubts), "No route was found: no step can fail.")
	}
	r, err := p.Route(o.route)
	if err != nil {
		return nil, failWith(exitUsage, err)
	}
	if opt.MakeMol == 0 && p.MakeAsked {
		opt.MakeMol = p.MakeG / p.Target.MolarMass
	}
	m, err := p.Mend(ctx, w, r, o.step, have, opt)
	return m, failWith(exitUsage, err)
}

// inHand reads --have; nil without one.
func (o *mendOptions) inHand(j *job) ([]route.InHand, error) {
	var out []route.InHand
	for _, text := range o.have {
		i := strings.LastIndex(text, "=")
		if i < 0 {
			return nil, usageError("--have: %s: a substance and an amount were expected, such as 'CCCC(C)C(O)CC=6 g'", quoted(text))
		}
		m, err := j.resolve(strings.TrimSpace(text[:i]))
		if err != nil {
			return nil, usageError("--have: %v", err)
		}
		h := route.InHand{Molecule: m}
		if amount := strings.TrimSpace(text[i+1:]); !none(amount) {
			if h.Mol, err = molOf(amount, m); err != nil {
				return nil, usageError("--have: %v", err)
			}
		}
		if v := j.room.Restricted.Intermediate(m); v.Declined() && len(j.room.Shelf.Find(m)) == 0 {
			return nil, o.app.declined(v)
		}
		out = append(out, h)
	}
	return out, nil
}

// none says whether an amount says that nothing is left.
func none(amount string) bool {
	return amount == "0" || amount == "0 g" || amount == "0g" || amount == "0 mol"
}

// emptyMend is the object of a search that had no route to mend.
func emptyMend(doubts []string) *route.Mend {
	return &route.Mend{InHand: []route.Held{}, Ways: []route.Way{}, None: []string{}, Doubts: append([]string{}, doubts...)}
}
