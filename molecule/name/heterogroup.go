package name

import "shelfward/molecule"

func (w *writer) carbonicGroup(a, x, p, q int32) *group {
	ex := w.element(x)
	if !w.plain(x) || !w.plain(p) || !w.plain(q) {
		return nil
	}
	if w.element(p) != 7 && w.element(q) == 7 {
		p, q = q, p
	}
	ep, eq := w.element(p), w.element(q)
	amino := func(n int32) bool {
		return !w.inRing(n) && w.plainAmine(n, a) && w.hydrazinePartner(n, a) < 0
	}
	g := &group{used: []int32{a, x, p, q}}
	switch {
	case ep == 7 && eq == 7 && amino(p) && amino(q) && (ex == 8 || ex == 16):
		g.class, g.nitrogens = urea, []int32{p, q}
		g.chain = "urea"
		if ex == 16 {
			if w.degree(x) != 1 {
				return nil
			}
			g.chain = "thiourea"
		}
	case ep == 7 && eq == 7 && amino(p) && amino(q) && ex == 7 && !w.inRing(x):
		for _, nb := range w.m.Neighbors(int(x)) {
			if w.element(nb.Atom) != 6 {
				return nil
			}
		}
		g.class, g.nitrogens, g.chain = amidine, []int32{p, q, x}, "guanidine"
	case ep == 7 && eq == 8 && ex == 8 && amino(p):
		g.nitrogens = []int32{p}
		if w.hydrogens(q) == 1 {
			g.class, g.chain, g.word = carbamicAcid, "carbamic", "acid"
		} else if w.esterOxygen(q, a) {
			g.class, g.chain, g.esters = carbonEster, "carbamate", []int32{q}
		} else {
			return nil
		}
	case ep == 7 && eq == 16 && (ex == 8 || ex == 16) && amino(p) && w.esterOxygen(q, a):
		g.nitrogens, g.class, g.chain, g.esters = []int32{p}, carbonEster, "carbamothioate", []int32{q}
		if ex == 16 {
			g.chain = "carbamodithioate"
		}
	case ep == 7 && eq.IsHalogen() && ex == 8 && amino(p):
		g.nitrogens, g.class, g.chain, g.word = []int32{p}, carbonHalide, "carbamoyl", halideWord(eq)
	case ep == 8 && eq == 8 && ex == 8 && w.esterOxygen(p, a) && w.esterOxygen(q, a):
		g.class, g.chain, g.esters = carbonEster, "carbonate", []int32{p, q}
	case ex == 8 && (ep == 8 && eq.IsHalogen() && w.esterOxygen(p, a) || eq == 8 && ep.IsHalogen() && w.esterOxygen(q, a)):
		if ep != 8 {
			p, ep, eq = q, eq, ep
		}
		g.class, g.esters = carbonEster, []int32{p}
		g.chain = "carbono" + map[molecule.Element]string{9: "fluoridate", 17: "chloridate", 35: "bromidate", 53: "iodidate"}[eq]
	default:
		return nil
	}
	return g
}

func (w *writer) oxygenGroup(a int32) *group {
	if w.inRing(a) || w.degree(a) != 1 || w.hydrogens(a) != 1 || !w.plain(a) {
		return nil
	}
	host := w.m.Neighbors(int(a))[0].Atom
	switch w.element(host) {
	case 6:
		if w.acylCarbon(host) {
			return nil
		}
	case 7:
		if !w.inRing(host) || !w.plain(host) {
			return nil
		}
	case 14:
		return &group{class: hydroxy, forms: forms{chain: "ol"}, hosts: []int32{host}, used: []int32{a}}
	default:
		return nil
	}
	return &group{class: hydroxy, forms: forms{chain: "ol"}, hosts: []int32{host}, used: []int32{a}}
}

