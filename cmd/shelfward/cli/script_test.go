package cli

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"sort"
	"strconv"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

// TestMain lets the scripts call the program as a command of its own.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"shelfward": func() { os.Exit(Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) },
	})
}

// root is the top of the repository, seen from this package.
const root = "../../.."

// TestScripts runs testdata/scripts: each file is a session at the command line with its own input
// files; $DEMO is the folder of the demonstration. See testdata/README.md for the commands added here.
func TestScripts(t *testing.T) {
	data, err := filepath.Abs(filepath.Join(root, "testdata")) // commands change the working directory
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:           filepath.Join(data, "scripts"),
		UpdateScripts: os.Getenv("SHELFWARD_UPDATE") != "",
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"status":   scriptStatus,
			"ok":       scriptOK,
			"refused":  scriptRefused,
			"object":   scriptObject,
			"sametext": scriptSameText,
			"longfile": scriptLongFile,
			"cutfile":  scriptCutFile,
		},
		Condition: func(cond string) (bool, error) {
			if cond == "slow" {
				return os.Getenv("SHELFWARD_SLOW") != "", nil
			}
			return false, fmt.Errorf("unknown condition %q", cond)
		},
		Setup: func(env *testscript.Env) error {
			env.Setenv("DEMO", filepath.Join(data, "demo"))
			return nil
		},
	})
}

// scriptStatus runs a command and checks its exit status: status 3 shelfward routes ...
func scriptStatus(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: status N command [argument]...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	if got, _, _ := runProgram(ts, args[1:]); got != want {
		ts.Fatalf("status %d, want %d", got, want)
	}
}

// scriptOK is status 0: ok shelfward ...
func scriptOK(ts *testscript.TestScript, neg bool, args []string) {
	scriptStatus(ts, neg, append([]string{"0"}, args...))
}

// runProgram runs the program in this process, which shares what is loaded and counts for coverage; a
// command that reads standard input runs as a process of its own.
func runProgram(ts *testscript.TestScript, args []string) (status int, out, errOut string) {
	if args[0] == "shelfward" && !slices.Contains(args, "-") {
		var stdout, stderr bytes.Buffer
		status = inFolder(ts.MkAbs("."), func() int { return sharedApp(strings.NewReader(""), &stdout, &stderr).main(args[1:]) })
		out, errOut = stdout.String(), stderr.String()
		io.WriteString(ts.Stdout(), out)
		io.WriteString(ts.Stderr(), errOut)
		return status, out, errOut
	}
	err := ts.Exec(args[0], args[1:]...)
	var exit *exec.ExitError
	if errors.As(err, &exit) {
		status = exit.ExitCode()
	} else if err != nil {
		ts.Fatalf("%v", err)
	}
	return status, ts.ReadFile("stdout"), ts.ReadFile("stderr")
}

// scriptRefused runs a command on bad input: status 2, nothing on standard output, and one line of at
// most 300 characters on standard error that begins with the program's name. With a first argument in
// slashes that line must match it: refused /near: magnesium/ shelfward routes ...
func scriptRefused(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: refused [/pattern/] command [argument]...")
	}
	pattern := ""
	if len(args[0]) > 1 && strings.HasPrefix(args[0], "/") && strings.HasSuffix(args[0], "/") {
		pattern, args = args[0][1:len(args[0])-1], args[1:]
	}
	got, out, text := runProgram(ts, args)
	if got != exitUsage {
		ts.Fatalf("status %d, want %d", got, exitUsage)
	}
	if out != "" {
		ts.Fatalf("standard output is not empty")
	}
	line := strings.TrimSuffix(text, "\n")
	if !strings.HasPrefix(line, "shelfward: ") || strings.Contains(line, "\n") || len(line) > 300 {
		ts.Fatalf("standard error is not one line of the program:\n%s", text)
	}
	if !regexp.MustCompile(pattern).MatchString(line) {
		ts.Fatalf("no match for %q in %q", pattern, line)
	}
}

// nullable are the keys that may be null: numbers that do not exist. A list never is.
var nullable = map[string]bool{"bound": true, "first_after": true, "plan": true}

// scriptObject checks that standard output is one JSON object with the keys named, with doubts, and
// with no list that is null.
func scriptObject(ts *testscript.TestScript, neg bool, args []string) {
	var object map[string]any
	dec := json.NewDecoder(strings.NewReader(ts.ReadFile("stdout")))
	if err := dec.Decode(&object); err != nil {
		ts.Fatalf("not a JSON object: %v", err)
	}
	if dec.More() {
		ts.Fatalf("something follows the object")
	}
	if _, ok := object["doubts"].([]any); !ok {
		ts.Fatalf("no list doubts")
	}
	for _, key := range args {
		if _, ok := object[key]; !ok {
			ts.Fatalf("no key %s", key)
		}
	}
	if place := findNull(object, ""); place != "" {
		ts.Fatalf("%s is null", place)
	}
}

// findNull names the first null under keys that must not be null.
func findNull(v any, place string) string {
	switch v := v.(type) {
	case map[string]any:
		keys := make([]string, 0, len(v))
		for k := range v {
			keys = append(keys, k)
		}
		sort.Strings(keys)
		for _, k := range keys {
			if v[k] == nil && nullable[k] {
				continue
			}
			if found := findNull(v[k], place+"."+k); found != "" {
				return found
			}
		}
	case []any:
		for i, x := range v {
			if found := findNull(x, fmt.Sprintf("%s[%d]", place, i)); found != "" {
				return found
			}
		}
	case nil:
		return place
	}
	return ""
}

// timeLine matches what may differ between two runs of the same input.
var timeLine = regexp.MustCompile(`"(seconds|first_after)": ?[0-9.e+-]+`)

// scriptSameText compares two files but for measured times.
func scriptSameText(ts *testscript.TestScript, neg bool, args []string) {
	if len(args) != 2 {
		ts.Fatalf("usage: sametext FILE FILE")
	}
	a, b := timeLine.ReplaceAllString(ts.ReadFile(args[0]), ""), timeLine.ReplaceAllString(ts.ReadFile(args[1]), "")
	if (a == b) == neg {
		ts.Fatalf("same text: %v", a == b)
	}
}

// scriptLongFile writes a file of a head, a piece repeated N times and a tail: longfile FILE HEAD PIECE N TAIL.
func scriptLongFile(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 5 {
		ts.Fatalf("usage: longfile FILE HEAD PIECE N TAIL")
	}
	n, err := strconv.Atoi(args[3])
	ts.Check(err)
	unescape := strings.NewReplacer(`\n`, "\n").Replace
	ts.Check(os.WriteFile(ts.MkAbs(args[0]), []byte(unescape(args[1])+strings.Repeat(unescape(args[2]), n)+unescape(args[4])), 0o644))
}

// scriptCutFile cuts bytes off the end of a file, as a crash may: cutfile FILE N.
func scriptCutFile(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 2 {
		ts.Fatalf("usage: cutfile FILE N")
	}
	n, err := strconv.Atoi(args[1])
	ts.Check(err)
	ts.Check(os.Truncate(ts.MkAbs(args[0]), int64(len(ts.ReadFile(args[0]))-n)))
}
