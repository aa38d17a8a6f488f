package route

import (
	"fmt"
	"io/fs"
	"slices"
	"strings"

	"shelfward/reactions"
	"shelfward/rules"
)

// Scale is what practice avoids when a batch grows, from rules/scale.yaml.
type Scale struct {
	rows []scaleRow
}

type scaleRow struct {
	rules.Place
	ID       rules.Text   `yaml:"id" need:"id: cryogenic"`
	Says     string       `yaml:"says" need:"says: 'bath below -40 C'"`
	Below    *float64     `yaml:"below"`     // C
	Gas      bool         `yaml:"gas"`       // a gas comes off
	HeatFrom *float64     `yaml:"heat_from"` // kJ/mol
	Workup   []string     `yaml:"workup"`
	Charged  []rules.Text `yaml:"charged"`
	Adds     float64      `yaml:"adds" need:"adds: 0.5"` // to the balanced weight of a step
	Source   struct {
		Text       string `yaml:"text"`
		Provenance string `yaml:"provenance"`
	} `yaml:"source"`
}

// LoadScale reads rules/scale.yaml. Errors name file and line.
func LoadScale(fsys fs.FS) (*Scale, error) {
	var file struct {
		Rows []scaleRow `yaml:"avoided_at_scale"`
	}
	if err := rules.ReadInto(fsys, "scale.yaml", &file); err != nil {
		return nil, err
	}
	for _, r := range file.Rows {
		switch {
		case r.Adds < 0:
			return nil, r.Errorf("adds: %g; what is avoided cannot weigh less", r.Adds)
		case r.Below == nil && !r.Gas && r.HeatFrom == nil && len(r.Workup)+len(r.Charged) == 0:
			return nil, r.Errorf("%s tests nothing: below, gas, heat_from, workup or charged was expected", r.ID.Value)
		}
	}
	return &Scale{file.Rows}, nil
}

// of says what a condition set adds to the balanced weight of its step, and why. The nil Scale adds
// nothing.
func (s *Scale) of(c *reactions.Conditions) (adds float64, why []string) {
	if s == nil {
		return 0, nil
	}
	for i := range s.rows {
		if text, ok := s.rows[i].meets(c); ok {
			adds += s.rows[i].Adds
			why = append(why, text)
		}
	}
	return adds, why
}

func (r *scaleRow) meets(c *reactions.Conditions) (string, bool) {
	switch {
	case r.Below != nil && coldEnd(c) < *r.Below:
		return fmt.Sprintf("%s (%g C)", r.Says, coldEnd(c)), true
	case r.Gas && len(c.Gas) > 0:
		names := make([]string, len(c.Gas))
		for i, g := range c.Gas {
			names[i] = g.SMILES
		}
		return fmt.Sprintf("%s (%s)", r.Says, strings.Join(names, ", ")), true
	case r.HeatFrom != nil && c.HeatKJ <= 0:
		return r.Says + " (never looked up, counted)", true
	case r.HeatFrom != nil && c.HeatKJ >= *r.HeatFrom:
		return fmt.Sprintf("%s (about %g kJ/mol)", r.Says, c.HeatKJ), true
	}
	for _, line := range c.Workup {
		for _, word := range r.Workup {
			if strings.Contains(strings.ToLower(line), word) {
				return r.Says, true
			}
		}
	}
	for _, name := range charges(c) {
		if slices.ContainsFunc(r.Charged, func(w rules.Text) bool { return strings.EqualFold(w.Value, name) }) {
			return fmt.Sprintf("%s (%s)", r.Says, name), true
		}
	}
	return "", false
}
