package reactions

import (
	"shelfward/molecule/pattern"
	"shelfward/rules"
	"slices"
)

// arene is the orientation table for electrophiles on aromatic rings: log10 of the rate at a ring atom
// = base of the position + rho * sum of sigma-plus constants of the substituents (+ their ortho factors).
// Source of the relation: Brown, Okamoto, J. Am. Chem. Soc. 1958, 80, 4979 (memory); the constants
// stand with their source in rules/preferences/arene.yaml.
type arene struct {
	rho         float64
	substituent []areneSubstituent
	position    []arenePosition
}

type areneSubstituent struct {
	query             *pattern.Query
	para, meta, ortho float64
	name              string
}

type arenePosition struct {
	query *pattern.Query
	base  float64
	name  string
}

type sourceArene struct {
	Rho          float64 `yaml:"rho"`
	Substituents []struct {
		Pattern rules.Text          `yaml:"pattern" need:"pattern: '[O:1]C'"`
		Where   map[string]wordList `yaml:"where"`
		Para    float64             `yaml:"sigma_plus_para"`
		Meta    float64             `yaml:"sigma_plus_meta"`
		Ortho   float64             `yaml:"ortho"`
		Name    string              `yaml:"name"`
		Note    string              `yaml:"note"`
	} `yaml:"substituents"`
	Positions []struct {
		Pattern rules.Text          `yaml:"pattern" need:"pattern: '[c:1]1ccccc1'"`
		Where   map[string]wordList `yaml:"where"`
		Base    float64             `yaml:"base"`
		Name    string              `yaml:"name"`
		Note    string              `yaml:"note"`
	} `yaml:"positions"`
	Source sourceNote `yaml:"source"`
}

func (l *loader) compileArene(a *arene, src *sourceArene, file string) {
	if src.Rho != 0 {
		a.rho = src.Rho
	}
	compile := func(text rules.Text, words map[string]wordList) *pattern.Query {
		q, err := pattern.Compile(text.Value, where(words), l.groups)
		if err != nil {
			l.addErr(rules.Place{Path: file, Line: text.Line}, patternError(err, []rules.Text{text}, file))
			return nil
		}
		return q
	}
	for _, s := range src.Substituents {
		if q := compile(s.Pattern, s.Where); q != nil {
			a.substituent = append(a.substituent, areneSubstituent{q, s.Para, s.Meta, s.Ortho, s.Name})
		}
	}
	for _, p := range src.Positions {
		if q := compile(p.Pattern, p.Where); q != nil {
			a.position = append(a.position, arenePosition{q, p.Base, p.Name})
		}
	}
}

// rate returns the score of ring atom a for an electrophile with the reaction constant rho; ortho is added
// for each substituent beside it (a bulky electrophile).
func (ar *arene) rate(s *pattern.Subject, a int32, rho, ortho float64) float64 {
	total := 0.0
	for _, p := range ar.position {
		if p.query.FitsAt(s, []int32{a}) {
			total = p.base
			break
		}
	}
	for _, place := range ringPlaces(s, a) {
		sub := ar.substituentAt(s, place.substituent)
		if sub == nil {
			continue
		}
		if place.fused {
			total += rho * fusedFactor * sub.meta
			continue
		}
		switch place.distance {
		case 1:
			total += rho*sub.para + sub.ortho + ortho
		case 2:
			total += rho * sub.meta
		case 3:
			total += rho * sub.para
		}
	}
	return total
}

func (ar *arene) substituentAt(s *pattern.Subject, a int32) *areneSubstituent {
	for i := range ar.substituent {
		if ar.substituent[i].query.FitsAt(s, []int32{a}) {
			return &ar.substituent[i]
		}
	}
	return nil
}

// ringPlace is a substituent (its first atom) and its distance along the ring: 1 ortho, 2 meta, 3 para;
// fused says that it sits on a ring fused to that of the atom attacked.
type ringPlace struct {
	substituent int32
	distance    int
	fused       bool
}

// fusedFactor is the part of a meta effect that reaches the neighbouring ring (value from memory: the
// other ring of a nitronaphthalene is several powers of ten slower than naphthalene).
const fusedFactor = 0.6

// ringPlaces lists the substituents of the aromatic rings that hold a, at their shortest distance; in a
// five-membered ring the far atom counts as meta.
func ringPlaces(s *pattern.Subject, a int32) []ringPlace {
	var places []ringPlace
	seen := map[int32]bool{}
	for _, ring := range s.M.Rings() {
		k := slices.Index(ring, a)
		if k < 0 || !allAromatic(s, ring) {
			continue
		}
		n := len(ring)
		for d := 1; d <= n/2; d++ {
			for _, x := range [2]int32{ring[(k+d)%n], ring[(k+n-d)%n]} {
				for _, nb := range s.M.Neighbors(int(x)) {
					if !s.M.Atom(int(nb.Atom)).Aromatic && !seen[nb.Atom] && slices.Index(ring, nb.Atom) < 0 {
						seen[nb.Atom] = true
						places = append(places, ringPlace{nb.Atom, min(d, 3), false})
					} else if s.M.Atom(int(nb.Atom)).Aromatic && !s.M.Bond(int(nb.Bond)).Ring && !seen[nb.Atom] {
						seen[nb.Atom] = true
						places = append(places, ringPlace{nb.Atom, min(d, 3), false})
					}
				}
			}
		}
	}
	return append(places, fusedPlaces(s, a, seen)...)
}

// fusedPlaces lists substituents of aromatic rings that share a bond with a ring of a.
func fusedPlaces(s *pattern.Subject, a int32, seen map[int32]bool) []ringPlace {
	var places []ringPlace
	for _, mine := range s.M.Rings() {
		if slices.Index(mine, a) < 0 || !allAromatic(s, mine) {
			continue
		}
		for _, ring := range s.M.Rings() {
			if slices.Index(ring, a) >= 0 || !allAromatic(s, ring) || !shareBond(mine, ring) {
				continue
			}
			for _, x := range ring {
				for _, nb := range s.M.Neighbors(int(x)) {
					if !s.M.Bond(int(nb.Bond)).Aromatic && !seen[nb.Atom] {
						seen[nb.Atom] = true
						places = append(places, ringPlace{nb.Atom, 2, true})
					}
				}
			}
		}
	}
	return places
}

func shareBond(r, q []int32) bool {
	n := 0
	for _, x := range r {
		if slices.Index(q, x) >= 0 {
			n++
		}
	}
	return n >= 2
}

func allAromatic(s *pattern.Subject, ring []int32) bool {
	for _, x := range ring {
		if !s.M.Atom(int(x)).Aromatic {
			return false
		}
	}
	return true
}