func (w *writer) sulfurGroup(a int32) *group {
	if w.inRing(a) || !w.plain(a) {
		return nil
	}
	r := w.around(a)
	if w.degree(a) == 1 && r.hydrogens == 1 && len(r.carbons) == 1 {
		if w.acylCarbon(r.carbons[0]) {
			return nil
		}
		return &group{class: thiol, forms: forms{chain: "thiol"}, hosts: r.carbons, used: []int32{a}}
	}
	for _, x := range r.doubles {
		if w.element(x) != 8 || !w.terminal(x) {
			return nil
		}
	}
	if len(r.carbons) != 1 || len(r.singles) != 1 || len(r.doubles) == 0 || len(r.doubles) > 2 {
		return nil
	}
	root := "sulfon"
	if len(r.doubles) == 1 {
		root = "sulfin"
	}
	y := r.singles[0]
	g := &group{hosts: r.carbons, used: append([]int32{a, y}, r.doubles...)}
	switch e := w.element(y); {
	case e == 8 && w.charge(y) == -1:
		g.class, g.chain = sulfonicEster, root+"ate"
	case !w.plain(y):
		return nil
	case e == 8 && w.hydrogens(y) == 1:
		g.class, g.chain, g.word = sulfonicAcid, root+"ic", "acid"
		if root == "sulfin" {
			g.class = sulfinicAcid
		}
	case e == 8 && w.esterOxygen(y, a):
		g.class, g.chain, g.esters = sulfonicEster, root+"ate", []int32{y}
	case e.IsHalogen():
		g.class, g.chain, g.word = sulfonylHalide, root+"yl", halideWord(e)
	case e == 7 && !w.inRing(y) && w.plainAmine(y, a) && w.hydrazinePartner(y, a) >= 0:
		z := w.hydrazinePartner(y, a)
		g.class, g.chain, g.nitrogens = hydrazide, root+"ohydrazide", []int32{y, z}
		g.used = append(g.used, z)
	case e == 7 && !w.inRing(y) && w.plainAmine(y, a):
		g.class, g.chain, g.nitrogens = sulfonamide, root+"amide", []int32{y}
	default:
		return nil
	}
	return g
}

func (w *writer) amineGroup(a int32) *group {
	oxide := int32(-1)
	if w.charge(a) == 1 && w.degree(a) == 4 {
		oxide = w.oxideOxygen(a)
	}
	if w.inRing(a) || oxide < 0 && !w.plain(a) || oxide < 0 && !w.plainAmine(a, -1) {
		return nil
	}
	r := w.around(a)
	if oxide >= 0 && len(r.carbons) == 3 {
		g := &group{class: amine, forms: forms{chain: "amine"}, hosts: r.carbons, used: []int32{a, oxide}, nitrogens: []int32{a}, oxide: true}
		return g
	}
	if len(r.carbons) == 0 || !w.plain(a) {
		return nil
	}
	var hosts []int32
	for _, x := range r.singles {
		switch w.element(x) {
		case 7:
			if !w.nitroAt(x) && !w.inRing(x) {
				return nil // hydrazine
			}
		case 8:
			if w.hydrogens(x) == 1 || !w.inRing(x) {
				return nil // hydroxylamine
			}
		}
	}
	for _, c := range r.carbons {
		if w.groupAcyl(c, a) {
			return nil
		}
		hosts = append(hosts, c)
	}
	for _, x := range r.singles {
		if w.element(x) == 16 && len(w.around(x).doubles) > 0 {
			return nil // sulfonamide
		}
	}
	return &group{class: amine, forms: forms{chain: "amine"}, hosts: hosts, used: []int32{a}, nitrogens: []int32{a}}
}

func (w *writer) groupAcyl(c, n int32) bool {
	if w.inRing(c) {
		return false
	}
	for _, nb := range w.m.Neighbors(int(c)) {
		if nb.Atom != n && w.m.Bond(int(nb.Bond)).Order > 1 && w.element(nb.Atom) != 6 {
			return true
		}
	}
	return false
}

func (w *writer) boronGroup(a int32) *group { return nil }
