package route

import (
	"cmp"
	"context"
	"fmt"
	"io"
	"maps"
	"slices"
	"strconv"
	"strings"

	"shelfward/planner/search"
)

// refusal is why a wish keeps a way out.
type refusal struct {
	wish    string // avoid, not, never, only-shelf, max-hazard, coldest, hottest, lacks
	word    string
	needs   string // after one route: 'needs hydrogen'
	need    string // after several: 'need hydrogen'
	matched string // the substance or reaction that the word met; may be empty
}

// refuses makes the refusal of a word to avoid that met something.
func (a *avoided) refuses(matched string) *refusal {
	r := &refusal{wish: "avoid", word: a.word, needs: "uses " + a.word, need: "use " + a.word, matched: matched}
	switch a.kind {
	case "step":
		r.wish, r.needs, r.need = "not", "uses the step "+a.word, "use the step "+a.word
	case "hazard":
		r.needs, r.need = "charges a material with "+a.word, "charge a material with "+a.word
	case "element":
		r.needs, r.need = "passes through something with "+a.word, "pass through something with "+a.word
	}
	if a.byBench {
		r.wish = "never"
	}
	return r
}

// ceiling is the gravest hazard that may be charged.
type ceiling struct {
	word  string
	place int // in the order of gravity; a code before it is graver. -1: class counts
	class int
}

// ceiling reads the word of --max-hazard: an H code, or a class from 0 to 4; nil for the empty word.
func (w *World) ceiling(word string) (*ceiling, error) {
	said := word
	word = strings.ToUpper(strings.TrimSpace(word))
	if word == "" {
		return nil, nil
	}
	if n, err := strconv.Atoi(word); err == nil && n >= 0 && n <= gravestClass {
		return &ceiling{word: "class " + word, place: -1, class: n}, nil
	}
	if !hazardCode.MatchString(word) {
		return nil, fmt.Errorf("max-hazard %q: an H code such as H314, or a class from 0 (none) to %d, was expected", said, gravestClass)
	}
	return &ceiling{word: word, place: w.Gravity(word)}, nil
}

// refuses says whether a material is graver than allowed. One never looked up counts as the gravest.
func (c *ceiling) refuses(w *World, name string, m *Material) *refusal {
	r := &refusal{wish: "max-hazard", word: "graver than " + c.word, matched: nameOr(name, m.SMILES),
		needs: "charges something graver than " + c.word, need: "charge something graver than " + c.word}
	if !m.HazardsKnown {
		r.word, r.needs, r.need = "hazards never looked up", "charges something whose hazards were never looked up", "charge something whose hazards were never looked up"
		return r
	}
	for _, h := range m.Hazards {
		if c.place >= 0 && w.Gravity(h) < c.place || c.place < 0 && w.codeClass(h) > c.class {
			r.matched += " " + h
			return r
		}
	}
	return nil
}

// Kept says what the wishes kept out of a plan.
type Kept struct {
	Avoided   []string  `json:"avoided"`     // the wishes, in words
	LeftOut   []LeftOut `json:"left_out"`    // what they met, those that keep out most routes first
	LeftOutOf int       `json:"left_out_of"` // the routes that LeftOut counts on: the first without any wish
}

// LeftOut is one reason for which ways were left out: what it met, and how many.
type LeftOut struct {
	Wish    string   `json:"wish"`    // avoid, not, never, only-shelf, max-hazard, coldest, hottest, lacks
	Word    string   `json:"word"`    // of the wish, or what is needed
	Matched []string `json:"matched"` // substances or reactions met, those that keep out most ways first
	Ways    int      `json:"ways"`    // steps under one condition set each, among the molecules opened
	Routes  int      `json:"routes"`  // of the LeftOutOf first routes without any wish
	Says    string   `json:"says"`    // '4 routes need hydrogen'

	why refusal
	met map[string]int // ways by what was met
}

// tally counts what the wishes kept out.
type tally struct {
	list []LeftOut
}

func (t *tally) entry(r *refusal) *LeftOut {
	for i := range t.list {
		if e := &t.list[i]; e.Wish == r.wish && e.Word == r.word {
			return e
		}
	}
	t.list = append(t.list, LeftOut{Wish: r.wish, Word: r.word, Matched: []string{}, why: *r, met: map[string]int{}})
	return &t.list[len(t.list)-1]
}

func (t *tally) way(r *refusal, ways int) {
	e := t.entry(r)
	e.Ways += ways
	if r.matched != "" {
		e.met[r.matched] += ways
	}
}

// sorted returns the reasons, those that keep out most routes first.
func (t *tally) sorted() []LeftOut {
	out := append([]LeftOut{}, t.list...)
	slices.SortFunc(out, func(a, b LeftOut) int {
		return cmp.Or(cmp.Compare(b.Routes, a.Routes), cmp.Compare(b.Ways, a.Ways), strings.Compare(a.Wish, b.Wish), strings.Compare(a.Word, b.Word))
	})
	for i := range out {
		l := &out[i]
		l.Says = l.says()
		l.Matched = slices.SortedFunc(maps.Keys(l.met), func(a, b string) int {
			return cmp.Or(cmp.Compare(l.met[b], l.met[a]), strings.Compare(a, b))
		})
	}
	return out
}

