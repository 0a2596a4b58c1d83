package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"

	"github.com/spf13/pflag"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	context.AfterFunc(ctx, stop) // the second Ctrl-C ends what the first could not
	os.Exit(run(ctx, os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}

// Exit statuses.
const (
	done       = 0
	inputFault = 1
	wrongUsage = 2
)

// usageError is a mistake on the command line.
type usageError struct{ text string }

func (e *usageError) Error() string { return e.text }

// command is one of the things bandcalc does.
type command struct {
	name, args, short string
	help              string // how to use it, after the first line
	setup             func(*pflag.FlagSet) func(*call) error
}

// call is one run of a command.
type call struct {
	ctx  context.Context
	args []string
	in   io.Reader
	out  io.Writer
	err  io.Writer // for notes
}

const intro = `bandcalc computes band structures from studies, without a window.

usage: bandcalc COMMAND [flags] STUDY

STUDY is a study file (.bandstudy), or - for standard input. The shortest one:

  bandstudy = 1
  [crystal]
  prototype = "diamond"
  elements  = ["Si"]
  a         = 5.431
  [model]
  set = "vogl1983/Si"

commands:
`

func run(ctx context.Context, args []string, in io.Reader, out, errOut io.Writer) int {
	list := commands()
	if len(args) == 0 || args[0] == "--help" || args[0] == "-h" || args[0] == "help" && len(args) == 1 {
		to, status := out, done
		if len(args) == 0 {
			to, status = errOut, wrongUsage
		}
		fmt.Fprint(to, intro)
		for _, c := range list {
			fmt.Fprintf(to, "  %-8s %s\n", c.name, c.short)
		}
		fmt.Fprint(to, "\nbandcalc COMMAND --help says more, with examples. Energies are in eV, in the\nmodel's own zero; numbers carry 12 significant digits.\n")
		return status
	}
	if args[0] == "help" {
		args = []string{args[1], "--help"}
	}
	for _, c := range list {
		if c.name == args[0] {
			return c.run(ctx, args[1:], in, out, errOut)
		}
	}
	fmt.Fprintf(errOut, "bandcalc: there is no command %q; bandcalc --help lists them\n", args[0])
	return wrongUsage
}

func (c command) run(ctx context.Context, args []string, in io.Reader, out, errOut io.Writer) int {
	flags := pflag.NewFlagSet(c.name, pflag.ContinueOnError)
	flags.SetOutput(io.Discard)
	flags.SortFlags = false
	do := c.setup(flags)
	help := func(to io.Writer) {
		fmt.Fprintf(to, "usage: %s\n\n%s\n", strings.TrimSpace("bandcalc "+c.name+" "+c.args), strings.TrimSpace(c.help))
		if flags.HasFlags() {
			fmt.Fprintf(to, "\nflags:\n%s", flags.FlagUsages())
		}
	}
	switch err := flags.Parse(args); {
	case errors.Is(err, pflag.ErrHelp):
		help(out)
		return done
	case err != nil:
		fmt.Fprintf(errOut, "bandcalc %s: %v; bandcalc %s --help says how to use it\n", c.name, err, c.name)
		return wrongUsage
	}
	err := do(&call{ctx: ctx, args: flags.Args(), in: in, out: out, err: errOut})
	var usage *usageError
	switch {
	case err == nil:
		return done
	case errors.As(err, &usage):
		fmt.Fprintf(errOut, "bandcalc %s: %v; bandcalc %s --help says how to use it\n", c.name, err, c.name)
		return wrongUsage
	case errors.Is(err, syscall.EPIPE):
		return done // the reader has seen enough
	case errors.Is(err, context.Canceled):
		err = errors.New("stopped before it was done")
	}
	text := strings.TrimRight(err.Error(), "\n")
	fmt.Fprintf(errOut, "bandcalc %s: %s\n", c.name, strings.ReplaceAll(text, "\n", "\nbandcalc "+c.name+": "))
	return inputFault
}
