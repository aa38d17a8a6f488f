package sheet

import (
	"fmt"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"shelfward/molecule/pattern"
	"shelfward/reactions"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
)

// noDescription stands for a step whose conditions are not told.
var noDescription reagent.Description

const (
	// manyGrams is where bench work ends: above it heat, stirring and dissolution times change
	// (Prudent Practices, 1995, on scale-up).
	manyGrams = 100
	// A scale that is more than so many times what was tried gets a note, or a stop flag (common practice).
	noteFactor, stopFactor = 3, 10
	// muchGasL and muchHydrogenL are volumes at which a balloon or an open outlet no longer serves
	// (common practice).
	muchGasL, muchHydrogenL = 10, 10
	// lowerLimitHydrogen is the least fraction of hydrogen in air that burns (memory).
	lowerLimitHydrogen = 0.04
)

// Heat capacities in J/(g K) for a first estimate: organic liquids 1.8 to 2.0, water, solids and salts
// (common tables, memory).
const (
	cpOrganic = 1.9
	cpWater   = 4.18
	cpSolid   = 1.0
)

// Bands of the adiabatic temperature rise in K: below 50 low, to 200 medium, above high (after Stoessel,
// Thermal Safety of Chemical Processes, memory).
const lowRiseK, highRiseK = 50, 200

func (s *Step) stop(format string, args ...any) {
	s.Flags = append(s.Flags, fmt.Sprintf(format, args...))
}

// flags collects what must be settled before anything is charged.
func (w *writer) flags(s *Step, set *reactions.Conditions, full float64) {
	w.neverPairs(s)
	w.energetic(s)
	boilingFlags(s, set)
	heatFlag(s, set, full)
	gasFlags(s, set, full)
	scaleFlags(s, set, full)
}

// neverPairs finds the pairs of the guide in the flask and in the work-up.
func (w *writer) neverPairs(s *Step) {
	all := substances(s.Charges, roleReactant, roleReagent, roleCatalyst, roleSolvent, roleWorkup)
	solvents := substances(s.Charges, roleSolvent)
	groups := make([][]string, len(all))
	for i, x := range all {
		groups[i] = w.desk.Hazards.GroupIDs(x, w.desk.Book.Groups())
	}
	isSolvent := func(x hazard.Substance) bool {
		return slices.ContainsFunc(solvents, func(y hazard.Substance) bool { return x.Name == y.Name })
	}
	for _, p := range w.desk.Guide.Never {
		for i, a := range all {
			for j, b := range all {
				if a.Name == b.Name || !slices.Contains(groups[i], p.Between[0]) || !slices.Contains(groups[j], p.Between[1]) || p.As.Value == "solvent" && !isSolvent(b) {
					continue
				}
				if text := fmt.Sprintf("%s with %s: %s", a.Name, b.Name, p.Says); !slices.Contains(s.Flags, text) {
					s.stop("%s", text)
				}
			}
		}
	}
}

// energetic flags products with groups that make them unfit to be isolated.
func (w *writer) energetic(s *Step) {
	groups := w.desk.Book.Groups()
	subject := pattern.NewSubject(s.Product.Molecule, groups)
	for _, id := range w.desk.Guide.Energetic {
		if !groups.Has(id) || len(subject.Instances(id)) == 0 {
			continue
		}
		f := s.Product.Molecule.Formula()
		text := "the product holds a group that can decompose with force (" + groups.Name(id) + "): do not distil, scrape or dry by heat"
		if n := f.Count[7]; n > 0 {
			if ratio := float64(f.Count[6]+f.Count[8]) / float64(n); ratio < 3 {
				text += fmt.Sprintf("; (C + O)/N = %.1f, below 3 (rule of thumb): do not isolate", ratio)
			}
		}
		s.stop("%s", text)
	}
}

// boilingFlags compares the window with the boiling points of the solvents.
func boilingFlags(s *Step, set *reactions.Conditions) {
	closed := slices.ContainsFunc(set.Needs, func(n string) bool {
		return strings.Contains(n, "autoclave") || strings.Contains(n, "pressure") || strings.Contains(n, "sealed")
	})
	if closed {
		s.stop("closed vessel: at least half of it stays empty, shield, pressure estimated from gas and vapour before it is closed")
		return
	}
	for _, c := range s.Charges {
		b := boils(&c)
		if c.Role == roleReactant && set.Temperature[0] > b+5 {
			s.stop("%s boils at %.0f °C, below the whole window (%s): it leaves an open flask; slow feed below the surface and a cold condenser, or a vessel for pressure", c.Name, b, temperatureText(set.Temperature))
		} else if c.Role == roleSolvent && set.Temperature[0] > b+5 {
			s.stop("%s boils at %.0f °C, below the whole window (%s): impossible in an open flask; another solvent, or a vessel for pressure", c.Name, b, temperatureText(set.Temperature))
		} else if c.Role == roleSolvent && set.Temperature[1] > b+5 {
			s.stop("%s boils at %.0f °C, below the upper end of the window (%s): reflux is the limit, never a closed vessel", c.Name, b, temperatureText(set.Temperature))
		}
	}
}

