package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"path/filepath"
	"strings"
	"time"
)

const testHelp = `usage: go run ./cmd/dev test [--fuzz TIME] [--only NAMES] [--no-packages]

Installs what the tests need, then runs, in this order:

  format      gofmt
  vet         go vet
  staticcheck honnef.co/go/tools at a fixed version
  test        go test ./...
  race        the race detector on every package without a window (go test -short)
  fuzz        each fuzz target of the file readers, for a few seconds
  window      the real program on a display in memory, driven by pointer and
              keyboard; screenshots are kept in shots/driven

and closes with a summary. A failed step does not stop the later ones.

  --fuzz TIME    for each fuzz target (default 5s; 0 leaves fuzzing out)
  --only NAMES   only these steps, separated by commas
  --no-packages  leave the system packages alone
`

// staticcheckModule is run straight from the module cache: it is no dependency
// of ours and leaves go.mod alone.
const staticcheckModule = "honnef.co/go/tools/cmd/staticcheck@v0.8.2"

// racePackages are the packages that the race detector runs on: all that hold
// logic and no window.
func racePackages(folders []string) []string {
	var list []string
	for _, f := range folders {
		switch {
		case strings.HasPrefix(f, "physics/"), strings.HasPrefix(f, "render/"):
		case f == "ui/doc", f == "ui/task", f == "ui/session", f == "ui/present", f == "ui/export":
		default:
			continue
		}
		list = append(list, "./"+f)
	}
	return list
}

// checkPlan is the steps of "dev test". names == nil means all of them.
func (w *workshop) checkPlan(files []string, fuzzTime time.Duration, names []string) ([]step, error) {
	targets, err := testFuncs(w.root, files, "Fuzz", "F")
	if err != nil {
		return nil, err
	}
	all := []step{
		{"format", func(ctx context.Context) error {
			bad, err := unformatted(w.root, files)
			if err != nil {
				return err
			}
			if len(bad) > 0 {
				return fmt.Errorf("run gofmt -w on: %s", strings.Join(bad, " "))
			}
			fmt.Fprintf(w.out, "%d files are formatted\n", len(files))
			return nil
		}},
		{"vet", func(ctx context.Context) error {
			return w.command(ctx, nil, "go", "vet", tags(), "./...")
		}},
		{"staticcheck", func(ctx context.Context) error {
			var said strings.Builder
			err := w.commandTo(ctx, io.MultiWriter(w.out, &said), nil, "go", "run", staticcheckModule, tags(), "./...")
			if err == nil && strings.Contains(said.String(), "matched no packages") {
				// Where the packages cannot be loaded it warns and ends with status 0.
				return errors.New("staticcheck found no packages to look at")
			}
			return err
		}},
		{"test", func(ctx context.Context) error {
			// vet has its own step.
			return w.command(ctx, nil, "go", "test", tags(), "-vet=off", "-timeout=12m", "./...")
		}},
		{"race", func(ctx context.Context) error {
			args := []string{"test", tags(), "-vet=off", "-race", "-short", "-timeout=12m"}
			return w.command(ctx, nil, "go", append(args, racePackages(packageFolders(files))...)...)
		}},
		{"fuzz", func(ctx context.Context) error {
			return w.fuzz(ctx, targets, fuzzTime)
		}},
		{"window", func(ctx context.Context) error {
			if err := w.build(ctx); err != nil {
				return err
			}
			return w.driveWindow(ctx, "^TestWindow", filepath.Join(w.root, "shots", "driven"))
		}},
	}
	return chooseSteps(all, names, fuzzTime)
}

// chooseSteps keeps the named steps, in the plan's order.
func chooseSteps(all []step, names []string, fuzzTime time.Duration) ([]step, error) {
	wanted := map[string]bool{}
	for _, n := range names {
		wanted[n] = true
	}
	var steps []step
	for _, s := range all {
		if names == nil && (s.name != "fuzz" || fuzzTime > 0) || wanted[s.name] {
			steps = append(steps, s)
		}
		delete(wanted, s.name)
	}
	for n := range wanted {
		return nil, &usageError{fmt.Sprintf("--only %s: there is no such step", n)}
	}
	return steps, nil
}

// fuzz runs each target for a while. Inputs that reach new code are shortened
// by a few tries only: by default that takes up to a minute each, all the time
// there is when the seeds are whole files. An input that breaks one is written by go
// test into the package's testdata/fuzz and is from then on a test.
func (w *workshop) fuzz(ctx context.Context, targets []testFunc, each time.Duration) error {
	if len(targets) == 0 {
		return fmt.Errorf("no fuzz target found")
	}
	var failed []string
	for _, t := range targets {
		var said strings.Builder
		err := w.commandTo(ctx, io.MultiWriter(w.out, &said), nil, "go", "test", tags(), "-vet=off", "-run=^$", "-fuzz=^"+t.name+"$",
			"-fuzztime="+each.String(), "-fuzzminimizetime=10x", "-timeout=5m", "./"+t.folder)
		// A target that is busy when its time ends is reported as failed, with
		// no input that breaks it: that is no fault of the target.
		if err != nil && strings.Contains(said.String(), "context deadline exceeded") && !strings.Contains(said.String(), "Failing input") {
			continue
		}
		if err != nil {
			failed = append(failed, t.folder+" "+t.name)
		}
	}
	if len(failed) > 0 {
		return fmt.Errorf("fuzzing broke %s", strings.Join(failed, ", "))
	}
	return nil
}

// driveWindow runs tests of cmd/bandwright that need the built program and a
// display, which they start themselves. Pictures go to the folder shots.
func (w *workshop) driveWindow(ctx context.Context, pattern, shots string) error {
	env := []string{
		"BANDWRIGHT_BINARY=" + w.program("bandwright"),
		"BANDWRIGHT_SHOTS=" + shots,
	}
	return w.command(ctx, env, "go", "test", tags(), "-vet=off", "-count=1", "-v", "-timeout=12m", "-run="+pattern, "./cmd/bandwright")
}

func test(ctx context.Context, w *workshop, args []string) error {
	fs := flag.NewFlagSet("test", flag.ContinueOnError)
	fuzzTime := fs.Duration("fuzz", 5*time.Second, "")
	only := fs.String("only", "", "")
	noPackages := packageFlags(fs)
	if err := parse(fs, args, false); err != nil {
		return err
	}
	var names []string
	if *only != "" {
		names = strings.Split(*only, ",")
	}
	files, err := goFiles(w.root)
	if err != nil {
		return err
	}
	steps, err := w.checkPlan(files, *fuzzTime, names)
	if err != nil {
		return err
	}
	if err := w.prepare(ctx, "test", *noPackages); err != nil {
		return err
	}
	return w.runSteps(ctx, steps)
}
