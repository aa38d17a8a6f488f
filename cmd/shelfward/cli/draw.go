package cli

import (
	"bytes"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"shelfward/molecule"
	"shelfward/molecule/draw"
	"shelfward/molecule/molfile"
	"shelfward/molecule/name"
	"shelfward/molecule/smiles"
	"shelfward/planner/route"
)

// drawOptions are the flags of draw.
type drawOptions struct {
	app      *App
	out      string
	style    string
	above    []string
	below    []string
	relative bool
	route    string
}

func newDrawCommand(app *App) *cobra.Command {
	o := &drawOptions{app: app}
	cmd := &cobra.Command{
		Use: "draw STRUCTURE|REACTION|PLAN.json", Short: "draw a structure, a reaction scheme or a route: SVG, PNG or PDF", Args: exactly(1),
		Long: "Draws a structure (SMILES, a name, a CAS number) or a reaction such as 'A.B>>C' ('A.B>D>C' writes D above the\n" +
			"arrow). The SVG goes to standard output, or to FILE, which may end in .svg, .png or .pdf. Where atom classes tell\n" +
			"(reaction SMILES with [CH3:1]), the bonds that the step makes are marked with a dot. Of a plan file (routes --out) one\n" +
			"route is drawn as a ladder: the shelf is the ground, the target stands on top.\n" + exitHelp,
		Example: "  shelfward draw 'ethyl acetate' --out ester.svg\n  shelfward draw 'CC(=O)O.OCC>>CC(=O)OCC' --above 'H2SO4 (cat.)' --below 'reflux, 4 h' --out scheme.png",
		RunE:    func(c *cobra.Command, args []string) error { return o.run(args[0]) },
	}
	f := cmd.Flags()
	f.StringVar(&o.out, "out", "", "file to write, .svg, .png or .pdf (standard output otherwise, as SVG)")
	f.StringVar(&o.style, "style", "screen", draw.StyleNames)
	f.StringArrayVar(&o.above, "above", nil, "line above the arrow (repeatable)")
	f.StringArrayVar(&o.below, "below", nil, "line below the arrow (repeatable)")
	f.StringVar(&o.route, "route", "", "code of the route of a plan file (default: the first)")
	f.BoolVar(&o.relative, "relative", false, "the wedges mean relative configuration: say so below the structure")
	return cmd
}

func (o *drawOptions) run(text string) error {
	style, ok := draw.StyleNamed(o.style)
	if !ok {
		return usageError("--style %s: %s was expected", o.style, draw.StyleNames)
	}
	ext := strings.ToLower(filepath.Ext(o.out))
	if o.out != "" && ext != ".svg" && ext != ".png" && ext != ".pdf" {
		return usageError("--out %s: a name that ends in .svg, .png or .pdf was expected", o.out)
	}
	picture, err := o.picture(text, draw.Options{Style: style, Relative: o.relative})
	if err != nil {
		return err
	}
	var data bytes.Buffer
	switch ext {
	case ".png":
		err = picture.WritePNG(&data, pngScale)
	case ".pdf":
		err = picture.WritePDF(&data)
	default:
		data.WriteString(picture.SVG() + "\n")
	}
	if err != nil {
		return err
	}
	if o.out != "" {
		if err := os.WriteFile(o.out, data.Bytes(), 0o644); err != nil {
			return usageError("--out %s: cannot write: %v", o.out, plainReason(err))
		}
	}
	switch {
	case o.app.JSON:
		return printJSON(o.app.Out, drawJSON{File: o.out, SVG: picture.SVG(), Title: picture.Title, Description: picture.Description, Doubts: []string{}})
	case o.out == "":
		_, err := io.Copy(o.app.Out, &data)
		return err
	}
	_, err = fmt.Fprintf(o.app.Out, "%s: %s, %.0f x %.0f points\n", o.out, picture.Description, picture.Width, picture.Height)
	return err
}

