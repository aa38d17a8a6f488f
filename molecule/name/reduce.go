package name

import (
	"errors"
	"fmt"
	"slices"
)

func (b *assembly) hydride(u *unit, q *piece) error {
	s := u.skeleton
	at := make([]int, len(s.elements))
	for i, e := range s.elements {
		at[i] = b.add(e)
		q.label(s.locants[i], at[i])
	}
	order := make([]int, len(s.bonds))
	for i := range order {
		order[i] = 1
	}
	if s.mancude {
		if err := mancudeBonds(u, order); err != nil {
			return err
		}
	} else if err := multipleBonds(u, order); err != nil {
		return err
	}
	for i, x := range s.bonds {
		if err := b.join(at[x[0]], at[x[1]], order[i]); err != nil {
			return err
		}
	}
	q.equal = s.alike()
	return b.suffixes(u, q)
}

func (s *skeleton) alike() bool {
	if len(s.elements) == 2 && len(s.bonds) == 1 {
		return true
	}
	for _, e := range s.elements {
		if e != s.elements[0] {
			return false
		}
	}
	return len(s.bonds) == len(s.elements) && s.elements[0] == 6
}

func multipleBonds(u *unit, order []int) error {
	s := u.skeleton
	if len(u.hydro)+u.hydros+len(u.indicated)+len(u.added) > 0 {
		return errHydro
	}
	place := func(l string) int { return slices.Index(s.locants, l) }
	for k, m := range u.multiple {
		i, j := k, k+1
		if m.from == "" {
			if len(u.suffixes) > 0 && u.suffixes[0].end && len(s.elements) == 3 {
				i, j = 1, 2 // propenal, propynoic acid
			}
			if len(u.multiple) > 1 || !s.alike() && len(s.elements) > 3 || len(s.elements) > 2 && len(u.suffixes) > 0 && !u.suffixes[0].end {
				return errLocant
			}
		} else {
			i = place(m.from)
			j = i + 1
			if j == len(s.elements) {
				j = 0
			}
			if m.to != "" {
				j = place(m.to)
			}
		}
		found := false
		for b, x := range s.bonds {
			if i >= 0 && j >= 0 && (x[0] == i && x[1] == j || x[0] == j && x[1] == i) {
				order[b], found = m.order, true
			}
		}
		if !found {
			return fmt.Errorf("there is no bond at locant %s", m.from)
		}
	}
	return nil
}

func mancudeBonds(u *unit, order []int) error {
	s := u.skeleton
	n := len(s.elements)
	if n > maxRingAtoms || len(u.multiple) > 0 {
		return errDouble
	}
	k := &mancude{next: make([]positions, n)}
	for _, x := range s.bonds {
		k.next[x[0]] |= 1 << uint(x[1])
		k.next[x[1]] |= 1 << uint(x[0])
	}
	for i, e := range s.elements {
		if k.next[i].size() < normalValence(e) {
			k.capable |= 1 << uint(i)
		}
	}
	saturated, err := u.saturatedPositions(k)
	if err != nil {
		return err
	}
	rest := k.capable &^ saturated
	pairs, ok := k.match(rest)
	if !ok {
		return errDouble
	}
	for b, x := range s.bonds {
		if y, ok := pairs[x[0]]; ok && y == x[1] {
			order[b] = 2
		}
	}
	return nil
}

func (u *unit) saturatedPositions(k *mancude) (positions, error) {
	s := u.skeleton
	var set positions
	for _, list := range [][]string{u.indicated, u.added, u.hydro} {
		for _, l := range list {
			i := slices.Index(s.locants, l)
			if i < 0 {
				return 0, fmt.Errorf("locant %s does not exist", l)
			}
			set |= 1 << uint(i)
		}
	}
	for _, x := range u.suffixes {
		if x.order == 2 {
			for _, l := range x.locants {
				if i := slices.Index(s.locants, l); i >= 0 {
					set |= 1 << uint(i)
				}
			}
		}
	}
	if u.order == 2 {
		for _, l := range u.free {
			if i := slices.Index(s.locants, l); i >= 0 {
				set |= 1 << uint(i)
			}
		}
	}
	spare := k.capable.size() - 2*k.pairs(k.capable)
	if u.hydros > 0 && len(u.hydro) == 0 {
		if u.hydros+spare != k.capable.size() {
			return 0, errors.New("locants of the hydro prefixes are missing")
		}
		return k.capable, nil
	}
	if !k.perfect(k.capable&^set) && spare > 0 && len(u.indicated) == 0 {
		left := k.capable.size() - set.size() - 2*k.pairs(k.capable&^set)
		done := false
		for _, nitrogen := range []bool{true, false} {
			subsets(k.capable&^set, left, func(y positions) {
				for _, i := range y.list() {
					if nitrogen && s.elements[i] != 7 {
						return
					}
				}
				if !done && k.perfect(k.capable&^set&^y) {
					set |= y
					done = true
				}
			})
			if done {
				break
			}
		}
	}
	return set, nil
}

func (k *mancude) match(set positions) (map[int]int, bool) {
	if !k.perfect(set) {
		return nil, false
	}
	pairs := map[int]int{}
	for set != 0 {
		i := set.list()[0]
		done := false
		for _, j := range (k.next[i] & set).list() {
			if rest := set &^ (1<<uint(i) | 1<<uint(j)); k.perfect(rest) {
				pairs[i], pairs[j] = j, i
				set, done = rest, true
				break
			}
		}
		if !done {
			return nil, false
		}
	}
	return pairs, true
}
