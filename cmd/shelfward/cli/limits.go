package cli

import (
	"regexp"
	"runtime/debug"
	"runtime/metrics"
	"strconv"
	"strings"
)

// leastMemory is what the rules, the shelf and one expansion need.
const leastMemory = 128 << 20

var memoryText = regexp.MustCompile(`^(\d+(?:\.\d+)?) ?([KMGT]i?B?|B)$`)

// memoryUnit is in bytes; with or without 'i' the units are powers of two, as memory is sold.
var memoryUnit = map[byte]float64{'B': 1, 'K': 1 << 10, 'M': 1 << 20, 'G': 1 << 30, 'T': 1 << 40}

// parseMemory reads a size such as 500MB or 2GiB, in bytes.
func parseMemory(text string) (int, error) {
	m := memoryText.FindStringSubmatch(strings.TrimSpace(text))
	if m == nil {
		return 0, usageError("--memory %s: a size such as 500MB or 2GiB was expected", quoted(text))
	}
	x, err := strconv.ParseFloat(m[1], 64)
	if err != nil {
		return 0, usageError("--memory %s: %v", quoted(text), err)
	}
	n := x * memoryUnit[m[2][0]]
	if n < leastMemory || n > 1<<50 {
		return 0, usageError("--memory %s: %d MiB or more was expected", text, leastMemory>>20)
	}
	return int(n), nil
}

// liveHeap is the metric of what the last collection found in use, in bytes.
const liveHeap = "/gc/heap/live:bytes"

// limitMemory tells the collector the limit, and returns the check that a search asks before it opens more:
// whether so much is in use that the limit would not hold.
func limitMemory(bytes int) (full func() bool) {
	debug.SetMemoryLimit(int64(bytes) * 9 / 10) // the rest: the program itself, stacks, mapped files
	sample := func() uint64 {
		s := []metrics.Sample{{Name: liveHeap}}
		metrics.Read(s)
		if s[0].Value.Kind() != metrics.KindUint64 {
			return 0
		}
		return s[0].Value.Uint64()
	}
	return func() bool { return sample() > uint64(bytes)*3/4 }
}
