package name

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"unicode"

	"shelfward/molecule"
)

// maxText is the longest name read.
const maxText = 500

// Error is a text that is no name, or none that is understood.
type Error struct {
	Text   string
	Reason string
}

// Error is one line.
func (e *Error) Error() string {
	return fmt.Sprintf("%q is not understood as a name: %s", e.Text, e.Reason)
}

// Read reads a systematic name as Of writes it, the common variants of such names, and the trivial
// names of rules/names.yaml. Errors are *Error. The same text always gives the same molecule.
func Read(text string) (*molecule.Molecule, error) {
	m, err := read(text)
	if err != nil {
		shown := text
		if len(shown) > 60 {
			shown = strings.ToValidUTF8(shown[:60], "") + "..."
		}
		return nil, &Error{shown, err.Error()}
	}
	return m, nil
}

func read(text string) (*molecule.Molecule, error) {
	if len(text) > maxText {
		return nil, fmt.Errorf("it is longer than %d characters", maxText)
	}
	s := plainText(text)
	if s == "" {
		return nil, fmt.Errorf("it is empty")
	}
	for i := 0; i < len(s); i++ {
		if s[i] >= 0x80 {
			return nil, fmt.Errorf("a character that no name has")
		}
	}
	if m := loaded().read[strings.ToLower(s)]; m != nil {
		return m, nil
	}
	if x := marked.FindStringSubmatch(text); x != nil {
		words := strings.Fields(plainText(x[2]))
		if len(words) == 1 || len(words) == 2 && words[1] == "acid" {
			return readMarked(strings.Split(x[1], ","), strings.Join(words, " "))
		}
	}
	if stereoMark.MatchString(s) {
		return nil, fmt.Errorf("these marks of stereo (only R, S, E and Z of the parent are read) are not understood; write the SMILES")
	}
	return readWords(strings.Fields(s))
}

// stereoMark finds descriptors of stereo; plainText has made them lower case.
var stereoMark = regexp.MustCompile(`\((\d+[a-z]?)?[rsez](,(\d+[a-z]?)?[rsez])*\)-|^(cis|trans|[dl]|dl|rac|\([+-]\))-`)

// plainText brings dashes, primes, blanks and capitals to the forms that the parser knows.
func plainText(text string) string {
	s := strings.Join(strings.Fields(strings.NewReplacer("‐", "-", "‑", "-", "–", "-", "−", "-", "′", "'", "’", "'", "″", "''", "²", "2", "³", "3", "¹", "1").Replace(text)), " ")
	b := []byte(s)
	for i, c := range b {
		if c < 'A' || c > 'Z' {
			continue
		}
		// Locants N, O, S, H stay; capitals that begin a word do not.
		if c == 'H' && i > 0 && (unicode.IsDigit(rune(b[i-1])) || b[i-1] >= 'a' && b[i-1] <= 'z') {
			continue
		}
		if strings.IndexByte("NOS", c) >= 0 && i+1 < len(b) && strings.IndexByte("-,'0123456789", b[i+1]) >= 0 {
			continue
		}
		b[i] = c + 'a' - 'A'
	}
	return string(b)
}

// readWords reads a name by its words.
func readWords(words []string) (*molecule.Molecule, error) {
	if n := len(words); n > 1 && strings.HasSuffix(words[n-1], "acid") {
		words = append(slices.Clone(words[:n-2]), words[n-2]+" "+words[n-1])
	}
	last := words[len(words)-1]
	if len(words) > 1 {
		if m, err := readSalt(words); m != nil || err != nil {
			return m, err
		}
		if last == "anhydride" {
			return readAnhydride(words[:len(words)-1])
		}
		if at, count := oxideWord(last); count > 0 {
			return readOxide(words[:len(words)-1], at, count)
		}
		if e, count := halideAtoms(last); count > 0 {
			return readHalide(words[:len(words)-1], e, count)
		}
		if t := loaded().words.classes[last]; t != nil {
			return readClass(words[:len(words)-1], t)
		}
	}
	if len(words) > 1 {
		return readEster(words)
	}
	b := &assembly{}
	q, err := b.word(last, asMolecule, "")
	if err != nil {
		return nil, err
	}
	if len(q.esters) > 0 || len(q.free) > 0 {
		return nil, fmt.Errorf("%s is only a part of a name", last)
	}
	return b.finish()
}

