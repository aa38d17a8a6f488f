package molfile

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"
)

// Reaction is a reaction file: its parts in order. Atom classes (Atom.Class) hold the atom map.
type Reaction struct {
	Title                       string
	Reactants, Products, Agents []*Record
}

// ReadReaction reads one reaction file, V2000 or V3000. Errors are *Error; Record counts its molecules.
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
	out := &Reaction{}
	for i, what := range []string{"the name", "the program line", "the comment"} {
		s, err := b.line(what)
		if err != nil {
			return nil, err
		}
		if i == 0 {
			out.Title = strings.TrimSpace(s)
		}
	}
	if strings.Contains(head, "V3000") {
		return out, out.read3(b)
	}
	return out, out.read(b)
}

func (out *Reaction) lists() [3]*[]*Record {
	return [3]*[]*Record{&out.Reactants, &out.Products, &out.Agents}
}

// read reads the V2000 form from the counts line on.
func (out *Reaction) read(b *block) error {
	counts, err := b.line("the counts")
	if err != nil {
		return err
	}
	var n [3]int
	for i := range n {
		v, ok := column(counts, 3*i, 3*i+3)
		if !ok || v < 0 || v > 99 {
			return b.fail("expected the counts of reactants and products in columns 1-6, found %q", clip(counts))
		}
		n[i] = v
	}
	for i, list := range out.lists() {
		for range n[i] {
			rec, err := b.r.reactionPart()
			if err != nil {
				return err
			}
			*list = append(*list, rec)
		}
	}
	return nil
}

// sides names the sections of the V3000 form, in the order of lists.
var sides = [3]string{"REACTANT", "PRODUCT", "AGENT"}

// read3 reads the V3000 form from the counts line on.
func (out *Reaction) read3(b *block) error {
	s, err := b.v30("COUNTS")
	if err != nil {
		return err
	}
	f := strings.Fields(s)
	if len(f) < 3 || f[0] != "COUNTS" {
		return b.fail("expected COUNTS with the numbers of reactants and products, found %q", clip(s))
	}
	for i, list := range out.lists() {
		n := 0
		if len(f) > i+1 {
			if n, err = strconv.Atoi(f[i+1]); err != nil || n < 0 || n > 99 {
				return b.fail("expected COUNTS with the numbers of reactants and products, found %q", clip(s))
			}
		}
		if n == 0 {
			if err := b.skipEmpty(sides[i]); err != nil {
				return err
			}
			continue
		}
		if err := b.expect3("BEGIN " + sides[i]); err != nil {
			return err
		}
		for range n {
			b.r.record++
			part := &block{r: b.r, record: Record{Number: b.r.record, Line: b.r.line + 1}}
			if err := part.table3(); err != nil {
				return err
			}
			rec, err := part.finish()
			if err != nil {
				return err
			}
			*list = append(*list, rec)
		}
		if err := b.expect3("END " + sides[i]); err != nil {
			return err
		}
	}
	return nil
}

// skipEmpty passes over an empty section.
func (b *block) skipEmpty(side string) error {
	s, err := b.r.next()
	if err != nil {
		return nil // the end of the file is met by what is expected next
	}
	if strings.TrimSpace(s) != "M  V30 BEGIN "+side {
		b.r.back(s)
		return nil
	}
	return b.expect3("END " + side)
}

// WriteReaction writes a reaction file: V2000, or V3000 where a molecule has more than 999 atoms or
// bonds. Coordinates are as for Write.
func WriteReaction(w io.Writer, x *Reaction) error {
	for _, list := range x.lists() {
		for _, r := range *list {
			if r.Molecule.NumAtoms() > maxV2000 || r.Molecule.NumBonds() > maxV2000 {
				return WriteReactionV3000(w, x)
			}
		}
	}
	counts := fmt.Sprintf("%3d%3d", len(x.Reactants), len(x.Products))
	if len(x.Agents) > 0 {
		counts += fmt.Sprintf("%3d", len(x.Agents))
	}
	out := bufio.NewWriter(w)
	fmt.Fprintf(out, "$RXN\n%s\n  shelfward\n\n%s\n", oneLine(x.Title), counts)
	for _, list := range x.lists() {
		for _, r := range *list {
			t, err := newTable(r)
			if err != nil {
				return err
			}
			fmt.Fprintln(out, "$MOL")
			t.write(out, oneLine(r.Title))
		}
	}
	return out.Flush()
}

// WriteReactionV3000 is WriteReaction in the V3000 form; titles of molecules are lost.
func WriteReactionV3000(w io.Writer, x *Reaction) error {
	out := bufio.NewWriter(w)
	fmt.Fprintf(out, "$RXN V3000\n%s\n  shelfward\n\nM  V30 COUNTS %d %d", oneLine(x.Title), len(x.Reactants), len(x.Products))
	if len(x.Agents) > 0 {
		fmt.Fprintf(out, " %d", len(x.Agents))
	}
	fmt.Fprintln(out)
	for i, list := range x.lists() {
		if len(*list) == 0 {
			continue
		}
		fmt.Fprintf(out, "M  V30 BEGIN %s\n", sides[i])
		for _, r := range *list {
			t, err := newTable(r)
			if err != nil {
				return err
			}
			t.write3(out, r.Relative)
		}
		fmt.Fprintf(out, "M  V30 END %s\n", sides[i])
	}
	fmt.Fprintln(out, "M  END")
	return out.Flush()
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
