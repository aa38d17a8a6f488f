package shelf

import (
	"bytes"
	"fmt"
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

// splitRecords reads delimited text with quoted fields ("" stands for one quotation mark). A quote
// that is never closed ends with its line, so that one mistake does not swallow the rest of the file.
func splitRecords(text string, delimiter byte) []record {
	var records []record
	line := 1
	for pos := 0; pos < len(text) && len(records) <= maxRows; {
		r := record{line: line}
		var next int
		r.fields, next, r.broken = readRecord(text, pos, delimiter)
		line += strings.Count(text[pos:next], "\n")
		pos = next
		if len(r.fields) > 1 || strings.TrimSpace(r.fields[0]) != "" {
			records = append(records, r)
		}
	}
	return records
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

// csvRows reads a table into rows; mistakes of the table itself are errors of their lines.
func csvRows(path string, text string) ([]row, rules.ErrorList) {
	text = strings.ReplaceAll(strings.ReplaceAll(text, "\r\n", "\n"), "\r", "\n")
	header := strings.TrimLeft(text, "\n \t")
	records := splitRecords(text, delimiterOf(header))
	if len(records) == 0 {
		return nil, rules.ErrorList{{Path: path, Text: "the file is empty: expected a header such as name,cas,smiles,amount"}}
	}
	var errs rules.ErrorList
	names, err := headerNames(path, records[0])
	if err != nil {
		return nil, rules.ErrorList{err}
	}
	if len(records) > maxRows {
		return nil, rules.ErrorList{{Path: path, Text: fmt.Sprintf("more than %d rows", maxRows)}}
	}
	var rows []row
	for _, rec := range records[1:] {
		r := row{path: path, line: rec.line, value: map[string]string{}}
		if rec.broken {
			errs = append(errs, r.errorf("a quotation mark is never closed"))
			continue
		}
		if len(rec.fields) > len(names) && strings.Join(rec.fields[len(names):], "") != "" {
			errs = append(errs, r.errorf("%d fields under %d columns: a text with the delimiter in it needs quotation marks", len(rec.fields), len(names)))
			continue
		}
		if strings.TrimSpace(strings.Join(rec.fields, "")) == "" {
			continue
		}
		for i, field := range rec.fields[:min(len(rec.fields), len(names))] {
			r.set(names[i], field)
		}
		rows = append(rows, r)
	}
	return rows, errs
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
