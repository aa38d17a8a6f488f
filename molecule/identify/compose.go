package identify

import (
	"cmp"
	"slices"

	"shelfward/molecule/spectra"
)

// composition is a set of blocks and single atoms that makes up the formula.
type composition struct {
	blocks  []*buildingBlock // each block once per copy
	singles counts           // atoms outside blocks; singles[iH] is unused
	sp3     [4]int           // single carbons by hydrogens
	heteroH int              // hydrogens on single O, N and S
	rings   int              // rings formed by joining blocks
	best    float32          // best score of a structure sampled from it
	cost    float32          // how badly the evidence fits, from wide shift ranges alone
}

// composer lists compositions of a formula, cheapest first.
type composer struct {
	lib    *library
	d      *Data
	target counts
	unsat  int

	carbonPoints []float32 // observed lines, up field first
	carbonKind   []int
	protonPoints []protonPoint
	methyls      [2]int // sure and possible methyl groups from the 1H list
	scaledH      float32
	hasCarbonyl  int // infrared: +1 a strong band, -1 none though bands are listed, 0 not measured
	hasNitrile   int
	hasXH        int
	hasNitro     int

	out    []composition
	best   float32
	visits int
}

type protonPoint struct {
	at    float32
	n     float32
	mayEx bool
}

const (
	// keptCompositions bounds how many sets of blocks are tried, costWindow how far behind the first.
	keptCompositions = 600
	costWindow       = 9
	maxVisits        = 2_000_000
)

// compositions lists the sets of blocks for the formula, best first.
func (c *composer) compositions() []composition {
	c.best = 1e9
	c.observe()
	c.rings(0, c.target, c.unsat, composition{}, 0)
	slices.SortStableFunc(c.out, func(a, b composition) int { return cmp.Compare(a.cost, b.cost) })
	for i := range c.out {
		if i >= keptCompositions || c.out[i].cost > c.out[0].cost+costWindow {
			return c.out[:i]
		}
	}
	return c.out
}

// observe condenses the evidence to what compositions can be judged by.
func (c *composer) observe() {
	for i := len(c.d.Carbon) - 1; i >= 0; i-- {
		if x := c.d.Carbon[i]; x.Solvent == "" {
			c.carbonPoints = append(c.carbonPoints, float32(x.Mid()))
			c.carbonKind = append(c.carbonKind, x.Attached)
		}
	}
	ratio := 0.0
	for _, x := range c.d.Proton {
		if x.Solvent == "" {
			ratio += x.Ratio
		}
	}
	scale := 1.0
	if ratio > 0 {
		scale = max(1, float64(int(float64(c.target[iH])/ratio+0.25)))
	}
	for i := len(c.d.Proton) - 1; i >= 0; i-- {
		x := c.d.Proton[i]
		if x.Solvent != "" {
			continue
		}
		n := x.H
		if x.Ratio > 0 {
			n = x.Ratio * scale
		}
		c.scaledH += float32(n)
		c.protonPoints = append(c.protonPoints, protonPoint{float32(x.Mid()), float32(n), x.Shape == "br" || x.Shape == "s" || x.Shape == ""})
		whole := int(n+0.3) / 3
		if x.Low > 4.4 || whole == 0 {
			continue
		}
		switch sharp := x.Shape == "s" || x.Shape == "d" || x.Shape == "t"; {
		case sharp && int(n+0.3)%3 == 0:
			c.methyls[0] += whole
		default:
			c.methyls[1] += whole
		}
	}
	c.observeBands()
}

func (c *composer) observeBands() {
	if len(c.d.Bands) == 0 {
		return
	}
	c.hasCarbonyl, c.hasNitrile, c.hasXH, c.hasNitro = -1, -1, -1, -1
	for _, b := range c.d.Bands {
		mid := b.Mid()
		if b.Strength == spectra.Absent {
			continue
		}
		switch {
		case mid > 1630 && mid < 1850 && b.Strength != spectra.Weak:
			if b.Strength == spectra.Strong || c.hasCarbonyl < 0 {
				c.hasCarbonyl = 0
			}
			if b.Strength == spectra.Strong && mid > 1660 {
				c.hasCarbonyl = 1
			}
		case mid > 2195 && mid < 2285:
			c.hasNitrile = 1
		case b.High > 3150 && b.Low < 3700:
			c.hasXH = 1
		case mid > 1280 && mid < 1390 && b.Strength != spectra.Weak:
			c.hasNitro = max(c.hasNitro, 0)
		}
	}
}

