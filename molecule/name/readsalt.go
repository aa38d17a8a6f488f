package name

import (
	"fmt"
	"slices"
	"strings"

	"shelfward/molecule"
)

// metalWord says whether a word ends in a metal that radicals hang on: "ethylmagnesium".
func metalWord(w string) bool {
	for _, m := range metalNames {
		if strings.HasSuffix(w, m) {
			return true
		}
	}
	return false
}

// hydrogenWord counts "hydrogen", "dihydrogen" in the name of an acid ester; 0 for other words.
func hydrogenWord(w string) int {
	for n := 1; n < 4; n++ {
		if w == multiplier(n)+"hydrogen" {
			return n
		}
	}
	return 0
}

// readAnhydride reads "acetic anhydride", "acetic benzoic anhydride".
func readAnhydride(words []string) (*molecule.Molecule, error) {
	if len(words) == 1 {
		words = []string{words[0], words[0]}
	}
	if len(words) != 2 || !strings.HasSuffix(words[0], "ic") || !strings.HasSuffix(words[1], "ic") {
		return nil, fmt.Errorf("an anhydride needs the names of one or two acids")
	}
	b := &assembly{}
	q, err := b.word(strings.TrimSuffix(words[0], "ic")+"ate", asMolecule, "")
	if err != nil {
		return nil, err
	}
	acyl := strings.TrimSuffix(words[1], "ic") + "yl"
	if s, ok := strings.CutSuffix(words[1], "carboxylic"); ok {
		acyl = s + "carbonyl"
	}
	r, err := b.word(acyl, asRadical, "")
	if err != nil {
		return nil, err
	}
	if len(q.esters) != 1 || len(r.free) != 1 || r.order != 1 {
		return nil, fmt.Errorf("an anhydride of acids with several acid groups")
	}
	b.spare[r.free[0]]++
	if err := b.join(q.esters[0], r.free[0], 1); err != nil {
		return nil, err
	}
	return b.finish()
}

// readSalt reads names that begin with a cation or end in hydrochloride or hydrate; nil, nil for other names.
func readSalt(words []string) (*molecule.Molecule, error) {
	last := words[len(words)-1]
	for added, word := range additions {
		for n := 1; n < maxParts; n++ {
			head := multiplier(n)
			if last != head+word && !(n == 1 && last == "mono"+word) {
				continue
			}
			m, err := readWords(words[:len(words)-1])
			if err != nil {
				return nil, err
			}
			parts := []*molecule.Molecule{m}
			for range n {
				parts = append(parts, loaded().read[added])
			}
			return molecule.Join(parts...), nil
		}
	}
	cation, n := cationWord(words[0])
	if cation == nil {
		return nil, nil
	}
	anions, err := readAnions(words[1:])
	if err != nil {
		return nil, err
	}
	parts, charge := slices.Repeat([]*molecule.Molecule{cation}, n), 0
	for _, p := range append(parts, anions...) {
		for a := range p.NumAtoms() {
			charge += int(p.Atom(a).Charge)
		}
	}
	if charge != 0 {
		return nil, fmt.Errorf("the charges of the ions do not balance")
	}
	return molecule.Join(append(parts, anions...)...), nil
}

// cationWord reads "sodium", "disodium", "tetrabutylammonium", "1-methylpyridin-1-ium"; nil if the word is no cation.
func cationWord(w string) (*molecule.Molecule, int) {
	ions := loaded().ionNamed
	for n := 1; n < maxParts; n++ {
		if m := ions[strings.TrimPrefix(w, multiplier(n))]; m != nil && strings.HasPrefix(w, multiplier(n)) && positive(m) {
			return m, n
		}
	}
	if !strings.HasSuffix(w, "ammonium") && !strings.HasSuffix(w, "phosphanium") && !strings.HasSuffix(w, "phosphonium") && !strings.HasSuffix(w, "-ium") {
		return nil, 0
	}
	w = strings.ReplaceAll(w, "phosphonium", "phosphanium")
	b := &assembly{}
	if _, err := b.word(w, asMolecule, ""); err != nil {
		return nil, 0
	}
	m, err := b.finish()
	if err != nil || !positive(m) {
		return nil, 0
	}
	return m, 1
}

func positive(m *molecule.Molecule) bool {
	sum := 0
	for a := range m.NumAtoms() {
		sum += int(m.Atom(a).Charge)
	}
	return sum > 0
}

// readAnions reads the anion words of a salt: "acetate", "dichloride", "hydrogen sulfate", "bis(4-nitrobenzoate)".
func readAnions(words []string) ([]*molecule.Molecule, error) {
	text := strings.Join(words, " ")
	if text == "" {
		return nil, fmt.Errorf("a salt without anion")
	}
	ions := loaded().ionNamed
	for n := 1; n < maxParts; n++ {
		if rest, ok := strings.CutPrefix(text, multiplier(n)); ok && ions[rest] != nil {
			return slices.Repeat([]*molecule.Molecule{ions[rest]}, n), nil
		}
	}
	for n := 1; n < maxParts; n++ {
		for _, m := range []string{multiplier(n), groupMultiplier(n)} {
			rest, ok := strings.CutPrefix(text, m)
			if !ok {
				continue
			}
			if n > 1 && strings.HasPrefix(rest, "(") && strings.HasSuffix(rest, ")") {
				rest = rest[1 : len(rest)-1]
			}
			if a, err := organicAnion(rest); err == nil {
				return slices.Repeat([]*molecule.Molecule{a}, n), nil
			} else if n == maxParts-1 {
				return nil, err
			}
		}
	}
	return nil, fmt.Errorf("%s is no anion that is known", text)
}

// organicAnion reads an acid part with a charge on each of its ester places.
func organicAnion(w string) (*molecule.Molecule, error) {
	if strings.Contains(w, " ") {
		return nil, fmt.Errorf("%s is no anion that is known", w)
	}
	b := &assembly{}
	q, err := b.word(w, asMolecule, "")
	if err != nil {
		return nil, err
	}
	if len(q.esters) == 0 {
		return nil, fmt.Errorf("%s is no anion", w)
	}
	for _, a := range q.esters {
		if b.spare[a] < 1 {
			return nil, errValence
		}
		b.spare[a]--
		b.Atoms[a].Charge = -1
	}
	return b.finish()
}
