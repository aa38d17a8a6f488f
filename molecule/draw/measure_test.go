package draw

import (
	"bufio"
	"math"
	"os"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// openSet is the open structure set of the reference toolkit (Debian package rdkit-data): the first 5,000
// structures of the NCI set. testdata/sample.smi holds every twelfth of it.
const openSet = "/usr/share/RDKit/Data/NCI/first_5K.smi"

func readSet(t testing.TB, path string) (texts []string, list []*molecule.Molecule) {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Skip(err)
	}
	defer f.Close()
	in := bufio.NewScanner(f)
	for in.Scan() {
		fields := strings.Fields(in.Text())
		if len(fields) == 0 {
			continue
		}
		if m, err := smiles.Read(fields[0]); err == nil {
			texts, list = append(texts, fields[0]), append(list, m)
		}
	}
	return texts, list
}

// figures are the measures of a set of layouts.
type figures struct {
	structures, clear int     // clear: no two atoms closer than half a bond, no bond through an atom
	crossed           int     // structures with bonds that cross
	bonds             int     // outside bridged systems
	deviation         float64 // sum of |length-1| over them
	faulty            []string
}

// tooClose is the least distance of two atoms, through the one of an atom and a bond that it is not part of.
const tooClose, through = 0.5, 0.2

func (f *figures) add(text string, m *molecule.Molecule) {
	at := Layout(m)
	f.structures++
	fault := ""
	for a := range at {
		if math.IsNaN(at[a].X + at[a].Y) {
			fault = "no number"
		}
		for b := range a {
			if at[a].sub(at[b]).length() < tooClose-1e-9 {
				fault = "close"
			}
		}
	}
	crossed := false
	for b := range m.NumBonds() {
		x := m.Bond(b)
		p, q := at[x.A], at[x.B]
		for a := range at {
			if a != int(x.A) && a != int(x.B) && toLine(at[a], p, q) < through*through {
				fault = "bond through an atom"
			}
		}
		for c := range b {
			y := m.Bond(c)
			if x.A != y.A && x.A != y.B && x.B != y.A && x.B != y.B && crosses(p, q, at[y.A], at[y.B]) {
				crossed = true
			}
		}
		if !bridgedBond(m, b) {
			f.bonds++
			f.deviation += math.Abs(p.sub(q).length() - 1)
		}
	}
	if crossed {
		f.crossed++
	}
	if fault == "" {
		f.clear++
	} else {
		f.faulty = append(f.faulty, text+" "+fault)
	}
}

// bridgedBond says that a bond lies in a ring that shares more than one bond with another.
func bridgedBond(m *molecule.Molecule, b int) bool {
	x := m.Bond(b)
	if !x.Ring {
		return false
	}
	for i, r := range m.Rings() {
		if !has(r, x.A) || !has(r, x.B) {
			continue
		}
		for j, q := range m.Rings() {
			if i != j && common(r, q) > 2 {
				return true
			}
		}
	}
	return false
}

func has(r []int32, a int32) bool {
	for _, x := range r {
		if x == a {
			return true
		}
	}
	return false
}

func (f *figures) check(t *testing.T) {
	t.Helper()
	clear := float64(f.clear) / float64(f.structures)
	deviation := f.deviation / float64(f.bonds)
	t.Logf("%d structures: clear %.2f %%, with crossing bonds %d, mean deviation of bonds outside bridged systems %.3f %%",
		f.structures, 100*clear, f.crossed, 100*deviation)
	if clear < 0.99 {
		t.Errorf("clear: %.2f %%, at least 99 %% expected", 100*clear)
	}
	if deviation > 0.03 {
		t.Errorf("bond length: mean deviation %.2f %%, below 3 %% expected", 100*deviation)
	}
	if testing.Verbose() {
		for _, s := range f.faulty {
			t.Log(s)
		}
	}
}

func TestSampleIsClear(t *testing.T) {
	texts, list := readSet(t, "testdata/sample.smi")
	var f figures
	for i, m := range list {
		f.add(texts[i], m)
	}
	f.check(t)
}

func TestOpenSetIsClear(t *testing.T) {
	if os.Getenv("SHELFWARD_SLOW") == "" {
		t.Skip("slow: set SHELFWARD_SLOW=1")
	}
	texts, list := readSet(t, openSet)
	var f figures
	for i, m := range list {
		f.add(texts[i], m)
	}
	f.check(t)
}

// BenchmarkLayout lays the sample out. The canonical order is made once and kept by each molecule; see
// BenchmarkReadAndLayout for structures just read. Last figures, by processor time on one core: 37,000 layouts/s,
// 26,000/s with the canonical order; the reference toolkit of Debian 12 in the same minutes 9,100/s.
func BenchmarkLayout(b *testing.B) {
	_, list := readSet(b, "testdata/sample.smi")
	b.ReportAllocs()
	n := 0
	for b.Loop() {
		for _, m := range list {
			Layout(m)
			n++
		}
	}
	b.ReportMetric(float64(n)/b.Elapsed().Seconds(), "layouts/s")
}

// BenchmarkReadAndLayout reads each structure, orders it canonically and lays it out.
func BenchmarkReadAndLayout(b *testing.B) {
	texts, _ := readSet(b, "testdata/sample.smi")
	n := 0
	for b.Loop() {
		for _, text := range texts {
			m, err := smiles.Read(text)
			if err != nil {
				b.Fatal(err)
			}
			Layout(m)
			n++
		}
	}
	b.ReportMetric(float64(n)/b.Elapsed().Seconds(), "structures/s")
}
