package reactions

import (
	"io/fs"
	"path"
	"strings"

	"shelfward/molecule/pattern"
	"shelfward/rules"
)

// model is one preference model: it gives a site a score in powers of ten of rate. Models are data
// (rules/preferences/*.yaml); this file only knows how to add them up.
type model struct {
	id, means string
	at        int
	first     bool // only the first score that matches counts
	ring      bool // orientation on aromatic rings, see arene.go
	scores    []score
	rho       float64
	needs     float64
	hasMin    bool
	whyNot    string
	source    string
}

type score struct {
	query *pattern.Query
	add   float64
	why   string
	kind  Kind // what a step is told that this score stops; empty: nothing happens
}

type modelFile struct {
	Models []sourceModel `yaml:"models"`
	Arene  *sourceArene  `yaml:"arene"`
}

type sourceModel struct {
	rules.Place
	ID     rules.Text    `yaml:"id" need:"id: markovnikov"`
	Means  string        `yaml:"means"`
	At     int           `yaml:"at"`
	Take   string        `yaml:"take"`
	Ring   bool          `yaml:"ring"`
	Rho    *float64      `yaml:"rho"`
	Scores []sourceScore `yaml:"scores"`
	Needs  *float64      `yaml:"needs"`
	WhyNot string        `yaml:"why_not"`
	Source sourceNote    `yaml:"source"`
}

type sourceScore struct {
	Pattern rules.Text          `yaml:"pattern" need:"pattern: '[C:1]'"`
	Where   map[string]wordList `yaml:"where"`
	Add     float64             `yaml:"add"`
	Why     string              `yaml:"why"`
	Kind    string              `yaml:"kind"`
}

const preferenceFolder = "preferences"

// loadModels reads every file of the preferences folder.
func (l *loader) loadModels() (a *arene) {
	l.models = map[string]*model{}
	names, err := fs.ReadDir(l.fsys, preferenceFolder)
	if err != nil {
		return nil // no folder: transforms that prefer nothing still work
	}
	a = &arene{rho: -8}
	for _, e := range names {
		if e.IsDir() || !strings.HasSuffix(e.Name(), ".yaml") {
			continue
		}
		name := path.Join(preferenceFolder, e.Name())
		var file modelFile
		if err := rules.ReadInto(l.fsys, name, &file); err != nil {
			l.addErr(rules.Place{Path: name}, err)
			continue
		}
		shown := rules.PathOf(l.fsys, name)
		if file.Arene != nil {
			l.compileArene(a, file.Arene, shown)
		}
		for i := range file.Models {
			l.compileModel(&file.Models[i], a, shown)
		}
	}
	return a
}

func (l *loader) compileModel(src *sourceModel, a *arene, file string) {
	m := &model{id: src.ID.Value, means: src.Means, at: max(1, src.At), first: src.Take == "first", ring: src.Ring,
		rho: a.rho, whyNot: src.WhyNot, source: src.Source.Text}
	if src.Rho != nil {
		m.rho = *src.Rho
	}
	if src.Needs != nil {
		m.needs, m.hasMin = *src.Needs, true
	}
	for _, s := range src.Scores {
		q, err := pattern.Compile(s.Pattern.Value, where(s.Where), l.groups)
		if err != nil {
			l.addErr(src.Place, patternError(err, []rules.Text{s.Pattern}, file))
			continue
		}
		for class := 1; class <= m.at; class++ {
			if q.AtomOfClass(class) < 0 && class == 1 {
				l.errs = append(l.errs, s.Pattern.Errorf(file, "a score of model %s needs class 1", m.id))
			}
		}
		m.scores = append(m.scores, score{q, s.Add, s.Why, Kind(s.Kind)})
	}
	if l.models[m.id] != nil {
		l.errs = append(l.errs, src.ID.Errorf(file, "two preference models have the id %q", m.id))
		return
	}
	l.models[m.id] = m
}

// rate returns the score of the model at atoms (indices in s, -1 where a class lies elsewhere).
func (m *model) rate(s *pattern.Subject, atoms []int32) (total float64) {
	for i := range m.scores {
		if sc := &m.scores[i]; sc.fits(s, atoms) {
			total += sc.add
			if m.first {
				break
			}
		}
	}
	return total
}

// stopKind is the kind of objection that the score weighing most against the site names.
func (m *model) stopKind(s *pattern.Subject, atoms []int32) Kind {
	kind, worst := KindNoReaction, 0.0
	for i := range m.scores {
		if sc := &m.scores[i]; sc.add < worst && sc.fits(s, atoms) {
			worst, kind = sc.add, KindNoReaction
			if sc.kind != "" {
				kind = sc.kind
			}
		}
	}
	return kind
}

// fits says whether the pattern matches with its classes 1, 2, ... on atoms.
func (sc *score) fits(s *pattern.Subject, atoms []int32) bool { return sc.query.FitsAt(s, atoms) }
