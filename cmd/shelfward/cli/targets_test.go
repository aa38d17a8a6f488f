package cli

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// TestListKilled kills the program three times in the middle of a list, without a warning; each time the
// answers so far stay as they are, and in the end there is one for every target, the same as without.
func TestListKilled(t *testing.T) {
	dir := t.TempDir()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	program := filepath.Join(dir, "shelfward") // the name makes the test binary the program, see TestMain
	if err := os.Symlink(self, program); err != nil {
		t.Skip(err)
	}
	list, out := filepath.Join(dir, "list.smi"), filepath.Join(dir, "out.jsonl")
	var text strings.Builder
	const targets = 40
	for i := range targets {
		fmt.Fprintf(&text, "%sC(=O)O%s T%d\n", strings.Repeat("C", 1+i%8), strings.Repeat("C", 1+i/8), i)
	}
	if err := os.WriteFile(list, []byte(text.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	args := []string{"routes", "--targets", list, "--out", out, "--max-expanded", "3", "--count", "1", "--quiet"}
	var kept []byte
	for round := range 3 {
		cmd := exec.Command(program, args...)
		if err := cmd.Start(); err != nil {
			t.Fatal(err)
		}
		until := time.Now().Add(time.Minute)
		for want := bytes.Count(kept, []byte("\n")) + 2 + round; ; time.Sleep(time.Millisecond) {
			if data, _ := os.ReadFile(out); bytes.Count(data, []byte("\n")) >= want {
				break
			}
			if time.Now().After(until) {
				t.Fatal("no answer within a minute")
			}
		}
		if err := cmd.Process.Kill(); err != nil {
			t.Fatal(err)
		}
		if err := cmd.Wait(); err == nil {
			t.Fatalf("round %d: the list was done before it was killed", round)
		}
		data, err := os.ReadFile(out)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.HasPrefix(data, kept) {
			t.Fatalf("round %d: answers that stood in the file are gone", round)
		}
		kept = data[:bytes.LastIndexByte(data, '\n')+1]
	}
	if done := bytes.Count(kept, []byte("\n")); done >= targets {
		t.Fatalf("all %d targets were answered before the third kill", done)
	}
	if text, err := exec.Command(program, args...).CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, text)
	}
	got, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.HasPrefix(got, kept) {
		t.Error("answers that stood in the file are gone")
	}
	var whole, errOut bytes.Buffer
	if status := sharedApp(strings.NewReader(""), &whole, &errOut).main([]string{"routes", "--targets", list, "--max-expanded", "3", "--count", "1", "--quiet"}); status != exitDone {
		t.Fatalf("status %d: %s", status, errOut.String())
	}
	untimed := func(b []byte) string { return timeLine.ReplaceAllString(string(b), "") }
	if untimed(got) != untimed(whole.Bytes()) {
		t.Error("the answers are not those of a run that nobody killed")
	}
	if n := bytes.Count(got, []byte("\n")); n != targets {
		t.Errorf("%d answers to %d targets", n, targets)
	}
}
