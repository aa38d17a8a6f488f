package name

import (
	"slices"
	"strconv"
	"strings"

	"shelfward/molecule"
)

// skeleton is a parent hydride as far as its name fixes it.
type skeleton struct {
	elements []molecule.Element
	bonds    [][2]int
	locants  []string
	mancude  bool // the name alone means the most double bonds
	complete bool // a saturated ring with a name of its own: piperidine
}

func chainSkeleton(n int) *skeleton {
	s := &skeleton{locants: numbers(n)}
	for i := range n {
		s.elements = append(s.elements, 6)
		if i > 0 {
			s.bonds = append(s.bonds, [2]int{i - 1, i})
		}
	}
	return s
}

func cycleSkeleton(n int) *skeleton {
	s := chainSkeleton(n)
	s.bonds = append(s.bonds, [2]int{n - 1, 0})
	return s
}

func (e *ringEntry) skeleton() *skeleton {
	s := &skeleton{elements: e.elements, locants: e.locants, mancude: !strings.HasSuffix(e.name, "ane")}
	for i, next := range e.next {
		for _, j := range next {
			if int(j) > i {
				s.bonds = append(s.bonds, [2]int{i, int(j)})
			}
		}
	}
	return s
}

// bicycleSkeleton is bicyclo[a.b.c]; spiroSkeleton spiro[a.b].
func bicycleSkeleton(a, b, c int) *skeleton {
	n := a + b + c + 2
	s := cycleSkeleton(a + b + 2)
	s.locants = numbers(n)
	prev := 0
	for i := a + b + 2; i < n; i++ {
		s.elements = append(s.elements, 6)
		s.bonds = append(s.bonds, [2]int{prev, i})
		prev = i
	}
	s.bonds = append(s.bonds, [2]int{prev, a + 1})
	return s
}

func spiroSkeleton(a, b int) *skeleton {
	n := a + b + 1
	s := chainSkeleton(n)
	s.bonds = append(s.bonds, [2]int{a, 0}, [2]int{n - 1, a})
	return s
}

// hydridesAt lists the parent hydrides that stand at i, without their endings.
func (p *parser) hydridesAt(i, end int) []found {
	if i >= end {
		return nil
	}
	var list []found
	words := loaded().words
	text := p.s[i:end]
	for _, n := range at(&words.parentNames, text) {
		for _, t := range words.parents[n] {
			if len(t.esters) == 0 && p.fits(t) && t.atoms[0].Charge == 0 {
				list = append(list, found{&unit{parent: t}, i + len(n), 0})
			}
		}
	}
	ring := func(s *skeleton, n int) { list = append(list, found{&unit{skeleton: s}, i + n, 0}) }
	for _, r := range loaded().ringWords[text[0]] {
		if strings.HasPrefix(text, r.word) {
			ring(r.skeleton, len(r.word))
		}
	}
	if s, n := fusedAt(text); s != nil {
		ring(s, n)
	}
	if s, n := widmanAt(text); s != nil {
		ring(s, n)
	}
	for _, n := range stemsAt(text) {
		list = append(list, found{&unit{skeleton: chainSkeleton(n.size)}, i + n.length, 0})
	}
	replaced, k := replacementAt(text)
	rest := text[k:]
	if s, n := cageAt(rest); s != nil && replaced.apply(s) {
		ring(s, k+n)
	} else if s, n := polycycleAt(rest); s != nil && replaced.apply(s) {
		ring(s, k+n)
	} else if tail, ok := strings.CutPrefix(rest, "cyclo"); ok {
		for _, n := range stemsAt(tail) {
			if s := cycleSkeleton(n.size); n.size > 2 && replaced.apply(s) {
				ring(s, k+len("cyclo")+n.length)
			}
		}
	}
	return list
}

type stemFound struct{ size, length int }

var stemIndex = func() [256][]string {
	var list [256][]string
	index(&list, stemLengths)
	return list
}()

// stemsAt lists the stems at the beginning of s, longest first.
func stemsAt(s string) []stemFound {
	var list []stemFound
	for _, w := range at(&stemIndex, s) {
		list = append(list, stemFound{stemLengths[w], len(w)})
	}
	return list
}

// ringWord is a way to write a retained ring name.
type ringWord struct {
	word     string
	skeleton *skeleton
}

// ringWords lists the retained ring names, with and without their final e, by first letter.
func (t *tables) listRingWords() {
	add := func(word string, s *skeleton) {
		t.ringWords[word[0]] = append(t.ringWords[word[0]], ringWord{word, s})
		if short, ok := strings.CutSuffix(word, "e"); ok {
			t.ringWords[word[0]] = append(t.ringWords[word[0]], ringWord{short, s})
		}
	}
	for name, e := range t.ringNamed {
		s := e.skeleton()
		if !s.mancude {
			name = strings.TrimSuffix(name, "ane")
			t.ringWords[name[0]] = append(t.ringWords[name[0]], ringWord{name, s})
			continue
		}
		add(name, s)
	}
	for name, system := range t.system {
		if s, n := widmanAt(system); s != nil && n == len(system) {
			add(name, s)
		}
	}
	for i := range t.ringWords {
		sortRingWords(t.ringWords[i])
	}
}

// replacements are the atoms that replacement prefixes name.
type replacements []struct {
	element molecule.Element
	locants []string
}

