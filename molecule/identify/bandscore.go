package identify

import (
	"shelfward/molecule"
	"shelfward/molecule/spectra"
)

// finding is a fit or misfit in words, with its share of the score.
type finding struct {
	cost float32
	text string
}

// unexplained is the cost of an observed band that no group of the candidate shows.
func unexplained(b *Band) float32 {
	var c float32
	switch b.Strength {
	case spectra.Strong:
		c = 3
	case spectra.Weak:
		c = 0.4
	default:
		c = 1.3
	}
	if b.Mid() < 1500 {
		c *= 0.4 // the fingerprint region holds bands of the skeleton
	}
	return c
}

// infraredCost compares bands both ways: what the groups should show, and what the bands ask for.
func (s *scorer) infraredCost(say func(cost float32, b *Band, p *spectra.Band)) float32 {
	sum := float32(0)
	bands := s.d.Bands
	for i := range s.p.Bands {
		p := &s.p.Bands[i]
		c := s.missedBand(p)
		if say != nil && (c > 0.8 || p.IsCarbonyl()) {
			say(c, nil, p)
		}
		sum += c
	}
	for i := range bands {
		b := &bands[i]
		if b.Strength == spectra.Absent {
			continue
		}
		explained := false
		for k := range s.p.Bands {
			if p := &s.p.Bands[k]; overlap(b, p, 12) && (!p.IsCarbonyl() || !b.Broad) {
				explained = true
				break
			}
		}
		if !explained {
			c := unexplained(b)
			if say != nil {
				say(c, b, nil)
			}
			sum += c
		}
	}
	return sum
}

func overlap(b *Band, p *spectra.Band, slackCM1 float64) bool {
	return b.High >= float64(p.LowCM1)-slackCM1 && b.Low <= float64(p.HighCM1)+slackCM1
}

// missedBand is the cost of a predicted band: for C=O the distance to the nearest band, for the
// others whether any lies in the range.
func (s *scorer) missedBand(p *spectra.Band) float32 {
	if p.IsCarbonyl() {
		best := p.Missed
		for i := range s.d.Bands {
			b := &s.d.Bands[i]
			if b.Broad || b.High-b.Low > 120 || b.Strength == spectra.Absent {
				continue
			}
			z := (float32(b.Mid()) - p.MeanCM1) / p.WidthCM1
			c := min(z*z/2, p.Missed)
			if b.Strength == spectra.Weak {
				c += 1.5
			}
			best = min(best, c)
		}
		return best
	}
	for i := range s.d.Bands {
		b := &s.d.Bands[i]
		if overlap(b, p, 6) {
			if b.Strength == spectra.Absent {
				return p.Missed * 2
			}
			return 0
		}
	}
	if s.d.BandsAll {
		return p.Missed * 1.5
	}
	return p.Missed
}

// massCost compares the peaks with the ions expected.
func (s *scorer) massCost(m *molecule.Molecule, say func(cost float32, mz int, f *spectra.Fragment)) float32 {
	s.frags = s.pred.Fragments(m, s.frags)
	sum := float32(0)
	for _, pk := range s.d.Peaks {
		mz := int(pk.MZ + 0.5)
		if s.isotopePeak(mz) {
			continue
		}
		var hit *spectra.Fragment
		for i := range s.frags {
			if int(s.frags[i].MZ) == mz {
				hit = &s.frags[i]
				break
			}
		}
		weight := float32(0.3 + 0.7*min(pk.Intensity, 100)/100)
		q := float32(0)
		if hit != nil {
			q = min(hit.Weight, 0.9)
		}
		c := weight * (0.9 - q) * 1.8
		if say != nil {
			say(c, mz, hit)
		}
		sum += c
	}
	if len(s.d.Peaks) >= 4 {
		missed := float32(0)
		for i := range s.frags {
			f := &s.frags[i]
			if f.Weight < 0.85 || f.MZ < 40 {
				break
			}
			if !s.hasPeak(int(f.MZ)) {
				missed += 0.5
			}
		}
		sum += min(missed, 1.5)
	}
	return sum
}

func (s *scorer) hasPeak(mz int) bool {
	for _, p := range s.d.Peaks {
		if int(p.MZ+0.5) == mz {
			return true
		}
	}
	return false
}

// isotopePeak reports a peak two mass units above a stronger or equal one: a halogen pair, judged
// with the formula.
func (s *scorer) isotopePeak(mz int) bool {
	for _, p := range s.d.Peaks {
		if int(p.MZ+0.5) == mz-2 {
			for _, q := range s.d.Peaks {
				if int(q.MZ+0.5) == mz && q.Intensity <= p.Intensity*1.05 {
					return true
				}
			}
		}
	}
	return false
}
