package reactions

import "math/bits"

// site is a way to lay product parts on the target: the match of each part, nil for one that is completed
// by a co-product.
type site []partMatch

// sites lists the ways to lay a non-empty set of product parts, disjoint, on the target.
func (t *Transform) sites(w *workspace, target *subject) []site {
	parts := t.part[backward]
	x := &w.finder
	*x = siteFinder{t: t, w: w, found: x.found[:0], out: x.out[:0]}
	any := false
	for i := range parts {
		found := parts[i].matches(w, target.Subject, nil)
		x.found = append(x.found, found)
		any = any || len(found) > 0
	}
	if !any {
		return nil
	}
	x.now = w.matches.take(len(parts))
	x.grow(0, 0)
	return x.out
}

// siteFinder grows sites part by part.
type siteFinder struct {
	t     *Transform
	w     *workspace
	found [][]partMatch // per part
	now   site
	out   []site
}

func (x *siteFinder) grow(part, laid int) {
	if len(x.out) >= maxProposals {
		return
	}
	if part == len(x.found) {
		if laid > 0 {
			x.out = append(x.out, x.w.matches.keep(x.now))
		}
		return
	}
	for _, m := range x.found[part] {
		if !overlapsLaid(x.now, m) {
			x.now[part] = m
			x.grow(part+1, laid+1)
			x.now[part] = nil
		}
	}
	if len(x.t.partChoices[part]) > 0 {
		x.grow(part+1, laid)
	}
}

func overlapsLaid(now site, m partMatch) bool {
	for _, old := range now {
		if meet(old, m) {
			return true
		}
	}
	return false
}

// meet says whether two matches share an atom.
func meet(m, n partMatch) bool {
	for _, a := range m {
		for _, b := range n {
			if a == b {
				return true
			}
		}
	}
	return false
}

// together returns the sets of several sites to undo at once: for an everywhere transform every subset of
// at most maxSites disjoint sites, or all of them where there are more.
func (t *Transform) together(sites []site) [][]site {
	if !t.Everywhere || len(sites) < 2 {
		return nil
	}
	var out [][]site
	for laid := 1; laid < 1<<len(t.part[backward]); laid++ {
		var alike []site
		for _, s := range sites {
			if s.parts() == laid {
				alike = append(alike, s)
			}
		}
		out = append(out, setsOf(apart(alike))...)
	}
	return out
}

// parts returns the set of parts laid, as bits.
func (s site) parts() int {
	set := 0
	for part, m := range s {
		if m != nil {
			set |= 1 << part
		}
	}
	return set
}

// apart picks, in order, sites that do not overlap.
func apart(sites []site) []site {
	var out []site
next:
	for _, s := range sites {
		for _, old := range out {
			for _, m := range s {
				if overlapsLaid(old, m) {
					continue next
				}
			}
		}
		out = append(out, s)
	}
	return out
}

// setsOf returns every subset of two or more sites, or all at once where there are many.
func setsOf(sites []site) [][]site {
	if len(sites) > maxSites {
		return [][]site{sites}
	}
	var out [][]site
	for set := 1; set < 1<<len(sites); set++ {
		if bits.OnesCount(uint(set)) < 2 {
			continue
		}
		var some []site
		for i := range sites {
			if set&(1<<i) != 0 {
				some = append(some, sites[i])
			}
		}
		out = append(out, some)
	}
	return out
}
