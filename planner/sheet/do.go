package sheet

import (
	"fmt"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"shelfward/reactions"
)

// do fills the operations and, between them, the hold points.
func (w *writer) do(s *Step, set *reactions.Conditions, full float64) {
	s.operation("%s", setUp(s, set))
	s.hold("Identity and amount of the limiting material ("+s.limiting()+") checked", "do not start")
	w.holdAt(s, "start")
	if set.Order != "" {
		s.operation("%s", set.Order)
	} else {
		s.operation("Charge in the order of the table.")
	}
	w.holdAt(s, "run")
	s.operation("Keep at %s inside for %s (figures %s). Outside the window: stop the feed, cool, wait.", temperatureText(set.Temperature), hoursText(set.Hours), s.ConditionMark)
	if set.Watch != "" {
		s.operation("Take a sample. %s", set.Watch)
	}
	s.hold("Conversion complete by the watch lines", "wait one more half of the time, then stop and ask")
	w.workup(s, set, full*s.Charges[0].Equiv*s.From[0].MolarMass)
	s.operation("Weigh, label with route, step and date, keep a sample for the spectra.")
	s.hold(fmt.Sprintf("Product shown to be %s, M = %.2f g/mol (spectra, mass)", s.Product.Formula, s.Product.MolarMass), "keep the batch apart, do not carry it on")
}

func (s *Step) operation(format string, args ...any) {
	n := 1
	for _, t := range s.Tasks {
		n = max(n, t.Number+1)
	}
	s.Tasks = append(s.Tasks, Task{Number: n, Text: fmt.Sprintf(format, args...)})
}

func (s *Step) hold(text, otherwise string) {
	s.Tasks = append(s.Tasks, Task{Text: text, Otherwise: otherwise})
}

// limiting names the limiting material.
func (s *Step) limiting() string {
	i := slices.IndexFunc(s.Charges, func(c Charge) bool { return c.Limiting })
	return s.Charges[max(i, 0)].Name
}

// holdAt adds the hold points of the guide that belong to a moment.
func (w *writer) holdAt(s *Step, when string) {
	for i := range w.desk.Guide.Holds {
		h := &w.desk.Guide.Holds[i]
		if h.At.Value == when && slices.ContainsFunc(s.Charges, func(c Charge) bool {
			return c.Role != roleWorkup && !(when == "end" && c.spent()) && does(&c, h.Acts)
		}) {
			s.hold(h.Says, h.Otherwise)
		}
	}
}

var takesDown = regexp.MustCompile(`(?i)evaporat|distil|concentrat|take down|strip`)

// workup adds the work-up: the quench is proven after its first line, peroxides are looked for before the
// first line that takes solvent off.
func (w *writer) workup(s *Step, set *reactions.Conditions, firstG float64) {
	names := peroxideFormers(s.Charges)
	for i, l := range set.Workup {
		if len(names) > 0 && (takesDown.MatchString(l) || i == len(set.Workup)-1) {
			s.hold("Peroxide strip negative before "+strings.Join(names, ", ")+" is distilled or taken down; a tenth stays behind", "do not distil, do not take down; hand over as peroxide waste")
			names = nil
		}
		s.operation("%s", withVolumes(l, firstG))
		if i == 0 {
			w.holdAt(s, "end")
		}
	}
}

// setUp is the first operation: vessel, condenser, what the room must have.
func setUp(s *Step, set *reactions.Conditions) string {
	flask := s.Flask + " flask"
	if s.Flask == "" {
		flask = "No bench flask is large enough: split the batch. For each part: flask"
	}
	parts := []string{flask, "stirrer", "thermometer in the mixture"}
	for _, c := range s.Charges {
		if b := boils(&c); (c.Role == roleSolvent || c.Role == roleReactant) && !c.Gas && set.Temperature[1] > b-5 {
			parts = append(parts, fmt.Sprintf("reflux condenser (%s boils at %.0f °C)", c.Name, b))
			break
		}
	}
	if len(set.Gas) > 0 {
		parts = append(parts, "open gas outlet")
	}
	return "Set up: " + strings.Join(append(parts, set.Needs...), ", ") + "."
}

// boils is the boiling point of a charge in C, +Inf if it is not known.
func boils(c *Charge) float64 {
	if c.Reagent == nil || c.Reagent.BoilsC == nil {
		return math.Inf(1)
	}
	return *c.Reagent.BoilsC
}

var perGram = regexp.MustCompile(`(\d+(?:\.\d+)?) mL per g of (?:the )?(?:substrate|product|reactant|starting material)`)

// withVolumes writes the volume at this scale behind every '10 mL per g of substrate'.
func withVolumes(text string, firstG float64) string {
	return perGram.ReplaceAllStringFunc(text, func(found string) string {
		x, err := strconv.ParseFloat(perGram.FindStringSubmatch(found)[1], 64)
		if err != nil {
			return found
		}
		return fmt.Sprintf("%s (here %s)", found, millilitres(x*firstG))
	})
}

// peroxideFormers lists the charges that form peroxides on standing, each once.
func peroxideFormers(charges []Charge) (names []string) {
	for _, c := range charges {
		if c.Reagent != nil && c.Reagent.Peroxides != "" && !slices.Contains(names, c.Name) {
			names = append(names, c.Name)
		}
	}
	return names
}
