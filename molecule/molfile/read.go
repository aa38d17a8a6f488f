package molfile

import (
	"bufio"
	"bytes"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"

	"shelfward/molecule"
)

// maxLine bounds a line; a longer one is an error of its record.
const maxLine = 1 << 16

// Reader streams the records of a molfile or SD file.
type Reader struct {
	in     *bufio.Reader
	line   int // lines read
	record int
	held   *string // line to be read again
	ended  bool
}

// Looks says whether head, the beginning of a file, is that of a molfile or SD file: its fourth line bears a
// version.
func Looks(head []byte) bool {
	lines := bytes.SplitN(head, []byte("\n"), 5)
	if len(lines) < 5 {
		return false
	}
	counts := bytes.TrimRight(lines[3], " \t\r")
	return bytes.HasSuffix(counts, []byte("V2000")) || bytes.HasSuffix(counts, []byte("V3000"))
}

// NewReader returns a Reader of r.
func NewReader(r io.Reader) *Reader { return &Reader{in: bufio.NewReaderSize(r, 1<<16)} }

// Next returns the next record, io.EOF after the last one, or *Error for a record that cannot be
// read; the following call then goes on with the next record. Other errors are those of the input.
func (r *Reader) Next() (*Record, error) {
	if r.ended {
		return nil, io.EOF
	}
	start := r.line + 1
	first, err := r.next()
	if err == io.EOF || err == nil && strings.TrimSpace(first) == "" && r.onlyBlanksLeft(&first) {
		r.ended = true
		return nil, io.EOF
	}
	if err != nil {
		return nil, err
	}
	r.record++
	b := &block{r: r, record: Record{Number: r.record, Line: start, Title: strings.TrimSpace(first)}}
	err = b.read()
	if err == nil {
		err = b.fields()
	}
	var bad *Error
	if errors.As(err, &bad) {
		if skip := r.skip(); skip != nil && skip != io.EOF {
			return nil, skip
		}
		return nil, bad
	}
	if err != nil {
		return nil, err
	}
	return b.finish()
}

// onlyBlanksLeft says that after the blank line first nothing but blanks follows. A blank line can
// be an empty title: then the lines looked at are read again.
func (r *Reader) onlyBlanksLeft(first *string) bool {
	peek, _ := r.in.Peek(r.in.Size())
	return r.held == nil && strings.TrimSpace(string(peek)) == "" && len(peek) < r.in.Size()
}

// next returns the next line without its end.
func (r *Reader) next() (string, error) {
	if r.held != nil {
		s := *r.held
		r.held = nil
		r.line++
		return s, nil
	}
	s, err := r.in.ReadSlice('\n')
	if err == bufio.ErrBufferFull {
		for err == bufio.ErrBufferFull { // drop the rest of the line
			_, err = r.in.ReadSlice('\n')
		}
		r.line++
		return "", &Error{r.record, r.line, fmt.Sprintf("a line is longer than %d characters", maxLine)}
	}
	if err != nil && (err != io.EOF || len(s) == 0) {
		return "", err
	}
	r.line++
	return strings.TrimRight(string(s), "\r\n"), nil
}

func (r *Reader) back(s string) {
	r.held = &s
	r.line--
}

// skip reads up to the end of the record.
func (r *Reader) skip() error {
	for {
		s, err := r.next()
		var bad *Error
		if err != nil && !errors.As(err, &bad) {
			return err
		}
		if strings.HasPrefix(s, "$$$$") {
			return nil
		}
	}
}

// block is one connection table while it is read.
type block struct {
	r         *Reader
	record    Record
	b         molecule.Builder
	points    []Point
	stereo    []int  // per bond
	parity    []int  // per atom
	valence   []int  // per atom, 0 not given, 15 none
	radical   []int  // unpaired electrons
	oldCharge []int8 // from the atom lines, void where the property lines give charges
	sawCharge bool
	atomLine  int // line of the first atom
	bondLine  int
}

func (b *block) fail(format string, args ...any) error {
	return b.failAt(b.r.line, format, args...)
}

func (b *block) failAt(line int, format string, args ...any) error {
	return &Error{b.r.record, line, fmt.Sprintf(format, args...)}
}

// line reads the next line of the record.
func (b *block) line(what string) (string, error) {
	s, err := b.r.next()
	if err == io.EOF {
		return "", b.failAt(b.r.line+1, "expected %s, found the end of the file", what)
	}
	if err == nil && strings.HasPrefix(s, "$$$$") {
		b.r.back(s)
		return "", b.failAt(b.r.line+1, "expected %s, found the end of the record", what)
	}
	return s, err
}

