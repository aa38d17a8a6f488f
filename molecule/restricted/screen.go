// Package restricted decides which compounds the program does not plan: classes of chemical weapons,
// explosives, controlled drugs and their watched precursors, and what else rules/restricted.yaml
// names, with the list's publisher.
//
// It promises coarse tests that err to refusal inside a class, opaque keys instead of lists, the same
// text whichever test answered, and no hint beyond the name of the class. It does not claim to know
// every listed compound. No switch turns it off; a user's file may add.
package restricted

import (
	"fmt"
	"slices"
	"strings"
	"sync"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
	"shelfward/rules"
)

// Outcome is what the screen decides, in rising order.
type Outcome uint8

// The outcomes.
const (
	Pass Outcome = iota
	Flagged
	Refused
)

// Verdict is the screen's answer for one compound.
type Verdict struct {
	Outcome   Outcome
	Class     string   // of a refusal: the class's name
	Publisher string   // of a refusal: who publishes the list
	Text      string   // of a refusal: the message to print, and nothing else
	Flags     []string // lines that the plan must carry
}

// Declined reports whether nothing may be planned.
func (v Verdict) Declined() bool { return v.Outcome == Refused }

// Screen holds the compiled classes. It is safe for concurrent use.
type Screen struct {
	classes                             []class
	allowed                             map[string]map[string]bool // key -> class ids that let it pass
	message, leftOut, listsOf, stopFlag string

	mu   sync.RWMutex
	seen map[molecule.Key]Verdict // intermediates by exact key
}

// Builtin loads the embedded screen once.
var Builtin = sync.OnceValues(func() (*Screen, error) { return Load(rules.Files()) })

// Target screens a target before anything is planned.
func (s *Screen) Target(m *molecule.Molecule) Verdict { return s.screen(m, true, true) }

// Product screens what a single step to be judged would make: listed compounds are refused as targets
// are; energetic groups pass as in an intermediate, with the stop flag.
func (s *Screen) Product(m *molecule.Molecule) Verdict { return s.screen(m, true, false) }

// maxSeen bounds the cache of intermediates.
const maxSeen = 1 << 20

// Intermediate screens a compound that a route would make and isolate, or a reagent made on the way;
// it is not meant for what stands on the shelf. Compounds without carbon pass: they are reagents, and
// azide or hydrazine is no product of a route. Answers are kept by key.
func (s *Screen) Intermediate(m *molecule.Molecule) Verdict {
	key := m.Key()
	s.mu.RLock()
	v, ok := s.seen[key]
	s.mu.RUnlock()
	if ok {
		return v
	}
	v = s.screen(m, false, false)
	s.mu.Lock()
	if len(s.seen) < maxSeen {
		s.seen[key] = v
	}
	s.mu.Unlock()
	return v
}

// LeftOut is the line for routes that were left out; empty if there are none.
func (s *Screen) LeftOut(count int) string {
	if count == 0 {
		return ""
	}
	noun := "routes"
	if count == 1 {
		noun = "route"
	}
	text := strings.ReplaceAll(s.leftOut, "{count}", fmt.Sprintf("%d %s", count, noun))
	if count == 1 {
		text = strings.Replace(strings.Replace(text, " were ", " was ", 1), "they pass", "it passes", 1)
	}
	return text
}

// Age returns a line when the lists behind the keys are older than a year at the given time; empty
// otherwise.
func (s *Screen) Age(now time.Time) string {
	made, err := time.Parse("2006-01", s.listsOf)
	if err != nil || now.Before(made.AddDate(1, 0, 0)) {
		return ""
	}
	return "The lists behind the screen for restricted work are of " + s.listsOf + ", older than a year: the publishers' current lists decide."
}

// subject is a molecule ready for the tests.
type subject struct {
	*pattern.Subject
	formula molecule.Formula
}

func newSubject(m *molecule.Molecule) *subject {
	return &subject{pattern.NewSubject(m, acylGroups()), m.Formula()}
}

