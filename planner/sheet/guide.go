package sheet

import (
	"io/fs"
	"slices"

	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// Guide holds what sheets say about kinds of materials: rules/sheet.yaml. It is immutable and safe to
// share.
type Guide struct {
	Never     []neverPair
	Rinses    []rinse
	Energetic []string
	Controls  []line
	Holds     []hold
	Waste     []wasteStream
	Emergency []line
}

// neverPair is a pair of reactive groups that stops a step even where it is intended.
type neverPair struct {
	rules.Place
	Between [2]string  `yaml:"between" need:"between: [cyanide, mineral-acid]"`
	As      rules.Text `yaml:"as"` // "solvent": only where the second is a solvent of the step
	Says    string     `yaml:"says" need:"says: '...'"`
}

// rinse is what stands at the sink.
type rinse struct {
	rules.Place
	Name rules.Text `yaml:"name" need:"name: acetone"`
	Use  string     `yaml:"use"`
}

// line is a sentence for materials with one of the codes or acts; with neither it is for all.
type line struct {
	rules.Place
	Codes   []string     `yaml:"codes"`
	Acts    []rules.Text `yaml:"acts"`
	Without []rules.Text `yaml:"without"`
	Says    string       `yaml:"says" need:"says: '...'"`
}

// hold is a hold point with its negative answer.
type hold struct {
	rules.Place
	At        rules.Text   `yaml:"at" need:"at: end"`
	Acts      []rules.Text `yaml:"acts"`
	Says      string       `yaml:"says" need:"says: '...'"`
	Otherwise string       `yaml:"otherwise" need:"otherwise: '...'"`
}

// wasteStream takes the charges with one of its acts.
type wasteStream struct {
	rules.Place
	Stream  string       `yaml:"stream" need:"stream: halogenated solvents"`
	Acts    []rules.Text `yaml:"acts"`
	Solvent bool         `yaml:"solvent"` // only what is charged as a solvent or used in the work-up
	Volume  bool         `yaml:"volume"`
}

type guideFile struct {
	Never     []neverPair   `yaml:"never_together"`
	Rinses    []rinse       `yaml:"rinses"`
	Energetic []string      `yaml:"energetic"`
	Controls  []line        `yaml:"controls"`
	Holds     []hold        `yaml:"holds"`
	Waste     []wasteStream `yaml:"waste"`
	Emergency []line        `yaml:"emergency"`
}

// LoadGuide reads sheet.yaml of a rules file system, all layers: a user's file adds and never removes.
// Errors are a rules.ErrorList.
func LoadGuide(fsys fs.FS, reagents *reagent.Table) (*Guide, error) {
	g := &Guide{}
	layers, err := rules.Layers(fsys, "sheet.yaml")
	if err != nil {
		return nil, err
	}
	var errs rules.ErrorList
	for _, l := range layers {
		var f guideFile
		if err := rules.Decode(l.Path, l.Data, &f); err != nil {
			errs.Add(rules.Place{Path: l.Path}, err)
			continue
		}
		g.add(&f, reagents, &errs)
	}
	return g, errs.Err()
}

func (g *Guide) add(f *guideFile, reagents *reagent.Table, errs *rules.ErrorList) {
	check := func(p rules.Place, acts []rules.Text) {
		for _, a := range acts {
			if _, ok := reagents.ActMeaning(a.Value); !ok {
				errs.Add(p, a.Errorf(p.Path, "unknown act %q", a.Value))
			}
		}
	}
	for _, list := range [][]line{f.Controls, f.Emergency} {
		for _, l := range list {
			check(l.Place, l.Acts)
			check(l.Place, l.Without)
		}
	}
	for _, h := range f.Holds {
		check(h.Place, h.Acts)
		if !slices.Contains([]string{"start", "run", "end"}, h.At.Value) {
			errs.Add(h.Place, h.At.Errorf(h.Path, "at is start, run or end, not %q", h.At.Value))
		}
	}
	for _, w := range f.Waste {
		check(w.Place, w.Acts)
	}
	for _, r := range f.Rinses {
		if _, ok := reagents.Named(r.Name.Value); !ok {
			errs.Add(r.Place, r.Name.Errorf(r.Path, "%q is no reagent", r.Name.Value))
		}
	}
	g.Never, g.Rinses, g.Energetic = append(g.Never, f.Never...), append(g.Rinses, f.Rinses...), append(g.Energetic, f.Energetic...)
	g.Controls, g.Holds = append(g.Controls, f.Controls...), append(g.Holds, f.Holds...)
	g.Waste, g.Emergency = append(g.Waste, f.Waste...), append(g.Emergency, f.Emergency...)
}

// does reports whether a charge carries one of the acts.
func does(c *Charge, acts []rules.Text) bool {
	return c.Reagent != nil && slices.ContainsFunc(acts, func(a rules.Text) bool { return c.Reagent.Does(a.Value) })
}

// anyDoes reports whether one of the charges carries one of the acts.
func anyDoes(charges []Charge, acts []rules.Text) bool {
	return slices.ContainsFunc(charges, func(c Charge) bool { return does(&c, acts) })
}

// applies says whether a line is for these charges: codes are compared without their letters.
func (l *line) applies(d *hazard.Data, charges []Charge) bool {
	if len(l.Without) > 0 && anyDoes(charges, l.Without) {
		return false
	}
	if len(l.Codes) == 0 && len(l.Acts) == 0 {
		return true
	}
	return anyDoes(charges, l.Acts) || slices.ContainsFunc(charges, func(c Charge) bool {
		return slices.ContainsFunc(c.Hazards, func(h string) bool {
			s, _ := d.Statement(h)
			return slices.Contains(l.Codes, s.Base)
		})
	})
}

// said lists the lines that apply, in order.
func said(lines []line, d *hazard.Data, charges []Charge) (out []string) {
	for i := range lines {
		if lines[i].applies(d, charges) {
			out = append(out, lines[i].Says)
		}
	}
	return out
}
