package cli

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/identify"
	"shelfward/molecule/smiles"
	"shelfward/planner"
	"shelfward/planner/route"
	"shelfward/planner/shelf"
	"shelfward/rules"
)

// job is what a TARGET argument stands for: a structure, a case file or a plan file, with the room and
// the wishes that a case file brings.
type job struct {
	room     *planner.Room
	target   *molecule.Molecule
	readAs   string
	name     string
	from     []*molecule.Molecule
	fromAny  []*molecule.Molecule
	makeMol  float64
	bench    *route.Bench
	plan     *route.Plan // read from a plan file
	caseFile *identify.Case
	data     *identify.Data
	found    *identify.Result
	evidence []string
}

// isFile says whether a TARGET names a case or plan file.
func isFile(target string) bool {
	low := strings.ToLower(target)
	return strings.HasSuffix(low, ".yaml") || strings.HasSuffix(low, ".yml") || strings.HasSuffix(low, ".json")
}

// room loads rules and shelf; shelves from a case file count where the command line names none.
func (app *App) room(caseShelves []string, dir string) (*planner.Room, error) {
	fsys, err := app.ruleFiles()
	if err != nil {
		return nil, err
	}
	files := app.Shelves
	if len(files) == 0 {
		files = caseShelves
	} else {
		dir = ""
	}
	for _, file := range files {
		if file == shelf.BuiltinName {
			continue
		}
		if dir != "" && !filepath.IsAbs(file) {
			file = filepath.Join(dir, file)
		}
		if shelf.IsIndex(file) {
			continue // of any size
		}
		if err := checkFile(file); err != nil {
			return nil, err
		}
	}
	room, err := app.openRoom(fsys, files, dir)
	return room, failWith(exitUsage, err)
}

// openJob reads TARGET. With identification it may take a while; ctx cancels it.
func (app *App) openJob(ctx context.Context, text string) (*job, error) {
	switch {
	case strings.HasSuffix(strings.ToLower(text), ".json"):
		return app.openPlan(text)
	case isFile(text):
		return app.openCase(ctx, text, identify.Options{})
	}
	room, err := app.room(nil, "")
	if err != nil {
		return nil, err
	}
	j := &job{room: room}
	return j, j.setTarget(text)
}

func (j *job) setTarget(text string) error {
	rd, err := j.read(text)
	if err != nil {
		return failWith(exitUsage, err)
	}
	j.target, j.readAs, j.name = rd.Molecule, rd.As, j.room.Name(rd.Molecule)
	return checkWhole(j.target, text)
}

// read resolves a text; an error of the line notation, which knows only the column, gets the text.
func (j *job) read(text string) (shelf.Reading, error) {
	rd, err := j.room.Shelf.Resolve(text)
	var bad *smiles.Error
	if errors.As(err, &bad) {
		err = fmt.Errorf("%s: %w", quoted(text), err)
	}
	return rd, err
}

// checkWhole refuses what cannot be planned: unknown atoms, and several neutral molecules in one text.
// Salts are one compound.
func checkWhole(m *molecule.Molecule, text string) error {
	for a := 0; a < m.NumAtoms(); a++ {
		if m.Atom(a).Element == 0 {
			return usageError("%s: the structure holds an unknown atom '*'; a whole molecule was expected", quoted(text))
		}
	}
	neutral := 0
	for _, part := range m.Split() {
		if f := part.Formula(); f.Charge == 0 && f.Count[6] > 0 {
			neutral++
		}
	}
	if neutral > 1 {
		return usageError("%s: %d molecules in one text; one was expected", quoted(text), neutral)
	}
	return nil
}

func (app *App) openPlan(path string) (*job, error) {
	if err := checkFile(path); err != nil {
		return nil, err
	}
	p, err := route.Load(path)
	if err != nil {
		return nil, failWith(exitUsage, err)
	}
	room, err := app.room(nil, "")
	if err != nil {
		return nil, err
	}
	j := &job{room: room, plan: p}
	return j, j.setTarget("smiles:" + p.Target.SMILES)
}

// maxFileBytes bounds the files that are read whole: a case, a plan or a shelf is far smaller.
const maxFileBytes = 64 << 20