// heatFlag estimates how far the mixture would warm if all its heat came at once and nothing cooled:
// dT = n (-dH) / sum(m cp).
func heatFlag(s *Step, set *reactions.Conditions, full float64) {
	if set.HeatKJ <= 0 {
		return
	}
	capacity := heatCapacity(s.Charges)
	if capacity <= 0 {
		return
	}
	riseK := set.HeatKJ * full * 1000 / capacity
	band := "low"
	switch {
	case riseK > highRiseK:
		band = "high"
	case riseK >= lowRiseK:
		band = "medium"
	}
	text := fmt.Sprintf("heat: about %s kJ in all (%.0f kJ/mol, rough); all at once the mixture would warm by about %.0f K (%s)", digits(set.HeatKJ*full), set.HeatKJ, riseK, band)
	name, boil := lowestBoiling(s.Charges)
	hot := set.Temperature[1] + riseK
	if riseK >= lowRiseK && hot > boil {
		s.stop("%s, past the boiling point of %s (%.0f °C): the feed is the only control, cooling bath ready before it starts", text, name, boil)
	} else if riseK > highRiseK {
		s.stop("%s: the feed is the only control", text)
	} else {
		s.Mixture = append(s.Mixture, strings.ToUpper(text[:1])+text[1:]+".")
	}
}

// heatCapacity of what is charged, in J/K.
func heatCapacity(charges []Charge) (sum float64) {
	for _, c := range charges {
		if c.Role == roleWorkup || c.Gas {
			continue
		}
		massG := c.MassG
		if massG == 0 {
			massG = 0.9 * c.VolumeML
			if c.supply.DensityGPerML > 0 {
				massG = c.supply.DensityGPerML * c.VolumeML
			}
		}
		st := c.supply.Strength
		switch {
		case isWater(&c):
			sum += massG * cpWater
		case st.MassFraction > 0 && (st.In == "" || st.In == "water"):
			sum += massG * (st.MassFraction*cpSolid + (1-st.MassFraction)*cpWater)
		case c.VolumeML > 0 || c.FromStep > 0:
			sum += massG * cpOrganic
		default:
			sum += massG * cpSolid
		}
	}
	return sum
}

// lowestBoiling names the solvent that boils first.
func lowestBoiling(charges []Charge) (name string, boilsC float64) {
	boilsC = math.Inf(1)
	for _, c := range charges {
		if b := boils(&c); c.Role == roleSolvent && b < boilsC {
			name, boilsC = c.Name, b
		}
	}
	return name, boilsC
}

// gasFlags counts what comes off, and hydrogen that is let in.
func gasFlags(s *Step, set *reactions.Conditions, full float64) {
	for _, g := range set.Gas {
		volumeL := g.Count * full * litresPerMol
		text := fmt.Sprintf("gas: %s, %s mol, about %s at 20 °C", g.SMILES, digits(g.Count*full), litres(volumeL))
		if hours := set.Hours[0]; hours > 0 {
			text += fmt.Sprintf(", %s/min if it comes evenly over %s", litres(volumeL/hours/60), hourText(hours))
		}
		if volumeL > muchGasL {
			s.stop("%s: outlet and scrubber for that, the feed or the heating sets the rate", text)
		} else {
			s.Mixture = append(s.Mixture, strings.ToUpper(text[:1])+text[1:]+": vent, never a closed vessel.")
		}
	}
	for _, c := range s.Charges {
		if c.Reagent == nil || !c.Reagent.Does("hydrogen-gas") {
			continue
		}
		volumeL := c.Mmol / 1000 * litresPerMol
		text := fmt.Sprintf("hydrogen: %s at 1 atm; leaked, it makes up to %s of air flammable", litres(volumeL), litres(volumeL/lowerLimitHydrogen))
		if volumeL > muchHydrogenL {
			s.stop("%s: no balloon work; an approved hydrogenator, gas alarm", text)
		} else {
			s.Mixture = append(s.Mixture, strings.ToUpper(text[:1])+text[1:]+": hood, purge three times, catalyst wet, no sparks.")
		}
	}
}

var lastGrams = regexp.MustCompile(`(\d+(?:\.\d+)?) ?(mg|g|kg)\b`)

// scaleFlags compare with ordinary bench scale and with the scale that the conditions were tried at.
func scaleFlags(s *Step, set *reactions.Conditions, full float64) {
	massG := full * s.Product.MolarMass
	if massG > manyGrams {
		s.stop("%s of product at full yield: outside ordinary bench work (%d g); new risk assessment with heat and gas data, a small run first", grams(massG), manyGrams)
	}
	triedG := triedGrams(set.TriedAt)
	if triedG == 0 {
		s.Mixture = append(s.Mixture, "Scale at which these conditions were tried: not stated.")
		return
	}
	factor := massG / triedG
	cooling := math.Pow(factor, -1.0/3)
	switch {
	case factor > stopFactor:
		s.stop("%.0f times the scale that is usual for these conditions (%s): cooling surface per volume %.2f of it; a small run first", factor, set.TriedAt, cooling)
	case factor > noteFactor:
		s.Mixture = append(s.Mixture, fmt.Sprintf("Scale: %.1f times what is usual for these conditions (%s); cooling surface per volume %.2f of it.", factor, set.TriedAt, cooling))
	}
}

// triedGrams reads the upper end of '5-50 g'; 0 if none is stated.
func triedGrams(text string) float64 {
	m := lastGrams.FindAllStringSubmatch(text, -1)
	if len(m) == 0 {
		return 0
	}
	last := m[len(m)-1]
	x, _ := strconv.ParseFloat(last[1], 64)
	return x * map[string]float64{"mg": 1e-3, "g": 1, "kg": 1000}[last[2]]
}
