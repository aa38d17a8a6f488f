// Package cli is the command line of shelfward: one file per command, printing only; the chemistry is
// below. In, Out and ErrOut come from outside so that tests run commands in process.
package cli

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"os/signal"
	"strings"

	"github.com/spf13/cobra"

	"shelfward/rules"
)

// Version is the program's version, printed by --version.
const Version = "0.1.0"

// Exit statuses, as the contract of the command line names them.
const (
	exitDone     = 0
	exitFailure  = 1 // the program's own trouble
	exitUsage    = 2 // bad input or usage
	exitNothing  = 3 // nothing found, with the reason
	exitDeclined = 4 // a restricted target
)

// exitHelp is printed under every command's help.
const exitHelp = `
Exit status: 0 done; 2 bad input or usage; 3 nothing found; 4 declined (restricted); 1 any other failure.
`

// statusError carries an exit status; quiet ones have been printed already.
type statusError struct {
	status int
	err    error
}

func (e *statusError) Error() string { return e.err.Error() }
func (e *statusError) Unwrap() error { return e.err }

func usageError(format string, args ...any) error {
	return &statusError{exitUsage, fmt.Errorf(format, args...)}
}

func failWith(status int, err error) error {
	if err == nil {
		return nil
	}
	return &statusError{status, err}
}

// errSilent ends a command with a status after everything has been said.
var errSilent = errors.New("")

// App holds what every command shares: streams and the flags that stand everywhere.
type App struct {
	In       io.Reader
	Out      io.Writer
	ErrOut   io.Writer
	Shelves  []string
	RuleDirs []string
	JSON     bool
	Quiet    bool
	Workers  int
}

// Main runs the command line and returns the exit status.
func Main(args []string, in io.Reader, out, errOut io.Writer) int {
	app := &App{In: in, Out: out, ErrOut: errOut}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	root := app.rootCommand()
	root.SetArgs(args)
	root.SetIn(in)
	root.SetOut(out)
	root.SetErr(errOut)
	return app.report(root.ExecuteContext(ctx))
}

// report prints an error as one line and turns it into a status.
func (app *App) report(err error) int {
	if err == nil {
		return exitDone
	}
	status := exitFailure
	var se *statusError
	if errors.As(err, &se) {
		status = se.status
	} else if isCobraUsage(err) {
		status = exitUsage
	}
	if text := strings.TrimSpace(err.Error()); text != "" {
		fmt.Fprintln(app.ErrOut, "shelfward: "+text)
	}
	return status
}

// isCobraUsage recognises the flag and argument errors of the command library, which have no type.
func isCobraUsage(err error) bool {
	for _, start := range []string{"unknown command", "unknown flag", "unknown shorthand", "flag needs an argument", "invalid argument", "accepts ", "requires at least", "bad flag syntax", "required flag"} {
		if strings.HasPrefix(err.Error(), start) {
			return true
		}
	}
	return false
}

func (app *App) rootCommand() *cobra.Command {
	root := &cobra.Command{
		Use:           "shelfward",
		Short:         "From evidence to structure, from structure to routes, from a route to the bench sheet",
		Long:          "shelfward pins an unknown target from combustion analysis, mass, IR and NMR evidence, searches backwards\nthrough textbook transforms to what stands on the shelf, compares the routes and prints a route sheet.\n" + exitHelp,
		Version:       Version,
		SilenceErrors: true,
		SilenceUsage:  true,
	}
	root.SetVersionTemplate("shelfward {{.Version}}\n")
	f := root.PersistentFlags()
	f.StringArrayVar(&app.Shelves, "shelf", nil, "shelf file (repeatable; replaces the built-in example shelf, 'built-in' adds it back)")
	f.StringArrayVar(&app.RuleDirs, "rules", nil, "folder of rules laid over the built-in ones (repeatable)")
	f.BoolVar(&app.JSON, "json", false, "print one JSON object")
	f.BoolVar(&app.Quiet, "quiet", false, "no progress on standard error")
	f.IntVar(&app.Workers, "workers", 0, "number of workers (0: one per core); the result does not depend on it")
	root.AddCommand(app.commands()...)
	return root
}

// ruleFiles returns the built-in rules with the user's folders over them.
func (app *App) ruleFiles() (fs.FS, error) {
	if len(app.RuleDirs) == 0 {
		return rules.Files(), nil
	}
	fsys, err := rules.Overlay(app.RuleDirs...)
	return fsys, failWith(exitUsage, err)
}