// read reads from the second header line to M  END.
func (b *block) read() error {
	for _, what := range []string{"the program line", "the comment line"} {
		if _, err := b.line(what); err != nil {
			return err
		}
	}
	counts, err := b.line("the counts line")
	if err != nil {
		return err
	}
	if strings.Contains(counts, "V3000") {
		if err := b.table3(); err != nil {
			return err
		}
		return b.properties()
	}
	atoms, ok1 := column(counts, 0, 3)
	bonds, ok2 := column(counts, 3, 6)
	if !ok1 || !ok2 || len(counts) < 6 {
		return b.fail("expected the counts of atoms and bonds in columns 1-6, found %q", clip(counts))
	}
	b.atomLine = b.r.line + 1
	for range atoms {
		if err := b.atom(); err != nil {
			return err
		}
	}
	b.bondLine = b.r.line + 1
	for range bonds {
		if err := b.bond(); err != nil {
			return err
		}
	}
	return b.properties()
}

// column reads the integer in columns from..to (from 0); blank is 0.
func column(s string, from, to int) (int, bool) {
	if from >= len(s) {
		return 0, true
	}
	t := strings.TrimSpace(s[from:min(to, len(s))])
	if t == "" {
		return 0, true
	}
	n, err := strconv.Atoi(t)
	return n, err == nil
}

func clip(s string) string {
	if len(s) > 40 {
		return s[:40]
	}
	return s
}

// oldCharges translates the charge code of the atom line; 4 is a doublet radical.
var oldCharges = map[int]int8{1: 3, 2: 2, 3: 1, 5: -1, 6: -2, 7: -3}

func (b *block) atom() error {
	s, err := b.line("an atom line")
	if err != nil {
		return err
	}
	var p Point
	if len(s) < 34 {
		return b.fail("expected an atom: three coordinates of ten columns and a symbol, found %q", clip(s))
	}
	for i, v := range []*float64{&p.X, &p.Y, &p.Z} {
		x, err := strconv.ParseFloat(strings.TrimSpace(s[10*i:10*i+10]), 64)
		if err != nil || x-x != 0 {
			return b.fail("expected a coordinate in columns %d-%d, found %q", 10*i+1, 10*i+10, s[10*i:10*i+10])
		}
		*v = x
	}
	a := molecule.Atom{Hydrogens: molecule.AutoHydrogens}
	if err := b.symbol(&a, strings.TrimSpace(s[31:min(34, len(s))])); err != nil {
		return err
	}
	var n [6]int
	for i, c := range []int{34, 36, 39, 48, 60, 42} { // mass difference, charge, parity, valence, class, hydrogen count
		width := 3
		if i == 0 {
			width = 2
		}
		v, ok := column(s, c, c+width)
		if !ok {
			return b.fail("expected a number in columns %d-%d, found %q", c+1, c+width, s[c:min(c+width, len(s))])
		}
		n[i] = v
	}
	if n[0] != 0 && a.Isotope == 0 {
		a.Isotope = uint16(max(0, commonMass(a.Element)+n[0]))
	}
	if n[4] > 0 && n[4] < 1000 {
		a.Class = uint16(n[4])
	}
	b.b.AddAtom(a)
	b.points = append(b.points, p)
	b.oldCharge = append(b.oldCharge, oldCharges[n[1]])
	b.parity = append(b.parity, n[2])
	b.valence = append(b.valence, n[3])
	radical := 0
	if n[1] == 4 {
		radical = 1
	}
	b.radical = append(b.radical, radical)
	return nil
}

// symbol sets the element of a, and the isotope for D and T; a place holder is the unknown atom.
func (b *block) symbol(a *molecule.Atom, symbol string) error {
	switch {
	case symbol == "D", symbol == "T":
		a.Element, a.Isotope = 1, 2
		if symbol == "T" {
			a.Isotope = 3
		}
	case symbol == "*", symbol == "A", strings.HasPrefix(symbol, "R"):
		if e, ok := molecule.ElementBySymbol(symbol); ok {
			a.Element = e // Rb, Ru, Rh, Re, Ra, Rn
		}
	default:
		e, ok := molecule.ElementBySymbol(symbol)
		if !ok {
			return b.fail("expected an element symbol, found %q", clip(symbol))
		}
		a.Element = e
	}
	return nil
}

// commonMass is the nearest whole mass of the most abundant isotope.
func commonMass(e molecule.Element) int { return int(e.MonoisotopicMassDa() + 0.5) }

