package smiles

import (
	"bufio"
	"fmt"
	"os"
	"os/exec"
	"runtime"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"

	"shelfward/molecule"
)

// recordedRate is what testdata/canonical/reference_rate.py printed on the machine that the figures of
// this project were made on, in structures per second of processor time.
const recordedRate = 10_000

// referenceRate runs the script, so that both rates of a ratio are of one run; where it cannot run, it
// takes the recorded rate.
func referenceRate(b *testing.B) float64 {
	out, err := exec.Command("/usr/bin/python3", "../../testdata/canonical/reference_rate.py").Output()
	var rate float64
	if err == nil {
		_, err = fmt.Sscan(string(out), &rate)
	}
	if err != nil || rate <= 0 {
		b.Logf("the reference does not run here (%v): its recorded rate is taken", err)
		return recordedRate
	}
	return rate
}

// openTexts reads the open structure set, where it is installed; SHELFWARD_STRUCTURES names another place.
func openTexts(t testing.TB) []string {
	t.Helper()
	path := os.Getenv("SHELFWARD_STRUCTURES")
	if path == "" {
		path = "/usr/share/RDKit/Data/NCI/first_5K.smi"
	}
	f, err := os.Open(path)
	if err != nil {
		t.Skip("the open structure set is not installed: ", err)
	}
	defer f.Close()
	var list []string
	for s := bufio.NewScanner(f); s.Scan(); {
		if fields := strings.Fields(s.Text()); len(fields) > 0 {
			list = append(list, fields[0])
		}
	}
	return list
}

// BenchmarkCanonical reads the open set and writes it canonically on one core, and prints the rate as a
// multiple of the reference. Processor time is counted, the collector's included.
func BenchmarkCanonical(b *testing.B) {
	list := openTexts(b)
	reference := referenceRate(b)
	b.ReportAllocs()
	done, start := 0, processorTime(b)
	for b.Loop() {
		for _, text := range list {
			if m, err := Read(text); err == nil {
				Write(m)
			}
		}
		done += len(list)
	}
	rate := float64(done) / (processorTime(b) - start).Seconds()
	b.ReportMetric(rate/reference, "xreference")
	b.ReportMetric(rate, "structures/s")
}

// BenchmarkCanonicalTwo is BenchmarkCanonical on two cores, by the clock on the wall; it says something on
// an idle machine only.
func BenchmarkCanonicalTwo(b *testing.B) {
	list := openTexts(b)
	reference := referenceRate(b)
	done := 0
	start := time.Now()
	for b.Loop() {
		var both sync.WaitGroup
		for part := range 2 {
			both.Go(func() {
				for i := part; i < len(list); i += 2 {
					if m, err := Read(list[i]); err == nil {
						Write(m)
					}
				}
			})
		}
		both.Wait()
		done += len(list)
	}
	rate := float64(done) / time.Since(start).Seconds()
	b.ReportMetric(rate/reference, "xreference")
	b.ReportMetric(rate, "structures/s")
}

// processorTime is what this process has used so far, the collector's work included.
func processorTime(t testing.TB) time.Duration {
	t.Helper()
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		t.Fatal(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// TestMemory: a stored molecule of about 20 heavy atoms takes less than 1.5 kB, its labelling included.
func TestMemory(t *testing.T) {
	var list []*molecule.Molecule
	texts := openTexts(t)
	heap := func() uint64 {
		runtime.GC()
		runtime.GC() // twice: pools give up their memory in two steps
		var s runtime.MemStats
		runtime.ReadMemStats(&s)
		return s.HeapAlloc
	}
	before := heap()
	atoms := 0
	for _, text := range texts {
		m, err := Read(text)
		if err != nil || m.NumAtoms() < 18 || m.NumAtoms() > 22 {
			continue
		}
		m.Key()
		atoms += m.NumAtoms()
		list = append(list, m)
	}
	each := float64(heap()-before) / float64(len(list))
	t.Logf("%d molecules of %.1f atoms: %.0f bytes each", len(list), float64(atoms)/float64(len(list)), each)
	if each > 1500 {
		t.Errorf("a molecule takes %.0f bytes", each)
	}
	runtime.KeepAlive(list)
	runtime.KeepAlive(texts)
}
