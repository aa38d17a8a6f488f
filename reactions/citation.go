package reactions

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"

	"shelfward/rules"
)

// Source says where a statement of the rules is from.
type Source struct {
	Text       string
	Provenance string     // memory | read | common practice | own
	Address    string     // of the page read; empty otherwise
	Yield      [2]float64 // %, low and high, as reported there; 0 not stated
}

// provenances are the words of `provenance`.
var provenances = []string{"memory", "read", "common practice", "own"}

// WasRead reports whether the source itself was read, not remembered.
func (s Source) WasRead() bool { return s.Provenance == "read" }

// String writes the source with its address and how it is known: "Fischer, Speier 1895 (memory)".
func (s Source) String() string {
	text := s.Text
	if s.Address != "" {
		text += ", " + s.Address
	}
	return text + " (" + s.Provenance + ")"
}

// YieldText writes the reported yield, empty if there is none: "85 %", "80 to 85 %".
func (s Source) YieldText() string {
	low, high := strconv.FormatFloat(s.Yield[0], 'f', -1, 64), strconv.FormatFloat(s.Yield[1], 'f', -1, 64)
	switch {
	case s.Yield[1] == 0:
		return ""
	case low == high:
		return low + " %"
	}
	return low + " to " + high + " %"
}

// sourceNote mirrors a `source` of the rules.
type sourceNote struct {
	Text       string `yaml:"text" need:"text: 'textbook chemistry, no single source'"`
	Provenance string `yaml:"provenance" need:"provenance: memory"`
	Address    string `yaml:"address"`
	Yield      span   `yaml:"yield"`
}

// UnmarshalYAML reads the keys strictly and checks that they say how the source is known.
func (s *sourceNote) UnmarshalYAML(n *yaml.Node) error {
	type keys sourceNote
	if err := rules.DecodeNode(n, (*keys)(s)); err != nil {
		return err
	}
	return s.check()
}

var (
	addressForm = regexp.MustCompile(`^https?://[^\s/]+\S*$`)
	// volumeAndPage finds "28, 3252", "58 (4), 12", "vol. 3, p. 45".
	volumeAndPage = regexp.MustCompile(`\d(\s*\(\d+\))?,\s+(pp?\.\s*)?\d|\bp{1,2}\.\s*\d|\b[Vv]ol\.\s*\d`)
)

func (s sourceNote) check() error {
	switch {
	case addressForm.MatchString(s.Provenance):
		return fmt.Errorf("an address is no provenance: write provenance: read, address: '%s'", s.Provenance)
	case !slices.Contains(provenances, s.Provenance):
		return fmt.Errorf("provenance is one of %s, not %q", strings.Join(provenances, ", "), s.Provenance)
	case s.Provenance == "read" && s.Address == "":
		return fmt.Errorf("a source that was read needs its address: write address: 'https://...', or provenance: memory")
	case s.Provenance != "read" && s.Address != "":
		return fmt.Errorf("an address goes with provenance: read (the page itself was read), not with %q", s.Provenance)
	case s.Address != "" && !addressForm.MatchString(s.Address):
		return fmt.Errorf("address %q: expected https://... or http://... without spaces", s.Address)
	case s.Provenance != "read" && s.Provenance != "memory" && volumeAndPage.MatchString(s.Text):
		return fmt.Errorf("a citation with volume and page needs the address where it was read, or provenance: memory")
	case s.Yield.Written && (s.Yield.Low <= 0 || s.Yield.High > 100):
		return fmt.Errorf("yield is the reported %%, above 0 and up to 100")
	}
	return nil
}

func (s sourceNote) source() Source {
	return Source{s.Text, s.Provenance, s.Address, [2]float64{s.Yield.Low, s.Yield.High}}
}

// HasReadSource reports whether an example of the transform is from a page that was read.
func (t *Transform) HasReadSource() bool {
	return slices.ContainsFunc(t.Examples, func(ex Example) bool { return ex.Source.WasRead() })
}
