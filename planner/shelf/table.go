package shelf

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode/utf8"

	"shelfward/rules"
)

// Limits of a shelf file: enough for the stock of a large site, small enough to be read at once.
const (
	maxFileBytes = 64 << 20
	maxRows      = 200_000
	maxColumns   = 200
)

// windows1252 maps the bytes 0x80-0x9F; the others are as in Unicode.
var windows1252 = [32]rune{'€', '\u0081', '‚', 'ƒ', '„', '…', '†', '‡', 'ˆ', '‰', 'Š', '‹', 'Œ', '\u008d', 'Ž', '\u008f',
	'\u0090', '‘', '’', '“', '”', '•', '–', '—', '˜', '™', 'š', '›', 'œ', '\u009d', 'ž', 'Ÿ'}

// decodeText returns the file as UTF-8: a byte order mark is dropped, and what is not UTF-8 is read
// as Windows-1252.
func decodeText(data []byte) string {
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	if utf8.Valid(data) {
		return string(data)
	}
	return windows1252Text(data)
}

func windows1252Text(data []byte) string {
	var sb strings.Builder
	for _, b := range data {
		if b >= 0x80 && b < 0xa0 {
			sb.WriteRune(windows1252[b-0x80])
		} else {
			sb.WriteRune(rune(b))
		}
	}
	return sb.String()
}

// record is one line of a table: its fields and where it begins.
type record struct {
	line   int
	fields []string
	broken bool // a quotation mark is never closed
}

// tableReader reads delimited text with quoted fields ("" stands for one quotation mark) record by record, so
// that a file of any length takes little memory. A quote that is never closed ends with its line, so that
// one mistake does not swallow the rest of the file.
type tableReader struct {
	path      string
	in        io.Reader
	text      string // what has been read and not yet handed out, from pos
	pos       int
	ended     bool // in holds no more
	heldCR    bool // the last byte read was a carriage return, which may be half of a line end
	line      int  // of pos, from 1
	delimiter byte
	names     []string // the columns
}

// Sizes of the window on the text: how much is read at once, and how much must stand in it before a
// record is read, so that every quoted field a record may hold is seen whole.
const (
	chunkBytes = 4 << 20
	aheadBytes = maxQuoted*maxColumns + 1<<12
)

// fill reads on until at least most bytes lie ahead or the text ends. Line ends become "\n".
func (t *tableReader) fill(most int) error {
	for !t.ended && len(t.text)-t.pos < most {
		chunk := make([]byte, chunkBytes)
		n, err := io.ReadFull(t.in, chunk)
		if err == io.EOF || err == io.ErrUnexpectedEOF {
			t.ended = true
		} else if err != nil {
			return err
		}
		piece := string(chunk[:n])
		if t.heldCR {
			piece = "\r" + piece
		}
		if t.heldCR = !t.ended && strings.HasSuffix(piece, "\r"); t.heldCR {
			piece = piece[:len(piece)-1]
		}
		if strings.Contains(piece, "\r") {
			piece = strings.ReplaceAll(strings.ReplaceAll(piece, "\r\n", "\n"), "\r", "\n")
		}
		t.text, t.pos = t.text[t.pos:]+piece, 0
	}
	return nil
}

// record returns the next record that is not blank, false at the end.
func (t *tableReader) record() (record, bool, error) {
	for need := aheadBytes; ; {
		if err := t.fill(need); err != nil {
			return record{}, false, err
		}
		if t.pos >= len(t.text) {
			return record{}, false, nil
		}
		r := record{line: t.line}
		var next int
		r.fields, next, r.broken = readRecord(t.text, t.pos, t.delimiter)
		if !t.ended && len(t.text)-next < maxQuoted { // the record may go on behind the window
			if need = 2 * (len(t.text) - t.pos); need > maxFileBytes {
				return record{}, false, &rules.Error{Path: t.path, Line: t.line, Text: fmt.Sprintf("a row is longer than %d MB", maxFileBytes>>20)}
			}
			continue
		}
		t.line += strings.Count(t.text[t.pos:next], "\n")
		t.pos, need = next, aheadBytes
		if len(r.fields) > 1 || strings.TrimSpace(r.fields[0]) != "" {
			return r, true, nil
		}
	}
}

// readRecord reads the fields of the record at pos and returns where the next one begins.
func readRecord(text string, pos int, delimiter byte) (fields []string, next int, broken bool) {
	for {
		var field string
		field, pos, broken = readField(text, pos, delimiter)
		fields = append(fields, field)
		if broken || pos >= len(text) || text[pos] != delimiter || len(fields) > maxColumns {
			break
		}
		pos++
	}
	if end := strings.IndexByte(text[min(pos, len(text)):], '\n'); end >= 0 {
		return fields, pos + end + 1, broken
	}
	return fields, len(text), broken
}

// readField reads one field and returns the position of the delimiter or line end behind it.
func readField(text string, pos int, delimiter byte) (field string, next int, broken bool) {
	start := pos
	for start < len(text) && text[start] == ' ' {
		start++
	}
	if start < len(text) && text[start] == '"' {
		if value, end, ok := quoted(text, start+1); ok {
			for end < len(text) && text[end] != delimiter && text[end] != '\n' {
				end++
			}
			return value, end, false
		}
		broken = true
	}
	end := pos
	for end < len(text) && text[end] != delimiter && text[end] != '\n' {
		end++
	}
	return strings.TrimSpace(text[pos:end]), end, broken
}

