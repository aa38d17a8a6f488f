package reactions

import (
	"context"
	"testing"

	"shelfward/molecule"
	"shelfward/rules"
)

// TestAlike compares the symmetries found with identities: two bonds are alike when the molecule with
// isotopes at the ends of one is the molecule with isotopes at the ends of the other.
func TestAlike(t *testing.T) {
	w := (&Book{}).newWorkspace()
	for _, text := range []string{"Cc1ccccc1", "Cc1ccc(C)cc1", "c1ccc2ccccc2c1", "CC(C)(C)C", "OCCO", "c1ccc(cc1)-c1ccccc1", "C12C3C4C1C5C2C3C45", "C1CC2CCC1C2", "CC=CC", "O=C(O)CCC(=O)O", "CC(=O)C=C"} {
		m := read(t, text)
		marked := func(a, b int32) molecule.Key {
			x := m.Builder()
			x.Atoms[a].Isotope, x.Atoms[b].Isotope = 100, 101
			n, err := x.Build()
			if err != nil {
				t.Fatal(err)
			}
			return n.Key()
		}
		s := &subject{Subject: w.of(m).Subject}
		var bonds [][2]int32
		for i := range m.NumBonds() {
			b := m.Bond(i)
			bonds = append(bonds, [2]int32{b.A, b.B}, [2]int32{b.B, b.A})
		}
		for _, p := range bonds {
			for _, q := range bonds {
				got := s.alike(site{partMatch(p[:])}, site{partMatch(q[:])}, w)
				if want := marked(p[0], p[1]) == marked(q[0], q[1]); got != want {
					t.Errorf("%s: bonds %v and %v alike: %v, want %v", text, p, q, got, want)
				}
			}
		}
	}
}

// TestStepsAsFresh: what an expansion says of its steps, with all that it remembers and recognises, is
// what a run on the same materials alone says.
func TestStepsAsFresh(t *testing.T) {
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for i, m := range append(targets(t, "small.smi"), targets(t, "large.smi")...) {
		if i%5 != 0 {
			continue
		}
		steps, err := b.Expand(context.Background(), m, nil)
		if err != nil {
			t.Fatal(err)
		}
		for _, s := range steps {
			if len(s.Together) > 0 {
				continue
			}
			var from []*subject
			for _, r := range s.Reactants {
				from = append(from, b.subject(r.Molecule))
			}
			a := b.newWorkspace().assess(s.Transform, from, m)
			if n++; !a.found || a.share != s.Share || a.fraction != s.Fraction || a.racemic != s.Racemic {
				t.Errorf("%s to %s: share %v %v, run alone %v %v", s.Transform.ID, written(m), s.Share, s.Fraction, a.share, a.fraction)
			}
		}
	}
	if n < 500 {
		t.Errorf("only %d steps", n)
	}
}
