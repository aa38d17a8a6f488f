package planner

import (
	"context"
	"os"
	"runtime"
	"testing"

	"shelfward/molecule/smiles"
	"shelfward/planner/route"
	"shelfward/planner/search"
	"shelfward/rules"
)

// TestEstimateOfMemory holds the estimate by which searches end for their memory against the heap: it may
// be too high by two thirds and too low by a fifth. SHELFWARD_SLOW=1 runs it.
func TestEstimateOfMemory(t *testing.T) {
	if os.Getenv("SHELFWARD_SLOW") == "" {
		t.Skip("searches for a minute: SHELFWARD_SLOW=1 runs it")
	}
	room, err := Open(rules.Files(), nil, "")
	if err != nil {
		t.Fatal(err)
	}
	for _, target := range []string{"CC(C)Cc1ccc(cc1)C(C)C(=O)NCCc1ccc(OC)c(O)c1", "CCCCCC(CC)C(=O)OCCC(C)C", "O=C(Nc1ccccc1)C1CCN(Cc2ccncc2)CC1"} {
		m, err := smiles.Read(target)
		if err != nil {
			t.Fatal(err)
		}
		var last search.Progress
		before := heap()
		p, err := route.Make(context.Background(), room.World(), m, route.Options{Count: 500, MaxExpanded: 60, Workers: 2, Progress: func(p search.Progress) { last = p }})
		if err != nil {
			t.Fatal(err)
		}
		held := heap() - before
		ratio := float64(last.Bytes) / float64(held)
		t.Logf("%s: %d opened, %.1f MiB held, estimated %.1f (ratio %.2f)", target, last.Expanded, float64(held)/(1<<20), float64(last.Bytes)/(1<<20), ratio)
		if ratio < 0.8 || ratio > 1.67 {
			t.Errorf("%s: the estimate is %.2f of what is held", target, ratio)
		}
		runtime.KeepAlive(p)
	}
	runtime.KeepAlive(room)
}

// heap is what is reachable now.
func heap() int {
	var m runtime.MemStats
	runtime.GC()
	runtime.GC()
	runtime.ReadMemStats(&m)
	return int(m.HeapAlloc)
}
