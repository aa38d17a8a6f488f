package cli

import (
	"bufio"
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"

	"github.com/spf13/cobra"

	"shelfward/molecule"
	"shelfward/molecule/draw"
	"shelfward/molecule/molfile"
	"shelfward/molecule/name"
	"shelfward/molecule/smiles"
)

// convertOptions are the flags of convert.
type convertOptions struct {
	app   *App
	to    string
	v3000 bool
	file  string
}

func newConvertCommand(app *App) *cobra.Command {
	o := &convertOptions{app: app}
	cmd := &cobra.Command{
		Use: "convert FILE --to FORMAT", Short: "convert structures: smiles, mol, sdf, rxn, formula, name, svg, png", Args: exactly(1),
		Long: "Reads a .smi, .mol, .sdf or .rxn file; '-' is standard input. To smiles, formula and name it prints one line per record:\n" +
			"value, tab, title. A .rxn file becomes one line of reaction SMILES, or its molecules in the order reactants, agents,\n" +
			"products; --to rxn takes a .rxn file or reaction SMILES, one a line, with titles. A structure that has no name here gives an empty one. A failed record gives an empty value and is reported on standard error; the status is then 2.\n" +
			"SD, mol, rxn and SVG output leave failed records out. What of a record its structure does not hold (axes, relative marks) is\n" +
			"noted on standard error.\n" + exitHelp,
		Example: "  shelfward convert shelf.smi --to smiles\n  echo 'OCC ethanol' | shelfward convert - --to formula\n  shelfward convert drawing.sdf --to smiles",
		RunE: func(c *cobra.Command, args []string) error {
			o.file = args[0]
			return o.run(c.Context())
		},
	}
	cmd.Flags().StringVar(&o.to, "to", "smiles", formatNames)
	cmd.Flags().BoolVar(&o.v3000, "v3000", false, "write mol, sdf and rxn in the V3000 form (V2000 otherwise, up to 999 atoms)")
	return cmd
}

// formatNames lists the values of --to.
const formatNames = "smiles, mol, sdf, rxn, formula, name, svg or png"

// format turns one record into its text. A line format gives a value for 'value, tab, title'; the
// others give a whole block of lines.
type format struct {
	write func(*molfile.Record) (string, error)
	line  bool
}

var formats = map[string]format{
	"smiles":  {func(r *molfile.Record) (string, error) { return smiles.Write(r.Molecule), nil }, true},
	"formula": {func(r *molfile.Record) (string, error) { return r.Molecule.Formula().String(), nil }, true},
	"name":    {func(r *molfile.Record) (string, error) { text, _ := name.OfWithStereo(r.Molecule); return text, nil }, true},
	"mol":     {func(r *molfile.Record) (string, error) { return molText(r, molfile.Write) }, false},
	"sdf":     {func(r *molfile.Record) (string, error) { return molText(r, molfile.WriteSD) }, false},
	"rxn":     {}, // whole reactions, see reactionAnswer
	"svg": {func(r *molfile.Record) (string, error) {
		return draw.SVG(r.Molecule, draw.Options{Title: r.Title, Relative: r.Relative}) + "\n", nil
	}, false},
	"png": {pngText, false},
}

// pngText is the picture of one structure as the bytes of a PNG file.
func pngText(r *molfile.Record) (string, error) {
	var image strings.Builder
	err := draw.Structure(r.Molecule, draw.Options{Title: r.Title, Relative: r.Relative, Style: draw.Screen}).WritePNG(&image, pngScale)
	return image.String(), err
}

// pngScale is the number of pixels to a point of a drawing: enough for print.
const pngScale = 3

// molText writes a record with the coordinates it came with, or with those of our own picture.
func molText(r *molfile.Record, write func(io.Writer, *molfile.Record) error) (string, error) {
	var text strings.Builder
	err := write(&text, drawn(r))
	return text.String(), err
}

// drawn is r with coordinates.
func drawn(r *molfile.Record) *molfile.Record {
	if r.Coordinates != nil {
		return r
	}
	whole := *r
	placed := draw.Place(r.Molecule, false)
	for _, p := range placed.At {
		whole.Coordinates = append(whole.Coordinates, molfile.Point{X: p.X, Y: p.Y})
	}
	whole.Wedges = []molfile.Wedge{}
	for _, w := range placed.Wedges {
		whole.Wedges = append(whole.Wedges, molfile.Wedge(w))
	}
	return &whole
}

// answer converts one record, or one reaction where the output is a reaction file.
func (o *convertOptions) answer(it item) converted {
	switch {
	case o.to == "rxn":
		return reactionAnswer(it, o.v3000)
	case o.v3000 && o.to == "mol":
		return it.convert(func(r *molfile.Record) (string, error) { return molText(r, molfile.WriteV3000) })
	case o.v3000:
		return it.convert(func(r *molfile.Record) (string, error) { return molText(r, molfile.WriteSDV3000) })
	}
	return it.convert(formats[o.to].write)
}

func (o *convertOptions) run(ctx context.Context) error {
	if _, ok := formats[o.to]; !ok {
		return usageError("--to %s: %s was expected", o.to, formatNames)
	}
	if o.v3000 && o.to != "mol" && o.to != "sdf" && o.to != "rxn" {
		return usageError("--v3000 goes with --to mol, sdf or rxn, not with %s", o.to)
	}
	if o.to == "png" && o.app.JSON {
		return usageError("--json holds no pictures in PNG; --to svg was expected")
	}
	in, closeIn, err := o.app.open(o.file)
	if err != nil {
		return err
	}
	defer closeIn()
	src, err := o.source(in)
	if err != nil {
		return err
	}
	return o.convert(ctx, src)
}

