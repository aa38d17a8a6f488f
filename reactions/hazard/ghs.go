// Package hazard turns GHS codes into statements, pictograms and a signal word, orders them the
// gravest first, finds substances that must not meet, and marks those that some list watches.
//
// All facts are in rules/ghs.yaml, incompatible.yaml, watched.yaml and cautions.yaml with their
// sources. The package knows nothing of amounts; it never says that something is harmless, only that
// nothing is on record. A Data is immutable after Load and safe for concurrent use.
package hazard

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"shelfward/rules"
)

// Statement is what a hazard code says.
type Statement struct {
	Code       string // as asked, letters kept: H360FD
	Base       string // without letters: H360
	Text       string
	Class      string
	Signal     string   // Danger, Warning or empty
	Pictograms []string // codes, of the gravest category that carries the statement
}

// Pictogram is one GHS pictogram.
type Pictogram struct{ Code, Name, StandsFor string }

// Precaution is a precautionary statement.
type Precaution struct{ Code, Text string }

// Label is what a label of a substance or mixture shows.
type Label struct {
	Signal     string
	Pictograms []Pictogram
	Statements []Statement // the gravest first; those that another one covers are left out
	Unknown    []string    // codes that the table does not hold
}

type ghsFile struct {
	Pictograms []struct {
		rules.Place
		Code      string `yaml:"code"`
		Name      string `yaml:"name"`
		StandsFor string `yaml:"stands_for"`
	} `yaml:"pictograms"`
	PictogramRules []pictogramRule `yaml:"pictogram_rules"`
	StatementRules []struct {
		Present string `yaml:"present"`
		Drops   string `yaml:"drops"`
	} `yaml:"statement_rules"`
	Gravest  [][]string `yaml:"gravest"`
	Variants []struct {
		rules.Place
		Code string `yaml:"code" need:"code: H360FD"`
		Base string `yaml:"base" need:"base: H360"`
		Says string `yaml:"says" need:"says: '...'"`
	} `yaml:"variants"`
	Statements []struct {
		rules.Place
		Code   string `yaml:"code" need:"code: H225"`
		Says   string `yaml:"says" need:"says: 'Highly flammable liquid and vapour'"`
		Class  string `yaml:"class"`
		EU     bool   `yaml:"eu"`
		UNOnly bool   `yaml:"un_only"`
		Grades []struct {
			Grade      string   `yaml:"grade"`
			Word       string   `yaml:"word"`
			Pictograms []string `yaml:"pictograms"`
		} `yaml:"grades"`
	} `yaml:"statements"`
	Precautions []precautionGroup `yaml:"precautions"`
}

// pictogramRule leaves a pictogram out where a graver one stands.
type pictogramRule struct {
	Present     string   `yaml:"present"`
	BecauseOf   []string `yaml:"because_of"` // the codes that must bring it; empty: any
	Drops       string   `yaml:"drops"`
	StandingFor []string `yaml:"standing_for"` // only for these codes; empty: whatever it stands for
}

type precautionGroup struct {
	When       string   `yaml:"when"`
	Codes      []string `yaml:"codes"`
	Statements []struct {
		Code string `yaml:"code"`
		Says string `yaml:"says"`
	} `yaml:"statements"`
}

// ghs is the compiled table.
type ghs struct {
	statements map[string]Statement
	order      []string // codes in the order of the file
	pictograms []Pictogram
	rules      []pictogramRule
	covers     map[string][]string // code -> codes it covers
	gravity    map[string]int
	cautions   []precautionGroup
}

func (g *ghs) add(f *ghsFile, errs *rules.ErrorList) {
	for _, p := range f.Pictograms {
		g.pictograms = append(g.pictograms, Pictogram{p.Code, p.Name, p.StandsFor})
	}
	known := func(code string) bool {
		return slices.ContainsFunc(g.pictograms, func(p Pictogram) bool { return p.Code == code })
	}
	for _, s := range f.Statements {
		if _, twice := g.statements[s.Code]; twice {
			errs.Add(s.Place, s.Place.Errorf("the code %s is listed already", s.Code))
			continue
		}
		st := Statement{Code: s.Code, Base: s.Code, Text: s.Says, Class: s.Class}
		for i, grade := range s.Grades {
			if i == 0 {
				st.Signal, st.Pictograms = grade.Word, grade.Pictograms
			}
			for _, p := range grade.Pictograms {
				if !known(p) {
					errs.Add(s.Place, s.Place.Errorf("%s: unknown pictogram %s", s.Code, p))
				}
			}
		}
		g.statements[s.Code] = st
		g.order = append(g.order, s.Code)
	}
	for _, v := range f.Variants {
		base, ok := g.statements[v.Base]
		if !ok {
			errs.Add(v.Place, v.Place.Errorf("%s: unknown base code %s", v.Code, v.Base))
			continue
		}
		base.Code, base.Text = v.Code, v.Says
		g.statements[v.Code] = base
	}
	g.rules = append(g.rules, f.PictogramRules...)
	for _, r := range f.StatementRules {
		g.covers[r.Present] = append(g.covers[r.Present], r.Drops)
	}
	g.cautions = append(g.cautions, f.Precautions...)
}

