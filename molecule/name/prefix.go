package name

import (
	"slices"
	"strings"

	"shelfward/molecule"
)

// prefix names the substituent that hangs with its atom a on from.
func (w *writer) prefix(a, from int32) sub {
	key := [2]int32{a, from}
	if s, ok := w.known[key]; ok {
		return s
	}
	if w.fail || w.depth >= maxDepth {
		w.fail = true
		return sub{}
	}
	w.depth++
	s := w.makePrefix(a, from)
	w.depth--
	if s.name == "" {
		w.fail = true
	}
	w.known[key] = s
	return s
}

func simple(name string) sub   { return sub{name: name} }
func compound(name string) sub { return sub{name: name, compound: true} }

func (w *writer) makePrefix(a, from int32) sub {
	order := int(w.m.Bond(w.m.BondBetween(int(a), int(from))).Order)
	if w.inRing(a) {
		return w.ringPrefix(a, from, order)
	}
	if order > 2 {
		return sub{}
	}
	switch e := w.element(a); e {
	case 6:
		if order == 1 {
			if s := w.acylPrefix(a, from); s.name != "" || w.fail {
				return s
			}
		}
		return w.alkylPrefix(a, from, order)
	case 9, 17, 35, 53:
		if w.degree(a) == 1 && w.plain(a) {
			return simple(map[molecule.Element]string{9: "fluoro", 17: "chloro", 35: "bromo", 53: "iodo"}[e])
		}
	case 8:
		return w.oxyPrefix(a, from, order)
	case 16, 34:
		return w.sulfurPrefix(a, from, order)
	case 7:
		return w.nitrogenPrefix(a, from, order)
	case 14:
		if order == 1 && w.plain(a) {
			return w.radical(a, from, "silyl")
		}
	case 15:
		return w.phosphorusPrefix(a, from, order)
	case 5:
		if r := w.around(a); order == 1 && len(r.singles) == 2 && w.isHydroxy(r.singles[0]) && w.isHydroxy(r.singles[1]) {
			return simple("borono")
		}
	}
	return sub{}
}

func (w *writer) isHydroxy(a int32) bool {
	return w.element(a) == 8 && w.degree(a) == 1 && w.hydrogens(a) == 1
}

// ringPrefix names a ring by its attached atom.
func (w *writer) ringPrefix(a, from int32, order int) sub {
	r := w.rings[w.ringOf[a]]
	if !r.ok || order > 2 {
		return sub{}
	}
	name := w.choose(w.ringParents(a, from), spec{attach: a, double: order == 2, blocked: from})
	return sub{name: name, compound: !plainWord(name)}
}

// plainWord says whether a substituent name may stand without brackets: no locants, one word.
func plainWord(name string) bool {
	switch name {
	case "phenyl", "benzyl", "benzylidene", "tert-butyl":
		return true
	}
	for i := 0; i < len(name); i++ {
		if name[i] < 'a' || name[i] > 'z' {
			return false
		}
	}
	body := strings.TrimPrefix(name, "cyclo")
	for _, ending := range []string{"ylidene", "yl"} {
		if s, ok := strings.CutSuffix(body, ending); ok {
			for _, unsaturated := range []string{"", "en", "yn"} {
				if t, ok := strings.CutSuffix(s, unsaturated); ok && stemLength(t) > 0 {
					return true
				}
			}
		}
	}
	return false
}

var stemLengths = func() map[string]int {
	m := map[string]int{}
	for n := 1; n <= maxStem; n++ {
		m[stem(n)] = n
	}
	return m
}()

// stemLength is the number of carbons of a stem, 0 if it is none.
func stemLength(s string) int { return stemLengths[s] }

// alkylPrefix names a carbon group by its senior chain through a.
func (w *writer) alkylPrefix(a, from int32, order int) sub {
	s := spec{attach: a, double: order == 2, blocked: from}
	name := w.choose(w.chainCandidates(a, s), s)
	switch name {
	case "2-methylpropan-2-yl":
		return simple("tert-butyl")
	case "phenylmethyl":
		return simple("benzyl")
	case "phenylmethylidene":
		return simple("benzylidene")
	}
	return sub{name: name, compound: !plainWord(name)}
}

