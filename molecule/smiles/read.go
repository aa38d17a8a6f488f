package smiles

import (
	"errors"
	"fmt"
	"strconv"
	"strings"
	"sync"
	"unicode/utf8"

	"shelfward/molecule"
)

// Bond symbols that are not orders.
const (
	bondDefault uint8 = 0   // nothing written
	bondUp      uint8 = 101 // '/'
	bondDown    uint8 = 102 // '\'
)

// closure is an open ring closure digit.
type closure struct {
	open     bool
	atom     int32
	bond     uint8
	position int32
}

// mark is a tetrahedral mark with the ligands in the order they are written.
type mark struct {
	atom      int32
	ligands   [8]int32 // atoms, LigandHydrogen, or -10-n for the open closure n
	count     int
	digits    int // ring closures on the atom
	clockwise bool
}

// reader is the working memory of Read, reused over texts.
type reader struct {
	text      string
	i         int
	b         molecule.Builder
	atoms     []written // per atom
	bonds     []writtenBond
	branches  []branch // atoms to return to at ')'
	closures  []closure
	openCount int
	marks     []mark
	anyDir    bool
	anyH      bool // some hydrogen atom is written
	bond      uint8
	bondPos   int32
	prev      int32 // atom that the next one is bonded to, -1 none
}

// written is where and how an atom stands in the text.
type written struct {
	at    int32 // position
	mark  int32 // index in marks, -1 none
	lower bool  // lower case
}

// writtenBond is where a bond stands, and 1 for '/' and -1 for '\' as seen from its A to its B.
type writtenBond struct {
	at  int32
	dir int8
}

type branch struct {
	atom, position int32
	atomsBefore    int32
}

var readers = sync.Pool{New: func() any { return new(reader) }}

func (r *reader) fail(position int, format string, args ...any) error {
	return &Error{r.text, position, fmt.Sprintf(format, args...)}
}

// found names the character at i for messages.
func (r *reader) found(i int) string {
	if i >= len(r.text) {
		return "the end"
	}
	c, _ := utf8.DecodeRuneInString(r.text[i:])
	return strconv.QuoteRune(c)
}

func (r *reader) reset(text string) {
	r.text, r.i = text, 0
	r.b.Atoms, r.b.Bonds = r.b.Atoms[:0], r.b.Bonds[:0]
	r.b.Centers, r.b.DoubleBonds, r.b.LeftOut = r.b.Centers[:0], r.b.DoubleBonds[:0], 0
	r.atoms, r.bonds = r.atoms[:0], r.bonds[:0]
	r.branches, r.marks = r.branches[:0], r.marks[:0]
	if r.openCount != 0 {
		clear(r.closures)
	}
	r.openCount, r.anyDir, r.anyH = 0, false, false
	r.bond, r.prev = bondDefault, -1
}

func (r *reader) read(text string) (*molecule.Molecule, error) {
	text = strings.Trim(text, " \t\r\n")
	if len(text) > maxText {
		r.reset("")
		return nil, &Error{text, maxText, fmt.Sprintf("the text has %d characters; at most %d are read as one structure", len(text), maxText)}
	}
	r.reset(text)
	if err := r.parse(); err != nil {
		return nil, err
	}
	if err := r.finish(); err != nil {
		return nil, err
	}
	for i := range r.marks {
		r.addCenter(&r.marks[i])
	}
	if r.anyDir {
		if err := r.addDoubleBonds(); err != nil {
			return nil, err
		}
	}
	if r.anyH {
		return r.buildWithHydrogens()
	}
	m, err := r.b.Build()
	if err != nil {
		return nil, r.place(err, nil)
	}
	if err := r.checkLower(m, nil); err != nil {
		return nil, err
	}
	return m.SeparateCharges(), nil
}

// buildWithHydrogens folds hydrogen atoms into counts; atoms move up by it.
func (r *reader) buildWithHydrogens() (*molecule.Molecule, error) {
	at := r.b.FoldHydrogens()
	m, err := r.b.Build()
	if err != nil {
		return nil, r.place(err, at)
	}
	if err := r.checkLower(m, at); err != nil {
		return nil, err
	}
	return m.FoldSpareHydrogens().SeparateCharges(), nil
}

// original finds the atom of the text that became atom a; to maps old to new, nil when nothing moved.
func original(a int, to []int32) int {
	if to == nil {
		return a
	}
	for old, n := range to {
		if int(n) == a {
			return old
		}
	}
	return a
}

// place turns an error of Build into one that points at the text.
func (r *reader) place(err error, to []int32) error {
	var e *molecule.Error
	if !errors.As(err, &e) {
		return err
	}
	switch {
	case e.Atom >= 0:
		return r.fail(int(r.atoms[original(e.Atom, to)].at), "%s", e.Text)
	case e.Bond >= 0 && to == nil:
		return r.fail(int(r.bonds[e.Bond].at), "%s", e.Text)
	}
	return r.fail(0, "%s", e.Text)
}

