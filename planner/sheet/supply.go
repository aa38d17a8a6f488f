package sheet

import (
	"strconv"
	"strings"

	"shelfward/reactions/reagent"
)

// Supply is the form in which a substance stands in its bottle.
type Supply struct {
	MolarMass      float64 // g/mol of the substance itself, in the form supplied (a hydrate with its water)
	PurityFraction float64 // 0-1, 0: not stated
	Strength       reagent.Strength
	DensityGPerML  float64 // of the form supplied, 0 unknown
	Gas            bool
	Solution       bool // sold as a solution only
}

// litresPerMol is the volume of one mol of gas at 20 C and 1 atm (ideal gas law).
const litresPerMol = 24.06

// Unknown reports whether no amount can be given: a solution without its strength, or a substance
// without a molar mass.
func (s Supply) Unknown() bool {
	return s.MolarMass <= 0 && s.Strength.MolarM <= 0 || s.Solution && !s.Strength.Known()
}

// Charge turns an amount of substance into mass and volume of the supplied form: V = n/c for a solution
// by molarity; m = n M/w for everything else, w the mass fraction, and V = m/d where the density is
// known; V = n x 24.06 L for a gas. A volume of 0 is unknown or that of a solid, a mass of 0 is unknown.
func (s Supply) Charge(mol float64) (massG, volumeML float64) {
	switch {
	case s.Unknown():
		return 0, 0
	case s.Strength.MolarM > 0:
		volumeML = 1000 * mol / s.Strength.MolarM
		return volumeML * s.DensityGPerML, volumeML
	case s.Gas && s.Strength.MassFraction == 0:
		return mol * s.MolarMass, 1000 * mol * litresPerMol
	}
	massG = mol * s.MolarMass / s.fraction()
	if s.DensityGPerML > 0 {
		volumeML = massG / s.DensityGPerML
	}
	return massG, volumeML
}

// Mol is the amount of substance in a mass of the supplied form; 0 if it cannot be known.
func (s Supply) Mol(massG float64) float64 {
	switch {
	case s.Unknown():
		return 0
	case s.Strength.MolarM > 0:
		if s.DensityGPerML <= 0 {
			return 0
		}
		return massG / s.DensityGPerML * s.Strength.MolarM / 1000
	}
	return massG * s.fraction() / s.MolarMass
}

// fraction is the mass fraction of the substance in the supplied form; what is not stated counts as pure.
func (s Supply) fraction() float64 {
	switch {
	case s.Strength.MassFraction > 0:
		return s.Strength.MassFraction
	case s.PurityFraction > 0:
		return s.PurityFraction
	}
	return 1
}

// Form says what the mass or volume is of: '95 %', '3.0 M in diethyl ether', 'gas', or that nobody
// stated the purity.
func (s Supply) Form() string {
	return strings.NewReplacer(" %", noBreak+"%", " M", noBreak+"M", " °C", noBreak+"°C").Replace(s.form())
}

func (s Supply) form() string {
	switch {
	case s.Solution && !s.Strength.Known():
		return "strength not stated"
	case s.Unknown():
		return massUnknown
	case s.Strength.MolarM > 0:
		text := strconv.FormatFloat(s.Strength.MolarM, 'f', -1, 64)
		if s.Strength.MolarM < 10 && s.Strength.MolarM == float64(int(s.Strength.MolarM)) {
			text += ".0"
		}
		return text + " M" + inText(s.Strength.In)
	case s.Strength.Known():
		return s.Strength.String()
	case s.Gas:
		return "gas, 20 °C"
	case s.PurityFraction > 0:
		return strconv.FormatFloat(float64(int(s.PurityFraction*1000+0.5))/10, 'f', -1, 64) + " %"
	}
	return assumedPure
}

// Forms of what nobody stated the purity of, and of what has no single molar mass.
const (
	assumedPure = "assumed pure"
	massUnknown = "molar mass unknown"
)

func inText(solvent string) string {
	if solvent == "" {
		return ""
	}
	return " in " + solvent
}