// screen runs all classes; the first refusal ends it. listed: classes that hold for targets only count;
// isolated: energetic groups are judged as in an isolated target.
func (s *Screen) screen(m *molecule.Molecule, listed, isolated bool) Verdict {
	parts := plain(m)
	keys := make([]string, len(parts))
	for i, p := range parts {
		keys[i] = Key(p)
	}
	subjects := []*subject{newSubject(bare(m))}
	if len(parts) > 1 {
		for _, p := range parts {
			subjects = append(subjects, newSubject(p))
		}
	}
	if !listed && carbons(m) == 0 {
		return Verdict{} // a reagent that is bought, no intermediate of a route
	}
	var v Verdict
	for i := range s.classes {
		c := &s.classes[i]
		if c.targetOnly && !listed && c.refuse {
			continue
		}
		outcome, flag := c.judge(keys, subjects, isolated, s.stopFlag)
		if outcome == Refused && s.lets(c, keys) {
			outcome, flag = Flagged, c.says
		}
		if outcome == Refused {
			return s.refusal(c)
		}
		if outcome == Flagged {
			v.Outcome = Flagged
			if flag != "" && !slices.Contains(v.Flags, flag) {
				v.Flags = append(v.Flags, flag)
			}
		}
	}
	return v
}

// lets reports whether every part is on the allow list of the class: a refusal then becomes a flag.
func (s *Screen) lets(c *class, keys []string) bool {
	for _, k := range keys {
		if !s.allowed[k][c.id] {
			return false
		}
	}
	return true
}

func (s *Screen) refusal(c *class) Verdict {
	text := strings.NewReplacer("{class}", c.name, "{publisher}", c.publisher).Replace(strings.TrimSpace(s.message))
	return Verdict{Outcome: Refused, Class: c.name, Publisher: c.publisher, Text: text}
}

// judge runs the keys and tests of one class.
func (c *class) judge(keys []string, subjects []*subject, target bool, stopFlag string) (Outcome, string) {
	for _, k := range keys {
		if c.keys[k] {
			return c.outcome(subjects[0].M), c.says
		}
	}
	result, flag := Pass, ""
	for i := range c.tests {
		for _, subject := range subjects {
			places := c.tests[i].places(subject)
			if places == 0 {
				continue
			}
			if each := c.tests[i].carbonsEach; each > 0 && !target && carbons(subject.M) >= each*places {
				result, flag = Flagged, stopFlag
				continue
			}
			if o := c.outcome(subject.M); o == Refused {
				return Refused, ""
			}
			result, flag = Flagged, c.says
		}
	}
	return result, flag
}

// outcome is what a hit in the class means for a molecule.
func (c *class) outcome(m *molecule.Molecule) Outcome {
	if c.refuse || c.raise != nil && c.raise.passed(m) {
		return Refused
	}
	return Flagged
}

// places counts the different places of the test in a molecule, up to what it needs; 0 if it fails.
func (t *test) places(s *subject) int {
	for _, el := range t.elements {
		if s.formula.Count[el] == 0 {
			return 0
		}
	}
	if t.mostCarbons > 0 && carbons(s.M) > t.mostCarbons || !t.query.Matches(s.Subject) {
		return 0
	}
	for _, q := range t.also {
		if !q.Matches(s.Subject) {
			return 0
		}
	}
	for _, q := range t.unless {
		if q.Matches(s.Subject) {
			return 0
		}
	}
	if len(t.only) > 0 && !t.onlyElements(s.M) {
		return 0
	}
	if t.atLeast == 1 && t.carbonsEach == 0 {
		return 1
	}
	if places := len(t.query.AtomSets(s.Subject)); places >= t.atLeast {
		return places
	}
	return 0
}

func (t *test) onlyElements(m *molecule.Molecule) bool {
	f := m.Formula()
	for _, el := range t.only {
		f.Count[el] = 0
	}
	for _, n := range f.Count {
		if n > 0 {
			return false
		}
	}
	return true
}

func carbons(m *molecule.Molecule) int { return int(m.Formula().Count[6]) }

// passed reports whether the molecule is rich enough in oxygen or nitrogen to count as an explosive.
// Oxygen balance in percent, halogens leaving as HX: -1600 (2C + (H - X)/2 - O)/M. Source: textbook
// definition (Lothrop and Handrick, 1949, from memory); the limits are common practice.
func (r *raise) passed(m *molecule.Molecule) bool {
	f := m.Formula()
	c, h, n, o := float64(f.Count[6]), float64(f.Count[1]), float64(f.Count[7]), float64(f.Count[8])
	x := float64(f.Count[9] + f.Count[17] + f.Count[35] + f.Count[53])
	balance := -1600 * (2*c + (h-x)/2 - o) / f.MolarMass()
	return balance > r.OxygenBalance || n > 0 && (c+o)/n < r.CarbonOxygenPerNitrogen
}
