package main

import "context"

const benchHelp = `usage: go run ./cmd/dev bench [--no-packages]
`

func bench(ctx context.Context, w *workshop, args []string) error { return nil }