// maxQuoted bounds a quoted field: a longer one is a quotation mark that was never closed.
const maxQuoted = 4000

// quoted reads up to the closing quotation mark.
func quoted(text string, pos int) (value string, end int, ok bool) {
	var sb strings.Builder
	for i := pos; i < len(text) && i-pos < maxQuoted; i++ {
		if text[i] != '"' {
			sb.WriteByte(text[i])
			continue
		}
		if i+1 < len(text) && text[i+1] == '"' {
			sb.WriteByte('"')
			i++
			continue
		}
		return strings.TrimSpace(sb.String()), i + 1, true
	}
	return "", pos, false
}

// delimiterOf picks the delimiter under which the header has the most known columns, then the most
// columns.
func delimiterOf(header string) byte {
	best, bestKnown, bestCount := byte(','), -1, 0
	for _, d := range []byte{',', ';', '\t'} {
		fields, _, _ := readRecord(header, 0, d)
		known := 0
		for _, f := range fields {
			if slices.Contains(columns, columnName(f)) {
				known++
			}
		}
		if known > bestKnown || known == bestKnown && len(fields) > bestCount {
			best, bestKnown, bestCount = d, known, len(fields)
		}
	}
	return best
}

// columnName folds a header: letter case, spaces and a unit in brackets do not matter.
func columnName(header string) string {
	name, _, _ := strings.Cut(strings.ToLower(strings.TrimSpace(header)), "(")
	name = strings.TrimSpace(name)
	switch name {
	case "cas number", "cas no", "cas no.", "cas-nr", "cas nr.", "cas rn", "cas#":
		return "cas"
	}
	return name
}

// newTable reads the header of a table. Mistakes are *rules.Error.
func newTable(path string, in io.Reader) (*tableReader, error) {
	t := &tableReader{path: path, in: in, line: 1}
	if err := t.fill(aheadBytes); err != nil {
		return nil, err
	}
	t.delimiter = delimiterOf(strings.TrimLeft(t.text, "\n \t"))
	head, ok, err := t.record()
	if err != nil {
		return nil, err
	}
	if !ok {
		return nil, &rules.Error{Path: path, Text: "the file is empty: expected a header such as name,cas,smiles,amount"}
	}
	names, bad := headerNames(path, head)
	if bad != nil {
		return nil, bad
	}
	t.names = names
	return t, nil
}

// next returns the next row, the mistake found in its place, or io.EOF.
func (t *tableReader) next() (row, *rules.Error, error) {
	for {
		rec, ok, err := t.record()
		if err != nil {
			return row{}, nil, err
		}
		if !ok {
			return row{}, nil, io.EOF
		}
		r := row{path: t.path, line: rec.line, value: map[string]string{}}
		if rec.broken {
			return r, r.errorf("a quotation mark is never closed"), nil
		}
		if len(rec.fields) > len(t.names) && strings.Join(rec.fields[len(t.names):], "") != "" {
			return r, r.errorf("%d fields under %d columns: a text with the delimiter in it needs quotation marks", len(rec.fields), len(t.names)), nil
		}
		if strings.TrimSpace(strings.Join(rec.fields, "")) == "" {
			continue
		}
		for i, field := range rec.fields[:min(len(rec.fields), len(t.names))] {
			r.set(t.names[i], field)
		}
		return r, nil, nil
	}
}

// csvRows reads a table into rows; mistakes of the table itself are errors of their lines.
func csvRows(path string, text string) ([]row, rules.ErrorList) {
	t, err := newTable(path, strings.NewReader(text))
	var rows []row
	var errs rules.ErrorList
	for err == nil {
		var r row
		var bad *rules.Error
		if r, bad, err = t.next(); err != nil {
			break
		}
		if bad != nil {
			errs = append(errs, bad)
			continue
		}
		if rows = append(rows, r); len(rows) >= maxRows {
			return nil, rules.ErrorList{{Path: path, Text: fmt.Sprintf("more than %d rows: `shelfward shelf import` makes an index of it", maxRows)}}
		}
	}
	if err != io.EOF {
		return nil, rules.ErrorList{asError(path, err)}
	}
	return rows, errs
}

// asError gives any error the place of a file.
func asError(path string, err error) *rules.Error {
	var e *rules.Error
	if errors.As(err, &e) {
		return e
	}
	return &rules.Error{Path: path, Text: err.Error()}
}

// set stores a field under its column, or keeps it as one the program does not know.
func (r *row) set(column, value string) {
	if slices.Contains(columns, column) {
		r.value[column] = value
	} else if column != "" && value != "" {
		r.extra = append(r.extra, Field{column, value})
	}
}

// headerNames checks the header: at least one identifying column, none twice.
func headerNames(path string, rec record) ([]string, *rules.Error) {
	var names []string
	for _, f := range rec.fields {
		name := columnName(f)
		if name != "" && slices.Contains(names, name) {
			return nil, &rules.Error{Path: path, Line: rec.line, Text: fmt.Sprintf("the column %q stands twice", name)}
		}
		names = append(names, name)
	}
	for _, needed := range []string{"smiles", "cas", "name"} {
		if slices.Contains(names, needed) {
			return names, nil
		}
	}
	hint := ""
	for _, name := range names {
		if near := rules.Near(name, columns[:3]); near != "" {
			hint = fmt.Sprintf(" (did you mean %q where it says %q?)", near, name)
		}
	}
	return nil, &rules.Error{Path: path, Line: rec.line, Text: "the header has no column smiles, cas or name; one of them is needed" + hint}
}