// rank fixes the order of all codes: the listed tiers, then by signal word, then by number.
func (g *ghs) rank(tiers [][]string) {
	place := map[string]int{}
	for _, tier := range tiers {
		for _, code := range tier {
			place[code] = len(place) + 1
		}
	}
	words := map[string]int{"Danger": 1, "Warning": 2, "": 3}
	codes := slices.Clone(g.order)
	slices.SortStableFunc(codes, func(a, b string) int {
		pa, pb := cmp.Or(place[a], 1000), cmp.Or(place[b], 1000)
		return cmp.Or(cmp.Compare(pa, pb), cmp.Compare(words[g.statements[a].Signal], words[g.statements[b].Signal]), strings.Compare(a, b))
	})
	for i, code := range codes {
		g.gravity[code] = i
	}
}

// Statement returns what a code says; ok is false for a code that the table does not hold. Spaces and
// '+' combinations are not split here, see Codes.
func (d *Data) Statement(code string) (Statement, bool) {
	s, ok := d.ghs.statements[strings.TrimSpace(code)]
	return s, ok
}

// Codes splits a field of codes at spaces, commas, semicolons and plus signs, in order, each once.
func Codes(field string) []string {
	var list []string
	for _, code := range strings.FieldsFunc(field, func(r rune) bool { return strings.ContainsRune(" ,;+\t", r) }) {
		if !slices.Contains(list, code) {
			list = append(list, code)
		}
	}
	return list
}

// CheckCode says what is wrong with a code; nil if the table holds it.
func (d *Data) CheckCode(code string) error {
	if _, ok := d.Statement(code); ok {
		return nil
	}
	hint := ""
	if n, err := strconv.Atoi(code); err == nil && n > 199 && n < 500 {
		hint = fmt.Sprintf(" (did you mean H%d?)", n)
	} else if near := rules.Near(code, d.ghs.order); near != "" {
		hint = fmt.Sprintf(" (did you mean %s?)", near)
	}
	return fmt.Errorf("unknown hazard code %q%s", code, hint)
}

// Gravity returns the place of a code in the order of gravity, 0 the gravest; a code that the table
// does not hold counts as the gravest.
func (d *Data) Gravity(code string) int {
	s, ok := d.Statement(code)
	if !ok {
		return 0
	}
	return d.ghs.gravity[s.Base]
}

// Sort returns the codes each once, the gravest first.
func (d *Data) Sort(codes []string) []string {
	list := slices.Clone(codes)
	slices.SortStableFunc(list, func(a, b string) int {
		return cmp.Or(cmp.Compare(d.Gravity(a), d.Gravity(b)), strings.Compare(a, b))
	})
	return slices.Compact(list)
}

// Label makes the label of a substance with the given codes.
func (d *Data) Label(codes []string) Label {
	var l Label
	present := map[string]bool{}
	for _, code := range codes {
		if s, ok := d.Statement(code); ok {
			present[s.Base] = true
		} else if !slices.Contains(l.Unknown, code) {
			l.Unknown = append(l.Unknown, code)
		}
	}
	covered := map[string]bool{}
	for code := range present {
		for _, c := range d.ghs.covers[code] {
			covered[c] = true
		}
	}
	for _, code := range d.Sort(codes) {
		s, ok := d.Statement(code)
		if !ok {
			continue
		}
		if s.Signal == "Danger" || l.Signal == "" {
			l.Signal = cmp.Or(s.Signal, l.Signal)
		}
		if !covered[s.Base] {
			l.Statements = append(l.Statements, s)
		}
	}
	l.Pictograms = d.ghs.shown(present)
	return l
}

// shown lists the pictograms of the base codes, after the rules of precedence, in code order.
func (g *ghs) shown(present map[string]bool) []Pictogram {
	brings := map[string][]string{} // pictogram -> codes that bring it
	for _, code := range g.order {
		if present[code] {
			for _, p := range g.statements[code].Pictograms {
				brings[p] = append(brings[p], code)
			}
		}
	}
	before := map[string][]string{}
	for p, codes := range brings {
		before[p] = codes
	}
	for _, r := range g.rules {
		if !meets(before[r.Present], r.BecauseOf) {
			continue
		}
		brings[r.Drops] = slices.DeleteFunc(slices.Clone(brings[r.Drops]), func(code string) bool {
			return len(r.StandingFor) == 0 || slices.Contains(r.StandingFor, code)
		})
	}
	var list []Pictogram
	for _, p := range g.pictograms {
		if len(brings[p.Code]) > 0 {
			list = append(list, p)
		}
	}
	return list
}

// meets reports whether one of the codes is wanted; with nothing wanted any code will do.
func meets(codes, wanted []string) bool {
	if len(wanted) == 0 {
		return len(codes) > 0
	}
	return slices.ContainsFunc(codes, func(c string) bool { return slices.Contains(wanted, c) })
}

// Precautions lists the precautionary statements that go with the codes, each once, in the order of
// the table; those for every hazard come first.
func (d *Data) Precautions(codes []string) []Precaution {
	if len(codes) == 0 {
		return nil
	}
	var list []Precaution
	for _, g := range d.ghs.cautions {
		applies := len(g.Codes) == 0
		for _, code := range codes {
			s, _ := d.Statement(code)
			applies = applies || slices.Contains(g.Codes, s.Base)
		}
		if !applies {
			continue
		}
		for _, s := range g.Statements {
			if p := (Precaution{s.Code, s.Says}); !slices.Contains(list, p) {
				list = append(list, p)
			}
		}
	}
	return list
}
