package sheet

import (
	"strings"
	"unicode/utf8"
)

// noBreak is a space at which no line is broken.
const noBreak = "\u00a0"

// column of a text table: its width in characters and whether it is set to the right.
type column struct {
	head  string
	width int
	right bool
}

// table prints rows of fixed columns; a cell that is too wide goes on in further lines of its column.
func (p *printer) table(columns []column, rows [][]string) {
	heads := make([]string, len(columns))
	for i, c := range columns {
		heads[i] = c.head
	}
	p.row(columns, heads)
	for _, r := range rows {
		if len(r) == 1 { // a heading over rows
			p.line("%s", r[0])
			continue
		}
		p.row(columns, r)
	}
}

func (p *printer) row(columns []column, cells []string) {
	lines := make([][]string, len(columns))
	most := 1
	for i, c := range columns {
		lines[i] = fold(cells[i], c.width)
		most = max(most, len(lines[i]))
	}
	for k := range most {
		var b strings.Builder
		for i, c := range columns {
			text := ""
			if k < len(lines[i]) {
				text = lines[i][k]
			}
			if i > 0 {
				b.WriteString(" ")
			}
			b.WriteString(pad(text, c.width, c.right))
		}
		p.line("%s", strings.TrimRight(b.String(), " "))
	}
}

func pad(text string, width int, right bool) string {
	gap := strings.Repeat(" ", max(0, width-utf8.RuneCountInString(text)))
	if right {
		return gap + text
	}
	return text + gap
}

// fold breaks a text into lines of at most width characters, at spaces where there are any, after a
// hyphen or bracket in long names, anywhere else at last.
func fold(text string, width int) (lines []string) {
	line := ""
	for _, word := range strings.FieldsFunc(text, func(r rune) bool { return r == ' ' || r == '\n' }) {
		switch {
		case line == "":
			line = word
		case utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) <= width:
			line += " " + word
		default:
			lines, line = append(lines, line), word
		}
		for utf8.RuneCountInString(line) > width {
			cut := breakAt([]rune(line), width)
			lines, line = append(lines, string([]rune(line)[:cut])), string([]rune(line)[cut:])
		}
	}
	return append(lines, line)
}

// breakAt finds where a word that is too long may be broken.
func breakAt(word []rune, width int) int {
	for i := width; i > width/2; i-- {
		if strings.ContainsRune("-)],", word[i-1]) {
			return i
		}
	}
	return width
}
