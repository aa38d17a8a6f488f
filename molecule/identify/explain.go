package identify

import (
	"fmt"
	"math"
	"slices"

	"shelfward/molecule"
	"shelfward/molecule/spectra"
)

// Check compares the evidence with one structure, in words: for a target that is stated, which the
// evidence then only checks. The formula is compared as well.
func (d *Data) Check(m *molecule.Molecule) (fits, misfits []string) {
	fits, misfits = newScorer(d).explain(m)
	f := m.Formula()
	if why := d.contradicts(&f); why != "" {
		misfits = append([]string{why}, misfits...)
	}
	if d.Formula != nil && d.Formula.String() != f.String() {
		misfits = append([]string{fmt.Sprintf("formula %s given, the structure is %s", d.Formula, f)}, misfits...)
	}
	return fits, misfits
}

// explain says in words what fits and what does not.
func (s *scorer) explain(m *molecule.Molecule) (fits, misfits []string) {
	fits, misfits = []string{}, []string{}
	s.pred.Predict(m, &s.p)
	if len(s.carbon) > 0 {
		f, mis := s.explainCarbon()
		fits, misfits = append(fits, f...), append(misfits, mis...)
	}
	if len(s.proton) > 0 {
		f, mis := s.explainProton()
		fits, misfits = append(fits, f...), append(misfits, mis...)
	}
	if len(s.d.Bands) > 0 {
		f, mis := s.explainBands()
		fits, misfits = append(fits, f...), append(misfits, mis...)
	}
	if len(s.d.Peaks) > 0 {
		f, mis := s.explainMass(m)
		fits, misfits = append(fits, f...), append(misfits, mis...)
	}
	for _, o := range spectra.Oddities(m) {
		misfits = append(misfits, "unusual: "+o.Name)
	}
	return fits, misfits
}

func (s *scorer) explainCarbon() (fits, misfits []string) {
	var pairs []int
	s.carbonCost(&pairs)
	used := make([]bool, len(s.carbon))
	good, sum, n := 0, 0.0, 0
	for i, l := range s.p.Carbon {
		if pairs[i] < 0 {
			misfits = append(misfits, fmt.Sprintf("13C: no line for the carbon expected at %.0f ppm", l.MeanPPM))
			continue
		}
		o := s.carbon[pairs[i]]
		used[pairs[i]] = true
		off := o.Mid() - float64(l.MeanPPM)
		sum += math.Abs(off)
		n++
		if math.Abs(off) <= 2.2*float64(l.SpreadPPM) {
			good++
		} else {
			misfits = append(misfits, fmt.Sprintf("13C: %s observed, %.1f expected (spread %.1f)", o.Span, l.MeanPPM, l.SpreadPPM))
		}
		if o.Attached >= 0 && o.Attached != int(l.Hydrogens) {
			misfits = append(misfits, fmt.Sprintf("13C: %s has %d attached hydrogens, %d expected", o.Span, o.Attached, l.Hydrogens))
		}
	}
	for j, u := range used {
		if !u {
			misfits = append(misfits, fmt.Sprintf("13C: nothing explains the line at %s", s.carbon[j].Span))
		}
	}
	if n > 0 {
		fits = append(fits, fmt.Sprintf("13C: %d of %d kinds of carbon within the spread of the tables, mean deviation %.1f ppm", good, len(s.p.Carbon), sum/float64(n)))
	}
	return fits, misfits
}

