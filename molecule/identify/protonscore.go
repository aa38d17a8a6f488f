package identify

import (
	"math"

	"shelfward/molecule/spectra"
)

// half is a predicted set of hydrogens as it takes part in the assignment: a whole signal, or one
// hydrogen of a CH2 whose two may differ.
type half struct {
	sig    *spectra.ProtonSignal
	h      float32
	spread float32
	at     int // row in the table of fits
}

const (
	protonPerH      = 1.3 // an integral off by one hydrogen
	protonExtra     = 4.0 // an observed signal that nothing explains
	protonUnseen    = 3.0 // a predicted signal that is not there, besides its hydrogens
	protonTogether  = 0.15
	protonCoincide  = 0.8 // two unlike sets under one sharp shape
	protonExchanged = 0.3
)

// protonCost assigns predicted sets of hydrogens to observed signals. Exchanging hydrogens are
// placed first, in every way that makes sense; the others fill the signals in shift order.
func (s *scorer) protonCost(fine bool) float32 {
	total := float32(0)
	exch := s.exch[:0]
	s.halfs = s.halfs[:0]
	for i := range s.p.Proton {
		g := &s.p.Proton[i]
		total += float32(g.Hydrogens)
		if g.Exchanging {
			exch = append(exch, g)
			continue
		}
		if g.MaySplit {
			n := float32(g.Hydrogens) / 2
			sp := max(g.SpreadPPM, 0.28)
			s.halfs = append(s.halfs, half{g, n, sp, 0}, half{g, n, sp, 0})
			continue
		}
		s.halfs = append(s.halfs, half{g, float32(g.Hydrogens), g.SpreadPPM, 0})
	}
	s.scaleIntegrals(total, exch)
	s.fillFits()
	s.exch = exch
	s.place, s.bestPlace = s.place[:0], s.bestPlace[:0]
	best := float32(math.Inf(1))
	s.placeExchanging(exch, 0, 0, fine, &best)
	return best
}

// pairFit is how one set suits one signal: by place, by shape, and by shape as one of several there.
type pairFit struct{ shift, shape float32 }

// fillFits compares every set with every signal once.
func (s *scorer) fillFits() {
	n, k := len(s.halfs), len(s.proton)
	if cap(s.fits) < n*k {
		s.fits = make([]pairFit, n*k)
	}
	s.fits = s.fits[:n*k]
	for i := range s.halfs {
		g := &s.halfs[i]
		g.at = i
		if i > 0 && s.halfs[i-1].sig == g.sig {
			copy(s.fits[i*k:(i+1)*k], s.fits[(i-1)*k:i*k])
			continue
		}
		wide := logRatio(g.spread, protonSpread)
		for j := range s.proton {
			x := &s.proton[j]
			f := pairFit{protonOff(x, g) + wide, 7}
			if f.shift < 14 {
				f.shape = shapeFit(x, g.sig)
			}
			s.fits[i*k+j] = f
		}
	}
}

// scaleIntegrals sets the capacity of every observed signal in hydrogens of the candidate.
func (s *scorer) scaleIntegrals(total float32, exch []*spectra.ProtonSignal) {
	s.caps = s.caps[:0]
	scale := float32(1)
	if !s.withH && s.ratioSum > 0 {
		hidden := float32(0)
		for _, g := range exch {
			hidden += float32(g.Hydrogens)
		}
		scale = total / float32(s.ratioSum)
		bestOff := float32(1)
		// a whole multiple that leaves at most the exchanging hydrogens unseen
		for k := 1; k <= 12; k++ {
			seen := float32(k) * float32(s.ratioSum)
			if seen <= total+0.05 && seen >= total-hidden-0.05 {
				if off := total - seen; off < bestOff+hidden {
					scale, bestOff = float32(k), off
				}
			}
		}
	}
	for i := range s.proton {
		x := &s.proton[i]
		switch {
		case x.H > 0:
			s.caps = append(s.caps, float32(x.H))
		case x.Ratio > 0:
			s.caps = append(s.caps, float32(x.Ratio)*scale)
		default:
			s.caps = append(s.caps, -1) // unknown
		}
	}
}

