package reactions

import (
	"fmt"
	"sort"

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
	groups           []groupLevel // sorted by group id
	spared           []string     // groups said to survive though a wider group does not, sorted
}

type groupLevel struct {
	group string
	level level
	why   string
	kind  Kind
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
		for g, word := range src.Groups {
			lv, ok := levels[word]
			switch {
			case !ok:
				l.errs = append(l.errs, src.Place.Errorf("group %s: survives, spent, competes, reacts or first was expected, not %q", g, word))
			case !l.groups.Has(g):
				l.errs = append(l.errs, src.Place.Errorf("no group %q in rules/groups.yaml%s", g, didYouMean(g, l.groups.IDs())))
			case lv == survives:
				m.spared = append(m.spared, g)
			default:
				m.groups = append(m.groups, groupLevel{g, lv, src.Why[g], kindOf(src.Kinds[g])})
			}
		}
		sort.Strings(m.spared)
		sort.Slice(m.groups, func(i, j int) bool { return m.groups[i].group < m.groups[j].group })
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
func (t *toleranceTable) objections(media []string, s *pattern.Subject, groups *pattern.Groups, busy, weighed []bool) []Objection {
	var out []Objection
	for _, id := range media {
		m := t.media[id]
		if m == nil {
			continue
		}
		for _, gl := range m.groups {
			if gl.level == spent {
				continue
			}
			taken := busy
			if gl.level == competes && weighed != nil {
				taken = weighed
			}
			if free := freeInstances(s, gl.group, m.sparing(s, taken)); free > 0 {
				out = append(out, m.objection(gl, groups.Name(gl.group)))
			}
		}
	}
	return worstPerText(out)
}

// otherSites adds to the busy atoms of each molecule the sites where t could act as well.
func (t *Transform) otherSites(ms []*subject, busy [][]bool) [][]bool {
	out := make([][]bool, len(ms))
	for i, s := range ms {
		out[i] = append([]bool(nil), busy[i]...)
		for k := range t.part[forward] {
			p := &t.part[forward][k]
			for _, m := range p.matches(s.Subject, nil) {
				for _, q := range p.significant {
					out[i][m[q]] = true
				}
			}
		}
	}
	return out
}

// sparing adds to the busy atoms those of groups that survive in the medium.
func (m *medium) sparing(s *pattern.Subject, busy []bool) []bool {
	out := busy
	for i, g := range m.spared {
		if i == 0 {
			out = append([]bool(nil), busy...)
		}
		for _, set := range s.Instances(g) {
			for _, a := range set {
				out[a] = true
			}
		}
	}
	return out
}

func freeInstances(s *pattern.Subject, group string, busy []bool) int {
	n := 0
	for _, set := range s.Instances(group) {
		overlaps := false
		for _, a := range set {
			overlaps = overlaps || busy[a]
		}
		if !overlaps {
			n++
		}
	}
	return n
}

func (m *medium) objection(gl groupLevel, name string) Objection {
	o := Objection{Kind: gl.kind, Source: m.source, Fatal: gl.level >= reacts}
	switch gl.level {
	case competes:
		o.Text = fmt.Sprintf("the %s may react too (%s)", name, m.name)
	case reacts:
		o.Text = fmt.Sprintf("the %s reacts as well (%s)", name, m.name)
	default:
		o.Text = fmt.Sprintf("the %s reacts before the wanted group (%s)", name, m.name)
	}
	switch {
	case gl.why != "" && gl.kind != KindGroup:
		o.Text = gl.why
	case gl.why != "":
		o.Text += ": " + gl.why
	}
	return o
}

func worstPerText(list []Objection) []Objection {
	var out []Objection
	seen := map[string]bool{}
	for _, o := range list {
		if !seen[o.Text] {
			seen[o.Text] = true
			out = append(out, o)
		}
	}
	return out
}
