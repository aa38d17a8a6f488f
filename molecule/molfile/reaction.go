package molfile

import (
	"bufio"
	"errors"
	"io"
	"strings"
)

// Reaction is a reaction file: its parts in order. Atom classes (Atom.Class) hold the atom map.
type Reaction struct {
	Title                       string
	Reactants, Products, Agents []*Record
}

// ReadReaction reads one V2000 reaction file. Errors are *Error; Record counts its molecules.
func ReadReaction(in io.Reader) (*Reaction, error) {
	r := &Reader{in: bufio.NewReaderSize(in, 1<<16)}
	b := &block{r: r}
	head, err := b.line("$RXN")
	if err != nil {
		return nil, err
	}
	if !strings.HasPrefix(head, "$RXN") {
		return nil, b.fail("expected $RXN on the first line of a reaction file, found %q", clip(head))
	}
	if strings.Contains(head, "V3000") {
		return nil, b.fail("a V3000 reaction file; only V2000 is read")
	}
	out := &Reaction{}
	var lines [4]string
	for i, what := range []string{"the name", "the program line", "the comment", "the counts"} {
		if lines[i], err = b.line(what); err != nil {
			return nil, err
		}
	}
	out.Title = strings.TrimSpace(lines[0])
	var n [3]int
	for i := range n {
		v, ok := column(lines[3], 3*i, 3*i+3)
		if !ok || v < 0 || v > 99 {
			return nil, b.fail("expected the counts of reactants and products in columns 1-6, found %q", clip(lines[3]))
		}
		n[i] = v
	}
	for i, list := range []*[]*Record{&out.Reactants, &out.Products, &out.Agents} {
		for range n[i] {
			rec, err := r.reactionPart()
			if err != nil {
				return nil, err
			}
			*list = append(*list, rec)
		}
	}
	return out, nil
}

// reactionPart reads $MOL and the table behind it.
func (r *Reader) reactionPart() (*Record, error) {
	r.record++
	b := &block{r: r, record: Record{Number: r.record, Line: r.line + 2}}
	s, err := b.line("$MOL")
	if err != nil {
		return nil, err
	}
	if !strings.HasPrefix(s, "$MOL") {
		return nil, b.fail("expected $MOL, found %q", clip(s))
	}
	title, err := b.line("a title line")
	if err != nil {
		return nil, err
	}
	b.record.Title = strings.TrimSpace(title)
	if err := b.read(); err != nil {
		return nil, err
	}
	return b.finish()
}

// Read reads the first record of a molfile or SD file.
func Read(in io.Reader) (*Record, error) {
	rec, err := NewReader(in).Next()
	if errors.Is(err, io.EOF) {
		return nil, &Error{1, 1, "expected a molfile, found nothing"}
	}
	return rec, err
}