func (l *LeftOut) says() string {
	return fmt.Sprintf("%d %s %s", l.Routes, plural(l.Routes, "route", "routes"), plural(l.Routes, l.why.needs, l.why.need))
}

// Without the wishes twice as many routes are looked at as are listed, and at least lookedAt; at most
// lookedFor molecules are opened and a quarter of the time is spent on it.
const (
	lookedAt   = 10
	lookedFor  = 200
	partOfTime = 4
)

// countLeftOut searches without the wishes and counts which of the first routes they keep out. A route
// counts for a reason if one of its steps can be carried out in no other way between the same molecules.
// It returns the number of routes looked at. What it opened is kept for the search with the wishes.
func (c *chemistry) countLeftOut(ctx context.Context, root search.Key, o search.Options) (of int, err error) {
	free := newChemistry(c.world, c.by, &filter{world: c.world}, c.from, c.scale)
	free.oneEnantiomer, free.judged, free.wants = c.oneEnantiomer, c.judged, c.wants
	free.lookFromShelf(ctx)
	free.guesser = c.guesser
	free.enter(c.molecule(root))
	for _, m := range c.from {
		free.enter(m)
	}
	o.Count, o.Accept, o.Time = max(lookedAt, 2*o.Count), free.oneWayEach, o.Time/partOfTime
	if o.MaxExpanded == 0 || lookedFor < o.MaxExpanded {
		o.MaxExpanded = lookedFor
	}
	found, err := search.Find(ctx, free, root, o)
	if err != nil {
		return 0, err
	}
	list := found.Routes[:min(len(found.Routes), o.Count)]
	for _, r := range list {
		var reasons []*refusal
		c.reasons(free, r.Tree, &reasons)
		for _, why := range reasons {
			c.tally.entry(why).Routes++
		}
	}
	return len(list), nil
}

// reasons collects what keeps a route of the free search out, each reason once.
func (c *chemistry) reasons(free *chemistry, t *search.Tree, out *[]*refusal) {
	if why := c.keepsOut(free, t); why != nil {
		if !slices.ContainsFunc(*out, func(r *refusal) bool { return r.wish == why.wish && r.word == why.word }) {
			*out = append(*out, why)
		}
	}
	for _, k := range t.Children {
		c.reasons(free, k, out)
	}
}

func (c *chemistry) keepsOut(free *chemistry, t *search.Tree) *refusal {
	if t.Edge < 0 {
		if c.required(t.Key) {
			return nil
		}
		return c.filter.material(free.material(t.Key), free.molecule(t.Key))
	}
	var chosen *refusal
	for i, o := range free.options[t.Key][t.Edge] {
		why := cmp.Or(c.filter.step(o.step), c.filter.conditions(o.conditions))
		if why == nil {
			return nil
		}
		if i == t.Variant {
			chosen = why
		}
	}
	return chosen
}

// matchedShown is how many of the things that a wish met are named in text; JSON has all.
const matchedShown = 4

// WriteWishes prints what was avoided, and what that kept out.
func (p *Kept) WriteWishes(w io.Writer) {
	for _, line := range p.WishLines() {
		fmt.Fprintln(w, line)
	}
}

// WishLines says what was avoided, how many of the routes that would have come first the wishes keep out,
// and what each word met; no line where nothing was wished.
func (p *Kept) WishLines() (lines []string) {
	if len(p.Avoided) > 0 {
		lines = append(lines, "avoided: "+strings.Join(p.Avoided, "; "))
	}
	var routes []string
	for i := range p.LeftOut {
		if l := &p.LeftOut[i]; l.Routes > 0 {
			routes = append(routes, l.Says)
		}
	}
	switch {
	case p.LeftOutOf > 0 && len(routes) > 0:
		lines = append(lines, fmt.Sprintf("left out: %s (of the %d that come first without these wishes)", strings.Join(routes, "; "), p.LeftOutOf))
	case p.LeftOutOf > 0:
		lines = append(lines, fmt.Sprintf("left out: none of the %d routes that come first without these wishes", p.LeftOutOf))
	}
	for i := range p.LeftOut {
		switch l := &p.LeftOut[i]; {
		case len(l.Matched) > 0:
			lines = append(lines, fmt.Sprintf("  %s met %s: %d %s left out", l.Word, l.named(), l.Ways, plural(l.Ways, "way", "ways")))
		case l.Ways == 0:
			lines = append(lines, fmt.Sprintf("  %s met nothing among the molecules opened", l.Word))
		}
	}
	return lines
}

// named lists what a wish met.
func (l *LeftOut) named() string {
	shown := l.Matched[:min(len(l.Matched), matchedShown)]
	text := strings.Join(shown, ", ")
	if more := len(l.Matched) - len(shown); more > 0 {
		text += fmt.Sprintf(" and %d more", more)
	}
	return text
}
