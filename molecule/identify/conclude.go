package identify

import (
	"fmt"

	"shelfward/molecule"
	"shelfward/molecule/spectra"
)

// conclude decides whether the structure is settled, and what to measure next.
func (s *searcher) conclude(res *Result, sc *scorer, list []kept) {
	margin := SettledMargin
	if !res.Complete {
		margin *= 2
	}
	res.Margin = margin
	gap := 1e9
	if len(list) > 1 {
		gap = float64(list[1].score.total() - list[0].score.total())
	}
	spectraGiven := len(s.d.Carbon)+len(s.d.Proton) > 0
	switch {
	case len(list) == 1 && res.Complete && res.Generated == 1:
		res.Settled = true
	case !spectraGiven || len(list) == 1 && !res.Complete:
	default:
		res.Settled = gap >= margin
	}
	res.Doubts = append(res.Doubts, s.verdict(res, list, gap)...)
	if !res.Settled && len(list) > 1 {
		res.NextMeasurement = s.d.nextMeasurement(list[0].m, list[1].m)
	}
}

// verdict says in words how far the ranking carries.
func (s *searcher) verdict(res *Result, list []kept, gap float64) (out []string) {
	first := res.Candidates[0]
	switch {
	case res.Complete && res.Generated == 1:
		out = append(out, "One structure meets the hard evidence.")
	case res.Complete:
		out = append(out, fmt.Sprintf("All %d structures that fit the hard evidence were built; the spectra only rank them.", res.Generated))
	default:
		out = append(out, fmt.Sprintf("%d structures were built and ranked; others are possible.", res.Generated))
	}
	if len(list) > 1 {
		second := res.Candidates[min(1, len(res.Candidates)-1)].SMILES
		if len(res.Candidates) < 2 {
			second = list[1].text
		}
		switch {
		case res.Settled:
			out = append(out, fmt.Sprintf("Settled by margin: %s fits clearly better than the second, %s.", first.SMILES, second))
		case gap > 2:
			out = append(out, fmt.Sprintf("Not settled: %s fits better than %s, but not by the stated margin.", first.SMILES, second))
		default:
			out = append(out, fmt.Sprintf("Not settled: %s and %s fit about equally well.", first.SMILES, second))
		}
	}
	if text := s.equals(res, list); text != "" {
		out = append(out, text)
	}
	if len(first.Misfits) > 4 {
		out = append(out, fmt.Sprintf("Even the first structure leaves %d observations unexplained or misplaced: the right one may be missing.", len(first.Misfits)))
	}
	if hasStereo(list[0].m) {
		out = append(out, "Stereo: the evidence is silent on configuration; racemic or one hand is not decided, optical rotation would tell.")
	}
	return out
}

// equals counts the structures that fit about as well as the first, and how many of them a 13C
// spectrum with attached hydrogens would leave.
func (s *searcher) equals(res *Result, list []kept) string {
	n := 0
	for n < len(list) && list[n].score.total() < list[0].score.total()+1 {
		n++
	}
	if n < 3 || n == len(list) && n >= keptStructures {
		return ""
	}
	text := fmt.Sprintf("%d of them fit about as well as the first", n)
	if words := commonCarbonyl(list[:n]); words != "" {
		text += ", all " + words
	}
	if len(s.d.Carbon) == 0 {
		classes := map[[4]int]int{}
		most := 0
		for _, k := range list[:n] {
			var kinds [4]int
			for a := range k.m.NumAtoms() {
				if at := k.m.Atom(a); at.Element == 6 {
					kinds[min(at.Hydrogens, 3)]++
				}
			}
			classes[kinds]++
			most = max(most, classes[kinds])
		}
		text += fmt.Sprintf("; a 13C spectrum with attached hydrogens would leave at most %d", most)
	}
	return text + "."
}

// commonCarbonyl names the carbonyl class that all structures of the list have, if any.
func commonCarbonyl(list []kept) string {
	name := ""
	for i, k := range list {
		this := ""
		for _, b := range spectra.Predict(k.m).Bands {
			if b.IsCarbonyl() {
				this = b.Carbonyl.String()
			}
		}
		if i > 0 && this != name || this == "" {
			return ""
		}
		name = this
	}
	return name + "s"
}

// hasStereo reports a carbon with four different ligands.
func hasStereo(m *molecule.Molecule) bool {
	orbits := m.Orbits()
	for a := range m.NumAtoms() {
		at := m.Atom(a)
		if at.Element != 6 || at.Hydrogens > 1 || m.Degree(a)+int(at.Hydrogens) != 4 {
			continue
		}
		different := true
		nbs := m.Neighbors(a)
		for i := range nbs {
			for j := range i {
				different = different && orbits[nbs[i].Atom] != orbits[nbs[j].Atom]
			}
		}
		if different {
			return true
		}
	}
	return false
}

// nextMeasurement names the spectrum that would tell the first two structures apart most clearly.
func (d *Data) nextMeasurement(a, b *molecule.Molecule) string {
	pa, pb := spectra.Predict(a), spectra.Predict(b)
	if len(d.Carbon) == 0 {
		return fmt.Sprintf("a 13C spectrum with attached hydrogens: the first structure should show %s, the second %s", carbonWords(pa), carbonWords(pb))
	}
	if _, _, ok := d.carbonKinds(); !ok && kindWords(pa) != kindWords(pb) {
		return fmt.Sprintf("attached hydrogens for the 13C lines: the first structure has %s, the second %s", kindWords(pa), kindWords(pb))
	}
	if len(d.Proton) == 0 {
		return "a 1H spectrum with integrals and couplings"
	}
	if len(d.Bands) == 0 {
		return "an infrared spectrum; after that long-range C-H correlation (HMBC)"
	}
	return "long-range C-H correlation (HMBC), which shows what hangs on what; failing that, comparison with authentic samples of the first two"
}

// carbonWords lists the most telling lines: number and the two ends.
func carbonWords(p spectra.Prediction) string {
	if len(p.Carbon) == 0 {
		return "no line"
	}
	return fmt.Sprintf("%d lines from %.0f to %.0f ppm (%s)", len(p.Carbon), p.Carbon[len(p.Carbon)-1].MeanPPM, p.Carbon[0].MeanPPM, kindWords(p))
}

func kindWords(p spectra.Prediction) string {
	var n [4]int
	for _, l := range p.Carbon {
		n[min(l.Hydrogens, 3)]++
	}
	return fmt.Sprintf("%d CH3, %d CH2, %d CH and %d C lines", n[3], n[2], n[1], n[0])
}
