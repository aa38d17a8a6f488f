package reagent

import (
	"slices"
	"strings"

	"shelfward/molecule"
)

// Names resolves the name of a compound that is no reagent, such as a reactant that the conditions
// mention; ok is false if it cannot.
type Names func(name string) (m *molecule.Molecule, ok bool)

// maxText bounds the text that Read takes; a list of conditions is a line or two.
const maxText = 4000

// Read reads conditions as chemists write them: 'magnesium, dry ether, then dilute acid'. The text is
// split at semicolons and at comma + space (not inside brackets); each piece is read word by word,
// the longest known name or phrase first. 'then ...' and a work-up open a later stage. names may be
// nil; it is asked for what the table does not know. What stays unexplained is in NotUnderstood.
func (t *Table) Read(text string, names Names) Description {
	if len(text) > maxText {
		return Description{NotUnderstood: []string{strings.ToValidUTF8(text[:60], "") + "... (too long to read)"}}
	}
	r := &reader{table: t, names: names}
	for _, piece := range splitPieces(text) {
		r.piece(piece)
	}
	return r.finish()
}

// ReadList reads a list of conditions, each item as Read takes it.
func (t *Table) ReadList(items []string, names Names) Description {
	return t.Read(strings.Join(items, "; "), names)
}

// splitPieces splits at semicolons, line ends and comma + space outside brackets.
func splitPieces(text string) []string {
	var pieces []string
	depth, start := 0, 0
	cut := func(i, next int) {
		if p := strings.TrimSpace(text[start:i]); p != "" {
			pieces = append(pieces, p)
		}
		start = next
	}
	for i := 0; i < len(text); i++ {
		switch c := text[i]; {
		case c == '(' || c == '[':
			depth++
		case (c == ')' || c == ']') && depth > 0:
			depth--
		case depth > 0:
		case c == ';' || c == '\n':
			cut(i, i+1)
		case c == ',' && (i+1 == len(text) || text[i+1] == ' '):
			cut(i, i+1)
		}
	}
	cut(len(text), len(text))
	return pieces
}

// reader holds the state of reading one text.
type reader struct {
	table *Table
	names Names

	done  []Stage
	stage Stage
	sets  int // alternatives numbered so far
	count int // pieces read so far

	unknown []string // words in a row that nothing explains
	missed  []string

	pending   Mention // what the words before the next substance say of it
	hasWords  bool    // pending says something
	negated   bool    // the next item is taken back
	either    bool    // the next item is an alternative
	eitherAll bool    // ... to all of the piece before, not to the last mention only
	note      bool    // inside a note in brackets
	last      int     // index in stage.Mentions of the mention that words after it belong to, -1 none
	optionOf  [2]int  // set and option that the mentions of this piece share, 0 none
}

// piece reads one piece of the text.
func (r *reader) piece(text string) {
	r.count++
	r.last, r.optionOf = -1, [2]int{}
	r.either, r.eitherAll, r.negated = false, false, false
	folded := fold(text)
	if r.table.wording.isWorkup(folded) && len(r.stage.Mentions) > 0 && !r.isName(folded) {
		r.nextStage()
	}
	r.words(folded)
	r.closePiece()
}

// isName reports whether the whole piece is the name of a reagent.
func (r *reader) isName(folded string) bool { _, ok := r.table.byName[folded]; return ok }

// isWorkup reports whether a piece names a work-up.
func (w *wording) isWorkup(folded string) bool {
	return strings.Contains(folded, "work-up") || strings.Contains(folded, "workup") || strings.Contains(folded, "work up") ||
		strings.HasPrefix(folded, "quench") || strings.HasPrefix(folded, "poured ")
}

// closePiece hands words without a substance after them to the one before them.
func (r *reader) closePiece() {
	r.flushUnknown()
	if last := len(r.stage.Mentions) - 1; r.last < 0 {
		r.last = last // 'aqueous ammonia, large excess': a piece of words belongs to what stands before it
	}
	if r.hasWords && r.last >= 0 && r.last < len(r.stage.Mentions) {
		r.stage.Mentions[r.last].take(r.pending)
	}
	r.pending, r.hasWords = Mention{}, false
}

