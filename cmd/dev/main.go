package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"os/signal"
	"path/filepath"
	"strings"
	"syscall"
)

// Exit statuses, the same as bandcalc's.
const (
	exitDone   = 0
	exitFailed = 1
	exitUsage  = 2
)

// workshop is what every command works with: where the repository is and
// where to print.
type workshop struct {
	root string
	out  io.Writer
	err  io.Writer
}

type command struct {
	name    string
	summary string
	help    string
	run     func(ctx context.Context, w *workshop, args []string) error
}

func commands() []command {
	return []command{
		{"setup", "install what is missing and build everything", setupHelp, setup},
		{"run", "build and open the window", runHelp, runWindow},
		{"test", "every check, as continuous integration runs them", testHelp, test},
		{"bench", "measured speed beside LAPACK and numpy", benchHelp, bench},
		{"shots", "pictures of the window in several states", shotsHelp, shots},
	}
}

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	status := run(ctx, os.Args[1:], os.Stdout, os.Stderr)
	stop()
	os.Exit(status)
}

// run is main as a function, so that tests can call it.
func run(ctx context.Context, args []string, out, errw io.Writer) int {
	if len(args) == 0 {
		overview(errw)
		return exitUsage
	}
	switch args[0] {
	case "help", "-h", "-help", "--help":
		if len(args) > 1 {
			for _, c := range commands() {
				if c.name == args[1] {
					fmt.Fprint(out, c.help)
					return exitDone
				}
			}
		}
		overview(out)
		return exitDone
	}
	for _, c := range commands() {
		if c.name != args[0] {
			continue
		}
		root, err := findRoot()
		if err != nil {
			fmt.Fprintf(errw, "dev: %v\n", err)
			return exitFailed
		}
		err = c.run(ctx, &workshop{root: root, out: out, err: errw}, args[1:])
		var wrong *usageError
		switch {
		case err == nil:
			return exitDone
		case errors.Is(err, flag.ErrHelp):
			fmt.Fprint(out, c.help)
			return exitDone
		case errors.As(err, &wrong):
			fmt.Fprintf(errw, "dev %s: %v\n\n%s", c.name, err, c.help)
			return exitUsage
		default:
			fmt.Fprintf(errw, "dev %s: %v\n", c.name, err)
			return exitFailed
		}
	}
	fmt.Fprintf(errw, "dev: there is no command %q\n\n", args[0])
	overview(errw)
	return exitUsage
}

func overview(w io.Writer) {
	fmt.Fprint(w, "usage: go run ./cmd/dev COMMAND [flags]\n\n")
	for _, c := range commands() {
		fmt.Fprintf(w, "  %-6s  %s\n", c.name, c.summary)
	}
	fmt.Fprint(w, "\n\"go run ./cmd/dev help COMMAND\" says more about one of them.\n")
}

// usageError is a fault of the command line, not of the machine or the code.
type usageError struct{ problem string }

func (e *usageError) Error() string { return e.problem }

// parse reads the flags of one command and reports faults as usageError.
// extra says whether arguments may follow the flags.
func parse(fs *flag.FlagSet, args []string, extra bool) error {
	fs.SetOutput(io.Discard)
	if err := fs.Parse(args); err != nil {
		if errors.Is(err, flag.ErrHelp) {
			return err
		}
		return &usageError{err.Error()}
	}
	if fs.NArg() > 0 && !extra {
		return &usageError{fmt.Sprintf("unexpected argument %q", fs.Arg(0))}
	}
	return nil
}

// findRoot is the nearest folder, from the current one upward, that holds
// Bandwright's go.mod.
func findRoot() (string, error) {
	start, err := os.Getwd()
	if err != nil {
		return "", err
	}
	for dir := start; ; dir = filepath.Dir(dir) {
		mod, err := os.ReadFile(filepath.Join(dir, "go.mod"))
		if err == nil && strings.HasPrefix(string(mod), "module bandwright\n") {
			return dir, nil
		}
		if filepath.Dir(dir) == dir {
			return "", fmt.Errorf("%s is not inside a Bandwright checkout: no go.mod of module bandwright here or above", start)
		}
	}
}
