package reactions

import (
	"errors"
	"fmt"
	"io/fs"
	"path"
	"sort"
	"strconv"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// loader turns the rule files into transforms. Mistakes are collected with their places.
type loader struct {
	fsys   fs.FS
	groups *pattern.Groups
	models map[string]*model
	media  *toleranceTable
	errs   rules.ErrorList
	byID   map[string]*Transform
	list   []*Transform
}

// loadTransforms reads every file of the transforms folder in order of name.
func (l *loader) loadTransforms() {
	names, err := fs.ReadDir(l.fsys, rules.TransformFolder)
	if err != nil {
		l.errs.Add(rules.Place{Path: rules.TransformFolder}, err)
		return
	}
	for _, e := range names {
		if e.IsDir() || !strings.HasSuffix(e.Name(), ".yaml") && !strings.HasSuffix(e.Name(), ".yml") {
			continue
		}
		l.loadFile(path.Join(rules.TransformFolder, e.Name()))
	}
	sort.SliceStable(l.list, func(i, j int) bool { return l.list[i].ID < l.list[j].ID })
}

func (l *loader) loadFile(name string) {
	var file sourceFile
	if err := rules.ReadInto(l.fsys, name, &file); err != nil {
		l.addErr(rules.Place{Path: name}, err)
		return
	}
	shown := rules.PathOf(l.fsys, name)
	for i := range file.Transforms {
		src := &file.Transforms[i]
		t := l.compile(src, file.Family, shown)
		if t == nil {
			continue
		}
		if first := l.byID[t.ID]; first != nil {
			l.errs = append(l.errs, src.ID.Errorf(shown, "the id %q stands already at %s", t.ID, first.File))
			continue
		}
		l.byID[t.ID] = t
		l.list = append(l.list, t)
	}
}

// addErr keeps errors that know their place and puts the others at p.
func (l *loader) addErr(p rules.Place, err error) {
	var list rules.ErrorList
	var one *rules.Error
	switch {
	case errors.As(err, &list):
		l.errs = append(l.errs, list...)
	case errors.As(err, &one):
		l.errs = append(l.errs, one)
	default:
		l.errs = append(l.errs, p.Errorf("%v", err))
	}
}

// compile makes one transform, or nil after noting its mistakes. The stages stand in order: without its parts
// there is nothing more to say of a transform; of the stages after them each tells its own mistakes.
func (l *loader) compile(src *sourceTransform, family, file string) *Transform {
	t := &Transform{ID: src.ID.Value, Name: src.Name.Value, Family: family, Summary: src.Summary, Everywhere: src.Everywhere, Once: src.Once,
		Dangers: src.Dangers, Source: src.Source.source(), File: src.Place.String(), closes: src.Closes}
	before := len(l.errs)
	for _, stage := range []func(*Transform, *sourceTransform, string) error{l.compileSides, l.compileParts} {
		if err := stage(t, src, file); err != nil {
			l.addErr(src.Place, err)
			return nil
		}
	}
	for _, stage := range []func(*Transform, *sourceTransform, string) error{
		l.compileChoices, l.compilePreferences, l.compileConditions, l.compileExamples,
	} {
		if err := stage(t, src, file); err != nil {
			l.addErr(src.Place, err)
		}
	}
	if len(l.errs) > before {
		return nil
	}
	return t
}

func texts(ts []rules.Text) []string {
	out := make([]string, len(ts))
	for i, t := range ts {
		out[i] = t.Value
	}
	return out
}

// patternError puts a mistake of a pattern at its character.
func patternError(err error, parts []rules.Text, file string) error {
	var pe *pattern.Error
	if errors.As(err, &pe) {
		for _, p := range parts {
			if p.Value == pe.Text {
				return p.ErrorAt(file, pe.Position, "%s", pe.Message)
			}
		}
	}
	return err
}

// splitWhere gives each side its words: a class on both sides is checked on the reactant side.
func splitWhere(src *sourceTransform) (left, right pattern.Where) {
	all, onlyRight := where(src.Where), where(src.WhereProducts)
	left, right = pattern.Where{}, pattern.Where{}
	for k, v := range onlyRight {
		right[k] = v
	}
	has := classesOf(src.Reactants)
	for k, v := range all {
		onLeft := true
		for _, c := range strings.Split(k, "-") {
			onLeft = onLeft && has[strings.TrimSpace(c)]
		}
		if onLeft {
			left[k] = v
		} else {
			right[k] = append(right[k], v...)
		}
	}
	return left, right
}

func classesOf(parts []rules.Text) map[string]bool {
	has := map[string]bool{}
	for _, p := range parts {
		if q, err := pattern.Parse(p.Value); err == nil {
			for _, a := range q.Atoms {
				has[strconv.Itoa(a.Class)] = true
			}
		}
	}
	return has
}

func (l *loader) compileSides(t *Transform, src *sourceTransform, file string) error {
	t.Reactants, t.Products = texts(src.Reactants), texts(src.Products)
	wl, wr := splitWhere(src)
	left, leftStart, err := pattern.CompileParts(t.Reactants, wl, l.groups)
	if err != nil {
		return patternError(err, src.Reactants, file)
	}
	right, rightStart, err := pattern.CompileParts(t.Products, wr, l.groups)
	if err != nil {
		return patternError(err, src.Products, file)
	}
	if t.script, err = newScript(left, right, leftStart, rightStart); err != nil {
		return err
	}
	return t.script.addStereo(src.Stereo)
}

// compileParts compiles every part alone, with the words that concern it.
func (l *loader) compileParts(t *Transform, src *sourceTransform, file string) error {
	wl, wr := splitWhere(src)
	t.carryWords(wl, wr)
	for d, texts := range [2][]rules.Text{src.Reactants, src.Products} {
		words := [2]pattern.Where{wl, wr}[d]
		for i, text := range texts {
			q, err := pattern.Compile(text.Value, words.Within(text.Value), l.groups)
			if err != nil {
				return patternError(err, texts, file)
			}
			t.part[d] = append(t.part[d], partQuery{query: q, first: t.script.partStart[d][i]})
		}
	}
	t.narrowProducts()
	for _, n := range src.Same {
		if n < 1 || n > len(src.Reactants) {
			return fmt.Errorf("same: there is no reactant part %d", n)
		}
		t.same = append(t.same, n-1)
	}
	return nil
}

// ownWords are words about an atom's own bonds: they hold on both sides where these do not change.
var ownWords = []string{"any charge", "sp3", "sp2", "sp", "aromatic", "not aromatic", "hydrogens ", "carbon neighbours ", "hetero neighbours ", "heavy neighbours ", "one of ", "none of "}

// shapeWords are words about shape that single bonds made or cut do not change.
var shapeWords = []string{"sp3", "sp2", "sp", "aromatic", "not aromatic", "one of ", "none of "}

// carryWords copies to the product side what is said of atoms and does not change there.
func (t *Transform) carryWords(left, right pattern.Where) {
	for key, words := range left {
		class, err := strconv.Atoi(key)
		s := t.script.slotOfClass(class)
		if err != nil || s < 0 || t.script.slots[s].at[backward] < 0 {
			continue
		}
		carried := ownWords
		if t.script.touched[s] {
			if !t.script.onlySingleBonds(s) {
				continue
			}
			carried = shapeWords
		}
		for _, w := range words {
			if startsAs(w, carried) {
				right[key] = append(right[key], w)
			}
		}
	}
}

func startsAs(word string, list []string) bool {
	for _, own := range list {
		if word == own || strings.HasSuffix(own, " ") && strings.HasPrefix(word, own) {
			return true
		}
	}
	return false
}

// onlySingleBonds says that an atom makes and breaks single bonds only.
func (s *script) onlySingleBonds(slot int) bool {
	for _, e := range s.bonds {
		if (e.a == slot || e.b == slot) && (e.order[0] > 1 || e.order[1] > 1) {
			return false
		}
	}
	return true
}

// narrowProducts gives an atom written '*' among the products the elements its reactant side allows.
func (t *Transform) narrowProducts() {
	s := t.script
	for _, p := range t.part[backward] {
		for i := range p.query.Atoms {
			sl := s.slots[s.slotOf[backward][p.first+i]]
			if sl.at[forward] >= 0 && p.query.Atoms[i].Elements == nil {
				p.query.Atoms[i].Elements = s.side[forward].Atoms[sl.at[forward]].Elements
			}
		}
	}
}

// findSignificant lists, per part, the query atoms whose place decides the outcome.
func (t *Transform) findSignificant() {
	matters := append([]bool(nil), t.script.touched...)
	for _, p := range t.prefers {
		for _, s := range p.slots {
			matters[s] = true
		}
	}
	for _, r := range t.script.relations {
		matters[r.a], matters[r.b] = true, true
		for _, slot := range r.all {
			matters[slot] = true
		}
	}
	for d := range t.part {
		for i := range t.part[d] {
			p := &t.part[d][i]
			for a := range p.query.Atoms {
				if matters[t.script.slotOf[d][p.first+a]] {
					p.significant = append(p.significant, a)
				}
			}
		}
	}
}

func (l *loader) compileChoices(t *Transform, src *sourceTransform, file string) error {
	t.choices, t.partChoices = map[int][]*molecule.Molecule{}, map[int][]coproduct{}
	keys := make([]string, 0, len(src.Choices))
	for k := range src.Choices {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	for _, k := range keys {
		if number, ok := strings.CutPrefix(k, "part "); ok {
			part, err := strconv.Atoi(strings.TrimSpace(number))
			if err != nil || part < 1 || part > len(src.Products) {
				return fmt.Errorf("choices: there is no product part %q", number)
			}
			list, err := coproducts(src.Choices[k], file)
			if err != nil {
				return err
			}
			for i := range list {
				if c := &list[i]; !c.same {
					c.laid = t.layCoproduct(l.groups, part-1, c.m, c.classAt)
				}
			}
			t.partChoices[part-1] = list
			continue
		}
		class, err := strconv.Atoi(k)
		if err != nil || t.script.slotOfClass(class) < 0 {
			return fmt.Errorf("choices: %q is neither a class of the reactants nor 'part n'", k)
		}
		for _, text := range src.Choices[k] {
			m, err := readAt(text, file)
			if err != nil {
				return err
			}
			t.choices[class] = append(t.choices[class], m)
		}
	}
	t.combinations = t.fragmentChoices()
	return t.checkChoices()
}

// checkChoices asks for choices where a leaving atom could be several elements.
func (t *Transform) checkChoices() error {
	for _, sl := range t.script.slots {
		if sl.at[backward] >= 0 || len(t.choices[sl.class]) > 0 {
			continue
		}
		if _, ok := t.script.side[forward].Atoms[sl.at[forward]].SingleElement(); !ok {
			return fmt.Errorf("class %d leaves and may be several elements: list them under choices", sl.class)
		}
	}
	for i, sl := range t.script.slots {
		if sl.at[forward] >= 0 {
			continue
		}
		qa := t.script.side[backward].Atoms[sl.at[backward]]
		el, ok := qa.SingleElement()
		if !ok {
			return fmt.Errorf("class %d comes from a reagent and may be several elements: write one transform for each, or number it on the reactant side", sl.class)
		}
		if el == 6 {
			return fmt.Errorf("a carbon (class %d, atom %d of the products) appears from nowhere: carbon must come from a reactant part", sl.class, i+1)
		}
	}
	return nil
}

func readAt(text rules.Text, file string) (*molecule.Molecule, error) {
	m, err := smiles.Read(text.Value)
	if err != nil {
		var se *smiles.Error
		if errors.As(err, &se) {
			return nil, text.ErrorAt(file, se.Position, "%v", err)
		}
		return nil, text.Errorf(file, "%v", err)
	}
	return m, nil
}

func coproducts(list []rules.Text, file string) ([]coproduct, error) {
	var out []coproduct
	for _, text := range list {
		if text.Value == "same" {
			out = append(out, coproduct{same: true})
			continue
		}
		m, err := readAt(text, file)
		if err != nil {
			return nil, err
		}
		c := coproduct{m: m, classAt: map[int]int32{}}
		for a := 0; a < m.NumAtoms(); a++ {
			if class := int(m.Atom(a).Class); class != 0 {
				c.classAt[class] = int32(a)
			}
		}
		out = append(out, c)
	}
	return out, nil
}

func (l *loader) compilePreferences(t *Transform, src *sourceTransform, file string) error {
	for _, sp := range src.Prefers {
		m := l.models[sp.Model.Value]
		if m == nil {
			return sp.Model.Errorf(file, "no preference model %q%s", sp.Model.Value, didYouMean(sp.Model.Value, l.modelIDs()))
		}
		if len(sp.At) != m.at {
			return sp.Place.Errorf("model %s looks at %d atoms; at lists %d", m.id, m.at, len(sp.At))
		}
		p := preference{model: m, rho: m.rho, ortho: sp.Ortho, needs: m.needs, hasMin: m.hasMin, whyNot: m.whyNot}
		for _, class := range sp.At {
			s := t.script.slotOfClass(class)
			if s < 0 || t.script.slots[s].at[forward] < 0 {
				return sp.Place.Errorf("no reactant atom has class %d", class)
			}
			p.slots = append(p.slots, s)
		}
		if sp.Rho != nil {
			p.rho = *sp.Rho
		}
		if sp.Needs != nil {
			p.needs, p.hasMin = *sp.Needs, true
		}
		if sp.WhyNot != "" {
			p.whyNot = sp.WhyNot
		}
		t.prefers = append(t.prefers, p)
	}
	for _, g := range src.GoesOn {
		q, err := pattern.Compile(g.Pattern.Value, nil, l.groups)
		if err != nil {
			return patternError(err, []rules.Text{g.Pattern}, file)
		}
		if g.Part < 1 || g.Part > len(src.Reactants) {
			return g.Pattern.Errorf(file, "there is no reactant part %d", g.Part)
		}
		t.goesOn = append(t.goesOn, goesOn{g.Part - 1, q, g.Why})
	}
	t.findSignificant()
	return nil
}

// mostListed is how many words a message names where none is near.
const mostListed = 12

// expectedOne names the word that was probably meant, or else what could stand there.
func expectedOne(word string, known []string) string {
	if near := didYouMean(word, known); near != "" {
		return near
	}
	if len(known) > mostListed {
		return "; expected one of " + strings.Join(known[:mostListed], ", ") + fmt.Sprintf(" or %d more", len(known)-mostListed)
	}
	return "; expected one of " + strings.Join(known, ", ")
}

func didYouMean(word string, known []string) string {
	if near := rules.Near(word, known); near != "" {
		return fmt.Sprintf(" (did you mean %q?)", near)
	}
	return ""
}

func (l *loader) modelIDs() []string {
	ids := make([]string, 0, len(l.models))
	for id := range l.models {
		ids = append(ids, id)
	}
	sort.Strings(ids)
	return ids
}

func (l *loader) compileExamples(t *Transform, src *sourceTransform, file string) error {
	for i, list := range [2][]sourceExample{src.Examples, src.Rejects} {
		for _, se := range list {
			ex := Example{To: se.To.Value, With: se.With, Objects: se.Objects, Why: se.Why, Source: se.Source.source(), File: se.Place.String()}
			if ex.Source.WasRead() && !se.Source.Yield.Written {
				return se.Place.Errorf("the source of the example was read: write its yield too, such as yield: 85")
			}
			for _, text := range append(append([]rules.Text(nil), se.From...), se.To) {
				if _, err := readAt(text, file); err != nil {
					return err
				}
			}
			ex.From = texts(se.From)
			switch se.Share {
			case "", "main":
			case "even":
				ex.Share = ShareEven
			case "minor":
				ex.Share = ShareMinor
			default:
				return se.Place.Errorf("share is main, even or minor, not %q", se.Share)
			}
			if i == 0 {
				t.Examples = append(t.Examples, ex)
			} else {
				t.Rejects = append(t.Rejects, ex)
			}
		}
	}
	if len(t.Examples) == 0 || len(t.Rejects) == 0 {
		return fmt.Errorf("transform %s needs at least one example and one reject", t.ID)
	}
	return nil
}
