package rules

import (
	"fmt"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"
)

type entry struct {
	Place
	ID     Text     `yaml:"id" need:"id: aldol"`
	Weight float64  `yaml:"weight"`
	Count  int      `yaml:"count"`
	Ready  bool     `yaml:"ready"`
	Names  []string `yaml:"names"`
	Span   [2]int   `yaml:"span"`
	Free   any      `yaml:"free"`
	Inner  *inner   `yaml:"inner"`
}

type inner struct {
	Low  float64        `yaml:"low"`
	High float64        `yaml:"high"`
	Tags map[string]int `yaml:"tags"`
}

type sheet struct {
	Title string  `yaml:"title"`
	Items []entry `yaml:"items"`
}

func TestDecode(t *testing.T) {
	const text = `title: a sheet
items:
  - id: aldol
    weight: 1.5
    count: 2
    ready: yes
    names: [a, '2']
    span: [1, 2]
    free: {x: [1]}
    inner: {low: 1, high: 2, tags: {q: 3}}
  - {id: '[CH3:1]'}
`
	var s sheet
	if err := Decode("s.yaml", []byte(text), &s); err != nil {
		t.Fatal(err)
	}
	if s.Title != "a sheet" || len(s.Items) != 2 {
		t.Fatalf("got %+v", s)
	}
	a, b := s.Items[0], s.Items[1]
	if a.ID.Value != "aldol" || a.Weight != 1.5 || a.Count != 2 || !a.Ready || a.Names[1] != "2" || a.Span != [2]int{1, 2} || a.Inner.Tags["q"] != 3 {
		t.Errorf("first item: got %+v", a)
	}
	if a.Place.String() != "s.yaml:3" || b.Place.Line != 11 {
		t.Errorf("places: got %v and %v, want lines 3 and 11", a.Place, b.Place)
	}
	if b.ID.Line != 11 || b.ID.Column != 11 {
		t.Errorf("text place: got %d:%d, want 11:11 (inside the quotes)", b.ID.Line, b.ID.Column)
	}
}

// TestDecodeErrors gives for each text every line of the message, at its place.
func TestDecodeErrors(t *testing.T) {
	cases := []struct{ name, text, want string }{
		{"unknown key, near", "titel: x", `s.yaml:1:1: unknown key "titel" (did you mean "title"?)`},
		{"unknown key, far", "zebra: x", `s.yaml:1:1: unknown key "zebra" (known here: title, items)`},
		{"twice", "title: x\ntitle: y", `s.yaml:2:1: the key "title" is written twice (first on line 1)`},
		{"number for text", "title: 7", `s.yaml:1:8: expected a text, found the number 7: put it in single quotes`},
		{"word for text", "title: true", `s.yaml:1:8: expected a text, found the word true: put it in single quotes`},
		{"list for text", "title: [CH3]", `s.yaml:1:8: expected a text, found a list; a text that begins with a bracket needs quotes: put it in single quotes`},
		{"nothing for text", "title:", `s.yaml:1:7: expected a text, found nothing: write one, or '' for none`},
		{"list for Text", "items:\n - id: [C:1]", `s.yaml:2:8: expected a text, found a list; a text that begins with a bracket needs quotes: put it in single quotes`},
		{"text for list", "items:\n - {id: x, names: abc}", `s.yaml:2:19: expected a list, found the text "abc": write [abc]`},
		{"text for number", "items:\n - {id: x, weight: heavy}", `s.yaml:2:20: expected a number, found the text "heavy"`},
		{"quoted number", "items:\n - {id: x, weight: '1.5'}", `s.yaml:2:20: expected a number, found the text "1.5": leave out the quotes`},
		{"decimal comma", "items:\n - id: x\n   weight: 1,5", `s.yaml:3:12: expected a number, found the text "1,5" (write a decimal point)`},
		{"not a number", "items:\n - {id: x, weight: .nan}", `s.yaml:2:20: expected a number, found the number .nan`},
		{"fraction for count", "items:\n - {id: x, count: 1.5}", `s.yaml:2:19: expected a whole number, found the number 1.5`},
		{"missing", "items:\n - {weight: 1}", `s.yaml:2:4: the key "id" is missing: write id: aldol`},
		{"short array", "items:\n - {id: x, span: [1]}", `s.yaml:2:18: expected a list of 2, found a list of 1`},
		{"alias", "title: &a x\nitems: *a", `s.yaml:2:8: an alias (*a) is not accepted here: write the value out`},
		{"merge", "title: x\n<<: {a: b}", `s.yaml:2:1: merge keys (<<) are not accepted: write the keys out`},
		{"not a mapping", "- x", `s.yaml:1:1: expected keys and values (title, items), found a list of 1`},
		{"two documents", "title: x\n---\ntitle: y", `s.yaml:2: a second document begins here; a file holds one`},
		{"all of them, by place", "items:\n - {weight: x}\n - {id: 3}\ntitel: x", strings.Join([]string{
			`s.yaml:2:4: the key "id" is missing: write id: aldol`,
			`s.yaml:2:13: expected a number, found the text "x"`,
			`s.yaml:3:9: expected a text, found the number 3: put it in single quotes`,
			`s.yaml:4:1: unknown key "titel" (did you mean "title"?)`}, "\n")},
		{"capped", "items: [" + strings.Repeat("{id: 1},", 12) + "]", repeated("s.yaml:1:%d: expected a text, found the number 1: put it in single quotes\n", 14, 8, 10) + "... and 2 more"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			err := Decode("s.yaml", []byte(c.text), new(sheet))
			if err == nil {
				t.Fatalf("no error for %q, want %q", c.text, c.want)
			}
			if err.Error() != c.want {
				t.Errorf("got\n%s\nwant\n%s", err, c.want)
			}
		})
	}
}

