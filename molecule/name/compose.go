package name

import (
	"slices"
	"strings"

	"shelfward/molecule"
)

// sub is the name of a substituent. compound says that it must stand in brackets when it is cited.
type sub struct {
	name     string
	compound bool
}

// affix is one substituent at one place of its parent.
type affix struct {
	locant string // as printed: "2", "4a", "N"
	rank   int    // order of locants
	sub
	acid  molecule.Element // ester words: the atom that bears the group
	other bool             // ester words: whether that atom must be named
}

// enclose puts name into the next brackets: ( ), then [ ], then { } (P-16.5.4).
func enclose(name string) string {
	level := 0
	for i := 0; i < len(name); i++ {
		switch name[i] {
		case '(':
			level = max(level, 1)
		case '[':
			if !ringBracket(name[i:]) {
				level = max(level, 2)
			}
		case '{':
			level = max(level, 3)
		}
	}
	switch level {
	case 1:
		return "[" + name + "]"
	case 2:
		return "{" + name + "}"
	}
	return "(" + name + ")"
}

// ringBracket says whether the bracket that begins s belongs to a ring name: [2.2.1], [3,4-d], [1,3], [1,1'-biphenyl].
func ringBracket(s string) bool {
	if strings.HasPrefix(s[1:], biphenylName) {
		return true
	}
	for i := 1; i < len(s); i++ {
		c := s[i]
		switch {
		case c == ']':
			return true
		case c >= '0' && c <= '9' || c == '.' || c == '^' || c == ',' || c == '-' || c == '\'':
		case c >= 'a' && c <= 'z' && i+1 < len(s) && (s[i+1] == ']' || s[i+1] == ','):
		default:
			return false
		}
	}
	return false
}

// alphabetKey is what decides the order of prefixes: letters only, without locants and tert- (P-14.5).
func alphabetKey(name string) string {
	name = strings.ReplaceAll(name, "tert-", "")
	var b strings.Builder
	for i := 0; i < len(name); i++ {
		if c := name[i]; c >= 'a' && c <= 'z' {
			b.WriteByte(c)
		}
	}
	return b.String()
}

// joined appends b to a, with a hyphen where a locant meets a letter or bracket.
func joined(a, b string) string {
	if a == "" || b == "" {
		return a + b
	}
	x := a[len(a)-1]
	if x == '-' || x == '(' || x == '[' || x == '{' {
		return a + b
	}
	if locantStart(b) {
		return a + "-" + b
	}
	return a + b
}

// locantStart says whether a text begins with a locant.
func locantStart(b string) bool {
	if b == "" {
		return false
	}
	c := b[0]
	if c >= '0' && c <= '9' || c >= 'A' && c <= 'Z' {
		return true
	}
	if strings.HasPrefix(b, "tert-") {
		return true
	}
	// [1,3]thiazolo... begins with locants in brackets.
	return c == '[' && len(b) > 2 && b[1] >= '0' && b[1] <= '9' && (b[2] == ',' || b[2] == ']') && false
}

// prefixes writes the substituents in alphabetical order with their locants and multipliers.
// Without locants neighbours are kept apart by brackets: bromo(chloro)acetic acid.
func prefixes(list []affix, noLocants bool) string {
	groups := grouped(list)
	out := ""
	for i, g := range groups {
		n := len(g)
		word := g[0].name
		bracket := g[0].compound
		if noLocants && i > 0 && !bracket {
			bracket = true
		}
		if bracket {
			if g[0].compound {
				word = groupMultiplier(n) + enclose(word)
			} else if n > 1 {
				word = enclose(times(n, word))
			} else {
				word = enclose(word)
			}
		} else if n > 1 {
			word = times(n, word)
		}
		if !noLocants {
			locants := make([]string, n)
			for k, x := range g {
				locants[k] = x.locant
			}
			if out != "" {
				out += "-"
			}
			out += strings.Join(locants, ",") + "-"
		}
		out += word
	}
	return out
}

// times puts the simple multiplying prefix before a substituent: "dimethyl", "di-tert-butyl".
func times(n int, word string) string {
	if strings.HasPrefix(word, "tert-") {
		return multiplier(n) + "-" + word
	}
	return multiplier(n) + word
}

// grouped collects equal names, sorted by alphabet, each sorted by locant.
func grouped(list []affix) [][]affix {
	list = slices.Clone(list)
	slices.SortStableFunc(list, func(x, y affix) int {
		if c := strings.Compare(alphabetKey(x.name), alphabetKey(y.name)); c != 0 {
			return c
		}
		if c := strings.Compare(x.name, y.name); c != 0 {
			return c
		}
		if x.rank != y.rank {
			return x.rank - y.rank
		}
		return strings.Compare(x.locant, y.locant)
	})
	var groups [][]affix
	for i := 0; i < len(list); {
		j := i + 1
		for j < len(list) && list[j].name == list[i].name {
			j++
		}
		groups = append(groups, list[i:j])
		i = j
	}
	return groups
}

// addSuffix appends a suffix with its locants, dropping a final e before a vowel (P-31.1.4.?).
func addSuffix(base, locants, suffix string) string {
	if suffix == "" {
		return base
	}
	if strings.HasSuffix(base, "e") && strings.IndexByte("aeiouy", suffix[0]) >= 0 {
		base = base[:len(base)-1]
	}
	if locants == "" {
		return base + suffix
	}
	return base + "-" + locants + "-" + suffix
}
