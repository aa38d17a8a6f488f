package molfile

import (
	"errors"
	"fmt"

	"shelfward/molecule"
)

// finish builds the molecule.
func (b *block) finish() (*Record, error) {
	if !b.sawCharge {
		for i, q := range b.oldCharge {
			b.b.Atoms[i].Charge = q
		}
	}
	b.setHydrogens()
	b.perceiveStereo()
	to := b.b.FoldHydrogens()
	m, err := b.b.Build()
	if err != nil {
		return nil, b.buildError(err, to)
	}
	b.record.Molecule = m
	if b.record.Coordinates = b.points; b.undrawn() {
		b.record.Coordinates = nil
	} else if to != nil {
		b.record.Coordinates = make([]Point, m.NumAtoms())
		for old, n := range to {
			if n >= 0 {
				b.record.Coordinates[n] = b.points[old]
			}
		}
	}
	if spare := m.FoldSpareHydrogens(); spare != m {
		if b.record.Coordinates != nil {
			b.record.Coordinates = keepHeavy(m, b.record.Coordinates, spare.NumAtoms())
		}
		b.record.Molecule = spare
	}
	b.record.Molecule = b.record.Molecule.SeparateCharges()
	return &b.record, nil
}

// undrawn says that all atoms lie in one place: the file has no coordinates.
func (b *block) undrawn() bool {
	for _, p := range b.points {
		if p != (Point{}) {
			return false
		}
	}
	return true
}

// keepHeavy drops the coordinates of hydrogens that were folded late.
func keepHeavy(m *molecule.Molecule, points []Point, left int) []Point {
	var out []Point
	drop := m.NumAtoms() - left
	for a := range points {
		if x := m.Atom(a); drop > 0 && x.Element == 1 && x.Isotope == 0 && m.Degree(a) == 1 && x.Charge == 0 {
			drop--
			continue
		}
		out = append(out, points[a])
	}
	return out
}

// setHydrogens fixes the counts that are not to be filled: given valences, radicals, metals.
func (b *block) setHydrogens() {
	sum, aromatic := make([]int, len(b.b.Atoms)), make([]int, len(b.b.Atoms))
	for _, x := range b.b.Bonds {
		order := int(x.Order)
		if x.Order == molecule.OrderAromatic {
			order = 1
			aromatic[x.A]++
			aromatic[x.B]++
		}
		sum[x.A] += order
		sum[x.B] += order
	}
	for a := range b.b.Atoms {
		x := &b.b.Atoms[a]
		switch v := b.valence[a]; {
		case v == 15 || x.Element.IsMetal() || x.Element == 0 || x.Element == 1:
			x.Hydrogens = 0
		case v > 0:
			x.Hydrogens = uint8(max(0, v-sum[a]-aromatic[a]/2)) // an aromatic bond counts as one and a half
		case b.radical[a] > 0:
			x.Hydrogens = uint8(max(0, int(molecule.FilledHydrogens(*x, sum[a]))-b.radical[a]))
		}
	}
}

// buildError points at the line of the atom or bond.
func (b *block) buildError(err error, to []int32) error {
	var e *molecule.Error
	if !errors.As(err, &e) {
		return err
	}
	line, name := b.record.Line+3, ""
	if e.Atom >= 0 {
		a := e.Atom
		for old, n := range to {
			if int(n) == e.Atom {
				a = old
			}
		}
		line, name = b.atomLine+a, fmt.Sprintf("atom %d: ", a+1)
	} else if e.Bond >= 0 && to == nil {
		line = b.bondLine + e.Bond
	}
	return b.failAt(line, "%s%s", name, e.Text)
}
