package reagent

import (
	"slices"

	"shelfward/molecule"
)

// Description is a list of conditions as read: what happens in the flask, stage by stage.
type Description struct {
	Stages        []Stage  // at least one, unless the text was empty
	NotUnderstood []string // pieces of the text that no rule explains, as written
}

// Stage is what is in the flask together. A later stage is added to the same flask.
type Stage struct {
	Mentions []Mention // in the order of the text
	Facts    []string  // sorted words of rules/wording.yaml: hot, cold, dry, aqueous, light ...
	Workup   bool      // the stage ends the reaction (quench, 'acid work-up')

	TemperatureC *[2]float64 // low and high, where numbers or words give one; nil otherwise
	PH           *[2]float64 // low and high; nil if none is stated
}

// Mention is one substance named in a stage.
type Mention struct {
	Reagent  *Reagent           // nil for a compound known by its structure only
	Molecule *molecule.Molecule // the compound where Reagent is nil; nil otherwise
	Text     string             // as written

	// Set and Option number the alternatives: of the mentions with one Set (from 1) only those of one
	// Option are used. Set 0 is always used.
	Set, Option int

	Excess, Catalytic, Limited bool
	Dry, Aqueous, Concentrated bool
	Note                       bool    // named in a note in brackets: what is made, meant, or added in passing
	Equivalents                float64 // 0 not stated
	Strength                   Strength

	gas   bool // called a gas
	piece int  // the piece of text it came from
}

// Name is the reagent's name, or the text as written.
func (m Mention) Name() string {
	if m.Reagent != nil {
		return m.Reagent.Name
	}
	return m.Text
}

// Has reports whether a fact holds in the stage.
func (s Stage) Has(fact string) bool { return slices.Contains(s.Facts, fact) }

// Has reports whether a fact holds in any stage.
func (d Description) Has(fact string) bool {
	return slices.ContainsFunc(d.Stages, func(s Stage) bool { return s.Has(fact) })
}

// Unheated reports whether temperatures are stated and none of them is hot.
func (d Description) Unheated() bool {
	stated := false
	for _, s := range d.Stages {
		if s.Has("hot") {
			return false
		}
		stated = stated || s.TemperatureC != nil || s.Has("cold")
	}
	return stated
}

// Does reports whether a substance with the act is named in any stage.
func (d Description) Does(act string) bool {
	for _, s := range d.Stages {
		for _, m := range s.Mentions {
			if m.Reagent != nil && m.Reagent.Does(act) {
				return true
			}
		}
	}
	return false
}

// maxChoices bounds what Choices returns: a list with more alternatives is no description of a step.
const maxChoices = 16

// Choices lists the ways to take the stage's alternatives, each as the mentions used; the first is
// the one named first everywhere. A stage without alternatives has one.
func (s Stage) Choices() [][]Mention {
	options := map[int][]int{}
	var sets []int
	for _, m := range s.Mentions {
		if m.Set == 0 {
			continue
		}
		if _, seen := options[m.Set]; !seen {
			sets = append(sets, m.Set)
		}
		options[m.Set] = insertInt(options[m.Set], m.Option)
	}
	for _, set := range sets {
		if !slices.Contains(options[set], 1) { // the first choice is to leave it out
			options[set] = slices.Insert(options[set], 0, 1)
		}
	}
	picks := []map[int]int{{}}
	for _, set := range sets {
		var next []map[int]int
		for _, option := range options[set] {
			for _, pick := range picks {
				grown := map[int]int{set: option}
				for k, v := range pick {
					grown[k] = v
				}
				next = append(next, grown)
			}
		}
		picks = next[:min(len(next), maxChoices)]
	}
	var choices [][]Mention
	for _, pick := range picks {
		var used []Mention
		for _, m := range s.Mentions {
			if m.Set == 0 || pick[m.Set] == m.Option {
				used = append(used, m)
			}
		}
		choices = append(choices, used)
	}
	return choices
}

// insert adds a word to a sorted list once.
func insert(list []string, word string) []string {
	i, found := slices.BinarySearch(list, word)
	if found {
		return list
	}
	return slices.Insert(list, i, word)
}

func insertInt(list []int, x int) []int {
	if slices.Contains(list, x) {
		return list
	}
	return append(list, x)
}
