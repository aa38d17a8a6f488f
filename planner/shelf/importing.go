package shelf

import (
	"cmp"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"sync"

	"shelfward/molecule"
	"shelfward/rules"
)

// ImportOptions say how files become an index.
type ImportOptions struct {
	Workers  int                // goroutines that read rows; at least 1
	SkipBad  bool               // leave rows with mistakes out; otherwise one of them and nothing is written
	Bad      func(*rules.Error) // told of every row with a mistake, in order; nil: nobody
	Progress func(rows int)     // told from time to time how many rows have been read; nil: nobody
}

// ImportReport says what became of the rows.
type ImportReport struct {
	Rows       int // written
	Structures int // of them with a known structure
	Bad        int // left out
}

const (
	importBatch = 256 // rows that one worker reads at a time
	// maxBad is how many mistakes are reported before the import is given up where none is allowed.
	maxBad = 20
	// maxImport bounds the rows of an index: their numbers have four bytes, and their keys are sorted in
	// memory, some 150 bytes a row.
	maxImport = 20_000_000
)

// ErrBadRows ends an import that met rows with mistakes and was not told to skip them.
var ErrBadRows = errors.New("rows with mistakes, nothing was written; --skip-bad leaves them out")

// Import reads shelf files of any length and writes an index of them to the file to. Rows are read and
// labelled in parallel and written in order, so that the same files give the same bytes. The index
// appears under its name only when it is whole. Names of the built-in shelf are understood, as in Load.
func Import(ctx context.Context, fsys fs.FS, files []string, to string, known *Known, o ImportOptions) (ImportReport, error) {
	builtin, err := Builtin(fsys, known)
	if err != nil {
		return ImportReport{}, err
	}
	withNames := *known
	withNames.builtin, withNames.Name = builtin.Items(), nil // names are written when they are asked for
	tmp, err := os.CreateTemp(filepath.Dir(to), ".shelfward-*")
	if err != nil {
		return ImportReport{}, fmt.Errorf("%s: cannot write: %v", to, errors.Unwrap(err))
	}
	defer os.Remove(tmp.Name())
	if err := tmp.Close(); err != nil {
		return ImportReport{}, err
	}
	w, err := newIndexWriter(tmp.Name(), files)
	if err != nil {
		return ImportReport{}, err
	}
	im := &importer{o: o, read: reader{known: &withNames}, w: w}
	for i, file := range files {
		if err := im.file(ctx, i, file); err != nil {
			w.abandon()
			return im.report, err
		}
	}
	if im.report.Bad > 0 && !o.SkipBad {
		w.abandon()
		return im.report, ErrBadRows
	}
	im.report.Rows, im.report.Structures = w.head.Rows, w.head.Structures
	if err := w.finish(); err != nil {
		return im.report, err
	}
	if err := os.Chmod(tmp.Name(), 0o644); err != nil {
		return im.report, err
	}
	return im.report, os.Rename(tmp.Name(), to)
}

// importer carries the rows of files to an index.
type importer struct {
	o      ImportOptions
	read   reader
	w      *indexWriter
	report ImportReport
	met    int // rows, for the progress
}

// batch is some rows on their way: read in parallel, taken in order.
type batch struct {
	rows []pending
	done chan struct{} // closed when the rows are worked out
	err  error         // the file cannot be read on
}

// pending is a row, or the mistake in its place, and what a worker makes of it.
type pending struct {
	row  row
	bad  []*rules.Error
	made *madeRow
}

// madeRow is a row ready for the index.
type madeRow struct {
	item  *Item
	saved []byte
	keys  []molecule.Key
	as    []identities
}

