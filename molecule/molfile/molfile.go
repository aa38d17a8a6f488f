// Package molfile reads and writes molfiles, SD files and reaction files in the forms V2000 and V3000
// (BIOVIA, CTfile Formats). Records are streamed; an error names record and line, and reading goes
// on with the next record. Stereo comes from wedges and 2D or 3D coordinates, or from atom parities
// where all coordinates are zero. Query atoms or bonds are refused with a message.
package molfile

import (
	"fmt"

	"shelfward/molecule"
)

// Point is the place of an atom; bonds are about 1 long in files from drawing programs, in
// angstrom in files of measured structures. All zero means no coordinates.
type Point struct{ X, Y, Z float64 }

// Field is one data item of an SD record: its name and its lines joined by newlines.
type Field struct{ Name, Value string }

// Record is one structure of a file.
type Record struct {
	Number      int // from 1
	Line        int // line of the file where the record starts, from 1
	Title       string
	Molecule    *molecule.Molecule
	Coordinates []Point // one per atom of Molecule; nil where the file has none
	Fields      []Field // in file order; empty for a plain molfile
	Wedges      []Wedge // for writing in a plane: the wedges of the drawing; nil lets the writer choose
	Relative    bool    // a V3000 group says that the centres are known relative to each other only
}

// Wedge is a bond drawn as a wedge (Up) or a hash; its narrow end stands at atom From.
type Wedge struct {
	Bond, From int32
	Up         bool
}

// Field returns the value of the first field with the name, and whether there is one.
func (r *Record) Field(name string) (string, bool) {
	for _, f := range r.Fields {
		if f.Name == name {
			return f.Value, true
		}
	}
	return "", false
}

// Error is a record that cannot be read.
type Error struct {
	Record  int // from 1
	Line    int // from 1
	Message string
}

func (e *Error) Error() string {
	return fmt.Sprintf("record %d, line %d: %s", e.Record, e.Line, e.Message)
}

// bondStereo is the stereo field of a bond.
const (
	stereoNone   = 0
	stereoWedge  = 1
	stereoCis    = 3 // cis or trans, either
	stereoEither = 4
	stereoHash   = 6
)
