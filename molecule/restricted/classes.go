package restricted

import (
	"io/fs"
	"slices"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// class is one class of restricted.yaml, compiled.
type class struct {
	id, name, publisher string
	refuse              bool
	targetOnly          bool
	says                string // the line of a flag
	raise               *raise
	tests               []test
	keys                map[string]bool
}

// test is a structural test of a class.
type test struct {
	query       *pattern.Query
	also        []*pattern.Query
	unless      []*pattern.Query
	atLeast     int
	carbonsEach int // as an intermediate: enough carbons for each place let it pass with the stop flag
	mostCarbons int // 0: any number
	only        []molecule.Element
	elements    []molecule.Element // that the query needs: a quick refusal before matching
}

// raise says when a flag becomes a refusal.
type raise struct {
	OxygenBalance           float64 `yaml:"oxygen_balance"`
	CarbonOxygenPerNitrogen float64 `yaml:"carbon_oxygen_per_nitrogen"`
}

type testEntry struct {
	rules.Place
	Pattern     rules.Text          `yaml:"pattern" need:"pattern: '...'"`
	Where       map[string][]string `yaml:"where"`
	Also        []rules.Text        `yaml:"also"`
	Unless      []rules.Text        `yaml:"unless"`
	AtLeast     int                 `yaml:"at_least"`
	CarbonsEach int                 `yaml:"carbons_each"`
	MostCarbons int                 `yaml:"most_carbons"`
	Only        []string            `yaml:"only"`
	Why         string              `yaml:"why" need:"why: nitrate esters"`
}

type file struct {
	Message  string `yaml:"message"`
	LeftOut  string `yaml:"left_out"`
	ListsOf  string `yaml:"lists_of"`
	StopFlag string `yaml:"stop_flag"`
	Classes  []struct {
		rules.Place
		ID         string       `yaml:"id" need:"id: explosives"`
		Name       string       `yaml:"name" need:"name: explosives"`
		Publisher  string       `yaml:"publisher" need:"publisher: '...'"`
		Outcome    rules.Text   `yaml:"outcome" need:"outcome: refuse"`
		As         rules.Text   `yaml:"as"`
		Says       string       `yaml:"says"`
		Raise      *raise       `yaml:"raise"`
		Tests      []testEntry  `yaml:"tests"`
		Keys       []string     `yaml:"keys"`
		Structures []rules.Text `yaml:"structures"`
	} `yaml:"classes"`
	Allow []struct {
		rules.Place
		Structure rules.Text `yaml:"structure" need:"structure: 'SMILES'"`
		Class     string     `yaml:"class" need:"class: explosives"`
		Why       string     `yaml:"why" need:"why: '...'"`
		SeenBy    string     `yaml:"seen_by" need:"seen_by: 'role, date'"`
	} `yaml:"allow"`
}

// Load reads restricted.yaml of a rules file system; a user's file adds to the built-in one. Errors
// are a rules.ErrorList.
func Load(fsys fs.FS) (*Screen, error) {
	layers, err := rules.Layers(fsys, "restricted.yaml")
	if err != nil {
		return nil, err
	}
	s := &Screen{allowed: map[string]map[string]bool{}, seen: map[molecule.Key]Verdict{}}
	var errs rules.ErrorList
	for i, layer := range layers {
		var f file
		if err := rules.Decode(layer.Path, layer.Data, &f); err != nil {
			errs.Add(rules.Place{Path: layer.Path}, err)
			continue
		}
		s.add(&f, i == 0, &errs)
	}
	if err := errs.Err(); err != nil {
		return nil, err
	}
	return s, nil
}

// add compiles a file. Only the built-in one sets the texts and lets compounds pass.
func (s *Screen) add(f *file, builtin bool, errs *rules.ErrorList) {
	if builtin {
		s.message, s.leftOut, s.listsOf, s.stopFlag = f.Message, f.LeftOut, f.ListsOf, f.StopFlag
		for _, a := range f.Allow {
			m, err := smiles.Read(a.Structure.Value)
			if err != nil {
				errs.Add(a.Place, a.Structure.Errorf(a.Path, "%v", err))
				continue
			}
			key := Key(m)
			if s.allowed[key] == nil {
				s.allowed[key] = map[string]bool{}
			}
			s.allowed[key][a.Class] = true
		}
	}
	for _, e := range f.Classes {
		c := class{id: e.ID, name: e.Name, publisher: e.Publisher, refuse: e.Outcome.Value == "refuse", targetOnly: e.As.Value == "target",
			says: e.Says, raise: e.Raise, keys: map[string]bool{}}
		if o := e.Outcome.Value; o != "refuse" && o != "flag" {
			errs.Add(e.Place, e.Outcome.Errorf(e.Path, "outcome is refuse or flag, not %q", o))
		}
		if a := e.As.Value; a != "" && a != "target" && a != "any" {
			errs.Add(e.Place, e.As.Errorf(e.Path, "as is target or any, not %q", a))
		}
		for _, k := range e.Keys {
			c.keys[k] = true
		}
		for _, text := range e.Structures {
			m, err := smiles.Read(text.Value)
			if err != nil {
				errs.Add(e.Place, text.Errorf(e.Path, "%v", err))
				continue
			}
			for _, part := range plain(m) {
				c.keys[Key(part)] = true
			}
		}
		for _, t := range e.Tests {
			if compiled, ok := compile(t, errs); ok {
				c.tests = append(c.tests, compiled)
			}
		}
		s.classes = append(s.classes, c)
	}
}

// compile makes a test ready; mistakes go to errs.
func compile(e testEntry, errs *rules.ErrorList) (test, bool) {
	t := test{atLeast: max(1, e.AtLeast), carbonsEach: e.CarbonsEach, mostCarbons: e.MostCarbons}
	before := len(*errs)
	one := func(text rules.Text, where pattern.Where) *pattern.Query {
		q, err := pattern.Compile(text.Value, where, acylGroups())
		if err != nil {
			errs.Add(e.Place, text.Errorf(e.Path, "%v", err))
		}
		return q
	}
	t.query = one(e.Pattern, e.Where)
	for _, text := range e.Also {
		t.also = append(t.also, one(text, nil))
	}
	for _, text := range e.Unless {
		t.unless = append(t.unless, one(text, nil))
	}
	for _, symbol := range e.Only {
		el, ok := molecule.ElementBySymbol(symbol)
		if !ok {
			errs.Add(e.Place, e.Place.Errorf("no element %q", symbol))
		}
		t.only = append(t.only, el)
	}
	if len(*errs) > before {
		return t, false
	}
	for i := range t.query.Atoms {
		if el, ok := t.query.Atoms[i].SingleElement(); ok && el != 6 && !slices.Contains(t.elements, el) {
			t.elements = append(t.elements, el)
		}
	}
	return t, true
}

// acylGroups holds the one group that tests may refer to: what makes a halogen on nitrogen a reagent
// and no halogen amine.
var acylGroups = sync.OnceValue(func() *pattern.Groups {
	g := pattern.NewGroups()
	if err := g.Add("carbonyl-or-sulfonyl", "acyl or sulfonyl", []string{"[C:1]=[O:2]", "[S:1]=[O:2]", "[C:1]=[N:2]"}, nil, []int{1}); err != nil {
		panic("restricted: " + err.Error()) // a literal of this file
	}
	return g
})
