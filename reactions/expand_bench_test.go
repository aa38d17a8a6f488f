package reactions

import (
	"context"
	"fmt"
	"os"
	"slices"
	"strings"
	"syscall"
	"testing"
	"time"

	"shelfward/molecule"
	"shelfward/rules"
)

// targets reads a list of testdata/expansion.
func targets(t testing.TB, name string) []*molecule.Molecule {
	t.Helper()
	data, err := os.ReadFile("../testdata/expansion/" + name)
	if err != nil {
		t.Fatal(err)
	}
	var list []*molecule.Molecule
	for _, text := range strings.Fields(string(data)) {
		list = append(list, read(t, text))
	}
	return list
}

// referenceRates are what reference_rate.py printed last: transform-molecule pairs and precursor sets per
// second. Make them anew on the machine and under the load of the benchmark before comparing.
func referenceRates(t testing.TB) (pairs, sets float64) {
	t.Helper()
	data, err := os.ReadFile("../testdata/expansion/reference.tsv")
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSpace(string(data)), "\n")
	if _, err := fmt.Sscanf(lines[len(lines)-1], "%g %g", &pairs, &sets); err != nil {
		t.Fatal(err)
	}
	return pairs, sets
}

// some is a book of n of the transforms, at equal distances from place first on.
func (b *Book) some(n, first int) *Book {
	c := &Book{byID: map[string]*Transform{}, groups: b.groups, arene: b.arene, media: b.media, common: &commonMolecules{}}
	for i := range n {
		t := b.Transforms[(first+i*len(b.Transforms)/n)%len(b.Transforms)]
		c.Transforms = append(c.Transforms, t)
		c.byID[t.ID] = t
	}
	c.sift()
	return c
}

// expandAll expands every target once and returns the time of each and the number of steps.
func (b *Book) expandAll(t testing.TB, ms []*molecule.Molecule, stocked Stocked) (took []time.Duration, steps int) {
	t.Helper()
	for _, m := range ms {
		start := processorTime()
		list, err := b.Expand(context.Background(), m, stocked)
		if err != nil {
			t.Fatal(err)
		}
		took = append(took, processorTime()-start)
		steps += len(list)
	}
	return took, steps
}

// processorTime is the processor time of this run so far: other work on the machine does not count.
func processorTime() time.Duration {
	var r syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &r); err != nil {
		panic(err)
	}
	return time.Duration(r.Utime.Nano() + r.Stime.Nano())
}

func median(list []time.Duration) time.Duration {
	slices.Sort(list)
	return list[len(list)/2]
}

func reportMedian(b *testing.B, all [][]time.Duration) {
	var least []time.Duration // per target, of all rounds
	for i := range all[0] {
		d := all[0][i]
		for _, round := range all {
			d = min(d, round[i])
		}
		least = append(least, d)
	}
	b.ReportMetric(float64(median(least).Microseconds())/1000, "median-ms")
}

// BenchmarkExpand: one expansion of fifty small and fifty large molecules, alone and with everything up to
// six heavy atoms at hand; the growth with the number of transforms; and proposals built without the
// forward check beside the reference toolkit. Times are of the processor; use -cpu 1 for one core.
func BenchmarkExpand(b *testing.B) {
	book, err := Load(rules.Files())
	if err != nil {
		b.Fatal(err)
	}
	lists := map[string][]*molecule.Molecule{"small": targets(b, "small.smi"), "large": targets(b, "large.smi")}
	atHand := func(m *molecule.Molecule) bool { return m.NumAtoms() <= 6 }
	for _, c := range []struct {
		name, list string
		stocked    Stocked
	}{{"small", "small", nil}, {"large", "large", nil}, {"small/stocked", "small", atHand}, {"large/stocked", "large", atHand}} {
		b.Run(c.name, func(b *testing.B) {
			var all [][]time.Duration
			steps := 0
			for range b.N {
				took, n := book.expandAll(b, lists[c.list], c.stocked)
				all, steps = append(all, took), n
			}
			reportMedian(b, all)
			b.ReportMetric(float64(steps)/50, "steps")
		})
	}
	b.Run("growth", func(b *testing.B) { benchmarkGrowth(b, book, lists) })
	b.Run("built", func(b *testing.B) { benchmarkBuilt(b, book, append(lists["small"], lists["large"]...)) })
}

func benchmarkGrowth(b *testing.B, book *Book, lists map[string][]*molecule.Molecule) {
	sizes := []int{100, 300, len(book.Transforms)}
	took := make([]time.Duration, len(sizes))
	for round := range 4 * b.N { // other transforms in every round
		for i, n := range sizes {
			some := book.some(n, round)
			start := processorTime()
			some.expandAll(b, lists["small"], nil)
			some.expandAll(b, lists["large"], nil)
			took[i] += processorTime() - start
		}
	}
	b.ReportMetric(float64(took[1])/float64(took[0]), "x-100-to-300")
	b.ReportMetric(float64(took[2])/float64(took[1]), "x-300-to-all")
}

// benchmarkBuilt counts distinct precursor sets: candidates built, labelled and deduplicated.
func benchmarkBuilt(b *testing.B, book *Book, ms []*molecule.Molecule) {
	built, pairs := 0, 0
	start := processorTime()
	for range b.N {
		for _, m := range ms {
			w := book.newWorkspace()
			target := w.of(m)
			book.eachFor(target, func(t *Transform) bool {
				t.backwards(w, target, nil)
				built += len(w.seen)
				return true
			})
			pairs += len(book.Transforms)
			w.release()
		}
	}
	seconds := (processorTime() - start).Seconds()
	referencePairs, referenceSets := referenceRates(b)
	b.ReportMetric(float64(built)/seconds, "sets/s")
	b.ReportMetric(float64(built)/seconds/referenceSets, "x-reference-sets")
	b.ReportMetric(float64(pairs)/seconds, "pairs/s")
	b.ReportMetric(float64(pairs)/seconds/referencePairs, "x-reference-pairs")
}
