// Package smiles reads and writes OpenSMILES (specification 1.0, opensmiles.org). Reading only
// reports what is written; perceiving chemistry is the molecule package's task. It is read whole:
// bracket atoms, isotopes, charges, classes, tetrahedral and double bond marks, ring closures with
// %nn and %(nnn), dots, aromatic atoms. The marks of shapes other than tetrahedral (@AL @SP @TB
// @OH) are accepted and dropped, and so are allene marks written @ or @@.
package smiles

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"shelfward/molecule"
)

// maxText bounds the text looked at: 2,000 atoms never need as much, and a longer line is a mistake.
const maxText = 200_000

// Error is a text that is no SMILES of a possible molecule.
type Error struct {
	Text     string // the whole text
	Position int    // offset of the offending character in bytes; len(Text) at its end
	Message  string // what was expected, one line without the position
}

// Column is the place of the offending character, counted in characters from 1.
func (e *Error) Column() int {
	return utf8.RuneCountInString(e.Text[:min(e.Position, len(e.Text))]) + 1
}

// Error is one line that names the column.
func (e *Error) Error() string { return fmt.Sprintf("column %d: %s", e.Column(), e.Message) }

// caretWidth is how much of a long text Caret shows on each side of the character.
const caretWidth = 36

// Caret is two lines: the text around the offending character and a caret below it.
func (e *Error) Caret() string {
	runes := []rune(strings.ToValidUTF8(e.Text[:min(len(e.Text), e.Position+4*caretWidth)], "?"))
	at := min(e.Column()-1, len(runes))
	from, to := max(0, at-caretWidth), min(len(runes), at+caretWidth)
	lead := ""
	if from > 0 {
		lead = "..."
	}
	line := []rune(lead + string(runes[from:to]))
	for i, r := range line {
		if r < ' ' {
			line[i] = ' '
		}
	}
	return string(line) + "\n" + strings.Repeat(" ", len(lead)+at-from) + "^"
}

// Read reads one SMILES; errors are *Error and point at the character. Blanks around the text are
// allowed. Explicit hydrogen atoms become hydrogen counts except where they mean more: isotopes,
// charged ones, molecular hydrogen, bridges, and the only mark-bearing neighbour of an imine end.
// Nitrogen written with five bonds (CN(=O)=O) comes out charge-separated (C[N+](=O)[O-]).
func Read(text string) (*molecule.Molecule, error) {
	r := readers.Get().(*reader)
	m, err := r.read(text)
	readers.Put(r)
	if err != nil {
		return nil, err
	}
	return m, nil
}
