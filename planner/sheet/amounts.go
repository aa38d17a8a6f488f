package sheet

import (
	"fmt"
	"math"
)

// scale decides for how much the amounts are printed: doubt allows a scout run only.
func (w *writer) scale() {
	w.makeMol = w.options.MakeMol
	doubtful := 0
	for _, s := range w.route.Steps {
		if len(s.Objections) > 0 {
			doubtful++
		}
	}
	switch {
	case doubtful > 0 && w.options.Accept == "" && w.out.AskedG > ScoutGrams:
		w.makeMol = ScoutGrams / w.out.Target.MolarMass
		w.doubt("%s doubtful, so the whole route is: amounts are for a scout run of %s of target, not for the %s asked. "+
			"To work at full scale say --accept 'reason'.", countSteps(doubtful), grams(ScoutGrams), grams(w.out.AskedG))
	case doubtful > 0 && w.options.Accept != "":
		w.out.Accepted = w.options.Accept
		w.doubt("%s doubtful; full scale was asked for with the reason: %s", countSteps(doubtful), w.options.Accept)
	case doubtful > 0:
		w.doubt("%s doubtful: a scout run.", countSteps(doubtful))
	}
	w.out.MakeG = w.makeMol * w.out.Target.MolarMass
	w.out.MakeMmol = w.makeMol * 1000
}

func (w *writer) doubt(format string, args ...any) {
	w.out.Doubts = append(w.out.Doubts, fmt.Sprintf(format, args...))
}

func countSteps(n int) string {
	if n == 1 {
		return "One step is"
	}
	return fmt.Sprintf("%d steps are", n)
}

// backCalculate finds how much of every product must be isolated: n = n(target) x equivalents / yields,
// at usual yields and at low ones.
func (w *writer) backCalculate() {
	n := len(w.route.Steps)
	w.made, w.sure = make([]float64, n), make([]float64, n)
	w.made[n-1], w.sure[n-1] = w.makeMol, w.makeMol
	for i := n - 1; i >= 0; i-- {
		s := &w.route.Steps[i]
		for j, by := range s.MadeBy {
			if by > 0 {
				w.made[by-1] += w.made[i] / s.Yield.Usual * s.Equivalents[j]
				w.sure[by-1] += w.sure[i] / s.Yield.Low * s.Equivalents[j]
			}
		}
	}
}

// sureFactor is by how much every charge of step i grows if all yields from here on come out low.
func (w *writer) sureFactor(i int) float64 {
	s := &w.route.Steps[i]
	return (w.sure[i] / s.Yield.Low) / (w.made[i] / s.Yield.Usual)
}

// comesOut works out what is isolated when every step comes out low or high, with the first charges as
// printed and every later step scaled to what came out of the one before.
func (w *writer) comesOut() {
	low, high := make([]float64, len(w.made)), make([]float64, len(w.made))
	for i, s := range w.route.Steps {
		lowest, highest := math.Inf(1), math.Inf(1)
		for _, by := range s.MadeBy {
			if by > 0 {
				lowest, highest = math.Min(lowest, low[by-1]), math.Min(highest, high[by-1])
			}
		}
		if math.IsInf(lowest, 1) {
			lowest, highest = 1, 1
		}
		low[i] = lowest * s.Yield.Low / s.Yield.Usual
		high[i] = highest * s.Yield.High / s.Yield.Usual
	}
	last := len(low) - 1
	w.out.LowG, w.out.HighG = w.out.MakeG*low[last], w.out.MakeG*high[last]
	for i := range w.route.Steps {
		w.out.SureFactor = math.Max(w.out.SureFactor, w.sureFactor(i))
	}
}
