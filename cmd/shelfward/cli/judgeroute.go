package cli

import (
	"bytes"
	"fmt"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"shelfward/molecule"
	"shelfward/reactions"
)

// stepLine is one step of a route file: a line 'A.B>>C', a tab, the conditions.
type stepLine struct {
	line                int
	text, with          string
	reactants, products []*molecule.Molecule
}

// isRouteFile says that a name is that of a file with one step per line.
func isRouteFile(text string) bool {
	return slices.Contains([]string{".txt", ".tsv", ".rsmi"}, strings.ToLower(filepath.Ext(text)))
}

// routeLines reads a file of steps: blank lines and lines that begin with # are passed over.
func (app *App) routeLines(path string) ([]stepLine, error) {
	in, closeIn, err := app.open(path)
	if err != nil {
		return nil, err
	}
	defer closeIn()
	data, err := io.ReadAll(io.LimitReader(in, maxReactionBytes+1))
	switch {
	case err != nil:
		return nil, usageError("%s: cannot read: %v", path, plainReason(err))
	case len(data) > maxReactionBytes:
		return nil, usageError("%s: longer than %d bytes", path, maxReactionBytes)
	}
	var steps []stepLine
	for n, line := range strings.Split(string(bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))), "\n") {
		if line = strings.TrimSpace(line); line == "" || line[0] == '#' {
			continue
		}
		text, with, _ := strings.Cut(line, "\t")
		s := stepLine{line: n + 1, text: strings.TrimSpace(text), with: strings.TrimSpace(with)}
		if s.reactants, s.products, err = readReaction(s.text); err != nil {
			return nil, usageError("%s line %d: %v", path, n+1, err)
		}
		steps = append(steps, s)
	}
	if len(steps) == 0 {
		return nil, usageError("%s: steps were expected, one per line: A.B>>C, a tab, the conditions", path)
	}
	return steps, nil
}

// routeJSON is the object of `judge FILE --json`: the judgement of the weakest step, then every step.
type routeJudgementJSON struct {
	judgeJSON
	Weakest int             `json:"weakest"`
	Steps   []stepJudgeJSON `json:"steps"`
}

type stepJudgeJSON struct {
	Number   int    `json:"number"`
	Line     int    `json:"line"`
	Reaction string `json:"reaction"`
	judgeJSON
}

// runRoute judges every step of a file. The route is as doubtful as its weakest step.
func (o *judgeOptions) runRoute(c *cobra.Command, path string) error {
	steps, err := o.app.routeLines(path)
	if err != nil {
		return err
	}
	var products []*molecule.Molecule
	for _, s := range steps {
		products = append(products, s.products...)
	}
	b, table, err := o.rules(products)
	if err != nil {
		return err
	}
	list := make([]reactions.Judgement, len(steps))
	for i, s := range steps {
		with := o.with
		if s.with != "" {
			with = append(slices.Clone(o.with), s.with)
		}
		if list[i], err = b.Judge(c.Context(), s.reactants, s.products, table.ReadList(with, nil), len(with) > 0, table); err != nil {
			return err
		}
	}
	loose := looseEnds(steps)
	if o.app.JSON {
		return printJSON(o.app.Out, routeJudgement(steps, list, loose))
	}
	printRouteJudgement(o.app.Out, steps, list, loose)
	return nil
}

// severity orders the verdicts; what nothing explains counts as no better than doubtful.
var severity = map[string]int{reactions.Sound: 0, reactions.Doubtful: 1, reactions.Unknown: 2, reactions.Unsound: 3}

// weakest is the index of the first step with the gravest verdict.
func weakest(list []reactions.Judgement) int {
	worst := 0
	for i, j := range list {
		if severity[j.Verdict] > severity[list[worst].Verdict] {
			worst = i
		}
	}
	return worst
}

// looseEnds says in words which products no later step takes up.
func looseEnds(steps []stepLine) []string {
	var out []string
	for i, s := range steps[:len(steps)-1] {
		used := false
		for _, p := range parts(s.products) {
			for _, later := range steps[i+1:] {
				for _, r := range parts(later.reactants) {
					used = used || r.FreeForm().SeenThroughKey() == p.FreeForm().SeenThroughKey()
				}
			}
		}
		if !used {
			out = append(out, fmt.Sprintf("no later step takes up the product of step %d", i+1))
		}
	}
	return out
}

func parts(ms []*molecule.Molecule) []*molecule.Molecule {
	var out []*molecule.Molecule
	for _, m := range ms {
		out = append(out, m.Split()...)
	}
	return out
}

func routeJudgement(steps []stepLine, list []reactions.Judgement, loose []string) routeJudgementJSON {
	at := weakest(list)
	out := routeJudgementJSON{judgeJSON: judgementJSON(list[at]), Weakest: at + 1}
	out.Doubts = append(out.Doubts, loose...)
	for i, s := range steps {
		out.Steps = append(out.Steps, stepJudgeJSON{Number: i + 1, Line: s.line, Reaction: s.text, judgeJSON: judgementJSON(list[i])})
	}
	return out
}

func printRouteJudgement(w io.Writer, steps []stepLine, list []reactions.Judgement, loose []string) {
	at := weakest(list)
	fmt.Fprintf(w, "route of %d: %s, as step %d\n", len(steps), list[at].Verdict, at+1)
	for _, text := range loose {
		fmt.Fprintf(w, "doubt: %s\n", text)
	}
	for i, s := range steps {
		fmt.Fprintf(w, "\nstep %d (line %d)\n", i+1, s.line)
		printJudgement(w, s.reactants, s.products, list[i])
	}
}
