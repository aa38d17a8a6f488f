package planner

import (
	"io/fs"

	"shelfward/planner/shelf"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
)

// CheckShelf reads a shelf file with everything that Open would know, and reports every row.
func CheckShelf(fsys fs.FS, path string) (*shelf.Report, error) {
	reagents, err := reagent.Load(fsys)
	if err != nil {
		return nil, err
	}
	hazards, err := hazard.Load(fsys, reagents)
	if err != nil {
		return nil, err
	}
	return shelf.Check(fsys, path, &shelf.Known{Reagents: reagents, Hazards: hazards})
}
