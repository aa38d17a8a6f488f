package identify

import "math"

// trace is a residual solvent or a common impurity: where it shows in CDCl3 (ppm). Values: Gottlieb,
// Kotlyar and Nudelman, J. Org. Chem. 62 (1997) 7512, recalled (memory).
type trace struct {
	name           string
	proton, carbon []float64
}

// tubeSolvents are the lines of the deuterated solvents themselves and of the water in them.
var tubeSolvents = map[string][]trace{
	"CDCl3":      {{"chloroform in CDCl3", []float64{7.26}, []float64{77.16, 77.0, 77.3, 76.8}}, {"water in CDCl3", []float64{1.56}, nil}},
	"DMSO-d6":    {{"DMSO in DMSO-d6", []float64{2.50}, []float64{39.5}}, {"water in DMSO-d6", []float64{3.33}, nil}},
	"CD3OD":      {{"methanol in CD3OD", []float64{3.31}, []float64{49.0}}, {"water in CD3OD", []float64{4.87}, nil}},
	"C6D6":       {{"benzene in C6D6", []float64{7.16}, []float64{128.06}}},
	"acetone-d6": {{"acetone in acetone-d6", []float64{2.05}, []float64{29.84, 206.26}}},
	"D2O":        {{"water in D2O", []float64{4.79}, nil}},
	"CD3CN":      {{"acetonitrile in CD3CN", []float64{1.94}, []float64{1.32, 118.26}}},
	"CD2Cl2":     {{"dichloromethane in CD2Cl2", []float64{5.32}, []float64{53.84}}},
}

// markSolvents marks signals that are almost surely the tube's own: at the solvent's place and
// without an integral. Everything else stays in the score.
func (d *Data) markSolvents() {
	for _, t := range tubeSolvents[d.ProtonSolvent] {
		for i := range d.Proton {
			x := &d.Proton[i]
			if x.H == 0 && x.Ratio == 0 && near(x.Span, t.proton, 0.03) {
				x.Solvent = t.name
				d.Doubts = append(d.Doubts, "The 1H signal at "+x.Span.String()+" without an integral is taken for "+t.name+" and left out of the score.")
			}
		}
	}
	for _, t := range tubeSolvents[d.CarbonSolvent] {
		for i := range d.Carbon {
			x := &d.Carbon[i]
			if x.Attached < 0 && near(x.Span, t.carbon, 0.12) {
				x.Solvent = t.name
				d.Doubts = append(d.Doubts, "The 13C line at "+x.Span.String()+" is taken for "+t.name+" and left out of the score.")
			}
		}
	}
}

func near(s Span, places []float64, within float64) bool {
	for _, p := range places {
		if math.Abs(s.Mid()-p) <= within {
			return true
		}
	}
	return false
}
