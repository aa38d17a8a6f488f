package route

import (
	"fmt"
	"math"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"shelfward/reactions"
	"shelfward/rules"
)

// Bench is what the room can do, as the bench file says. What it does not mention is taken as there.
type Bench struct {
	File          string       `yaml:"-"`
	Coldest       *float64     `yaml:"coldest"` // C, lowest temperature a bath reaches
	Hottest       *float64     `yaml:"hottest"` // C
	Has           []rules.Text `yaml:"has"`
	Lacks         []rules.Text `yaml:"lacks"`
	LargestFlask  rules.Text   `yaml:"largest_flask"` // '2 L'
	NeedsApproval []rules.Text `yaml:"needs_approval"`
	Never         []rules.Text `yaml:"never"` // words as for --avoid

	flaskML float64 // 0: not said
}

// LoadBench reads a bench file. Errors name file and line.
func LoadBench(path string) (*Bench, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("bench file: %w", err)
	}
	var b Bench
	if err := rules.Decode(path, data, &b); err != nil {
		return nil, err
	}
	b.File = path
	if b.Coldest != nil && b.Hottest != nil && *b.Coldest > *b.Hottest {
		return nil, fmt.Errorf("%s: coldest: %g C is above hottest: %g C", path, *b.Coldest, *b.Hottest)
	}
	if b.LargestFlask.Written() {
		if b.flaskML, err = readVolume(b.LargestFlask.Value); err != nil {
			return nil, b.LargestFlask.Errorf(path, "largest_flask: %v", err)
		}
	}
	return &b, nil
}

var volume = regexp.MustCompile(`^([0-9]+(?:\.[0-9]+)?) ?(mL|ml|L|l)$`)

// readVolume reads '2 L' or '500 mL' in mL.
func readVolume(text string) (float64, error) {
	m := volume.FindStringSubmatch(strings.TrimSpace(text))
	if m == nil {
		return 0, fmt.Errorf("%q: a volume such as 2 L or 500 mL was expected", text)
	}
	v, err := strconv.ParseFloat(m[1], 64)
	if strings.EqualFold(m[2], "L") {
		v *= 1000
	}
	if err != nil || v <= 0 {
		return 0, fmt.Errorf("%q: a volume above 0 was expected", text)
	}
	return v, nil
}

// needsNamed is how many needs an error names.
const needsNamed = 8

// check says whether every word of the file means something: what lacks or needs approval must be
// something that conditions need or charge, or the line would promise what it does not do.
func (b *Bench) check(w *World, known vocabulary) error {
	for _, key := range []struct {
		name  string
		words []rules.Text
	}{{"lacks", b.Lacks}, {"needs_approval", b.NeedsApproval}} {
		for _, word := range key.words {
			if !b.means(word.Value, w, known) {
				hint := near(word.Value, append(known.needs[:len(known.needs):len(known.needs)], known.all...))
				if hint == "" && len(known.needs) > 0 {
					hint = "; they need among others " + strings.Join(known.needs[:min(len(known.needs), needsNamed)], ", ")
				}
				return word.Errorf(b.File, "%s: %q is nothing that the loaded rules need or charge%s", key.name, word.Value, hint)
			}
		}
	}
	return nil
}

// restrains says whether the file rules anything out before a route is looked at; the words under never:
// stand for themselves.
func (b *Bench) restrains() bool { return b.Coldest != nil || b.Hottest != nil || len(b.Lacks) > 0 }

// means says whether something that conditions need or charge is called so.
func (b *Bench) means(word string, w *World, known vocabulary) bool {
	if known.substances[strings.ToLower(word)] || slices.ContainsFunc(known.needs, func(n string) bool { return sameThing(word, n) }) {
		return true
	}
	_, ok := w.Materials.Named(word)
	return ok
}

// reachC is how far, in C, the coldest bath may stay above the low end of a temperature window.
const reachC = 5

// coldNeed is the need for a bath: 'cold -78'.
const coldNeed = "cold "

// refuses says what of a condition set the room cannot do: its bath does not reach the low end of the
// temperature window, its heating does not, or something needed or charged is lacking; nil if it can.
func (b *Bench) refuses(c *reactions.Conditions) *refusal {
	if low := coldEnd(c); b.Coldest != nil && low < *b.Coldest-reachC {
		what := fmt.Sprintf("a bath of %g C", low)
		return &refusal{wish: "coldest", word: what, needs: "needs " + what, need: "need " + what}
	}
	if b.Hottest != nil && c.Temperature[0] > *b.Hottest {
		what := fmt.Sprintf("heating to %g C", c.Temperature[0])
		return &refusal{wish: "hottest", word: what, needs: "needs " + what, need: "need " + what}
	}
	for _, need := range c.Needs {
		if lists(b.Lacks, need) && !lists(b.Has, need) {
			return lacking(need)
		}
	}
	for _, name := range charges(c) {
		if listsName(b.Lacks, name) && !listsName(b.Has, name) {
			return lacking(name)
		}
	}
	return nil
}

func lacking(what string) *refusal {
	return &refusal{wish: "lacks", word: what, needs: "needs " + what, need: "need " + what}
}

// coldEnd is the lowest temperature a condition set asks for, in its window or among its needs.
func coldEnd(c *reactions.Conditions) float64 {
	low := c.Temperature[0]
	for _, n := range c.Needs {
		if rest, ok := strings.CutPrefix(n, coldNeed); ok {
			if x, err := strconv.ParseFloat(rest, 64); err == nil {
				low = min(low, x)
			}
		}
	}
	return low
}

// charges lists the reagents that a condition set cannot do without, and its solvents.
func charges(c *reactions.Conditions) (names []string) {
	for _, r := range c.Reagents {
		if !r.Optional {
			names = append(names, r.Name)
		}
	}
	for _, s := range c.Solvents {
		names = append(names, s.Name)
	}
	return names
}

// approval lists what of a condition set needs to be approved in this room.
func (b *Bench) approval(c *reactions.Conditions) (out []string) {
	for _, need := range c.Needs {
		if lists(b.NeedsApproval, need) {
			out = append(out, need)
		}
	}
	for _, name := range charges(c) {
		if listsName(b.NeedsApproval, name) && !slices.Contains(out, name) {
			out = append(out, name)
		}
	}
	return out
}

// lists says whether one of the words means the thing.
func lists(words []rules.Text, thing string) bool {
	return slices.ContainsFunc(words, func(w rules.Text) bool { return sameThing(w.Value, thing) })
}

// listsName says whether a reagent or solvent is listed by its name: 'hydrogen' is no hydrogen peroxide.
func listsName(words []rules.Text, name string) bool {
	return slices.ContainsFunc(words, func(w rules.Text) bool { return strings.EqualFold(strings.TrimSpace(w.Value), name) })
}

// sameThing says whether one text holds the other as whole words: 'hydrogen' and 'hydrogen balloon'.
func sameThing(a, b string) bool {
	a, b = " "+strings.ToLower(strings.TrimSpace(a))+" ", " "+strings.ToLower(strings.TrimSpace(b))+" "
	return len(a) > 2 && len(b) > 2 && (strings.Contains(a, b) || strings.Contains(b, a))
}

// fillable is how full a flask is charged at most (common practice: two thirds, less where it foams).
const fillable = 2.0 / 3

// batches says in how many portions a volume must be run in the largest flask; 1 if none is stated.
func (b *Bench) batches(volumeML float64) int {
	if b == nil || b.flaskML <= 0 {
		return 1
	}
	return max(1, int(math.Ceil(volumeML/(b.flaskML*fillable)-1e-9)))
}
