package name

import "shelfward/molecule"

// class is the place of a characteristic group in the order of seniority (P-41): the least is senior.
type class int

const (
	noClass class = iota
	acid
	thioAcid
	sulfonicAcid
	sulfinicAcid
	boronicAcid
	carbamicAcid
	ester
	thioEster
	sulfonicEster
	carbonEster // of carbonic and carbamic acid
	acylHalide
	sulfonylHalide
	carbonHalide
	amide
	thioAmide
	sulfonamide
	urea
	amidine
	hydrazide
	nitrile
	aldehyde
	ketone
	thioketone
	hydroxy
	thiol
	hydroperoxide
	amine
	imine
)

// forms are the endings of a group: within a chain, on a ring or as one of three on a chain.
type forms struct {
	chain, side string
	word        string // what follows as a word of its own: "acid", "chloride"
}

// group is one characteristic group.
type group struct {
	class
	forms
	key       int32   // its central atom: the carbon of C(=O)OH, the O of OH, the N of an amine, the S of SO2
	hosts     []int32 // atoms that can bear it (for a group within a chain: the next atom)
	within    bool    // key is a carbon atom that can end a chain
	esters    []int32 // ester oxygens (or sulfurs)
	nitrogens []int32 // nitrogens whose hydrogens are substitutable, in the order N, N'
	used      []int32 // atoms that the ending expresses, key and nitrogens included
	oxide     bool    // an amine oxide
	double    bool    // takes two valences of its host: one, imine
}

// findGroups lists the characteristic groups of the molecule.
func (w *writer) findGroups() {
	m := w.m
	w.groupOf = make([]*group, m.NumAtoms())
	for a := range m.NumAtoms() {
		var g *group
		switch m.Atom(a).Element {
		case 6:
			g = w.carbonGroup(int32(a))
		case 8:
			g = w.oxygenGroup(int32(a))
		case 16:
			g = w.sulfurGroup(int32(a))
		case 7:
			g = w.amineGroup(int32(a))
		case 5:
			g = w.boronGroup(int32(a))
		}
		if g != nil {
			g.key = int32(a)
			w.groupOf[a] = g
		}
	}
}

// around sorts the neighbours of an atom by what they are.
type around struct {
	carbons, singles []int32 // carbon neighbours (single bond); other neighbours by single bonds
	doubles, triples []int32 // across double and triple bonds
	hydrogens        int
}

func (w *writer) around(a int32) around {
	var r around
	r.hydrogens = int(w.m.Atom(int(a)).Hydrogens)
	for _, nb := range w.m.Neighbors(int(a)) {
		switch o := w.m.Bond(int(nb.Bond)).Order; {
		case o == 2:
			r.doubles = append(r.doubles, nb.Atom)
		case o == 3:
			r.triples = append(r.triples, nb.Atom)
		case w.element(nb.Atom) == 6:
			r.carbons = append(r.carbons, nb.Atom)
		default:
			r.singles = append(r.singles, nb.Atom)
		}
	}
	return r
}

func (w *writer) inRing(a int32) bool { return w.ringOf[a] >= 0 }

func (w *writer) degree(a int32) int { return w.m.Degree(int(a)) }

func (w *writer) charge(a int32) int { return int(w.m.Atom(int(a)).Charge) }

func (w *writer) hydrogens(a int32) int { return int(w.m.Atom(int(a)).Hydrogens) }

// plain says whether the atom bears no charge.
func (w *writer) plain(a int32) bool { return w.charge(a) == 0 }

// terminal says whether a has one neighbour and no hydrogen: =O, #N, halogen.
func (w *writer) terminal(a int32) bool { return w.degree(a) == 1 && w.hydrogens(a) == 0 && w.plain(a) }