// explainProton judges each signal by the predicted sets nearest in the order of shifts.
func (s *scorer) explainProton() (fits, misfits []string) {
	s.protonCost(true)
	total, good := 0, 0
	for _, run := range s.traceProtons() {
		if run.signal < 0 {
			misfits = append(misfits, fmt.Sprintf("1H: nothing seen for the %d H expected at %.2f ppm", s.halfs[run.from].sig.Hydrogens, s.halfs[run.from].sig.MeanPPM))
			continue
		}
		x := &s.proton[run.signal]
		if run.from == run.to {
			continue
		}
		total++
		ok := true
		h := float32(0)
		for k := run.from; k < run.to; k++ {
			g := &s.halfs[k]
			h += g.h
			if protonOff(x, g) > 2.2 {
				ok = false
				misfits = append(misfits, fmt.Sprintf("1H: %s observed, %.2f expected (spread %.2f)", x.Span, g.sig.MeanPPM, g.spread))
			}
		}
		if run.to-run.from == 1 && shapeFit(x, s.halfs[run.from].sig) > 1.2 {
			ok = false
			misfits = append(misfits, fmt.Sprintf("1H: the shape %s at %s does not suit its neighbours", x.Shape, x.Span))
		}
		if x.H > 0 && math.Abs(x.H-float64(h)) > 0.6 && math.Abs(x.H-float64(h)) < 50 && !s.hasExchanging() {
			ok = false
			misfits = append(misfits, fmt.Sprintf("1H: %g H at %s, %g expected", x.H, x.Span, h))
		}
		if ok {
			good++
		}
	}
	if total > 0 {
		fits = append(fits, fmt.Sprintf("1H: %d of %d signals fit in place, number and shape", good, total))
	}
	return fits, slices.Compact(misfits)
}

func (s *scorer) hasExchanging() bool {
	for i := range s.p.Proton {
		if s.p.Proton[i].Exchanging {
			return true
		}
	}
	return false
}

// protonRun says that the sets from..to-1 stand under one signal (-1: a set seen nowhere).
type protonRun struct{ signal, from, to int }

// traceProtons repeats the alignment greedily from its table.
func (s *scorer) traceProtons() []protonRun {
	s.restoreCapacities()
	s.alignProtons()
	n, k := len(s.halfs), len(s.proton)
	w := n + 1
	var runs []protonRun
	i, j := n, k
	for j > 0 || i > 0 {
		if j == 0 {
			i--
			runs = append(runs, protonRun{-1, i, i + 1})
			continue
		}
		switch b := s.back[j*w+i]; {
		case b == 0:
			runs = append(runs, protonRun{j - 1, i, i})
			j--
		case b < 0:
			i--
			runs = append(runs, protonRun{-1, i, i + 1})
		default:
			runs = append(runs, protonRun{j - 1, int(b) - 1, i})
			i = int(b) - 1
			j--
		}
	}
	slices.Reverse(runs)
	return runs
}

// restoreCapacities sets the integrals to what the best placing of exchanging hydrogens leaves.
func (s *scorer) restoreCapacities() {
	for k, j := range s.bestPlace {
		if j >= 0 {
			g := s.exch[k]
			if s.caps[j] >= 0 {
				s.caps[j] -= float32(g.Hydrogens)
			} else {
				s.caps[j] = 0
			}
		}
	}
}

func (s *scorer) explainBands() (fits, misfits []string) {
	var hits []string
	s.infraredCost(func(c float32, b *Band, p *spectra.Band) {
		switch {
		case p != nil && p.IsCarbonyl() && c < 2:
			hits = append(hits, p.Name())
		case p != nil && p.IsCarbonyl():
			misfits = append(misfits, fmt.Sprintf("IR: no band near %.0f cm-1 for %s", p.MeanCM1, p.Name()))
		case p != nil:
			misfits = append(misfits, fmt.Sprintf("IR: no band at %.0f-%.0f cm-1 for %s", p.LowCM1, p.HighCM1, p.Name()))
		case b.Mid() >= 1500:
			misfits = append(misfits, fmt.Sprintf("IR: nothing explains the band at %s cm-1", b.Span))
		}
	})
	if len(hits) > 0 {
		fits = append(fits, "IR: a band where expected for "+hits[0])
	}
	return fits, misfits
}

func (s *scorer) explainMass(m *molecule.Molecule) (fits, misfits []string) {
	s.massCost(m, func(c float32, mz int, f *spectra.Fragment) {
		switch {
		case f != nil && f.Weight >= 0.45 && len(fits) < 4:
			fits = append(fits, fmt.Sprintf("MS: m/z %d, %s", mz, f.Name()))
		case f == nil && c > 0.9:
			misfits = append(misfits, fmt.Sprintf("MS: nothing expected at m/z %d", mz))
		}
	})
	return fits, misfits
}
