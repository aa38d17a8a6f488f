package cli

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"
	"sync"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/molfile"
	"shelfward/molecule/restricted"
	"shelfward/molecule/smiles"
	"shelfward/planner"
	"shelfward/planner/route"
)

// What became of one target of a list.
const (
	targetSolved     = "solved"     // there is a route
	targetOnShelf    = "on shelf"   // nothing need be made
	targetOpen       = "open"       // no route was found
	targetDeclined   = "declined"   // restricted
	targetUnreadable = "unreadable" // no structure, or one that does not go with the wishes
)

// targetAnswer is the line of one target: what it was and the object that `routes --json` prints for it.
type targetAnswer struct {
	Record int    `json:"record"` // line of a file of SMILES, number of the record of an SD file
	Title  string `json:"title"`
	Status string `json:"status"`
	Job    string `json:"job"`   // of the options, rules and shelf the answer was made with
	Input  string `json:"input"` // of the record as it was read
	Error  string `json:"error,omitempty"`

	Declined *declinedClass `json:"declined,omitempty"`
	*route.Plan
	Doubts []string `json:"doubts"`
}

// targetRecord is one target to plan.
type targetRecord struct {
	number int
	mark   string // of the record as it was read
	item   item
}

// maxTargets bounds a list: its records are held in memory.
const maxTargets = 200_000

// purchasesKept is how many single purchases are kept of a target without a route, for those that several
// targets have in common.
const purchasesKept = 64

// readTargets reads the list: SMILES one a line with a title, or an SD file. Blank lines, lines that begin
// with # and a first line that names the columns are no targets.
func (app *App) readTargets(path string) ([]targetRecord, error) {
	in, closeIn, err := app.open(path)
	if err != nil {
		return nil, err
	}
	defer closeIn()
	var src source = &lineSource{in: bufio.NewReaderSize(in, 1<<16)}
	switch strings.ToLower(filepath.Ext(path)) {
	case ".mol", ".sdf", ".sd":
		src = &molSource{in: molfile.NewReader(in)}
	}
	var list []targetRecord
	number := 0
	for done := false; !done; {
		var items []item
		items, done = src.next(batchItems)
		for _, it := range items {
			number++
			text := strings.TrimSpace(it.line)
			if it.record == nil && it.done == nil && (text == "" || text[0] == '#' || number == 1 && strings.EqualFold(strings.Fields(text)[0], "smiles")) {
				continue
			}
			list = append(list, targetRecord{number: number, item: it, mark: it.mark()})
		}
		if len(list) > maxTargets {
			return nil, usageError("%s: more than %d targets", fileLabel(path), maxTargets)
		}
	}
	if len(list) == 0 {
		return nil, usageError("%s: no target in it: expected SMILES, one a line, or an SD file", fileLabel(path))
	}
	return list, nil
}

// mark tells a record from others.
func (it item) mark() string {
	switch {
	case it.record != nil:
		return markOf(it.title, smiles.Write(it.record.Molecule))
	case it.done != nil:
		return markOf(it.done.title, it.done.trouble)
	}
	return markOf(it.line)
}

// targetList plans a list of targets, several at a time.
type targetList struct {
	app     *App
	flags   *planFlags
	room    *planner.Room
	records []targetRecord
	job     string
	tally   listTally
}

// run plans the records from first on and hands the answers out in order. It stops at the first error of
// take and when ctx ends; what was under way then is dropped.
func (l *targetList) run(ctx context.Context, first int, take func(*targetAnswer) error) error {
	ctx, stop := context.WithCancel(ctx)
	defer stop()
	workers := min(l.app.workers(), len(l.records)-first)
	each := max(1, l.app.workers()/max(1, workers))
	type result struct {
		answer *targetAnswer
		err    error
	}
	results := make([]chan result, len(l.records))
	for i := range results {
		results[i] = make(chan result, 1)
	}
	todo := make(chan int)
	var wait sync.WaitGroup
	defer wait.Wait()
	defer stop()
	ahead := make(chan struct{}, 32*max(1, workers)) // answers that wait for one before them
	wait.Go(func() {
		defer close(todo)
		for i := first; i < len(l.records); i++ {
			select {
			case ahead <- struct{}{}:
			case <-ctx.Done():
				return
			}
			select {
			case todo <- i:
			case <-ctx.Done():
				return
			}
		}
	})
	for range workers {
		wait.Go(func() {
			for i := range todo {
				a, err := l.answer(ctx, &l.records[i], each)
				results[i] <- result{a, err}
			}
		})
	}
	for i := first; i < len(l.records); i++ {
		var r result
		select {
		case r = <-results[i]:
		case <-ctx.Done():
			return ctx.Err()
		}
		if r.err != nil {
			return r.err
		}
		if err := take(r.answer); err != nil {
			return err
		}
		<-ahead
	}
	return nil
}