// carbonGroup finds acids and their derivatives, nitriles, aldehydes, ketones.
func (w *writer) carbonGroup(a int32) *group {
	r := w.around(a)
	if !w.plain(a) {
		return nil
	}
	if w.inRing(a) {
		if len(r.doubles) == 1 && !w.inRing(r.doubles[0]) {
			return w.oxoGroup(a, a, r.doubles[0])
		}
		return nil
	}
	if len(r.triples) == 1 && w.element(r.triples[0]) == 7 && w.terminal(r.triples[0]) {
		host := w.acylHost(r)
		if host < 0 || len(r.singles) > 0 && w.element(host) == 6 {
			return nil
		}
		return &group{class: nitrile, forms: forms{chain: "nitrile", side: "carbonitrile"}, hosts: []int32{host}, within: w.element(host) == 6, used: []int32{a, r.triples[0]}}
	}
	if len(r.doubles) != 1 {
		return nil
	}
	x := r.doubles[0]
	switch {
	case len(r.singles) == 0 && r.hydrogens > 0 && w.element(x) == 8 && w.terminal(x) && len(r.carbons) == 1:
		return &group{class: aldehyde, forms: forms{chain: "al", side: "carbaldehyde"}, hosts: r.carbons, within: true, used: []int32{a, x}}
	case len(r.singles) == 0:
		return w.oxoGroup(a, a, x)
	case len(r.singles) == 1 && len(r.carbons)+r.hydrogens == 1:
		host := int32(-1)
		if len(r.carbons) == 1 {
			host = r.carbons[0]
		}
		return w.acylGroup(a, x, r.singles[0], host, true)
	case len(r.singles) == 2:
		// On nitrogen of a ring or of a hydrazine the group is a suffix; otherwise a carbonic acid.
		p, q := r.singles[0], r.singles[1]
		switch {
		case w.sideNitrogen(p) && !w.sideNitrogen(q):
			return w.acylGroup(a, x, q, p, false)
		case w.sideNitrogen(q) && !w.sideNitrogen(p):
			return w.acylGroup(a, x, p, q, false)
		}
		return w.carbonicGroup(a, x, p, q)
	}
	return nil
}

// sideNitrogen says whether a is a nitrogen that takes a carboxylic suffix: in a ring or hydrazine.
func (w *writer) sideNitrogen(a int32) bool {
	return w.element(a) == 7 && w.plain(a) && (w.inRing(a) || w.hydrazineNitrogen(a))
}

// hydrazineNitrogen says whether a is one of two nitrogens joined by a single bond, both acyclic.
func (w *writer) hydrazineNitrogen(a int32) bool {
	if w.inRing(a) || !w.plain(a) {
		return false
	}
	for _, nb := range w.m.Neighbors(int(a)) {
		if w.element(nb.Atom) == 7 && w.plain(nb.Atom) && !w.inRing(nb.Atom) && w.m.Bond(int(nb.Bond)).Order == 1 && !w.nitroso(nb.Atom) {
			return true
		}
	}
	return false
}

// nitroso says whether n is the nitrogen of a nitroso group.
func (w *writer) nitroso(n int32) bool {
	r := w.around(n)
	return len(r.doubles) == 1 && w.element(r.doubles[0]) == 8 && w.degree(n) == 2
}

// acylHost is the atom that bears a nitrile carbon: its carbon neighbour or a ring nitrogen, -1 if neither.
func (w *writer) acylHost(r around) int32 {
	switch {
	case len(r.carbons) == 1 && len(r.singles) == 0:
		return r.carbons[0]
	case len(r.carbons) == 0 && len(r.singles) == 1 && w.sideNitrogen(r.singles[0]):
		return r.singles[0]
	}
	return -1
}