// checkLower refuses lower-case atoms outside rings.
func (r *reader) checkLower(m *molecule.Molecule, to []int32) error {
	for a := range r.atoms {
		if !r.atoms[a].lower {
			continue
		}
		n := a
		if to != nil {
			n = int(to[a])
		}
		if !m.InRing(n) {
			return r.fail(int(r.atoms[a].at), "a lower-case (aromatic) atom must lie in a ring")
		}
	}
	return nil
}

// parse goes through the text once.
func (r *reader) parse() error {
	if r.text == "" {
		return r.fail(0, "expected an atom, found nothing")
	}
	for r.i < len(r.text) {
		c := r.text[r.i]
		var err error
		switch {
		case c == '(':
			err = r.openBranch()
		case c == ')':
			err = r.closeBranch()
		case c >= '0' && c <= '9' || c == '%':
			err = r.ringDigit()
		case c == '.':
			err = r.dot()
		case c == '[':
			err = r.bracketAtom()
		case bondSymbol[c] != 0:
			err = r.bondChar(c)
		default:
			err = r.plainAtom()
		}
		if err != nil {
			return err
		}
	}
	return nil
}

var bondSymbol = [256]uint8{'-': 1, '=': 2, '#': 3, '$': 4, ':': molecule.OrderAromatic, '/': bondUp, '\\': bondDown}

func (r *reader) bondChar(c byte) error {
	if r.prev < 0 {
		return r.fail(r.i, "expected an atom before the bond '%c'", c)
	}
	if r.bond != bondDefault {
		return r.fail(r.i, "expected an atom after the bond '%c', found '%c'", r.text[r.bondPos], c)
	}
	r.bond, r.bondPos = bondSymbol[c], int32(r.i)
	r.i++
	return nil
}

func (r *reader) openBranch() error {
	if r.prev < 0 {
		return r.fail(r.i, "expected an atom before '('")
	}
	if r.bond != bondDefault {
		return r.fail(int(r.bondPos), "expected an atom after the bond '%c'; the bond of a branch is written inside its bracket", r.text[r.bondPos])
	}
	r.branches = append(r.branches, branch{r.prev, int32(r.i), int32(len(r.b.Atoms))})
	r.i++
	return nil
}

func (r *reader) closeBranch() error {
	if len(r.branches) == 0 {
		return r.fail(r.i, "')' closes nothing: no '(' is open here")
	}
	if r.bond != bondDefault {
		return r.fail(r.i, "expected an atom after the bond '%c', found ')'", r.text[r.bondPos])
	}
	top := r.branches[len(r.branches)-1]
	if top.atomsBefore == int32(len(r.b.Atoms)) || r.prev < 0 {
		return r.fail(r.i, "expected an atom inside the branch, found ')'")
	}
	r.branches = r.branches[:len(r.branches)-1]
	r.prev = top.atom
	r.i++
	return nil
}

func (r *reader) dot() error {
	if r.prev < 0 {
		return r.fail(r.i, "expected an atom before '.'")
	}
	if r.bond != bondDefault {
		return r.fail(r.i, "expected an atom after the bond '%c', found '.'", r.text[r.bondPos])
	}
	r.prev = -1
	r.i++
	return nil
}

// finish checks that nothing is left open.
func (r *reader) finish() error {
	if r.bond != bondDefault {
		return r.fail(len(r.text), "expected an atom after the bond '%c', found the end", r.text[r.bondPos])
	}
	if len(r.branches) > 0 {
		return r.fail(int(r.branches[len(r.branches)-1].position), "'(' is never closed")
	}
	if r.prev < 0 {
		return r.fail(len(r.text), "expected an atom after '.', found the end")
	}
	if r.openCount > 0 {
		for n, c := range r.closures {
			if c.open {
				return r.fail(int(c.position), "ring closure %d is opened here and never closed", n)
			}
		}
	}
	return nil
}

// addAtom appends an atom bonded to prev and makes it prev.
func (r *reader) addAtom(a molecule.Atom, lower bool, position int) {
	at := int32(len(r.b.Atoms))
	r.b.Atoms = append(r.b.Atoms, a)
	r.atoms = append(r.atoms, written{int32(position), -1, lower})
	if r.prev >= 0 {
		r.addBond(r.prev, at, r.bond, position)
		if k := r.atoms[r.prev].mark; k >= 0 {
			r.marks[k].add(at)
		}
	}
	r.bond = bondDefault
	r.prev = at
}

