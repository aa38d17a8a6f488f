package reactions

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// byproducts lists what a run leaves beside the target, per molecule of target.
func (t *Transform) byproducts(o *outcome, c *Conditions, main int, target *molecule.Molecule, perRun float64) []Byproduct {
	var out []Byproduct
	add := func(m *molecule.Molecule, n float64) {
		for i := range out {
			if out[i].Molecule.Key() == m.Key() {
				out[i].Count += n
				return
			}
		}
		out = append(out, Byproduct{m, n})
	}
	taken := t.takenPieces(o, c)
	for i, p := range o.pieces {
		if taken[i] || p.m.FlatKey() == o.pieces[main].m.FlatKey() {
			continue
		}
		add(p.m, 1/perRun)
	}
	for _, g := range c.Gives {
		if m := t.given(o, &g); m != nil {
			add(m, g.Count*float64(o.sites)/perRun)
		}
	}
	return out
}

// takenPieces marks the pieces that a '[*:9]' of gives accounts for.
func (t *Transform) takenPieces(o *outcome, c *Conditions) map[int]bool {
	taken := map[int]bool{}
	for _, g := range c.Gives {
		for _, class := range g.stars {
			s := t.script.slotOfClass(class)
			for _, to := range o.mappings {
				if s < 0 || to[s] < 0 {
					continue
				}
				for i, p := range o.pieces {
					if slices.Index(p.from, to[s]) >= 0 {
						taken[i] = true
					}
				}
			}
		}
	}
	return taken
}

func starClasses(s string) []int {
	var out []int
	for i := strings.Index(s, "[*:"); i >= 0; {
		class := 0
		for j := i + 3; j < len(s) && s[j] >= '0' && s[j] <= '9'; j++ {
			class = class*10 + int(s[j]-'0')
		}
		out = append(out, class)
		next := strings.Index(s[i+1:], "[*:")
		if next < 0 {
			break
		}
		i += 1 + next
	}
	return out
}

// given is the molecule of an entry of gives; a star becomes the fragment that left with its class.
func (t *Transform) given(o *outcome, g *Amount) *molecule.Molecule {
	m := g.read
	for _, class := range g.stars {
		left := t.leaving(o, class)
		if left == nil || m == nil {
			return nil
		}
		m = graft(m, class, left, t.leavingAtom(o, class))
	}
	return m
}

// leavingAtom is the atom of the leaving piece that was cut off.
func (t *Transform) leavingAtom(o *outcome, class int) int {
	s := t.script.slotOfClass(class)
	for _, p := range o.pieces {
		if i := slices.Index(p.from, o.mappings[0][s]); i >= 0 {
			return i
		}
	}
	return 0
}

// graft puts frag in place of the star of m with a class: the star's bonds go to the fragment's atom at, which gives
// up one hydrogen for each.
func graft(m *molecule.Molecule, class int, frag *molecule.Molecule, at int) *molecule.Molecule {
	star := -1
	for a := 0; a < m.NumAtoms(); a++ {
		if m.Atom(a).Element == 0 && int(m.Atom(a).Class) == class {
			star = a
		}
	}
	if star < 0 {
		return m
	}
	b := &molecule.Builder{}
	index := make([]int, m.NumAtoms())
	for a := 0; a < m.NumAtoms(); a++ {
		if a != star {
			at := m.Atom(a)
			at.Aromatic = false
			index[a] = b.AddAtom(at)
		}
	}
	first := len(b.Atoms)
	for a := 0; a < frag.NumAtoms(); a++ {
		x := frag.Atom(a)
		x.Aromatic, x.Class = false, 0
		if a == at {
			x.Hydrogens = uint8(max(0, int(x.Hydrogens)-m.Degree(star)))
		}
		b.AddAtom(x)
	}
	index[star] = first + at
	for i := 0; i < m.NumBonds(); i++ {
		bd := m.Bond(i)
		b.AddBond(index[bd.A], index[bd.B], bd.Order)
	}
	for i := 0; i < frag.NumBonds(); i++ {
		bd := frag.Bond(i)
		b.AddBond(first+int(bd.A), first+int(bd.B), bd.Order)
	}
	out, err := b.Build()
	if err != nil {
		return nil
	}
	return out
}

// tally counts atoms per element, hydrogens included, and charge.
type tally struct {
	count  [119]float64
	charge float64
}

func (t *tally) add(m *molecule.Molecule, n float64) {
	f := m.Formula()
	for e, k := range f.Count {
		t.count[e] += n * float64(k)
	}
	t.charge += n * float64(f.Charge)
}

// String writes what is left over, empty if nothing is: "+2 H, -1 O".
func (t *tally) String() string {
	var parts []string
	for e, n := range t.count {
		if math.Abs(n) > 0.02 {
			parts = append(parts, fmt.Sprintf("%+.3g %s", n, molecule.Element(e).Symbol()))
		}
	}
	if math.Abs(t.charge) > 0.02 {
		parts = append(parts, fmt.Sprintf("%+.3g charge", t.charge))
	}
	return strings.Join(parts, ", ")
}

// imbalance returns what the right side of a run has more than the left: nothing for a balanced rule.
func (t *Transform) imbalance(o *outcome, c *Conditions) string {
	var sum tally
	for _, m := range o.pool.molecules {
		sum.add(m, -1)
	}
	taken := t.takenPieces(o, c)
	for i, p := range o.pieces {
		if !taken[i] {
			sum.add(p.m, 1)
		}
	}
	for _, u := range c.Uses {
		if m, err := smiles.Read(u.SMILES); err == nil {
			sum.add(m, -u.Count*float64(o.sites))
		}
	}
	for _, g := range c.Gives {
		if m := t.given(o, &g); m != nil {
			sum.add(m, g.Count*float64(o.sites))
		}
	}
	return sum.String()
}