// oxoGroup is the ketone, thione or imine of carbon a in a chain or ring.
func (w *writer) oxoGroup(a, host, x int32) *group {
	if !w.plain(x) || w.inRing(x) {
		return nil
	}
	switch w.element(x) {
	case 8:
		return &group{class: ketone, forms: forms{chain: "one"}, hosts: []int32{host}, used: []int32{x}, double: true}
	case 16:
		if w.degree(x) == 1 {
			return &group{class: thioketone, forms: forms{chain: "thione"}, hosts: []int32{host}, used: []int32{x}, double: true}
		}
	case 7:
		for _, nb := range w.m.Neighbors(int(x)) {
			if w.element(nb.Atom) != 6 {
				return nil // oximes, hydrazones: named as hydroxylamine and hydrazine
			}
			if nb.Atom != a && w.carbonicLike(nb.Atom) {
				return nil
			}
		}
		return &group{class: imine, forms: forms{chain: "imine"}, hosts: []int32{host}, used: []int32{x}, nitrogens: []int32{x}, double: true}
	}
	return nil
}

// carbonicLike says whether carbon a is bound to heteroatoms only and bears a multiple bond.
func (w *writer) carbonicLike(a int32) bool {
	if w.inRing(a) {
		return false
	}
	r := w.around(a)
	return len(r.carbons) == 0 && len(r.doubles)+len(r.triples) > 0 && r.hydrogens == 0
}

// acylGroup is the group C(=x)y on host (-1: hydrogen).
func (w *writer) acylGroup(a, x, y, host int32, within bool) *group {
	if !w.plain(x) || !w.plain(y) && w.element(y) != 8 {
		return nil
	}
	g := &group{within: within, used: []int32{a, x}}
	if host >= 0 {
		g.hosts = []int32{host}
	}
	ex, ey := w.element(x), w.element(y)
	switch {
	case ex == 8 && !w.terminal(x), ex == 16 && !w.terminal(x):
		return nil
	case ex == 8 && ey == 8:
		g.used = append(g.used, y)
		switch {
		case w.charge(y) == -1:
			g.class, g.forms = ester, forms{chain: "oate", side: "carboxylate"}
		case w.hydrogens(y) == 1:
			g.class, g.forms = acid, forms{chain: "oic", side: "carboxylic", word: "acid"}
		case w.degree(y) == 2 && w.plain(y) && !w.inRing(y) && w.isHydroxy(w.across(y, a)):
			g.class, g.forms = acid, forms{chain: "peroxoic", side: "carboperoxoic", word: "acid"}
			g.used = append(g.used, w.across(y, a))
		case w.esterOxygen(y, a):
			g.class, g.forms, g.esters = ester, forms{chain: "oate", side: "carboxylate"}, []int32{y}
		default:
			return nil
		}
	case ex == 8 && ey.IsHalogen():
		g.used = append(g.used, y)
		g.class, g.forms = acylHalide, forms{chain: "oyl", side: "carbonyl", word: halideWord(ey)}
	case ex == 8 && ey == 16:
		g.used = append(g.used, y)
		switch {
		case w.hydrogens(y) == 1 && w.degree(y) == 1:
			g.class, g.forms = thioAcid, forms{chain: "thioic S-", side: "carbothioic S-", word: "acid"}
		case w.esterOxygen(y, a):
			g.class, g.forms, g.esters = thioEster, forms{chain: "thioate", side: "carbothioate"}, []int32{y}
		default:
			return nil
		}
	case ex == 8 && ey == 7:
		if w.inRing(y) || w.nitroAt(y) || !w.plain(y) {
			return w.pseudoKetone(a, x, host, y)
		}
		if !w.plainAmine(y, a) {
			return w.pseudoKetone(a, x, host, y)
		}
		if z := w.hydrazinePartner(y, a); z >= 0 {
			g.class, g.forms = hydrazide, forms{chain: "hydrazide", side: "carbohydrazide"}
			g.nitrogens = []int32{y, z}
			g.used = append(g.used, y, z)
			return g
		}
		g.used = append(g.used, y)
		g.class, g.forms, g.nitrogens = amide, forms{chain: "amide", side: "carboxamide"}, []int32{y}
	case ex == 16 && ey == 7:
		if w.inRing(y) || !w.plainAmine(y, a) || w.hydrazinePartner(y, a) >= 0 {
			return nil
		}
		g.used = append(g.used, y)
		g.class, g.forms, g.nitrogens = thioAmide, forms{chain: "thioamide", side: "carbothioamide"}, []int32{y}
	case ex == 7 && ey == 7:
		if w.inRing(y) || w.inRing(x) || !w.plainAmine(y, a) || w.hydrazinePartner(y, a) >= 0 {
			return nil
		}
		for _, nb := range w.m.Neighbors(int(x)) {
			if w.element(nb.Atom) != 6 {
				return nil
			}
		}
		g.used = append(g.used, y)
		g.class, g.forms, g.nitrogens = amidine, forms{chain: "imidamide", side: "carboximidamide"}, []int32{y, x}
	default:
		return nil
	}
	return g
}

