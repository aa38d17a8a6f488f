package route

import (
	"fmt"
	"maps"
	"regexp"
	"slices"
	"sort"
	"strings"

	"shelfward/molecule"
	"shelfward/reactions"
	"shelfward/rules"
)

// filter says which steps, condition sets and materials may be used: the wishes of one planning.
type filter struct {
	world     *World
	avoid     []avoided
	bench     *Bench
	onlyShelf bool
	ceiling   *ceiling // nil: any hazard

	not        []Banned
	notThrough []*molecule.Molecule
	inHand     []InHand
}

// restrains says whether any wish can keep a way out.
func (f *filter) restrains() bool {
	return len(f.avoid) > 0 || f.bench != nil && f.bench.restrains() || f.onlyShelf || f.ceiling != nil
}

// avoided is one word of --avoid, understood.
type avoided struct {
	word    string
	kind    string // hazard, element, transform, substance, step
	element molecule.Element
	other   Material // of a substance: what its name stands for
	ban     *Ban
	byBench bool // said under never: in the bench file
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
		case "step":
			out = append(out, "the step "+a.word)
		default:
			out = append(out, a.word)
		}
	}
	if f.ceiling != nil {
		out = append(out, "everything graver than "+f.ceiling.word+" and what was never looked up")
	}
	if f.onlyShelf {
		out = append(out, "reagents and solvents that are not on the shelf")
	}
	if f.bench != nil && f.bench.restrains() {
		out = append(out, "what the room cannot do ("+f.bench.File+")")
	}
	return out
}

// newFilter understands the wishes of o. A word that means nothing is an error that offers near ones.
func newFilter(w *World, o *Options) (*filter, error) {
	f := &filter{world: w, bench: o.Bench, onlyShelf: o.OnlyShelf, not: o.Not, notThrough: o.NotThrough, inHand: o.InHand}
	for i := range o.Bans {
		f.avoid = append(f.avoid, avoided{word: o.Bans[i].Text, kind: "step", ban: &o.Bans[i]})
	}
	known := w.words()
	for _, word := range o.Avoid {
		a, err := w.understand(word, known)
		if err != nil {
			return nil, fmt.Errorf("avoid %w", err)
		}
		f.avoid = append(f.avoid, a)
	}
	if o.Bench != nil {
		if err := o.Bench.check(w, known); err != nil {
			return nil, err
		}
		for _, word := range o.Bench.Never {
			a, err := w.understand(word.Value, known)
			if err != nil {
				return nil, word.Errorf(o.Bench.File, "never: %v", err)
			}
			a.byBench = true
			f.avoid = append(f.avoid, a)
		}
	}
	var err error
	f.ceiling, err = w.ceiling(o.MaxHazard)
	return f, err
}

// understand reads one word to avoid.
func (w *World) understand(word string, known vocabulary) (avoided, error) {
	word = strings.TrimSpace(word)
	a := avoided{word: word, kind: "substance"}
	element, isElement := molecule.ElementBySymbol(word)
	switch {
	case hazardCode.MatchString(word):
		a.kind, a.word = "hazard", strings.ToUpper(word[:len(word)-len(tail(word))])+tail(word)
	case known.transforms[word]:
		a.kind = "transform"
	case known.substances[strings.ToLower(word)]:
	case isElement && symbol.MatchString(word):
		a.kind, a.element = "element", element
	default:
		if _, ok := w.Materials.Named(word); !ok {
			return a, fmt.Errorf("%q: no reagent, solvent, hazard code, element symbol or transform is called that%s", word, near(word, known.all))
		}
	}
	if a.kind == "substance" {
		a.other, _ = w.Materials.Named(word)
	}
	return a, nil
}

// tail is the letters behind the digits of a hazard code.
func tail(code string) string {
	return code[strings.LastIndexAny(code, "0123456789")+1:]
}

// vocabulary is what a word to avoid may mean.
type vocabulary struct {
	transforms, substances map[string]bool
	all                    []string
	needs                  []string // what condition sets need of a room, sorted
}

