package molfile

import (
	"strconv"
	"strings"

	"shelfward/molecule"
)

// maxContinued bounds a V3000 line with its continuations.
const maxContinued = 1 << 18

// v30 reads the next V3000 line of the record, continuations joined, without its mark.
func (b *block) v30(what string) (string, error) {
	whole := ""
	for {
		s, err := b.line(what)
		if err != nil {
			return "", err
		}
		rest, ok := strings.CutPrefix(s, "M  V30 ")
		if !ok {
			return "", b.fail("expected %s ('M  V30 ...'), found %q", what, clip(s))
		}
		rest = strings.TrimRight(rest, " \t")
		text, continued := strings.CutSuffix(rest, "-")
		if !continued {
			return strings.TrimSpace(whole + rest), nil
		}
		if whole += text; len(whole) > maxContinued {
			return "", b.fail("a continued line is longer than %d characters", maxContinued)
		}
	}
}

// table3 reads a V3000 table from BEGIN CTAB to END CTAB.
func (b *block) table3() error {
	if err := b.expect3("BEGIN CTAB"); err != nil {
		return err
	}
	s, err := b.v30("COUNTS")
	if err != nil {
		return err
	}
	f := strings.Fields(s)
	if len(f) < 3 || f[0] != "COUNTS" {
		return b.fail("expected COUNTS with the numbers of atoms and bonds, found %q", clip(s))
	}
	atoms, err1 := strconv.Atoi(f[1])
	bonds, err2 := strconv.Atoi(f[2])
	if err1 != nil || err2 != nil || atoms < 0 || bonds < 0 {
		return b.fail("expected COUNTS with the numbers of atoms and bonds, found %q", clip(s))
	}
	if atoms > molecule.MaxAtoms {
		return b.fail("the structure has %d atoms; at most %d are accepted", atoms, molecule.MaxAtoms)
	}
	b.sawCharge = true                   // charges stand on the atoms
	place := make(map[string]int, atoms) // index as written -> atom
	for {
		s, err := b.v30("END CTAB")
		if err != nil {
			return err
		}
		switch {
		case s == "END CTAB":
			return b.complete3(atoms, bonds)
		case s == "BEGIN ATOM":
			b.atomLine = b.r.line + 1
			err = b.section3("END ATOM", func(f []string) error { return b.atom3(f, place) })
		case s == "BEGIN BOND":
			b.bondLine = b.r.line + 1
			err = b.section3("END BOND", func(f []string) error { return b.bond3(f, place) })
		case s == "BEGIN COLLECTION":
			err = b.section3("END COLLECTION", func(f []string) error {
				if strings.HasPrefix(f[0], "MDLV30/STEREL") || strings.HasPrefix(f[0], "MDLV30/STERAC") {
					b.record.Relative = true
				}
				return nil
			})
		case strings.HasPrefix(s, "BEGIN "): // brackets, objects in space: no part of the structure
			err = b.section3("END "+strings.Fields(s)[1], func([]string) error { return nil })
		}
		if err != nil {
			return err
		}
	}
}

func (b *block) complete3(atoms, bonds int) error {
	if len(b.b.Atoms) != atoms || len(b.b.Bonds) != bonds {
		return b.fail("%d atoms and %d bonds; the counts line has %d and %d", len(b.b.Atoms), len(b.b.Bonds), atoms, bonds)
	}
	return nil
}

func (b *block) expect3(want string) error {
	s, err := b.v30(want)
	if err == nil && s != want {
		err = b.fail("expected %s, found %q", want, clip(s))
	}
	return err
}

// section3 gives the fields of each line up to end to read.
func (b *block) section3(end string, read func(f []string) error) error {
	for {
		s, err := b.v30(end)
		if err != nil || s == end {
			return err
		}
		if f := strings.Fields(s); len(f) > 0 {
			if err := read(f); err != nil {
				return err
			}
		}
	}
}

// atom3 reads: index, symbol, three coordinates, atom class, KEY=VALUE ...
func (b *block) atom3(f []string, place map[string]int) error {
	if len(f) < 6 {
		return b.fail("expected an atom: index, symbol, three coordinates and class, found %q", clip(strings.Join(f, " ")))
	}
	if len(b.b.Atoms) >= molecule.MaxAtoms {
		return b.fail("more than %d atoms", molecule.MaxAtoms)
	}
	if _, double := place[f[0]]; double {
		return b.fail("atom index %s occurs twice", clip(f[0]))
	}
	a := molecule.Atom{Hydrogens: molecule.AutoHydrogens}
	if err := b.symbol(&a, strings.Trim(f[1], "'\"")); err != nil {
		return err
	}
	var p Point
	for i, v := range []*float64{&p.X, &p.Y, &p.Z} {
		x, err := strconv.ParseFloat(f[2+i], 64)
		if err != nil || x-x != 0 {
			return b.fail("expected a coordinate, found %q", clip(f[2+i]))
		}
		*v = x
	}
	if class, err := strconv.Atoi(f[5]); err != nil || class < 0 {
		return b.fail("expected an atom class, found %q", clip(f[5]))
	} else if class < 1000 {
		a.Class = uint16(class)
	}
	parity, valence, radical := 0, 0, 0
	for _, pair := range f[6:] {
		key, text, _ := strings.Cut(pair, "=")
		n, err := strconv.Atoi(text)
		switch key {
		case "CHG", "RAD", "CFG", "MASS", "VAL":
		default:
			continue
		}
		if err != nil || n < -15 || n > 999 || key == "CHG" && n > 15 || key == "MASS" && n < 0 {
			return b.fail("expected a number behind %s=, found %q", key, clip(text))
		}
		switch key {
		case "CHG":
			a.Charge = int8(n)
		case "RAD":
			radical = [4]int{0, 2, 1, 2}[max(0, min(3, n))]
		case "CFG":
			parity = n
		case "MASS":
			a.Isotope = uint16(n)
		case "VAL":
			if valence = n; n < 0 {
				valence = 15
			}
		}
	}
	place[f[0]] = b.b.AddAtom(a)
	b.points = append(b.points, p)
	b.oldCharge = append(b.oldCharge, 0)
	b.parity = append(b.parity, parity)
	b.valence = append(b.valence, valence)
	b.radical = append(b.radical, radical)
	return nil
}

// bond3 reads: index, type, two atom indices, KEY=VALUE ...
func (b *block) bond3(f []string, place map[string]int) error {
	if len(f) < 4 {
		return b.fail("expected a bond: index, type and two atoms, found %q", clip(strings.Join(f, " ")))
	}
	kind, err := strconv.Atoi(f[1])
	if err != nil {
		return b.fail("expected a bond type, found %q", clip(f[1]))
	}
	order, err := b.order(kind)
	if err != nil {
		return err
	}
	var at [2]int
	for i, text := range f[2:4] {
		a, ok := place[text]
		if !ok {
			return b.fail("a bond names atom %s, which the structure has not", clip(text))
		}
		at[i] = a
	}
	stereo := stereoNone
	for _, pair := range f[4:] {
		switch pair {
		case "CFG=1":
			stereo = stereoWedge
		case "CFG=2":
			if stereo = stereoEither; kind == 2 {
				stereo = stereoCis
			}
		case "CFG=3":
			stereo = stereoHash
		}
	}
	b.b.AddBond(at[0], at[1], order)
	b.stereo = append(b.stereo, stereo)
	return nil
}
