package smiles

import (
	"shelfward/molecule"
)

// plain is the organic subset: element and case by first letter; Cl and Br are looked at apart.
var plain = [256]struct {
	element molecule.Element
	lower   bool
}{
	'B': {5, false}, 'C': {6, false}, 'N': {7, false}, 'O': {8, false}, 'P': {15, false}, 'S': {16, false},
	'F': {9, false}, 'I': {53, false},
	'b': {5, true}, 'c': {6, true}, 'n': {7, true}, 'o': {8, true}, 'p': {15, true}, 's': {16, true},
}

// plainAtom reads an atom without brackets.
func (r *reader) plainAtom() error {
	at := r.i
	c := r.text[at]
	if c == '*' {
		r.i++
		r.addAtom(molecule.Atom{}, false, at)
		return nil
	}
	p := plain[c]
	if at+1 < len(r.text) {
		switch next := r.text[at+1]; {
		case c == 'C' && next == 'l':
			p.element = 17
		case c == 'B' && next == 'r':
			p.element = 35
		}
	}
	if p.element == 0 {
		return r.fail(at, "expected an atom, bond, ring closure, '(' or '.', found %s%s", r.found(at), r.hint(at))
	}
	r.i++
	if p.element == 17 || p.element == 35 {
		r.i++
	}
	r.addAtom(molecule.Atom{Element: p.element, Hydrogens: molecule.AutoHydrogens, Aromatic: p.lower}, p.lower, at)
	return nil
}

// hint tells what a wrong character was perhaps meant for.
func (r *reader) hint(at int) string {
	for _, length := range []int{2, 1} {
		if at+length <= len(r.text) {
			if _, ok := molecule.ElementBySymbol(r.text[at : at+length]); ok {
				return "; write [" + r.text[at:at+length] + "] for the element"
			}
		}
	}
	switch r.text[at] {
	case ']':
		return ", which closes no bracket"
	case ' ', '\t':
		return "; a structure holds no blanks"
	}
	return ""
}

// bracketAtom reads [isotope symbol mark hydrogens charge :class].
func (r *reader) bracketAtom() error {
	start := r.i
	r.i++
	isotope, _, err := r.number(3, "isotope")
	if err != nil {
		return err
	}
	a := molecule.Atom{Isotope: uint16(isotope)}
	lower, err := r.symbol(&a, start)
	if err != nil {
		return err
	}
	a.Aromatic = lower
	marked, clockwise, err := r.chirality()
	if err != nil {
		return err
	}
	if r.is('H') {
		r.i++
		n, digits, err := r.number(1, "hydrogen count")
		if err != nil {
			return err
		}
		if a.Element == 1 {
			return r.fail(r.i-1, "a hydrogen atom carries no hydrogens")
		}
		a.Hydrogens = 1
		if digits {
			a.Hydrogens = uint8(n)
		}
	}
	if err := r.charge(&a); err != nil {
		return err
	}
	if r.is(':') {
		r.i++
		n, digits, err := r.number(4, "atom class")
		if err != nil {
			return err
		}
		if !digits {
			return r.fail(r.i, "expected the number of the atom class after ':', found %s", r.found(r.i))
		}
		a.Class = uint16(n)
	}
	if !r.is(']') {
		if r.i >= len(r.text) {
			return r.fail(start, "'[' is never closed")
		}
		return r.fail(r.i, "expected ']', found %s", r.found(r.i))
	}
	r.i++
	from := r.prev
	r.anyH = r.anyH || a.Element == 1
	r.addAtom(a, lower, start)
	if marked {
		k := mark{atom: r.prev, clockwise: clockwise}
		if from >= 0 {
			k.add(from)
		}
		for range a.Hydrogens {
			k.add(molecule.LigandHydrogen)
		}
		r.atoms[r.prev].mark = int32(len(r.marks))
		r.marks = append(r.marks, k)
	}
	return nil
}

func (r *reader) is(c byte) bool { return r.i < len(r.text) && r.text[r.i] == c }

// number reads up to most digits; digits says whether there were any.
func (r *reader) number(most int, what string) (n int, digits bool, err error) {
	start := r.i
	for r.i < len(r.text) && r.text[r.i] >= '0' && r.text[r.i] <= '9' {
		if r.i-start == most {
			return 0, false, r.fail(r.i, "the %s has more than %d digits", what, most)
		}
		n = n*10 + int(r.text[r.i]-'0')
		r.i++
	}
	return n, r.i > start, nil
}

// aromaticSymbols are the lower-case symbols allowed in brackets, two letters first.
var aromaticSymbols = []struct {
	text    string
	element molecule.Element
}{{"se", 34}, {"as", 33}, {"te", 52}, {"si", 14}, {"b", 5}, {"c", 6}, {"n", 7}, {"o", 8}, {"p", 15}, {"s", 16}}

// symbol reads the element of a bracket atom.
func (r *reader) symbol(a *molecule.Atom, start int) (lower bool, err error) {
	t := r.text[r.i:]
	if t == "" {
		return false, r.fail(start, "'[' is never closed")
	}
	if t[0] == '*' {
		r.i++
		return false, nil
	}
	for length := min(2, len(t)); length > 0; length-- {
		if e, ok := molecule.ElementBySymbol(t[:length]); ok {
			a.Element = e
			r.i += length
			return false, nil
		}
	}
	for _, s := range aromaticSymbols {
		if len(t) >= len(s.text) && t[:len(s.text)] == s.text {
			a.Element = s.element
			r.i += len(s.text)
			return true, nil
		}
	}
	return false, r.fail(r.i, "expected an element symbol, found %s", r.found(r.i))
}

// shapes are the marks with numbers and the highest number of each.
var shapes = []struct {
	text string
	most int
}{{"TH", 2}, {"AL", 2}, {"SP", 3}, {"TB", 20}, {"OH", 30}}

// chirality reads @, @@, @TH1 and the like. marked is false for shapes that are not tetrahedral; they
// are counted as left out.
func (r *reader) chirality() (marked, clockwise bool, err error) {
	if !r.is('@') {
		return false, false, nil
	}
	r.i++
	if r.is('@') {
		r.i++
		return true, true, nil
	}
	for _, s := range shapes {
		t := r.text[r.i:]
		if len(t) < 2 || t[:2] != s.text {
			continue
		}
		// "@H]" is a mark and a hydrogen; "@OH1" would be a shape, "@TH1" too.
		at := r.i
		r.i += 2
		n, digits, err := r.number(2, "shape number")
		if err != nil {
			return false, false, err
		}
		if !digits || n < 1 || n > s.most {
			return false, false, r.fail(at+2, "expected a number from 1 to %d after '@%s', found %s", s.most, s.text, r.found(at+2))
		}
		if s.text != "TH" {
			r.b.LeftOut++
		}
		return s.text == "TH", n == 2, nil
	}
	return true, false, nil
}

// charge reads +, -, ++, --, +2, -3 ...
func (r *reader) charge(a *molecule.Atom) error {
	if !r.is('+') && !r.is('-') {
		return nil
	}
	start, sign := r.i, r.text[r.i]
	n := 0
	for r.is(sign) {
		n++
		r.i++
	}
	if n == 1 {
		value, digits, err := r.number(2, "charge")
		if err != nil {
			return err
		}
		if digits {
			n = value
		}
	}
	if n > 15 {
		return r.fail(start, "a charge of %d; expected at most 15", n)
	}
	a.Charge = int8(n)
	if sign == '-' {
		a.Charge = -a.Charge
	}
	return nil
}
