package identify

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"

	"shelfward/molecule"
	"shelfward/molecule/formula"
	"shelfward/molecule/spectra"
	"shelfward/rules"
)

// Evidence is the evidence block of a case file, as written. Every part is optional. Decode it with
// rules.Decode and call Read to check it and to read the texts and files it names.
type Evidence struct {
	rules.Place
	Formula  rules.Text    `yaml:"formula"`
	Valences rules.Text    `yaml:"valences"`
	Contains []rules.Text  `yaml:"contains"`
	Lacks    []rules.Text  `yaml:"lacks"`
	Elements *Elements     `yaml:"elements"`
	Mass     *MassEvidence `yaml:"mass"`
	Infrared *Infrared     `yaml:"infrared"`
	Proton   *Spectrum     `yaml:"proton"`
	Carbon   *Spectrum     `yaml:"carbon"`
}

// Elements is a combustion analysis: mass % by element, one value per run.
type Elements struct {
	Analysis  []formula.Analysis
	Tolerance float64 // percent points; 0 means the default of 0.4
	NoOthers  bool    // others: none, no element but those listed and oxygen
}

// UnmarshalYAML reads {C: 58.2, H: [8.4, 8.5], tolerance: 0.3, others: none}.
func (e *Elements) UnmarshalYAML(n *yaml.Node) error {
	if n.Kind != yaml.MappingNode {
		return at(n, "elements: expected element symbols with mass %%, such as {C: 58.2, H: 8.4}")
	}
	for i := 0; i+1 < len(n.Content); i += 2 {
		key, val := n.Content[i], n.Content[i+1]
		switch key.Value {
		case "tolerance":
			f, err := number(val, "tolerance", 0.01, 5)
			if err != nil {
				return err
			}
			e.Tolerance = f
			continue
		case "others":
			if val.Value != "none" {
				return at(val, "others: only 'none' is understood (no element but those listed and oxygen), found %q", val.Value)
			}
			e.NoOthers = true
			continue
		}
		el, ok := molecule.ElementBySymbol(key.Value)
		if !ok {
			return at(key, "elements: %q is not an element symbol (nor tolerance, others)", key.Value)
		}
		if el == 8 {
			return at(key, "elements: oxygen is never measured by combustion; leave O out")
		}
		a := formula.Analysis{Element: el}
		list := []*yaml.Node{val}
		if val.Kind == yaml.SequenceNode {
			list = val.Content
		}
		for _, v := range list {
			f, err := number(v, key.Value, 0, 100)
			if err != nil {
				return err
			}
			a.Percent = append(a.Percent, f)
		}
		if len(a.Percent) == 0 {
			return at(val, "%s: expected a number or a list of runs", key.Value)
		}
		for _, old := range e.Analysis {
			if old.Element == el {
				return at(key, "%s is given twice; a list gives repeat runs", key.Value)
			}
		}
		e.Analysis = append(e.Analysis, a)
	}
	return nil
}

// at makes a placed error; the decoder adds the file name.
func at(n *yaml.Node, format string, args ...any) error {
	return &rules.Error{Line: n.Line, Column: n.Column, Text: fmt.Sprintf(format, args...)}
}

// number reads a plain number within bounds.
func number(n *yaml.Node, what string, low, high float64) (float64, error) {
	f, err := strconv.ParseFloat(n.Value, 64)
	if n.Kind != yaml.ScalarNode || err != nil || math.IsNaN(f) || math.IsInf(f, 0) {
		return 0, at(n, "%s: expected a number, found %q", what, n.Value)
	}
	if f < low || f > high {
		return 0, at(n, "%s: %v lies outside %v to %v", what, f, low, high)
	}
	return f, nil
}

// Span is a position or a range on an axis; Low equals High for a single value.
type Span struct {
	Low, High float64
	Set       bool
}

// Mid returns the middle of the span.
func (s Span) Mid() float64 { return (s.Low + s.High) / 2 }

