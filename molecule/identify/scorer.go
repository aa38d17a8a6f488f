package identify

import (
	"math"

	"shelfward/molecule"
	"shelfward/molecule/spectra"
)

// A scorer judges candidates against the evidence; one for each goroutine. All figures are drops in
// log-likelihood: 0 fits perfectly, larger is worse.
type scorer struct {
	d    *Data
	pred *spectra.Predictor
	p    spectra.Prediction

	carbon []Carbon // without solvent lines
	proton []Proton
	// withH says that integrals are absolute; ratioSum is the sum of relative ones.
	withH    bool
	ratioSum float64
	hSum     float64

	// kinds says that every line has its attached hydrogens; then lines are aligned kind by kind, in
	// the lists below.
	kinds         bool
	someLines     []spectra.CarbonLine
	someObs       []Carbon
	lineAt, obsAt []int

	cost  []float32 // working table of the alignments
	back  []int8
	frags []spectra.Fragment
	halfs []half
	fits  []pairFit // by set, then signal
	caps  []float32
	exch  []*spectra.ProtonSignal
	// place and bestPlace: signal of each exchanging set, -1 unseen; being tried, and the best found
	place, bestPlace []int
}

// parts are the shares of a score.
type parts struct {
	carbon, proton, infrared, mass, prior float32
	formula                               float32 // how much worse the formula fits than the first
}

func (s parts) total() float32 {
	return s.carbon + s.proton + s.infrared + s.mass + s.prior + s.formula
}

func newScorer(d *Data) *scorer {
	s := &scorer{d: d, pred: spectra.NewPredictor()}
	for _, c := range d.Carbon {
		if c.Solvent == "" {
			s.carbon = append(s.carbon, c)
		}
	}
	for _, h := range d.Proton {
		if h.Solvent != "" {
			continue
		}
		h.lines = shapes[h.Shape]
		s.proton = append(s.proton, h)
		s.hSum += h.H
		s.ratioSum += h.Ratio
	}
	s.withH = s.hSum > 0
	s.kinds = len(s.carbon) > 0
	for _, c := range s.carbon {
		s.kinds = s.kinds && c.Attached >= 0
	}
	return s
}

// score judges m. fine also tries other orders of the 1H assignment and the mass spectrum.
func (s *scorer) score(m *molecule.Molecule, fine bool) parts {
	p, _ := s.scoreUnder(m, fine, 1e9)
	return p
}

// lowestRest is about the best that the rest of a score can still bring (narrow spreads count as a
// gain).
const lowestRest = 3

// scoreUnder stops early, with ok false, once the score cannot stay under limit.
func (s *scorer) scoreUnder(m *molecule.Molecule, fine bool, limit float32) (p parts, ok bool) {
	s.pred.Predict(m, &s.p)
	var out parts
	out.prior = s.pred.Strangeness(m)
	if len(s.carbon) > 0 {
		out.carbon = s.carbonCost(nil)
	}
	if len(s.d.Bands) > 0 {
		out.infrared = s.infraredCost(nil)
	}
	if out.total() > limit+lowestRest {
		return out, false
	}
	if len(s.proton) > 0 {
		out.proton = s.protonCost(fine)
	}
	if out.total() > limit {
		return out, false
	}
	if len(s.d.Peaks) > 0 {
		out.mass = s.massCost(m, nil)
	}
	return out, true
}

// tailed is the drop in log-likelihood at z standard deviations under Student's t with four degrees
// of freedom: a normal curve near the middle, forgiving far out, because tables miss some shifts badly.
func tailed(z float32) float32 {
	return float32(2.5 * math.Log1p(float64(z*z)/4))
}

const (
	// Costs of a carbon list. Lines merge and double, quaternary carbons stay in the noise: counts are
	// soft. Values of ours, chosen from the published cases: 2 of 26 lists show fewer lines than carbons.
	carbonMerged   = 1.6
	carbonMissing  = 3.5
	carbonNoH      = 2.5
	carbonExtra    = 5.0
	carbonDoubled  = 3.0
	carbonSplit    = 0.5
	carbonAttached = 6.0
	// spreads are measured against this one, so that a vague prediction does not win by being vague
	carbonSpread = 2.0
	protonSpread = 0.15
)

