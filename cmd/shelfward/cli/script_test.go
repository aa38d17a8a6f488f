package cli

import (
	"os"
	"path/filepath"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

// TestMain lets the scripts call the program in process, so that coverage counts.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"shelfward": func() { os.Exit(Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) },
	})
}

// root is the top of the repository, seen from this package.
const root = "../../.."

// TestScripts runs testdata/scripts: each file is a session at the command line with its own input
// files; $DEMO is the folder of the demonstration. See testdata/README.md.
func TestScripts(t *testing.T) {
	demo, err := filepath.Abs(filepath.Join(root, "testdata", "demo"))
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:           filepath.Join(root, "testdata", "scripts"),
		UpdateScripts: os.Getenv("SHELFWARD_UPDATE") != "",
		Setup: func(env *testscript.Env) error {
			env.Setenv("DEMO", demo)
			return nil
		},
	})
}