// checkFile gives one clear line for a missing file, a folder, and what cannot be read whole.
func checkFile(path string) error {
	info, err := os.Stat(path)
	if err != nil {
		return usageError("%s: cannot read: %v", path, plainReason(err))
	}
	if info.IsDir() {
		return usageError("%s: expected a file, found a folder", path)
	}
	if info.Mode()&os.ModeDevice != 0 {
		return usageError("%s: expected a file, found a device", path)
	}
	if info.Size() > maxFileBytes {
		return usageError("%s: %d MB; at most %d MB are read", path, info.Size()>>20, maxFileBytes>>20)
	}
	return nil
}

// readCase decodes a case file and loads its room; the target is not looked for yet.
func (app *App) readCase(path string) (*job, error) {
	if err := checkFile(path); err != nil {
		return nil, err
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, usageError("%s: cannot read: %v", path, plainReason(err))
	}
	c, err := identify.DecodeCase(path, data)
	if err != nil {
		return nil, failWith(exitUsage, err)
	}
	dir := filepath.Dir(path)
	j := &job{caseFile: c}
	if j.room, err = app.room(plainTexts(c.Shelf), dir); err != nil {
		return nil, err
	}
	if c.Evidence != nil {
		if j.data, err = c.Evidence.Read(path, os.DirFS(dir).(fs.FS)); err != nil {
			return nil, failWith(exitUsage, err)
		}
	}
	if c.Bench.Written() {
		if j.bench, err = route.LoadBench(filepath.Join(dir, c.Bench.Value)); err != nil {
			return nil, failWith(exitUsage, err)
		}
	}
	return j, j.readWishes(path)
}

func plainTexts(list []rules.Text) []string {
	out := make([]string, len(list))
	for i, t := range list {
		out[i] = t.Value
	}
	return out
}

func (j *job) readWishes(path string) error {
	for _, t := range j.caseFile.From {
		m, err := j.resolve(t.Value)
		if err != nil {
			return failWith(exitUsage, t.Errorf(path, "from: %v", err))
		}
		j.from = append(j.from, m)
	}
	for _, t := range j.caseFile.FromAny {
		m, err := j.resolve(t.Value)
		if err != nil {
			return failWith(exitUsage, t.Errorf(path, "from_any: %v", err))
		}
		j.fromAny = append(j.fromAny, m)
	}
	return nil
}

func (j *job) resolve(text string) (*molecule.Molecule, error) {
	rd, err := j.read(text)
	if err != nil {
		return nil, err
	}
	return rd.Molecule, checkWhole(rd.Molecule, text)
}

// openCase reads a case file and settles its target: the one it names, or the structure that the
// evidence settles on. An unsettled case ends with status 3 and says so.
func (app *App) openCase(ctx context.Context, path string, o identify.Options) (*job, error) {
	j, err := app.readCase(path)
	if err != nil {
		return nil, err
	}
	if err := app.settle(ctx, j, path, o); err != nil {
		return nil, err
	}
	if j.target == nil {
		return nil, &unsettledError{path: path, found: j.found}
	}
	return j, nil
}

// unsettledError is the answer of a command that needs one target to a case that leaves several.
type unsettledError struct {
	path  string
	found *identify.Result
}

func (e *unsettledError) Error() string {
	if e.found.Nothing != "" {
		return fmt.Sprintf("%s: no structure fits the evidence: %s", e.path, e.found.Nothing)
	}
	return fmt.Sprintf("%s: the evidence does not settle the target; see `shelfward identify %s`, or name it with target:", e.path, e.path)
}

// doubts are those of the identification with the reason at the head.
func (e *unsettledError) doubts() []string { return append([]string{e.Error()}, e.found.Doubts...) }

// openFor reads TARGET for a command; a case that settles on nothing ends it with status 3 and, under
// --json, with the command's empty object.
func (app *App) openFor(ctx context.Context, text string, empty func(doubts []string) any) (*job, error) {
	j, err := app.openJob(ctx, text)
	var open *unsettledError
	if errors.As(err, &open) {
		return nil, app.nothing(empty(open.doubts()), open.Error())
	}
	return j, err
}

