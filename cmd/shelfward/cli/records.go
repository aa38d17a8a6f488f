package cli

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/molfile"
	"shelfward/molecule/smiles"
)

// maxLine is the longest line of a SMILES file that is read; a longer one is a failed record.
const maxLine = 1 << 20

// batchItems is how many records one worker takes at a time.
const batchItems = 512

// source gives the records of a file, up to most at a time; done says that it holds no more.
type source interface {
	next(most int) (items []item, done bool)
}

// item is one record before its conversion: a line still to be read, a structure, or what is already
// known about it.
type item struct {
	line     string
	record   *molfile.Record
	reaction *molfile.Reaction
	title    string
	done     *converted
}

// converted is the answer for one record; a note is said beside a value, a trouble in its place.
type converted struct{ value, title, trouble, note string }

// convert reads the record where that is still to be done, and writes it.
func (it item) convert(write func(*molfile.Record) (string, error)) converted {
	switch {
	case it.done != nil:
		return *it.done
	case it.record == nil:
		text, title, trouble := splitLine(it.line)
		if trouble != "" {
			return converted{trouble: trouble}
		}
		m, err := smiles.Read(text)
		if err != nil {
			return converted{title: title, trouble: err.Error()}
		}
		it.record, it.title = &molfile.Record{Title: title, Molecule: m}, title
	}
	value, err := write(it.record)
	if err != nil {
		return converted{title: it.title, trouble: err.Error()}
	}
	return converted{value: value, title: it.title, note: recordNote(it.record)}
}

// recordNote says what of a record its structure does not hold, "" where it holds all.
func recordNote(r *molfile.Record) string {
	note := marksNote(r.Molecule)
	if r.Relative && len(r.Molecule.Centers()) > 0 {
		if note != "" {
			note += "; "
		}
		note += "its marks are relative: the racemate or one of two mirror images"
	}
	return note
}

// marksNote says that stereo marks of m were left out, "" where none were.
func marksNote(m *molecule.Molecule) string {
	n := m.MarksLeftOut()
	if n == 0 {
		return ""
	}
	marks := "stereo marks"
	if n == 1 {
		marks = "stereo mark"
	}
	return fmt.Sprintf("%d %s left out (an axis such as an allene or a biaryl, a shape that is no tetrahedron, or wedges that contradict each other)", n, marks)
}

// splitLine parts a line of a SMILES file into structure and title.
func splitLine(line string) (text, title, trouble string) {
	if len(line) > maxLine {
		return "", "", fmt.Sprintf("the line is longer than %d characters", maxLine)
	}
	text = strings.TrimSpace(line)
	if i := strings.IndexAny(text, " \t"); i >= 0 {
		return text[:i], strings.TrimSpace(text[i+1:]), ""
	}
	return text, "", ""
}

// listSource gives items that are at hand.
type listSource struct{ items []item }

func (s *listSource) next(int) ([]item, bool) { return s.items, true }

// lineSource reads SMILES, one a line.
type lineSource struct{ in *bufio.Reader }

// next reads up to most lines; a line beyond maxLine is cut so that it fails as a record.
func (s *lineSource) next(most int) (items []item, done bool) {
	var line []byte
	for len(items) < most {
		chunk, err := s.in.ReadSlice('\n')
		if len(line) <= maxLine {
			line = append(line, chunk...)
		}
		if err == bufio.ErrBufferFull {
			continue
		}
		if err != nil && len(line) == 0 {
			return items, true
		}
		items = append(items, item{line: strings.TrimRight(string(line), "\r\n")})
		line = line[:0]
		if err != nil {
			return items, true
		}
	}
	return items, false
}

// molSource reads the records of a molfile or SD file.
type molSource struct{ in *molfile.Reader }

func (s *molSource) next(most int) (items []item, done bool) {
	for len(items) < most {
		rec, err := s.in.Next()
		var bad *molfile.Error
		switch {
		case errors.Is(err, io.EOF):
			return items, true
		case errors.As(err, &bad):
			items = append(items, item{done: &converted{trouble: fmt.Sprintf("line %d: %s", bad.Line, bad.Message)}})
		case err != nil:
			return append(items, item{done: &converted{trouble: err.Error()}}), true
		default:
			items = append(items, item{record: rec, title: rec.Title})
		}
	}
	return items, false
}
