package name

import (
	"slices"
	"strconv"
	"strings"

	"shelfward/molecule"
)

func heteroRank(e molecule.Element) int {
	switch e {
	case 8:
		return 1
	case 16:
		return 2
	case 34:
		return 3
	case 52:
		return 4
	case 7:
		return 5
	case 15:
		return 6
	case 33:
		return 7
	case 14:
		return 10
	case 32:
		return 11
	case 50:
		return 12
	case 5:
		return 14
	}
	return 0
}

var heteroPrefix = map[molecule.Element]string{8: "oxa", 16: "thia", 34: "selena", 52: "tellura", 7: "aza", 15: "phospha", 33: "arsa", 14: "sila", 32: "germa", 50: "stanna", 5: "bora"}

var heteroOrder = []molecule.Element{8, 16, 34, 52, 7, 15, 33, 14, 32, 50, 5}

func (w *writer) heteroKey(order []int32) []int { return heteroKeyOf(order, w.element) }

func lowestOrders(orders [][]int32, key func([]int32) []int) [][]int32 {
	var kept [][]int32
	var low []int
	for _, o := range orders {
		k := key(o)
		c := -1
		if kept != nil {
			c = slices.Compare(k, low)
		}
		if c < 0 {
			kept, low = append([][]int32(nil), o), k
		} else if c == 0 {
			kept = append(kept, o)
		}
	}
	return kept
}

func numbers(n int) []string {
	list := make([]string, n)
	for i := range list {
		list[i] = strconv.Itoa(i + 1)
	}
	return list
}

func (w *writer) nameMonocycle(s *ringSystem) {
	cyc := w.cycle(s)
	n := len(cyc)
	if n != len(s.atoms) || n > maxStem {
		return
	}
	for i := range n {
		forward, back := make([]int32, n), make([]int32, n)
		for k := range n {
			forward[k] = cyc[(i+k)%n]
			back[k] = cyc[((i-k)%n+n)%n]
		}
		s.orders = append(s.orders, forward, back)
	}
	s.locants = numbers(n)
	hetero := 0
	for _, a := range cyc {
		if e := w.element(a); e != 6 {
			if heteroRank(e) == 0 {
				return
			}
			hetero++
		}
	}
	s.ok = true
	if hetero == 0 {
		s.equal = true
		s.name = "cyclo" + stem(n)
		if n == 6 && w.fullyUnsaturated(s) {
			s.kind, s.name = ringMancude, "benzene"
		}
		return
	}
	s.orders = lowestOrders(s.orders, func(o []int32) []int {
		return append([]int{heteroRank(w.element(o[0])) + 100*boolInt(w.element(o[0]) == 6)}, w.heteroKey(o)...)
	})
	elements := make([]molecule.Element, n)
	for i, a := range s.orders[0] {
		elements[i] = w.element(a)
	}
	if n > 10 {
		s.name = replacement(elements, s.locants) + "cyclo" + stem(n)
		return
	}
	t := loaded()
	s.kind = ringMancude
	s.name = retainedOr(t, widman(elements, false))
	s.saturated = retainedOr(t, widman(elements, true))
	s.equal = hetero == n
}

func retainedOr(t *tables, system string) string {
	if r, ok := t.retained[system]; ok {
		return r
	}
	return system
}

func replacement(elements []molecule.Element, locants []string) string {
	out := ""
	for _, e := range heteroOrder {
		var at []string
		for i, x := range elements {
			if x == e {
				at = append(at, locants[i])
			}
		}
		if len(at) == 0 {
			continue
		}
		if out != "" {
			out += "-"
		}
		out += strings.Join(at, ",") + "-" + multiplier(len(at)) + heteroPrefix[e]
	}
	return out
}

func widman(elements []molecule.Element, saturated bool) string {
	var locants []string
	word := ""
	last := molecule.Element(0)
	nitrogen := false
	for _, e := range heteroOrder {
		n := 0
		for i, x := range elements {
			if x == e {
				n++
				locants = append(locants, strconv.Itoa(i+1))
			}
		}
		if n > 0 {
			word = elide(word, elide(multiplier(n), heteroPrefix[e]))
			last = e
			nitrogen = nitrogen || e == 7
		}
	}
	word = elide(word, widmanEnding(len(elements), last, nitrogen, saturated))
	if len(locants) > 1 {
		word = strings.Join(locants, ",") + "-" + word
	}
	return word
}

func elide(a, b string) string {
	if strings.HasSuffix(a, "a") && b != "" && strings.IndexByte("aeiou", b[0]) >= 0 {
		a = a[:len(a)-1]
	}
	return a + b
}

func widmanEnding(size int, last molecule.Element, nitrogen, saturated bool) string {
	six := 0 // the groups 6A, 6B, 6C
	switch last {
	case 8, 16, 34, 52:
		six = 0
	case 7, 14, 32, 50:
		six = 1
	default:
		six = 2
	}
	if !saturated {
		switch size {
		case 3:
			if nitrogen {
				return "irine"
			}
			return "irene"
		case 6:
			if six == 2 {
				return "inine"
			}
			return "ine"
		}
		return [...]string{4: "ete", 5: "ole", 7: "epine", 8: "ocine", 9: "onine", 10: "ecine"}[size]
	}
	switch size {
	case 3:
		if nitrogen {
			return "iridine"
		}
		return "irane"
	case 4:
		if nitrogen {
			return "etidine"
		}
		return "etane"
	case 5:
		if nitrogen {
			return "olidine"
		}
		return "olane"
	case 6:
		if six == 0 {
			return "ane"
		}
		return "inane"
	}
	return [...]string{7: "epane", 8: "ocane", 9: "onane", 10: "ecane"}[size]
}
