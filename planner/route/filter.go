package route

import (
	"fmt"
	"regexp"
	"slices"
	"sort"
	"strings"

	"shelfward/molecule"
	"shelfward/reactions"
	"shelfward/rules"
)

// filter says which steps, condition sets and materials may be used.
type filter struct {
	world    *World
	avoid    []avoided
	bench    *Bench
	elements []molecule.Element
}

// avoided is one word of --avoid, understood.
type avoided struct {
	word    string
	kind    string // hazard, element, transform, substance
	element molecule.Element
	other   Material // of a substance: what its name stands for
}

var (
	hazardCode = regexp.MustCompile(`^(?i)(EU)?H[0-9]{3}[A-Za-z]{0,3}$`)
	symbol     = regexp.MustCompile(`^[A-Z][a-z]?$`)
)

// Avoided describes in words what a list of words keeps out.
func (f *filter) Avoided() []string {
	out := []string{}
	for _, a := range f.avoid {
		switch a.kind {
		case "hazard":
			out = append(out, "materials with hazard "+a.word)
		case "element":
			out = append(out, "everything that contains "+a.word)
		case "transform":
			out = append(out, "the reaction "+a.word)
		default:
			out = append(out, a.word)
		}
	}
	return out
}

// newFilter understands the words to avoid. A word that means nothing is an error that offers near
// ones. bench may be nil.
func newFilter(w *World, words []string, bench *Bench) (*filter, error) {
	f := &filter{world: w, bench: bench}
	if bench != nil {
		words = append(words[:len(words):len(words)], bench.Never...)
	}
	known := w.words()
	for _, word := range words {
		word = strings.TrimSpace(word)
		a := avoided{word: word}
		element, isElement := molecule.ElementBySymbol(word)
		switch {
		case hazardCode.MatchString(word):
			a.kind, a.word = "hazard", strings.ToUpper(word[:len(word)-len(tail(word))])+tail(word)
		case known.transforms[word]:
			a.kind = "transform"
		case known.substances[strings.ToLower(word)]:
			a.kind = "substance"
		case isElement && symbol.MatchString(word):
			a.kind, a.element = "element", element
			f.elements = append(f.elements, element)
		default:
			if _, ok := w.Materials.Named(word); !ok {
				return nil, fmt.Errorf("avoid %q: no reagent, solvent, hazard code, element symbol or transform is called that%s", word, near(word, known.all))
			}
			a.kind = "substance"
		}
		if a.kind == "substance" {
			a.other, _ = w.Materials.Named(word)
		}
		f.avoid = append(f.avoid, a)
	}
	return f, nil
}

// tail is the letters behind the digits of a hazard code.
func tail(code string) string {
	return code[strings.LastIndexAny(code, "0123456789")+1:]
}

// vocabulary is what a word to avoid may mean.
type vocabulary struct {
	transforms, substances map[string]bool
	all                    []string
}

func (w *World) words() vocabulary {
	v := vocabulary{map[string]bool{}, map[string]bool{}, nil}
	for _, t := range w.Transforms {
		v.transforms[t.ID] = true
		for _, c := range t.Conditions {
			for _, r := range c.Reagents {
				v.substances[strings.ToLower(r.Name)] = true
			}
			for _, s := range c.Solvents {
				v.substances[strings.ToLower(s.Name)] = true
			}
		}
	}
	for word := range v.transforms {
		v.all = append(v.all, word)
	}
	for word := range v.substances {
		v.all = append(v.all, word)
	}
	sort.Strings(v.all)
	return v
}

// step says whether a step may be used at all.
func (f *filter) step(s *reactions.Step) bool {
	for _, a := range f.avoid {
		if a.kind != "transform" {
			continue
		}
		if s.Transform.ID == a.word || slices.ContainsFunc(s.Together, func(t *reactions.Transform) bool { return t.ID == a.word }) {
			return false
		}
	}
	for _, r := range s.Reactants {
		formula := r.Molecule.Formula()
		for _, e := range f.elements {
			if formula.Count[e] > 0 {
				return false
			}
		}
	}
	return true
}

// conditions says whether a condition set may be used.
func (f *filter) conditions(c *reactions.Conditions) bool {
	if f.bench != nil && !f.bench.can(c) {
		return false
	}
	if len(f.avoid) == 0 {
		return true
	}
	for _, r := range c.Reagents {
		m, _ := f.world.named(r.Name)
		if !r.Optional && !f.substance(r.Name, &m) {
			return false
		}
	}
	for _, s := range c.Solvents {
		m, _ := f.world.named(s.Name)
		if !f.substance(s.Name, &m) {
			return false
		}
	}
	return true
}

// material says whether a material may be taken from the shelf.
func (f *filter) material(m *Material, mol *molecule.Molecule) bool {
	if !f.substance(m.Name, m) {
		return false
	}
	formula := mol.Formula()
	return !slices.ContainsFunc(f.elements, func(e molecule.Element) bool { return formula.Count[e] > 0 })
}

// substance tests a name, its hazards and its elements against the words.
func (f *filter) substance(name string, m *Material) bool {
	for _, a := range f.avoid {
		switch a.kind {
		case "substance":
			if strings.EqualFold(a.word, name) || strings.EqualFold(a.word, m.Name) || a.word == m.CAS ||
				a.other.Name != "" && strings.EqualFold(a.other.Name, m.Name) || a.other.SMILES != "" && a.other.SMILES == m.SMILES {
				return false
			}
		case "hazard":
			if slices.ContainsFunc(m.Hazards, func(h string) bool { return covers(a.word, h) }) {
				return false
			}
		case "element":
			if f.holds(m, a.element) {
				return false
			}
		}
	}
	return true
}

// covers says whether a code named covers a code found: H360 covers H360FD, H360F covers H360FD.
func covers(named, found string) bool {
	if len(named) < 4 || !strings.HasPrefix(strings.ToUpper(found), named[:len(named)-len(tail(named))]) {
		return false
	}
	for _, letter := range strings.ToUpper(tail(named)) {
		if !strings.ContainsRune(strings.ToUpper(tail(found)), letter) {
			return false
		}
	}
	return true
}

func (f *filter) holds(m *Material, e molecule.Element) bool {
	if m.SMILES == "" {
		return false
	}
	mol, err := f.world.Read(m.SMILES)
	return err == nil && mol.Formula().Count[e] > 0
}

// near offers up to three words that look like w, as the end of a sentence.
func near(w string, all []string) string {
	words := rules.NearWords(w, all, 3)
	if len(words) == 0 {
		return ""
	}
	return "; near: '" + strings.Join(words, "', '") + "'"
}