// rings chooses ring systems from index i on.
func (c *composer) rings(i int, left counts, unsat int, comp composition, systems int) {
	if c.visits++; c.visits > maxVisits {
		return
	}
	c.functional(0, left, unsat, comp, 0)
	if systems >= 3 {
		return
	}
	for k := i; k < len(c.lib.rings); k++ {
		b := c.lib.rings[k]
		next, ok := left.minus(b.atoms, 1)
		if !ok || b.pi > unsat {
			continue
		}
		grown := comp
		grown.blocks = append(slices.Clip(comp.blocks), b)
		grown.cost += ringPrior(b)
		c.rings(k, next, unsat-b.pi, grown, systems+1)
	}
}

// ringPrior prefers common ring systems slightly.
func ringPrior(b *buildingBlock) float32 {
	switch b.name {
	case "benzene":
		return 0
	case "pyridine", "furan", "thiophene", "pyrrole", "indole", "naphthalene", "quinoline", "imidazole", "pyrazole", "coumarin", "benzofuran", "pyrimidine", "thiazole":
		return 0.8
	case "isobenzofuran", "isothiazole", "indolizine", "1,3,5-triazine":
		return 3
	}
	return 1.5
}

// functional chooses functional blocks from index i on.
func (c *composer) functional(i int, left counts, unsat int, comp composition, used int) {
	if c.visits++; c.visits > maxVisits {
		return
	}
	c.finish(left, unsat, comp)
	if used >= 4 {
		return
	}
	for k := i; k < len(c.lib.functional); k++ {
		b := c.lib.functional[k]
		next, ok := left.minus(b.atoms, 1)
		if !ok || b.pi > unsat {
			continue
		}
		if b.shows == "carbonyl" && c.hasCarbonyl < 0 || b.shows == "nitrile" && c.hasNitrile < 0 {
			continue
		}
		grown := comp
		grown.blocks = append(slices.Clip(comp.blocks), b)
		grown.cost += b.cost
		c.functional(k, next, unsat-b.pi, grown, used+1)
	}
}

// finish gives the remaining carbons their hydrogens and judges the result.
func (c *composer) finish(left counts, unsat int, comp composition) {
	if unsat > 4 {
		return
	}
	sites := 0
	for _, b := range comp.blocks {
		sites += b.sites
	}
	comp.rings = unsat
	comp.cost += 1.2 * float32(unsat)
	comp.singles = left
	carbons, hydrogens := left[iC], left[iH]
	maxHetero := min(left[iO]+2*left[iN]+left[iS], hydrogens, 5)
	for x := 0; x <= maxHetero; x++ {
		h := hydrogens - x
		if h > 3*carbons {
			continue
		}
		for n3 := max(0, 0); n3 <= carbons && 3*n3 <= h; n3++ {
			for n2 := 0; n2+n3 <= carbons && 3*n3+2*n2 <= h; n2++ {
				n1 := h - 3*n3 - 2*n2
				n0 := carbons - n3 - n2 - n1
				if n0 < 0 {
					continue
				}
				done := comp
				done.sp3, done.heteroH = [4]int{n0, n1, n2, n3}, x
				if !done.connects(sites) {
					continue
				}
				c.judge(done)
			}
		}
	}
}

// connects checks that the valences can join everything into one molecule with the stated rings.
func (m *composition) connects(sites int) bool {
	units := len(m.blocks)
	valence := sites
	for h, n := range m.sp3 {
		units += n
		valence += (4 - h) * n
	}
	units += m.singles[iO] + m.singles[iN] + m.singles[iS] + m.singles[iP] + m.singles[iF] + m.singles[iCl] + m.singles[iBr] + m.singles[iI] + m.singles[iSi]
	valence += 2*m.singles[iO] + 3*m.singles[iN] + 2*m.singles[iS] + 3*m.singles[iP] + m.singles[iF] + m.singles[iCl] + m.singles[iBr] + m.singles[iI] + 4*m.singles[iSi] - m.heteroH
	return valence == 2*(units-1+m.rings)
}

// judge scores a composition and keeps it if it can matter.
func (c *composer) judge(m composition) {
	cost := m.cost + c.bandsCost(&m)
	if cost > c.best+costWindow {
		return
	}
	if len(c.protonPoints) > 0 {
		cost += c.protonCost(&m)
		if cost > c.best+costWindow {
			return
		}
	}
	if len(c.carbonPoints) > 0 {
		cost += c.carbonCost(&m)
	}
	if cost > c.best+costWindow {
		return
	}
	m.cost = cost
	c.best = min(c.best, cost)
	c.out = append(c.out, m)
	if len(c.out) > 40*keptCompositions {
		slices.SortStableFunc(c.out, func(a, b composition) int { return cmp.Compare(a.cost, b.cost) })
		c.out = c.out[:keptCompositions]
	}
}

