package cli

import (
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"syscall"
	"testing"
	"time"
)

// TestLimitsHold runs the program with limits of memory and time and looks at what it really took: each
// holds within a tenth. SHELFWARD_SLOW=1 runs it.
func TestLimitsHold(t *testing.T) {
	if os.Getenv("SHELFWARD_SLOW") == "" {
		t.Skip("searches to its limits: SHELFWARD_SLOW=1 runs it")
	}
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	program := filepath.Join(t.TempDir(), "shelfward")
	if err := os.Symlink(self, program); err != nil {
		t.Fatal(err)
	}
	const target = "CCCCCC(CC)C(=O)OCCC(C)CNC(=O)CCc1ccccc1"
	byMemory := ""
	for _, c := range []struct {
		stopped string
		flags   []string
	}{
		{"memory", []string{"--memory", "160MB", "--time", "20m", "--workers", "1"}},
		{"memory", []string{"--memory", "160MB", "--time", "20m", "--workers", "3"}},
		{"time", []string{"--time", "6s"}},
		{"time", []string{"--time", "15s"}},
	} {
		cmd := exec.Command(program, append([]string{"routes", target, "--count", "500", "--json", "--quiet"}, c.flags...)...)
		out, _ := cmd.Output() // status 3 without a route
		var plan struct {
			Search struct {
				Stopped string
				Seconds float64
			}
		}
		if err := json.Unmarshal(out, &plan); err != nil {
			t.Fatalf("%v: %v", c.flags, err)
		}
		took := plan.Search.Seconds
		mib := float64(cmd.ProcessState.SysUsage().(*syscall.Rusage).Maxrss) / 1024
		t.Logf("%v: stopped by %s after %.1f s, %.0f MiB at most", c.flags, plan.Search.Stopped, took, mib)
		if plan.Search.Stopped != c.stopped {
			t.Errorf("%v: stopped by %s, want %s", c.flags, plan.Search.Stopped, c.stopped)
		}
		if c.stopped == "memory" {
			if mib > 1.1*160 {
				t.Errorf("%v: took %.0f MiB", c.flags, mib)
			}
			if text := timeLine.ReplaceAllString(string(out), ""); byMemory == "" {
				byMemory = text
			} else if text != byMemory {
				t.Errorf("%v: another answer than with other workers", c.flags)
			}
		}
		if limit, err := time.ParseDuration(c.flags[1]); c.stopped == "time" && (err != nil || took > 1.1*limit.Seconds() || took < limit.Seconds()) {
			t.Errorf("%v: took %.2f s", c.flags, took)
		}
	}
}