// placeExchanging tries each exchanging set on the signals near its range, or unseen.
func (s *scorer) placeExchanging(exch []*spectra.ProtonSignal, at int, sum float32, fine bool, best *float32) {
	if sum >= *best {
		return
	}
	if at == len(exch) {
		if c := sum + s.fillSignals(fine); c < *best {
			*best = c
			s.bestPlace = append(s.bestPlace[:0], s.place...)
		}
		return
	}
	g := exch[at]
	tried := 0
	for j := range s.proton {
		x := &s.proton[j]
		mid := float32(x.Mid())
		off := max(g.LowPPM-float32(x.High), float32(x.Low)-g.HighPPM, 0)
		if off > 2.5 || tried >= 4 || s.caps[j] >= 0 && s.caps[j] < float32(g.Hydrogens)*0.7 {
			continue
		}
		tried++
		c := off*off*0.8 + protonExchanged
		if mid < g.LowPPM || mid > g.HighPPM {
			c += 0.5
		}
		alone := s.caps[j] >= 0 && s.caps[j] < float32(g.Hydrogens)+0.5
		switch {
		case x.Shape == "br":
			c -= 0.5
		case x.Shape == "m" && !alone:
		case x.Shape == "s" || x.Shape == "":
			c += 0.2
		case alone:
			c += 1.5
		}
		old := s.caps[j]
		if old >= 0 {
			s.caps[j] -= float32(g.Hydrogens)
		} else {
			s.caps[j] = 0
		}
		s.place = append(s.place, j)
		s.placeExchanging(exch, at+1, sum+c, fine, best)
		s.place = s.place[:len(s.place)-1]
		s.caps[j] = old
	}
	unseen := float32(-math.Log(float64(1.05-g.Seen))) * 0.9
	s.place = append(s.place, -1)
	s.placeExchanging(exch, at+1, sum+max(unseen, 0.1), fine, best)
	s.place = s.place[:len(s.place)-1]
}

// fillSignals aligns the sets on carbon with the signals; with fine, neighbours in the order are
// exchanged as long as that helps.
func (s *scorer) fillSignals(fine bool) float32 {
	c := s.alignProtons()
	if !fine {
		return c
	}
	for improved, rounds := true, 0; improved && rounds < 3; rounds++ {
		improved = false
		for i := 0; i+1 < len(s.halfs); i++ {
			a, b := &s.halfs[i], &s.halfs[i+1]
			if a.sig == b.sig || a.sig.MeanPPM-b.sig.MeanPPM > 1.5*(a.spread+b.spread) {
				continue
			}
			s.halfs[i], s.halfs[i+1] = s.halfs[i+1], s.halfs[i]
			if now := s.alignProtons(); now < c-1e-4 {
				c, improved = now, true
			} else {
				s.halfs[i], s.halfs[i+1] = s.halfs[i+1], s.halfs[i]
			}
		}
	}
	return c
}

// alignProtons is a dynamic program over sets (in order) and signals (in shift order): each signal
// takes a run of sets.
func (s *scorer) alignProtons() float32 {
	n, k := len(s.halfs), len(s.proton)
	w := n + 1
	need := (k + 1) * w
	if cap(s.cost) < need {
		s.cost, s.back = make([]float32, need), make([]int8, need)
	}
	cost, back := s.cost[:need], s.back[:need]
	cost[0] = 0
	for i := 1; i <= n; i++ {
		cost[i] = cost[i-1] + protonUnseen + protonPerH*s.halfs[i-1].h
	}
	for j := 1; j <= k; j++ {
		x := &s.proton[j-1]
		capacity := s.caps[j-1]
		for i := 0; i <= n; i++ {
			// no set: an extra signal, unless an exchanging one filled it
			best, how := cost[(j-1)*w+i]+s.emptySignal(capacity), int8(0)
			if i > 0 { // the set before this place is seen nowhere
				if c := cost[j*w+i-1] + protonUnseen + protonPerH*s.halfs[i-1].h; c < best {
					best, how = c, -1
				}
			}
			sum, shiftCost, shapeCost := float32(0), float32(0), float32(0)
			for r := i - 1; r >= 0; r-- {
				g := &s.halfs[r]
				sum += g.h
				if capacity >= 0 && sum > capacity+3.5 {
					break
				}
				fit := &s.fits[g.at*k+j-1]
				shiftCost += fit.shift
				if shiftCost > 50 {
					break
				}
				if i-r == 1 {
					shapeCost = fit.shape
				} else {
					shapeCost = s.runShape(x, j-1, r, i)
				}
				c := cost[(j-1)*w+r] + shiftCost + shapeCost
				if capacity >= 0 {
					c += min(protonPerH*abs(sum-capacity), 9)
				}
				if c < best {
					best, how = c, int8(r+1)
				}
			}
			cost[j*w+i], back[j*w+i] = best, how
		}
	}
	return cost[k*w+n]
}