// drawJSON is the object of draw --json.
type drawJSON struct {
	File        string   `json:"file"`
	SVG         string   `json:"svg"`
	Title       string   `json:"title"`
	Description string   `json:"description"`
	Doubts      []string `json:"doubts"`
}

// picture draws a reaction where the text holds an arrow, else one structure.
func (o *drawOptions) picture(text string, opt draw.Options) (*draw.Drawing, error) {
	opt.Title = text
	if strings.Count(text, ">") == 2 {
		r, err := reactionLine(text)
		if err != nil {
			return nil, usageError("%s: %v", quoted(text), err)
		}
		scheme := draw.Reaction{Reactants: molecules(r.Reactants), Products: molecules(r.Products), Below: o.below}
		for _, m := range molecules(r.Agents) {
			scheme.Above = append(scheme.Above, nameOrFormula(m))
		}
		scheme.Above = append(scheme.Above, o.above...)
		return draw.Scheme(scheme, opt), nil
	}
	if len(o.above)+len(o.below) > 0 {
		return nil, usageError("--above and --below stand at the arrow of a reaction; a text such as 'A.B>>C' was expected, found %s", quoted(text))
	}
	if strings.HasSuffix(strings.ToLower(text), ".json") {
		return o.ladder(text, opt)
	}
	if o.route != "" {
		return nil, usageError("--route names a route of a plan file (routes --out); a name that ends in .json was expected, found %s", quoted(text))
	}
	room, err := o.app.room(nil, "")
	if err != nil {
		return nil, err
	}
	rd, err := (&job{room: room}).read(text)
	if err != nil {
		return nil, failWith(exitUsage, err)
	}
	return draw.Structure(rd.Molecule, opt), nil
}

// ladder draws a route of a plan file.
func (o *drawOptions) ladder(path string, opt draw.Options) (*draw.Drawing, error) {
	if err := checkFile(path); err != nil {
		return nil, err
	}
	p, err := route.Load(path)
	if err != nil {
		return nil, failWith(exitUsage, err)
	}
	r, err := p.Route(o.route)
	if err != nil {
		return nil, failWith(exitUsage, err)
	}
	var rungs []draw.Rung
	words := []string{}
	for i := range r.Steps {
		m, err := smiles.Read(r.Steps[i].Product)
		if err != nil {
			return nil, usageError("%s: step %d: %v", path, i+1, err)
		}
		rungs = append(rungs, draw.Rung{Words: []string{r.Steps[i].Rung()}, Product: m, Name: r.StepProduct(i)})
		words = append(words, r.Steps[i].Rung())
	}
	var shelf []draw.Stock
	for _, s := range r.StartingMaterials {
		m, err := smiles.Read(s.SMILES)
		if err != nil {
			return nil, usageError("%s: starting material %s: %v", path, s.SMILES, err)
		}
		shelf = append(shelf, draw.Stock{Molecule: m, Name: s.Name, Chosen: chosen(p.From, m)})
	}
	opt.Title = "Route " + r.Code + " to " + r.StepProduct(len(r.Steps)-1)
	opt.Description = "From the shelf: " + r.Starts() + "; " + strings.Join(words, "; ")
	return draw.Ladder(rungs, shelf, opt), nil
}

// chosen says that m is one of the starts asked for.
func chosen(from []string, m *molecule.Molecule) bool {
	for _, text := range from {
		if f, err := smiles.Read(text); err == nil && f.Key() == m.Key() {
			return true
		}
	}
	return false
}

func molecules(list []*molfile.Record) []*molecule.Molecule {
	var out []*molecule.Molecule
	for _, r := range list {
		out = append(out, r.Molecule)
	}
	return out
}

// nameOrFormula is what stands above an arrow for a molecule.
func nameOrFormula(m *molecule.Molecule) string {
	if text, ok := name.OfWithStereo(m); ok {
		return text
	}
	return m.Formula().String()
}
