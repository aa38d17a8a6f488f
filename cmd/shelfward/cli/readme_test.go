package cli

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// readmeCommands lists the lines of the README that begin with 'shelfward ' inside code blocks.
func readmeCommands(t *testing.T) []string {
	t.Helper()
	data, err := os.ReadFile(root + "/README.md")
	if err != nil {
		t.Fatal(err)
	}
	var list []string
	inside := false
	for _, line := range strings.Split(string(data), "\n") {
		if strings.HasPrefix(line, "```") {
			inside = !inside
		} else if rest, ok := strings.CutPrefix(line, "shelfward "); ok && inside {
			list = append(list, rest)
		}
	}
	return list
}

// words splits a command line at spaces outside single quotes.
func words(line string) []string {
	var out []string
	var now strings.Builder
	quoted, any := false, false
	for _, c := range line {
		switch {
		case c == '\'':
			quoted, any = !quoted, true
		case c == ' ' && !quoted:
			if any {
				out = append(out, now.String())
			}
			now.Reset()
			any = false
		default:
			now.WriteRune(c)
			any = true
		}
	}
	if any {
		out = append(out, now.String())
	}
	return out
}

// TestReadmeExamples runs every command of the README in a folder that holds the repository's testdata, so that what
// the examples write stays out of the tree. Searches are cut
// short by --max-expanded where the line sets no limit of its own.
func TestReadmeExamples(t *testing.T) {
	commands := readmeCommands(t)
	if len(commands) < 10 {
		t.Fatalf("only %d examples found in README.md", len(commands))
	}
	folder := t.TempDir()
	top, err := filepath.Abs(root)
	if err == nil {
		err = os.Symlink(filepath.Join(top, "testdata"), filepath.Join(folder, "testdata"))
	}
	if err != nil {
		t.Fatal(err)
	}
	for _, line := range commands {
		t.Run(line, func(t *testing.T) {
			args := append(words(line), "--quiet")
			var out, errOut bytes.Buffer
			status := inFolder(folder, func() int { return sharedApp(strings.NewReader("OCC ethanol\n"), &out, &errOut).main(args) })
			if status != exitDone {
				t.Fatalf("status %d\n%s%s", status, out.String(), errOut.String())
			}
			if out.Len() == 0 {
				t.Fatal("the command printed nothing")
			}
		})
	}
}
