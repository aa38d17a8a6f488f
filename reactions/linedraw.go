package reactions

import (
	"fmt"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// drawing writes the edit on one line a side: atoms with their class numbers, every bond as a sign, the hydrogens
// that move or are asked for made explicit, and on the product side what leaves. 'C1(=O2)-O3-H  +  H-O4-C5' gives
// 'C1(=O2)-O4-C5  +  H-O3-H (leaves)'.
func (t *Transform) drawing() (left, right string) {
	s := t.script
	shown := make([]int, len(s.slots)) // hydrogens drawn on the reactant side
	gain := make([]int, len(s.slots))
	for i := range s.slots {
		gain[i] = s.hydrogenGain(i)
		if at := s.slots[i].at[forward]; at >= 0 {
			shown[i] = max(0, -gain[i], s.side[forward].Atoms[at].Hydrogens)
		}
	}
	left = s.drawSide(forward, func(slot int) int { return shown[slot] })
	right = s.drawSide(backward, func(slot int) int {
		if s.slots[slot].at[forward] < 0 {
			return max(0, s.side[backward].Atoms[s.slots[slot].at[backward]].Hydrogens)
		}
		return max(0, shown[slot]+gain[slot])
	})
	for i, sl := range s.slots {
		if sl.at[backward] >= 0 || s.leftOnlyNeighbour(i) {
			continue
		}
		right += "  +  H-" + s.atomName(forward, sl.at[forward]) + strings.Repeat("-H", shown[i]+s.cutOrders(i)-1) + " (leaves)"
	}
	return left, right
}

// hydrogenGain is how many hydrogens an atom on both sides takes up; 0 where aromatic bonds change, where the
// count depends on the ring.
func (s *script) hydrogenGain(slot int) int {
	sl := s.slots[slot]
	if sl.at[forward] < 0 || sl.at[backward] < 0 {
		return 0
	}
	l, r := s.side[forward].Atoms[sl.at[forward]], s.side[backward].Atoms[sl.at[backward]]
	if l.Hydrogens >= 0 && r.Hydrogens >= 0 {
		return r.Hydrogens - l.Hydrogens
	}
	gain := int(r.Charge) - int(l.Charge)
	for _, e := range s.bonds {
		if e.a != slot && e.b != slot {
			continue
		}
		if e.order[0] == molecule.OrderAromatic || e.order[1] == molecule.OrderAromatic {
			return 0
		}
		gain += int(e.order[0]) - int(e.order[1])
	}
	return gain
}

// cutOrders counts the bonds between a leaving atom and what stays.
func (s *script) cutOrders(slot int) int {
	n := 0
	for _, e := range s.bonds {
		if e.a == slot && s.slots[e.b].at[backward] >= 0 || e.b == slot && s.slots[e.a].at[backward] >= 0 {
			n += int(e.order[0])
		}
	}
	return n
}

// leftOnlyNeighbour says that a leaving atom hangs on another one, drawn with it.
func (s *script) leftOnlyNeighbour(slot int) bool { return s.cutOrders(slot) == 0 }

func (s *script) drawSide(d direction, hydrogens func(slot int) int) string {
	w := &lineDrawer{s: s, q: s.side[d], d: d, hydrogens: hydrogens, seen: make([]bool, len(s.side[d].Atoms)), drawn: make([]bool, len(s.side[d].Bonds))}
	var parts []string
	for _, first := range s.partStart[d] {
		w.sb.Reset()
		w.atom(first)
		parts = append(parts, w.sb.String())
	}
	return strings.Join(parts, "  +  ")
}

// atomName is the element, or the elements in brackets, with the class.
func (s *script) atomName(d direction, at int) string {
	a := s.side[d].Atoms[at]
	name := "any"
	if len(a.Elements) > 0 {
		symbols := make([]string, len(a.Elements))
		for i, e := range a.Elements {
			symbols[i] = e.Symbol()
			if a.OnlyAromatic() {
				symbols[i] = strings.ToLower(symbols[i])
			}
		}
		name = strings.Join(symbols, "|")
		if len(symbols) > 1 {
			name = "[" + name + "]"
		}
	}
	if a.Class > 0 {
		name += fmt.Sprint(a.Class)
	}
	switch {
	case a.Charge == 1:
		name += "(+)"
	case a.Charge == -1:
		name += "(-)"
	}
	return name
}

// lineDrawer walks the bonds of one side; a bond back to an atom that stands already is named by that atom.
type lineDrawer struct {
	s         *script
	q         *pattern.Query
	d         direction
	hydrogens func(slot int) int
	seen      []bool
	drawn     []bool
	sb        strings.Builder
}

func (w *lineDrawer) atom(a int) {
	w.seen[a] = true
	w.sb.WriteString(w.s.atomName(w.d, a))
	var open []int
	for i, b := range w.q.Bonds {
		if (b.A == a || b.B == a) && !w.drawn[i] {
			open = append(open, i)
		}
	}
	var tails []func()
	for _, i := range open {
		b := w.q.Bonds[i]
		tails = append(tails, func() {
			if w.drawn[i] {
				return
			}
			w.drawn[i] = true
			other := b.A + b.B - a
			w.sb.WriteString(bondSign(b))
			if w.seen[other] {
				w.sb.WriteString("<" + w.s.atomName(w.d, other) + ">")
				return
			}
			w.atom(other)
		})
	}
	for range w.hydrogens(w.s.slotOf[w.d][a]) {
		tails = append(tails, func() { w.sb.WriteString("-H") })
	}
	for i, tail := range tails {
		before := w.sb.Len()
		if i < len(tails)-1 {
			w.sb.WriteByte('(')
		}
		tail()
		if i < len(tails)-1 {
			if w.sb.Len() == before+1 { // drawn meanwhile from the other end
				text := w.sb.String()[:before]
				w.sb.Reset()
				w.sb.WriteString(text)
				continue
			}
			w.sb.WriteByte(')')
		}
	}
}

func bondSign(b pattern.QueryBond) string {
	if b.Aromatic() {
		return ":"
	}
	switch b.Order() {
	case 1:
		return "-"
	case 2:
		return "="
	case 3:
		return "#"
	}
	return "~"
}
