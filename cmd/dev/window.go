package main

import (
	"context"
	"flag"
	"fmt"
	"os"
	"runtime"
)

const runHelp = `usage: go run ./cmd/dev run [--no-packages] [-- STUDY and flags of bandwright]

Installs what the window needs, as "setup" does, builds it, and opens it with a
crystal already computed, or with the study that you name.
`

func runWindow(ctx context.Context, w *workshop, args []string) error {
	fs := flag.NewFlagSet("run", flag.ContinueOnError)
	noPackages := packageFlags(fs)
	if err := parse(fs, args, true); err != nil {
		return err
	}
	if err := w.prepare(ctx, "run", *noPackages); err != nil {
		return err
	}
	fmt.Fprintln(w.out, "Building; the first time takes some minutes.")
	if err := w.build(ctx); err != nil {
		return err
	}
	if problem := displayProblem(runtime.GOOS, os.Getenv); problem != "" {
		return fmt.Errorf("%s", problem)
	}
	return w.command(ctx, nil, w.program("bandwright"), fs.Args()...)
}

// displayProblem says why no window can open and what to do, or "".
func displayProblem(goos string, getenv func(string) string) string {
	if goos == "darwin" || goos == "windows" || getenv("DISPLAY") != "" {
		return ""
	}
	if getenv("WAYLAND_DISPLAY") != "" {
		return "this Wayland session has no X display (DISPLAY is not set), and the window is built for X11: " +
			"install XWayland (package xwayland) and log in again"
	}
	return "there is no display to open a window on (neither DISPLAY nor WAYLAND_DISPLAY is set). " +
		"Everything is built: run bin/bandwright from a terminal of your desktop, or over \"ssh -X\". " +
		"Without a desktop, bin/bandcalc computes the same in a terminal, and " +
		"\"go run ./cmd/dev shots\" makes pictures of the window on a display in memory"
}
