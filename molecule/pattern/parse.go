package pattern

import (
	"fmt"
	"strings"

	"shelfward/molecule"
)

// parser reads one pattern text; it keeps the branch stack and the open ring digits.
type parser struct {
	text  string
	pos   int
	q     *Query
	last  int // atom that the next one hangs on, -1 none
	stack []int
	rings map[int]openRing
	bond  byte // bond sign read, 0 none
}

// openRing is a ring digit waiting for its partner.
type openRing struct {
	atom, pos int
	bond      byte
}

// Parse reads a pattern without words. Errors are *Error.
func Parse(text string) (*Query, error) {
	p := &parser{text: text, q: &Query{Text: text}, last: -1, rings: map[int]openRing{}}
	if err := p.run(); err != nil {
		return nil, err
	}
	return p.q, nil
}

func (p *parser) fail(pos int, format string, args ...any) error {
	return &Error{Text: p.text, Position: pos, Message: fmt.Sprintf(format, args...)}
}

func (p *parser) run() error {
	for p.pos < len(p.text) {
		if err := p.token(); err != nil {
			return err
		}
		if len(p.q.Atoms) > MaxAtoms {
			return p.fail(p.pos, "more than %d atoms", MaxAtoms)
		}
	}
	switch {
	case len(p.stack) > 0:
		return p.fail(len(p.text), "a '(' is never closed")
	case p.bond != 0:
		return p.fail(len(p.text), "a bond sign leads nowhere")
	case len(p.q.Atoms) == 0:
		return p.fail(0, "an atom was expected")
	}
	for _, r := range p.rings {
		return p.fail(r.pos, "a ring digit is never closed")
	}
	return p.checkClasses()
}

func (p *parser) token() error {
	c := p.text[p.pos]
	switch {
	case c == '(':
		if p.last < 0 {
			return p.fail(p.pos, "a branch needs an atom before it")
		}
		p.stack = append(p.stack, p.last)
		p.pos++
	case c == ')':
		if len(p.stack) == 0 {
			return p.fail(p.pos, "')' without '('")
		}
		p.last = p.stack[len(p.stack)-1]
		p.stack = p.stack[:len(p.stack)-1]
		p.pos++
	case c == '.':
		p.last = -1
		p.pos++
	case strings.IndexByte("-=#:~", c) >= 0:
		if p.bond != 0 {
			return p.fail(p.pos, "two bond signs in a row")
		}
		p.bond = c
		p.pos++
	case c >= '0' && c <= '9' || c == '%':
		return p.ringDigit()
	case c == '[':
		return p.bracket()
	default:
		return p.organic()
	}
	return nil
}

func (p *parser) ringDigit() error {
	start, n := p.pos, 0
	if p.text[p.pos] == '%' {
		if p.pos+2 >= len(p.text) || !digit(p.text[p.pos+1]) || !digit(p.text[p.pos+2]) {
			return p.fail(p.pos, "two digits were expected after '%%'")
		}
		n = int(p.text[p.pos+1]-'0')*10 + int(p.text[p.pos+2]-'0')
		p.pos += 3
	} else {
		n = int(p.text[p.pos] - '0')
		p.pos++
	}
	if p.last < 0 {
		return p.fail(start, "a ring digit needs an atom before it")
	}
	open, ok := p.rings[n]
	if !ok {
		p.rings[n] = openRing{p.last, start, p.bond}
		p.bond = 0
		return nil
	}
	delete(p.rings, n)
	sign := p.bond
	if sign == 0 {
		sign = open.bond
	}
	p.bond = 0
	if open.atom == p.last {
		return p.fail(start, "a ring digit closes on its own atom")
	}
	p.addBond(open.atom, p.last, sign)
	return nil
}

// organicSymbols are the symbols that may stand without brackets, longest first.
var organicSymbols = []string{"Cl", "Br", "Si", "Mg", "Li", "B", "C", "N", "O", "P", "S", "F", "I", "b", "c", "n", "o", "p", "s", "*"}

func (p *parser) organic() error {
	for _, s := range organicSymbols {
		if strings.HasPrefix(p.text[p.pos:], s) {
			a := QueryAtom{Hydrogens: -1}
			p.setSymbol(&a, s)
			p.pos += len(s)
			p.addAtom(a)
			return nil
		}
	}
	return p.fail(p.pos, "%q is no atom, bond or ring digit", p.text[p.pos:p.pos+1])
}

