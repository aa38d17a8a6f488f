package cli

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"strings"

	"github.com/spf13/cobra"
)

func newRulesNewCommand(app *App) *cobra.Command {
	return &cobra.Command{
		Use: "new ID", Short: "write the skeleton of a transform to fill in", Args: exactly(1),
		Long: "Writes ID.yaml into the folder of --rules (the last one given), or here. Every place to fill in says what belongs\n" +
			"there; `shelfward rules check --rules FOLDER` names what is still missing. An existing file is left alone.\n" + exitHelp,
		Example: "  shelfward rules new enamine-alkylation --rules my-rules",
		RunE:    func(_ *cobra.Command, args []string) error { return app.rulesNew(args[0]) },
	}
}

// idPattern is the form of an id, as rules/transforms.md states it.
var idPattern = regexp.MustCompile(`^[a-z0-9]+(-[a-z0-9]+)*$`)

func (app *App) rulesNew(id string) error {
	if !idPattern.MatchString(id) {
		return usageError("id %s: lower-case words joined by '-' were expected, such as enamine-alkylation", quoted(id))
	}
	dir := "."
	if n := len(app.RuleDirs); n > 0 {
		dir = app.RuleDirs[n-1]
	}
	if info, err := os.Stat(dir); err != nil || !info.IsDir() {
		return usageError("%s: a folder was expected", dir)
	}
	b, _ := app.book() // other unfinished files of the folder are no reason to write none
	if b != nil && b.Transform(id) != nil {
		return usageError("the id %s is taken: %s", id, b.Transform(id).File)
	}
	path := filepath.Join(dir, id+".yaml")
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o644)
	if errors.Is(err, fs.ErrExist) {
		return usageError("%s: there is such a file already; it is left alone", path)
	}
	if err != nil {
		return usageError("%s: cannot write: %v", path, plainReason(err))
	}
	if _, err := f.WriteString(strings.ReplaceAll(transformSkeleton, "NEW-ID", id)); err != nil {
		f.Close()
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	if app.JSON {
		return printJSON(app.Out, map[string]any{"file": path, "doubts": []string{}})
	}
	_, err = fmt.Fprintf(app.Out, "%s written; fill it in, then: shelfward rules check %s --rules %s\n", path, id, dir)
	return err
}

// transformSkeleton holds every key that most transforms need; FILL marks what the chemist writes.
const transformSkeleton = `# Fill in every FILL; rules/transforms.md says what each key means.
family: FILL
transforms:
- id: NEW-ID
  name: FILL                              # what a chemist says aloud
  reactants: ['FILL', 'FILL']             # parts that give carbon, in pattern notation: '[C:1](=[O:2])[OH:3]'
  products: ['FILL']                      # the same atom keeps its class number
  conditions:
  - id: usual
    reagents:                             # names from rules/reagents.yaml
    - {name: FILL, equiv: 1.1}
    solvents: [{name: FILL, ml_per_g: 5}]
    media: [FILL]                         # a medium of rules/tolerance.yaml: what the other groups meet
    order: 'FILL'                         # what is added to what, and how fast
    temperature: [20, 25]                 # C
    time: [1, 4]                          # h
    yield: [50, 70, 85]                   # %: low, usual, high
    origin: estimated                     # published, near, class or estimated
    tried_at: 'FILL'                      # the scale it was done at
    workup: ['FILL']
    workup_materials: []
    watch: 'FILL'                         # how to see that it is over
    cautions: ['FILL']
    needs: ['fume hood']
    source: {text: 'FILL', provenance: FILL}   # memory, common practice, own; read with address: https://...
  source: {text: 'FILL', provenance: FILL}
  examples:
  - {from: ['FILL', 'FILL'], to: 'FILL'}
  rejects:
  - {from: ['FILL', 'FILL'], to: 'FILL', why: 'FILL'}
`