func abs(x float32) float32 { return max(x, -x) }

func (s *scorer) emptySignal(capacity float32) float32 {
	switch {
	case capacity < 0:
		return protonExtra
	case capacity < 0.3:
		return 0
	}
	return protonExtra + 0.5*protonPerH*min(capacity, 6)
}

// protonOff compares the place of a set with a signal or range.
func protonOff(x *Proton, g *half) float32 {
	off := float32(0)
	mean := g.sig.MeanPPM
	if mean < float32(x.Low) {
		off = float32(x.Low) - mean
	} else if mean > float32(x.High) {
		off = mean - float32(x.High)
	}
	return tailed(off / g.spread)
}

// runShape judges a signal that holds the sets r to i-1.
func (s *scorer) runShape(x *Proton, j, r, i int) float32 {
	k := len(s.proton)
	n := float32(i - r - 1)
	switch x.Shape {
	case "m", "", "br":
		return protonTogether * n
	}
	// the two hydrogens of one CH2 under one shape are simply a CH2
	same := true
	for q := r + 1; q < i; q++ {
		same = same && s.halfs[q].sig == s.halfs[r].sig
	}
	if same {
		return s.fits[s.halfs[r].at*k+j].shape
	}
	c := float32(0)
	for q := r; q < i; q++ {
		if s.halfs[q].sig.Aromatic {
			c += 0.25 // strongly coupled rings collapse
			continue
		}
		c += 0.5 * s.fits[s.halfs[q].at*k+j].shape
	}
	return c + protonCoincide*n
}

// shapeFit compares an observed shape with the couplings of one set.
func shapeFit(x *Proton, g *spectra.ProtonSignal) float32 {
	var want [24]float32 // main couplings, one entry each
	var alt [24]float32
	n, small := 0, 0
	for _, k := range g.Couplings[:g.NumCouplings] {
		for range k.N {
			if k.Small {
				small++
			} else if n < len(want) {
				want[n], alt[n] = k.JHz, k.AltHz
				n++
			}
		}
	}
	switch x.Shape {
	case "":
		return 0
	case "m":
		switch {
		case g.Aromatic || n >= 4:
			return 0
		case n >= 2:
			return 0.4
		case n == 1 || small > 0:
			return 0.9
		}
		return 2
	case "br":
		switch {
		case n >= 3 || small > 0:
			return 0.2
		case n == 0:
			return 0.7
		}
		return 0.9
	}
	lines := x.lines
	seen := 0
	for _, k := range lines {
		seen += k
	}
	if seen > n { // long-range couplings may show
		extra := seen - n
		usable := min(extra, small)
		c := 0.35*float32(usable) + 1.7*float32(extra-usable)
		if usable > 0 && len(x.J) > 0 && n == 0 && x.J[0] > 4.5 {
			c += 2.5 // too large for a long-range coupling
		}
		return min(c+couplingFit(x, lines, want[:n], alt[:n]), 7)
	}
	missing := float32(n - seen)
	c := 1.6 * missing
	if g.Aromatic {
		c = 1.3 * missing
	}
	if seen == 0 && n > 0 {
		c += 0.8
	}
	return min(c+couplingFit(x, lines, want[:n], alt[:n]), 7)
}

// couplingFit compares the J values given with those expected, largest first.
func couplingFit(x *Proton, lines []int, want, alt []float32) float32 {
	if len(x.J) == 0 || len(want) == 0 {
		return 0
	}
	c := float32(0)
	var used uint32
	for i, j := range x.J {
		times := 1
		if i < len(lines) {
			times = lines[i]
		}
		if len(x.J) == 1 && len(lines) > 1 {
			times = 1
		}
		if j < 3.2 && len(x.J) > 1 && i == len(x.J)-1 && len(want) < len(x.J) {
			continue // a small coupling beside the main ones
		}
		for range times {
			best, at := float32(99), -1
			for k := range want {
				if used&(1<<k) != 0 {
					continue
				}
				off := min(abs(float32(j)-want[k]), abs(float32(j)-alt[k]))
				if off < best {
					best, at = off, k
				}
			}
			if at < 0 {
				break
			}
			used |= 1 << at
			z := best / (1 + 0.08*want[at])
			c += min(z*z*0.22, 1.8) / float32(times)
		}
	}
	return c
}