// word parses and builds one word.
func (b *assembly) word(s string, m mode, ester string) (*piece, error) {
	p := newParser(s)
	if p == nil {
		return nil, fmt.Errorf("a bracket is not closed")
	}
	p.ester = ester
	u := p.unit(0, len(s), m)
	if u == nil {
		return nil, fmt.Errorf("%s is not made of known parts", s)
	}
	return b.build(u)
}

// oxideWord reads "1-oxide", "1,1-dioxide".
func oxideWord(w string) (at []string, count int) {
	if w == "oxide" {
		return []string{"1"}, 1 // of a phosphane
	}
	i := strings.LastIndexByte(w, '-')
	if i < 0 {
		return nil, 0
	}
	at = strings.Split(w[:i], ",")
	if w[i+1:] != multiplier(len(at))+"oxide" {
		return nil, 0
	}
	return at, len(at)
}

func readOxide(words []string, at []string, count int) (*molecule.Molecule, error) {
	if len(words) > 1 {
		return nil, fmt.Errorf("an oxide of several words")
	}
	b := &assembly{}
	q, err := b.word(words[0], asMolecule, "")
	if err != nil {
		return nil, err
	}
	for _, l := range at {
		a, ok := q.find(l)
		if !ok {
			return nil, fmt.Errorf("locant %s does not exist", l)
		}
		o := b.add(8)
		switch b.Atoms[a].Element {
		case 7:
			b.Atoms[a].Charge, b.Atoms[o].Charge = 1, -1
			b.spare[a]++
			b.spare[o] = 1
			err = b.join(a, o, 1)
		case 15, 16, 34:
			b.spare[a] += 2
			err = b.join(a, o, 2)
		default:
			return nil, fmt.Errorf("no oxide at locant %s", l)
		}
		if err != nil {
			return nil, err
		}
	}
	return b.finish()
}

// halideAtoms reads "chloride", "dichloride".
func halideAtoms(w string) (molecule.Element, int) {
	for count := 1; count < 5; count++ {
		for _, e := range []molecule.Element{9, 17, 35, 53} {
			if w == multiplier(count)+halideWord(e) {
				return e, count
			}
		}
	}
	return 0, 0
}

// readHalide reads acyl halides and alkyl halides: "acetyl chloride", "benzyl bromide".
func readHalide(words []string, e molecule.Element, count int) (*molecule.Molecule, error) {
	if len(words) > 1 {
		return nil, fmt.Errorf("a halide of several words")
	}
	b := &assembly{}
	if metalWord(words[0]) {
		q, err := b.word(words[0], asMolecule, "")
		if err != nil {
			return nil, err
		}
		for range count {
			if err := b.join(q.atoms[0], b.add(e), 1); err != nil {
				return nil, err
			}
		}
		return b.finish()
	}
	q, err := b.word(words[0], asRadical, "")
	if err != nil {
		return nil, err
	}
	if len(q.free) != count || q.order != 1 {
		return nil, fmt.Errorf("%s needs another number of halogen atoms", words[0])
	}
	for _, a := range q.free {
		b.spare[a]++
		if err := b.join(a, b.add(e), 1); err != nil {
			return nil, err
		}
	}
	return b.finish()
}

// readClass reads names of classes whose radicals are words of their own: "benzyl alcohol", "ethyl
// methyl ketone", "diethyl ether".
func readClass(words []string, t *template) (*molecule.Molecule, error) {
	b := &assembly{}
	at := b.copyTemplate(t, -1)
	return b.hangWords(words, t, at)
}

// hangWords hangs the radicals of the words on the class 1 atoms of t, one free valence after the other.
func (b *assembly) hangWords(words []string, t *template, at []int) (*molecule.Molecule, error) {
	var places []int
	for _, e := range t.esters {
		for range b.spare[at[e]] {
			places = append(places, at[e])
		}
	}
	if t.single {
		places = places[:1]
	}
	for _, w := range words {
		it, err := esterRadicals(w)
		if err != nil {
			return nil, err
		}
		for range it.count {
			r, err := b.build(it.unit)
			if err != nil {
				return nil, err
			}
			if len(r.free) != 1 || r.order != 1 || len(places) == 0 {
				return nil, fmt.Errorf("%s does not fit %s", w, t.name)
			}
			b.spare[r.free[0]]++
			if err := b.join(places[0], r.free[0], 1); err != nil {
				return nil, err
			}
			places = places[1:]
		}
	}
	if len(places) > 0 {
		return nil, fmt.Errorf("%s needs more groups", t.name)
	}
	return b.finish()
}

