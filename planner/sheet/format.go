package sheet

import (
	"fmt"
	"math"
)

// digits writes three significant digits, never more decimals than a balance shows.
func digits(x float64) string {
	switch {
	case math.IsNaN(x):
		return "?"
	case x == 0:
		return "0"
	case x >= 100:
		return fmt.Sprintf("%.0f", x)
	case x >= 10:
		return fmt.Sprintf("%.1f", x)
	case x >= 1:
		return fmt.Sprintf("%.2f", x)
	}
	return fmt.Sprintf("%.3f", x)
}

// grams writes a mass with its unit: mg below 0.1 g, kg from 1 kg.
func grams(g float64) string {
	switch {
	case g < 0.1:
		return digits(g*1000) + " mg"
	case g >= 1000:
		return digits(g/1000) + " kg"
	}
	return digits(g) + " g"
}

func millilitres(ml float64) string {
	if ml >= 1000 {
		return digits(ml/1000) + " L"
	}
	return digits(ml) + " mL"
}

func litres(l float64) string {
	if l < 1 {
		return digits(l*1000) + " mL"
	}
	return digits(l) + " L"
}