// pseudoKetone is a carbonyl group on a ring nitrogen: 1-(piperidin-1-yl)ethan-1-one (P-64.3).
func (w *writer) pseudoKetone(a, x, host, y int32) *group {
	if host < 0 && w.hydrogens(a) == 0 || !w.inRing(y) {
		return nil
	}
	if host < 0 || w.hydrogens(a) == 1 {
		return &group{class: aldehyde, forms: forms{side: "carbaldehyde"}, hosts: []int32{y}, used: []int32{a, x}}
	}
	return &group{class: ketone, forms: forms{chain: "one"}, hosts: []int32{a}, used: []int32{x}, double: true}
}

// esterOxygen says whether oxygen or sulfur y joins acyl atom a to a carbon group, not to another acid.
func (w *writer) esterOxygen(y, a int32) bool {
	if w.inRing(y) || w.degree(y) != 2 || !w.plain(y) {
		return false
	}
	for _, nb := range w.m.Neighbors(int(y)) {
		if nb.Atom == a {
			continue
		}
		if w.element(nb.Atom) != 6 || w.acylCarbon(nb.Atom) {
			return false
		}
	}
	return true
}

// acylCarbon says whether a is C(=O) or the like of an acid.
func (w *writer) acylCarbon(a int32) bool {
	if w.inRing(a) || w.element(a) != 6 {
		return false
	}
	for _, nb := range w.m.Neighbors(int(a)) {
		if w.m.Bond(int(nb.Bond)).Order > 1 && w.element(nb.Atom) != 6 {
			return true
		}
	}
	return false
}

// plainAmine says whether nitrogen y (a neighbour of a) bears only hydrogen, carbon and perhaps one
// nitrogen or oxygen more, by single bonds.
func (w *writer) plainAmine(y, a int32) bool {
	if !w.plain(y) {
		return false
	}
	for _, nb := range w.m.Neighbors(int(y)) {
		if w.m.Bond(int(nb.Bond)).Order != 1 {
			return false
		}
	}
	return true
}

// hydrazinePartner is the nitrogen that makes y a hydrazine nitrogen, -1 if none.
func (w *writer) hydrazinePartner(y, a int32) int32 {
	for _, nb := range w.m.Neighbors(int(y)) {
		if nb.Atom != a && w.element(nb.Atom) == 7 && w.plain(nb.Atom) && !w.inRing(nb.Atom) && w.m.Bond(int(nb.Bond)).Order == 1 && !w.nitroso(nb.Atom) {
			return nb.Atom
		}
	}
	return -1
}

// nitroAt says whether nitrogen y bears an N=O.
func (w *writer) nitroAt(y int32) bool { return w.nitroso(y) || w.charge(y) == 1 }

func halideWord(e molecule.Element) string {
	switch e {
	case 9:
		return "fluoride"
	case 17:
		return "chloride"
	case 35:
		return "bromide"
	}
	return "iodide"
}

// carbonicGroup finds urea, carbamates, carbonates and their halides: C(=x)(p)(q), both heteroatoms.
// oxygenGroup finds alcohols and hydroperoxides.
// sulfurGroup finds thiols and sulfonic acids with their derivatives.
// amineGroup finds amines: nitrogen on carbon that belongs to no other group.
// groupAcyl says whether carbon c makes its nitrogen an amide, urea, amidine or cyanamide.
// boronGroup finds boronic acids.