// String writes 2.47 or 7.17-7.22.
func (s Span) String() string {
	if s.Low == s.High {
		return strconv.FormatFloat(s.Low, 'f', -1, 64)
	}
	return strconv.FormatFloat(s.Low, 'f', -1, 64) + "-" + strconv.FormatFloat(s.High, 'f', -1, 64)
}

// UnmarshalYAML reads 2.47 or '7.17-7.22'.
func (s *Span) UnmarshalYAML(n *yaml.Node) error {
	if n.Kind != yaml.ScalarNode {
		return at(n, "at: expected a number or a range such as '7.17-7.22'")
	}
	got, err := parseSpan(n.Value)
	if err != nil {
		return at(n, "at: %v", err)
	}
	*s = got
	return nil
}

// parseSpan reads a number or two joined by a hyphen or dash.
func parseSpan(text string) (Span, error) {
	t := strings.NewReplacer("–", "-", "—", "-", "−", "-", " ", "").Replace(text)
	bad := fmt.Errorf("expected a number or a range such as '7.17-7.22', found %q", text)
	if f, err := strconv.ParseFloat(t, 64); err == nil && !math.IsNaN(f) && !math.IsInf(f, 0) {
		return Span{f, f, true}, nil
	}
	for i := 1; i < len(t); i++ {
		if t[i] != '-' {
			continue
		}
		a, err1 := strconv.ParseFloat(t[:i], 64)
		b, err2 := strconv.ParseFloat(t[i+1:], 64)
		if err1 == nil && err2 == nil && !math.IsNaN(a+b) && !math.IsInf(a+b, 0) {
			return Span{min(a, b), max(a, b), true}, nil
		}
	}
	return Span{}, bad
}

// ExactEvidence is an accurate mass as written.
type ExactEvidence struct {
	rules.Place
	MZ  float64    `yaml:"mz" need:"mz: 145.0859"`
	Ion rules.Text `yaml:"ion"`
	PPM float64    `yaml:"ppm"`
}

// MassEvidence is what mass spectra gave.
type MassEvidence struct {
	rules.Place
	MolecularIon int            `yaml:"molecular_ion"`
	MolarMass    float64        `yaml:"molar_mass"`
	Exact        *ExactEvidence `yaml:"exact"`
	Peaks        [][]float64    `yaml:"peaks"`
	Listed       rules.Text     `yaml:"listed"`
	Text         rules.Text     `yaml:"text"`
	File         rules.Text     `yaml:"file"`
}

// Infrared is the list of infrared bands as written.
type Infrared struct {
	Bands  []BandEvidence
	Listed rules.Text
	Text   rules.Text
	File   rules.Text
}

// BandEvidence is one band.
type BandEvidence struct {
	At       Span
	Strength rules.Text
	Shape    rules.Text
}

// UnmarshalYAML reads a list of bands, or {bands: [...], listed: all, text: ..., file: ...}.
func (ir *Infrared) UnmarshalYAML(n *yaml.Node) error {
	switch n.Kind {
	case yaml.SequenceNode:
		return ir.readBands(n)
	case yaml.MappingNode:
		return eachKey(n, "infrared", map[string]func(*yaml.Node) error{
			"bands": ir.readBands, "listed": ir.Listed.UnmarshalYAML, "text": ir.Text.UnmarshalYAML, "file": ir.File.UnmarshalYAML,
		})
	}
	return at(n, "infrared: expected a list of bands such as - {at: 1712, strength: strong}, or keys bands, listed, text, file")
}

func (ir *Infrared) readBands(n *yaml.Node) error {
	if n.Kind != yaml.SequenceNode {
		return at(n, "bands: expected a list such as - {at: 1712, strength: strong}")
	}
	for _, item := range n.Content {
		var b BandEvidence
		if item.Kind != yaml.MappingNode {
			return at(item, "expected a band such as {at: 1712, strength: strong}")
		}
		err := eachKey(item, "a band", map[string]func(*yaml.Node) error{
			"at": b.At.UnmarshalYAML, "strength": b.Strength.UnmarshalYAML, "shape": b.Shape.UnmarshalYAML,
		})
		if err != nil {
			return err
		}
		if !b.At.Set {
			return at(item, "a band needs a place, such as at: 1712")
		}
		ir.Bands = append(ir.Bands, b)
	}
	return nil
}

