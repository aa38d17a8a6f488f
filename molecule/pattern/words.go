package pattern

import (
	"fmt"
	"sort"
	"strconv"
	"strings"

	"shelfward/molecule"
)

// Where holds the words said about atoms (key: a class) and bonds (key: two classes joined by '-').
type Where map[string][]string

// WordError is a mistake in the words of a pattern.
type WordError struct{ Key, Word, Message string }

func (e *WordError) Error() string {
	if e.Word == "" {
		return fmt.Sprintf("where %q: %s", e.Key, e.Message)
	}
	return fmt.Sprintf("where %q: %q: %s", e.Key, e.Word, e.Message)
}

// addWords applies where to q; keys whose classes q does not have are errors.
func (q *Query) addWords(where Where, groups *Groups) error {
	keys := make([]string, 0, len(where))
	for k := range where {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	for _, key := range keys {
		if err := q.addKey(key, where[key], groups); err != nil {
			return err
		}
	}
	return nil
}

func (q *Query) addKey(key string, words []string, groups *Groups) error {
	parts := strings.Split(key, "-")
	var at [2]int
	if len(parts) > 2 {
		return &WordError{key, "", "a class or two classes joined by '-' were expected"}
	}
	for i, p := range parts {
		n, err := strconv.Atoi(strings.TrimSpace(p))
		if err != nil {
			return &WordError{key, "", "a class or two classes joined by '-' were expected"}
		}
		if at[i] = q.AtomOfClass(n); at[i] < 0 {
			return &WordError{key, "", fmt.Sprintf("no atom of the pattern has class %d", n)}
		}
	}
	for _, w := range words {
		var err error
		if len(parts) == 1 {
			err = q.Atoms[at[0]].addWord(strings.Fields(w), groups)
		} else {
			b := q.BondOf(at[0], at[1])
			if b < 0 {
				return &WordError{key, w, "no bond joins these atoms in the pattern"}
			}
			err = q.Bonds[b].addWord(strings.Fields(w))
		}
		if err != nil {
			return &WordError{key, w, err.Error()}
		}
	}
	return nil
}

// counted are the word pairs that take a number range, with what they count.
var counted = map[string]func(m *molecule.Molecule, a int) int{
	"hydrogens": hydrogens,
	"heavy neighbours": func(m *molecule.Molecule, a int) int {
		return heavyNeighbours(m, a, func(molecule.Element) bool { return true })
	},
	"carbon neighbours": func(m *molecule.Molecule, a int) int {
		return heavyNeighbours(m, a, func(e molecule.Element) bool { return e == 6 })
	},
	"hetero neighbours": func(m *molecule.Molecule, a int) int {
		return heavyNeighbours(m, a, func(e molecule.Element) bool { return e != 6 })
	},
}

func heavyNeighbours(m *molecule.Molecule, a int, is func(molecule.Element) bool) int {
	n := 0
	for _, nb := range m.Neighbors(a) {
		if e := m.Atom(int(nb.Atom)).Element; e != 1 && is(e) {
			n++
		}
	}
	return n
}

func (qa *QueryAtom) addWord(f []string, groups *Groups) error {
	phrase := strings.Join(f, " ")
	switch phrase {
	case "aromatic":
		qa.aromatic = onlyAromatic
		return nil
	case "not aromatic":
		qa.aromatic = onlyAliphatic
		return nil
	case "aromatic or not":
		qa.aromatic = eitherAromatic
		return nil
	case "any charge":
		qa.AnyCharge = true
		return nil
	case "sp3":
		return qa.narrow(shapeMask, shapeSP3<<shapeShift)
	case "sp2":
		return qa.narrow(shapeMask, shapeSP2<<shapeShift)
	case "sp":
		return qa.narrow(shapeMask, shapeSP<<shapeShift)
	case "in a ring":
		return qa.narrow(ringBit, ringBit)
	case "not in a ring":
		return qa.narrow(ringBit, 0)
	case "bridgehead":
		return qa.test(func(s *Subject, a int) bool { return Bridgehead(s.M, a) })
	case "not bridgehead":
		return qa.test(func(s *Subject, a int) bool { return !Bridgehead(s.M, a) })
	}
	if len(f) >= 2 {
		return qa.addPhrase(f, groups)
	}
	return fmt.Errorf("unknown word; see rules/patterns.md")
}

// narrow is need, or a test that nothing passes where words contradict each other.
func (qa *QueryAtom) narrow(mask, value atomCode) error {
	if qa.need(mask, value) {
		return nil
	}
	return qa.test(func(*Subject, int) bool { return false })
}

func (qa *QueryAtom) test(t atomTest) error {
	qa.tests = append(qa.tests, t)
	return nil
}

// addPhrase reads words that carry an argument.
func (qa *QueryAtom) addPhrase(f []string, groups *Groups) error {
	head, rest := f[0]+" "+f[1], f[2:]
	switch head {
	case "one of", "none of":
		set, err := elements(rest)
		if err != nil {
			return err
		}
		if head == "none of" {
			qa.Forbidden = append(qa.Forbidden, set...)
		} else {
			qa.Elements = set
		}
		return nil
	case "ring size":
		lo, hi, err := numberRange(rest)
		if err != nil {
			return err
		}
		return qa.test(func(s *Subject, a int) bool { return atomInRingOf(s.M, a, lo, hi) })
	case "part of", "next to":
		return qa.addGroup(head, rest, false, groups)
	case "not part", "not next":
		if len(rest) > 0 && (head == "not part" && rest[0] == "of" || head == "not next" && rest[0] == "to") {
			return qa.addGroup(strings.TrimPrefix(head, "not ")+" "+rest[0], rest[1:], true, groups)
		}
	}
	for name, count := range counted {
		if words := strings.Fields(name); strings.HasPrefix(strings.Join(f, " "), name+" ") {
			lo, hi, err := numberRange(f[len(words):])
			if err != nil {
				return err
			}
			if lo == hi && lo < 15 && name == "hydrogens" {
				return qa.narrow(hydrogensMask, atomCode(lo)<<hydrogensShift)
			}
			if lo == hi && lo < 15 && name == "heavy neighbours" {
				return qa.narrow(heavyMask, atomCode(lo)<<heavyShift)
			}
			return qa.test(func(s *Subject, a int) bool { n := count(s.M, a); return n >= lo && n <= hi })
		}
	}
	return fmt.Errorf("unknown words; see rules/patterns.md")
}

func (qa *QueryAtom) addGroup(head string, rest []string, negated bool, groups *Groups) error {
	if len(rest) != 1 {
		return fmt.Errorf("one group id was expected")
	}
	g := groups.index(rest[0])
	if g < 0 {
		return fmt.Errorf("no group %q in rules/groups.yaml", rest[0])
	}
	if head == "part of" {
		return qa.test(func(s *Subject, a int) bool { return s.inGroup(g, a) != negated })
	}
	return qa.test(func(s *Subject, a int) bool {
		for _, n := range s.M.Neighbors(a) {
			if s.inGroup(g, int(n.Atom)) {
				return !negated
			}
		}
		return negated
	})
}

func elements(words []string) ([]molecule.Element, error) {
	var set []molecule.Element
	for _, w := range words {
		e, ok := molecule.ElementBySymbol(strings.Trim(w, ","))
		if !ok {
			return nil, fmt.Errorf("%q is no element symbol", w)
		}
		set = append(set, e)
	}
	if len(set) == 0 {
		return nil, fmt.Errorf("element symbols were expected")
	}
	return set, nil
}

// numberRange reads '3', '5-7', 'at least 1' or 'at most 2'.
func numberRange(words []string) (lo, hi int, err error) {
	bad := fmt.Errorf("a number, a range such as 5-7, 'at least n' or 'at most n' was expected")
	if len(words) == 3 && words[0] == "at" {
		n, err := strconv.Atoi(words[2])
		if err != nil || words[1] != "least" && words[1] != "most" {
			return 0, 0, bad
		}
		if words[1] == "least" {
			return n, 1 << 20, nil
		}
		return 0, n, nil
	}
	if len(words) != 1 {
		return 0, 0, bad
	}
	a, b, isRange := strings.Cut(words[0], "-")
	if lo, err = strconv.Atoi(a); err != nil {
		return 0, 0, bad
	}
	if !isRange {
		return lo, lo, nil
	}
	if hi, err = strconv.Atoi(b); err != nil || hi < lo {
		return 0, 0, bad
	}
	return lo, hi, nil
}

func (qb *QueryBond) addWord(f []string) error {
	switch strings.Join(f, " ") {
	case "single or double":
		qb.orders = orderSingle | orderDouble
	case "double or aromatic":
		qb.orders = orderDouble | orderAromatic
	case "single or aromatic":
		qb.orders = orderSingle | orderAromatic
	case "any order":
		qb.orders = orderAny
	case "single":
		qb.orders = orderSingle
	case "double":
		qb.orders = orderDouble
	case "triple":
		qb.orders = orderTriple
	case "aromatic":
		qb.orders = orderAromatic
	case "in a ring":
		qb.tests = append(qb.tests, func(s *Subject, b int) bool { return s.M.Bond(b).Ring })
	case "not in a ring":
		qb.tests = append(qb.tests, func(s *Subject, b int) bool { return !s.M.Bond(b).Ring })
	default:
		if len(f) == 3 && f[0] == "ring" && f[1] == "size" {
			lo, hi, err := numberRange(f[2:])
			if err != nil {
				return err
			}
			qb.tests = append(qb.tests, func(s *Subject, b int) bool {
				n := s.M.SmallestBondRing(b)
				return n >= lo && n <= hi
			})
			return nil
		}
		return fmt.Errorf("unknown words for a bond; see rules/patterns.md")
	}
	return nil
}
