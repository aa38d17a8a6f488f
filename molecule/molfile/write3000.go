package molfile

import (
	"bufio"
	"fmt"
	"io"
)

// WriteV3000 is Write in the V3000 form, which holds any number of atoms.
func WriteV3000(w io.Writer, r *Record) error {
	t, err := newTable(r)
	if err != nil {
		return err
	}
	out := bufio.NewWriter(w)
	fmt.Fprintf(out, "%s\n  shelfward%s\n\n  0  0  0     0  0            999 V3000\n", oneLine(r.Title), t.dimension())
	t.write3(out, r.Relative)
	fmt.Fprintln(out, "M  END")
	return out.Flush()
}

// WriteSDV3000 is WriteSD in the V3000 form.
func WriteSDV3000(w io.Writer, r *Record) error {
	if err := WriteV3000(w, r); err != nil {
		return err
	}
	return writeFields(w, r)
}

// write3 writes the table from BEGIN CTAB to END CTAB.
func (t *table) write3(out *bufio.Writer, relative bool) {
	m := t.m
	fmt.Fprintf(out, "M  V30 BEGIN CTAB\nM  V30 COUNTS %d %d 0 0 %d\nM  V30 BEGIN ATOM\n", m.NumAtoms(), m.NumBonds(), t.chiral())
	parity := t.parities()
	for a := range m.NumAtoms() {
		x, p := m.Atom(a), t.points[a]
		fmt.Fprintf(out, "M  V30 %d %s %.4f %.4f %.4f %d", a+1, x.Element.Symbol(), p.X, p.Y, p.Z, x.Class%1000)
		valence := t.valence(a)
		if valence == 15 {
			valence = -1
		}
		for _, f := range []struct {
			key   string
			value int
		}{{"CHG", int(x.Charge)}, {"CFG", parity[a]}, {"MASS", int(x.Isotope)}, {"VAL", valence}} {
			if f.value != 0 {
				fmt.Fprintf(out, " %s=%d", f.key, f.value)
			}
		}
		fmt.Fprintln(out)
	}
	fmt.Fprint(out, "M  V30 END ATOM\n")
	if m.NumBonds() > 0 {
		fmt.Fprint(out, "M  V30 BEGIN BOND\n")
		cfg := map[int]int{stereoWedge: 1, stereoCis: 2, stereoEither: 2, stereoHash: 3}
		for b := range m.NumBonds() {
			x := m.Bond(b)
			first := t.from[b]
			fmt.Fprintf(out, "M  V30 %d %d %d %d", b+1, min(x.Order, 3), first+1, x.A+x.B-first+1)
			if c := cfg[t.stereo[b]]; c != 0 {
				fmt.Fprintf(out, " CFG=%d", c)
			}
			fmt.Fprintln(out)
		}
		fmt.Fprint(out, "M  V30 END BOND\n")
	}
	if relative && len(m.Centers()) > 0 {
		fmt.Fprintf(out, "M  V30 BEGIN COLLECTION\nM  V30 MDLV30/STERAC1 ATOMS=(%d", len(m.Centers()))
		for i, c := range m.Centers() {
			if i > 0 && i%12 == 0 {
				fmt.Fprint(out, " -\nM  V30")
			}
			fmt.Fprintf(out, " %d", c.Atom+1)
		}
		fmt.Fprint(out, ")\nM  V30 END COLLECTION\n")
	}
	fmt.Fprint(out, "M  V30 END CTAB\n")
}
