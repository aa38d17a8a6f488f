package formula

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"shelfward/molecule"
)

// electronMass in Da (CODATA, value from memory).
const electronMass = 0.00054858

// shift is what an ion's m/z exceeds the neutral mass by, in Da (isotope masses from AME, values from memory).
func (i Ion) shift() float64 {
	const h, na, n = 1.00782503, 22.98976928, 14.00307400
	switch i {
	case IonMH:
		return h - electronMass
	case IonMNa:
		return na - electronMass
	case IonMNH4:
		return n + 4*h - electronMass
	case IonMlessH:
		return -(h - electronMass)
	}
	return -electronMass
}

// String writes the ion as case files do.
func (i Ion) String() string {
	return [...]string{"M+.", "M+H", "M+Na", "M+NH4", "M-H"}[min(i, IonMlessH)]
}

// ParseIon reads M+. M+H M+Na M+NH4 M-H, with or without brackets and charge ('[M+H]+').
func ParseIon(text string) (Ion, error) {
	s := strings.NewReplacer("[", "", "]", "", " ", "", "•", ".", "·", ".").Replace(text)
	s = strings.TrimRight(s, "+-.")
	if s == "M" {
		return IonM, nil
	}
	for i := IonMH; i <= IonMlessH; i++ {
		if s == i.String() {
			return i, nil
		}
	}
	return IonM, fmt.Errorf("ion %q is not known (expected M+. M+H M+Na M+NH4 or M-H)", text)
}

func ppm(x ExactMass) float64 {
	if x.PPM > 0 {
		return x.PPM
	}
	return 5
}

// prepare checks the evidence and fills in defaults.
func prepare(in Evidence) (*evidence, error) {
	ev := &evidence{Evidence: in, weights: atomic()}
	if ev.Tolerance == 0 {
		ev.Tolerance = 0.4
	}
	if ev.MaxCandidates == 0 {
		ev.MaxCandidates = 20
	}
	sum := 0.0
	for _, a := range ev.Analysis {
		if int(a.Element) >= len(ev.percent) || ev.weights.exact[a.Element] == 0 {
			return nil, fmt.Errorf("combustion analysis of %s is not understood (expected C H N S F Cl Br I P Si B)", a.Element.Symbol())
		}
		if a.Element == oxygen {
			return nil, fmt.Errorf("combustion analysis does not measure oxygen; it is found by difference")
		}
		if len(a.Percent) == 0 {
			continue
		}
		mean := 0.0
		if spread := slices.Max(a.Percent) - slices.Min(a.Percent); spread > 2*ev.Tolerance {
			ev.doubts = append(ev.doubts, fmt.Sprintf("The runs for %s differ by %.2f percent points, more than twice the tolerance.", a.Element.Symbol(), spread))
		}
		for _, p := range a.Percent {
			if !(p >= 0 && p <= 100) {
				return nil, fmt.Errorf("%s: %g %% is no mass fraction", a.Element.Symbol(), p)
			}
			mean += p / float64(len(a.Percent))
		}
		ev.percent[a.Element], ev.measured[a.Element] = mean, true
		sum += mean
	}
	if sum > 100+ev.Tolerance*float64(len(ev.Analysis)) {
		return nil, fmt.Errorf("the combustion analysis adds up to %.2f %%", sum)
	}
	for _, e := range ev.Hint {
		if int(e) < len(ev.hinted) {
			ev.hinted[e] = true
		}
	}
	for _, x := range ev.Exact {
		if !(x.MZ > 0) || ppm(x)*x.MZ > 1e6 {
			return nil, fmt.Errorf("m/z %g within %g ppm is no exact mass", x.MZ, ppm(x))
		}
		ev.neutral = append(ev.neutral, x.MZ-x.Ion.shift())
	}
	ev.pattern = ev.readPattern()
	for _, e := range ev.pattern.halogens() {
		ev.hinted[e] = true
	}
	return ev, nil
}

