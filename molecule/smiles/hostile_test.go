package smiles

import (
	"fmt"
	"strings"
	"testing"
	"time"
)

// lattice is a torus of carbons, w by h, written by its ring closures; marked gives each a stereo mark.
func lattice(w, h int, marked bool) string {
	var s strings.Builder
	number := map[[2]int]int{}
	close := func(kind, at int) {
		k := [2]int{kind, at}
		if number[k] == 0 {
			number[k] = len(number)
		}
		fmt.Fprintf(&s, "%%(%d)", number[k])
	}
	for y := range h {
		for x := range w {
			if x == 0 && y > 0 {
				s.WriteByte('.')
			}
			if marked {
				s.WriteString("[C@]")
			} else {
				s.WriteByte('C')
			}
			if x == 0 || x == w-1 {
				close(0, y)
			}
			close(1, y*w+x)
			close(1, (y+h-1)%h*w+x)
		}
	}
	return s.String()
}

// TestHostileInput: a megabyte of anything, and structures chosen to be hard, are read and written, or
// refused, within a second of processor time.
func TestHostileInput(t *testing.T) {
	const size = 1 << 20
	fill := func(s string) string { return strings.Repeat(s, size/len(s)) }
	ring := func(first, middle, last string, n int) string { return first + strings.Repeat(middle, n) + last }
	for name, text := range map[string]string{
		"dots": fill("C."), "a chain": fill("C"), "open branches": fill("C("), "open closures": fill("C%(1)C2"), "brackets": fill("[13C@@H+]"), "double bonds": fill("/C=C"),
		"hydrogens": fill("[H]"), "2,000 atoms apart": ring("C", ".C", "", 1998), "salts": ring("", "[Na+].[Cl-].", "C", 990),
		"nested branches": ring("", "C(", "C", 1900) + strings.Repeat(")", 1900), "an aromatic ring": ring("c1", "c", "c1", 1990), "unknown atoms": ring("*1", "*", "*1", 1990),
		"a sheet": lattice(30, 30, false), "a marked sheet": lattice(12, 12, true), "too many rings": lattice(44, 44, false),
		"a ring of like centers": ring("[C@H]1(F)", "[C@H](F)", "[C@H]1F", 140), "too many like centers": ring("[C@H]1(F)", "[C@H](F)", "[C@H]1F", 900),
		"a polyene": ring("C/C=", "C/C=C\\", "C", 600), "cubanes": ring("C12C3C4C1C5C2C3C45", ".C12C3C4C1C5C2C3C45", "", 240),
		"inositols": ring("C", ".O[C@H]1[C@H](O)[C@@H](O)[C@H](O)[C@H](O)[C@@H]1O", "", 160),
	} {
		start := processorTime(t)
		if m, err := Read(text); err == nil {
			Write(m)
		}
		if took := processorTime(t) - start; took > time.Second {
			t.Errorf("%s: %v", name, took)
		}
	}
}
