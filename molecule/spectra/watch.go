package spectra

import (
	"cmp"
	"fmt"
	"slices"

	"shelfward/molecule"
)

// Sign is something to watch for while a step runs: a band or signal of a reactant that vanishes, or
// of the product that appears.
type Sign struct {
	Method string // IR, 1H, 13C or MS
	Place  string // '1705-1723 cm-1', '9.7 ppm', 'm/z 128'
	What   string // what shows there, in words
}

// String writes the sign on one line.
func (s Sign) String() string { return s.Method + " " + s.Place + ": " + s.What }

const (
	// Predicted signals count as told apart when they lie further apart than these (ppm): about three
	// spreads of the tables.
	apartProtonPPM = 0.45
	apartCarbonPPM = 8
	// watchEach bounds how many signs of one kind are named.
	watchEach = 2
)

// Watch compares the predicted spectra of the reactants with those of the product and lists what
// should vanish and what should appear, the clearest first; the last entry of appear is the molecular
// ion of the product. Predictions are from tables: a guide where to look, not a criterion.
func Watch(from []*molecule.Molecule, to *molecule.Molecule) (vanish, appear []Sign) {
	vanish, appear = []Sign{}, []Sign{}
	product := Predict(to)
	var before Prediction
	for _, m := range from {
		p := Predict(m)
		before.Carbon = append(before.Carbon, p.Carbon...)
		before.Proton = append(before.Proton, p.Proton...)
		before.Bands = append(before.Bands, p.Bands...)
	}
	vanish = append(vanish, bandSigns(before.Bands, product.Bands)...)
	appear = append(appear, bandSigns(product.Bands, before.Bands)...)
	vanish = append(vanish, protonSigns(before.Proton, product.Proton)...)
	appear = append(appear, protonSigns(product.Proton, before.Proton)...)
	vanish = append(vanish, carbonSigns(before.Carbon, product.Carbon)...)
	appear = append(appear, carbonSigns(product.Carbon, before.Carbon)...)
	mass := int(to.Formula().MonoisotopicMass() + 0.5)
	return vanish, append(appear, Sign{"MS", fmt.Sprintf("m/z %d", mass), "molecular ion of the product (may be weak)"})
}

// bandSigns lists bands of have that no band of other covers.
func bandSigns(have, other []Band) []Sign {
	var out []Sign
	seen := map[string]bool{}
	own := slices.Clone(have)
	slices.SortStableFunc(own, func(a, b Band) int { return cmp.Compare(b.Missed, a.Missed) })
	for _, b := range own {
		if b.Missed < 1.2 || seen[b.Name()] || len(out) >= watchEach {
			continue
		}
		covered := slices.ContainsFunc(other, func(o Band) bool {
			if b.IsCarbonyl() && o.IsCarbonyl() {
				return o.MeanCM1-b.MeanCM1 < 12 && b.MeanCM1-o.MeanCM1 < 12
			}
			return o.Name() == b.Name() || o.Strength == Strong && o.Missed > 0.5 && o.LowCM1 <= b.LowCM1 && o.HighCM1 >= b.HighCM1
		})
		if covered {
			continue
		}
		seen[b.Name()] = true
		place := fmt.Sprintf("%.0f-%.0f cm-1", b.LowCM1, b.HighCM1)
		if b.IsCarbonyl() {
			place = fmt.Sprintf("%.0f-%.0f cm-1", b.MeanCM1-b.WidthCM1, b.MeanCM1+b.WidthCM1)
		}
		out = append(out, Sign{"IR", place, b.Name()})
	}
	return out
}

// protonSigns lists the 1H signals of have that stand furthest from every signal of other.
func protonSigns(have, other []ProtonSignal) []Sign {
	type far struct {
		s   ProtonSignal
		gap float32
	}
	var list []far
	for _, s := range have {
		if s.Exchanging {
			continue
		}
		gap := float32(99)
		for _, o := range other {
			if !o.Exchanging {
				gap = min(gap, max(s.MeanPPM-o.MeanPPM, o.MeanPPM-s.MeanPPM))
			}
		}
		if gap > apartProtonPPM {
			list = append(list, far{s, gap})
		}
	}
	slices.SortStableFunc(list, func(a, b far) int { return cmp.Compare(b.gap, a.gap) })
	var out []Sign
	for _, f := range list[:min(len(list), watchEach)] {
		out = append(out, Sign{"1H", fmt.Sprintf("%.1f ppm", f.s.MeanPPM), fmt.Sprintf("%d H", f.s.Hydrogens)})
	}
	return out
}

// carbonSigns lists the 13C lines of have that stand furthest from every line of other.
func carbonSigns(have, other []CarbonLine) []Sign {
	type far struct {
		l   CarbonLine
		gap float32
	}
	var list []far
	for _, l := range have {
		gap := float32(999)
		for _, o := range other {
			gap = min(gap, max(l.MeanPPM-o.MeanPPM, o.MeanPPM-l.MeanPPM))
		}
		if gap > apartCarbonPPM {
			list = append(list, far{l, gap})
		}
	}
	slices.SortStableFunc(list, func(a, b far) int { return cmp.Compare(b.gap, a.gap) })
	names := [4]string{"C without hydrogen", "CH", "CH2", "CH3"}
	var out []Sign
	for _, f := range list[:min(len(list), watchEach)] {
		out = append(out, Sign{"13C", fmt.Sprintf("%.0f ppm", f.l.MeanPPM), names[min(f.l.Hydrogens, 3)]})
	}
	return out
}
