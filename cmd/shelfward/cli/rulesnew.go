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

type rulesNewOptions struct {
	app  *App
	like string
}

func newRulesNewCommand(app *App) *cobra.Command {
	o := &rulesNewOptions{app: app}
	cmd := &cobra.Command{
		Use: "new ID", Short: "write the skeleton of a transform to fill in, or read one off a drawn reaction", Args: exactly(1),
		Long: "Writes ID.yaml into the folder of --rules (the last one given), or here. Every place to fill in says what belongs\n" +
			"there; `shelfward rules check --rules FOLDER` names what is still missing. An existing file is left alone.\n" +
			"With --like the parts come from a drawing: a .rxn file or reaction SMILES, with or without atom numbers. The bonds\n" +
			"that change are found, the reacting core is kept, and shelf molecules are named that it would use, and others that\n" +
			"it would not use for a single condition.\n" + exitHelp,
		Example: "  shelfward rules new enamine-alkylation --rules my-rules\n" +
			"  shelfward rules new my-mesylate --like 'CCCCO.CS(=O)(=O)Cl>>CCCCOS(C)(=O)=O' --rules my-rules\n" +
			"  shelfward rules new from-the-paper --like paper.rxn --rules my-rules",
		RunE: func(_ *cobra.Command, args []string) error { return o.run(args[0]) },
	}
	cmd.Flags().StringVar(&o.like, "like", "", "a drawn reaction to read the transform off: a .rxn file, reaction SMILES, or '-'")
	return cmd
}

// idPattern is the form of an id, as rules/transforms.md states it.
var idPattern = regexp.MustCompile(`^[a-z0-9]+(-[a-z0-9]+)*$`)

func (o *rulesNewOptions) run(id string) error {
	dir, err := o.place(id)
	if err != nil {
		return err
	}
	path := filepath.Join(dir, id+".yaml")
	if _, err := os.Lstat(path); err == nil {
		return usageError("%s: there is such a file already; it is left alone", path)
	}
	if o.like != "" {
		return o.writeLike(id, path, dir)
	}
	if err := writeNew(path, skeleton(id, skeletonParts, skeletonReagents, skeletonExample)); err != nil {
		return err
	}
	if o.app.JSON {
		return printJSON(o.app.Out, map[string]any{"file": path, "doubts": []string{}})
	}
	_, err = fmt.Fprintf(o.app.Out, "%s written; fill it in, then: shelfward rules check %s --rules %s\n", path, id, dir)
	return err
}

// place checks the id and returns the folder for its file.
func (o *rulesNewOptions) place(id string) (dir string, err error) {
	if !idPattern.MatchString(id) {
		return "", usageError("id %s: lower-case words joined by '-' were expected, such as enamine-alkylation", quoted(id))
	}
	dir = "."
	if n := len(o.app.RuleDirs); n > 0 {
		dir = o.app.RuleDirs[n-1]
	}
	if info, err := os.Stat(dir); err != nil || !info.IsDir() {
		return "", usageError("%s: a folder was expected", dir)
	}
	b, _ := o.app.book() // other unfinished files of the folder are no reason to write none
	if b != nil && b.Transform(id) != nil {
		return "", usageError("the id %s is taken: %s", id, b.Transform(id).File)
	}
	return dir, nil
}

// writeNew writes a file that must not exist yet, whole or not at all.
func writeNew(path, text string) error {
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o644)
	if errors.Is(err, fs.ErrExist) {
		return usageError("%s: there is such a file already; it is left alone", path)
	}
	if err != nil {
		return usageError("%s: cannot write: %v", path, plainReason(err))
	}
	_, err = f.WriteString(text)
	if closeErr := f.Close(); err == nil {
		err = closeErr
	}
	if err != nil {
		os.Remove(path)
		return usageError("%s: cannot write: %v", path, plainReason(err))
	}
	return nil
}

// The places of the skeleton that a drawing can fill; FILL marks what the chemist writes.
const (
	skeletonParts = "  reactants: ['FILL', 'FILL']             # parts that give carbon, in pattern notation: '[C:1](=[O:2])[OH:3]'\n" +
		"  products: ['FILL']                      # the same atom keeps its class number\n"
	skeletonReagents = "    - {name: FILL, equiv: 1.1}\n"
	skeletonExample  = "{from: ['FILL', 'FILL'], to: 'FILL'}"
)

// skeleton fills the template of a transform.
func skeleton(id, parts, reagents, example string) string {
	return strings.NewReplacer("NEW-ID", id, "PARTS\n", parts, "REAGENTS\n", reagents, "EXAMPLE", example).Replace(transformSkeleton)
}

// transformSkeleton holds every key that most transforms need; FILL marks what the chemist writes.
const transformSkeleton = `# Fill in every FILL; rules/transforms.md says what each key means.
family: FILL                              # what it belongs to, as in rules/transforms: esters
transforms:
- id: NEW-ID
  name: FILL                              # what a chemist says aloud
PARTS
  conditions:
  - id: usual
    reagents:                             # names from rules/reagents.yaml
REAGENTS
    solvents: [{name: FILL, ml_per_g: 5}] # mL per g of the first reactant part; [] for none
    media: [FILL]                         # a medium of rules/tolerance.yaml: what the other groups meet
    order: 'FILL'                         # what is added to what, and how fast
    temperature: [20, 25]                 # C
    time: [1, 4]                          # h
    yield: [50, 70, 85]                   # %: low, usual, high
    origin: estimated                     # published, near, class or estimated
    tried_at: 'FILL'                      # the scale it was done at
    workup: ['FILL']                      # one sentence for each operation
    workup_materials: []
    watch: 'FILL'                         # how to see that it is over
    cautions: ['FILL']                    # what can hurt; [] for nothing beyond the usual
    needs: ['fume hood']
    uses: []                              # reagents consumed, balanced, as SMILES; check says what is missing
    gives: []                             # what they become
    source: {text: 'FILL', provenance: FILL}   # memory, common practice, own; read with address: https://...
  source: {text: 'FILL', provenance: FILL}     # of the transform; 'textbook chemistry, no single source', memory
  examples:
  - EXAMPLE
  rejects:
  - {from: ['FILL', 'FILL'], to: 'FILL', why: 'FILL'}   # what must not come out, as SMILES, and why
`
