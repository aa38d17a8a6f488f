package pattern

import (
	"fmt"
	"os/exec"
	"syscall"
	"testing"
	"time"
)

// Values of testdata/patterns/reference_patterns.py on two cores of the machine that the figures of
// this project were made on: pairs per second over all pairs, microseconds per matching pair.
const (
	referencePairs    = 513_000
	referenceMatching = 5.6
)

// reference runs testdata/patterns/reference_patterns.py, so that both rates of a ratio are of one run;
// where it cannot run, the recorded values are taken.
func reference(b *testing.B) (pairsPerSecond, microsecondsEach float64) {
	script := exec.Command("/usr/bin/python3", "reference_patterns.py")
	script.Dir = "../../testdata/patterns"
	out, err := script.Output()
	var pairs, hits, seconds float64
	if err == nil {
		_, err = fmt.Sscanf(string(out), "pairs %g in %g s: %g/s; matching pairs %g: %g us each", &pairs, &seconds, &pairsPerSecond, &hits, &microsecondsEach)
	}
	if err != nil || pairsPerSecond <= 0 || microsecondsEach <= 0 {
		b.Logf("the reference does not run here (%v): its recorded values are taken", err)
		return referencePairs, referenceMatching
	}
	return pairsPerSecond, microsecondsEach
}

// cpu is the processor time that this process has used, the collector included: the clock on the wall
// says little on a machine that others use too.
func cpu(b *testing.B) time.Duration {
	b.Helper()
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		b.Fatal(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// BenchmarkSixty finds all unique matches of sixty patterns in the open set and prints the rate as a
// multiple of the reference. Making the subject (with its feature index) is counted.
func BenchmarkSixty(b *testing.B) {
	c, groups := sixty(b)
	set := openSet(b)
	wantPairs, wantEach := reference(b)
	var ready []*Subject // nil: made anew for each structure
	run := func(keep func(mol, p int) bool) (pairs, matches int) {
		for k, m := range set {
			var s *Subject
			if ready != nil {
				s = ready[k]
			} else {
				s = NewSubject(m, groups)
			}
			for i := range c.Patterns {
				if keep(k, i) {
					pairs++
					matches += len(c.Patterns[i].query.AtomSets(s))
				}
			}
		}
		return pairs, matches
	}
	b.Run("all", func(b *testing.B) {
		b.ReportAllocs()
		pairs, start := 0, cpu(b)
		for b.Loop() {
			n, _ := run(func(int, int) bool { return true })
			pairs += n
		}
		rate := float64(pairs) / (cpu(b) - start).Seconds()
		b.ReportMetric(rate/wantPairs, "xreference")
		b.ReportMetric(rate, "pairs/s")
	})
	hit := make([][]bool, len(set))
	subjects := make([]*Subject, len(set))
	for k, m := range set {
		hit[k] = make([]bool, len(c.Patterns))
		subjects[k] = NewSubject(m, groups)
		for i := range c.Patterns {
			hit[k][i] = c.Patterns[i].query.Matches(subjects[k])
		}
	}
	matching := func(b *testing.B) {
		b.ReportAllocs()
		pairs, start := 0, cpu(b)
		for b.Loop() {
			n, _ := run(func(k, i int) bool { return hit[k][i] })
			pairs += n
		}
		each := (cpu(b) - start).Seconds() * 1e6 / float64(pairs)
		b.ReportMetric(wantEach/each, "xreference")
		b.ReportMetric(each, "us/pair")
	}
	b.Run("matching", matching) // the index counted, as if it were made for the few that match
	ready = subjects
	b.Run("matching-indexed", matching)
}
