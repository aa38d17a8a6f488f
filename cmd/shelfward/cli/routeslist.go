package cli

import (
	"context"
	"errors"
	"fmt"
	"io"
	"time"

	"shelfward/molecule/smiles"
	"shelfward/planner/route"
)

// runList answers `routes --targets FILE`.
func (o *routesOptions) runList(ctx context.Context) error {
	app := o.app
	if o.graph != "" || o.routeGraph != "" {
		return usageError("--graph and --route-graph take one target, not a list")
	}
	records, err := app.readTargets(o.targets)
	if err != nil {
		return err
	}
	room, err := app.room(nil, "")
	if err != nil {
		return err
	}
	job, err := app.jobMark(&o.flags)
	if err != nil {
		return err
	}
	l := &targetList{app: app, flags: &o.flags, room: room, records: records, job: job}
	if err := l.checkWishes(ctx); err != nil {
		return err
	}
	take, finish, err := o.answersTo(l)
	if err != nil {
		return err
	}
	before := l.tally.done()
	began := time.Now()
	report := app.listProgress(l, before, began)
	err = l.run(ctx, before, func(a *targetAnswer) error {
		if err := take(a); err != nil {
			return err
		}
		l.tally.add(a)
		report()
		return nil
	})
	if closing := finish(); err == nil {
		err = closing
	}
	if err == nil {
		err = room.Shelf.Err()
	}
	interrupted := errors.Is(err, context.Canceled)
	if err != nil && !interrupted {
		return err
	}
	if err := o.printSummary(l.summary(before, time.Since(began))); err != nil {
		return err
	}
	return l.status(interrupted, o.out != "")
}

// checkWishes tries the wishes on a lone atom that nobody plans, so that a mistake in them is told before
// anything is written, and what a target says later is about that target.
func (l *targetList) checkWishes(ctx context.Context) error {
	m, err := smiles.Read("[Xe]")
	if err != nil {
		return err
	}
	o, err := l.app.options(&job{room: l.room, target: m}, l.flags)
	if err != nil {
		return err
	}
	o.MaxExpanded, o.Progress = 1, nil
	_, err = route.Make(ctx, l.room.World(), m, o)
	return failWith(exitUsage, err)
}

// answersTo says where the answers go: to --out after those that stand there already, else to standard
// output.
func (o *routesOptions) answersTo(l *targetList) (take func(*targetAnswer) error, finish func() error, err error) {
	if o.out == "" {
		return func(a *targetAnswer) error {
			line, err := answerLine(a)
			if err == nil {
				_, err = o.app.Out.Write(line)
			}
			return err
		}, func() error { return nil }, nil
	}
	f, err := openAnswers(o.out, l.job, l.records, l.tally.add)
	if err != nil {
		return nil, nil, err
	}
	return f.add, f.close, nil
}

// printSummary prints the result over the list where the answers do not stand: on standard output with
// --out, else on standard error.
func (o *routesOptions) printSummary(s *listSummary) error {
	var w io.Writer = o.app.Out
	if o.out == "" {
		w = o.app.ErrOut
	}
	if o.app.JSON {
		return printJSON(w, s)
	}
	return s.writeText(w)
}

// status is 0 if a target was solved, 3 if none was, 4 if all were declined, 2 if one could not be read,
// 1 after an interrupt.
func (l *targetList) status(interrupted, kept bool) error {
	t := &l.tally
	switch {
	case interrupted && kept:
		return fmt.Errorf("interrupted: the same command goes on after target %d of %d", t.done(), len(l.records))
	case interrupted:
		return errors.New("interrupted: with --out FILE the next run would go on from here")
	case t.count[targetUnreadable] > 0:
		return usageError("%d of %d targets could not be read; their lines say why", t.count[targetUnreadable], len(l.records))
	case t.count[targetSolved]+t.count[targetOnShelf] > 0:
		return nil
	case t.count[targetDeclined] > 0 && t.count[targetOpen] == 0:
		return failWith(exitDeclined, errSilent)
	}
	return failWith(exitNothing, errSilent)
}

// listProgress reports every two seconds on standard error how far the list is and how long it will take.
func (app *App) listProgress(l *targetList, before int, began time.Time) func() {
	if app.Quiet {
		return func() {}
	}
	last := began
	return func() {
		now := time.Now()
		if now.Sub(last) < 2*time.Second {
			return
		}
		last = now
		done := l.tally.done()
		each := now.Sub(began) / time.Duration(done-before)
		left := each * time.Duration(len(l.records)-done)
		fmt.Fprintf(app.ErrOut, "targets: %d of %d, %d solved, %.1f a minute, about %s left\n", done, len(l.records),
			l.tally.count[targetSolved]+l.tally.count[targetOnShelf], time.Minute.Seconds()/each.Seconds(), left.Round(time.Second))
	}
}
