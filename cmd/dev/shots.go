package main

import (
	"context"
	"flag"
	"path/filepath"
)

const shotsHelp = `usage: go run ./cmd/dev shots [--no-packages]

Builds the window, opens it on a display in memory in several states, sizes,
themes and scales, and stores what is seen as PNG files in shots/.
`

func shots(ctx context.Context, w *workshop, args []string) error {
	fs := flag.NewFlagSet("shots", flag.ContinueOnError)
	noPackages := packageFlags(fs)
	if err := parse(fs, args, false); err != nil {
		return err
	}
	if err := w.prepare(ctx, "test", *noPackages); err != nil {
		return err
	}
	if err := w.build(ctx); err != nil {
		return err
	}
	return w.driveWindow(ctx, "^TestShots$", filepath.Join(w.root, "shots"))
}
