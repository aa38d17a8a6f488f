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
	"syscall"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"shelfward/planner"
	"shelfward/reactions"
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

// quoted shortens a long text for a message and puts it in quotation marks.
func quoted(text string) string {
	const most = 60
	if r := []rune(text); len(r) > most {
		text = string(r[:most]) + "..."
	}
	return fmt.Sprintf("%q", text)
}

// errSilent ends a command with a status after everything has been said.
var errSilent = errors.New("")

// maxWorkers bounds --workers: more than any bench computer has cores, few enough to start at once.
const maxWorkers = 256

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

	// loading comes from outside too: tests share what is loaded
	openRoom func(rules fs.FS, shelves []string, dir string) (*planner.Room, error)
	loadBook func(rules fs.FS) (*reactions.Book, error)
}

// Main runs the command line and returns the exit status.
func Main(args []string, in io.Reader, out, errOut io.Writer) int {
	app := &App{In: in, Out: out, ErrOut: errOut, openRoom: planner.Open, loadBook: reactions.Load}
	return app.main(args)
}

// main runs one command line.
func (app *App) main(args []string) int {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	context.AfterFunc(ctx, stop) // a second interrupt ends the program at once
	root := app.rootCommand()
	root.SetArgs(args)
	root.SetIn(app.In)
	root.SetOut(app.Out)
	root.SetErr(app.ErrOut)
	return app.report(root.ExecuteContext(ctx))
}

// report prints an error as one line a mistake and turns it into a status.
func (app *App) report(err error) int {
	if err == nil {
		return exitDone
	}
	status := exitFailure
	var se *statusError
	switch {
	case errors.As(err, &se):
		status = se.status
	case errors.Is(err, context.Canceled):
		err = errors.New("interrupted before anything was found")
	}
	for _, line := range strings.Split(strings.TrimSpace(err.Error()), "\n") {
		if line != "" {
			fmt.Fprintln(app.ErrOut, "shelfward: "+line)
		}
	}
	return status
}

// nothing ends a command that found nothing, status 3. The reason belongs to the result: it goes to
// standard output, under --json inside object, which the caller has filled with it.
func (app *App) nothing(object any, reason string) error {
	if app.JSON {
		if err := printJSON(app.Out, object); err != nil {
			return err
		}
	} else {
		fmt.Fprintln(app.Out, reason)
	}
	return failWith(exitNothing, errSilent)
}

// exactly asks for n arguments and says in the command's own words what was expected.
func exactly(n int) cobra.PositionalArgs {
	return func(c *cobra.Command, args []string) error {
		if len(args) == n {
			return nil
		}
		return usageError("expected `%s`, found %d arguments instead of %d; a text with spaces or brackets belongs in single quotes", c.UseLine(), len(args), n)
	}
}

// subcommandOnly is the run function of a command that does nothing by itself: bare it shows its help,
// with an unknown word it says which words there are.
func subcommandOnly(c *cobra.Command, args []string) error {
	if len(args) == 0 {
		return c.Help()
	}
	var names []string
	for _, sub := range c.Commands() {
		if sub.IsAvailableCommand() && sub.Name() != "help" && sub.Name() != "completion" {
			names = append(names, sub.Name())
		}
	}
	near := ""
	if list := rules.NearWords(args[0], names, 1); len(list) > 0 {
		near = fmt.Sprintf(" (did you mean %q?)", list[0])
	}
	return usageError("unknown command %q for %s%s; expected one of %s", args[0], c.CommandPath(), near, strings.Join(names, ", "))
}

// flagError turns the library's complaint about a flag into a usage error in plain words.
func flagError(_ *cobra.Command, err error) error {
	text := err.Error()
	var invalid *pflag.InvalidValueError
	if errors.As(err, &invalid) {
		f := invalid.GetFlag()
		text = fmt.Sprintf("--%s: %q: expected %s", f.Name, invalid.GetValue(), flagKinds[f.Value.Type()])
	}
	return usageError("%s", text)
}

// flagKinds says what a flag of a type takes.
var flagKinds = map[string]string{"int": "a whole number", "duration": "a time such as 10s or 2m", "bool": "true or false"}

func (app *App) rootCommand() *cobra.Command {
	root := &cobra.Command{
		Use:           "shelfward",
		Short:         "From evidence to structure, from structure to routes, from a route to the bench sheet",
		Long:          "shelfward pins an unknown target from combustion analysis, mass, IR and NMR evidence, searches backwards\nthrough textbook transforms to what stands on the shelf, compares the routes and prints a route sheet.\n" + exitHelp,
		Version:       Version,
		SilenceErrors: true,
		SilenceUsage:  true,
		Args:          cobra.ArbitraryArgs,
		RunE:          subcommandOnly,
		PersistentPreRunE: func(*cobra.Command, []string) error {
			if app.Workers < 0 || app.Workers > maxWorkers {
				return usageError("--workers: expected 0 (one per core) to %d, found %d", maxWorkers, app.Workers)
			}
			return nil
		},
	}
	root.SetFlagErrorFunc(flagError)
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
