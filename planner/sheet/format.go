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
	case x >= 99.95:
		return fmt.Sprintf("%.0f", x)
	case x >= 9.995:
		return fmt.Sprintf("%.1f", x)
	case x >= 0.9995:
		return fmt.Sprintf("%.2f", x)
	}
	return fmt.Sprintf("%.3f", x)
}

// grams writes a mass with its unit: mg below 0.1 g, kg from 1 kg.
func grams(g float64) string {
	switch {
	case g < 0.0995:
		return digits(g*1000) + " mg"
	case g >= 999.5:
		return digits(g/1000) + " kg"
	}
	return digits(g) + " g"
}

func millilitres(ml float64) string {
	if ml >= 999.5 {
		return digits(ml/1000) + " L"
	}
	return digits(ml) + " mL"
}

// millilitresWhole writes the size of a flask.
func millilitresWhole(ml float64) string {
	if ml >= 1000 {
		return fmt.Sprintf("%.0f L", ml/1000)
	}
	return fmt.Sprintf("%.0f mL", ml)
}

func litres(l float64) string { return millilitres(1000 * l) }

// percent writes a fraction as whole per cent.
func percent(x float64) string { return fmt.Sprintf("%.0f", 100*x) }

func temperatureText(t [2]float64) string {
	if t[0] == t[1] {
		return fmt.Sprintf("%.0f °C", t[0])
	}
	return fmt.Sprintf("%.0f to %.0f °C", t[0], t[1])
}

func hoursText(h [2]float64) string {
	switch {
	case h[0] == h[1]:
		return hourText(h[0])
	case h[0] >= 1 && h[1] >= 1:
		return fmt.Sprintf("%.3g to %.3g h", h[0], h[1])
	}
	return hourText(h[0]) + " to " + hourText(h[1])
}

func hourText(x float64) string {
	if x < 1 {
		return fmt.Sprintf("%.0f min", x*60)
	}
	return fmt.Sprintf("%.3g h", x)
}
