package route

import (
	"math"
	"os"
	"strings"
	"sync"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions"
	"shelfward/rules"
)

// bottles is a shelf for tests: structures with what is known about them, and reagents by name.
type bottles struct {
	list   []*molecule.Molecule
	bySeen map[molecule.Key]Material
	byName map[string]Material
}

func newBottles() *bottles {
	return &bottles{nil, map[molecule.Key]Material{}, map[string]Material{}}
}

func mustRead(t testing.TB, s string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(s)
	if err != nil {
		t.Fatalf("%s: %v", s, err)
	}
	return m
}

// put adds a bottle; change may set more fields.
func (b *bottles) put(t testing.TB, name, structure string, change func(*Material)) {
	t.Helper()
	m := mustRead(t, structure)
	mat := Computed(m, smiles.Write(m))
	mat.Name, mat.OnShelf = name, true
	if change != nil {
		change(&mat)
	}
	b.list = append(b.list, m)
	b.bySeen[m.SeenThroughKey()] = mat
	b.byName[strings.ToLower(name)] = mat
}

func (b *bottles) Molecule(m *molecule.Molecule) Material {
	if mat, ok := b.bySeen[m.SeenThroughKey()]; ok {
		return mat
	}
	return Computed(m, smiles.Write(m))
}

func (b *bottles) OtherMarks(m *molecule.Molecule) (found *molecule.Molecule) {
	for _, x := range b.list {
		if flatKey(x) == flatKey(m) && (found == nil || !marked(x)) {
			found = x
		}
	}
	return found
}

func (b *bottles) CarbonPrice() (least float64, priced bool, unpriced int) {
	for _, m := range b.list {
		n := int(m.Formula().Count[carbon])
		if n == 0 {
			continue
		}
		mat := b.Molecule(m)
		if price, known := mat.Price(); !known {
			unpriced = max(unpriced, n)
		} else if !priced || price/float64(n) < least {
			least, priced = price/float64(n), true
		}
	}
	return least, priced, unpriced
}

func (b *bottles) Named(name string) (Material, bool) {
	mat, ok := b.byName[strings.ToLower(name)]
	return mat, ok
}

var book = sync.OnceValues(func() (*reactions.Book, error) {
	if dir := os.Getenv("RULES_SNAPSHOT"); dir != "" {
		return reactions.Load(os.DirFS(dir))
	}
	return reactions.Load(rules.Files())
})

// worldWith makes a world of the built-in rules and a shelf.
func worldWith(t testing.TB, b *bottles) *World {
	t.Helper()
	rulesBook, err := book()
	if err != nil {
		t.Logf("rules: %.300s", err.Error())
	}
	return &World{Book: rulesBook, Transforms: rulesBook.Transforms, Materials: b, Shelf: b.list, ShelfItems: len(b.list),
		Gravity: testGravity, Name: func(*molecule.Molecule) string { return "" }, Write: smiles.Write, Read: smiles.Read}
}

// testGravity places a few codes for tests.
func testGravity(h string) int {
	order := []string{"H300", "H350", "H360", "H224", "H314", "EUH029", "H304", "H318", "H302", "H226"}
	for i, code := range order {
		if strings.HasPrefix(h, code) {
			return i
		}
	}
	return len(order)
}

var unknown = math.NaN()
