package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"time"
)

// step is one check of a longer run.
type step struct {
	name string
	run  func(ctx context.Context) error
}

type outcome struct {
	name string
	took time.Duration
	err  error
}

// runSteps runs every step, also after one has failed, so that one run shows
// all that is wrong, and closes with a summary. The error names the steps that
// failed.
func (w *workshop) runSteps(ctx context.Context, steps []step) error {
	var outcomes []outcome
	for _, s := range steps {
		if ctx.Err() != nil {
			break
		}
		fmt.Fprintf(w.out, "\n=== %s\n", s.name)
		start := time.Now()
		err := s.run(ctx)
		if err != nil {
			fmt.Fprintf(w.out, "%s failed: %v\n", s.name, err)
		}
		outcomes = append(outcomes, outcome{s.name, time.Since(start), err})
	}
	return summarise(w.out, outcomes, len(steps))
}

// summarise prints one line for each step and returns an error that names the
// failed ones, or that some were never reached.
func summarise(out io.Writer, outcomes []outcome, planned int) error {
	fmt.Fprintln(out, "\n=== summary")
	var failed []string
	var total time.Duration
	for _, o := range outcomes {
		verdict := "ok"
		if o.err != nil {
			verdict = "FAILED"
			failed = append(failed, o.name)
		}
		total += o.took
		fmt.Fprintf(out, "  %-6s  %6.1f s  %s\n", verdict, o.took.Seconds(), o.name)
	}
	fmt.Fprintf(out, "  total   %6.1f s\n", total.Seconds())
	if len(failed) > 0 {
		return fmt.Errorf("failed: %s", strings.Join(failed, ", "))
	}
	if len(outcomes) < planned {
		return fmt.Errorf("stopped after %d of %d steps", len(outcomes), planned)
	}
	return nil
}

// command runs a program in the repository and shows its output as it comes.
// env adds to the environment, which is otherwise handed on as it is: GOFLAGS
// and the like belong to whoever set them.
func (w *workshop) command(ctx context.Context, env []string, name string, args ...string) error {
	return w.commandTo(ctx, w.out, env, name, args...)
}

// commandTo is command with its output sent elsewhere.
func (w *workshop) commandTo(ctx context.Context, out io.Writer, env []string, name string, args ...string) error {
	fmt.Fprintf(w.out, "$ %s\n", strings.Join(append([]string{filepath.Base(name)}, args...), " "))
	cmd := exec.CommandContext(ctx, name, args...)
	cmd.Dir = w.root
	cmd.Env = append(os.Environ(), env...)
	cmd.Stdout, cmd.Stderr = out, out
	// An interrupt reaches the child too; give it time to clean up.
	cmd.Cancel = func() error { return cmd.Process.Signal(os.Interrupt) }
	cmd.WaitDelay = 10 * time.Second
	if err := cmd.Run(); err != nil {
		return fmt.Errorf("%s %s: %w", filepath.Base(name), strings.Join(args[:min(1, len(args))], " "), err)
	}
	return nil
}

// tags is the flag that every go command of ours needs.
func tags() string { return "-tags=" + buildTags(runtime.GOOS) }

// program is where a built command lies.
func (w *workshop) program(name string) string {
	if runtime.GOOS == "windows" {
		name += ".exe"
	}
	return filepath.Join(w.root, "bin", name)
}

// build compiles the programs into bin.
func (w *workshop) build(ctx context.Context) error {
	for _, name := range []string{"bandcalc", "bandwright"} {
		if err := w.command(ctx, nil, "go", "build", tags(), "-o", w.program(name), "./cmd/"+name); err != nil {
			return err
		}
	}
	return nil
}