// judge tests f against the evidence; the second result is false if f is excluded. Words asks for
// Reasons, which cost most of the time.
func (ev *evidence) judge(f *molecule.Formula, words bool) (Candidate, bool) {
	c := Candidate{Formula: *f, MolarMass: ev.weights.sum(f, &ev.weights.average)}
	say := func(format string, args ...any) {
		if words {
			c.Reasons = append(c.Reasons, fmt.Sprintf(format, args...))
		}
	}
	var squares, n float64
	// add notes a residual in units of its tolerance; the standard deviation is taken as half the tolerance.
	add := func(x float64) bool {
		squares += x * x
		n++
		c.Penalty += 2 * x * x
		return math.Abs(x) <= 1+1e-9 // the limit itself still agrees, whatever the rounding
	}
	for e, measured := range ev.measured {
		if !measured {
			continue
		}
		calculated := 100 * float64(f.Count[e]) * ev.weights.average[e] / c.MolarMass
		if !add((ev.percent[e] - calculated) / ev.Tolerance) {
			return c, false
		}
		say("%s %.2f %% found, %.2f %% calculated", molecule.Element(e).Symbol(), ev.percent[e], calculated)
	}
	exact := ev.weights.sum(f, &ev.weights.exact)
	for i, x := range ev.Exact {
		off := (ev.neutral[i] - exact) / x.MZ * 1e6
		if !add(off / ppm(x)) {
			return c, false
		}
		say("m/z %.4f found, %.4f calculated for %s (%+.1f ppm)", x.MZ, exact+x.Ion.shift(), x.Ion, off)
	}
	if ev.MolecularIon > 0 {
		if int(ev.weights.sum(f, &ev.weights.nominal)) != ev.MolecularIon {
			return c, false
		}
		say("nominal mass %d as found", ev.MolecularIon)
	}
	if ev.MolarMass > 0 {
		if !add((ev.MolarMass - c.MolarMass) / (0.01 * ev.MolarMass)) {
			return c, false
		}
		say("molar mass %.4g found, %.2f calculated", ev.MolarMass, c.MolarMass)
	}
	if n > 0 {
		c.Error = math.Sqrt(squares / n)
	}
	ev.weigh(&c, say)
	if ev.Score != nil {
		p, why := ev.Score(*f)
		if math.IsInf(p, 1) {
			return c, false
		}
		c.Penalty += p
		if why != "" {
			say("%s", why)
		}
	}
	return c, true
}

// sum returns the mass of f on one of the scales of w.
func (w *weights) sum(f *molecule.Formula, scale *[119]float64) float64 {
	m := 0.0
	for _, e := range considered {
		m += float64(f.Count[e]) * scale[e]
	}
	return m
}

// surprise is what the presence of an element costs when nothing asked for it: the log of how much
// rarer it is than C, H and O in samples handed in for identification (our judgement, from memory).
var surprise = map[molecule.Element]float64{nitrogen: 1, chlorine: 3, sulfur: 3, bromine: 3.5, fluorine: 3.5, iodine: 4.5, silicon: 5, phosphor: 5, boron: 6}

// weigh adds what is known of organic compounds at large and the isotope pattern. The limits on
// ratios follow Kind, Fiehn, BMC Bioinformatics 8 (2007) 105 (value from memory), as soft ones.
func (ev *evidence) weigh(c *Candidate, say func(string, ...any)) {
	f := &c.Formula
	for _, e := range considered[3:] {
		if f.Count[e] > 0 && !ev.measured[e] && !ev.hinted[e] {
			c.Penalty += surprise[e] + 0.3*float64(f.Count[e]-1)
			if e != nitrogen {
				say("%s is assumed: nothing else points to it", e.Symbol())
			}
		}
	}
	carbons := float64(f.Count[carbon])
	hetero := float64(f.Count[nitrogen] + f.Count[oxygen])
	c.Penalty += 0.25*math.Max(0, hetero-2) + 3*math.Max(0, hetero/carbons-0.75)
	if h := float64(f.Count[hydrogen]) / carbons; h < 0.4 {
		c.Penalty += 6 * (0.4 - h)
	}
	if u := f.Unsaturation(); u > 0.75*carbons+1 {
		c.Penalty += u - 0.75*carbons - 1
	}
	if len(ev.neutral) == 0 && ev.MolecularIon == 0 && ev.MolarMass == 0 {
		c.Penalty += 0.02 * c.MolarMass // the smallest formula says least beyond the evidence
	}
	p, why := ev.pattern.compare(f)
	c.Penalty += p
	if why != "" {
		say("%s", why)
	}
}

// whyNone says why no formula was found.
func (ev *evidence) whyNone() string {
	var parts []string
	if len(ev.Analysis) > 0 {
		parts = append(parts, fmt.Sprintf("the combustion analysis within %.2g percent points", ev.Tolerance))
	}
	if len(ev.Exact) > 0 {
		parts = append(parts, fmt.Sprintf("the exact mass within %.3g ppm", ppm(ev.Exact[0])))
	}
	if ev.MolecularIon > 0 {
		parts = append(parts, fmt.Sprintf("a molecular ion at m/z %d", ev.MolecularIon))
	}
	if ev.MolarMass > 0 {
		parts = append(parts, fmt.Sprintf("a molar mass of %.5g within 1 %%", ev.MolarMass))
	}
	return "No formula of a closed-shell molecule agrees with " + strings.Join(parts, " and ") + "."
}
