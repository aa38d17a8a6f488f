package name

import (
	"slices"
	"strings"
)

// unit is a parsed name of a molecule or radical: a parent with what stands before and behind it.
type unit struct {
	parent    *template // structure known whole; nil if skeleton is set
	skeleton  *skeleton
	multiple  []multipleBond
	indicated []string
	added     []string
	hydro     []string
	hydros    int // hydro prefixes without locants
	items     []item
	suffixes  []suffix
	free      []string // locants of free valences; "" where none was written
	order     int      // of the free valence
	root      *template
	ending    *template // of an acid root
}

// multipleBond is an ene or yne ending.
type multipleBond struct {
	from, to string // locants; both empty where none was written
	order    int
}

// item is a substituent with its locants; count is how often it occurs.
type item struct {
	locants []string
	count   int
	*unit
}

// suffix is a characteristic group behind the parent.
type suffix struct {
	*template
	locants []string
	count   int
}

// mode says what a text must be.
type mode uint8

const (
	asMolecule mode = iota
	asRadical
)

// parser reads one word of a name; brackets are matched beforehand.
type parser struct {
	s       string
	closing []int // position of an opening bracket -> its closing bracket
	memo    map[[3]int]*unit
	steps   int
	ester   string // "S" or "O" if the ester words say which atom
}

// maxSteps bounds the work for one word: names of real compounds need a few hundred steps.
const maxSteps = 20000

func newParser(s string) *parser {
	p := &parser{s: s, closing: make([]int, len(s)), memo: map[[3]int]*unit{}}
	var stack []int
	for i := 0; i < len(s); i++ {
		switch s[i] {
		case '(', '[', '{':
			stack = append(stack, i)
		case ')', ']', '}':
			if len(stack) == 0 {
				return nil
			}
			p.closing[stack[len(stack)-1]] = i
			stack = stack[:len(stack)-1]
		}
	}
	if len(stack) > 0 {
		return nil
	}
	return p
}

// unit reads s[i:end] as a whole; nil if it is none.
func (p *parser) unit(i, end int, m mode) *unit {
	if i >= end || p.steps > maxSteps {
		return nil
	}
	key := [3]int{i, end, int(m)}
	if u, ok := p.memo[key]; ok {
		return u
	}
	p.memo[key] = nil
	u := p.findUnit(i, end, m)
	p.memo[key] = u
	return u
}

func (p *parser) findUnit(i, end int, m mode) *unit {
	p.steps++
	if u := p.parentAt(i, end, m); u != nil {
		return u
	}
	locants, j := p.locants(i, end)
	if n := len(locants); n > 0 && strings.HasSuffix(locants[0], "H") {
		return p.indicatedUnit(locants, j, end, m)
	}
	if j < i {
		j = i
	} else if u := p.oldStyle(locants, j, end, m); u != nil {
		return u
	}
	for _, mult := range p.multipliers(j, end) {
		k := j + mult.length
		if strings.HasPrefix(p.s[k:end], "hydro") && !strings.HasPrefix(p.s[k:end], "hydroxy") && !strings.HasPrefix(p.s[k:end], "hydroperoxy") {
			next := p.skipHyphen(k + len("hydro"))
			if len(locants) > 0 && len(locants) != mult.count {
				continue
			}
			if tail := p.unit(next, end, m); tail != nil && tail.hydros == 0 && len(tail.hydro) == 0 {
				u := *tail
				u.hydro, u.hydros = locants, mult.count
				return &u
			}
			continue
		}
		for _, r := range p.radicalsAt(k, end) {
			if len(locants) > 0 && len(locants) != mult.count*max(1, r.count) {
				continue
			}
			if tail := p.unit(p.skipHyphen(r.end), end, m); tail != nil {
				u := *tail
				u.items = append([]item{{locants, mult.count * max(1, r.count), r.unit}}, tail.items...)
				return &u
			}
		}
	}
	return nil
}

func (p *parser) indicatedUnit(locants []string, j, end int, m mode) *unit {
	tail := p.unit(j, end, m)
	if tail == nil || tail.indicated != nil {
		return nil
	}
	u := *tail
	for _, l := range locants {
		u.indicated = append(u.indicated, strings.TrimSuffix(l, "H"))
	}
	return &u
}

// oldStyle reads names whose locants stand before the parent: 2-propanol, 1-hexene, 1,3-propanediol.
func (p *parser) oldStyle(locants []string, j, end int, m mode) *unit {
	tail := p.parentAt(j, end, m)
	if tail == nil || tail.skeleton == nil {
		return nil
	}
	u := *tail
	if n := len(u.suffixes); n == 1 && u.suffixes[0].locants == nil && !u.suffixes[0].end && u.suffixes[0].count == len(locants) && (len(u.multiple) == 0 || u.multiple[0].from != "") {
		u.suffixes = []suffix{{u.suffixes[0].template, locants, len(locants)}}
		return &u
	}
	if len(u.multiple) == len(locants) && u.multiple[0].from == "" {
		u.multiple = slices.Clone(u.multiple)
		for k, l := range locants {
			u.multiple[k].from = l
		}
		return &u
	}
	return nil
}

func (p *parser) skipHyphen(i int) int {
	if i < len(p.s) && p.s[i] == '-' {
		return i + 1
	}
	return i
}