// file imports one file: one goroutine reads it, several work rows out, this one writes them.
func (im *importer) file(ctx context.Context, number int, path string) error {
	src, closer, err := openRows(path)
	if err != nil {
		return err
	}
	defer closer.Close()
	ctx, stop := context.WithCancel(ctx)
	workers := max(1, im.o.Workers)
	todo, inOrder := make(chan *batch, workers), make(chan *batch, 4*workers)
	var wait sync.WaitGroup
	defer wait.Wait()
	defer stop()
	wait.Go(func() { readBatches(ctx, src, todo, inOrder) })
	for range workers {
		wait.Go(func() {
			for b := range todo {
				for i := range b.rows {
					im.work(number, &b.rows[i])
				}
				close(b.done)
			}
		})
	}
	for b := range inOrder {
		<-b.done
		if err := im.take(b); err != nil {
			return err
		}
	}
	return ctx.Err()
}

// readBatches sends the rows of a file to the workers and, in order, to the writer.
func readBatches(ctx context.Context, src rowSource, todo, inOrder chan<- *batch) {
	defer close(inOrder)
	defer close(todo)
	for ended := false; !ended; {
		b := &batch{done: make(chan struct{})}
		for len(b.rows) < importBatch && !ended {
			r, bad, err := src.next()
			switch {
			case err != nil:
				ended = true
				if err != io.EOF {
					b.err = err
				}
			case bad != nil:
				b.rows = append(b.rows, pending{row: r, bad: []*rules.Error{bad}})
			default:
				b.rows = append(b.rows, pending{row: r})
			}
		}
		for _, to := range []chan<- *batch{todo, inOrder} {
			select {
			case to <- b:
			case <-ctx.Done():
				return
			}
		}
	}
}

// work reads a row and labels its molecule.
func (im *importer) work(file int, p *pending) {
	if len(p.bad) > 0 {
		return
	}
	p.row.settle()
	rep := im.read.item(p.row)
	if p.bad = rep.Errors; rep.Item == nil {
		return
	}
	m := &madeRow{item: rep.Item}
	saved := savedRow{File: file, Line: p.row.line, Value: p.row.value}
	for column, text := range saved.Value {
		if text == "" {
			delete(saved.Value, column)
		}
	}
	for _, f := range p.row.extra {
		saved.Extra = append(saved.Extra, [2]string{f.Name, f.Value})
	}
	var err error
	if m.saved, err = json.Marshal(saved); err != nil {
		p.bad = []*rules.Error{p.row.errorf("cannot be kept: %v", err)}
		return
	}
	if rep.Item.Molecule != nil {
		m.keys, m.as = keysOf(rep.Item.Molecule)
	}
	p.made, p.row = m, row{}
}

// take writes the rows of a batch and reports its mistakes.
func (im *importer) take(b *batch) error {
	for i := range b.rows {
		p := &b.rows[i]
		im.met++
		if p.made == nil {
			im.report.Bad++
			for _, bad := range p.bad {
				if im.o.Bad != nil {
					im.o.Bad(bad)
				}
			}
			if !im.o.SkipBad && im.report.Bad >= maxBad {
				return ErrBadRows
			}
			continue
		}
		if im.w.head.Rows >= maxImport {
			return fmt.Errorf("more than %d rows: share them out over several indexes", maxImport)
		}
		if err := im.w.add(p.made); err != nil {
			return err
		}
	}
	if im.o.Progress != nil {
		im.o.Progress(im.met)
	}
	return b.err
}

// namesOf lists what an item is called, in small letters, each once.
func namesOf(it *Item) (names []string) {
	taken := map[string]bool{"": true}
	for _, name := range append([]string{it.Name}, it.Synonyms...) {
		if name = strings.ToLower(name); !taken[name] && len(name) <= maxNameBytes {
			taken[name] = true
			names = append(names, name)
		}
	}
	return names
}

// maxNameBytes bounds a name that is looked up; what is longer is a text, not a name.
const maxNameBytes = 2000

func compareKeys(a, b keyEntry) int {
	return cmp.Or(strings.Compare(string(a.key[:]), string(b.key[:])), cmp.Compare(a.row, b.row))
}
