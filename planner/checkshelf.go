package planner

import (
	"context"
	"io/fs"

	"shelfward/planner/shelf"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
)

// CheckShelf reads a shelf file with everything that Open would know, and reports every row.
func CheckShelf(fsys fs.FS, path string) (*shelf.Report, error) {
	known, err := knownSubstances(fsys)
	if err != nil {
		return nil, err
	}
	return shelf.Check(fsys, path, known)
}

// ImportShelf makes an index of shelf files with everything that Open would know.
func ImportShelf(ctx context.Context, fsys fs.FS, files []string, to string, o shelf.ImportOptions) (shelf.ImportReport, error) {
	known, err := knownSubstances(fsys)
	if err != nil {
		return shelf.ImportReport{}, err
	}
	known.Structure = readName
	return shelf.Import(ctx, fsys, files, to, known, o)
}

// knownSubstances loads the lists that rows are read with.
func knownSubstances(fsys fs.FS) (*shelf.Known, error) {
	reagents, err := reagent.Load(fsys)
	if err != nil {
		return nil, err
	}
	hazards, err := hazard.Load(fsys, reagents)
	if err != nil {
		return nil, err
	}
	return &shelf.Known{Reagents: reagents, Hazards: hazards}, nil
}