// replacementAt reads "2-oxa-5-aza" before a ring; k is the place behind it.
func replacementAt(s string) (r replacements, k int) {
	for {
		j := k
		if j < len(s) && s[j] == '-' && k > 0 {
			j++
		}
		start := j
		for j < len(s) && (s[j] >= '0' && s[j] <= '9' || s[j] == ',') {
			j++
		}
		if j == start || j >= len(s) || s[j] != '-' {
			return r, k
		}
		locants := strings.Split(s[start:j], ",")
		j++
		word := multiplier(len(locants))
		if !strings.HasPrefix(s[j:], word) {
			return r, k
		}
		j += len(word)
		ok := false
		for _, e := range heteroOrder {
			if strings.HasPrefix(s[j:], heteroPrefix[e]) {
				r = append(r, struct {
					element molecule.Element
					locants []string
				}{e, locants})
				k, ok = j+len(heteroPrefix[e]), true
				break
			}
		}
		if !ok {
			return r, k
		}
	}
}

func (r replacements) apply(s *skeleton) bool {
	for _, x := range r {
		for _, l := range x.locants {
			n, err := strconv.Atoi(l)
			if err != nil || n < 1 || n > len(s.elements) || s.elements[n-1] != 6 {
				return false
			}
			s.elements[n-1] = x.element
		}
	}
	return true
}

// cageAt reads "bicyclo[2.2.1]hept" and "spiro[4.5]dec".
func cageAt(s string) (*skeleton, int) {
	word := ""
	for _, w := range []string{"bicyclo[", "spiro["} {
		if strings.HasPrefix(s, w) {
			word = w
		}
	}
	c := strings.IndexByte(s, ']')
	if word == "" || c < 0 {
		return nil, 0
	}
	var sizes []int
	total := 0
	for _, x := range strings.Split(s[len(word):c], ".") {
		n, err := strconv.Atoi(x)
		if err != nil || n < 0 || n > maxStem {
			return nil, 0
		}
		sizes = append(sizes, n)
		total += n
	}
	var k *skeleton
	switch {
	case word == "spiro[" && len(sizes) == 2 && sizes[0] <= sizes[1] && sizes[0] > 1:
		k = spiroSkeleton(sizes[0], sizes[1])
	case word == "bicyclo[" && len(sizes) == 3 && sizes[0] >= sizes[1] && sizes[1] >= sizes[2] && sizes[1] > 0:
		k = bicycleSkeleton(sizes[0], sizes[1], sizes[2])
	default:
		return nil, 0
	}
	n := len(k.elements)
	if n > maxStem || !strings.HasPrefix(s[c+1:], stem(n)) {
		return nil, 0
	}
	return k, c + 1 + len(stem(n))
}

// widmanRings are the endings of Hantzsch-Widman names without final e.
var widmanRings = []struct {
	ending    string
	size      int
	saturated bool
}{
	{"irin", 3, false}, {"iren", 3, false}, {"iridin", 3, true}, {"iran", 3, true},
	{"etidin", 4, true}, {"etan", 4, true}, {"et", 4, false},
	{"olidin", 5, true}, {"olan", 5, true}, {"ol", 5, false},
	{"inin", 6, false}, {"inan", 6, true}, {"in", 6, false}, {"an", 6, true},
	{"epin", 7, false}, {"epan", 7, true}, {"ocin", 8, false}, {"ocan", 8, true},
	{"onin", 9, false}, {"onan", 9, true}, {"ecin", 10, false}, {"ecan", 10, true},
}

// widmanAt reads a Hantzsch-Widman name at the beginning of s, with its final e where it has one.
func widmanAt(s string) (*skeleton, int) {
	i := 0
	for i < len(s) && (s[i] >= '0' && s[i] <= '9' || s[i] == ',') {
		i++
	}
	var locants []string
	if i > 0 {
		if i >= len(s) || s[i] != '-' {
			return nil, 0
		}
		locants = strings.Split(s[:i], ",")
		i++
	}
	return widmanTail(s, i, nil, locants)
}

// widmanTail reads the rest of a Hantzsch-Widman name behind the pieces already read; a piece may or
// may not have lost its a, so that both ways are tried.
func widmanTail(s string, i int, elements []molecule.Element, locants []string) (*skeleton, int) {
	if len(elements) > 10 {
		return nil, 0
	}
	if len(elements) > 0 {
		if k, n := widmanRing(s, i, elements, locants); k != nil {
			return k, n
		}
	}
	for count := 1; count <= 6; count++ {
		word := multiplier(count)
		for x, m := range []string{word, strings.TrimSuffix(word, "a")} {
			if x == 1 && m == word || !strings.HasPrefix(s[i:], m) {
				continue
			}
			for _, e := range heteroOrder {
				full := heteroPrefix[e]
				for _, h := range []string{full, full[:len(full)-1]} {
					if !strings.HasPrefix(s[i+len(m):], h) {
						continue
					}
					more := slices.Clone(elements)
					for range count {
						more = append(more, e)
					}
					if k, n := widmanTail(s, i+len(m)+len(h), more, locants); k != nil {
						return k, n
					}
				}
			}
		}
	}
	return nil, 0
}

// widmanRing makes the ring whose ending stands at i.
func widmanRing(s string, i int, elements []molecule.Element, locants []string) (*skeleton, int) {
	if len(locants) > 0 && len(locants) != len(elements) {
		return nil, 0
	}
	for _, r := range widmanRings {
		if !strings.HasPrefix(s[i:], r.ending) {
			continue
		}
		if len(locants) == 0 && len(elements) != 1 && len(elements) != r.size {
			return nil, 0
		}
		k := cycleSkeleton(r.size)
		k.mancude, k.complete = !r.saturated, r.saturated
		for x, e := range elements {
			at := x
			if len(locants) > 0 {
				n, err := strconv.Atoi(locants[x])
				if err != nil || n < 1 || n > r.size {
					return nil, 0
				}
				at = n - 1
			}
			if k.elements[at] != 6 {
				return nil, 0
			}
			k.elements[at] = e
		}
		i += len(r.ending)
		if i < len(s) && s[i] == 'e' {
			i++
		}
		return k, i
	}
	return nil, 0
}
