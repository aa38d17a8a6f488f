package reagent

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"
)

// Strength is how strong a supplied form is: exactly one of MolarM and MassFraction is set, or none.
type Strength struct {
	MolarM       float64 // mol/L
	MassFraction float64 // 0-1
	In           string  // what it is dissolved or dispersed in; may be empty
}

// Known reports whether a strength is given.
func (s Strength) Known() bool { return s.MolarM > 0 || s.MassFraction > 0 }

// String writes the strength as ParseStrength reads it; empty if none is given.
func (s Strength) String() string {
	var text string
	switch {
	case s.MolarM > 0:
		text = strconv.FormatFloat(s.MolarM, 'f', -1, 64) + " M"
	case s.MassFraction > 0:
		text = strconv.FormatFloat(round6(s.MassFraction*100), 'f', -1, 64) + " %"
	default:
		return ""
	}
	if s.In != "" {
		text += " in " + s.In
	}
	return text
}

func round6(x float64) float64 {
	y, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'f', 6, 64), 64)
	return y
}

var strengthText = regexp.MustCompile(`^(?i)(?:about |ca\.? |~ ?)?(\d+(?:[.,]\d+)?) ?(%|wt ?%|w/w ?%|% ?w/w|mol/l|mol l-1|molar|m|n|mm)(?:,? (?:in|on) (.+))?$`)

// ParseStrength reads '3.0 M', '2.5 M in hexanes', '37 %', '60 % in oil' or '10 % on carbon' (decimal
// comma too). Percent is by mass. It fails on anything else, on zero and on more than 100 %.
func ParseStrength(text string) (Strength, error) {
	m := strengthText.FindStringSubmatch(strings.TrimSpace(letters.Replace(text)))
	if m == nil {
		return Strength{}, fmt.Errorf("expected a strength such as '3.0 M in diethyl ether' or '37 %%', found %q", text)
	}
	x, err := strconv.ParseFloat(strings.Replace(m[1], ",", ".", 1), 64)
	if err != nil || x <= 0 {
		return Strength{}, fmt.Errorf("a strength is more than zero, found %q", text)
	}
	s := Strength{In: strings.TrimSpace(m[3])}
	switch unit := strings.ToLower(m[2]); {
	case strings.Contains(unit, "%"):
		if x > 100 {
			return Strength{}, fmt.Errorf("more than 100 %% in %q", text)
		}
		s.MassFraction = x / 100
	case unit == "mm":
		s.MolarM = x / 1000
	default:
		s.MolarM = x
	}
	if s.MolarM > 30 {
		return Strength{}, fmt.Errorf("no solution is as strong as %q", text)
	}
	return s, nil
}

var casForm = regexp.MustCompile(`^(\d{2,7})-(\d\d)-(\d)$`)

// LooksLikeCAS reports whether a text has the form of a CAS number, right or wrong.
func LooksLikeCAS(text string) bool { return casForm.MatchString(text) }

func checkCAS(number string) error {
	m := casForm.FindStringSubmatch(number)
	if m == nil {
		return fmt.Errorf("%q is not a CAS number: expected digits as in 64-17-5", number)
	}
	digits := m[1] + m[2]
	sum := 0
	for i := range digits {
		sum += (len(digits) - i) * int(digits[i]-'0')
	}
	if want := byte('0' + sum%10); m[3][0] != want {
		return fmt.Errorf("CAS number %s: the check digit should be %c; a digit is wrong", number, want)
	}
	return nil
}
