package name

import "strings"

func (p *parser) elided(i, end int) []multiple {
	var list []multiple
	for n := 4; n < 10; n++ {
		w := strings.TrimSuffix(multiplier(n), "a")
		if strings.HasPrefix(p.s[i:end], w) && i+len(w) < end && strings.IndexByte("oa", p.s[i+len(w)]) >= 0 {
			list = append(list, multiple{n, len(w)})
		}
	}
	return list
}

func (p *parser) endings(h found, end int, m mode) []found {
	var list []found
	s := h.skeleton
	if h.parent != nil || s.mancude || s.complete {
		return p.suffixesAt(h, end, m)
	}
	// A stem followed directly by yl.
	if m == asRadical {
		for _, e := range []struct {
			text  string
			order int
		}{{"ylidene", 2}, {"yl", 1}} {
			if strings.HasPrefix(p.s[h.end:end], e.text) {
				u := *h.unit
				u.free, u.order = []string{s.locants[0]}, e.order
				list = append(list, found{&u, h.end + len(e.text), 0})
			}
		}
	}
	if strings.HasPrefix(p.s[h.end:end], "an") {
		list = append(list, p.suffixesAt(found{h.unit, h.end + 2, 0}, end, m)...)
	}
	for _, f := range p.multipleBonds(h, end) {
		list = append(list, p.suffixesAt(f, end, m)...)
		for _, g := range p.multipleBonds(f, end) {
			list = append(list, p.suffixesAt(g, end, m)...)
		}
	}
	return list
}

func (p *parser) multipleBonds(h found, end int) []found {
	var list []found
	i := h.end
	starts := []int{i}
	if i < end && p.s[i] == 'a' {
		starts = append(starts, i+1)
	}
	for _, j := range starts {
		var bonds []multipleBond
		k := j
		if k < end && p.s[k] == '-' {
			bonds, k = p.bondLocants(k+1, end)
			if bonds == nil {
				continue
			}
		}
		for _, mult := range p.multipliers(k, end) {
			e := k + mult.length
			order := 0
			if strings.HasPrefix(p.s[e:end], "en") {
				order = 2
			} else if strings.HasPrefix(p.s[e:end], "yn") {
				order = 3
			}
			if order == 0 || bonds != nil && len(bonds) != mult.count {
				continue
			}
			u := *h.unit
			u.multiple = append([]multipleBond(nil), h.multiple...)
			if bonds == nil {
				for range mult.count {
					u.multiple = append(u.multiple, multipleBond{order: order})
				}
			}
			for _, b := range bonds {
				b.order = order
				u.multiple = append(u.multiple, b)
			}
			list = append(list, found{&u, e + 2, 0})
		}
	}
	return list
}

func (p *parser) bondLocants(i, end int) ([]multipleBond, int) {
	var list []multipleBond
	for {
		j := i
		for j < end && (p.s[j] >= '0' && p.s[j] <= '9' || p.s[j] >= 'a' && p.s[j] <= 'z' && j > i && p.s[j-1] >= '0' && p.s[j-1] <= '9') {
			j++
		}
		if j == i {
			return nil, i
		}
		b := multipleBond{from: p.s[i:j]}
		if j < end && p.s[j] == '(' {
			c := p.closing[j]
			b.to = p.s[j+1 : c]
			j = c + 1
		}
		list = append(list, b)
		if j < end && p.s[j] == ',' {
			i = j + 1
			continue
		}
		if j < end && p.s[j] == '-' {
			return list, j + 1
		}
		return nil, i
	}
}

func (p *parser) suffixesAt(h found, end int, m mode) []found {
	var list []found
	words := loaded().words
	starts := []int{h.end}
	if h.end < end && p.s[h.end] == 'e' {
		starts = append(starts, h.end+1)
		if m == asMolecule {
			list = append(list, found{h.unit, h.end + 1, 0})
		}
	}
	if m == asMolecule {
		list = append(list, found{h.unit, h.end, 0})
	}
	for _, i := range starts {
		var locants, added []string
		j := i
		if i < end && p.s[i] == '-' {
			locants, added, j = p.suffixLocants(i+1, end)
			if locants == nil {
				continue
			}
		}
		for _, mult := range append(p.multipliers(j, end), p.elided(j, end)...) {
			k := j + mult.length
			if locants != nil && len(locants) != mult.count {
				continue
			}
			for _, n := range suffixNamesAt(words, p.s[k:end]) {
				for _, t := range words.suffixes[n.word] {
					if t.radical != (m == asRadical) || !p.fits(t) {
						continue
					}
					u := *h.unit
					u.suffixes = append(append([]suffix(nil), h.suffixes...), suffix{t, locants, mult.count})
					u.added = added
					u.order = 1
					list = append(list, found{&u, k + n.length, 0})
				}
			}
			if m != asRadical {
				continue
			}
			for _, e := range []struct {
				text  string
				order int
			}{{"ylidene", 2}, {"yl", 1}} {
				if strings.HasPrefix(p.s[k:end], e.text) {
					u := *h.unit
					u.free, u.order, u.added = locants, e.order, added
					if locants == nil {
						u.free = make([]string, mult.count)
					}
					list = append(list, found{&u, k + len(e.text), 0})
				}
			}
		}
	}
	return list
}

type suffixName struct {
	word   string
	length int
}

func suffixNamesAt(words *vocabulary, s string) []suffixName {
	var list []suffixName
	for _, n := range at(&words.suffixNames, s) {
		list = append(list, suffixName{n, len(n)})
	}
	return list
}

func (p *parser) suffixLocants(i, end int) (locants, added []string, j int) {
	j = i
	for j < end && p.s[j] != '-' && p.s[j] != '(' {
		j++
	}
	if j == i || j >= end {
		return nil, nil, i
	}
	for _, l := range strings.Split(p.s[i:j], ",") {
		if l == "" || l[0] < '0' || l[0] > '9' {
			return nil, nil, i
		}
		locants = append(locants, l)
	}
	if p.s[j] == '(' {
		c := p.closing[j]
		for _, l := range strings.Split(p.s[j+1:c], ",") {
			if !strings.HasSuffix(l, "H") {
				return nil, nil, i
			}
			added = append(added, strings.TrimSuffix(l, "H"))
		}
		j = c + 1
	}
	if j >= end || p.s[j] != '-' {
		return nil, nil, i
	}
	return locants, added, j + 1
}
