package name

import "slices"

func (w *writer) sulfurPrefix(a, from int32, order int) sub {
	if !w.plain(a) {
		return sub{}
	}
	root := "sulfan"
	if w.element(a) == 34 {
		root = "selan"
	}
	if order == 2 {
		if w.degree(a) == 1 {
			return simple(root + "ylidene")
		}
		return sub{}
	}
	r := w.around(a)
	switch {
	case w.degree(a) == 1 && r.hydrogens == 1:
		return simple(root + "yl")
	case w.degree(a) == 2 && r.hydrogens == 0:
		z := w.across(a, from)
		if w.element(z) == 16 && root == "sulfan" && !w.inRing(z) && w.plain(z) && w.degree(z) == 2 {
			return compound(w.linked(w.prefix(w.across(z, a), z), "disulfanyl"))
		}
		s := w.prefix(z, a)
		if s.name == "cyano" {
			if root == "sulfan" {
				return simple("thiocyanato")
			}
			return simple("selenocyanato")
		}
		return compound(w.linked(s, root+"yl"))
	}
	return w.sulfonylPrefix(a, from, r)
}

func (w *writer) sulfonylPrefix(a, from int32, r around) sub {
	for _, x := range r.doubles {
		if w.element(x) != 8 || !w.terminal(x) {
			return sub{}
		}
	}
	rest := without(slices.Concat(r.carbons, r.singles), from)
	if w.element(a) != 16 || len(rest) != 1 || len(r.doubles) < 1 || len(r.doubles) > 2 {
		return sub{}
	}
	radical := "sulfonyl"
	if len(r.doubles) == 1 {
		radical = "sulfinyl"
	}
	y := rest[0]
	switch e := w.element(y); {
	case e == 6:
		g := &group{forms: forms{chain: radical}, key: a, hosts: []int32{y}, used: append([]int32{a, from}, r.doubles...)}
		return w.unitOf(g, y, from)
	case e == 8 && w.isHydroxy(y):
		if radical == "sulfinyl" {
			return simple("sulfino")
		}
		return simple("sulfo")
	case e == 7 && !w.inRing(y) && w.plainAmine(y, a) && radical == "sulfonyl" && w.hydrazinePartner(y, a) < 0:
		return w.radical(y, a, "sulfamoyl")
	case e.IsHalogen(), e == 8, e == 7:
		return compound(w.linked(w.prefix(y, a), radical))
	}
	return sub{}
}

func (w *writer) nitrogenPrefix(a, from int32, order int) sub {
	r := w.around(a)
	rest := without(slices.Concat(r.carbons, r.singles), from)
	if w.charge(a) == 1 {
		return w.chargedNitrogen(a, order, r, rest)
	}
	if !w.plain(a) {
		return sub{}
	}
	if order == 2 {
		return w.iminoPrefix(a, from, rest)
	}
	if len(r.doubles) == 1 && len(rest) == 0 {
		x := r.doubles[0]
		switch w.element(x) {
		case 8:
			return simple("nitroso")
		case 6:
			q := w.around(x)
			if w.degree(x) == 2 && len(q.doubles) == 2 {
				y := q.doubles[0]
				if y == a {
					y = q.doubles[1]
				}
				if w.terminal(y) && w.element(y) == 8 {
					return simple("isocyanato")
				}
				if w.terminal(y) && w.element(y) == 16 {
					return simple("isothiocyanato")
				}
				return sub{}
			}
			return compound(w.linked(w.prefix(x, a), "amino"))
		case 7:
			if w.charge(x) == 1 {
				if w.azideTail(a, x) {
					return simple("azido")
				}
				return sub{}
			}
			if w.inRing(x) || w.degree(x) > 2 || !w.plain(x) {
				return sub{}
			}
			if w.degree(x) == 1 {
				return simple("diazenyl")
			}
			return compound(w.linked(w.prefix(w.across(x, a), x), "diazenyl"))
		}
		return sub{}
	}
	if len(r.doubles)+len(r.triples) > 0 {
		return sub{}
	}
	if z := w.hydrazinePartner(a, from); z >= 0 {
		return w.hydrazinyl(a, z, from, "yl")
	}
	if len(rest) == 1 && w.hydrogens(a) == 1 {
		if s := w.amidoPrefix(a, rest[0]); s.name != "" || w.fail {
			return s
		}
	}
	return w.radical(a, from, "amino")
}

