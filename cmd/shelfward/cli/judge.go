package cli

import (
	"encoding/json"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions"
	"shelfward/reactions/reagent"
)

type judgeOptions struct {
	app  *App
	with []string
}

func newJudgeCommand(app *App) *cobra.Command {
	o := &judgeOptions{app: app}
	cmd := &cobra.Command{
		Use: "judge 'A.B>>C'", Short: "is this one step sound? names the reaction, the expected product, the objections", Args: exactly(1),
		Long: "Judges one step: reaction SMILES, a .rxn file, or '-' for either of them on standard input. --with takes the\n" +
			"conditions as a chemist would write them. The status is 0 whatever the verdict.\n\n" +
			"A file that ends in .txt, .tsv or .rsmi holds a route, one step per line: reaction SMILES, a tab, the conditions\n" +
			"(blank lines and lines that begin with # are passed over; --with adds to every step). Each step is judged; the\n" +
			"route is as doubtful as its weakest step, and a product that no later step takes up is pointed out.\n" + exitHelp,
		Example: "  shelfward judge 'CCCCBr.[C-]#N.[Na+]>>CCCCC#N' --with 'dimethyl sulfoxide'\n" +
			"  shelfward judge 'CCC(=O)OCC.CCCC(C)Br>>CCCC(C)C(=O)CC' --with 'magnesium; diethyl ether'\n" +
			"  shelfward judge route.txt --json",
		RunE: func(c *cobra.Command, args []string) error { return o.run(c, args[0]) },
	}
	cmd.Flags().StringArrayVar(&o.with, "with", nil, "reagents, solvents and conditions, separated by semicolons or comma + space (repeatable)")
	return cmd
}

// judgeJSON is the object of `judge --json`.
type judgeJSON struct {
	Verdict       string          `json:"verdict"`
	Transforms    []transformJSON `json:"transforms"`
	Expected      []expectedJSON  `json:"expected"`
	Objections    []objectionJSON `json:"objections"`
	NotUnderstood []string        `json:"not_understood"`
	Doubts        []string        `json:"doubts"`
}

type transformJSON struct {
	ID   string `json:"id"`
	Name string `json:"name"`
}

type expectedJSON struct {
	SMILES string `json:"smiles"`
	Share  string `json:"share"`
}

type objectionJSON struct {
	Kind   string `json:"kind"`
	Text   string `json:"text"`
	Source string `json:"source,omitempty"`
}

func (o *judgeOptions) run(c *cobra.Command, text string) error {
	if isRouteFile(text) {
		return o.runRoute(c, text)
	}
	reactants, products, err := o.app.reaction(text)
	if err != nil {
		return err
	}
	b, table, err := o.rules(products)
	if err != nil {
		return err
	}
	described := len(o.with) > 0
	j, err := b.Judge(c.Context(), reactants, products, table.ReadList(o.with, nil), described, table)
	if err != nil {
		return err
	}
	if o.app.JSON {
		return printJSON(o.app.Out, judgementJSON(j))
	}
	printJudgement(o.app.Out, reactants, products, j)
	return nil
}

// rules declines restricted products, then loads the transforms and the list of reagents.
func (o *judgeOptions) rules(products []*molecule.Molecule) (*reactions.Book, *reagent.Table, error) {
	fsys, err := o.app.ruleFiles()
	if err != nil {
		return nil, nil, err
	}
	if err := o.app.declineProducts(fsys, products); err != nil {
		return nil, nil, err
	}
	b, err := o.app.book()
	if err != nil {
		return nil, nil, err
	}
	table, err := reagent.Load(fsys)
	return b, table, failWith(exitUsage, err)
}

func printJSON(w io.Writer, v any) error {
	enc := json.NewEncoder(w)
	enc.SetIndent("", "  ")
	enc.SetEscapeHTML(false)
	return enc.Encode(v)
}

func judgementJSON(j reactions.Judgement) judgeJSON {
	out := judgeJSON{Verdict: j.Verdict, Transforms: []transformJSON{}, Expected: []expectedJSON{}, Objections: []objectionJSON{},
		NotUnderstood: append([]string{}, j.NotUnderstood...), Doubts: []string{}}
	for _, t := range j.Transforms {
		out.Transforms = append(out.Transforms, transformJSON{t.ID, t.Name})
	}
	for _, p := range j.Expected {
		out.Expected = append(out.Expected, expectedJSON{smiles.Write(p.Molecule), p.Share.String()})
	}
	for _, ob := range j.Objections {
		out.Objections = append(out.Objections, objectionJSON{string(ob.Kind), ob.Text, ob.Source})
	}
	if j.Racemic {
		out.Doubts = append(out.Doubts, "racemic: the marks of the product are relative only")
	}
	for _, text := range j.NotUnderstood {
		out.Doubts = append(out.Doubts, "not understood: "+text)
	}
	return out
}

func printJudgement(w io.Writer, reactants, products []*molecule.Molecule, j reactions.Judgement) {
	fmt.Fprintf(w, "step: %s >> %s\n", joinSMILES(reactants), joinSMILES(products))
	fmt.Fprintf(w, "verdict: %s\n", j.Verdict)
	for _, text := range j.NotUnderstood {
		fmt.Fprintf(w, "not understood: %s\n", text)
	}
	for _, t := range j.Transforms {
		fmt.Fprintf(w, "reaction: %s (%s)\n", t.Name, t.ID)
	}
	for _, p := range j.Expected {
		fmt.Fprintf(w, "expected: %-5s  %s\n", p.Share, smiles.Write(p.Molecule))
	}
	for _, ob := range j.Objections {
		fmt.Fprintf(w, "objection (%s): %s\n", ob.Kind, ob.Text)
		if ob.Source != "" {
			fmt.Fprintf(w, "  source: %s\n", ob.Source)
		}
	}
	if j.Racemic {
		fmt.Fprintln(w, "racemic: the marks of the product are relative only")
	}
	if j.Verdict == reactions.Sound {
		fmt.Fprintln(w, "No loaded rule objects; not tried.")
	}
}

func joinSMILES(ms []*molecule.Molecule) string {
	var parts []string
	for _, m := range ms {
		parts = append(parts, smiles.Write(m))
	}
	return strings.Join(parts, ".")
}
