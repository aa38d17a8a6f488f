package sketch

import (
	"fmt"
	"strconv"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// Text writes the part in pattern notation.
func (p Part) Text() string {
	w := &partWriter{p: p, ring: map[[2]int]int{}, seen: make([]bool, len(p.Atoms))}
	w.findRings(0, -1, map[int]bool{})
	clear(w.seen)
	w.write(0, -1)
	return w.sb.String()
}

// partWriter walks a part twice: once for the bonds that close rings, once to write.
type partWriter struct {
	p     Part
	ring  map[[2]int]int // bond (lower atom first) that closes a ring -> its digit
	seen  []bool
	sb    strings.Builder
	count int
}

func pairOf(a, b int) [2]int { return [2]int{min(a, b), max(a, b)} }

func (w *partWriter) bonds(a int) (out []CoreBond) {
	for _, b := range w.p.Bonds {
		if b.A == a {
			out = append(out, b)
		} else if b.B == a {
			out = append(out, CoreBond{b.B, b.A, b.Kind})
		}
	}
	return out
}

func (w *partWriter) findRings(a, parent int, open map[int]bool) {
	w.seen[a], open[a] = true, true
	for _, b := range w.bonds(a) {
		switch {
		case b.B == parent:
		case !w.seen[b.B]:
			w.findRings(b.B, a, open)
		case open[b.B]:
			w.count++
			w.ring[pairOf(a, b.B)] = w.count
		}
	}
	open[a] = false
}

func (w *partWriter) write(a, parent int) {
	w.seen[a] = true
	w.sb.WriteString(w.p.Atoms[a].text())
	var next []CoreBond
	for _, b := range w.bonds(a) {
		if digit := w.ring[pairOf(a, b.B)]; digit > 0 {
			w.sb.WriteString(w.bond(b))
			if digit > 9 {
				w.sb.WriteByte('%')
			}
			w.sb.WriteString(strconv.Itoa(digit))
		} else if b.B != parent {
			next = append(next, b)
		}
	}
	for i, b := range next {
		if w.seen[b.B] {
			continue
		}
		last := i == len(next)-1
		if !last {
			w.sb.WriteByte('(')
		}
		w.sb.WriteString(w.bond(b))
		w.write(b.B, a)
		if !last {
			w.sb.WriteByte(')')
		}
	}
}

func (w *partWriter) bond(b CoreBond) string {
	both := w.p.Atoms[b.A].Aromatic && w.p.Atoms[b.B].Aromatic
	switch b.Kind {
	case 2:
		return "="
	case 3:
		return "#"
	case molecule.OrderAromatic:
		if both {
			return ""
		}
		return ":"
	}
	if both {
		return "-"
	}
	return ""
}

func (c CoreAtom) text() string {
	symbol := c.Element.Symbol()
	if c.Aromatic {
		symbol = strings.ToLower(symbol)
	}
	if c.Hydrogens == 0 {
		symbol += "H0"
	} else if c.Hydrogens == 1 {
		symbol += "H"
	} else if c.Hydrogens > 1 {
		symbol += "H" + strconv.Itoa(c.Hydrogens)
	}
	switch {
	case c.Charge == 1:
		symbol += "+"
	case c.Charge == -1:
		symbol += "-"
	case c.Charge != 0:
		symbol += fmt.Sprintf("%+d", c.Charge)
	}
	return fmt.Sprintf("[%s:%d]", symbol, c.Class)
}

// fragment writes the marked atoms as SMILES, atom first in front.
func fragment(m *molecule.Molecule, inside []bool, first int) string {
	b := m.Builder()
	drop := make([]bool, len(inside))
	for a := range inside {
		drop[a] = !inside[a]
	}
	for i := range m.NumBonds() { // a cut bond becomes a hydrogen
		if x := m.Bond(i); inside[x.A] != inside[x.B] {
			for _, a := range []int32{x.A, x.B} {
				b.Atoms[a].Hydrogens += x.Order
			}
		}
	}
	to := b.RemoveAtoms(drop)
	for i := range b.Atoms {
		b.Atoms[i].Class = 0
	}
	f, err := b.Build()
	if err != nil {
		return ""
	}
	ranks := append([]int32(nil), f.Ranks()...)
	before := ranks[to[first]]
	for i, r := range ranks { // the first atom moves to the front, those before it make room
		if r < before {
			ranks[i]++
		}
	}
	ranks[to[first]] = 0
	return smiles.WriteInOrder(f, ranks)
}

// Parts returns the core of both sides in pattern notation.
func (s *Sketch) Parts() (left, right []string) { return texts(s.Left), texts(s.Right) }

func quoted(texts []string) string {
	out := make([]string, len(texts))
	for i, t := range texts {
		out[i] = "'" + strings.ReplaceAll(t, "'", "''") + "'"
	}
	return "[" + strings.Join(out, ", ") + "]"
}

func texts(parts []Part) []string {
	out := make([]string, len(parts))
	for i, p := range parts {
		out[i] = p.Text()
	}
	return out
}

func molecules(ms []*molecule.Molecule) []string {
	out := make([]string, len(ms))
	for i, m := range ms {
		out[i] = smiles.Write(m)
	}
	return out
}

// Core writes the YAML lines of the transform that the drawing settles: parts, words, choices; each line is
// indented as a key of a transform.
func (s *Sketch) Core() string {
	var sb strings.Builder
	for _, c := range s.Changes {
		fmt.Fprintf(&sb, "  # %s\n", c)
	}
	fmt.Fprintf(&sb, "  reactants: %s\n  products: %s\n", quoted(texts(s.Left)), quoted(texts(s.Right)))
	s.writeWhere(&sb)
	s.writeChoices(&sb)
	return sb.String()
}

func (s *Sketch) writeWhere(sb *strings.Builder) {
	header := false
	for _, p := range s.Left {
		for _, a := range p.Atoms {
			if len(a.Words) == 0 {
				continue
			}
			if !header {
				sb.WriteString("  where:                                  # as drawn: strike what the reaction does not need\n")
				header = true
			}
			fmt.Fprintf(sb, "    %d: [%s]\n", a.Class, strings.Join(a.Words, ", "))
		}
	}
}

func (s *Sketch) writeChoices(sb *strings.Builder) {
	header := false
	for _, p := range s.Left {
		for _, a := range p.Atoms {
			if a.Leaves == "" {
				continue
			}
			if !header {
				sb.WriteString("  choices:                                # what leaves, first atom attached; add what else serves\n")
				header = true
			}
			fmt.Fprintf(sb, "    %d: %s\n", a.Class, quoted([]string{a.Leaves}))
		}
	}
}

// Example writes the drawing as an example of the transform.
func (s *Sketch) Example() string {
	return fmt.Sprintf("{from: %s, to: '%s'}", quoted(molecules(s.Reactants)), smiles.Write(s.Main()))
}
