package reactions

import (
	"fmt"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"

	"shelfward/molecule/pattern"
	"shelfward/rules"
)

// The structs of this file mirror rules/transforms.md key by key; compile.go gives them meaning.

type sourceFile struct {
	Family     string            `yaml:"family" need:"family: esters"`
	Transforms []sourceTransform `yaml:"transforms" need:"transforms: [...]"`
}

type sourceTransform struct {
	rules.Place
	ID            rules.Text              `yaml:"id" need:"id: fischer-esterification"`
	Name          rules.Text              `yaml:"name" need:"name: Fischer esterification"`
	Summary       string                  `yaml:"summary"`
	Reactants     []rules.Text            `yaml:"reactants" need:"reactants: ['[C:1](=[O:2])[OH:3]']"`
	Products      []rules.Text            `yaml:"products" need:"products: ['[C:1](=[O:2])Cl']"`
	Where         map[string]wordList     `yaml:"where"`
	WhereProducts map[string]wordList     `yaml:"where products"`
	Once          bool                    `yaml:"once"`
	Everywhere    bool                    `yaml:"everywhere"`
	Choices       map[string][]rules.Text `yaml:"choices"`
	Same          []int                   `yaml:"same"`
	Closes        ringSizes               `yaml:"closes"`
	Stereo        map[string]string       `yaml:"stereo"`
	Prefers       []sourcePreference      `yaml:"prefers"`
	GoesOn        []sourceGoesOn          `yaml:"goes_on"`
	Racemic       bool                    `yaml:"racemic"`
	Dangers       wordList                `yaml:"dangers"`
	Conditions    []sourceConditions      `yaml:"conditions" need:"conditions: [...]"`
	Source        sourceNote              `yaml:"source" need:"source: {text: '...', provenance: memory}"`
	Examples      []sourceExample         `yaml:"examples" need:"examples: [{from: [...], to: '...'}]"`
	Rejects       []sourceExample         `yaml:"rejects" need:"rejects: [{from: [...], to: '...', why: '...'}]"`
}

type sourcePreference struct {
	rules.Place
	Model  rules.Text `yaml:"model" need:"model: markovnikov"`
	At     []int      `yaml:"at" need:"at: [1]"`
	Rho    *float64   `yaml:"rho"`
	Ortho  float64    `yaml:"ortho"`
	Needs  *float64   `yaml:"needs"`
	WhyNot string     `yaml:"why_not"`
}

type sourceGoesOn struct {
	Part    int        `yaml:"part"`
	Pattern rules.Text `yaml:"pattern" need:"pattern: '[CH2]=O'"`
	Why     string     `yaml:"why"`
}

type sourceExample struct {
	rules.Place
	From    []rules.Text `yaml:"from" need:"from: ['CCO']"`
	To      rules.Text   `yaml:"to" need:"to: 'CC=O'"`
	With    string       `yaml:"with"`
	Share   string       `yaml:"share"`
	Why     string       `yaml:"why"`
	Objects bool         `yaml:"objects"`
	Source  sourceNote   `yaml:"source"`
}

type sourceConditions struct {
	rules.Place
	ID              rules.Text              `yaml:"id" need:"id: hypochlorite"`
	Reagents        []sourceCharge          `yaml:"reagents"`
	ReactantEquiv   map[string]float64      `yaml:"reactant_equiv"`
	Solvents        []sourceSolvent         `yaml:"solvents"`
	Media           []rules.Text            `yaml:"media"`
	OnlyWith        []rules.Text            `yaml:"only_with"`
	NeverWith       []rules.Text            `yaml:"never_with"`
	Order           string                  `yaml:"order"`
	Temperature     span                    `yaml:"temperature"`
	Time            span                    `yaml:"time"`
	Yield           []float64               `yaml:"yield" need:"yield: [60, 75, 85]"`
	Origin          string                  `yaml:"origin"`
	TriedAt         string                  `yaml:"tried_at"`
	Workup          wordList                `yaml:"workup"`
	WorkupMaterials []string                `yaml:"workup_materials"`
	Watch           string                  `yaml:"watch"`
	Cautions        wordList                `yaml:"cautions"`
	Needs           []string                `yaml:"needs"`
	Uses            []rules.Text            `yaml:"uses"`
	Gives           []rules.Text            `yaml:"gives"`
	Heat            float64                 `yaml:"heat"`
	Gas             map[string]float64      `yaml:"gas"`
	Together        []rules.Text            `yaml:"together"`
	Applies         map[string][]rules.Text `yaml:"applies"`
	Source          sourceNote              `yaml:"source"`
}

