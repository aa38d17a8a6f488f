package rules

import (
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"
)

// TestFilesParse reads every embedded file as YAML: a broken one must not wait for its loader.
func TestFilesParse(t *testing.T) {
	count := 0
	err := fs.WalkDir(Files(), ".", func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || !isYAML(name) {
			return err
		}
		count++
		data, err := fs.ReadFile(Files(), name)
		if err != nil {
			return err
		}
		var root yaml.Node
		if err := yaml.Unmarshal(data, &root); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if count == 0 {
		t.Error("no embedded file found")
	}
}

func write(t *testing.T, dir, name, text string) {
	t.Helper()
	full := filepath.Join(dir, name)
	if err := os.MkdirAll(filepath.Dir(full), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(full, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

func TestOverlay(t *testing.T) {
	one, two := t.TempDir(), t.TempDir()
	write(t, one, "my-cut.yaml", "id: my-cut")
	write(t, one, "transforms/other.yaml", "id: other")
	write(t, one, "restricted.yaml", "mine: true")
	write(t, two, "transforms/my-cut.yaml", "id: newer")
	write(t, two, "acts.yaml", "acts: {none: ''}")
	fsys, err := Overlay(one, two)
	if err != nil {
		t.Fatal(err)
	}
	data, err := fs.ReadFile(fsys, "transforms/my-cut.yaml")
	if err != nil || string(data) != "id: newer" {
		t.Errorf("the last folder does not win: %q, %v", data, err)
	}
	if got, want := PathOf(fsys, "transforms/other.yaml"), filepath.ToSlash(one)+"/transforms/other.yaml"; got != want {
		t.Errorf("PathOf: got %q, want %q", got, want)
	}
	entries, err := fs.ReadDir(fsys, "transforms")
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	list := strings.Join(names, " ")
	if !strings.Contains(list, "my-cut.yaml") || !strings.Contains(list, "other.yaml") || strings.Count(list, "my-cut") != 1 {
		t.Errorf("ReadDir: got %s", list)
	}
	acts, _ := fs.ReadFile(fsys, "acts.yaml")
	if own, _ := fs.ReadFile(Files(), "acts.yaml"); string(acts) != string(own) {
		t.Error("a user's file replaced one that may only be added to")
	}
	layers, err := Layers(fsys, "acts.yaml")
	if err != nil || len(layers) != 2 || layers[0].Path != "rules/acts.yaml" {
		t.Errorf("Layers: got %d, %v", len(layers), err)
	}
	if IsBuiltin(fsys, "transforms/my-cut.yaml") || !IsBuiltin(fsys, "acts.yaml") {
		t.Error("IsBuiltin is wrong")
	}
}

func TestOverlayErrors(t *testing.T) {
	dir := t.TempDir()
	write(t, dir, "file", "x")
	for path, want := range map[string]string{
		filepath.Join(dir, "absent"): "cannot read this rules folder",
		filepath.Join(dir, "file"):   "expected a folder",
	} {
		if _, err := Overlay(path); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("Overlay(%s): got %v, want %q", path, err, want)
		}
	}
}

// TestActs reads the list of acts: no tag twice, each with its meaning.
func TestActs(t *testing.T) {
	var file struct {
		Acts map[string]string `yaml:"acts"`
	}
	if err := ReadInto(Files(), "acts.yaml", &file); err != nil {
		t.Fatal(err)
	}
	for act, meaning := range file.Acts {
		if strings.TrimSpace(meaning) == "" {
			t.Errorf("act %q has no meaning", act)
		}
	}
}
