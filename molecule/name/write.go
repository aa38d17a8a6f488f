package name

import (
	"slices"
	"strings"
)

// write puts the name of p together from its named branches.
func (w *writer) write(p *plan, list []affix) string {
	bare := p.bare(w, list)
	base := p.baseName(w, bare)
	tail := ""
	if p.attach >= 0 {
		base = p.freeValence(w, base, bare)
	} else {
		base, tail = p.withSuffix(w, base, bare)
	}
	if i := p.hydro.indicated; i != 0 {
		base = joined(p.locantList(i.list())+"H-", "")
		base += p.coreName(w, bare)
		if p.attach >= 0 {
			base = p.freeValence(w, base, bare)
		} else {
			base, tail = p.withSuffix(w, base, bare)
		}
	}
	if h := p.hydro.hydro; h != 0 {
		word := multiplier(h.size()) + "hydro"
		if !p.hydro.all {
			word = p.locantList(h.list()) + "-" + word
		}
		base = joined(word, base)
	}
	// Brackets around a parent are not needed: locants keep the prefixes apart.
	name := joined(prefixes(list, bare), base) + tail
	name = w.esterWords(p, name)
	for _, g := range p.places {
		if g.oxide {
			if len(p.places) > 1 {
				w.fail = true
			}
			name += " N-oxide"
		}
	}
	if len(p.oxides) > 0 {
		if p.attach >= 0 || strings.Contains(tail, " ") {
			w.fail = true
			return ""
		}
		name += " " + strings.Join(p.oxides, ",") + "-" + multiplier(len(p.oxides)) + "oxide"
	}
	return name
}

// locantList joins the locants of positions, with H behind each but the last where they are indicated.
func (p *plan) locantList(at []int) string {
	words := make([]string, len(at))
	for i, x := range at {
		words[i] = p.locants[x]
	}
	if len(at) > 1 && slices.Equal(at, p.hydro.indicated.list()) && p.hydro.indicated != 0 {
		return strings.Join(words, "H,")
	}
	return strings.Join(words, ",")
}

// bare says whether all locants of the skeleton are left out (P-31.1.4.3.4 and P-31.1.4.2.4).
func (p *plan) bare(w *writer, list []affix) bool {
	onNitrogen, onSkeleton := 0, 0
	for _, b := range p.branches {
		if b.nitrogen > 0 {
			onNitrogen++
		} else {
			onSkeleton++
		}
	}
	substitutable := false
	for _, g := range p.places {
		substitutable = substitutable || len(g.nitrogens) > 0 || g.chain == "amido" || g.chain == "sulfonamido"
	}
	if onNitrogen > 0 {
		return false
	}
	total := onSkeleton + len(p.places)
	if p.attach >= 0 {
		total++
	}
	switch {
	case p.group != nil:
		return total == 1
	case p.base == "phosphane" || p.base == "phosphorane":
		return true
	case p.base == "hydroxylamine":
		return false
	case p.base != "":
		return len(p.order) == 1 || total <= 1 || p.base == "diazene" && p.whole(w, list)
	case p.ring != nil:
		if p.ring.equal && total <= 1 && len(p.enes)+len(p.ynes) <= boolInt(total == 0) && p.hydro.hydro == 0 && p.hydro.indicated == 0 && p.hydro.added == 0 {
			return true
		}
		return p.whole(w, list)
	case len(p.order) == 1:
		return !substitutable || onSkeleton == 0
	case len(p.order) == 2 && len(p.places) == 1 && p.acidEnd(0) && len(p.enes)+len(p.ynes) == 0:
		return !substitutable || onSkeleton == 0
	case len(p.order) == 2 && total <= 1:
		return true
	case len(p.order) == 2 && len(p.places) == 1 && onSkeleton == 0:
		return true
	}
	return p.whole(w, list)
}

// whole says whether every hydrogen of the skeleton is replaced by the same prefix and nothing else is there.
func (p *plan) whole(w *writer, list []affix) bool {
	if len(p.places) > 0 || p.attach >= 0 || len(list) < 2 || list[0].compound || len(p.enes)+len(p.ynes) > 0 || p.hydro.hydro|p.hydro.indicated != 0 {
		return false
	}
	for _, a := range p.order {
		if w.hydrogens(a) > 0 {
			return false
		}
	}
	for _, x := range list {
		if x.name != list[0].name {
			return false
		}
	}
	return isHaloPrefix(list[0].name) || p.base == "diazene"
}

func isHaloPrefix(s string) bool {
	return s == "fluoro" || s == "chloro" || s == "bromo" || s == "iodo"
}

// acidEnd says whether the group k is one that ends a chain with its own carbon.
func (p *plan) acidEnd(k int) bool { return p.places[k].within && p.within }