// words reads a folded text from left to right.
func (r *reader) words(text string) {
	for text = strings.TrimLeft(text, " ,:"); text != ""; text = strings.TrimLeft(text, " ,:") {
		text = text[r.step(text):]
	}
}

// step reads one item at the beginning of text and returns its length, at least 1.
func (r *reader) step(text string) int {
	if n := noteLength(text); n > 0 {
		r.flushUnknown()
		r.bracket(text[1 : n-1])
		return n
	}
	if m, n := r.ellipsis(text); n > 0 {
		r.mention(m, text[:n])
		return n
	}
	n, found, said := r.longest(text)
	if q := readQuantity(text); q.length > n || q.length == n && found == nil && n > 0 {
		r.flushUnknown()
		r.quantity(q)
		return q.length
	}
	if found != nil && found.Class && len(r.unknown) > 0 && !r.note {
		found, said = nil, nil // 'hexanoic acid' is not an unknown word and an acid
	}
	switch {
	case found != nil:
		r.mention(found, text[:n])
		return n
	case said != nil:
		r.phrase(said)
		return n
	}
	return r.unknownWord(text)
}

// longest finds the longest reagent name or phrase at the beginning of text; names go before phrases
// of the same length.
func (r *reader) longest(text string) (int, *Reagent, *phrase) {
	ends := wordEnds(text, max(r.table.wording.longest, 8))
	for i := len(ends) - 1; i >= 0; i-- {
		candidate := text[:ends[i]]
		if reagent, ok := r.nameAt(candidate); ok {
			return ends[i], reagent, nil
		}
		if p, ok := r.table.wording.phrases[candidate]; ok {
			return ends[i], nil, p
		}
		if trimmed := strings.TrimRight(candidate, ".!?"); trimmed != candidate {
			if reagent, ok := r.nameAt(trimmed); ok {
				return ends[i], reagent, nil
			}
			if p, ok := r.table.wording.phrases[trimmed]; ok {
				return ends[i], nil, p
			}
		}
	}
	return 0, nil, nil
}

// nameAt looks up a folded name, in the singular too.
func (r *reader) nameAt(name string) (*Reagent, bool) {
	if reagent, ok := r.table.byName[name]; ok {
		return reagent, true
	}
	if len(name) > 4 && strings.HasSuffix(name, "s") {
		reagent, ok := r.table.byName[name[:len(name)-1]]
		return reagent, ok
	}
	return nil, false
}

// wordEnds lists the ends of the first words of text, at most count. Words end at spaces, and at a
// comma, colon or closing bracket that is followed by a space or the end.
func wordEnds(text string, count int) []int {
	var ends []int
	for i := 0; i <= len(text) && len(ends) < count; i++ {
		atEnd := i == len(text) || text[i] == ' ' || (text[i] == ',' || text[i] == ':') && (i+1 == len(text) || text[i+1] == ' ')
		if atEnd && i > 0 && text[i-1] != ' ' {
			ends = append(ends, i)
		}
	}
	return ends
}

// noteLength returns the length of a note in brackets at the beginning of text, brackets included; 0
// if the bracket belongs to a name, as in '(diacetoxyiodo)benzene' and '(COCl)2'.
func noteLength(text string) int {
	if text[0] != '(' && text[0] != '[' {
		return 0
	}
	depth := 0
	for i := range len(text) {
		switch text[i] {
		case '(', '[':
			depth++
		case ')', ']':
			depth--
		}
		if depth == 0 {
			if i+1 == len(text) || strings.IndexByte(" ,;:.", text[i+1]) >= 0 {
				return i + 1
			}
			return 0
		}
	}
	return 0
}

// bracket reads a note: facts and amounts in it hold for the substance before it, substances count
// as mentioned in a note ('copper(I) iodide (lithium dimethylcuprate)', 'hydrogen (Pd/C)'), and other
// words do not matter.
func (r *reader) bracket(text string) {
	if text = strings.TrimSpace(text); text == "" {
		return
	}
	if q := readQuantity("(" + text + ")"); q.later {
		r.nextStage()
		return
	}
	outer, last := r.note, r.last
	r.note = true
	for _, piece := range splitPieces(text) {
		r.words(piece)
	}
	r.note = outer
	if r.hasWords && last >= 0 && last < len(r.stage.Mentions) {
		r.stage.Mentions[last].take(r.pending)
		r.pending, r.hasWords = Mention{}, false
	}
	r.unknown, r.negated = nil, false
}

