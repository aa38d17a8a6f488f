package cli

import (
	"bytes"
	"strings"
	"testing"

	"github.com/spf13/cobra"
)

// TestHelp: every command says what it does, with an example that begins with its own path, and the
// exit statuses; help itself ends with status 0.
func TestHelp(t *testing.T) {
	app := &App{}
	var walk func(c *cobra.Command)
	count := 0
	walk = func(c *cobra.Command) {
		for _, sub := range c.Commands() {
			if sub.Name() == "help" || sub.Name() == "completion" {
				continue
			}
			count++
			if sub.Short == "" || !strings.Contains(sub.Long, "Exit status: 0 done") {
				t.Errorf("%s: short help and exit statuses are missing", sub.CommandPath())
			}
			if !strings.Contains(sub.Example, sub.CommandPath()) {
				t.Errorf("%s: no example of its own: %q", sub.CommandPath(), sub.Example)
			}
			walk(sub)
		}
	}
	walk(app.rootCommand())
	if count < 16 {
		t.Errorf("only %d commands", count)
	}
	for _, args := range []string{"--help", "help routes", "routes --help", "rules new -h"} {
		var out, errOut bytes.Buffer
		if status := Main(strings.Fields(args), strings.NewReader(""), &out, &errOut); status != exitDone || !strings.Contains(out.String(), "Exit status") || errOut.Len() > 0 {
			t.Errorf("%s: status %d\n%s%s", args, status, out.String(), errOut.String())
		}
	}
}

// FuzzTarget: no text given as a TARGET panics, and each refusal is one line.
func FuzzTarget(f *testing.F) {
	for _, text := range []string{"CCO", "CO", "C(C", "name:", "smiles:", "123-38-6", "\xff\xfe", "C\x00C", "[Na+].[Cl-]", "2-methyl", "(((", "a.yaml", "x.json"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		var out, errOut bytes.Buffer
		status := sharedApp(strings.NewReader(""), &out, &errOut).main([]string{"routes", "--max-expanded", "1", "--max-steps", "1", "--quiet", "--", text})
		if status == exitFailure {
			t.Errorf("%q: status 1: %s", text, errOut.String())
		}
		if status == exitUsage && strings.Count(errOut.String(), "\n") != 1 {
			t.Errorf("%q: not one line: %s", text, errOut.String())
		}
	})
}