func (w *writer) amidoPrefix(n, y int32) sub {
	r := w.around(y)
	if w.inRing(y) || !w.plain(y) {
		return sub{}
	}
	switch w.element(y) {
	case 6:
		if len(r.doubles) != 1 || w.element(r.doubles[0]) != 8 || !w.terminal(r.doubles[0]) {
			return sub{}
		}
		rest := without(slices.Concat(r.carbons, r.singles), n)
		switch {
		case len(rest) == 0:
			return simple("formamido")
		case w.element(rest[0]) == 6 && w.groupOf[y] != nil && w.groupOf[y].class == amide:
			g := &group{forms: forms{chain: "amido", side: "carboxamido"}, key: y, hosts: rest, within: true, used: []int32{y, r.doubles[0], n}}
			return w.unitOf(g, rest[0], n)
		}
	case 16:
		if len(r.doubles) == 2 && len(r.carbons) == 1 && w.element(r.doubles[0]) == 8 && w.element(r.doubles[1]) == 8 {
			g := &group{forms: forms{chain: "sulfonamido"}, key: y, hosts: r.carbons, used: append([]int32{y, n}, r.doubles...)}
			return w.unitOf(g, r.carbons[0], n)
		}
	}
	return sub{}
}

func (w *writer) azideTail(a, x int32) bool {
	z := w.across(x, a)
	return z >= 0 && w.element(z) == 7 && w.degree(z) == 1 && w.charge(z) == -1 && w.degree(x) == 2
}

func (w *writer) chargedNitrogen(a int32, order int, r around, rest []int32) sub {
	switch {
	case order == 1 && len(r.doubles) == 1 && w.element(r.doubles[0]) == 8 && len(rest) == 1 && w.element(rest[0]) == 8 && w.charge(rest[0]) == -1:
		return simple("nitro")
	case order == 1 && len(r.triples) == 1 && w.element(r.triples[0]) == 6 && w.charge(r.triples[0]) == -1 && w.degree(a) == 2:
		return simple("isocyano")
	case order == 2 && w.degree(a) == 2:
		for _, x := range r.doubles {
			if w.element(x) == 7 && w.charge(x) == -1 && w.degree(x) == 1 {
				return simple("diazo")
			}
		}
	}
	return sub{}
}

func (w *writer) iminoPrefix(a, from int32, rest []int32) sub {
	if len(rest) == 0 {
		if w.hydrogens(a) == 1 {
			return simple("imino")
		}
		if r := w.around(a); len(r.doubles) == 2 {
			z := r.doubles[0]
			if z == from {
				z = r.doubles[1]
			}
			if w.element(z) == 7 && w.plain(z) && !w.inRing(z) {
				return sub{}
			}
		}
		return sub{}
	}
	y := rest[0]
	if w.element(y) == 7 && !w.inRing(y) && w.plain(y) && !w.nitroso(y) {
		return w.hydrazinyl(a, y, from, "ylidene")
	}
	s := w.prefix(y, a)
	return compound(w.linked(s, "imino"))
}

func (w *writer) hydrazinyl(a, z, from int32, ending string) sub {
	var list []affix
	for i, n := range []int32{a, z} {
		for _, nb := range w.m.Neighbors(int(n)) {
			if nb.Atom == from && n == a || nb.Atom == a || nb.Atom == z {
				continue
			}
			list = append(list, affix{locant: plainNumbers[i], rank: i, sub: w.prefix(nb.Atom, n)})
		}
	}
	if w.nitrogens(a) > 1+boolInt(w.element(from) == 7) || w.nitrogens(z) > 1 && w.threeNitrogens(z, a) {
		return sub{}
	}
	if len(list) == 0 {
		return simple("hydrazin" + ending)
	}
	if w.fail {
		return sub{}
	}
	return compound(prefixes(list, false) + "hydrazin-1-" + ending)
}

func (w *writer) threeNitrogens(z, a int32) bool {
	for _, nb := range w.m.Neighbors(int(z)) {
		if nb.Atom != a && w.element(nb.Atom) == 7 && !w.inRing(nb.Atom) && !w.nitroAt(nb.Atom) {
			return true
		}
	}
	return false
}

func (w *writer) phosphorusPrefix(a, from int32, order int) sub {
	if !w.plain(a) {
		return sub{}
	}
	r := w.around(a)
	if order == 2 && w.element(from) == 6 && w.degree(a)+r.hydrogens == 4 && len(r.doubles) == 1 {
		return w.radical(a, from, "phosphoranylidene")
	}
	if order != 1 {
		return sub{}
	}
	if len(r.doubles) == 0 && w.degree(a)+r.hydrogens == 3 {
		return w.radical(a, from, "phosphanyl")
	}
	if len(r.doubles) != 1 || w.element(r.doubles[0]) != 8 || !w.terminal(r.doubles[0]) || w.degree(a) != 4 {
		return sub{}
	}
	var list []affix
	acids := 0
	for _, x := range without(slices.Concat(r.carbons, r.singles), from) {
		if w.isHydroxy(x) {
			acids++
		}
		list = append(list, affix{sub: w.prefix(x, a)})
	}
	if acids == 2 {
		return simple("phosphono")
	}
	return w.radicalOf(list, "phosphoryl")
}
