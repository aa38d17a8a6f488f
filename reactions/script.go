package reactions

import (
	"fmt"
	"sort"
	"strconv"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// direction says which side of a transform is found and which is made.
type direction uint8

const (
	forward  direction = iota // reactants are found, products made
	backward                  // products are found, reactants made
)

// slot is one atom of a transform as both sides see it: its query atom on either side, or -1.
type slot struct {
	class  int // 0 for an unnumbered atom
	at     [2]int
	course string // keep, invert or "" (lose)
}

// found and made are the query atoms of the slot on the side found and on the side made.
func (s slot) found(d direction) int { return s.at[d] }
func (s slot) made(d direction) int  { return s.at[1-d] }

// bondEdit is the order of one bond on either side: 0 no bond, molecule.OrderAromatic aromatic.
type bondEdit struct {
	a, b  int // slots
	order [2]uint8
}

// relation is a stereo course of two slots: an addition or elimination (syn or anti), or the geometry
// of a double bond that is made (cis or trans), or a concerted course of more slots.
type relation struct {
	a, b int // slots
	word string
	all  []int // slots of a concerted course, see concerted.go
}

// script is the edit that leads from the reactant side to the product side; its negative leads back.
type script struct {
	side      [2]*pattern.Query // reactants, products
	partStart [2][]int          // first query atom of each part
	slots     []slot
	slotOf    [2][]int // per side: query atom -> slot
	bonds     []bondEdit
	relations []relation
	touched   []bool // per slot: a bond, charge or hydrogen count changes, or the atom comes or goes
	twin      []int  // per slot: its counterpart, see there
	aromatic  bool   // an aromatic bond changes
}

// partOf returns the part (from 0) of a query atom on one side.
func (s *script) partOf(d direction, queryAtom int) int {
	return sort.Search(len(s.partStart[d]), func(i int) bool { return s.partStart[d][i] > queryAtom }) - 1
}

// newScript derives the edit from the two sides.
func newScript(left, right *pattern.Query, leftStart, rightStart []int) (*script, error) {
	s := &script{side: [2]*pattern.Query{left, right}, partStart: [2][]int{leftStart, rightStart}}
	s.pairAtoms()
	if err := s.pairBonds(); err != nil {
		return nil, err
	}
	s.markTouched()
	s.twin = make([]int, len(s.slots))
	for i := range s.slots {
		s.twin[i] = s.counterpart(i)
	}
	return s, nil
}

func (s *script) pairAtoms() {
	left, right := s.side[forward], s.side[backward]
	s.slotOf = [2][]int{make([]int, len(left.Atoms)), make([]int, len(right.Atoms))}
	for i, a := range left.Atoms {
		s.slotOf[forward][i] = len(s.slots)
		s.slots = append(s.slots, slot{class: a.Class, at: [2]int{i, right.AtomOfClass(a.Class)}})
	}
	for i, a := range right.Atoms {
		if j := left.AtomOfClass(a.Class); j >= 0 {
			s.slotOf[backward][i] = s.slotOf[forward][j]
			continue
		}
		s.slotOf[backward][i] = len(s.slots)
		s.slots = append(s.slots, slot{class: a.Class, at: [2]int{-1, i}})
	}
}

// writtenOrder returns the order of a query bond, definite false where the pattern leaves it open.
func writtenOrder(b pattern.QueryBond) (order uint8, definite bool) {
	if b.Aromatic() {
		return molecule.OrderAromatic, true
	}
	o := b.Order()
	return uint8(o), o != 0
}

func (s *script) pairBonds() error {
	type pair struct{ a, b int }
	edits := map[pair]*bondEdit{}
	open := map[pair]int{}
	var keys []pair
	for d, q := range s.side {
		for _, qb := range q.Bonds {
			k := pair{s.slotOf[d][qb.A], s.slotOf[d][qb.B]}
			if k.a > k.b {
				k.a, k.b = k.b, k.a
			}
			if edits[k] == nil {
				edits[k] = &bondEdit{a: k.a, b: k.b}
				keys = append(keys, k)
			}
			order, definite := writtenOrder(qb)
			if !definite {
				open[k]++
			}
			edits[k].order[d] = order
		}
	}
	sort.Slice(keys, func(i, j int) bool {
		return keys[i].a < keys[j].a || keys[i].a == keys[j].a && keys[i].b < keys[j].b
	})
	for _, k := range keys {
		e := *edits[k]
		onBoth := s.slots[k.a].at[0] >= 0 && s.slots[k.a].at[1] >= 0 && s.slots[k.b].at[0] >= 0 && s.slots[k.b].at[1] >= 0
		switch {
		case open[k] == 2:
			continue // left open on both sides: unchanged
		case open[k] == 1 && onBoth:
			return fmt.Errorf("the bond %s is left open on one side only; say the same on both, or write its order", s.bondName(k.a, k.b))
		case e.order[0] == e.order[1] && onBoth:
			continue
		}
		s.bonds = append(s.bonds, e)
		s.aromatic = s.aromatic || e.order[0] == molecule.OrderAromatic || e.order[1] == molecule.OrderAromatic
	}
	return nil
}

func (s *script) bondName(a, b int) string {
	return fmt.Sprintf("%d-%d", s.slots[a].class, s.slots[b].class)
}

func (s *script) markTouched() {
	s.touched = make([]bool, len(s.slots))
	for _, e := range s.bonds {
		s.touched[e.a], s.touched[e.b] = true, true
	}
	for i, sl := range s.slots {
		if sl.at[0] < 0 || sl.at[1] < 0 {
			s.touched[i] = true
			continue
		}
		l, r := s.side[0].Atoms[sl.at[0]], s.side[1].Atoms[sl.at[1]]
		if l.Charge != r.Charge && !l.AnyCharge && !r.AnyCharge || l.Hydrogens >= 0 && r.Hydrogens >= 0 && l.Hydrogens != r.Hydrogens {
			s.touched[i] = true
		}
	}
}

// slotOfClass returns the slot with a class, or -1.
func (s *script) slotOfClass(class int) int {
	for i, sl := range s.slots {
		if sl.class == class && class != 0 {
			return i
		}
	}
	return -1
}

// addStereo reads the stereo words of a transform.
func (s *script) addStereo(words map[string]string) error {
	keys := make([]string, 0, len(words))
	for k := range words {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	for _, k := range keys {
		if err := s.addCourse(k, words[k]); err != nil {
			return fmt.Errorf("stereo %q: %v", k, err)
		}
	}
	return nil
}

func (s *script) addCourse(key, word string) error {
	sep, allowed := "", "keep invert lose free"
	if strings.Contains(key, "=") {
		sep, allowed = "=", "cis trans either"
	} else if strings.Contains(key, "-") {
		sep, allowed = "-", "syn anti either"
		if n := strings.Count(key, "-") + 1; n > 2 && concerted[word] != n {
			return fmt.Errorf("%q is not a course of %d atoms", word, n)
		} else if n > 2 {
			allowed = word
		}
	}
	if !strings.Contains(" "+allowed+" ", " "+word+" ") {
		return fmt.Errorf("%q is not one of: %s", word, strings.ReplaceAll(allowed, " ", ", "))
	}
	texts := []string{key}
	if sep != "" {
		texts = strings.Split(key, sep)
	}
	at := make([]int, len(texts))
	for i, text := range texts {
		class, err := strconv.Atoi(strings.TrimSpace(text))
		if err != nil || s.slotOfClass(class) < 0 {
			return fmt.Errorf("no atom has class %s", text)
		}
		at[i] = s.slotOfClass(class)
	}
	switch {
	case sep == "":
		s.slots[at[0]].course = word
	case word != "either" && len(at) == 2:
		s.relations = append(s.relations, relation{at[0], at[1], word, nil})
	case len(at) > 2:
		s.relations = append(s.relations, relation{at[0], at[1], word, at})
	}
	return nil
}