// acylPrefix names carbon groups that end in C(=O), C#N and the like; empty if a is not one.
func (w *writer) acylPrefix(a, from int32) sub {
	r := w.around(a)
	if !w.plain(a) {
		return sub{}
	}
	rest := without(slices.Concat(r.carbons, r.singles), from)
	if len(r.triples) == 1 && w.element(r.triples[0]) == 7 && w.terminal(r.triples[0]) {
		return simple("cyano")
	}
	if len(r.doubles) != 1 || w.element(r.doubles[0]) == 6 {
		return sub{}
	}
	x := r.doubles[0]
	ex := w.element(x)
	if ex != 7 && !w.terminal(x) {
		return sub{}
	}
	if len(rest) == 0 {
		if ex == 8 && r.hydrogens == 1 {
			return simple("formyl")
		}
		return sub{}
	}
	y := rest[0]
	switch ey := w.element(y); {
	case ey == 6 && (ex == 8 || ex == 16):
		return w.acylUnit(a, from, x, y, map[molecule.Element]forms{8: {chain: "oyl", side: "carbonyl"}, 16: {chain: "thioyl", side: "carbothioyl"}}[ex])
	case ey == 7 && w.sideNitrogen(y) && ex == 8:
		return w.acylUnit(a, from, x, y, forms{side: "carbonyl"})
	case ex == 8 && ey == 8 && w.hydrogens(y) == 1:
		return simple("carboxy")
	case ey == 8 && w.charge(y) == 0 && w.degree(y) == 2 && (ex == 8 || ex == 16):
		return compound(w.linked(w.prefix(y, a), acylRadical(ex)))
	case ex == 8 && ey.IsHalogen():
		return simple("carbono" + strings.TrimSuffix(halideWord(ey), "e") + "oyl")
	case ey == 16 && w.plain(y) && (ex == 8 || ex == 16):
		return compound(w.linked(w.prefix(y, a), acylRadical(ex)))
	case ey == 7 && !w.inRing(y) && w.plainAmine(y, a) && ex != 7 && w.hydrazinePartner(y, a) < 0:
		radical := "carbamoyl"
		if ex == 16 {
			radical = "carbamothioyl"
		}
		return w.radical(y, a, radical)
	case ey == 7 && ex == 7 && !w.inRing(y) && w.hydrogens(y) == 2 && w.degree(x) == 1 && w.plain(y):
		return simple("carbamimidoyl")
	}
	return sub{}
}

func acylRadical(e molecule.Element) string {
	if e == 16 {
		return "carbonothioyl"
	}
	return "carbonyl"
}

// linked puts a substituent before a radical that it hangs on: "ethoxycarbonyl", "(propan-2-yl)oxy".
func (w *writer) linked(s sub, radical string) string {
	if s.compound {
		return enclose(s.name) + radical
	}
	return s.name + radical
}

// acylUnit names an acyl group C(=x) on host y.
func (w *writer) acylUnit(a, from, x, y int32, f forms) sub {
	g := &group{forms: f, key: a, hosts: []int32{y}, within: f.chain != "", used: []int32{a, x}}
	return w.unitOf(g, y, from)
}

// unitOf names the substituent that the group g ends, its chain or the ring of its host; blocked is
// the atom that it hangs on.
func (w *writer) unitOf(g *group, host, blocked int32) sub {
	s := spec{groups: []*group{g}, attach: -1, blocked: blocked}
	var list []*candidate
	switch {
	case w.inRing(host):
		list = w.ringParents(host, blocked)
	case w.element(host) == 7:
		for _, c := range w.nitrogenParents(host) {
			if c.base == "hydrazine" {
				list = append(list, c)
			}
		}
	case g.within:
		list = w.chainCandidates(g.key, s)
	default:
		list = w.chainCandidates(host, s)
	}
	name := w.choose(list, s)
	return sub{name: name, compound: !simpleAcyl[name]}
}

