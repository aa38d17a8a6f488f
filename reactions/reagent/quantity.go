package reagent

import (
	"regexp"
	"strconv"
	"strings"
)

// quantity is a number with its unit, read at the beginning of a text.
type quantity struct {
	length      int // bytes read
	temperature *[2]float64
	ph          *[2]float64
	strength    Strength
	equivalents float64
	facts       []string
	upTo        bool // 'below 25 C': the temperature is an upper end
	later       bool // an ordinal that begins a later stage: '2.', '(ii)'
}

const (
	number = `(-?\d+(?:[.,]\d+)?)`
	span   = `(?: ?(?:-|to|\.\.) ?(-?\d+(?:[.,]\d+)?))?`
	end    = `(?:$|[ ,;:)])`
)

// ordinal is a number in brackets that begins a step.
var ordinal = regexp.MustCompile(`^()()\((\d|i{1,3}|iv|v|vi)\) ?`)

// quantities are tried in this order; each pattern is anchored and its first two groups are numbers.
var quantities = []struct {
	pattern *regexp.Regexp
	use     func(q *quantity, low, high float64, m []string)
}{
	{regexp.MustCompile(`^(?:below|under|not above|not over|up to|<|max\.?|at most) ()` + number + ` ?(?:°|deg(?:rees?)?\.?)? ?c` + end), func(q *quantity, _, high float64, m []string) {
		q.temperature, q.upTo = &[2]float64{high - 20, high}, true
	}},
	{regexp.MustCompile(`^()()(?:[1-9]\d?):([1-9]\d?)` + end), useNothing},
	{regexp.MustCompile(`^` + number + span + ` ?(?:°|deg(?:rees?)?\.?) ?(?:c\b)?`), useCelsius},
	{regexp.MustCompile(`^` + number + span + ` ?c` + end), useCelsius},
	{regexp.MustCompile(`^(\d{2,3})` + span + ` ?k` + end), func(q *quantity, low, high float64, _ []string) {
		useCelsius(q, low-273.15, high-273.15, nil)
	}},
	{regexp.MustCompile(`^ph ?(?:=|<|>|~|about|ca\.?|below|above)? ?` + number + span + end), func(q *quantity, low, high float64, _ []string) {
		q.ph = &[2]float64{low, high}
	}},
	{regexp.MustCompile(`^` + number + span + ` ?mol[ -]?%`), func(q *quantity, low, _ float64, _ []string) {
		q.equivalents, q.facts = low/100, []string{"catalytic"}
	}},
	{regexp.MustCompile(`^` + number + span + ` ?(?:wt\.? ?%|%(?: ?(?:w/w|w/v|v/v|wt|by mass|by weight))?)(?: aq\b\.?)?`), func(q *quantity, low, _ float64, _ []string) {
		if low > 0 && low <= 100 {
			q.strength = Strength{MassFraction: low / 100}
		}
	}},
	{regexp.MustCompile(`^` + number + span + ` ?(?:m|n|mol/l|molar|normal)` + end), func(q *quantity, low, _ float64, _ []string) {
		if low > 0 {
			q.strength = Strength{MolarM: low}
		}
	}},
	{regexp.MustCompile(`^` + number + span + ` ?(?:molar )?(?:equivs?\.?|equivalents?|eqs?\.?|mol|moles?)(?: of)?` + end), useEquivalents},
	{regexp.MustCompile(`^(\d+(?:[.,]\d+)?)()x` + end), useEquivalents},
	{regexp.MustCompile(`^` + number + span + ` ?(?:atm|bar|psi|psig|mpa|kpa|kbar|kg/cm2)` + end), usePressure},
	{regexp.MustCompile(`^` + number + span + ` ?(?:mm ?hg|torr|mbar|mm)` + end), func(q *quantity, _, _ float64, _ []string) { q.facts = []string{"vacuum"} }},
	{regexp.MustCompile(`^` + number + span + ` ?nm` + end), func(q *quantity, _, _ float64, _ []string) { q.facts = []string{"light"} }},
	{regexp.MustCompile(`^` + number + span + ` ?(?:h|hr|hrs|hours?|mins?\.?|minutes?|days?|d|s|secs?|seconds?|weeks?|months?|g|mg|kg|ml|l|mmol|w|v|ma|times|drops?|portions?|volumes?|vol)` + end), useNothing},
	{ordinal, useOrdinal},
	{regexp.MustCompile(`^()()(\d|i{1,3}|iv|v|vi)[.)]( |$)`), useOrdinal},
	{regexp.MustCompile(`^()()([a-d])\)( |$)`), useOrdinal},
	{regexp.MustCompile(`^(\d+(?:[.,]\d+)?)(?: ?- ?(\d+))?` + end), useEquivalents},
}