// eachKey hands the values of a mapping to readers by key; other keys are errors.
func eachKey(n *yaml.Node, what string, readers map[string]func(*yaml.Node) error) error {
	for i := 0; i+1 < len(n.Content); i += 2 {
		key, val := n.Content[i], n.Content[i+1]
		read, ok := readers[key.Value]
		if !ok {
			known := slices.Sorted(maps.Keys(readers))
			return at(key, "%s: unknown key %q; known: %s", what, key.Value, strings.Join(known, ", "))
		}
		if err := read(val); err != nil {
			if _, placed := err.(*rules.Error); placed {
				return err
			}
			return at(val, "%s: %v", key.Value, err)
		}
	}
	return nil
}

// Spectrum is a 1H or 13C list as written.
type Spectrum struct {
	rules.Place
	Solvent rules.Text `yaml:"solvent"`
	MHz     float64    `yaml:"mhz"`
	Signals []Signal   `yaml:"signals"`
	Listed  rules.Text `yaml:"listed"`
	Text    rules.Text `yaml:"text"`
	File    rules.Text `yaml:"file"`
}

// Signal is one line of an NMR list as written.
type Signal struct {
	rules.Place
	At       Span       `yaml:"at" need:"at: 2.47"`
	Shape    rules.Text `yaml:"shape"`
	J        Couplings  `yaml:"J"`
	H        float64    `yaml:"H"`
	Ratio    float64    `yaml:"ratio"`
	Attached rules.Text `yaml:"attached"`
}

// Couplings are J values in Hz; one number or a list.
type Couplings []float64

// UnmarshalYAML reads 7.2 or [15.7, 6.4].
func (c *Couplings) UnmarshalYAML(n *yaml.Node) error {
	list := []*yaml.Node{n}
	if n.Kind == yaml.SequenceNode {
		list = n.Content
	}
	for _, v := range list {
		f, err := number(v, "J", 0, 400)
		if err != nil {
			return err
		}
		*c = append(*c, f)
	}
	return nil
}

// Case is a whole case file.
type Case struct {
	rules.Place
	Case     rules.Text   `yaml:"case"`
	Sample   rules.Text   `yaml:"sample"`
	Evidence *Evidence    `yaml:"evidence"`
	Target   rules.Text   `yaml:"target"`
	From     []rules.Text `yaml:"from"`
	FromAny  []rules.Text `yaml:"from_any"`
	Make     rules.Text   `yaml:"make"`
	Shelf    []rules.Text `yaml:"shelf"`
	Bench    rules.Text   `yaml:"bench"`
}

// DecodeCase reads a case file from its text. path is the name for messages. It checks the form
// only; Evidence.Read checks what is written in it.
func DecodeCase(path string, data []byte) (*Case, error) {
	var c Case
	if err := rules.Decode(path, data, &c); err != nil {
		return nil, err
	}
	return &c, nil
}

// shapes are the multiplicities a case file may name.
var shapes = map[string][]int{
	"s": {}, "d": {1}, "t": {2}, "q": {3}, "quint": {4}, "sext": {5}, "sept": {6},
	"dd": {1, 1}, "dt": {1, 2}, "td": {2, 1}, "ddd": {1, 1, 1}, "tt": {2, 2}, "dq": {1, 3}, "qd": {3, 1},
	"m": nil, "br": nil, "br s": {}, "ddt": {1, 1, 2}, "tq": {2, 3}, "qt": {3, 2}, "dddd": {1, 1, 1, 1},
}

// shapeNames is the list for messages.
const shapeNames = "s d t q quint sext sept dd dt td ddd m br"

// strengthOf reads the strength of a band.
func strengthOf(t rules.Text) (spectra.Strength, bool) {
	if !t.Written() {
		return spectra.AnyStrength, true
	}
	return spectra.StrengthByName(t.Value)
}
