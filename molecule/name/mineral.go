package name

import (
	"slices"
	"strings"

	"shelfward/molecule"
)

// Names whose parent is an acid or hydride of phosphorus, sulfur or boron or a metal: esters of
// mineral acids (P-67), phosphonates, boronic acids (P-68.1.4), Grignard and lithium reagents (P-69), anhydrides.

// mineralName names w by such a parent; empty if there is none or a carbon group is senior.
func (w *writer) mineralName(senior class) string {
	for a := range w.m.NumAtoms() {
		x := int32(a)
		if w.inRing(x) || !w.plain(x) {
			continue
		}
		switch e := w.element(x); {
		case e == 15 || e == 16 || e == 5:
			if senior != noClass && senior <= carbonEster {
				continue
			}
			if name := w.oxoAcid(x); name != "" || w.fail {
				return name
			}
		case metalNames[e] != "":
			return w.metalName(x)
		case e == 8 && (senior == noClass || senior >= ester):
			if name := w.anhydride(x); name != "" || w.fail {
				return name
			}
		}
	}
	return ""
}

// metalNames are the metals whose carbon compounds are named.
var metalNames = map[molecule.Element]string{3: "lithium", 12: "magnesium", 30: "zinc", 48: "cadmium", 80: "mercury", 50: "stannane"}

// metalName writes "ethylmagnesium bromide", "butyllithium", "diethylzinc".
func (w *writer) metalName(x int32) string {
	var list []affix
	halide := molecule.Element(0)
	for _, nb := range w.m.Neighbors(int(x)) {
		e := w.element(nb.Atom)
		switch {
		case w.m.Bond(int(nb.Bond)).Order != 1:
			return ""
		case e == 6 || w.element(x) == 50:
			list = append(list, affix{sub: w.prefix(nb.Atom, x)})
		case e.IsHalogen() && halide == 0:
			halide = e
		default:
			w.fail = true
			return ""
		}
	}
	valence := map[molecule.Element]int{3: 1, 50: 4}[w.element(x)]
	if valence == 0 {
		valence = 2
	}
	if w.degree(x)+w.hydrogens(x) != valence || len(list) == 0 {
		w.fail = true
		return ""
	}
	name := w.radicalOf(list, metalNames[w.element(x)]).name
	if halide != 0 {
		name += " " + halideWord(halide)
	}
	return name
}

// oxoAcid writes "triethyl phosphate", "diethyl methylphosphonate", "phenylboronic acid".
func (w *writer) oxoAcid(x int32) string {
	r := w.around(x)
	var esters []affix
	acids := 0
	for _, y := range r.singles {
		switch {
		case w.isHydroxy(y):
			acids++
		case w.element(y) == 8 && w.degree(y) == 2 && w.plain(y) && !w.inRing(y) && w.element(w.across(y, x)) == 6 && !w.acylCarbon(w.across(y, x)):
			esters = append(esters, affix{sub: w.prefix(w.across(y, x), y)})
		default:
			return ""
		}
	}
	for _, y := range r.doubles {
		if w.element(y) != 8 || !w.terminal(y) {
			return ""
		}
	}
	if w.element(x) == 15 && len(r.doubles) == 1 && len(r.singles) == 0 && len(r.carbons) == 3 {
		return w.radical(x, r.doubles[0], "phosphane").name + " oxide"
	}
	root := oxoRoot(w.element(x), len(r.doubles), len(r.singles), len(r.carbons), r.hydrogens)
	if root == "" || len(r.triples) > 0 {
		return ""
	}
	var list []affix
	for _, y := range r.carbons {
		list = append(list, affix{sub: w.prefix(y, x)})
	}
	if len(esters) == 0 {
		return w.radicalOf(list, root+"ic acid").name
	}
	tail := map[string]string{"phosphor": "phosphate", "phosphorous": "phosphite", "sulfur": "sulfate", "bor": "borate"}[root]
	if tail == "" {
		tail = root + "ate"
	}
	name := w.radicalOf(list, tail).name
	if w.fail {
		return ""
	}
	words := []string{}
	for _, g := range grouped(esters) {
		words = append(words, timesWord(len(g), g[0].sub))
	}
	if acids > 0 {
		words = append(words, multiplier(acids)+"hydrogen")
	}
	return strings.Join(append(words, name), " ")
}

// timesWord is an ester word: "diethyl", "bis(2-chloroethyl)".
func timesWord(n int, s sub) string {
	switch {
	case n == 1:
		return s.name
	case s.compound:
		return groupMultiplier(n) + enclose(s.name)
	}
	return times(n, s.name)
}

// oxoRoot is the root of the acid with the central element, its =O, -O and carbon groups and hydrogens.
func oxoRoot(e molecule.Element, doubles, singles, carbons, hydrogens int) string {
	switch {
	case e == 15 && doubles == 1 && singles == 3:
		return "phosphor"
	case e == 15 && doubles == 1 && singles == 2 && carbons+hydrogens == 1:
		return "phosphon"
	case e == 15 && doubles == 1 && singles == 1 && carbons+hydrogens == 2:
		return "phosphin"
	case e == 15 && doubles == 0 && singles == 3:
		return "phosphorous"
	case e == 16 && doubles == 2 && singles == 2:
		return "sulfur"
	case e == 5 && doubles == 0 && singles == 3:
		return "bor"
	case e == 5 && doubles == 0 && singles == 2 && carbons == 1:
		return "boron"
	case e == 5 && doubles == 0 && singles == 1 && carbons == 2:
		return "borin"
	}
	return ""
}

// anhydride writes "acetic anhydride", "acetic benzoic anhydride" for acyclic anhydrides with bridge o.
func (w *writer) anhydride(o int32) string {
	if w.degree(o) != 2 {
		return ""
	}
	var names []string
	for _, nb := range w.m.Neighbors(int(o)) {
		c := nb.Atom
		r := w.around(c)
		if w.element(c) != 6 || w.inRing(c) || len(r.doubles) != 1 || w.element(r.doubles[0]) != 8 || len(r.carbons)+r.hydrogens != 1 || len(r.singles) != 1 {
			return ""
		}
		host := int32(-1)
		if len(r.carbons) == 1 {
			host = r.carbons[0]
		}
		names = append(names, "")
		g := &group{forms: forms{chain: "oic", side: "carboxylic"}, key: c, within: true, used: []int32{c, r.doubles[0], o}}
		var list []*candidate
		s := spec{groups: []*group{g}, attach: -1, blocked: o}
		if host >= 0 {
			g.hosts = []int32{host}
		}
		if host >= 0 && w.inRing(host) {
			list = w.ringParents(host, o)
		} else {
			list = w.chainCandidates(c, s)
		}
		names[len(names)-1] = w.choose(list, s)
	}
	if w.fail {
		return ""
	}
	slices.SortFunc(names, func(x, y string) int { return strings.Compare(alphabetKey(x), alphabetKey(y)) })
	if names[0] == names[1] {
		names = names[:1]
	}
	return strings.Join(names, " ") + " anhydride"
}