func (c *composer) bandsCost(m *composition) float32 {
	cost := float32(0)
	shown := map[string]bool{}
	hetero := m.heteroH
	double := false
	for _, b := range m.blocks {
		shown[b.shows] = true
		hetero += b.heteroH
		double = double || b.pi > 0 && !b.ringSystem
		if b.oxo > 0 {
			shown["carbonyl"] = true
		}
	}
	if c.hasCarbonyl > 0 && !shown["carbonyl"] {
		cost += 4
	}
	if c.hasNitrile > 0 && !shown["nitrile"] && !double {
		cost += 3
	}
	if c.hasXH > 0 && hetero == 0 {
		cost += 2
	}
	if c.hasXH < 0 && hetero > 0 {
		cost += 1.5
	}
	if c.hasNitro < 0 && shown["nitro"] {
		cost += 3
	}
	return cost
}

// alkylWindows are the shift ranges of single carbons by hydrogens, with and without heteroatoms in
// the molecule; wide, common practice.
var alkylWindows = [2][4]window{
	{{15, 72, 0}, {10, 66, 0}, {3, 62, 0}, {0, 35, 0}},
	{{18, 128, 0}, {12, 116, 0}, {5, 105, 0}, {-3, 62, 0}},
}

// carbonCost matches observed lines with carbons whose range holds them: earliest end first.
func (c *composer) carbonCost(m *composition) float32 {
	type slot struct {
		window
		kind int // hydrogens, -1 mixed
		used int
	}
	var slots []slot
	for _, b := range m.blocks {
		kind := -1
		for _, w := range b.carbon {
			slots = append(slots, slot{w, kind, 0})
		}
	}
	hetero := 0
	if m.singles[iO]+m.singles[iN]+m.singles[iS]+m.singles[iF]+m.singles[iCl]+m.singles[iBr]+m.singles[iI] > 0 || len(m.blocks) > 0 {
		hetero = 1
	}
	for h, n := range m.sp3 {
		if n > 0 {
			w := alkylWindows[hetero][h]
			w.n = n
			slots = append(slots, slot{w, h, 0})
		}
	}
	cost := float32(0)
	for i, at := range c.carbonPoints {
		best := -1
		for k := range slots {
			s := &slots[k]
			if s.used >= s.n || at < s.lo-1 || at > s.hi+1 {
				continue
			}
			if c.carbonKind[i] >= 0 && s.kind >= 0 && s.kind != c.carbonKind[i] {
				continue
			}
			if best < 0 || s.hi < slots[best].hi {
				best = k
			}
		}
		if best < 0 {
			cost += 4
			continue
		}
		slots[best].used++
	}
	for k := range slots {
		s := &slots[k]
		unseen := s.n - s.used
		if unseen == 0 {
			continue
		}
		each := float32(0.25)
		inside := 0
		for _, at := range c.carbonPoints {
			if at >= s.lo-1 && at <= s.hi+1 {
				inside++
			}
		}
		if inside == 0 {
			each = 2.5
		} else if s.used == 0 {
			each = 1
		}
		cost += each * float32(unseen)
	}
	return cost
}

// a methylene between two O stands near 6.0 (benzodioxoles), a methine with three groups near 6.8
var alkylProtons = [4]window{{}, {0.6, 7.4, 0}, {0.2, 6.3, 0}, {0.2, 4.4, 0}}

// protonCost matches observed hydrogens with the ranges of the blocks.
func (c *composer) protonCost(m *composition) float32 {
	type slot struct {
		lo, hi, left float32
		ex           bool
	}
	var slots []slot
	hetero := m.heteroH
	for _, b := range m.blocks {
		hetero += b.heteroH
		for _, w := range b.proton {
			if w.n > 0 {
				slots = append(slots, slot{w.lo, w.hi, float32(w.n), false})
			}
		}
	}
	for h := 1; h <= 3; h++ {
		if n := m.sp3[h]; n > 0 {
			w := alkylProtons[h]
			slots = append(slots, slot{w.lo, w.hi, float32(n * h), false})
		}
	}
	if hetero > 0 {
		slots = append(slots, slot{0.3, 17, float32(hetero), true})
	}
	cost := float32(0)
	for _, p := range c.protonPoints {
		need := p.n
		for need > 0.05 {
			best := -1
			for k := range slots {
				s := &slots[k]
				if s.left <= 0.05 || p.at < s.lo-0.15 || p.at > s.hi+0.15 {
					continue
				}
				if best < 0 || s.hi < slots[best].hi {
					best = k
				}
			}
			if best < 0 {
				cost += 1.5 * min(need, 4)
				break
			}
			take := min(need, slots[best].left)
			slots[best].left -= take
			need -= take
		}
	}
	for _, s := range slots {
		if s.ex {
			cost += 0.3 * s.left
		} else {
			cost += 1.2 * min(s.left, 5)
		}
	}
	if under := c.methyls[0] - m.sp3[3]; under > 0 {
		cost += 2.5 * float32(under)
	}
	if over := m.sp3[3] - c.methyls[0] - c.methyls[1]; over > 0 && c.scaledH > 0 {
		cost += 2 * float32(over)
	}
	return cost
}
