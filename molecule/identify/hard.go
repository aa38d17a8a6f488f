package identify

import (
	"fmt"

	"shelfward/molecule"
	"shelfward/molecule/isomer"
	"shelfward/molecule/spectra"
)

// inferHard tightens the problem with the inferences that count as hard evidence, and lists each with
// its reason. Each must never exclude the truth; those that could are left to the ranking.
func (d *Data) inferHard(f *molecule.Formula, p *isomer.Problem) []Assumption {
	var out []Assumption
	say := func(what, format string, args ...any) {
		out = append(out, Assumption{what, fmt.Sprintf(format, args...)})
	}
	if d.Formula != nil {
		say("molecular formula "+f.String(), "given")
	} else {
		say("molecular formula "+f.String(), "the formula that agrees with combustion analysis, mass and NMR counts")
	}
	if d.Valences == isomer.Standard {
		say("standard valences", "asked for: C4 N3 O2 S2 P3, halogen 1, no charges")
	} else {
		say("usual valences", "no radicals, no open charges; nitro, N-oxide, sulfoxide, sulfone, isocyanide, azide and P(V) allowed")
	}
	for _, t := range d.ContainsText {
		say("contains "+t, "stated in the case file")
	}
	for _, t := range d.LacksText {
		say("lacks "+t, "stated in the case file")
	}
	d.inferCarbonyl(f, p, say)
	if kinds, lines, ok := d.carbonKinds(); ok {
		switch {
		case lines == int(f.Count[6]):
			for h, n := range kinds {
				p.Carbons[h] = isomer.Exactly(n)
			}
			say(fmt.Sprintf("%d CH3, %d CH2, %d CH and %d C", kinds[3], kinds[2], kinds[1], kinds[0]),
				"each of the %d carbons has a 13C line of its own with its kind", lines)
		case lines < int(f.Count[6]):
			for h, n := range kinds {
				if n > 0 {
					p.Carbons[h] = isomer.AtLeast(1)
				}
			}
			say("every kind of carbon seen is there at least once", "kinds of carbon stated with the 13C lines")
		}
	}
	return out
}

// carbonKinds counts the lines by attached hydrogens; ok only if all lines have them.
func (d *Data) carbonKinds() (kinds [4]int, lines int, ok bool) {
	for _, c := range d.Carbon {
		if c.Solvent != "" {
			continue
		}
		if c.Attached < 0 {
			return kinds, 0, false
		}
		kinds[c.Attached]++
		lines++
	}
	return kinds, lines, lines > 0
}

// inferCarbonyl takes a C=O as certain for a 13C line above 195 ppm when nothing else in the formula
// can stand there: no N or S (thioamides, thioesters), and no room for an allene (middle carbon
// 200-215) or a strong C=O band beside it.
func (d *Data) inferCarbonyl(f *molecule.Formula, p *isomer.Problem, say func(what, format string, args ...any)) {
	if f.Count[8] == 0 || f.Count[7] > 0 || f.Count[16] > 0 || f.Count[15] > 0 {
		return
	}
	line := -1
	for i, c := range d.Carbon {
		if c.Solvent == "" && c.Low > 195 {
			line = i
			break
		}
	}
	if line < 0 {
		return
	}
	at := d.Carbon[line].Span.String()
	what, hydrogens := "a ketone or aldehyde C=O", isomer.AnyHydrogens
	switch d.Carbon[line].Attached {
	case 0:
		what, hydrogens = "a ketone C=O", 0
	case 1:
		what, hydrogens = "an aldehyde CHO", 1
	}
	switch band := d.carbonylBand(); {
	case f.Unsaturation() == 1:
		say(what+", and no ring or other multiple bond", "a 13C line at %s ppm with one degree of unsaturation and no N or S", at)
	case band != "":
		say(what, "a 13C line at %s ppm, a strong band at %s cm-1, no N or S", at, band)
	default:
		return
	}
	p.Contains = append(p.Contains, isomer.Piece{
		Name:  "C=O",
		Atoms: []isomer.PieceAtom{{Element: 6, Hydrogens: hydrogens}, {Element: 8, Hydrogens: 0}},
		Bonds: []isomer.PieceBond{{A: 0, B: 1, Order: 2}},
	})
}

// carbonylBand returns the place of a strong band between 1640 and 1830 cm-1, or nothing.
func (d *Data) carbonylBand() string {
	for _, b := range d.Bands {
		if b.Strength == spectra.Strong && b.Mid() > 1640 && b.Mid() < 1830 && !b.Broad {
			return b.Span.String()
		}
	}
	return ""
}
