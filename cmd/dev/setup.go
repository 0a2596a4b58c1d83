package main

import (
	"context"
	"flag"
	"fmt"
	"runtime"
)

const setupHelp = `usage: go run ./cmd/dev setup [--for run|test|bench] [--dry-run] [--no-packages]

Finds the system packages that are missing, says what each is for, installs
them with apt-get on Debian and Ubuntu (with sudo if you are not root), names
them elsewhere, downloads the Go modules, and builds bin/bandwright and
bin/bandcalc.

  --for run      what the window needs (default)
  --for test     also what the tests need: a display in memory and its driver
  --for bench    also what the benchmarks compare with: OpenBLAS, numpy
  --dry-run      only say what would be installed
  --no-packages  leave the system packages alone
`

// groupsFor is the package groups behind a purpose.
func groupsFor(purpose string) ([][]systemPackage, error) {
	groups := [][]systemPackage{buildPackages, displayPackages}
	switch purpose {
	case "run":
		return groups, nil
	case "test":
		return append(groups, drivingPackages), nil
	case "bench":
		return append(groups, drivingPackages, peerPackages), nil
	}
	return nil, &usageError{fmt.Sprintf("--for %s: it is run, test or bench", purpose)}
}

// packageFlags are the two flags that every command has which may install.
func packageFlags(fs *flag.FlagSet) (noPackages *bool) {
	return fs.Bool("no-packages", false, "")
}

// prepare makes sure of the packages of a purpose, unless told not to.
func (w *workshop) prepare(ctx context.Context, purpose string, noPackages bool) error {
	if noPackages {
		return nil
	}
	groups, err := groupsFor(purpose)
	if err != nil {
		return err
	}
	return w.ensure(ctx, packagesFor(runtime.GOOS, groups...), false)
}

func setup(ctx context.Context, w *workshop, args []string) error {
	fs := flag.NewFlagSet("setup", flag.ContinueOnError)
	purpose := fs.String("for", "run", "")
	dryRun := fs.Bool("dry-run", false, "")
	noPackages := packageFlags(fs)
	if err := parse(fs, args, false); err != nil {
		return err
	}
	groups, err := groupsFor(*purpose)
	if err != nil {
		return err
	}
	if !*noPackages {
		if err := w.ensure(ctx, packagesFor(runtime.GOOS, groups...), *dryRun); err != nil {
			return err
		}
	}
	if *dryRun {
		return nil
	}
	if err := w.command(ctx, nil, "go", "mod", "download"); err != nil {
		return err
	}
	fmt.Fprintln(w.out, "Building; the first time takes some minutes.")
	if err := w.build(ctx); err != nil {
		return err
	}
	fmt.Fprintf(w.out, "Built %s and %s.\n", w.program("bandwright"), w.program("bandcalc"))
	return nil
}
