package reactions

import (
	"fmt"
	"maps"
	"slices"

	"shelfward/molecule/pattern"
	"shelfward/rules"
)

// level says what a medium does to a group.
type level uint8

const (
	survives level = iota
	spent          // takes up reagent, comes back unchanged
	competes
	reacts
	reactsFirst
)

var levels = map[string]level{"survives": survives, "spent": spent, "competes": competes, "reacts": reacts, "first": reactsFirst}

// toleranceTable is the one table media x groups (rules/tolerance.yaml).
type toleranceTable struct {
	order []string
	media map[string]*medium
}

type medium struct {
	id, name, source string
	groups           []groupLevel // in order of group id
	spared           []int        // groups said to survive though a wider group does not
}

// groupLevel is what a medium does to a group that does not just survive or come back unchanged.
type groupLevel struct {
	group     int // see pattern.Groups.Index
	level     level
	objection Objection
}

type sourceTolerance struct {
	Media []struct {
		rules.Place
		ID     rules.Text        `yaml:"id" need:"id: organomagnesium"`
		Name   string            `yaml:"name" need:"name: Grignard reagent in ether"`
		Groups map[string]string `yaml:"groups"`
		Why    map[string]string `yaml:"why"`
		Kinds  map[string]string `yaml:"kinds"` // where the objection is about more than the group: site
		Source sourceNote        `yaml:"source"`
	} `yaml:"media"`
}

func (t *toleranceTable) has(id string) bool { return t != nil && t.media[id] != nil }

func (t *toleranceTable) ids() []string {
	if t == nil {
		return nil
	}
	return t.order
}

func (l *loader) loadTolerance() {
	l.media = &toleranceTable{media: map[string]*medium{}}
	var file sourceTolerance
	if err := rules.ReadInto(l.fsys, "tolerance.yaml", &file); err != nil {
		l.addErr(rules.Place{Path: "tolerance.yaml"}, err)
		return
	}
	for _, src := range file.Media {
		m := &medium{id: src.ID.Value, name: src.Name, source: src.Source.Text}
		for _, g := range slices.Sorted(maps.Keys(src.Groups)) {
			word, at := src.Groups[g], l.groups.Index(g)
			lv, ok := levels[word]
			switch {
			case !ok:
				l.errs = append(l.errs, src.Place.Errorf("group %s: survives, spent, competes, reacts or first was expected, not %q", g, word))
			case at < 0:
				l.errs = append(l.errs, src.Place.Errorf("no group %q in rules/groups.yaml%s", g, didYouMean(g, l.groups.IDs())))
			case lv == survives:
				m.spared = append(m.spared, at)
			case lv > spent:
				m.groups = append(m.groups, groupLevel{at, lv, m.objection(l.groups.Name(g), lv, src.Why[g], kindOf(src.Kinds[g]))})
			}
		}
		if l.media.media[m.id] != nil {
			l.errs = append(l.errs, src.Place.Errorf("the medium %q stands twice", m.id))
			continue
		}
		l.media.media[m.id] = m
		l.media.order = append(l.media.order, m.id)
	}
}

// kindOf reads the kind of an objection; empty means that the group reacts.
func kindOf(word string) Kind {
	if word == "" {
		return KindGroup
	}
	return Kind(word)
}

// objections lists what the media do to the groups of s that do not overlap the atoms marked busy.
// Atoms marked weighed (may be nil) are other sites of the same transform: its preferences weigh them, so
// that they compete is no objection of its own.
func (t *toleranceTable) objections(media []string, s *pattern.Subject, busy, weighed []bool) []Objection {
	var out []Objection
	for _, id := range media {
		m := t.media[id]
		if m == nil {
			continue
		}
		for i := range m.groups {
			gl := &m.groups[i]
			taken := busy
			if gl.level == competes && weighed != nil {
				taken = weighed
			}
			if m.touches(s, gl.group, taken) {
				out = append(out, gl.objection)
			}
		}
	}
	return worstPerText(out)
}

// otherSites adds to the busy atoms of each molecule the sites where t could act as well.
func (t *Transform) otherSites(w *workspace, ms []*subject, busy [][]bool) [][]bool {
	out := make([][]bool, len(ms))
	for i, s := range ms {
		out[i] = append([]bool(nil), busy[i]...)
		for k := range t.part[forward] {
			p := &t.part[forward][k]
			for _, m := range p.matches(w, s.Subject, nil) {
				for _, q := range p.significant {
					out[i][m[q]] = true
				}
			}
		}
	}
	return out
}

// touches says whether a medium finds an occurrence of the group in s that overlaps neither the atoms
// taken nor a group that survives in it.
func (m *medium) touches(s *pattern.Subject, group int, taken []bool) bool {
next:
	for _, set := range s.InstancesOf(group) {
		for _, a := range set {
			if taken[a] || m.spares(s, int(a)) {
				continue next
			}
		}
		return true
	}
	return false
}

// spares says whether atom a belongs to a group that survives.
func (m *medium) spares(s *pattern.Subject, a int) bool {
	for _, g := range m.spared {
		if s.InGroup(g, a) {
			return true
		}
	}
	return false
}

func (m *medium) objection(name string, lv level, why string, kind Kind) Objection {
	o := Objection{Kind: kind, Source: m.source, Fatal: lv >= reacts}
	switch lv {
	case competes:
		o.Text = fmt.Sprintf("the %s may react too (%s)", name, m.name)
	case reacts:
		o.Text = fmt.Sprintf("the %s reacts as well (%s)", name, m.name)
	default:
		o.Text = fmt.Sprintf("the %s reacts before the wanted group (%s)", name, m.name)
	}
	switch {
	case why != "" && kind != KindGroup:
		o.Text = why
	case why != "":
		o.Text += ": " + why
	}
	return o
}

// worstPerText keeps the first of objections that say the same, in the room of list.
func worstPerText(list []Objection) []Objection {
	out := list[:0]
	for _, o := range list {
		if !slices.ContainsFunc(out, func(old Objection) bool { return old.Text == o.Text }) {
			out = append(out, o)
		}
	}
	return out
}