func (w *World) words() vocabulary {
	v := vocabulary{transforms: map[string]bool{}, substances: map[string]bool{}}
	needs := map[string]bool{}
	for _, t := range w.Transforms {
		v.transforms[t.ID] = true
		for _, c := range t.Conditions {
			for _, r := range c.Reagents {
				v.substances[strings.ToLower(r.Name)] = true
			}
			for _, s := range c.Solvents {
				v.substances[strings.ToLower(s.Name)] = true
			}
			for _, n := range c.Needs {
				needs[n] = true
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
	v.needs = slices.Sorted(maps.Keys(needs))
	return v
}

// bans says whether a step is one of those that may not be used, or takes what no route may pass through.
func (f *filter) bans(s *reactions.Step) bool {
	for _, m := range f.notThrough {
		if takes(s, m) {
			return true
		}
	}
	return slices.ContainsFunc(f.not, func(b Banned) bool {
		return b.Product.Key() == s.Product.Key() && len(b.Reactants) == len(s.Reactants) &&
			!slices.ContainsFunc(b.Reactants, func(m *molecule.Molecule) bool { return !takes(s, m) })
	})
}

func takes(s *reactions.Step, m *molecule.Molecule) bool {
	return slices.ContainsFunc(s.Reactants, func(r reactions.Reactant) bool {
		ok, _ := meets(m, r.Molecule)
		return ok
	})
}

// held describes m if it is in hand besides the shelf. It costs nothing; its hazards count no more than
// those of any intermediate.
func (f *filter) held(w *World, m *molecule.Molecule) (Material, bool) {
	for _, h := range f.inHand {
		if h.Molecule.SeenThroughKey() == m.SeenThroughKey() {
			mat := Computed(h.Molecule, w.Write(h.Molecule))
			mat.Name, mat.OnShelf, mat.PricePerMol, mat.StockMol, mat.HazardsKnown = w.Name(h.Molecule), true, 0, h.Mol, true
			return mat, true
		}
	}
	return Material{}, false
}

// step says what keeps a step out whatever its conditions; nil if nothing does.
func (f *filter) step(s *reactions.Step) *refusal {
	for i := range f.avoid {
		a := &f.avoid[i]
		switch a.kind {
		case "transform":
			if s.Transform.ID == a.word || slices.ContainsFunc(s.Together, func(t *reactions.Transform) bool { return t.ID == a.word }) {
				return a.refuses(s.Transform.Name)
			}
		case "step":
			if a.ban.bans(s) {
				return a.refuses(s.Transform.Name)
			}
		case "element":
			for _, r := range s.Reactants {
				if r.Molecule.Formula().Count[a.element] > 0 {
					return a.refuses(f.world.called(r.Molecule))
				}
			}
		}
	}
	return nil
}

// conditions says what keeps a condition set out; nil if nothing does.
func (f *filter) conditions(c *reactions.Conditions) *refusal {
	if f.bench != nil {
		if r := f.bench.refuses(c); r != nil {
			return r
		}
	}
	if len(f.avoid) == 0 && !f.onlyShelf && f.ceiling == nil {
		return nil
	}
	for _, r := range c.Reagents {
		m, _ := f.world.named(r.Name)
		if why := f.substance(r.Name, &m); why != nil && !r.Optional {
			return why
		}
	}
	for _, s := range c.Solvents {
		m, _ := f.world.named(s.Name)
		if why := f.substance(s.Name, &m); why != nil {
			return why
		}
	}
	return nil
}

// material says what keeps a material from being taken from the shelf; nil if nothing does.
func (f *filter) material(m *Material, mol *molecule.Molecule) *refusal {
	if why := f.substance(m.Name, m); why != nil {
		return why
	}
	formula := mol.Formula()
	for i := range f.avoid {
		if a := &f.avoid[i]; a.kind == "element" && formula.Count[a.element] > 0 {
			return a.refuses(nameOr(m.Name, m.SMILES))
		}
	}
	return nil
}

// substance tests a name, its hazards and its elements against the wishes.
func (f *filter) substance(name string, m *Material) *refusal {
	for i := range f.avoid {
		a := &f.avoid[i]
		matched := false
		switch a.kind {
		case "substance":
			matched = strings.EqualFold(a.word, name) || strings.EqualFold(a.word, m.Name) || a.word == m.CAS ||
				a.other.Name != "" && strings.EqualFold(a.other.Name, m.Name) || a.other.SMILES != "" && a.other.SMILES == m.SMILES
		case "hazard":
			matched = slices.ContainsFunc(m.Hazards, func(h string) bool { return covers(a.word, h) })
		case "element":
			matched = f.holds(m, a.element)
		}
		if matched {
			return a.refuses(nameOr(name, m.SMILES))
		}
	}
	if isWater(m) {
		return nil
	}
	if f.ceiling != nil {
		if why := f.ceiling.refuses(f.world, name, m); why != nil {
			return why
		}
	}
	if f.onlyShelf && !m.OnShelf && !fromTheAir[strings.ToLower(name)] {
		return &refusal{wish: "only-shelf", word: "only what is on the shelf", needs: "needs what is not on the shelf", need: "need what is not on the shelf", matched: nameOr(name, m.SMILES)}
	}
	return nil
}

// fromTheAir needs no bottle.
var fromTheAir = map[string]bool{"air": true}

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
