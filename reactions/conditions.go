package reactions

import (
	"fmt"
	"sort"
	"strconv"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// origins are the words for where a figure comes from, see design: published for this substrate, for a
// near one, usual for the class, estimated, the user's own runs.
var origins = map[string]bool{"published": true, "near": true, "class": true, "estimated": true, "own": true}

func (l *loader) compileConditions(t *Transform, src *sourceTransform, file string) error {
	if len(src.Conditions) == 0 {
		return fmt.Errorf("transform %s needs at least one condition set", t.ID)
	}
	seen := map[string]bool{}
	for i := range src.Conditions {
		sc := &src.Conditions[i]
		c := l.conditions(t, sc, file)
		if seen[c.ID] {
			return sc.ID.Errorf(file, "two condition sets have the id %q", c.ID)
		}
		seen[c.ID] = true
		t.Conditions = append(t.Conditions, c)
	}
	return nil
}

// conditions makes one condition set; its mistakes are noted, each at its place.
func (l *loader) conditions(t *Transform, sc *sourceConditions, file string) *Conditions {
	c := &Conditions{ID: sc.ID.Value, Media: texts(sc.Media), OnlyWith: texts(sc.OnlyWith), NeverWith: texts(sc.NeverWith),
		Order: sc.Order, Temperature: [2]float64{sc.Temperature.Low, sc.Temperature.High}, Hours: [2]float64{sc.Time.Low, sc.Time.High},
		Origin: sc.Origin, TriedAt: sc.TriedAt, Workup: sc.Workup, WorkupMaterials: sc.WorkupMaterials, Watch: sc.Watch,
		Cautions: sc.Cautions, Needs: sc.Needs, HeatKJ: sc.Heat, Together: texts(sc.Together),
		Source: sc.Source.source(), File: sc.Place.String()}
	for _, m := range sc.Media {
		if !l.media.has(m.Value) {
			l.errs = append(l.errs, m.Errorf(file, "no medium %q in rules/tolerance.yaml%s", m.Value, expectedOne(m.Value, l.media.ids())))
		}
	}
	if c.Source.Text == "" {
		c.Source = t.Source
	}
	if c.Origin == "" {
		c.Origin = "estimated"
	}
	if !origins[c.Origin] {
		l.errs = append(l.errs, sc.Place.Errorf("origin is published, near, class, estimated or own, not %q", c.Origin))
	}
	if len(sc.Yield) != 3 || sc.Yield[0] > sc.Yield[1] || sc.Yield[1] > sc.Yield[2] || sc.Yield[2] > 100 || sc.Yield[0] <= 0 {
		l.errs = append(l.errs, sc.Place.Errorf("yield lists low, usual and high in %%, rising, as in [60, 75, 85]"))
	} else {
		c.Yield = Range{sc.Yield[0] / 100, sc.Yield[1] / 100, sc.Yield[2] / 100}
	}
	for _, r := range sc.Reagents {
		c.Reagents = append(c.Reagents, Charge{r.Name.Value, r.Equiv, r.Optional, r.Like, r.Note})
	}
	for _, s := range sc.Solvents {
		c.Solvents = append(c.Solvents, Solvent{s.Name.Value, s.MLPerG})
	}
	if err := l.conditionAmounts(t, c, sc, file); err != nil {
		l.addErr(sc.Place, err)
	}
	return c
}

func (l *loader) conditionAmounts(t *Transform, c *Conditions, sc *sourceConditions, file string) error {
	var err error
	if c.Uses, err = amounts(sc.Uses, file); err != nil {
		return err
	}
	if c.Gives, err = amounts(sc.Gives, file); err != nil {
		return err
	}
	gases := make([]string, 0, len(sc.Gas))
	for g := range sc.Gas {
		gases = append(gases, g)
	}
	sort.Strings(gases)
	for _, g := range gases {
		c.Gas = append(c.Gas, Amount{Count: sc.Gas[g], SMILES: g})
	}
	c.ReactantEquiv = map[int]float64{}
	for k, v := range sc.ReactantEquiv {
		part, err := strconv.Atoi(k)
		if err != nil || part < 1 || part > len(t.Reactants) || v <= 0 {
			return sc.Place.Errorf("reactant_equiv: %q is no reactant part, or its equivalents are not positive", k)
		}
		c.ReactantEquiv[part] = v
	}
	for k, list := range sc.Applies {
		class, err := strconv.Atoi(k)
		if err != nil || len(t.choices[class]) == 0 {
			return sc.Place.Errorf("applies: class %q has no choices", k)
		}
		for _, text := range list {
			m, err := readAt(text, file)
			if err != nil {
				return err
			}
			if c.applies == nil {
				c.applies = map[int][]*molecule.Molecule{}
			}
			c.applies[class] = append(c.applies[class], m)
		}
	}
	return nil
}

// amounts reads 'SMILES' or 'number SMILES' (a decimal number or a fraction such as 1/3).
func amounts(list []rules.Text, file string) ([]Amount, error) {
	var out []Amount
	for _, text := range list {
		a := Amount{Count: 1, SMILES: text.Value}
		if number, rest, ok := strings.Cut(text.Value, " "); ok {
			n, err := parseCount(number)
			if err != nil {
				return nil, text.Errorf(file, "%q: a number and a SMILES were expected", text.Value)
			}
			a = Amount{Count: n, SMILES: strings.TrimSpace(rest)}
		}
		if _, err := smiles.Read(starless(a.SMILES)); err != nil {
			return nil, text.Errorf(file, "%v", err)
		}
		a.read, _ = smiles.Read(a.SMILES) // nil: a star that stands for nothing readable gives nothing
		a.stars = starClasses(a.SMILES)
		out = append(out, a)
	}
	return out, nil
}

func parseCount(s string) (float64, error) {
	if a, b, ok := strings.Cut(s, "/"); ok {
		x, err1 := strconv.ParseFloat(a, 64)
		y, err2 := strconv.ParseFloat(b, 64)
		if err1 != nil || err2 != nil || y == 0 {
			return 0, fmt.Errorf("bad fraction")
		}
		return x / y, nil
	}
	return strconv.ParseFloat(s, 64)
}

// starless replaces a leaving-group star so that the rest can be read.
func starless(s string) string {
	for strings.Contains(s, "[*:") {
		i := strings.Index(s, "[*:")
		j := strings.IndexByte(s[i:], ']')
		if j < 0 {
			return s
		}
		s = s[:i] + "*" + s[i+j+1:]
	}
	return s
}
