package formula

import (
	"fmt"
	"math"

	"shelfward/molecule"
)

// isotope gives the abundance of heavier isotopes relative to the one in the nominal mass.
type isotope struct{ plus1, plus2 float64 }

// isotopes: representative isotopic compositions of IUPAC (Pure Appl. Chem. 83 (2011) 397; values
// from memory). Elements not listed have one stable isotope. The lighter isotope of boron shows
// below the molecular ion and is not used.
var isotopes = map[molecule.Element]isotope{
	hydrogen: {0.000115, 0},
	carbon:   {0.0107 / 0.9893, 0},
	nitrogen: {0.00364 / 0.99636, 0},
	oxygen:   {0.00038 / 0.99757, 0.00205 / 0.99757},
	silicon:  {0.04685 / 0.92223, 0.03092 / 0.92223},
	sulfur:   {0.0075 / 0.9499, 0.0425 / 0.9499},
	chlorine: {0, 0.2424 / 0.7576},
	bromine:  {0, 0.4931 / 0.5069},
}

// isotopeOrder fixes the order of summation, so that results are the same to the last bit.
var isotopeOrder = []molecule.Element{hydrogen, carbon, nitrogen, oxygen, silicon, sulfur, chlorine, bromine}

// IsotopePattern returns the intensities of M+1, M+2 ... M+last relative to M, nominal masses merged.
func IsotopePattern(f molecule.Formula, last int) []float64 {
	p := make([]float64, last+1)
	p[0] = 1
	for _, e := range isotopeOrder {
		x := isotopes[e]
		for range f.Count[e] {
			for k := last; k > 0; k-- {
				p[k] += x.plus1 * p[k-1]
				if k > 1 {
					p[k] += x.plus2 * p[k-2]
				}
			}
		}
	}
	return p[1:]
}

// pattern is what the peaks say about the molecular ion and its isotopes.
type pattern struct {
	known  bool
	seen   [5]bool
	ratio  [5]float64 // relative to M
	weak   float64    // the weakest intensity listed, relative to M: what lies below may be left out
	spread float64
}

// readPattern looks for the molecular ion among the peaks.
func (ev *evidence) readPattern() pattern {
	m := float64(ev.MolecularIon)
	for i, x := range ev.Exact {
		if m == 0 && x.Ion == IonM {
			m = math.Floor(ev.neutral[i]) // mass defects stay below one up to about m/z 1000
		}
	}
	var p pattern
	if m == 0 || len(ev.Peaks) == 0 {
		return p
	}
	base, weak := 0.0, math.Inf(1)
	for _, x := range ev.Peaks {
		weak = math.Min(weak, x.Intensity)
		if math.Round(x.MZ) == m {
			base = x.Intensity
		}
	}
	if base <= 0 {
		return p
	}
	p.known, p.weak = true, weak/base
	for _, x := range ev.Peaks {
		if k := int(math.Round(x.MZ) - m); k > 0 && k < len(p.seen) {
			p.seen[k], p.ratio[k] = true, x.Intensity/base
		}
	}
	return p
}

// compare returns the penalty of f under the pattern. Intensities are good to a fifth plus two
// percent of M (common practice for unit-resolution spectra); a peak not listed is taken to be
// weaker than one and a half times the weakest listed.
func (p *pattern) compare(f *molecule.Formula) (penalty float64, why string) {
	if !p.known {
		return 0, ""
	}
	calculated := IsotopePattern(*f, 4)
	for k := 1; k < len(p.seen); k++ {
		c := calculated[k-1]
		found, sigma := p.ratio[k], 0.2*c+0.02
		if !p.seen[k] {
			found = 1.5 * p.weak
			if c <= found {
				continue
			}
		}
		if k == 1 && found > c {
			sigma *= 3 // ion-molecule reactions raise M+1
		}
		penalty += math.Min(15, 0.5*(found-c)*(found-c)/(sigma*sigma))
		if p.seen[k] && (k == 2 || k == 4) {
			why = fmt.Sprintf("M+%d is %.0f %% of M, %.0f %% calculated", k, 100*found, 100*c)
		}
	}
	return penalty, why
}

// halogens lists the elements that an M+2 peak points to.
func (p *pattern) halogens() []molecule.Element {
	switch {
	case !p.known || !p.seen[2]:
		return nil
	case p.ratio[2] > 0.2:
		return []molecule.Element{chlorine, bromine}
	case p.ratio[2] > 0.035:
		return []molecule.Element{sulfur}
	}
	return nil
}