// answer plans one target. Everything that is wrong with the target itself is in the answer; an error is
// one of the whole list, or that of ctx.
func (l *targetList) answer(ctx context.Context, rec *targetRecord, workers int) (*targetAnswer, error) {
	a := &targetAnswer{Record: rec.number, Job: l.job, Input: rec.mark, Doubts: []string{}}
	m, title, err := rec.item.structure()
	a.Title = title
	if err == nil {
		err = checkWhole(m, smiles.Write(m))
	}
	if err != nil {
		a.Status, a.Error = targetUnreadable, err.Error()
		return a, nil
	}
	if v := l.room.Restricted.Target(m); v.Declined() {
		return a.decline(v), nil
	}
	j := &job{room: l.room, target: m, readAs: "SMILES"}
	o, err := l.app.options(j, l.flags)
	if err != nil { // the wishes were tried before: this target does not go with them
		a.Status, a.Error = targetUnreadable, err.Error()
		return a, nil
	}
	o.Workers, o.Progress, o.Openings = workers, nil, purchasesKept
	o.Memory /= max(1, l.app.workers()/workers) // as many are planned at a time, whatever the length of the list
	p, err := l.app.search(ctx, j, o)
	var declined *declinedError
	switch {
	case errors.As(err, &declined):
		return a.decline(declined.verdict), nil
	case err != nil:
		return nil, err
	case ctx.Err() != nil:
		return nil, ctx.Err() // cut short: not the answer that the limits give
	}
	a.Plan, a.Doubts = p, p.Doubts
	switch {
	case len(p.Routes) == 0:
		a.Status = targetOpen
	case len(p.Routes[0].Steps) == 0:
		a.Status = targetOnShelf
	default:
		a.Status = targetSolved
	}
	return a, nil
}

func (a *targetAnswer) decline(v restricted.Verdict) *targetAnswer {
	a.Status, a.Title, a.Plan = targetDeclined, "", nil
	a.Declined = &declinedClass{v.Class, v.Publisher, v.Text}
	return a
}

// listTally counts answers and keeps what the summary needs.
type listTally struct {
	count map[string]int
	opens map[int][]route.Opening // by record, of targets without a route
}

func (t *listTally) add(a *targetAnswer) {
	if t.count == nil {
		t.count, t.opens = map[string]int{}, map[int][]route.Opening{}
	}
	t.count[a.Status]++
	if a.Status == targetOpen && a.Plan != nil {
		t.opens[a.Record] = a.Plan.WouldOpen
	}
}

func (t *listTally) done() int {
	n := 0
	for _, count := range t.count {
		n += count
	}
	return n
}

// listSummary is the result over a list.
type listSummary struct {
	Targets     int                   `json:"targets"`
	Answered    int                   `json:"answered"`
	Solved      int                   `json:"solved"`
	OnShelf     int                   `json:"on_shelf"`
	Open        int                   `json:"open"`
	Declined    int                   `json:"declined"`
	Unreadable  int                   `json:"unreadable"`
	SolvedShare float64               `json:"solved_share"` // of the targets that could be planned
	Before      int                   `json:"before"`       // answered in earlier runs
	Seconds     float64               `json:"seconds"`      // of this run
	PerMinute   float64               `json:"per_minute"`   // targets answered in this run
	WouldOpen   []route.CommonOpening `json:"would_open"`
	Doubts      []string              `json:"doubts"`
}

func (l *targetList) summary(before int, took time.Duration) *listSummary {
	t := &l.tally
	s := &listSummary{Targets: len(l.records), Answered: t.done(), Solved: t.count[targetSolved], OnShelf: t.count[targetOnShelf], Open: t.count[targetOpen],
		Declined: t.count[targetDeclined], Unreadable: t.count[targetUnreadable], Before: before, Seconds: took.Seconds(),
		WouldOpen: route.CommonOpenings(t.opens), Doubts: []string{}}
	if planned := s.Solved + s.OnShelf + s.Open; planned > 0 {
		s.SolvedShare = float64(s.Solved+s.OnShelf) / float64(planned)
	}
	if took > 0 {
		s.PerMinute = float64(s.Answered-before) / took.Minutes()
	}
	if s.Answered < s.Targets {
		s.Doubts = append(s.Doubts, fmt.Sprintf("Only %d of %d targets are answered so far.", s.Answered, s.Targets))
	}
	if l.room.Invented {
		s.Doubts = append(s.Doubts, "The shelf holds the built-in example; its amounts, places and prices are invented.")
	}
	return s
}

func (s *listSummary) writeText(w io.Writer) error {
	for _, d := range s.Doubts {
		fmt.Fprintln(w, d)
	}
	fmt.Fprintf(w, "%d targets: %d solved, %d on the shelf, %d without a route", s.Answered, s.Solved, s.OnShelf, s.Open)
	for _, x := range []struct {
		n    int
		what string
	}{{s.Declined, "declined"}, {s.Unreadable, "unreadable"}} {
		if x.n > 0 {
			fmt.Fprintf(w, ", %d %s", x.n, x.what)
		}
	}
	fmt.Fprintln(w)
	if planned := s.Solved + s.OnShelf + s.Open; planned > 0 {
		fmt.Fprintf(w, "solved share: %.0f %% of the %d that could be planned\n", 100*s.SolvedShare, planned)
	}
	if s.Answered > s.Before {
		fmt.Fprintf(w, "throughput: %.1f targets a minute (%d in %.0f s)\n", s.PerMinute, s.Answered-s.Before, s.Seconds)
	}
	if len(s.WouldOpen) > 0 {
		fmt.Fprintln(w, "single purchases that would open most of the rest, as far as it was searched:")
	}
	for _, c := range s.WouldOpen {
		name := c.Name
		if name == "" {
			name = c.SMILES
		}
		fmt.Fprintf(w, "  %s (%s, %.1f g/mol): %d, %d of them not opened by those above\n", name, c.SMILES, c.MolarMass, c.Opens, c.More)
	}
	return nil
}

// structure returns the molecule of a record.
func (it item) structure() (*molecule.Molecule, string, error) {
	switch {
	case it.done != nil:
		return nil, it.done.title, errors.New(it.done.trouble)
	case it.record != nil:
		return it.record.Molecule, it.title, nil
	}
	text, title, trouble := splitLine(it.line)
	if trouble != "" {
		return nil, "", errors.New(trouble)
	}
	m, err := smiles.Read(text)
	return m, title, err
}
