package route

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestPlanFile(t *testing.T) {
	p := plan(t, avoidWorld(t), "CCC(C)=O", Options{})
	path := filepath.Join(t.TempDir(), "plan.json")
	if err := p.Save(path); err != nil {
		t.Fatal(err)
	}
	q, err := Load(path)
	if err != nil {
		t.Fatal(err)
	}
	a, _ := json.Marshal(p)
	b, _ := json.Marshal(q)
	if !bytes.Equal(a, b) {
		t.Errorf("read back\n%s\nwritten\n%s", b, a)
	}
	if bytes.Contains(a, []byte(":null")) && !bytes.Contains(a, []byte(`"bound":null`)) || bytes.Count(a, []byte(":null")) > 1 {
		t.Errorf("empty lists must be []: %s", a)
	}
	if err := q.Restore(t.Context(), avoidWorld(t)); err != nil || q.Routes[0].Steps[0].Judged == nil || q.Routes[0].Steps[0].Set == nil {
		t.Errorf("restore: %v", err)
	}
	for name, text := range map[string]string{"no plan": "{}", "no json": "routes", "newer": `{"version": 99, "target": {"smiles": "C"}}`,
		"damaged": `{"version": 1, "target": {"smiles": "C"}, "routes": [{"code": "x", "steps": [{"transform": "a", "product": "C", "reactants": ["C"]}]}]}`,
		"no code": `{"version": 1, "target": {"smiles": "C"}, "routes": [{}]}`} {
		os.WriteFile(path, []byte(text), 0o600)
		if _, err := Load(path); err == nil || !strings.Contains(err.Error(), path) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestCode(t *testing.T) {
	first := plan(t, avoidWorld(t), "CCC(C)=O", Options{})
	again := plan(t, avoidWorld(t), "CCC(C)=O", Options{RankBy: Yield, Workers: 3})
	for i := range first.Routes {
		code := first.Routes[i].Code
		if len(code) != 7 || code != again.Routes[i].Code {
			t.Errorf("codes %q and %q", code, again.Routes[i].Code)
		}
		if r, err := first.Route(code); err != nil || r != &first.Routes[i] {
			t.Errorf("route %s: %v", code, err)
		}
	}
	if first.Routes[0].Code == first.Routes[1].Code {
		t.Error("two routes share a code")
	}
	if _, err := first.Route("zzzz999"); err == nil {
		t.Error("unknown code: no error")
	}
	other := plan(t, avoidWorld(t), "CCC(C)=O", Options{Avoid: []string{"bleach"}})
	if other.Routes[0].Code == first.Routes[0].Code {
		t.Error("other conditions, same code")
	}
}

func TestText(t *testing.T) {
	var b bytes.Buffer
	p := plan(t, avoidWorld(t), "CCC(C)=O", Options{Avoid: []string{"H302"}})
	if err := p.WriteText(&b); err != nil {
		t.Fatal(err)
	}
	golden := filepath.Join("testdata", "routes.txt")
	if os.Getenv("UPDATE_GOLDEN") != "" {
		os.MkdirAll("testdata", 0o755)
		os.WriteFile(golden, b.Bytes(), 0o644)
	}
	want, _ := os.ReadFile(golden)
	if b.String() != string(want) {
		t.Errorf("printed\n%s\nwant\n%s", b.String(), want)
	}
}

func TestDOT(t *testing.T) {
	r := &plan(t, avoidWorld(t), "CCC(C)=O", Options{}).Routes[0]
	var a, b bytes.Buffer
	for _, w := range []*bytes.Buffer{&a, &b} {
		if err := r.DOT(w); err != nil {
			t.Fatal(err)
		}
	}
	if a.String() != b.String() || !strings.Contains(a.String(), "butan-2-ol") {
		t.Errorf("%s", a.String())
	}
}

func TestBenchOrderRefusesCircles(t *testing.T) {
	if _, err := benchOrder([]string{"a", "b"}, [][]string{{"b"}, {"a"}}); err == nil {
		t.Error("a circle of steps has no order")
	}
}
