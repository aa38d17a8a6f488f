package reagent

import (
	"regexp"
	"strings"

	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// letters maps typographic signs to what a keyboard writes.
var letters = strings.NewReplacer(
	"–", "-", "—", "-", "−", "-", "‐", "-", "‑", "-", "’", "'", "′", "'", "´", "'", "`", "'", "“", "\"", "”", "\"",
	"₀", "0", "₁", "1", "₂", "2", "₃", "3", "₄", "4", "₅", "5", "₆", "6", "₇", "7", "₈", "8", "₉", "9",
	"·", ".", "•", ".", "∙", ".", "º", "°", "℃", "°C", "⁺", "+", "⁻", "-", "\u00a0", " ", "\u2009", " ", "\u202f", " ", "\t", " ", "\n", " ", "\r", " ",
	"Δ", "delta", "∆", "delta", "ν", "v", "α", "alpha", "β", "beta", "γ", "gamma", "µ", "u", "μ", "u", "ü", "u", "é", "e",
)

// spellings brings the two common spellings of a name to one. The rules apply to folded text.
var spellings = []struct {
	old *regexp.Regexp
	new string
}{
	{regexp.MustCompile(`aluminum`), "aluminium"},
	{regexp.MustCompile(`sulph`), "sulf"},
	{regexp.MustCompile(`\bcesium`), "caesium"},
	{regexp.MustCompile(`\b(t|tert\.|tert)-?but(yl|oxide|anol|oxy)`), "tert-but$2"},
	{regexp.MustCompile(`\bn-(butyl|propyl|pentyl|hexyl)`), "$1"},
	{regexp.MustCompile(`\b(copper|iron|mercury|palladium|tin|lead|silver|chromium|cerium|titanium|manganese|cobalt|nickel|platinum|rhodium|thallium|gold|zinc|samarium|ruthenium|osmium|selenium|vanadium|cadmium|iodine|antimony|scandium) \((0|i{1,3}|iv|v|vi{0,3})\)`), "$1($2)"},
	{regexp.MustCompile(` +`), " "},
}

// fold brings a name to the form in which names are compared.
func fold(s string) string {
	s = strings.ToLower(letters.Replace(s))
	for _, r := range spellings {
		s = r.old.ReplaceAllString(s, r.new)
	}
	return strings.TrimSpace(s)
}

// qualifiers are words before or after a name that do not change which substance it is.
var qualifiers = regexp.MustCompile(`^(?:(?:dry|anhydrous|aqueous|aq\.?|concentrated|conc\.?|concd|dilute|dil\.?|diluted|catalytic|cat\.?|catalyst|excess|large excess|hot|cold|ice-cold|boiling|warm|molten|glacial|absolute|fuming|saturated|sat\.?|satd\.?|solid|powdered|fused|freshly prepared|freshly distilled|fresh|activated|active|commercial|technical|pure|neat|wet|moist|damp|granular|granulated|finely divided|trace of|trace|a little|few drops of|some|stoichiometric|strong|weak|liquid|gaseous|commercial|alcoholic|ethanolic|methanolic|ethereal|deoxygenated|degassed|the|an?|\(?\d+(?:[.,]\d+)?(?: ?- ?\d+)? ?(?:%|wt ?%|mol ?%|m|n|equiv\.?|eq\.?|equivalents?(?: of)?)(?: of)?\)?) )+`)

// trailing are such words behind a name.
var trailing = regexp.MustCompile(`(?:,? (?:solution|in water|\(aq\.?\)|aq\.?|turnings|powder|dust|granules|pellets|wire|ribbon|filings|metal|gas|catalyst|reagent|crystals|flakes|\([^()]*\)|\d+(?:[.,]\d+)? ?%))+$`)

// Find looks a reagent up by name, synonym, CAS number or SMILES. Capitals, typographic signs,
// common second spellings, words such as 'dry', 'aqueous', 'conc.', 'dilute', 'catalytic', strengths
// and notes in brackets do not matter; a name that means more with its word ('fuming sulfuric acid')
// is tried first as it stands.
func (t *Table) Find(text string) (*Reagent, bool) {
	name := fold(text)
	if r, ok := t.byForm(name); ok {
		return r, true
	}
	if r, ok := t.byCAS[name]; ok {
		return r, true
	}
	if text = strings.TrimSpace(text); text != "" && !strings.Contains(text, " ") {
		if m, err := smiles.Read(text); err == nil {
			return t.ByMolecule(m)
		}
	}
	return nil, false
}

// Named is Find without the reading of CAS numbers and SMILES.
func (t *Table) Named(text string) (*Reagent, bool) { return t.byForm(fold(text)) }

// byForm tries a folded name as it stands, in the singular, and without its qualifiers.
func (t *Table) byForm(name string) (*Reagent, bool) {
	for {
		if r, ok := t.byName[name]; ok {
			return r, true
		}
		if r, ok := t.byName[strings.TrimSuffix(name, "s")]; ok && len(name) > 4 {
			return r, true
		}
		shorter := strings.TrimSpace(trailing.ReplaceAllString(name, ""))
		if shorter == name {
			shorter = strings.TrimSpace(qualifiers.ReplaceAllString(name, ""))
		}
		if shorter == name || shorter == "" {
			return nil, false
		}
		name = shorter
	}
}

// Near returns up to count names near a text that Find does not know.
func (t *Table) Near(text string, count int) []string {
	return rules.NearWords(strings.TrimSpace(text), t.names, count)
}

// CheckCAS tests the form and the check digit of a CAS registry number. Source: the published rule,
// last digit = sum of the others times their place from the right, modulo 10.
func CheckCAS(number string) error { return checkCAS(number) }