// readEster reads esters: radicals as words of their own before the acid part.
func readEster(words []string) (*molecule.Molecule, error) {
	b := &assembly{}
	mark := ""
	for _, w := range words[:len(words)-1] {
		for _, x := range []string{"S", "O"} {
			if strings.HasPrefix(w, x+"-") {
				mark = x
			}
		}
	}
	q, err := b.word(words[len(words)-1], asMolecule, mark)
	if err != nil {
		return nil, err
	}
	taken := 0
	used := make([]bool, len(q.esters))
	for _, w := range words[:len(words)-1] {
		if n := hydrogenWord(w); n > 0 {
			for range n {
				if k := slices.Index(used, false); k >= 0 {
					used[k] = true
					taken++
				}
			}
			continue
		}
		w = strings.TrimPrefix(strings.TrimPrefix(w, "S-"), "O-")
		parts, err := esterRadicals(w)
		if err != nil {
			return nil, err
		}
		for i := range parts.count {
			r, err := b.build(parts.unit)
			if err != nil {
				return nil, err
			}
			if len(r.free) != 1 || r.order != 1 {
				return nil, fmt.Errorf("%s does not make an ester", w)
			}
			k := slices.Index(used, false)
			if len(parts.locants) > i {
				k = b.esterOf(q, parts.locants[i], used)
			}
			if k < 0 {
				return nil, fmt.Errorf("more ester groups than the acid has")
			}
			used[k] = true
			b.spare[r.free[0]]++
			if err := b.join(q.esters[k], r.free[0], 1); err != nil {
				return nil, err
			}
			taken++
		}
	}
	if taken != len(q.esters) || taken == 0 {
		return nil, fmt.Errorf("%d ester groups for an acid with %d", taken, len(q.esters))
	}
	return b.finish()
}

// esterOf finds the ester group whose acid carbon stands at, or hangs on, the atom with the locant.
func (b *assembly) esterOf(q *piece, locant string, used []bool) int {
	host, ok := q.find(locant)
	if !ok {
		return -1
	}
	near := func(x int) []int {
		var l []int
		for _, y := range b.Bonds {
			if int(y.A) == x {
				l = append(l, int(y.B))
			} else if int(y.B) == x {
				l = append(l, int(y.A))
			}
		}
		return l
	}
	for k, e := range q.esters {
		for _, c := range near(e) {
			if !used[k] && (c == host || slices.Contains(near(c), host)) && (c == host || !b.onSkeleton(q, c)) {
				return k
			}
		}
	}
	return -1
}

// onSkeleton says whether atom c bears a numbered locant.
func (b *assembly) onSkeleton(q *piece, c int) bool {
	i := slices.Index(q.atoms, c)
	return i >= 0 && q.locants[i][0] >= '0' && q.locants[i][0] <= '9'
}

// esterRadicals reads one ester word: "ethyl", "diethyl", "bis(2-chloroethyl)", "1-ethyl", "1-(2-chloroethyl)".
func esterRadicals(w string) (item, error) {
	p := newParser(w)
	if p == nil {
		return item{}, fmt.Errorf("a bracket is not closed")
	}
	if u := p.unit(0, len(w), asRadical); u != nil {
		return item{nil, 1, u}, nil
	}
	locants, j := p.locants(0, len(w))
	if j < 0 {
		j = 0
	}
	for _, m := range p.multipliers(j, len(w)) {
		for _, r := range p.radicalsAt(j+m.length, len(w)) {
			if r.end == len(w) && (locants == nil || len(locants) == m.count) {
				return item{locants, m.count * max(1, r.count), r.unit}, nil
			}
		}
		if u := p.unit(j+m.length, len(w), asRadical); u != nil && (locants == nil || len(locants) == m.count) {
			return item{locants, m.count, u}, nil
		}
	}
	return item{}, fmt.Errorf("%s is not made of known parts", w)
}