// setSymbol writes element and aromaticity; '*' leaves both open.
func (p *parser) setSymbol(a *QueryAtom, s string) bool {
	if s == "*" {
		return true
	}
	upper := strings.ToUpper(s[:1]) + s[1:]
	e, ok := molecule.ElementBySymbol(upper)
	if !ok {
		return false
	}
	a.Elements = []molecule.Element{e}
	a.aromatic = onlyAliphatic
	if s[0] >= 'a' && s[0] <= 'z' {
		a.aromatic = onlyAromatic
	}
	return true
}

func digit(c byte) bool { return c >= '0' && c <= '9' }
func lower(c byte) bool { return c >= 'a' && c <= 'z' }

// number reads digits at the current place.
func (p *parser) number() (n int, ok bool) {
	for p.pos < len(p.text) && digit(p.text[p.pos]) && n < 10000 {
		n = n*10 + int(p.text[p.pos]-'0')
		p.pos++
		ok = true
	}
	return n, ok
}

func (p *parser) peek() byte {
	if p.pos < len(p.text) {
		return p.text[p.pos]
	}
	return 0
}

// bracket reads [isotope symbol Hn charge :class].
func (p *parser) bracket() error {
	start := p.pos
	p.pos++
	a := QueryAtom{Hydrogens: -1}
	if n, ok := p.number(); ok {
		a.Isotope = uint16(n)
	}
	if err := p.bracketSymbol(&a, start); err != nil {
		return err
	}
	if p.peek() == 'H' {
		p.pos++
		a.Hydrogens = 1
		if n, ok := p.number(); ok {
			a.Hydrogens = n
		}
	}
	p.charge(&a)
	if p.peek() == ':' {
		p.pos++
		n, ok := p.number()
		if !ok || n < 1 || n > 999 {
			return p.fail(p.pos, "a class from 1 to 999 was expected after ':'")
		}
		a.Class = n
	}
	if p.peek() != ']' {
		if p.pos >= len(p.text) {
			return p.fail(start, "'[' is never closed")
		}
		return p.fail(p.pos, "%q was not expected; a bracket holds isotope, symbol, hydrogens, charge and class", p.text[p.pos:p.pos+1])
	}
	p.pos++
	p.addAtom(a)
	return nil
}

func (p *parser) bracketSymbol(a *QueryAtom, start int) error {
	c := p.peek()
	if c == '*' {
		p.pos++
		return nil
	}
	if p.pos+1 < len(p.text) && lower(p.text[p.pos+1]) && p.setSymbol(a, p.text[p.pos:p.pos+2]) {
		p.pos += 2
		return nil
	}
	if c != 0 && p.setSymbol(a, p.text[p.pos:p.pos+1]) {
		p.pos++
		return nil
	}
	return p.fail(start+1, "an element symbol was expected")
}

func (p *parser) charge(a *QueryAtom) {
	sign := p.peek()
	if sign != '+' && sign != '-' {
		return
	}
	n := 0
	for p.peek() == sign {
		p.pos++
		n++
	}
	if d, ok := p.number(); ok {
		n = d
	}
	if sign == '-' {
		n = -n
	}
	a.Charge = int8(n)
}

func (p *parser) addAtom(a QueryAtom) {
	p.q.Atoms = append(p.q.Atoms, a)
	i := len(p.q.Atoms) - 1
	if p.last >= 0 {
		p.addBond(p.last, i, p.bond)
	}
	p.bond = 0
	p.last = i
}

func (p *parser) addBond(a, b int, sign byte) {
	orders := orderSingle
	switch sign {
	case '=':
		orders = orderDouble
	case '#':
		orders = orderTriple
	case ':':
		orders = orderAromatic
	case '~':
		orders = orderAny
	case 0:
		if p.q.Atoms[a].aromatic == onlyAromatic && p.q.Atoms[b].aromatic == onlyAromatic {
			orders = orderAromatic
		}
	}
	p.q.Bonds = append(p.q.Bonds, QueryBond{A: a, B: b, orders: orders})
}

func (p *parser) checkClasses() error {
	seen := map[int]bool{}
	for _, a := range p.q.Atoms {
		if a.Class != 0 && seen[a.Class] {
			return p.fail(0, "class %d stands on two atoms", a.Class)
		}
		seen[a.Class] = true
	}
	return nil
}
