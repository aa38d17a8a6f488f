package molecule

import (
	"fmt"
	"math"
	"strconv"
)

// Formula counts atoms by element, hydrogens included, with the total charge.
type Formula struct {
	Count  [119]int32
	Charge int32
}

// Formula counts the atoms of m, folded hydrogens included. Isotopes count as their element.
func (m *Molecule) Formula() Formula {
	var f Formula
	for i := range m.atoms {
		x := &m.atoms[i]
		f.Count[x.Element]++
		f.Count[1] += int32(x.Hydrogens)
		f.Charge += int32(x.Charge)
	}
	return f
}

// hillOrder lists the elements but C and H by symbol.
var hillOrder = func() []Element {
	var list []Element
	for e := Element(1); e < 119; e++ {
		if e == 6 || e == 1 {
			continue
		}
		at := len(list)
		list = append(list, e)
		for ; at > 0 && list[at-1].Symbol() > e.Symbol(); at-- {
			list[at], list[at-1] = list[at-1], e
		}
	}
	return list
}()

// String writes f in Hill order ("C8H16O"): carbon, hydrogen, then the rest by symbol; without
// carbon all by symbol. A charge follows as + or (2-); unknown atoms as *.
func (f Formula) String() string {
	var s []byte
	add := func(e Element) {
		n := f.Count[e]
		if n == 0 {
			return
		}
		s = append(s, e.Symbol()...)
		if n != 1 {
			s = strconv.AppendInt(s, int64(n), 10)
		}
	}
	carbon := f.Count[6] != 0
	if carbon {
		add(6)
		add(1)
	}
	hydrogenDone := carbon
	for _, e := range hillOrder {
		if !hydrogenDone && e.Symbol() > "H" {
			add(1)
			hydrogenDone = true
		}
		add(e)
	}
	add(0)
	if c := f.Charge; c != 0 {
		sign := byte('+')
		if c < 0 {
			sign, c = '-', -c
		}
		if c > 1 {
			s = fmt.Appendf(s, "(%d%c)", c, sign)
		} else {
			s = append(s, sign)
		}
	}
	return string(s)
}

// maxFormulaCount bounds a count in a formula text.
const maxFormulaCount = 1_000_000

// ParseFormula reads a formula such as C8H16O or C2H6OS: symbols with counts in any order, repeats
// added up, no brackets, an optional charge at the end (+, --, +2 or (2+)). Errors name the position.
func ParseFormula(s string) (Formula, error) {
	var f Formula
	i := 0
	fail := func(expected string) (Formula, error) {
		found := "the end"
		if i < len(s) {
			found = strconv.Quote(string([]rune(s[i:])[0]))
		}
		return Formula{}, fmt.Errorf("formula %q: column %d: expected %s, found %s", s, i+1, expected, found)
	}
	if s == "" {
		return fail("an element symbol")
	}
	for i < len(s) {
		if s[i] == '+' || s[i] == '-' || s[i] == '(' {
			break
		}
		length := 2
		var e Element
		ok := false
		if i+2 <= len(s) {
			e, ok = ElementBySymbol(s[i : i+2])
		}
		if !ok {
			length = 1
			e, ok = ElementBySymbol(s[i : i+1])
		}
		if !ok {
			return fail("an element symbol")
		}
		i += length
		at, n := i, 0
		for i < len(s) && s[i] >= '0' && s[i] <= '9' {
			if n = n*10 + int(s[i]-'0'); n > maxFormulaCount {
				i = at
				return fail(fmt.Sprintf("a count up to %d", maxFormulaCount))
			}
			i++
		}
		if i == at {
			n = 1
		}
		f.Count[e] += int32(n)
		if f.Count[e] > maxFormulaCount {
			i = at
			return fail(fmt.Sprintf("counts that sum to at most %d", maxFormulaCount))
		}
	}
	if i == len(s) {
		return f, nil
	}
	charge, ok := parseCharge(s[i:])
	if !ok {
		return fail("a charge such as +, -- or (2+) as the last thing")
	}
	f.Charge = charge
	return f, nil
}

// parseCharge reads +, -, ++, +2 or (2+).
func parseCharge(s string) (int32, bool) {
	if len(s) == 4 && s[0] == '(' && s[3] == ')' {
		s = s[2:3] + s[1:2]
	}
	sign := int32(1)
	if s[0] == '-' {
		sign = -1
	} else if s[0] != '+' {
		return 0, false
	}
	if len(s) == 2 && s[1] >= '1' && s[1] <= '9' {
		return sign * int32(s[1]-'0'), true
	}
	for i := range s {
		if s[i] != s[0] || i > 8 {
			return 0, false
		}
	}
	return sign * int32(len(s)), true
}

// MolarMass in g/mol from IUPAC standard atomic weights; NaN if an element has none.
func (f Formula) MolarMass() float64 {
	sum := 0.0
	for e, n := range f.Count {
		if n != 0 {
			sum += float64(n) * known(elements[e].weight)
		}
	}
	return sum
}

// MonoisotopicMass in Da from the most abundant isotope of each element, the electron mass of the
// charge counted; NaN if an element has no stable isotope.
func (f Formula) MonoisotopicMass() float64 {
	sum := -float64(f.Charge) * electronMassDa
	for e, n := range f.Count {
		if n != 0 {
			sum += float64(n) * known(elements[e].monoisotopicDa)
		}
	}
	return sum
}

func known(mass float64) float64 {
	if mass == 0 {
		return math.NaN()
	}
	return mass
}

// MonoisotopicMassDa returns the mass of the most abundant isotope of e, 0 if unknown.
func (e Element) MonoisotopicMassDa() float64 { return elements[e].monoisotopicDa }

// Weight returns the standard atomic weight of e in g/mol, 0 if unknown.
func (e Element) Weight() float64 { return elements[e].weight }

// Unsaturation is rings plus pi bonds at standard valences (C and Si 4, N P B 3, O S 2, H and
// halogens 1): 1 + sum n(v-2)/2, the charge left out as mass spectrometrists do. Half-integers mean
// an odd electron count for a neutral formula, and an even one (M+H, M-H) for a singly charged ion.
func (f Formula) Unsaturation() float64 {
	twice := 2
	for e, n := range f.Count {
		if n != 0 {
			twice += int(n) * (standardValence(Element(e)) - 2)
		}
	}
	return float64(twice) / 2
}

// standardValence is the valence that counts in Unsaturation.
func standardValence(e Element) int {
	switch e {
	case 1, 3, 9, 11, 17, 19, 35, 37, 53, 55, 85:
		return 1
	case 5, 7, 13, 15, 33, 51, 31, 49:
		return 3
	case 6, 14, 32, 50, 82:
		return 4
	}
	return 2
}
