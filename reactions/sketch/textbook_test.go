package sketch_test

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions"
	"shelfward/reactions/sketch"
	"shelfward/rules"
)

func loadBook(t *testing.T, dirs ...string) *reactions.Book {
	t.Helper()
	fsys, err := rules.Overlay(dirs...)
	if err != nil {
		t.Fatal(err)
	}
	b, err := reactions.Load(fsys)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func read(t *testing.T, texts ...string) []*molecule.Molecule {
	t.Helper()
	var out []*molecule.Molecule
	for _, text := range texts {
		m, err := smiles.Read(text)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		out = append(out, m)
	}
	return out
}

// sketchFile writes a transform for each example of the book, read off the example alone.
func sketchFile(t *testing.T, b *reactions.Book) (text string, count int) {
	t.Helper()
	var file strings.Builder
	file.WriteString("family: sketched\ntransforms:\n")
	for _, tr := range b.Transforms {
		for i, ex := range tr.Examples {
			s, err := sketch.Read(read(t, ex.From...), read(t, ex.To))
			if err != nil {
				t.Errorf("%s example %d: %s>>%s: %v", tr.ID, i+1, strings.Join(ex.From, "."), ex.To, err)
				continue
			}
			count++
			fmt.Fprintf(&file, "- id: sketched-%s-%d\n  name: sketched\n%s  closes: 3-20\n", tr.ID, i+1, s.Core())
			if tr.Everywhere {
				file.WriteString("  everywhere: true\n")
			}
			file.WriteString("  conditions:\n  - id: usual\n    yield: [50, 70, 85]\n    origin: estimated\n    source: {text: 'none', provenance: memory}\n")
			fmt.Fprintf(&file, "  source: {text: 'none', provenance: memory}\n  examples:\n  - %s\n  rejects:\n  - {from: ['C'], to: 'CC', why: 'none'}\n", s.Example())
		}
	}
	return file.String(), count
}

// TestSketchOfEveryExample draws the examples of the whole rule set without atom numbers, reads a transform off
// each, and runs it forwards: all must load, and all but one in a hundred must make the product that they were
// drawn with (a cleaved half that is not drawn leaves the pairing open). Source: the examples of rules/transforms.
func TestSketchOfEveryExample(t *testing.T) {
	text, count := sketchFile(t, loadBook(t))
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "sketched.yaml"), []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	b := loadBook(t, dir)
	failed := 0
	for _, tr := range b.Transforms {
		if tr.Family != "sketched" {
			continue
		}
		for _, f := range b.Check(tr) {
			if strings.Contains(f.Text, "forwards, ") {
				failed++
				t.Log(f)
			}
		}
	}
	t.Logf("%d sketched, %d do not give their product", count, failed)
	if failed*100 > count {
		t.Errorf("%d of %d sketches do not give their product", failed, count)
	}
}
