package formula

import (
	"fmt"

	"shelfward/molecule"
)

// Signals is what NMR spectra say about the numbers of atoms; its Score fits Evidence.Score.
type Signals struct {
	CarbonLines int // lines in the 13C spectrum; 0 not measured
	Hydrogens   int // sum of the hydrogens stated for 1H signals; 0 not stated
	Ratio       int // sum of relative integrals in whole numbers; 0 none
}

// Score returns the drop in log-likelihood of f under n. Lines may merge (fewer lines than carbons
// cost nothing much) but rarely double; hydrogens on N, O and S may go unseen; our judgement.
func (n Signals) Score(f molecule.Formula) (penalty float64, reason string) {
	carbons, hydrogens := int(f.Count[carbon]), int(f.Count[hydrogen])
	if n.CarbonLines > 0 {
		if over := n.CarbonLines - carbons; over > 0 {
			penalty += 6 * float64(over)
			reason = fmt.Sprintf("%d carbon lines for %d carbons", n.CarbonLines, carbons)
		} else if unseen := carbons - n.CarbonLines; unseen > n.CarbonLines {
			penalty += 0.3 * float64(unseen-n.CarbonLines)
		}
	}
	mobile := min(2*int(f.Count[nitrogen]+f.Count[oxygen]+f.Count[sulfur]), 4)
	switch {
	case n.Hydrogens > 0:
		unseen := hydrogens - n.Hydrogens
		penalty += unseenCost(unseen, mobile)
		if unseen != 0 {
			reason = join(reason, fmt.Sprintf("%d hydrogens reported, %d in the formula", n.Hydrogens, hydrogens))
		}
	case n.Ratio > 0:
		least, at := 1e9, 0
		for k := 1; k*n.Ratio <= hydrogens+2; k++ {
			if c := unseenCost(hydrogens-k*n.Ratio, mobile) + 0.3*float64(k-1); c < least {
				least, at = c, k
			}
		}
		if at == 0 {
			return penalty + 12, join(reason, fmt.Sprintf("integrals add up to %d, the formula has %d hydrogens", n.Ratio, hydrogens))
		}
		penalty += least
		if rest := hydrogens - at*n.Ratio; rest != 0 {
			reason = join(reason, fmt.Sprintf("integrals add up to %d x %d, the formula has %d hydrogens", at, n.Ratio, hydrogens))
		}
	}
	return penalty, reason
}

// unseenCost is the cost of hydrogens that the spectrum does not show: few may be exchangeable, more
// are a misfit, and hydrogens too many in the spectrum are one as well.
func unseenCost(unseen, mobile int) float64 {
	switch {
	case unseen < 0:
		return 8 * float64(-unseen)
	case unseen <= mobile:
		return 0.8 * float64(unseen)
	}
	return 0.8*float64(mobile) + 3*float64(unseen-mobile)
}

func join(a, b string) string {
	if a == "" {
		return b
	}
	return a + "; " + b
}
