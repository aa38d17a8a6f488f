package isomer

import (
	"fmt"

	"shelfward/molecule"
)

const (
	carbon   molecule.Element = 6
	nitrogen molecule.Element = 7
	oxygen   molecule.Element = 8
	phosphor molecule.Element = 15
	sulfur   molecule.Element = 16

	maxElement = 119
)

// company is an atom that always comes with a unit and is bonded to nothing else.
type company struct {
	element molecule.Element
	charge  int8
	order   uint8
	parent  int // index in the list of companions, or -1 for the unit's own atom
}

// state is one way for an atom to be bonded. Valence counts its bonds to other units and to
// hydrogen, not those to its company.
type state struct {
	element      molecule.Element
	charge       int8
	valence      int
	maxHydrogens int
	with         []company
}

func (st *state) plain() bool { return len(st.with) == 0 }

// oxide reports whether st is the nitrogen of an N-oxide.
func (st *state) oxide() bool {
	return st.element == nitrogen && len(st.with) == 1 && st.with[0].element == oxygen
}

// plainStates are the standard valences of isomer tables (common practice).
var plainStates = []*state{
	{element: 5, valence: 3, maxHydrogens: 3},
	{element: carbon, valence: 4, maxHydrogens: 4},
	{element: nitrogen, valence: 3, maxHydrogens: 3},
	{element: oxygen, valence: 2, maxHydrogens: 2},
	{element: 9, valence: 1, maxHydrogens: 1},
	{element: 14, valence: 4, maxHydrogens: 4},
	{element: phosphor, valence: 3, maxHydrogens: 3},
	{element: sulfur, valence: 2, maxHydrogens: 2},
	{element: 17, valence: 1, maxHydrogens: 1},
	{element: 34, valence: 2, maxHydrogens: 2},
	{element: 35, valence: 1, maxHydrogens: 1},
	{element: 53, valence: 1, maxHydrogens: 1},
}

// usualStates are the further ones of the convention Usual. A group whose charges could be drawn in
// two ways is one unit, so that it is not counted twice. Tautomers with the hydrogen on the
// N-oxide nitrogen, on sulfoxide or sulfone sulfur are left out: they are written as N-OH and S-OH.
var usualStates = []*state{
	{element: nitrogen, charge: 1, valence: 1, with: []company{{oxygen, 0, 2, -1}, {oxygen, -1, 1, -1}}},
	{element: nitrogen, charge: 1, valence: 3, with: []company{{oxygen, -1, 1, -1}}},
	{element: nitrogen, charge: 1, valence: 1, with: []company{{carbon, -1, 3, -1}}},
	{element: nitrogen, valence: 1, with: []company{{nitrogen, 1, 2, -1}, {nitrogen, -1, 2, 0}}},
	{element: sulfur, valence: 2, with: []company{{oxygen, 0, 2, -1}, {oxygen, 0, 2, -1}}},
	{element: sulfur, valence: 2, with: []company{{oxygen, 0, 2, -1}}},
	{element: phosphor, valence: 3, maxHydrogens: 2, with: []company{{oxygen, 0, 2, -1}}},
	{element: phosphor, valence: 3, maxHydrogens: 2, with: []company{{sulfur, 0, 2, -1}}},
}

// compiled is a checked problem.
type compiled struct {
	Problem
	states     []*state // those the formula has atoms for, plain ones after the others
	atoms      [maxElement]int
	hydrogens  int
	blocks     []*block
	required   []requirement
	overflow   bool // some plan has too many units
	impossible bool // a block holds a forbidden bond
}

// compile checks a problem.
func compile(p Problem) (*compiled, error) {
	c := &compiled{Problem: p, hydrogens: int(p.Formula.Count[1])}
	if p.Formula.Charge != 0 {
		return nil, fmt.Errorf("isomers of an ion are not generated: %s has charge %+d", p.Formula.String(), p.Formula.Charge)
	}
	plain := map[molecule.Element]bool{}
	for _, st := range plainStates {
		plain[st.element] = true
	}
	for _, ban := range p.Bonds {
		if ban.Order > 0 && ban.Order < 3 && resonant(ban.A) && resonant(ban.B) {
			return nil, fmt.Errorf("a ban on %s-%s bonds of order %d would depend on the Kekulé form drawn: use Lacks with a piece, or order 0", ban.A.Symbol(), ban.B.Symbol(), ban.Order)
		}
	}
	total := 0
	for e := 2; e < maxElement; e++ {
		n := int(p.Formula.Count[e])
		c.atoms[e] = n
		total += n
		if n < 0 || n > 0 && !plain[molecule.Element(e)] {
			return nil, fmt.Errorf("no valence is known for %s (expected B C N O F Si P S Cl Se Br I with hydrogen)", molecule.Element(e).Symbol())
		}
	}
	if total == 0 {
		return nil, fmt.Errorf("the formula has no atom but hydrogen")
	}
	if p.Valences == Usual {
		for _, st := range usualStates {
			if c.affords(st) {
				c.states = append(c.states, st)
			}
		}
	}
	for _, st := range plainStates {
		if c.affords(st) {
			c.states = append(c.states, st)
		}
	}
	return c, c.compileBlocks()
}

// resonant reports whether atoms of e change the order of their bonds between Kekulé forms.
func resonant(e molecule.Element) bool {
	return e == carbon || e == nitrogen || e == phosphor || e == 5 || e == 14
}

// affords reports whether the formula holds the atoms of st.
func (c *compiled) affords(st *state) bool {
	atoms := c.atoms
	atoms[st.element]--
	for _, w := range st.with {
		atoms[w.element]--
	}
	for _, n := range atoms {
		if n < 0 {
			return false
		}
	}
	return true
}

// companions counts the atoms of element e in the company of st.
func (st *state) companions(e molecule.Element) int {
	n := 0
	for _, w := range st.with {
		if w.element == e {
			n++
		}
	}
	return n
}
