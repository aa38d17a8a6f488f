package cli

import (
	"fmt"
	"io/fs"

	"shelfward/molecule"
	"shelfward/molecule/restricted"
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
