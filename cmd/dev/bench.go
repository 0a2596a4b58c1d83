package main

import (
	"bytes"
	"context"
	"flag"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"
	"text/tabwriter"
	"time"
)

const benchHelp = `usage: go run ./cmd/dev bench [--time TIME] [--only FOLDERS] [--no-packages]

Installs what we are measured against (OpenBLAS's LAPACK, numpy), then runs

  peers       every test named TestPeer...: our code and the peer in turns on the
              same input. It fails where we are slower than the README says.
  benchmarks  every Go benchmark, and prints one table of them

Close what else is running: the figures are those of the whole machine.

  --time TIME     for each benchmark (default 500ms)
  --only FOLDERS  only packages in these folders, separated by commas
                  (physics/linalg,render)
  --no-packages   leave the system packages alone
`

func bench(ctx context.Context, w *workshop, args []string) error {
	fs := flag.NewFlagSet("bench", flag.ContinueOnError)
	each := fs.Duration("time", 500*time.Millisecond, "")
	only := fs.String("only", "", "")
	noPackages := packageFlags(fs)
	if err := parse(fs, args, false); err != nil {
		return err
	}
	files, err := goFiles(w.root)
	if err != nil {
		return err
	}
	peers, err := testFuncs(w.root, files, "TestPeer", "T")
	if err != nil {
		return err
	}
	benchmarks, err := testFuncs(w.root, files, "Benchmark", "B")
	if err != nil {
		return err
	}
	peerFolders, benchFolders := foldersOf(peers, *only), foldersOf(benchmarks, *only)
	if len(peerFolders)+len(benchFolders) == 0 {
		return &usageError{fmt.Sprintf("--only %s: there is nothing to measure", *only)}
	}
	if err := w.prepare(ctx, "bench", *noPackages); err != nil {
		return err
	}
	var steps []step
	// One package after the other, so that they do not disturb each other.
	for _, folder := range peerFolders {
		steps = append(steps, step{"peers " + folder, func(ctx context.Context) error {
			return w.command(ctx, []string{"BANDWRIGHT_BENCH=1"}, "go", "test", tags(), "-vet=off", "-count=1", "-v", "-timeout=20m", "-run=^TestPeer", "./"+folder)
		}})
	}
	if len(benchFolders) > 0 {
		steps = append(steps, step{"benchmarks", func(ctx context.Context) error {
			return w.benchmarks(ctx, benchFolders, *each)
		}})
	}
	return w.runSteps(ctx, steps)
}

// foldersOf is the folders of the functions, each once, that lie in one of the
// folders of only (all of them if only is empty).
func foldersOf(functions []testFunc, only string) []string {
	var folders []string
	for _, f := range functions {
		chosen := only == ""
		for _, o := range strings.Split(only, ",") {
			o = strings.TrimSuffix(strings.TrimPrefix(o, "./"), "/")
			chosen = chosen || o != "" && (f.folder == o || strings.HasPrefix(f.folder, o+"/"))
		}
		if chosen {
			folders = append(folders, f.folder)
		}
	}
	slices.Sort(folders)
	return slices.Compact(folders)
}

func (w *workshop) benchmarks(ctx context.Context, folders []string, each time.Duration) error {
	var rows []benchRow
	var failed []string
	for _, folder := range folders {
		var out bytes.Buffer
		err := w.commandTo(ctx, &out, nil, "go", "test", tags(), "-vet=off", "-run=^$", "-bench=.", "-benchmem",
			"-benchtime="+each.String(), "-timeout=20m", "./"+folder)
		if err != nil {
			fmt.Fprint(w.out, out.String())
			failed = append(failed, folder)
		}
		rows = append(rows, readBenchmarks(folder, out.String())...)
	}
	printBenchmarks(w.out, rows)
	if len(failed) > 0 {
		return fmt.Errorf("benchmarks of %s failed", strings.Join(failed, ", "))
	}
	return nil
}

// benchRow is one benchmark's result; quantities are in the order go test
// prints them.
type benchRow struct {
	folder, name string
	quantities   []benchQuantity
}

type benchQuantity struct {
	value float64
	unit  string
}

// readBenchmarks reads lines such as
// "BenchmarkVectors/n=8-2  1000  1820 ns/op  0 B/op  0 allocs/op".
func readBenchmarks(folder, output string) []benchRow {
	var rows []benchRow
	for line := range strings.Lines(output) {
		fields := strings.Fields(line)
		if len(fields) < 4 || !strings.HasPrefix(fields[0], "Benchmark") {
			continue
		}
		name := strings.TrimPrefix(fields[0], "Benchmark")
		if dash := strings.LastIndexByte(name, '-'); dash > 0 {
			if _, err := strconv.Atoi(name[dash+1:]); err == nil { // number of processors
				name = name[:dash]
			}
		}
		row := benchRow{folder: folder, name: name}
		for i := 2; i+1 < len(fields); i += 2 {
			value, err := strconv.ParseFloat(fields[i], 64)
			if err != nil {
				break
			}
			row.quantities = append(row.quantities, benchQuantity{value, fields[i+1]})
		}
		if len(row.quantities) > 0 {
			rows = append(rows, row)
		}
	}
	return rows
}

func printBenchmarks(w io.Writer, rows []benchRow) {
	table := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintln(table, "\npackage\tbenchmark\ttime\tallocations\tmore")
	for _, r := range rows {
		took, allocs, more := "", "", ""
		for _, q := range r.quantities {
			switch q.unit {
			case "ns/op":
				took = humanTime(q.value)
			case "allocs/op":
				allocs = strconv.FormatFloat(q.value, 'g', -1, 64)
			case "B/op":
			default:
				more += fmt.Sprintf("%.4g %s  ", q.value, q.unit)
			}
		}
		fmt.Fprintf(table, "%s\t%s\t%s\t%s\t%s\n", r.folder, r.name, took, allocs, strings.TrimSpace(more))
	}
	table.Flush()
}

// humanTime prints nanoseconds with three digits in the unit that fits.
func humanTime(ns float64) string {
	switch {
	case ns < 1e3:
		return fmt.Sprintf("%.3g ns", ns)
	case ns < 1e6:
		return fmt.Sprintf("%.3g µs", ns/1e3)
	case ns < 1e9:
		return fmt.Sprintf("%.3g ms", ns/1e6)
	}
	return fmt.Sprintf("%.3g s", ns/1e9)
}