// addBond appends the bond a-b; symbol is what is written (either end of a closure), seen from a.
func (r *reader) addBond(a, b int32, symbol uint8, position int) {
	order, dir := symbol, int8(0)
	switch symbol {
	case bondDefault:
		order = 1
		if r.atoms[a].lower && (r.atoms[b].lower || r.star(b)) || r.star(a) && (r.atoms[b].lower || r.star(b)) {
			order = molecule.OrderAromatic // Build makes it single outside rings
		}
	case bondUp, bondDown:
		order, dir = 1, 1
		if symbol == bondDown {
			dir = -1
		}
		r.anyDir = true
	}
	r.b.Bonds = append(r.b.Bonds, molecule.Bond{A: a, B: b, Order: order})
	r.bonds = append(r.bonds, writtenBond{int32(position), dir})
}

// star says that a is the unknown atom, which takes part in aromatic rings as needed.
func (r *reader) star(a int32) bool { return r.b.Atoms[a].Element == 0 }

func (k *mark) add(ligand int32) {
	if k.count < len(k.ligands) {
		k.ligands[k.count] = ligand
		k.count++
	}
}

// ringDigit reads a closure number and opens or closes it.
func (r *reader) ringDigit() error {
	at := r.i
	if r.prev < 0 {
		return r.fail(at, "expected an atom before the ring closure %s", r.found(at))
	}
	n, err := r.closureNumber()
	if err != nil {
		return err
	}
	for len(r.closures) <= n {
		r.closures = append(r.closures, closure{})
	}
	c := &r.closures[n]
	bond := r.bond
	r.bond = bondDefault
	if !c.open {
		*c = closure{true, r.prev, bond, int32(at)}
		r.openCount++
		if k := r.atoms[r.prev].mark; k >= 0 {
			r.marks[k].add(int32(-10 - n))
			r.marks[k].digits++
		}
		return nil
	}
	c.open = false
	r.openCount--
	return r.closeRing(c, n, bond, at)
}

// closeRing makes the bond of closure n from the atom where it was opened to the current one.
func (r *reader) closeRing(c *closure, n int, bond uint8, at int) error {
	if c.atom == r.prev {
		return r.fail(at, "ring closure %d joins an atom to itself", n)
	}
	for i := len(r.b.Bonds) - 1; i >= 0 && i >= len(r.b.Bonds)-1; i-- {
		if x := r.b.Bonds[i]; x.A == c.atom && x.B == r.prev {
			return r.fail(at, "ring closure %d joins two atoms that are bonded already", n)
		}
	}
	// A direction written at the closing end is seen from there.
	switch bond {
	case bondUp:
		bond = bondDown
	case bondDown:
		bond = bondUp
	}
	symbol := c.bond
	switch {
	case symbol == bondDefault:
		symbol = bond
	case bond != bondDefault && bond != symbol:
		plain := func(b uint8) bool { return b == 1 || b == bondUp || b == bondDown }
		if !plain(bond) || !plain(symbol) || bond != 1 && symbol != 1 {
			return r.fail(at, "ring closure %d has two different bonds at its ends", n)
		}
		if symbol == 1 {
			symbol = bond
		}
	}
	r.addBond(c.atom, r.prev, symbol, at)
	if k := r.atoms[c.atom].mark; k >= 0 {
		m := &r.marks[k]
		for i := range m.ligands[:m.count] {
			if m.ligands[i] == int32(-10-n) {
				m.ligands[i] = r.prev
			}
		}
	}
	if k := r.atoms[r.prev].mark; k >= 0 {
		r.marks[k].add(c.atom)
		r.marks[k].digits++
	}
	return nil
}

// closureNumber reads a digit, %nn or %(n...).
func (r *reader) closureNumber() (int, error) {
	t := r.text
	if t[r.i] != '%' {
		r.i++
		return int(t[r.i-1] - '0'), nil
	}
	digit := func(i int) bool { return i < len(t) && t[i] >= '0' && t[i] <= '9' }
	if r.i+1 < len(t) && t[r.i+1] == '(' {
		i, n := r.i+2, 0
		for ; digit(i) && i < r.i+7; i++ {
			n = n*10 + int(t[i]-'0')
		}
		if i == r.i+2 || i >= len(t) || t[i] != ')' {
			return 0, r.fail(i, "expected up to five digits and ')' after '%%(', found %s", r.found(i))
		}
		r.i = i + 1
		return n, nil
	}
	if !digit(r.i+1) || !digit(r.i+2) {
		i := r.i + 1
		if digit(i) {
			i++
		}
		return 0, r.fail(i, "expected two digits after '%%', found %s", r.found(i))
	}
	r.i += 3
	return int(t[r.i-2]-'0')*10 + int(t[r.i-1]-'0'), nil
}
