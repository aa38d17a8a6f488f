package molecule

import "testing"

// chain builds a chain of n atoms, carbon but for the last.
func chain(n int, last Element) *Builder {
	b := &Builder{}
	for i := range n {
		e := Element(6)
		if i == n-1 {
			e = last
		}
		b.AddAtom(Atom{Element: e, Hydrogens: AutoHydrogens})
		if i > 0 {
			b.AddBond(i-1, i, 1)
		}
	}
	return b
}

// TestFingerprintAndSketch: a fingerprint depends on the drawing, a sketch only on the molecule, and both
// tell different molecules apart.
func TestFingerprintAndSketch(t *testing.T) {
	built := func(b *Builder) *Molecule {
		m, err := b.Build()
		if err != nil {
			t.Fatal(err)
		}
		return m
	}
	alcohol, amine := chain(2, 8), chain(2, 7)
	turned := &Builder{Atoms: []Atom{alcohol.Atoms[1], alcohol.Atoms[0]}, Bonds: alcohol.Bonds}
	if alcohol.Fingerprint() != chain(2, 8).Fingerprint() {
		t.Error("one drawing, two fingerprints")
	}
	if alcohol.Fingerprint() == turned.Fingerprint() || alcohol.Fingerprint() == amine.Fingerprint() {
		t.Error("two drawings share a fingerprint")
	}
	marked := chain(2, 8)
	marked.LeftOut = 1
	if marked.Fingerprint() == alcohol.Fingerprint() {
		t.Error("a drawing with a mark left out shares the fingerprint of one without")
	}
	if built(alcohol).Sketch() != built(turned).Sketch() {
		t.Error("the numbering matters to a sketch")
	}
	if built(alcohol).Sketch() == built(amine).Sketch() || built(chain(4, 8)).Sketch() == built(chain(5, 8)).Sketch() {
		t.Error("two molecules share a sketch")
	}
}