// ellipsis reads 'sodium or potassium hydroxide' and 'nitric and sulfuric acids': the first word
// borrows the last word of the second name.
func (r *reader) ellipsis(text string) (*Reagent, int) {
	first, rest, ok := strings.Cut(text, " ")
	if !ok {
		return nil, 0
	}
	join, second, ok := strings.Cut(rest, " ")
	if !ok || join != "or" && join != "and" {
		return nil, 0
	}
	if _, known := r.nameAt(first); known && join == "and" {
		return nil, 0
	}
	ends := wordEnds(second, 4)
	for i := len(ends) - 1; i > 0; i-- {
		if _, known := r.nameAt(second[:ends[i]]); !known {
			continue
		}
		head := strings.Index(second, " ")
		if reagent, known := r.nameAt(first + second[head:ends[i]]); known {
			return reagent, len(first)
		}
	}
	return nil, 0
}

// unknownWord takes one word that nothing explains: parts joined by a slash or plus are tried, then
// the caller's names, on the longest run of words first.
func (r *reader) unknownWord(text string) int {
	ends := wordEnds(text, 6)
	word := text[:ends[0]]
	if parts := r.splitWord(word); parts != nil {
		r.flushUnknown()
		for _, part := range parts {
			r.words(part)
		}
		return len(word)
	}
	if r.names != nil {
		for i := len(ends) - 1; i >= 0; i-- {
			if m, ok := r.names(text[:ends[i]]); ok {
				r.flushUnknown()
				r.add(Mention{Molecule: m, Text: text[:ends[i]]})
				return ends[i]
			}
		}
	}
	if borrowed := r.suffix(word); borrowed != nil {
		r.mention(borrowed, word)
		return len(word)
	}
	if strings.Trim(word, ".,:;!?-+/()[]'\"~=*") != "" {
		r.unknown = append(r.unknown, word)
	}
	return len(word)
}

// suffix reads the second word in 'copper(I) chloride or bromide'.
func (r *reader) suffix(word string) *Reagent {
	if !r.either || r.last < 0 || r.last >= len(r.stage.Mentions) {
		return nil
	}
	written := r.stage.Mentions[r.last].Text
	if i := strings.LastIndexByte(written, ' '); i > 0 {
		if reagent, ok := r.nameAt(written[:i+1] + word); ok {
			return reagent
		}
	}
	return nil
}

// splitWord splits 'NaOH/H2O' and 'MeOH-H2O' if all parts are known; nil otherwise.
func (r *reader) splitWord(word string) []string {
	for _, sep := range []string{"/", "+", "-", ":", "."} {
		parts := strings.Split(word, sep)
		if len(parts) < 2 {
			continue
		}
		known := func(part string) bool {
			_, name := r.nameAt(part)
			p := r.table.wording.phrases[part]
			return name || p != nil && sep == "/" || readQuantity(part).length == len(part) && len(part) > 1 && sep == "/"
		}
		if !slices.ContainsFunc(parts, func(part string) bool { return part == "" || !known(part) }) {
			return parts
		}
	}
	for i := 1; i < len(word)-1; i++ { // 'tert-butanol-water'
		if word[i] == '-' {
			_, left := r.nameAt(word[:i])
			_, right := r.nameAt(word[i+1:])
			if left && right {
				return []string{word[:i], word[i+1:]}
			}
		}
	}
	return nil
}

// flushUnknown moves the unknown words in a row to the list of what was missed.
func (r *reader) flushUnknown() {
	if len(r.unknown) > 0 && !r.note {
		r.missed = append(r.missed, strings.Join(r.unknown, " "))
	}
	r.unknown = nil
}

// finish closes the last stage and collects the result.
func (r *reader) finish() Description {
	r.nextStage()
	return Description{Stages: r.done, NotUnderstood: r.missed}
}