// repeated writes the line count times, its column growing by step.
func repeated(line string, column, step, count int) string {
	var sb strings.Builder
	for i := range count {
		fmt.Fprintf(&sb, line, column+i*step)
	}
	return sb.String()
}

func TestDecodeSyntaxError(t *testing.T) {
	err := Decode("s.yaml", []byte("title: x\nitems:\n  - id: [Na+].[OH-]\n"), new(sheet))
	if err == nil || !strings.HasPrefix(err.Error(), "s.yaml:") || !strings.Contains(err.Error(), "single quotes") {
		t.Errorf("got %v, want a line of s.yaml and the hint about quotes", err)
	}
	if strings.Contains(err.Error(), "\n") {
		t.Errorf("more than one line: %q", err)
	}
}

// number accepts a number or the word auto.
type number struct{ auto bool }

func (x *number) UnmarshalYAML(n *yaml.Node) error {
	if n.Value == "auto" {
		x.auto = true
		return nil
	}
	var f float64
	return DecodeNode(n, &f)
}

func TestDecodeUnmarshaler(t *testing.T) {
	var v struct {
		A, B number
	}
	if err := Decode("s.yaml", []byte("a: auto\nb: 3"), &v); err != nil || !v.A.auto {
		t.Errorf("got %+v, %v", v, err)
	}
	err := Decode("s.yaml", []byte("a: auto\nb: [3]"), &v)
	if want := "s.yaml:2:4: expected a number, found a list of 1"; err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

func TestDecodeEmpty(t *testing.T) {
	s := sheet{Title: "kept"}
	if err := Decode("s.yaml", []byte("# only a comment\n"), &s); err != nil || s.Title != "kept" {
		t.Errorf("got %+v, %v", s, err)
	}
}

func TestErrorAt(t *testing.T) {
	var s sheet
	if err := Decode("s.yaml", []byte("items:\n - id: 'C[C'\n"), &s); err != nil {
		t.Fatal(err)
	}
	e := s.Items[0].ID.ErrorAt("s.yaml", 1, "'[' is never closed")
	if e.Error() != "s.yaml:2:10: '[' is never closed" || e.Column != 10 || e.Detail != "    C[C\n     ^" {
		t.Errorf("got %q, column %d, detail\n%s", e, e.Column, e.Detail)
	}
}

func TestNear(t *testing.T) {
	known := []string{"title", "items", "reagents", "solvents"}
	for word, want := range map[string]string{
		"titel": "title", "TITLE": "title", "item": "items", "reagent": "reagents", "solvetns": "solvents", "xyz": "", "": "",
	} {
		if got := Near(word, known); got != want {
			t.Errorf("Near(%q) = %q, want %q", word, got, want)
		}
	}
}

func FuzzDecode(f *testing.F) {
	f.Add("title: x\nitems: [{id: a, span: [1, 2]}]")
	f.Add("items: &a [*a]")
	f.Add("{[: }")
	f.Fuzz(func(t *testing.T, text string) {
		if err := Decode("f.yaml", []byte(text), new(sheet)); err != nil && !strings.HasPrefix(err.Error(), "f.yaml:") {
			t.Errorf("message without its place: %q", err)
		}
	})
}
