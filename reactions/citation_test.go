package reactions

import (
	"bytes"
	"strings"
	"testing"

	"shelfward/rules"
)

func TestSourceNote(t *testing.T) {
	for _, c := range []struct{ yaml, want string }{
		{"{text: 'Fischer, Speier, Ber. 1895, 28, 3252', provenance: memory}", "Fischer, Speier, Ber. 1895, 28, 3252 (memory)"},
		{"{text: a checked preparation, provenance: read, address: 'http://example.org/prep?x=1'}", "a checked preparation, http://example.org/prep?x=1 (read)"},
		{"{text: 'my runs 1 to 4', provenance: own, yield: [70, 82.5]}", "my runs 1 to 4 (own)"},
	} {
		var s struct {
			Source sourceNote `yaml:"source"`
		}
		if err := rules.Decode("x.yaml", []byte("source: "+c.yaml), &s); err != nil {
			t.Errorf("%s: %v", c.yaml, err)
		} else if got := s.Source.source().String(); got != c.want {
			t.Errorf("%s: %q, expected %q", c.yaml, got, c.want)
		}
	}
}

func TestSourceNoteErrors(t *testing.T) {
	for _, c := range []struct{ yaml, want string }{
		{"{text: a page, provenance: read}", "x.yaml:1:9: a source that was read needs its address"},
		{"{text: a page, provenance: memory, address: 'https://example.org'}", "an address goes with provenance: read"},
		{"{text: a page, provenance: read, address: 'example.org/x'}", "expected https://"},
		{"{text: a page, provenance: 'https://example.org/x'}", "write provenance: read, address: 'https://example.org/x'"},
		{"{text: a page, provenance: hearsay}", "provenance is one of memory, read, common practice, own"},
		{"{text: a page}", `the key "provenance" is missing`},
		{"{text: 'Ber. 1895, 28, 3252', provenance: common practice}", "volume and page"},
		{"{text: 'Ber. 28 (1895), p. 3252', provenance: common practice}", "volume and page"},
		{"{text: 'a handbook, vol. 3', provenance: own}", "volume and page"},
		{"{text: a page, provenance: memory, yield: 101}", "up to 100"},
		{"{text: a page, provenance: memory, yield: 0}", "above 0"},
		{"{text: a page, provenance: memory, adress: x}", `did you mean "address"`},
	} {
		var s struct {
			Source sourceNote `yaml:"source"`
		}
		err := rules.Decode("x.yaml", []byte("source: "+c.yaml), &s)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, expected %q", c.yaml, err, c.want)
		}
	}
}

// TestExampleSources asks of every built-in example whose source was read that it says what was found
// there, and that describing the transform shows it.
func TestExampleSources(t *testing.T) {
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	read := 0
	for _, x := range b.Transforms {
		if !x.HasReadSource() {
			continue
		}
		read++
		var text bytes.Buffer
		Describe(&text, x)
		for _, ex := range x.Examples {
			if !ex.Source.WasRead() {
				continue
			}
			if line := "reported yield " + ex.Source.YieldText() + ": " + ex.Source.String(); !strings.Contains(text.String(), line) {
				t.Errorf("%s: %s: the description lacks %q", ex.File, x.ID, line)
			}
		}
	}
	t.Logf("%d of %d transforms have an example whose source was read", read, len(b.Transforms))
	if read == 0 {
		t.Error("no transform has an example whose source was read")
	}
}
