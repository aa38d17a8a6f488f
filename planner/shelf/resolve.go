package shelf

import (
	"fmt"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// Reading is a structure read from a text.
type Reading struct {
	Molecule *molecule.Molecule
	As       string // SMILES, name or CAS number
	Item     *Item  // the shelf row that gave it; nil otherwise
}

// twoReadings lists texts that chemists and SMILES, or two chemists, read differently.
var twoReadings = map[string][2]string{
	"CO":  {"SMILES of methanol", "carbon monoxide"},
	"CN":  {"SMILES of methylamine", "cyanide"},
	"NO":  {"SMILES of hydroxylamine", "nitric oxide"},
	"CS":  {"SMILES of methanethiol", "carbon monosulfide"},
	"NCO": {"SMILES of aminomethanol", "isocyanate"},
	"OCN": {"SMILES of aminomethanol", "cyanate"},
	"SCN": {"SMILES of aminomethanethiol", "thiocyanate"},
	"NCS": {"SMILES of aminomethanethiol", "isothiocyanate or N-chlorosuccinimide"},
	"DMS": {"dimethyl sulfide", "dimethyl sulfate"},
	"DMP": {"Dess-Martin periodinane", "2,2-dimethoxypropane"},
	"DMA": {"N,N-dimethylacetamide", "dimethylamine or N,N-dimethylaniline"},
	"TEA": {"triethylamine", "triethanolamine"},
	"DEA": {"diethylamine", "diethanolamine"},
}

// Resolve reads a structure from a text: SMILES, or a name, synonym or CAS number on the shelf or in
// the lists, or a systematic name. 'smiles:' and 'name:' before the text settle which. A text with two
// readings is an error that asks for one of the two. Errors are one line.
func (s *Shelf) Resolve(text string) (Reading, error) {
	text = strings.TrimSpace(text)
	if rest, ok := strings.CutPrefix(text, "smiles:"); ok {
		return readSMILES(strings.TrimSpace(rest))
	}
	if rest, ok := strings.CutPrefix(text, "name:"); ok {
		return s.readName(strings.TrimSpace(rest))
	}
	if text == "" {
		return Reading{}, fmt.Errorf("expected a structure: SMILES, a name or a CAS number; found nothing")
	}
	if two, ok := twoReadings[text]; ok {
		return Reading{}, fmt.Errorf("%q has two readings, %s or %s: write smiles:%s or name:... in full", text, two[0], two[1], text)
	}
	if reagent.LooksLikeCAS(text) {
		if err := reagent.CheckCAS(text); err != nil {
			return Reading{}, err
		}
		return s.readCAS(text)
	}
	fromSMILES, smilesErr := readSMILES(text)
	fromName, nameErr := s.readName(text)
	switch {
	case smilesErr == nil && nameErr == nil && !sameSubstance(fromSMILES.Molecule, fromName.Molecule):
		return Reading{}, fmt.Errorf("%q has two readings, the SMILES of %s or the name of %s: write smiles:%s or name:%s", text,
			fromSMILES.Molecule.Formula(), smiles.Write(fromName.Molecule), text, text)
	case smilesErr == nil:
		return fromSMILES, nil
	case nameErr == nil:
		return fromName, nil
	case looksLikeName(text):
		return Reading{}, nameErr
	}
	return Reading{}, smilesErr
}

// looksLikeName says whether a text that is neither was meant as a name: it has a space, or only
// characters that names have and three small letters in a row.
func looksLikeName(text string) bool {
	if strings.ContainsAny(text, "=#@\\[]/") {
		return false
	}
	run := 0
	for _, c := range text {
		if c >= 'a' && c <= 'z' {
			if run++; run >= 3 && !strings.ContainsRune("bcnops", c) {
				return true
			}
		} else {
			run = 0
		}
	}
	return strings.Contains(text, " ")
}

func readSMILES(text string) (Reading, error) {
	m, err := smiles.Read(text)
	if err != nil {
		return Reading{}, err
	}
	return Reading{Molecule: m, As: "SMILES"}, nil
}

func (s *Shelf) readCAS(number string) (Reading, error) {
	for _, it := range s.numbered(number) {
		if it.Molecule != nil {
			return Reading{Molecule: it.Molecule, As: "CAS number", Item: it}, nil
		}
	}
	if m := s.known.byCAS(number); m != nil {
		return Reading{Molecule: m, As: "CAS number"}, nil
	}
	return Reading{}, fmt.Errorf("no list knows the CAS number %s: give a SMILES or a name", number)
}

func (s *Shelf) readName(name string) (Reading, error) {
	for _, it := range s.named(name) {
		if it.Molecule != nil {
			return Reading{Molecule: it.Molecule, As: "name", Item: it}, nil
		}
	}
	if m := s.known.byName(name); m != nil {
		return Reading{Molecule: m, As: "name"}, nil
	}
	return Reading{}, fmt.Errorf("%q is no name that the shelf, the lists or the reader of systematic names knows%s", name, s.nearClause(name))
}

// nearClause names up to three near names.
func (s *Shelf) nearClause(name string) string {
	var all []string
	for _, it := range s.items {
		all = append(append(all, it.Name), it.Synonyms...)
	}
	near := rules.NearWords(name, all, 3)
	if len(near) == 0 {
		near = s.known.Reagents.Near(name, 3)
	}
	if len(near) == 0 {
		return ""
	}
	return " (near names: " + strings.Join(near, ", ") + ")"
}
