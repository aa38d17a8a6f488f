package identify

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"

	"shelfward/molecule/formula"
	"shelfward/molecule/spectra"
)

// The lists that journals print: '7.97 (d, J = 8.5 Hz, 2H), 3.93 (s, 3H)', '166.2, 139.4 (CH), 52.2',
// '1721 (s), 1594, 1276 cm-1', '139 (100), 111 (38)'.

var (
	headOfList = regexp.MustCompile(`(?i)^\s*(?:1\s*H|13\s*C(?:\{1H\})?|ir|ms|hrms|δ|delta|v?max)[^:=]*?(?:NMR)?[^:=]*[:=]\s*`)
	numberText = `-?\d+(?:\.\d+)?`
	spanText   = numberText + `(?:\s*[-–−]\s*` + `\d+(?:\.\d+)?)?`
	entryStart = regexp.MustCompile(`^\s*(?:δ\s*)?(` + spanText + `)\s*`)
	hydrogens  = regexp.MustCompile(`^(\d+(?:\.\d+)?)\s*H\b`)
	couplingJ  = regexp.MustCompile(`(?i)^J\b[^=]*=\s*(.*)$`)
)

// entry is one value with what stands in the brackets behind it.
type entry struct {
	at    Span
	inner []string
}

// parseEntries splits 'value (a, b), value (c)' into entries.
func parseEntries(text string) ([]entry, error) {
	t := strings.TrimSpace(text)
	if loc := headOfList.FindStringIndex(t); loc != nil {
		t = t[loc[1]:]
	}
	var out []entry
	for strings.TrimSpace(t) != "" {
		loc := entryStart.FindStringSubmatchIndex(t)
		if loc == nil {
			return nil, fmt.Errorf("expected a number at %q", clip(t))
		}
		span, err := parseSpan(t[loc[2]:loc[3]])
		if err != nil {
			return nil, err
		}
		e := entry{at: span}
		t = t[loc[1]:]
		if strings.HasPrefix(t, "(") {
			end := closing(t)
			if end < 0 {
				return nil, fmt.Errorf("a bracket is never closed at %q", clip(t))
			}
			e.inner = splitList(t[1:end])
			t = t[end+1:]
		}
		out = append(out, e)
		t = strings.TrimLeft(t, " \t\n")
		for _, unit := range []string{"ppm", "cm-1", "cm−1", "cm⁻¹", "cm^-1"} {
			t = strings.TrimPrefix(t, unit)
		}
		t = strings.TrimLeft(t, " \t\n,;.")
	}
	if len(out) == 0 {
		return nil, fmt.Errorf("no values found")
	}
	return out, nil
}

func clip(s string) string {
	r := []rune(strings.TrimSpace(s))
	if len(r) > 20 {
		return string(r[:20]) + "..."
	}
	return string(r)
}

// closing returns the place of the bracket that closes the one at the start, or -1.
func closing(t string) int {
	depth := 0
	for i, r := range t {
		switch r {
		case '(':
			depth++
		case ')':
			if depth--; depth == 0 {
				return i
			}
		}
	}
	return -1
}

// splitList splits at commas, but keeps 'J = 8.5, 2.0 Hz' together.
func splitList(t string) []string {
	var out []string
	for _, part := range strings.Split(t, ",") {
		part = strings.TrimSpace(part)
		if n := len(out); n > 0 && strings.HasPrefix(strings.ToUpper(out[n-1]), "J") && startsWithDigit(part) && !hydrogens.MatchString(part) && !strings.Contains(out[n-1], "Hz") {
			out[n-1] += ", " + part
			continue
		}
		out = append(out, part)
	}
	return out
}

func startsWithDigit(s string) bool { return s != "" && s[0] >= '0' && s[0] <= '9' }

// parseProtonText reads a 1H list.
func parseProtonText(text string) ([]Proton, error) {
	entries, err := parseEntries(text)
	if err != nil {
		return nil, err
	}
	var out []Proton
	for _, e := range entries {
		x := Proton{Span: e.at}
		for _, word := range e.inner {
			if err := x.readWord(word); err != nil {
				return nil, err
			}
		}
		out = append(out, x)
	}
	return out, nil
}

// readWord takes one item from the brackets behind a 1H value; assignments are passed over.
func (x *Proton) readWord(word string) error {
	w := strings.TrimSpace(word)
	if m := hydrogens.FindStringSubmatch(w); m != nil {
		h, err := strconv.ParseFloat(m[1], 64)
		if err != nil {
			return fmt.Errorf("cannot read the number of hydrogens in %q", w)
		}
		x.H = h
		return nil
	}
	if m := couplingJ.FindStringSubmatch(w); m != nil {
		for _, part := range strings.FieldsFunc(m[1], func(r rune) bool { return r == ',' || r == ' ' || r == ';' }) {
			if j, err := strconv.ParseFloat(part, 64); err == nil {
				x.J = append(x.J, j)
			}
		}
		return nil
	}
	s := strings.ToLower(strings.Trim(w, ". "))
	s = strings.TrimPrefix(s, "app ")
	switch s {
	case "br s", "brs", "bs", "broad", "broad s", "br":
		s = "br"
	case "quintet", "quin", "p", "pent":
		s = "quint"
	case "sextet", "hex":
		s = "sext"
	case "septet", "hept", "sep":
		s = "sept"
	case "br d":
		s = "d"
	case "br t":
		s = "t"
	}
	if _, ok := shapes[s]; ok && x.Shape == "" {
		x.Shape = s
	}
	return nil
}

// parseCarbonText reads a 13C list; C, CH, CH2 or CH3 in brackets is the kind.
func parseCarbonText(text string) ([]Carbon, error) {
	entries, err := parseEntries(text)
	if err != nil {
		return nil, err
	}
	var out []Carbon
	for _, e := range entries {
		x := Carbon{Span: e.at, Attached: -1}
		for _, w := range e.inner {
			if n, ok := attachedNames[strings.TrimSpace(w)]; ok && w != "" {
				x.Attached = n
			}
		}
		out = append(out, x)
	}
	return out, nil
}

// parseBands reads an infrared list; s, m, w and br in brackets are understood.
func parseBands(text string) ([]Band, error) {
	entries, err := parseEntries(text)
	if err != nil {
		return nil, err
	}
	var out []Band
	for _, e := range entries {
		b := Band{Span: e.at, Broad: e.at.High-e.at.Low > 250}
		for _, list := range e.inner {
			for _, w := range strings.Fields(list) {
				switch strings.ToLower(w) {
				case "s", "vs", "strong":
					b.Strength = spectra.Strong
				case "m", "medium":
					b.Strength = spectra.Medium
				case "w", "vw", "weak":
					b.Strength = spectra.Weak
				case "br", "broad":
					b.Broad = true
				}
			}
		}
		out = append(out, b)
	}
	return out, nil
}

// parsePeaks reads '139 (100), 111 (38)'.
func parsePeaks(text string) ([]formula.Peak, error) {
	entries, err := parseEntries(text)
	if err != nil {
		return nil, err
	}
	var out []formula.Peak
	for _, e := range entries {
		p := formula.Peak{MZ: e.at.Mid(), Intensity: 100}
		for _, w := range e.inner {
			if f, err := strconv.ParseFloat(strings.TrimRight(strings.TrimSpace(w), "% "), 64); err == nil {
				p.Intensity = f
			}
		}
		out = append(out, p)
	}
	return out, nil
}