// settle finds the target of a case; it stays nil where the evidence leaves it open.
func (app *App) settle(ctx context.Context, j *job, path string, o identify.Options) error {
	c := j.caseFile
	if j.data != nil && (!c.Target.Written() || o.Count > 0) {
		if err := app.identify(ctx, j, o); err != nil {
			return err
		}
	}
	switch {
	case c.Target.Written():
		if err := j.setTarget(c.Target.Value); err != nil {
			return failWith(exitUsage, c.Target.Errorf(path, "target: %v", err))
		}
		j.evidence = append(j.evidence, "target named in the case file; evidence only checks it")
	case j.data == nil:
		return usageError("%s: neither evidence: nor target: is there", path)
	case j.found.Settled && len(j.found.Candidates) > 0:
		if err := j.setTarget("smiles:" + j.found.Candidates[0].SMILES); err != nil {
			return err
		}
		j.readAs = "identified from the evidence"
		j.evidence = append(j.evidence, evidenceLines(j.found)...)
	}
	if j.target != nil && c.Make.Written() {
		n, err := molOf(c.Make.Value, j.target)
		if err != nil {
			return failWith(exitUsage, c.Make.Errorf(path, "make: %v", err))
		}
		j.makeMol = n
	}
	return nil
}

func evidenceLines(r *identify.Result) []string {
	first := r.Candidates[0]
	lines := []string{fmt.Sprintf("formula %s from the analysis and mass; %d structures meet the hard evidence%s", r.Formula, r.Generated, completeText(r))}
	for i, f := range first.Fits {
		if i < 3 {
			lines = append(lines, f)
		}
	}
	for _, d := range r.Doubts {
		lines = append(lines, "not decided: "+d)
	}
	return lines
}

func completeText(r *identify.Result) string {
	if r.Complete {
		return ", all built; the spectra only rank them"
	}
	return ", not all built"
}

// identify runs the identification of a case with the defaults of the command line.
func (app *App) identify(ctx context.Context, j *job, o identify.Options) error {
	if o.Workers == 0 {
		o.Workers = app.workers()
	}
	if o.Time == 0 {
		o.Time = time.Minute
	}
	o.Name = j.room.Name
	res, err := identify.Identify(ctx, j.data, o)
	if err != nil {
		if errors.Is(err, context.Canceled) {
			return err
		}
		res = &identify.Result{Formulas: []identify.FormulaLine{}, Groups: []identify.GroupVerdict{}, Candidates: []identify.Candidate{},
			Assumed: []identify.Assumption{}, Doubts: append([]string{}, j.data.Doubts...), Nothing: err.Error()}
	}
	j.found = res
	return nil
}

func (app *App) workers() int {
	if app.Workers > 0 {
		return app.Workers
	}
	return runtime.GOMAXPROCS(0)
}

// readAmount reads an amount to make: a mass or an amount of substance.
func readAmount(text string) (shelf.Amount, error) {
	a, err := shelf.ParseAmount(text)
	if err != nil {
		return a, fmt.Errorf("%s: an amount such as 5 g, 20 mmol or 1 kg was expected", quoted(text))
	}
	if a.Mol <= 0 && a.Grams <= 0 {
		return a, fmt.Errorf("%q: a mass or an amount of substance was expected, such as 5 g or 20 mmol", text)
	}
	return a, nil
}

// molOf reads an amount to make as mol of the target.
func molOf(text string, target *molecule.Molecule) (float64, error) {
	a, err := readAmount(text)
	if err != nil || a.Mol > 0 {
		return a.Mol, err
	}
	return a.Grams / target.Formula().MolarMass(), nil
}

// echo is the first line of every result: what was read.
func (j *job) echo() string {
	f := j.target.Formula()
	name := j.name
	if name == "" {
		name = smiles.Write(j.target)
	}
	line := fmt.Sprintf("target: %s, %s, %.2f g/mol, read as %s", name, f, f.MolarMass(), j.readAs)
	if note := marksNote(j.target); note != "" {
		line += "; " + note
	}
	return line
}

func dirOf(path string) string { return filepath.Dir(path) }