// simpleAcyl are acyl groups that stand without brackets.
var simpleAcyl = map[string]bool{"acetyl": true, "benzoyl": true, "propanoyl": true, "butanoyl": true, "acetamido": true, "benzamido": true, "formamido": true}

func without(list []int32, a int32) []int32 {
	kept := make([]int32, 0, len(list))
	for _, x := range list {
		if x != a {
			kept = append(kept, x)
		}
	}
	return kept
}

// radical names a group by its central atom a with everything else on it as substituents without
// locants: "dimethylamino", "trimethylsilyl", "dimethylcarbamoyl".
func (w *writer) radical(a, from int32, radical string) sub {
	var list []affix
	for _, nb := range w.m.Neighbors(int(a)) {
		if nb.Atom == from {
			continue
		}
		list = append(list, affix{sub: w.prefix(nb.Atom, a)})
	}
	return w.radicalOf(list, radical)
}

func (w *writer) radicalOf(list []affix, radical string) sub {
	if w.fail {
		return sub{}
	}
	if len(list) == 0 {
		return simple(radical)
	}
	return compound(prefixes(list, true) + radical)
}

// contracted are the alkyloxy prefixes with short names (P-63.2.2.2).
var contracted = map[string]string{"methyl": "methoxy", "ethyl": "ethoxy", "propyl": "propoxy", "butyl": "butoxy", "phenyl": "phenoxy", "tert-butyl": "tert-butoxy"}

// oxyPrefix names groups attached by oxygen.
func (w *writer) oxyPrefix(a, from int32, order int) sub {
	if !w.plain(a) {
		return sub{}
	}
	if order == 2 {
		return simple("oxo")
	}
	if w.degree(a) == 1 {
		if w.hydrogens(a) == 1 {
			return simple("hydroxy")
		}
		return sub{}
	}
	z := w.across(a, from)
	if w.element(z) == 8 && !w.inRing(z) && w.plain(z) {
		if w.degree(z) == 1 {
			return simple("hydroperoxy")
		}
		s := w.prefix(w.across(z, a), z)
		return compound(w.linked(s, "peroxy"))
	}
	s := w.prefix(z, a)
	if c, ok := contracted[s.name]; ok {
		return simple(c)
	}
	if c := contractedTail(s.name); c != "" {
		return compound(c)
	}
	if s.name == "cyano" {
		return simple("cyanato")
	}
	return compound(w.linked(s, "oxy"))
}

// contractedTail gives substituted alkyloxy prefixes with short names: 4-chlorophenoxy, 2-methylpropoxy.
func contractedTail(name string) string {
	if strings.HasSuffix(name, "tert-butyl") {
		return ""
	}
	for _, tail := range []string{"phenyl", "methyl", "ethyl", "propyl", "butyl"} {
		head, ok := strings.CutSuffix(name, tail)
		if !ok || head == "" || tail == "ethyl" && strings.HasSuffix(head, "m") || strings.HasSuffix(head, "cyclo") {
			continue
		}
		return head + contracted[tail]
	}
	return ""
}

// across is the other neighbour of a divalent atom.
func (w *writer) across(a, from int32) int32 {
	for _, nb := range w.m.Neighbors(int(a)) {
		if nb.Atom != from {
			return nb.Atom
		}
	}
	return -1
}

// sulfurPrefix names groups attached by sulfur or selenium.
// sulfonylPrefix names SO2 and SO groups.
// nitrogenPrefix names groups attached by nitrogen.
// amidoPrefix names NH-acyl by the amide: acetamido, methanesulfonamido (P-66.1.1.4.5); empty if it is none.
// azideTail says whether x is the middle and its other neighbour the end of an azide on a.
// chargedNitrogen names nitro, isocyano and diazo groups.
// iminoPrefix names =N groups.
// hydrazinyl names -NR-NR2 and =N-NR2 (P-68.3.1.2).
// threeNitrogens says whether z has a nitrogen neighbour other than a that is not a ring or nitroso nitrogen.
// phosphorusPrefix names phosphono, phosphoryl and phosphanyl groups.
