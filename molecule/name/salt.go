package name

import (
	"slices"
	"strings"

	"shelfward/molecule"
)

// maxParts bounds the components of a salt that is named.
const maxParts = 6

// saltName names a molecule of several components: salts by cation and anion, hydrochlorides, hydrates.
func saltName(m *molecule.Molecule) string {
	parts := m.Split()
	if len(parts) > maxParts {
		return ""
	}
	cations, anions, neutral := map[string]int{}, map[string]int{}, map[string]int{}
	for _, p := range parts {
		charge := 0
		for a := range p.NumAtoms() {
			charge += int(p.Atom(a).Charge)
		}
		name := ionName(p, charge)
		if name == "" {
			return ""
		}
		switch {
		case charge > 0:
			cations[name]++
		case charge < 0:
			anions[name]++
		default:
			neutral[name]++
		}
	}
	switch {
	case len(neutral) == 0:
		return strings.Join(append(counted(cations), counted(anions)...), " ")
	case len(cations)+len(anions) > 0:
		return ""
	}
	return addition(neutral)
}

// counted lists names in alphabetical order with their multipliers.
func counted(names map[string]int) []string {
	var list []string
	for n := range names {
		list = append(list, n)
	}
	slices.SortFunc(list, func(x, y string) int { return strings.Compare(alphabetKey(x), alphabetKey(y)) })
	for i, n := range list {
		if c := names[n]; c > 1 {
			if plainIon(n) {
				list[i] = multiplier(c) + n
			} else {
				list[i] = groupMultiplier(c) + enclose(n)
			}
		}
	}
	return list
}

// plainIon says whether di, tri can stand before the name of an ion.
func plainIon(n string) bool {
	for i := 0; i < len(n); i++ {
		if n[i] < 'a' || n[i] > 'z' {
			return false
		}
	}
	return !strings.Contains(n, "ethyl") && !strings.Contains(n, "phenyl") && !strings.Contains(n, "prop") && !strings.Contains(n, "chlorate")
}

// additions are the words for acids and water added to a compound (P-14.8.2 gives "hydrogen chloride
// (1/1)"; the older words are what bottles say).
var additions = map[string]string{"hydrogen chloride": "hydrochloride", "hydrogen bromide": "hydrobromide", "water": "hydrate"}

// addition writes "aniline hydrochloride", "oxalic acid dihydrate".
func addition(parts map[string]int) string {
	main, tail := "", ""
	for _, added := range []string{"hydrogen bromide", "hydrogen chloride", "water"} {
		n := parts[added]
		if n == 0 {
			continue
		}
		if tail != "" {
			return ""
		}
		word := multiplier(n)
		if added == "water" && n == 1 {
			word = "mono"
		}
		tail = word + additions[added]
		delete(parts, added)
	}
	for n, count := range parts {
		if main != "" || count > 1 {
			return ""
		}
		main = n
	}
	if main == "" || tail == "" {
		return ""
	}
	return main + " " + tail
}

// ionName names one component.
func ionName(p *molecule.Molecule, charge int) string {
	if n, ok := loaded().ions[p.FlatKey()]; ok {
		return n
	}
	if charge == 0 {
		return written(p)
	}
	w := newWriter(p)
	name := ""
	if charge < 0 {
		name = w.anion(-charge)
	} else if charge == 1 {
		name = w.onium()
	}
	if w.fail {
		return ""
	}
	return name
}

// anion names carboxylates, sulfonates and alkoxides with all charges in one kind of group.
func (w *writer) anion(charge int) string {
	s := spec{attach: -1, blocked: -1}
	for a, g := range w.groupOf {
		if g != nil && len(g.esters) == 0 && (g.class == ester || g.class == sulfonicEster) {
			s.groups = append(s.groups, g)
		}
		if w.element(int32(a)) == 8 && w.charge(int32(a)) == -1 && w.degree(int32(a)) == 1 {
			if h := w.m.Neighbors(a)[0].Atom; w.element(h) == 6 && !w.acylCarbon(h) {
				s.groups = append(s.groups, &group{class: hydroxy, forms: forms{chain: "olate"}, key: int32(a), hosts: []int32{h}, used: []int32{int32(a)}})
			}
		}
	}
	if len(s.groups) != charge {
		return ""
	}
	for _, g := range s.groups {
		if g.class != s.groups[0].class {
			return ""
		}
	}
	var list []*candidate
	for _, r := range w.rings {
		list = append(list, ringCandidates(r)...)
	}
	list = append(list, w.chainCandidates(-1, s)...)
	name := w.choose(list, s)
	return name
}

// onium names cations of nitrogen and phosphorus with four groups: tetramethylammonium,
// methyl(triphenyl)phosphanium (P-73.1.2).
func (w *writer) onium() string {
	center := int32(-1)
	for a := range w.m.NumAtoms() {
		if w.charge(int32(a)) == 1 && !w.nitroNitrogen(int32(a)) {
			if center >= 0 {
				return ""
			}
			center = int32(a)
		}
	}
	if center < 0 {
		return ""
	}
	e := w.element(center)
	if w.inRing(center) {
		return w.ringOnium(center)
	}
	if e != 7 && e != 15 || w.degree(center)+w.hydrogens(center) != 4 || len(w.around(center).doubles) > 0 {
		return ""
	}
	word := "ammonium"
	if e == 15 {
		word = "phosphanium"
	}
	return w.radical(center, -1, word).name
}

func (w *writer) nitroNitrogen(a int32) bool {
	for _, nb := range w.m.Neighbors(int(a)) {
		if w.charge(nb.Atom) == -1 {
			return true
		}
	}
	return false
}

// ringOnium names ring cations: 1-methylpyridin-1-ium.
func (w *writer) ringOnium(center int32) string {
	r := w.rings[w.ringOf[center]]
	if !r.ok || w.element(center) != 7 {
		return ""
	}
	w.cation = center
	g := &group{class: noClass, forms: forms{chain: "ium"}, key: center, hosts: []int32{center}}
	return w.choose(ringCandidates(r), spec{attach: -1, blocked: -1, groups: []*group{g}})
}

// polyolEster names esters of one polyol with one acid: ethane-1,2-diyl diacetate.
func (w *writer) polyolEster(s spec) string { return "" }

// readsBack says whether the name is one that this package reads as m.
func readsBack(name string, m *molecule.Molecule) bool {
	r, err := Read(name)
	return err == nil && r.FlatKey() == m.FlatKey()
}