// numberWords are small numbers in words before 'equivalents' and 'moles'.
var numberWords = regexp.MustCompile(`^(an?|one|two|three|four|five|six|half an?|1/2|twice)(?: molar)? (?:equivalents?|equivs?\.?|eq\.?|moles?|mol)(?: of)?` + end)

var numberOf = map[string]float64{"a": 1, "an": 1, "one": 1, "two": 2, "three": 3, "four": 4, "five": 5, "six": 6, "half a": 0.5, "half an": 0.5, "1/2": 0.5, "twice": 2}

// readQuantity reads a quantity at the beginning of a folded text; length 0 if there is none.
func readQuantity(text string) quantity {
	for _, c := range quantities {
		m := c.pattern.FindStringSubmatch(text)
		if m == nil {
			continue
		}
		q := quantity{length: len(strings.TrimRight(m[0], " ,;:)"))}
		if strings.HasSuffix(m[0], ")") && strings.HasPrefix(m[0], "(") || c.pattern == ordinal {
			q.length = len(strings.TrimRight(m[0], " "))
		}
		low, high := toNumber(m[1]), toNumber(m[1])
		if m[2] != "" {
			high = toNumber(m[2])
		}
		c.use(&q, min(low, high), max(low, high), m)
		return q
	}
	if m := numberWords.FindStringSubmatch(text); m != nil {
		q := quantity{length: len(strings.TrimRight(m[0], " ,;:)"))}
		useEquivalents(&q, numberOf[m[1]], numberOf[m[1]], m)
		return q
	}
	return quantity{}
}

func toNumber(s string) float64 {
	x, _ := strconv.ParseFloat(strings.Replace(s, ",", ".", 1), 64)
	return x
}

func useCelsius(q *quantity, low, high float64, _ []string) {
	if low < -273.15 || high > 2000 {
		return
	}
	q.temperature = &[2]float64{low, high}
}

// useEquivalents notes the number; exactly one equivalent is a limit that a chemist sets on purpose, two and
// more are an excess over what one group takes.
func useEquivalents(q *quantity, low, high float64, m []string) {
	q.equivalents = high
	switch {
	case high == 1 && strings.ContainsAny(m[0], "eqmo"):
		q.facts = []string{"limited"}
	case low >= 2 && strings.ContainsAny(m[0], "eqmo"):
		q.facts = []string{"excess"}
	}
}

// usePressure takes one atmosphere for no pressure.
func usePressure(q *quantity, _, high float64, m []string) {
	unit := map[string]float64{"psi": 0.068, "psig": 0.068, "mpa": 9.87, "kpa": 0.00987, "kbar": 987}
	for name, factor := range unit {
		if strings.Contains(m[0], name) {
			high *= factor
			break
		}
	}
	if high > 1.5 {
		q.facts = []string{"pressure"}
	}
}

func useNothing(*quantity, float64, float64, []string) {}

func useOrdinal(q *quantity, _, _ float64, m []string) {
	q.later = m[3] != "1" && m[3] != "i" && m[3] != "a"
}