// baseName is the parent hydride: "hexane", "hex-2-ene", "pyridine", "hydrazine".
func (p *plan) baseName(w *writer, bare bool) string {
	if p.hydro.indicated != 0 {
		return ""
	}
	return p.coreName(w, bare)
}

func (p *plan) coreName(w *writer, bare bool) string {
	switch {
	case p.group != nil:
		return p.group.chain
	case p.base != "":
		return p.base
	case p.ring == nil:
		return p.hydrideName(stem(len(p.order)), bare)
	case p.ring.kind == ringAlkane:
		return p.hydrideName(p.ring.name, bare)
	case p.saturated:
		return p.ring.saturated
	case p.ring.biphenyl && (p.attach >= 0 || len(p.places) > 0):
		return "[" + biphenylName + "]"
	}
	return p.ring.name
}

// hydrideName adds ane, ene, yne with their locants.
func (p *plan) hydrideName(stem string, bare bool) string {
	if len(p.enes)+len(p.ynes) == 0 {
		return stem + "ane"
	}
	part := func(at []int, ending string) {
		if len(at) == 0 {
			return
		}
		if strings.HasSuffix(stem, "en") || strings.HasSuffix(stem, "a") {
		} else if len(at) > 1 {
			stem += "a"
		}
		if bare || p.ring == nil && len(p.order) == 2 {
			stem += multiplier(len(at)) + ending
			return
		}
		stem += "-" + p.bondLocants(at) + "-" + multiplier(len(at)) + ending
	}
	part(p.enes, "en")
	part(p.ynes, "yn")
	return stem + "e"
}

// bondLocants writes the locants of multiple bonds, with the second in brackets where it does not follow.
func (p *plan) bondLocants(at []int) string {
	words := make([]string, len(at))
	for i, x := range at {
		words[i] = p.locants[x]
		if y := p.partner(at, i); y >= 0 && y != x+1 {
			words[i] += "(" + p.locants[y] + ")"
		}
	}
	return strings.Join(words, ",")
}

// partner is the other end of the multiple bond number i of at; -1 in chains, where it follows.
func (p *plan) partner(at []int, i int) int {
	if y, ok := p.partnerOf[at[i]]; ok {
		return y
	}
	return -1
}

// freeValence makes the substituent name of base: yl or ylidene at the attached atom.
func (p *plan) freeValence(w *writer, base string, bare bool) string {
	at := 0
	for i, a := range p.order {
		if a == p.attach {
			at = i
		}
	}
	ending := "yl"
	if p.double {
		ending = "ylidene"
	}
	if base == "benzene" {
		return "phen" + ending
	}
	saturated := len(p.enes)+len(p.ynes) == 0
	monocycle := p.ring != nil && p.ring.kind == ringAlkane && p.ring.equal
	if saturated && at == 0 && (p.ring == nil && p.base == "" || monocycle) {
		return strings.TrimSuffix(base, "ane") + ending
	}
	if bare || p.ring == nil && p.base == "" && len(p.order) == 2 && at == 0 {
		return addSuffix(base, "", ending)
	}
	locant := p.locants[at]
	if a := p.hydro.added; a != 0 {
		locant += "(" + p.addedList(a) + ")"
	}
	return addSuffix(base, locant, ending)
}

func (p *plan) addedList(a positions) string {
	words := make([]string, 0, a.size())
	for _, x := range a.list() {
		words = append(words, p.locants[x]+"H")
	}
	return strings.Join(words, ",")
}

// withSuffix adds the principal groups to base; tail is the word behind it.
func (p *plan) withSuffix(w *writer, base string, bare bool) (name, tail string) {
	if len(p.places) == 0 {
		return base, ""
	}
	g := p.places[0].group
	if g.word != "" {
		tail = " " + g.word
		if strings.HasSuffix(g.chain, "-") || strings.HasSuffix(g.side, "-") {
			tail = g.word
		}
		if g.word != "acid" && len(p.places) > 1 {
			tail = " " + multiplier(len(p.places)) + g.word
		}
	}
	if p.group != nil {
		return base, tail
	}
	if r := p.retainedEnd(w, base); r != "" {
		return r, tail
	}
	if p.acidEnd(0) {
		return addSuffix(base, "", multiplier(len(p.places))+g.chain), tail
	}
	form := g.side
	if form == "" {
		form = g.chain
	}
	locants := ""
	if !bare && !p.soleSuffix(w) {
		words := make([]string, len(p.places))
		for i, x := range p.places {
			words[i] = p.locants[x.at]
		}
		locants = strings.Join(words, ",")
		if a := p.hydro.added; a != 0 {
			locants += "(" + p.addedList(a) + ")"
		}
	}
	return addSuffix(base, locants, multiplied(len(p.places), form)), tail
}

// multiplied puts the multiplying prefix before a suffix: "diol", "tetrol" (P-16.7.1).
func multiplied(n int, form string) string {
	m := multiplier(n)
	if form[0] == 'o' || form[0] == 'a' {
		m = strings.TrimSuffix(m, "a")
	}
	return m + form
}