// lineCost compares a predicted and an observed 13C line.
func (s *scorer) lineCost(l *spectra.CarbonLine, o *Carbon) float32 {
	mid := float32(o.Mid())
	z := (mid - l.MeanPPM) / l.SpreadPPM
	c := tailed(z) + logRatio(l.SpreadPPM, carbonSpread)
	if o.Attached >= 0 && o.Attached != int(l.Hydrogens) {
		c += carbonAttached
	}
	return c
}

func logRatio(spread, usual float32) float32 { return float32(math.Log(float64(spread / usual))) }

// carbonCost aligns predicted and observed lines in shift order: each observed line takes one or more
// neighbouring predictions. pairs, if not nil, receives the observed index of each prediction (-1
// none).
func (s *scorer) carbonCost(pairs *[]int) float32 {
	if !s.kinds {
		return s.alignCarbon(s.p.Carbon, s.carbon, pairs)
	}
	if pairs != nil {
		*pairs = (*pairs)[:0]
		for range s.p.Carbon {
			*pairs = append(*pairs, -1)
		}
	}
	sum := float32(0)
	for h := range 4 { // lines of one kind only meet carbons of that kind
		s.someLines, s.someObs, s.lineAt, s.obsAt = s.someLines[:0], s.someObs[:0], s.lineAt[:0], s.obsAt[:0]
		for i, l := range s.p.Carbon {
			if min(int(l.Hydrogens), 3) == h {
				s.someLines, s.lineAt = append(s.someLines, l), append(s.lineAt, i)
			}
		}
		for j, o := range s.carbon {
			if o.Attached == h {
				s.someObs, s.obsAt = append(s.someObs, o), append(s.obsAt, j)
			}
		}
		if pairs == nil {
			sum += s.alignCarbon(s.someLines, s.someObs, nil)
			continue
		}
		var part []int
		sum += s.alignCarbon(s.someLines, s.someObs, &part)
		for i, j := range part {
			if j >= 0 {
				(*pairs)[s.lineAt[i]] = s.obsAt[j]
			}
		}
	}
	return sum
}

// alignCarbon is the alignment of one list with another.
func (s *scorer) alignCarbon(lines []spectra.CarbonLine, obs []Carbon, pairs *[]int) float32 {
	n, k := len(lines), len(obs)
	w := k + 1
	need := (n + 1) * w
	if cap(s.cost) < need {
		s.cost, s.back = make([]float32, need), make([]int8, need)
	}
	cost, back := s.cost[:need], s.back[:need]
	for j := 0; j <= k; j++ {
		cost[j], back[j] = float32(j)*carbonExtra, 3
	}
	for i := 1; i <= n; i++ {
		l := &lines[i-1]
		miss := float32(carbonMissing)
		if l.Hydrogens == 0 {
			miss = carbonNoH
		}
		cost[i*w], back[i*w] = cost[(i-1)*w]+miss, 2
		for j := 1; j <= k; j++ {
			fit := s.lineCost(l, &obs[j-1])
			best, how := cost[(i-1)*w+j-1]+fit, int8(0)
			merged := float32(carbonMerged)
			if i > 1 {
				gap := lines[i-2].MeanPPM - l.MeanPPM
				if gap < 0.7 {
					merged *= 0.6
				}
			}
			// merged: line j is already taken by the prediction before
			if back[(i-1)*w+j] <= 1 {
				if c := cost[(i-1)*w+j] + fit + merged; c < best {
					best, how = c, 1
				}
			}
			if c := cost[(i-1)*w+j] + miss; c < best {
				best, how = c, 2
			}
			if c := cost[i*w+j-1] + carbonExtra; c < best {
				best, how = c, 3
			}
			if l.Count > 1 && back[i*w+j-1] == 0 {
				double := float32(carbonDoubled)
				if l.MaySplit {
					double = carbonSplit
				}
				if c := cost[i*w+j-1] + fit + double; c < best {
					best, how = c, 4
				}
			}
			cost[i*w+j], back[i*w+j] = best, how
		}
	}
	if pairs != nil {
		s.traceCarbon(n, k, w, pairs)
	}
	return cost[n*w+k]
}

func (s *scorer) traceCarbon(n, k, w int, pairs *[]int) {
	out := (*pairs)[:0]
	for range n {
		out = append(out, -1)
	}
	for i, j := n, k; i > 0; {
		switch s.back[i*w+j] {
		case 0:
			out[i-1] = j - 1
			i, j = i-1, j-1
		case 1:
			out[i-1] = j - 1
			i--
		case 2:
			i--
		case 4:
			out[i-1] = j - 1
			j--
		default:
			j--
		}
	}
	*pairs = out
}