// locants reads "1,2-", "N,N'-", "4a,8a-", "1H-" at i; j is the place behind the hyphen, or -1.
func (p *parser) locants(i, end int) (list []string, j int) {
	j = i
	for {
		k := j
		for k < end && (p.s[k] >= '0' && p.s[k] <= '9' || p.s[k] == 'N' || p.s[k] == 'O' || p.s[k] == 'S') {
			k++
		}
		if k == j {
			return nil, -1
		}
		if k < end && p.s[k] >= 'a' && p.s[k] <= 'z' && k+1 < end && !(p.s[k+1] >= 'a' && p.s[k+1] <= 'z') {
			k++
		}
		for k < end && p.s[k] == '\'' {
			k++
		}
		if k < end && p.s[k] == 'H' {
			k++
		}
		list = append(list, p.s[j:k])
		if k < end && p.s[k] == ',' {
			j = k + 1
			continue
		}
		if k < end && p.s[k] == '-' {
			return list, k + 1
		}
		return nil, -1
	}
}

// multiple is a multiplying prefix found in the text.
type multiple struct{ count, length int }

var multiplierWords = func() [256][]struct {
	word  string
	count int
} {
	var list [256][]struct {
		word  string
		count int
	}
	add := func(w string, n int) {
		list[w[0]] = append(list[w[0]], struct {
			word  string
			count int
		}{w, n})
	}
	for n := 2; n <= 50; n++ {
		add(groupMultiplier(n), n)
		add(multiplier(n), n)
	}
	return list
}()

// multipliers lists the multiplying prefixes at i; none comes first: octadecyl is not eight times decyl.
func (p *parser) multipliers(i, end int) []multiple {
	list := []multiple{{1, 0}}
	if i < end {
		for _, w := range multiplierWords[p.s[i]] {
			if strings.HasPrefix(p.s[i:end], w.word) {
				n := len(w.word)
				if i+n < end && p.s[i+n] == '-' && strings.HasPrefix(p.s[i+n:end], "-tert-") {
					n++ // di-tert-butyl
				}
				list = append(list, multiple{w.count, n})
			}
		}
	}
	return list
}

// elided lists the multiplying prefixes that lost their a before a vowel: tetrol.
// found is a radical in the text.
type found struct {
	*unit
	end   int
	count int // a multiplier inside its brackets; 0 none
}

// radicalsAt lists the radicals that stand at i, longest first.
func (p *parser) radicalsAt(i, end int) []found {
	if i >= end {
		return nil
	}
	p.steps++
	var list []found
	switch p.s[i] {
	case '(', '[', '{':
		c := p.closing[i]
		if c >= end || c == 0 {
			break
		}
		if u := p.unit(i+1, c, asRadical); u != nil {
			return []found{{u, c + 1, 0}}
		}
		for _, m := range p.multipliers(i+1, c) {
			if m.count > 1 {
				if u := p.unit(i+1+m.length, c, asRadical); u != nil {
					return []found{{u, c + 1, m.count}}
				}
			}
		}
	}
	words := loaded().words
	for _, n := range at(&words.radicalNames, p.s[i:end]) {
		list = append(list, found{&unit{parent: words.radicals[n], order: words.radicals[n].order}, i + len(n), 0})
	}
	for _, r := range p.rootsAt(i, end, asRadical, false) {
		list = append(list, r)
	}
	return append(list, p.hydrideUnits(i, end, asRadical, false)...)
}

// parentAt reads s[i:end] as a parent with its suffix.
func (p *parser) parentAt(i, end int, m mode) *unit {
	if i >= end {
		return nil
	}
	words := loaded().words
	text := p.s[i:end]
	if m == asRadical {
		if t := words.radicals[text]; t != nil {
			return &unit{parent: t, order: t.order}
		}
	} else {
		for _, t := range words.parents[text] {
			if p.fits(t) {
				return &unit{parent: t}
			}
		}
	}
	for _, f := range p.rootsAt(i, end, m, true) {
		return f.unit
	}
	for _, f := range p.hydrideUnits(i, end, m, true) {
		return f.unit
	}
	return nil
}

// fits says whether t suits the ester words: S- or O-.
func (p *parser) fits(t *template) bool { return t.ester == "" || t.ester == p.ester }

// rootEndings are the endings of acid roots and the suffix that each stands for.
var rootEndings = []struct{ ending, suffix string }{
	{"ic acid", "oic acid"}, {"oic acid", "oic acid"}, {"ate", "oate"}, {"oate", "oate"}, {"yl", "oyl"}, {"oyl", "oyl"},
	{"amide", "amide"}, {"amido", "amido"}, {"onitrile", "nitrile"}, {"aldehyde", "al"}, {"ohydrazide", "hydrazide"}, {"ic anhydride", "anhydride"},
}

// rootsAt reads acid roots with their endings.
func (p *parser) rootsAt(i, end int, m mode, whole bool) []found {
	words := loaded().words
	var list []found
	for _, n := range at(&words.rootNames, p.s[i:end]) {
		rest := p.s[i+len(n) : end]
		for _, e := range rootEndings {
			if !strings.HasPrefix(rest, e.ending) || whole && len(rest) != len(e.ending) {
				continue
			}
			for _, t := range words.suffixes[e.suffix] {
				if t.radical == (m == asRadical) && (t.end || e.suffix == "oyl") {
					list = append(list, found{&unit{root: words.roots[n], ending: t, order: 1}, i + len(n) + len(e.ending), 0})
				}
			}
		}
	}
	return list
}

// hydrideUnits reads a parent hydride with its endings and suffix.
func (p *parser) hydrideUnits(i, end int, m mode, whole bool) []found {
	var list []found
	for _, h := range p.hydridesAt(i, end) {
		for _, f := range p.endings(h, end, m) {
			if !whole || f.end == end {
				list = append(list, f)
			}
		}
	}
	return list
}

// endings reads ane, ene, yne and then the suffix of h.
// multipleBonds reads "-2-en", "a-1,3-dien", "-1-yn", "en".
// bondLocants reads "1,3-" and "1(6),3-".
// suffixesAt reads the suffix behind a hydride, or its end.
// suffixNamesAt lists the suffixes at the beginning of s.
// suffixLocants reads "1,3-" and "1(2H)-".
