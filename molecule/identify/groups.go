package identify

import (
	"fmt"
	"slices"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/spectra"
	"shelfward/rules"
)

// groupRule is one row of the table of groups that evidence can show.
type groupRule struct {
	rules.Place
	Group     rules.Text     `yaml:"group" need:"group: nitrile"`
	Needs     map[string]int `yaml:"needs"`
	Carbon    []float64      `yaml:"carbon"`
	Proton    []float64      `yaml:"proton"`
	Band      []float64      `yaml:"band"`
	Kind      []int          `yaml:"kind"`
	Hydrogens float64        `yaml:"hydrogens"`
	Shape     string         `yaml:"shape"`
	Must      []string       `yaml:"must"`
	Proves    []string       `yaml:"proves"`
	Hetero    bool           `yaml:"hetero"`
	Sure      bool           `yaml:"sure"`
	Not       []struct {
		Proton []float64 `yaml:"proton"`
	} `yaml:"not"`
	Source string `yaml:"source" need:"source: textbook"`
	Known  string `yaml:"known" need:"known: 'memory'"`
}

var loadGroupRules = sync.OnceValues(func() ([]groupRule, error) {
	var f struct {
		Sources map[string]string `yaml:"sources"`
		Groups  []groupRule       `yaml:"groups"`
	}
	if err := rules.ReadInto(rules.Files(), "evidence.yaml", &f); err != nil {
		return nil, err
	}
	for _, r := range f.Groups {
		if _, ok := f.Sources[r.Source]; !ok {
			return nil, r.Errorf("the source %q is not listed under sources", r.Source)
		}
		for el := range r.Needs {
			if _, ok := molecule.ElementBySymbol(el); !ok && el != "unsaturation" {
				return nil, r.Errorf("needs: %q is neither an element nor unsaturation", el)
			}
		}
	}
	return f.Groups, nil
})

// judgeGroups goes through the table of functional groups: absent, possible or present, with reasons.
func (d *Data) judgeGroups(f *molecule.Formula) []GroupVerdict {
	table, err := loadGroupRules()
	if err != nil {
		panic("identify: the built-in table of groups is broken: " + err.Error())
	}
	out := []GroupVerdict{}
	for i := range table {
		out = append(out, d.judgeGroup(f, &table[i]))
	}
	return out
}

func (d *Data) judgeGroup(f *molecule.Formula, r *groupRule) GroupVerdict {
	v := GroupVerdict{Group: r.Group.Value, Verdict: "possible", Because: []string{}}
	if why := formulaLacks(f, r); why != "" {
		v.Verdict, v.Because = "absent", append(v.Because, why)
		return v
	}
	if r.Sure {
		v.Verdict, v.Because = "present", append(v.Because, "in the formula")
		return v
	}
	against, seen := false, map[string]bool{}
	check := func(what string, measured bool, window []float64, find func() string, place string) {
		if !measured || len(window) == 0 {
			return
		}
		if at := find(); at != "" {
			seen[what] = true
			v.Because = append(v.Because, at)
		} else if slices.Contains(r.Must, what) {
			against = true
			v.Because = append(v.Because, fmt.Sprintf("no %s at %g-%g %s", place, window[0], window[1], map[string]string{"band": "cm-1"}[what]+map[bool]string{true: "ppm"}[what != "band"]))
		}
	}
	check("carbon", len(d.Carbon) > 0, r.Carbon, func() string { return d.carbonIn(r) }, "13C line")
	check("proton", len(d.Proton) > 0, r.Proton, func() string { return d.protonIn(r) }, "1H signal")
	check("band", len(d.Bands) > 0, r.Band, func() string { return d.bandIn(r.Band) }, "band")
	for _, not := range r.Not {
		rule := groupRule{Proton: not.Proton}
		if at := d.protonIn(&rule); at != "" {
			v.Because = append(v.Because, at+" speaks for another group")
			seen = map[string]bool{}
		}
	}
	switch {
	case against:
		v.Verdict = "absent"
	case len(r.Proves) > 0 && !slices.ContainsFunc(r.Proves, func(what string) bool { return !seen[what] }):
		v.Verdict = "present"
	}
	return v
}

// formulaLacks says what the formula has too little of.
func formulaLacks(f *molecule.Formula, r *groupRule) string {
	names := make([]string, 0, len(r.Needs))
	for el := range r.Needs {
		names = append(names, el)
	}
	slices.Sort(names)
	for _, name := range names {
		n := r.Needs[name]
		if name == "unsaturation" {
			if f.Unsaturation() < float64(n) {
				return fmt.Sprintf("needs %d degrees of unsaturation, the formula has %g", n, f.Unsaturation())
			}
			continue
		}
		el, _ := molecule.ElementBySymbol(name)
		if have := int(f.Count[el]); have == 0 {
			return "no " + name + " in the formula"
		} else if have < n {
			return fmt.Sprintf("needs %d %s, the formula has %d", n, name, have)
		}
	}
	if r.Hetero && f.Count[7]+f.Count[8]+f.Count[16] == 0 {
		return "no N, O or S in the formula"
	}
	return ""
}

func (d *Data) carbonIn(r *groupRule) string {
	for _, c := range d.Carbon {
		if c.Solvent != "" || c.High < r.Carbon[0] || c.Low > r.Carbon[1] {
			continue
		}
		if c.Attached >= 0 && len(r.Kind) > 0 && !slices.Contains(r.Kind, c.Attached) {
			continue
		}
		return "13C line at " + c.Span.String()
	}
	return ""
}

func (d *Data) protonIn(r *groupRule) string {
	for _, x := range d.Proton {
		if x.Solvent != "" || x.High < r.Proton[0] || x.Low > r.Proton[1] {
			continue
		}
		if r.Hydrogens > 0 && x.H > 0 && x.H < r.Hydrogens-0.4 {
			continue
		}
		if r.Shape != "" && x.Shape != "" && x.Shape != "m" && x.Shape != "br" && x.Shape != r.Shape {
			continue
		}
		return "1H signal at " + x.Span.String()
	}
	return ""
}

func (d *Data) bandIn(window []float64) string {
	for _, b := range d.Bands {
		if b.Strength != spectra.Absent && b.High >= window[0] && b.Low <= window[1] {
			return "band at " + b.Span.String()
		}
	}
	return ""
}
