package shelf

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"
)

// Amount is a quantity of a supplied form: one of its fields is set, or none.
type Amount struct {
	Grams, Millilitres, Mol float64
}

// Known reports whether an amount is stated.
func (a Amount) Known() bool { return a != Amount{} }

// String writes the amount with the unit that suits its size; empty if none is stated.
func (a Amount) String() string {
	switch {
	case a.Grams >= 1000:
		return trim(a.Grams/1000) + " kg"
	case a.Grams >= 1:
		return trim(a.Grams) + " g"
	case a.Grams > 0:
		return trim(a.Grams*1000) + " mg"
	case a.Millilitres >= 1000:
		return trim(a.Millilitres/1000) + " L"
	case a.Millilitres > 0:
		return trim(a.Millilitres) + " mL"
	case a.Mol >= 1:
		return trim(a.Mol) + " mol"
	case a.Mol > 0:
		return trim(a.Mol*1000) + " mmol"
	}
	return ""
}

func trim(x float64) string { return strconv.FormatFloat(x, 'g', 6, 64) }

var amountText = regexp.MustCompile(`^(?:(\d+) ?[x×*] ?)?(\d+(?:[.,]\d+)?|\d{1,3}(?:[ ']\d{3})+) ?(kg|g|mg|µg|ug|t|l|ml|cl|dl|µl|ul|mmol|mol)$`)

// unitFactor converts to grams, millilitres or mol.
var unitFactor = map[string]Amount{
	"t": {Grams: 1e6}, "kg": {Grams: 1000}, "g": {Grams: 1}, "mg": {Grams: 1e-3}, "ug": {Grams: 1e-6},
	"l": {Millilitres: 1000}, "dl": {Millilitres: 100}, "cl": {Millilitres: 10}, "ml": {Millilitres: 1}, "ul": {Millilitres: 1e-3},
	"mol": {Mol: 1}, "mmol": {Mol: 1e-3},
}

// maxAmount bounds what one row may hold, in grams, millilitres or mol: a thousand tonnes.
const maxAmount = 1e9

// ParseAmount reads '500 g', '2.5 L', '2,5 L' or '2 x 500 mL'; capitals do not matter. It fails on
// zero, on a missing unit and on anything else.
func ParseAmount(text string) (Amount, error) {
	t := strings.ToLower(strings.Join(strings.Fields(text), " "))
	t = strings.NewReplacer("μ", "u", "µ", "u", "litres", "l", "litre", "l", "liter", "l", "grams", "g", "gram", "g").Replace(t)
	m := amountText.FindStringSubmatch(t)
	if m == nil {
		return Amount{}, fmt.Errorf("expected an amount such as '500 g', '2.5 L' or '2 x 500 mL', found %q", text)
	}
	x, err := parseNumber(m[2])
	if err != nil {
		return Amount{}, err
	}
	if m[1] != "" {
		count, err := strconv.Atoi(m[1])
		if err != nil {
			return Amount{}, fmt.Errorf("no such count of bottles in %q", text)
		}
		x *= float64(count)
	}
	if x <= 0 || x > maxAmount {
		return Amount{}, fmt.Errorf("an amount is more than zero and can be stored, found %q", text)
	}
	f := unitFactor[m[3]]
	return Amount{Grams: x * f.Grams, Millilitres: x * f.Millilitres, Mol: x * f.Mol}, nil
}

var plainNumber = regexp.MustCompile(`^\d+(?:[.,]\d+)?$`)

// parseNumber reads a number with a decimal point or comma.
func parseNumber(text string) (float64, error) {
	t := strings.NewReplacer(" ", "", "'", "").Replace(strings.TrimSpace(text))
	if !plainNumber.MatchString(t) {
		return 0, fmt.Errorf("expected a number, found %q", text)
	}
	return strconv.ParseFloat(strings.Replace(t, ",", ".", 1), 64)
}
