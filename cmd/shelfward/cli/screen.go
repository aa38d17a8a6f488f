package cli

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/restricted"
	"shelfward/molecule/smiles"
	"shelfward/planner/route"
)

// declinedJSON is all that --json prints of a declined target.
type declinedJSON struct {
	Declined declinedClass `json:"declined"`
	Doubts   []string      `json:"doubts"`
}

type declinedClass struct {
	Class     string `json:"class"`
	Publisher string `json:"publisher"`
	Text      string `json:"text"`
}

// screen declines a restricted target before anything is searched: status 4, nothing else printed.
func (app *App) screen(j *job) error {
	if j.room.Restricted == nil || j.target == nil {
		return nil
	}
	return app.decline(j.room.Restricted, j.target)
}

// declineProducts screens what a step to be judged would make, each component alone.
func (app *App) declineProducts(fsys fs.FS, products []*molecule.Molecule) error {
	s, err := restricted.Load(fsys)
	if err != nil {
		return failWith(exitUsage, err)
	}
	for _, p := range products {
		for _, part := range p.Split() {
			if v := s.Product(part); v.Declined() {
				return app.declined(v)
			}
		}
	}
	return nil
}

func (app *App) decline(s *restricted.Screen, m *molecule.Molecule) error {
	if v := s.Target(m); v.Declined() {
		return app.declined(v)
	}
	return nil
}

// secondLook bounds the search that tells 'no route' from 'no route but through restricted compounds'.
const secondLook = 30 * time.Second

// declineLeftOut is a *declinedError when a search that left steps out found nothing, and one without the
// screen finds routes: then every route passes through a restricted intermediate. Of those routes only
// their number and the class of the intermediate are told.
func (app *App) declineLeftOut(ctx context.Context, j *job, p *route.Plan, o route.Options) error {
	if len(p.Routes) > 0 || p.Search.LeftOut == 0 || ctx.Err() != nil {
		return nil
	}
	world := j.room.World()
	world.Declined = nil
	left := o.Time - time.Duration(p.Search.Seconds*float64(time.Second))
	if left <= 0 {
		return nil // what the rest of the search would have found is not known
	}
	o.Time, o.Progress = min(left, secondLook), nil
	all, err := route.Make(ctx, world, j.target, o)
	if err != nil {
		return failWith(exitUsage, err)
	}
	for _, r := range all.Routes {
		for _, s := range r.Steps {
			m, err := smiles.Read(s.Product)
			if err != nil {
				return err
			}
			if v := j.room.Restricted.Intermediate(m); v.Declined() {
				v.Text = fmt.Sprintf("No route is shown. %s Class: %s. The official list is published by %s.", j.room.Restricted.LeftOut(len(all.Routes)), v.Class, v.Publisher)
				return &declinedError{v}
			}
		}
	}
	return nil
}

// declinedError is the refusal of a target or of all its routes, not printed yet.
type declinedError struct{ verdict restricted.Verdict }

func (e *declinedError) Error() string { return e.verdict.Text }

// printDeclined prints a refusal, and passes other errors on.
func (app *App) printDeclined(err error) error {
	var d *declinedError
	if errors.As(err, &d) {
		return app.declined(d.verdict)
	}
	return err
}

// declined prints the refusal and nothing else.
func (app *App) declined(v restricted.Verdict) error {
	if app.JSON {
		if err := printJSON(app.Out, declinedJSON{declinedClass{v.Class, v.Publisher, v.Text}, []string{}}); err != nil {
			return err
		}
	} else {
		fmt.Fprintln(app.Out, v.Text)
	}
	return failWith(exitDeclined, errSilent)
}