func (b *block) bond() error {
	s, err := b.line("a bond line")
	if err != nil {
		return err
	}
	var n [4]int
	for i := range n {
		v, ok := column(s, 3*i, 3*i+3)
		if !ok {
			return b.fail("expected a number in columns %d-%d of a bond, found %q", 3*i+1, 3*i+3, clip(s))
		}
		n[i] = v
	}
	for _, a := range n[:2] {
		if a < 1 || a > len(b.b.Atoms) {
			return b.fail("a bond names atom %d; the structure has atoms 1 to %d", a, len(b.b.Atoms))
		}
	}
	order, err := b.order(n[2])
	if err != nil {
		return err
	}
	b.b.AddBond(n[0]-1, n[1]-1, order)
	b.stereo = append(b.stereo, n[3])
	return nil
}

// order translates a bond type.
func (b *block) order(kind int) (uint8, error) {
	switch kind {
	case 1, 2, 3:
		return uint8(kind), nil
	case 4:
		return molecule.OrderAromatic, nil
	}
	return 0, b.fail("bond type %d; expected 1, 2, 3 or 4 (aromatic)", kind)
}

// properties reads the lines up to M  END.
func (b *block) properties() error {
	for {
		s, err := b.line("M  END")
		if err != nil {
			return err
		}
		switch {
		case strings.HasPrefix(s, "M  END"):
			return nil
		case strings.HasPrefix(s, "M  CHG"), strings.HasPrefix(s, "M  ISO"), strings.HasPrefix(s, "M  RAD"):
			if err := b.property(s); err != nil {
				return err
			}
		case strings.HasPrefix(s, "A  "), strings.HasPrefix(s, "G  "):
			if _, err := b.line("the text of an atom alias"); err != nil {
				return err
			}
		}
	}
}

// property reads the pairs of atom and value of one line.
func (b *block) property(s string) error {
	count, ok := column(s, 6, 9)
	if !ok || count < 0 || count > 8 {
		return b.fail("expected a count from 1 to 8 in columns 7-9, found %q", clip(s))
	}
	kind := s[3:6]
	if kind != "ISO" && !b.sawCharge { // charges or radicals here make those of the atom lines void
		b.sawCharge = true
		clear(b.oldCharge)
		clear(b.radical)
	}
	for i := range count {
		a, ok1 := column(s, 9+8*i, 13+8*i)
		v, ok2 := column(s, 13+8*i, 17+8*i)
		if !ok1 || !ok2 || a < 1 || a > len(b.b.Atoms) {
			return b.fail("expected atom and value number %d, found %q", i+1, clip(s))
		}
		x := &b.b.Atoms[a-1]
		switch kind {
		case "CHG":
			if v < -15 || v > 15 {
				return b.fail("a charge of %d; expected -15 to 15", v)
			}
			x.Charge = int8(v)
		case "ISO":
			if v < 0 || v > 999 {
				return b.fail("mass number %d; expected 1 to 999", v)
			}
			x.Isotope = uint16(v)
		case "RAD":
			b.radical[a-1] = [4]int{0, 2, 1, 2}[max(0, min(3, v))]
		}
	}
	return nil
}

// fields reads the data items of an SD record up to $$$$ or the end of the file.
func (b *block) fields() error {
	for {
		s, err := b.r.next()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		switch {
		case strings.HasPrefix(s, "$$$$"):
			return nil
		case strings.HasPrefix(s, ">"):
			if err := b.field(s); err != nil {
				return err
			}
		case strings.TrimSpace(s) != "":
			return b.fail("expected a data field ('> <NAME>') or '$$$$', found %q", clip(s))
		}
	}
}

func (b *block) field(header string) error {
	name := ""
	if from, to := strings.IndexByte(header, '<'), strings.LastIndexByte(header, '>'); from >= 0 && to > from {
		name = header[from+1 : to]
	}
	if name == "" {
		return b.fail("expected the name of the data field in angle brackets, found %q", clip(header))
	}
	var lines []string
	for {
		s, err := b.r.next()
		if err == io.EOF || err == nil && s == "" {
			break
		}
		if err != nil {
			return err
		}
		if strings.TrimSpace(s) == "" && b.endsValue() { // blanks that stand for an empty line
			break
		}
		if strings.HasPrefix(s, "$$$$") { // the blank line is missing
			b.r.back(s)
			break
		}
		lines = append(lines, s)
	}
	b.record.Fields = append(b.record.Fields, Field{name, strings.Join(lines, "\n")})
	return nil
}

// endsValue says that the next line cannot belong to the value of a field: the end of the record, the
// next field or an empty line.
func (b *block) endsValue() bool {
	s, err := b.r.next()
	if err != nil {
		return true
	}
	b.r.back(s)
	return s == "" || strings.HasPrefix(s, ">") || strings.HasPrefix(s, "$$$$")
}
