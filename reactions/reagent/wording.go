package reagent

import (
	"io/fs"
	"strings"

	"shelfward/rules"
)

// kind is what a known phrase is.
type kind uint8

const (
	kindNone    kind = iota
	kindName         // a reagent
	kindFact         // one or more facts
	kindLater        // begins a later stage
	kindEither       // an alternative follows
	kindNegate       // takes back what follows
	kindPassing      // understood, changes nothing
	kindWorkup       // makes its piece a work-up
)

// phrase is what the wording says about one phrase.
type phrase struct {
	kind        kind
	facts       []string
	temperature *[2]float64 // C
}

// wording is rules/wording.yaml compiled: folded phrases and their meaning.
type wording struct {
	phrases    map[string]*phrase
	factsOfAct map[string][]string // act -> facts
	longest    int                 // words of the longest phrase
}

// workupFact is the fact that marks a work-up.
const workupFact = "workup"

func loadWording(fsys fs.FS) (*wording, error) {
	var file struct {
		Later        []string              `yaml:"later"`
		First        []string              `yaml:"first"`
		Either       []string              `yaml:"either"`
		Joins        []string              `yaml:"joins"`
		Negations    []string              `yaml:"negations"`
		Absent       []string              `yaml:"absent"`
		Facts        map[string][]string   `yaml:"facts"`
		FactsOfActs  map[string][]string   `yaml:"facts of acts"`
		Temperatures map[string][2]float64 `yaml:"temperatures"`
		Passing      []string              `yaml:"passing"`
	}
	if err := rules.ReadInto(fsys, "wording.yaml", &file); err != nil {
		return nil, err
	}
	w := &wording{phrases: map[string]*phrase{}, factsOfAct: map[string][]string{}}
	put := func(list []string, k kind) {
		for _, text := range list {
			if p := w.phrase(text); p.kind == kindNone {
				p.kind = k
			}
		}
	}
	for fact, list := range file.Facts {
		k := kindFact
		if fact == workupFact {
			k = kindWorkup
		}
		for _, text := range list {
			p := w.phrase(text)
			p.facts = insert(p.facts, fact)
			p.kind = max(p.kind, k)
		}
	}
	for text, span := range file.Temperatures {
		p := w.phrase(text)
		p.kind, p.temperature = max(p.kind, kindFact), &span
	}
	put(file.Later, kindLater)
	put(file.Either, kindEither)
	put(file.Negations, kindNegate)
	put(file.Absent, kindPassing)
	put(file.First, kindPassing)
	put(file.Joins, kindPassing)
	put(file.Passing, kindPassing)
	for fact, acts := range file.FactsOfActs {
		for _, act := range acts {
			w.factsOfAct[act] = insert(w.factsOfAct[act], fact)
		}
	}
	return w, nil
}

// phrase returns the entry of a text, made if it is new.
func (w *wording) phrase(text string) *phrase {
	key := fold(text)
	w.longest = max(w.longest, 1+strings.Count(key, " "))
	p, ok := w.phrases[key]
	if !ok {
		p = &phrase{}
		w.phrases[key] = p
	}
	return p
}
