package cli

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"sync"

	"github.com/spf13/cobra"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// convertOptions are the flags of convert.
type convertOptions struct {
	app  *App
	to   string
	file string
}

func newConvertCommand(app *App) *cobra.Command {
	o := &convertOptions{app: app}
	cmd := &cobra.Command{
		Use: "convert FILE --to FORMAT", Short: "convert structures: smiles, mol, sdf, formula, name, svg", Args: cobra.ExactArgs(1),
		Long:    "Reads a .smi, .mol, .sdf or .rxn file ('-' is standard input, SMILES) and prints one line per record:\nvalue, tab, title. A failed record gives an empty value and is reported on standard error; the status is then 2.\n" + exitHelp,
		Example: "  shelfward convert shelf.smi --to smiles\n  echo 'OCC ethanol' | shelfward convert - --to formula",
		RunE: func(c *cobra.Command, args []string) error {
			o.file = args[0]
			return o.run()
		},
	}
	cmd.Flags().StringVar(&o.to, "to", "smiles", "smiles, mol, sdf, formula, name or svg")
	return cmd
}

// lineFormats write one line per record.
var lineFormats = map[string]func(*molecule.Molecule) string{
	"smiles":  smiles.Write,
	"formula": func(m *molecule.Molecule) string { return m.Formula().String() },
}

func (o *convertOptions) run() error {
	write, ok := lineFormats[o.to]
	if !ok {
		return usageError("--to %s: smiles, mol, sdf, formula, name or svg was expected", o.to)
	}
	in, closeIn, err := o.app.open(o.file)
	if err != nil {
		return err
	}
	defer closeIn()
	return o.lines(in, write)
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

// maxLine is the longest line of a SMILES file that is read; a longer one is a failed record.
const maxLine = 1 << 20

// batchLines is how many lines one worker takes at a time.
const batchLines = 512

// converted is the answer for one line.
type converted struct{ value, title, trouble string }

// lines converts a SMILES file: batches run in parallel and are printed in order.
func (o *convertOptions) lines(in io.Reader, write func(*molecule.Molecule) string) error {
	workers := o.app.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	out := bufio.NewWriterSize(o.app.Out, 1<<16)
	defer out.Flush()
	reader := bufio.NewReaderSize(in, 1<<16)
	record, failed := 0, 0
	for done := false; !done; {
		var batches [][]string
		for len(batches) < workers*4 && !done {
			var lines []string
			lines, done = readLines(reader)
			batches = append(batches, lines)
		}
		for _, r := range convertBatches(batches, write, workers) {
			record++
			fmt.Fprintf(out, "%s\t%s\n", r.value, r.title)
			if r.trouble != "" {
				failed++
				fmt.Fprintf(o.app.ErrOut, "shelfward: %s: record %d: %s\n", filepath.Base(o.file), record, r.trouble)
			}
		}
	}
	if failed > 0 {
		return failWith(exitUsage, errSilent)
	}
	return nil
}

// readLines reads up to batchLines lines; a line beyond maxLine is cut so that it fails as a record.
func readLines(r *bufio.Reader) (lines []string, done bool) {
	var line []byte
	for len(lines) < batchLines {
		chunk, err := r.ReadSlice('\n')
		if len(line) <= maxLine {
			line = append(line, chunk...)
		}
		if err == bufio.ErrBufferFull {
			continue
		}
		if err != nil && len(line) == 0 {
			return lines, true
		}
		lines = append(lines, strings.TrimRight(string(line), "\r\n"))
		line = line[:0]
		if err != nil {
			return lines, true
		}
	}
	return lines, false
}

func convertBatches(batches [][]string, write func(*molecule.Molecule) string, workers int) []converted {
	results := make([][]converted, len(batches))
	var wg sync.WaitGroup
	next := make(chan int)
	for w := 0; w < workers; w++ {
		wg.Add(1)
		go func() {
			defer wg.Done()
			for i := range next {
				results[i] = make([]converted, len(batches[i]))
				for k, line := range batches[i] {
					results[i][k] = convertLine(line, write)
				}
			}
		}()
	}
	for i := range batches {
		next <- i
	}
	close(next)
	wg.Wait()
	var all []converted
	for _, r := range results {
		all = append(all, r...)
	}
	return all
}

func convertLine(line string, write func(*molecule.Molecule) string) converted {
	if len(line) > maxLine {
		return converted{trouble: fmt.Sprintf("the line is longer than %d characters", maxLine)}
	}
	text, title := strings.TrimSpace(line), ""
	if i := strings.IndexAny(text, " \t"); i >= 0 {
		text, title = text[:i], strings.TrimSpace(text[i+1:])
	}
	m, err := smiles.Read(text)
	if err != nil {
		return converted{title: title, trouble: err.Error()}
	}
	return converted{value: write(m), title: title}
}