// soleSuffix says whether the suffix needs no locant though others are given: methanamine, ethanamine
// with substituents on nitrogen only, benzene with one side group.
func (p *plan) soleSuffix(w *writer) bool {
	onSkeleton := 0
	for _, b := range p.branches {
		if b.nitrogen == 0 {
			onSkeleton++
		}
	}
	switch {
	case p.base != "":
		return len(p.order) == 1
	case p.ring != nil:
		return p.ring.equal && len(p.places) == 1 && onSkeleton == 0 && len(p.enes)+len(p.ynes) == 0
	}
	return len(p.order) == 1 || len(p.order) == 2 && len(p.places) == 1 && onSkeleton == 0
}

// retainedEnd gives acids and their derivatives with retained names: acetic, benzoic; phenol, aniline
// (P-65.1.1, P-66, P-63.1, P-62.2.1).
func (p *plan) retainedEnd(w *writer, base string) string {
	g := p.places[0].group
	if p.acidEnd(0) && p.ring == nil && len(p.enes)+len(p.ynes) == 0 {
		root := ""
		switch {
		case len(p.order) == 1 && len(p.places) == 1:
			root = "form"
		case len(p.order) == 2 && len(p.places) == 1:
			root = "acet"
		case len(p.order) == 2 && len(p.places) == 2 && (g.chain == "oic" || g.chain == "oate" || g.chain == "oyl"):
			root = "oxal"
		}
		if root == "" {
			return ""
		}
		switch g.chain {
		case "oic", "oate", "oyl":
			return root + g.chain[1:]
		case "amide", "amido":
			return root + g.chain
		case "nitrile", "hydrazide":
			return root + "o" + g.chain
		case "al":
			return root + "aldehyde"
		}
		return ""
	}
	if base != "benzene" || len(p.places) != 1 {
		return ""
	}
	switch {
	case g.side == "carboxylic", g.side == "carboxylate", g.side == "carboxamide", g.side == "carboxamido":
		return "benz" + map[string]string{"carboxylic": "oic", "carboxylate": "oate", "carboxamide": "amide", "carboxamido": "amido"}[g.side]
	case g.side == "carbonyl":
		return "benzoyl"
	case g.side == "carbonitrile":
		return "benzonitrile"
	case g.side == "carbaldehyde":
		return "benzaldehyde"
	case g.side == "carbohydrazide":
		return "benzohydrazide"
	case g.class == hydroxy && g.chain == "ol":
		return "phenol"
	case g.class == amine && g.chain == "amine":
		return "aniline"
	}
	return ""
}

// esterWords puts the alkyl words of esters before the name.
func (w *writer) esterWords(p *plan, name string) string {
	var list []affix
	for _, g := range p.places {
		for _, o := range g.esters {
			for _, nb := range w.m.Neighbors(int(o)) {
				if nb.Atom == g.key || slices.Contains(g.used, nb.Atom) {
					continue
				}
				x := affix{rank: g.at, sub: w.prefix(nb.Atom, o)}
				if p.group == nil {
					x.locant = p.locants[g.at]
				}
				x.acid = w.element(o)
				x.other = g.thionyl(w)
				list = append(list, x)
			}
		}
	}
	if len(list) == 0 {
		return name
	}
	groups := grouped(list)
	words := make([]string, 0, len(groups))
	for _, g := range groups {
		word := g[0].name
		switch {
		case len(g) > 1 && g[0].compound:
			word = groupMultiplier(len(g)) + enclose(word)
		case len(g) > 1 && strings.HasPrefix(word, "tert-"):
			word = multiplier(len(g)) + "-" + word
		case len(g) > 1:
			word = multiplier(len(g)) + word
		}
		if len(groups) > 1 && g[0].locant != "" {
			at := make([]string, len(g))
			for i, x := range g {
				at[i] = x.locant
			}
			if len(g) == 1 && g[0].compound && locantStart(word) {
				word = enclose(word)
			}
			word = strings.Join(at, ",") + "-" + word
		}
		if mark := g[0].atomMark(); mark != "" {
			if len(list) > 1 {
				w.fail = true
			}
			word = mark + "-" + word
		}
		words = append(words, word)
	}
	return strings.Join(words, " ") + " " + name
}

// thionyl says whether an ester has sulfur in either place, so that O or S must be said.
func (g *group) thionyl(w *writer) bool {
	for _, a := range g.used {
		if w.element(a) == 16 && a != g.key {
			return true
		}
	}
	return false
}

// atomMark is "S" or "O" where a sulfur ester needs it.
func (x affix) atomMark() string {
	if !x.other {
		return ""
	}
	if x.acid == 16 {
		return "S"
	}
	return "O"
}