type sourceCharge struct {
	rules.Place
	Name     rules.Text `yaml:"name" need:"name: sodium hydroxide"`
	Equiv    float64    `yaml:"equiv"`
	Like     wordList   `yaml:"like"`
	Optional bool       `yaml:"optional"`
	Note     string     `yaml:"note"`
}

type sourceSolvent struct {
	Name   rules.Text `yaml:"name" need:"name: ethanol"`
	MLPerG float64    `yaml:"ml_per_g"`
}

// wordList is one text or a list of texts.
type wordList []string

// UnmarshalYAML reads one text or a list of texts.
func (w *wordList) UnmarshalYAML(n *yaml.Node) error {
	if n.Kind == yaml.SequenceNode {
		for _, item := range n.Content {
			if item.Kind != yaml.ScalarNode {
				return fmt.Errorf("expected a list of texts")
			}
			*w = append(*w, item.Value)
		}
		return nil
	}
	if n.Kind != yaml.ScalarNode {
		return fmt.Errorf("expected a text or a list of texts")
	}
	*w = wordList{n.Value}
	return nil
}

// span is one number or a pair of low and high.
type span struct {
	Low, High float64
	Written   bool
}

// UnmarshalYAML reads a number or [low, high].
func (s *span) UnmarshalYAML(n *yaml.Node) error {
	nodes := []*yaml.Node{n, n}
	if n.Kind == yaml.SequenceNode {
		nodes = n.Content
	}
	if len(nodes) != 2 {
		return fmt.Errorf("expected a number or [low, high]")
	}
	var err1, err2 error
	s.Low, err1 = strconv.ParseFloat(nodes[0].Value, 64)
	s.High, err2 = strconv.ParseFloat(nodes[1].Value, 64)
	if err1 != nil || err2 != nil || s.High < s.Low {
		return fmt.Errorf("expected a number or [low, high] with low first")
	}
	s.Written = true
	return nil
}

// ringSizes lists the sizes of ring that a transform may close.
type ringSizes struct {
	ranges  [][2]int
	written bool
}

// UnmarshalYAML reads '5-7', '3, 5-7', 6 or never.
func (r *ringSizes) UnmarshalYAML(n *yaml.Node) error {
	r.written = true
	texts := []string{n.Value}
	if n.Kind == yaml.SequenceNode {
		texts = nil
		for _, c := range n.Content {
			texts = append(texts, c.Value)
		}
	}
	for _, text := range texts {
		if text == "never" {
			return nil
		}
		for _, piece := range strings.Split(text, ",") {
			a, b, isRange := strings.Cut(strings.TrimSpace(piece), "-")
			lo, err := strconv.Atoi(a)
			hi := lo
			if err == nil && isRange {
				hi, err = strconv.Atoi(b)
			}
			if err != nil || hi < lo {
				return fmt.Errorf("expected ring sizes such as 5-7 or '3, 5-7', or never")
			}
			r.ranges = append(r.ranges, [2]int{lo, hi})
		}
	}
	return nil
}

func (r ringSizes) allows(size int) bool {
	if !r.written {
		return size >= 5 && size <= 7
	}
	for _, x := range r.ranges {
		if size >= x[0] && size <= x[1] {
			return true
		}
	}
	return false
}

func where(src map[string]wordList) pattern.Where {
	w := pattern.Where{}
	for k, v := range src {
		w[k] = v
	}
	return w
}
