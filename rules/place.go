package rules

import (
	"fmt"
	"slices"
	"strings"

	"gopkg.in/yaml.v3"
)

// Place is a position in a YAML file. Embedded in a struct, or used as the type of a field tagged
// yaml:"-", it is filled by Decode with the place where the struct's mapping begins.
type Place struct {
	Path         string
	Line, Column int // from 1
}

// String writes the place as messages begin: "rules/groups.yaml:14".
func (p Place) String() string { return fmt.Sprintf("%s:%d", p.Path, p.Line) }

// Errorf makes an error at the place.
func (p Place) Errorf(format string, args ...any) *Error {
	return &Error{Path: p.Path, Line: p.Line, Column: p.Column, Text: fmt.Sprintf(format, args...)}
}

// Text is a string that remembers where its first character stands, for messages about what is
// wrong inside it. The zero Text stands for a key that was not written.
type Text struct {
	Value        string
	Line, Column int // of the first character of Value, inside any quotes; from 1, 0 if not written
}

// UnmarshalYAML reads a text and its place; a number, list or mapping is an error.
func (t *Text) UnmarshalYAML(n *yaml.Node) error {
	if err := textProblem(n); err != "" {
		return fmt.Errorf("%s", err)
	}
	*t = Text{Value: n.Value, Line: n.Line, Column: n.Column}
	if n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle) != 0 {
		t.Column++
	}
	return nil
}

// Written reports whether the key was there.
func (t Text) Written() bool { return t.Line > 0 }

// String returns the value.
func (t Text) String() string { return t.Value }

// Errorf makes an error at the text's place in the file path.
func (t Text) Errorf(path, format string, args ...any) *Error {
	return &Error{Path: path, Line: t.Line, Column: t.Column, Text: fmt.Sprintf(format, args...)}
}

// ErrorAt makes an error at the character of the text with the given offset (bytes from 0). It adds
// the text and a caret below the offending character, as long as the text is one line.
func (t Text) ErrorAt(path string, offset int, format string, args ...any) *Error {
	e := t.Errorf(path, format, args...)
	e.Column += offset
	if offset >= 0 && offset <= len(t.Value) && !strings.Contains(t.Value, "\n") {
		e.Detail = "    " + t.Value + "\n    " + strings.Repeat(" ", len([]rune(t.Value[:offset]))) + "^"
	}
	return e
}

// Error is one mistake in a file. Its message is one line, "path:line:column: what".
type Error struct {
	Path         string
	Line, Column int    // from 1; 0 unknown
	Text         string // what is wrong and what was expected
	Detail       string // further lines for a terminal, such as a caret; may be empty
}

// Error returns the one-line message.
func (e *Error) Error() string {
	switch {
	case e.Line == 0:
		return e.Path + ": " + e.Text
	case e.Column > 0:
		return fmt.Sprintf("%s:%d:%d: %s", e.Path, e.Line, e.Column, e.Text)
	}
	return fmt.Sprintf("%s:%d: %s", e.Path, e.Line, e.Text)
}

// maxListed caps the errors an ErrorList prints: more than a screen of them is not read.
const maxListed = 10

// ErrorList collects mistakes of one or more files.
type ErrorList []*Error

// Add appends err: an *Error, an ErrorList, or any other error at the place. A nil err is ignored.
func (l *ErrorList) Add(p Place, err error) {
	switch e := err.(type) {
	case nil:
	case *Error:
		*l = append(*l, e)
	case ErrorList:
		*l = append(*l, e...)
	default:
		*l = append(*l, p.Errorf("%v", err))
	}
}

// Err sorts the list by file, line and column, drops repeats, and returns it as an error; nil if
// the list is empty.
func (l ErrorList) Err() error {
	if len(l) == 0 {
		return nil
	}
	slices.SortStableFunc(l, compareErrors)
	return slices.CompactFunc(l, func(a, b *Error) bool { return *a == *b })
}

func compareErrors(a, b *Error) int {
	if c := strings.Compare(a.Path, b.Path); c != 0 {
		return c
	}
	if a.Line != b.Line {
		return a.Line - b.Line
	}
	if a.Column != b.Column {
		return a.Column - b.Column
	}
	return strings.Compare(a.Text, b.Text)
}

// Error prints at most ten mistakes, one line each, and says how many more there are.
func (l ErrorList) Error() string {
	var sb strings.Builder
	for i, e := range l {
		if i == maxListed {
			fmt.Fprintf(&sb, "\n... and %d more", len(l)-maxListed)
			break
		}
		if i > 0 {
			sb.WriteByte('\n')
		}
		sb.WriteString(e.Error())
	}
	return sb.String()
}