// open opens a file or standard input; a folder is refused.
func (app *App) open(path string) (io.Reader, func(), error) {
	if path == "-" {
		return app.In, func() {}, nil
	}
	info, err := os.Stat(path)
	if err != nil {
		return nil, nil, usageError("%s: cannot read: %v", path, plainReason(err))
	}
	if info.IsDir() {
		return nil, nil, usageError("%s: expected a file, found a folder", path)
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, nil, usageError("%s: cannot read: %v", path, plainReason(err))
	}
	return f, func() { f.Close() }, nil
}

// plainReason drops the operation and path that the system's error repeats.
func plainReason(err error) error {
	var pe *os.PathError
	if errors.As(err, &pe) {
		return pe.Err
	}
	return err
}

// source chooses the reader by the name of the file; standard input is looked at.
func (o *convertOptions) source(in io.Reader) (source, error) {
	reader := bufio.NewReaderSize(in, 1<<16)
	switch strings.ToLower(filepath.Ext(o.file)) {
	case ".mol", ".sdf", ".sd":
		return o.molSource(reader)
	case ".rxn":
		return o.reactionSource(reader)
	}
	if o.file == "-" {
		head, _ := reader.Peek(1 << 12)
		switch {
		case bytes.HasPrefix(head, []byte("$RXN")):
			return o.reactionSource(reader)
		case molfile.Looks(head):
			return o.molSource(reader)
		}
	}
	return &lineSource{in: reader}, nil
}

func (o *convertOptions) molSource(in io.Reader) (source, error) {
	if o.to == "rxn" {
		return nil, usageError("%s: a .rxn file or lines of reaction SMILES were expected for --to rxn, found structures", fileLabel(o.file))
	}
	return &molSource{in: molfile.NewReader(in)}, nil
}

func (o *convertOptions) reactionSource(in io.Reader) (source, error) {
	r, err := molfile.ReadReaction(in)
	if err != nil {
		return nil, usageError("%s: %v", fileLabel(o.file), err)
	}
	if o.to == "rxn" {
		return &listSource{items: []item{{reaction: r}}}, nil
	}
	if o.to == "smiles" {
		line := joinRecords(r.Reactants) + ">" + joinRecords(r.Agents) + ">" + joinRecords(r.Products)
		return &listSource{items: []item{{done: &converted{value: line, title: r.Title}}}}, nil
	}
	var items []item
	for _, list := range [][]*molfile.Record{r.Reactants, r.Agents, r.Products} {
		for _, rec := range list {
			items = append(items, item{record: rec, title: rec.Title})
		}
	}
	return &listSource{items: items}, nil
}

func joinRecords(list []*molfile.Record) string {
	var ms []*molecule.Molecule
	for _, r := range list {
		ms = append(ms, r.Molecule)
	}
	return joinSMILES(ms)
}

// convert reads batches, works on them in parallel and prints them in order.
func (o *convertOptions) convert(ctx context.Context, src source) error {
	workers := o.app.workers()
	out := bufio.NewWriterSize(o.app.Out, 1<<16)
	defer out.Flush()
	object := convertJSON{Records: []recordJSON{}, Doubts: []string{}}
	record, failed := 0, 0
	for done := false; !done; {
		var batches [][]item
		for len(batches) < workers*4 && !done {
			var items []item
			items, done = src.next(batchItems)
			batches = append(batches, items)
		}
		if err := ctx.Err(); err != nil {
			return err
		}
		results := o.batches(batches, workers)
		if record+len(results) > 1 && o.to == "png" {
			return usageError("--to png writes one picture, found several structures; --to svg writes one element each")
		}
		for _, r := range results {
			record++
			if r.trouble != "" {
				failed++
				fmt.Fprintf(o.app.ErrOut, "shelfward: %s: record %d: %s\n", fileLabel(o.file), record, r.trouble)
			} else if r.note != "" {
				fmt.Fprintf(o.app.ErrOut, "note: %s: record %d: %s\n", fileLabel(o.file), record, r.note)
				object.Doubts = append(object.Doubts, fmt.Sprintf("record %d: %s", record, r.note))
			}
			if o.app.JSON {
				object.Records = append(object.Records, recordJSON{r.value, r.title})
			} else if err := o.print(out, r); err != nil {
				return err
			}
		}
	}
	if _, mol := src.(*molSource); mol && record == 0 {
		return usageError("%s: expected a molfile, found nothing", fileLabel(o.file))
	}
	if failed > 0 {
		return failWith(exitUsage, errSilent)
	}
	if o.app.JSON {
		return printJSON(out, object)
	}
	return nil
}

// convertJSON is the object of convert --json.
type convertJSON struct {
	Records []recordJSON `json:"records"`
	Doubts  []string     `json:"doubts"`
}

type recordJSON struct {
	Value string `json:"value"`
	Title string `json:"title"`
}

func (o *convertOptions) print(w io.Writer, r converted) error {
	if !formats[o.to].line {
		_, err := io.WriteString(w, r.value)
		return err
	}
	_, err := fmt.Fprintf(w, "%s\t%s\n", r.value, r.title)
	return err
}

func (o *convertOptions) batches(batches [][]item, workers int) []converted {
	results := make([][]converted, len(batches))
	var wg sync.WaitGroup
	next := make(chan int)
	for range workers {
		wg.Add(1)
		go func() {
			defer wg.Done()
			for i := range next {
				results[i] = make([]converted, len(batches[i]))
				for k, it := range batches[i] {
					results[i][k] = o.answer(it)
				}
			}
		}()
	}
	for i := range batches {
		next <- i
	}
	close(next)
	wg.Wait()
	return slices.Concat(results...)
}
