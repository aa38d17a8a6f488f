package reagent

import (
	"fmt"
	"strings"
)

// dump writes a description in one line: stages by ' | ', substances by ', ', facts in braces.
func dump(d Description) string {
	var stages []string
	for _, s := range d.Stages {
		var parts []string
		for _, m := range s.Mentions {
			text := m.Name()
			if m.Set > 0 {
				text += fmt.Sprintf("/%d.%d", m.Set, m.Option)
			}
			if m.Equivalents > 0 {
				text += fmt.Sprintf(" x%g", m.Equivalents)
			}
			if m.Strength.Known() {
				text += " " + m.Strength.String()
			}
			if m.Note {
				text = "(" + text + ")"
			}
			parts = append(parts, text)
		}
		text := strings.Join(parts, ", ")
		var facts []string
		for _, f := range s.Facts {
			if f != "acid" && f != "base" { // they follow from the substances and have a test of their own
				facts = append(facts, f)
			}
		}
		if t := s.TemperatureC; t != nil {
			facts = append(facts, fmt.Sprintf("%g..%g C", t[0], t[1]))
		}
		if s.PH != nil {
			facts = append(facts, fmt.Sprintf("%g..%g", s.PH[0], s.PH[1]))
		}
		if len(facts) > 0 {
			text += " {" + strings.Join(facts, " ") + "}"
		}
		stages = append(stages, strings.TrimSpace(text))
	}
	text := strings.Join(stages, " | ")
	if len(d.NotUnderstood) > 0 {
		text += " ?? " + strings.Join(d.NotUnderstood, "; ")
	}
	return text
}
