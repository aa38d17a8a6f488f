package cli

import (
	"context"
	"fmt"
	"io"
	"strings"
	"text/tabwriter"
	"time"

	"github.com/spf13/cobra"

	"shelfward/molecule/identify"
	"shelfward/molecule/smiles"
)

type identifyOptions struct {
	app    *App
	count  int
	time   time.Duration
	expect string
}

func newIdentifyCommand(app *App) *cobra.Command {
	o := &identifyOptions{app: app}
	cmd := &cobra.Command{
		Use: "identify CASE.yaml", Short: "evidence to formulas, groups and ranked candidate structures", Args: exactly(1),
		Long: "Reads combustion analysis, mass, IR and NMR evidence from a case file. Hard evidence excludes structures and is\n" +
			"listed under 'assumed'; everything else only ranks them.\n" + exitHelp,
		Example: "  shelfward identify testdata/demo/lure-4.yaml\n  shelfward identify testdata/demo/lure-4-thin.yaml --count 5",
		RunE:    func(c *cobra.Command, args []string) error { return o.run(c.Context(), args[0]) },
	}
	cmd.Flags().IntVar(&o.count, "count", 10, "candidates listed")
	cmd.Flags().DurationVar(&o.time, "time", time.Minute, "time limit")
	cmd.Flags().StringVar(&o.expect, "expect", "", "SMILES of a structure: was it built, and at what rank")
	return cmd
}

func (o *identifyOptions) run(ctx context.Context, path string) error {
	if o.count < 1 || o.time <= 0 {
		return usageError("--count %d --time %v: both must be more than zero", o.count, o.time)
	}
	opt := identify.Options{Count: o.count, Time: o.time}
	if o.expect != "" {
		m, err := smiles.Read(o.expect)
		if err != nil {
			return usageError("--expect %s: %v", quoted(o.expect), err)
		}
		opt.Expect = m
	}
	j, err := o.app.readCase(path)
	if err != nil {
		return err
	}
	if j.data == nil {
		return usageError("%s: the key evidence: is missing", path)
	}
	if err := o.app.identify(ctx, j, opt); err != nil {
		return err
	}
	if o.app.JSON {
		if err := printJSON(o.app.Out, j.found); err != nil {
			return err
		}
	} else {
		printIdentified(o.app.Out, j, path)
	}
	if len(j.found.Candidates) == 0 {
		return failWith(exitNothing, errSilent)
	}
	return nil
}

// printIdentified writes doubt first, then formula, groups, assumptions and candidates.
func printIdentified(w io.Writer, j *job, path string) {
	r := j.found
	fmt.Fprintf(w, "case: %s", path)
	if j.caseFile.Sample.Written() {
		fmt.Fprintf(w, " (%s)", j.caseFile.Sample.Value)
	}
	fmt.Fprintln(w)
	for _, d := range r.Doubts {
		fmt.Fprintln(w, "Doubt: "+d)
	}
	fmt.Fprintln(w, settledText(r))
	if r.NextMeasurement != "" {
		fmt.Fprintln(w, "Next measurement: "+r.NextMeasurement)
	}
	if r.Nothing != "" {
		fmt.Fprintln(w, "Nothing found: "+r.Nothing)
	}
	if r.Formula == "" {
		return
	}
	fmt.Fprintf(w, "\nformula: %s, unsaturation %.3g\n", r.Formula, r.Unsaturation)
	printFormulas(w, r)
	printGroups(w, r)
	if len(r.Assumed) > 0 {
		fmt.Fprintln(w, "\nassumed as hard:")
		for _, a := range r.Assumed {
			fmt.Fprintf(w, "  %s: %s\n", a.What, a.Why)
		}
	}
	fmt.Fprintln(w, "\n"+builtText(r))
	printCandidates(w, r)
}

func settledText(r *identify.Result) string {
	switch {
	case len(r.Candidates) == 0:
		return "Not settled: no structure fits."
	case len(r.Candidates) == 1 && r.Settled:
		return "Settled: one structure remains under the assumptions listed."
	case r.Settled:
		return fmt.Sprintf("Settled by margin: the second structure fits clearly worse (by %.1f in log-likelihood); not the only structure.", -r.Candidates[1].Score)
	}
	return "Not settled: several structures fit nearly as well."
}

func builtText(r *identify.Result) string {
	if r.Complete {
		return fmt.Sprintf("All %d structures that fit the hard evidence were built; the spectra only rank them.", r.Generated)
	}
	return fmt.Sprintf("%d structures were built; NOT all that fit the hard evidence: the right one may be missing.", r.Generated)
}

func printFormulas(w io.Writer, r *identify.Result) {
	for i, f := range r.Formulas {
		if i == 5 {
			fmt.Fprintf(w, "  and %d more formulas\n", len(r.Formulas)-5)
			return
		}
		fmt.Fprintf(w, "  %-14s %9.3f g/mol  error %.2f  %s\n", f.Formula, f.MolarMass, f.Error, strings.Join(f.Reasons, "; "))
	}
}

func printGroups(w io.Writer, r *identify.Result) {
	fmt.Fprintln(w, "\ngroups:")
	tw := tabwriter.NewWriter(w, 2, 4, 2, ' ', 0)
	for _, verdict := range []string{"present", "possible", "absent"} {
		var plain []string
		for _, g := range r.Groups {
			if g.Verdict != verdict {
				continue
			}
			if verdict == "present" {
				fmt.Fprintf(tw, "  %s\t%s\t%s\n", g.Verdict, g.Group, strings.Join(g.Because, "; "))
			} else {
				plain = append(plain, g.Group)
			}
		}
		if len(plain) > 0 {
			fmt.Fprintf(tw, "  %s\t%s\n", verdict, strings.Join(plain, ", "))
		}
	}
	tw.Flush()
}

func printCandidates(w io.Writer, r *identify.Result) {
	for _, c := range r.Candidates {
		name := c.Name
		if name != "" {
			name = "  " + name
		}
		fmt.Fprintf(w, "%3d  %-40s  %7.2f%s\n", c.Rank, c.SMILES, c.Score, name)
		if c.Rank > 2 {
			continue
		}
		for _, f := range c.Fits {
			fmt.Fprintln(w, "       fits    "+f)
		}
		for _, f := range c.Misfits {
			fmt.Fprintln(w, "       misfits "+f)
		}
	}
	if e := r.Expected; e != nil {
		fmt.Fprintf(w, "expected structure: generated %v, rank %d\n", e.Generated, e.Rank)
	}
}
