package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/app"
	"github.com/spf13/pflag"

	"bandwright/assets"
	"bandwright/ui/window"
)

func main() { os.Exit(run(os.Args[1:], os.Stderr)) }

const usage = `usage: bandwright [flags] [STUDY]

Opens the window on a study (` + "`.bandstudy`" + ` file), or on silicon.

`

func run(args []string, stderr io.Writer) int {
	flags := pflag.NewFlagSet("bandwright", pflag.ContinueOnError)
	flags.SetOutput(stderr)
	size := flags.String("size", "", "width and height of the window, as 1440x900")
	theme := flags.String("theme", "", "light or dark")
	config := flags.String("config", "", "folder of the preferences (default: the system's folder for settings)")
	log := flags.String("debug-log", "", "write the state of the window to this file, one JSON object a line")
	flags.Usage = func() { fmt.Fprint(stderr, usage, flags.FlagUsages()) }
	switch err := flags.Parse(args); {
	case errors.Is(err, pflag.ErrHelp):
		return 0
	case err != nil:
		fmt.Fprintf(stderr, "bandwright: %v; run bandwright --help\n", err)
		return 2
	}
	o := window.Options{Config: *config, Theme: *theme}
	if o.Theme != "" && o.Theme != "light" && o.Theme != "dark" {
		fmt.Fprintf(stderr, "bandwright: --theme %s: give light or dark\n", o.Theme)
		return 2
	}
	if *size != "" {
		w, h, err := parseSize(*size)
		if err != nil {
			fmt.Fprintf(stderr, "bandwright: --size %s: %v\n", *size, err)
			return 2
		}
		o.Width, o.Height = w, h
	}
	switch flags.NArg() {
	case 0:
	case 1:
		o.Study = flags.Arg(0)
	default:
		fmt.Fprintln(stderr, "bandwright: give one study")
		return 2
	}
	if o.Config == "" {
		if folder, err := os.UserConfigDir(); err == nil {
			o.Config = filepath.Join(folder, "bandwright")
		}
	}
	if *log != "" {
		f, err := os.Create(*log)
		if err != nil {
			fmt.Fprintf(stderr, "bandwright: --debug-log: %v\n", err)
			return 1
		}
		defer f.Close()
		o.Log = f
	}
	o.App = app.NewWithID("bandwright")
	o.App.SetIcon(icon())
	w, err := window.New(o)
	if err != nil {
		fmt.Fprintf(stderr, "bandwright: %v\n", err)
		return 1
	}
	w.ShowAndRun()
	return 0
}

// parseSize reads a size as 1440x900.
func parseSize(s string) (w, h float32, err error) {
	a, b, ok := strings.Cut(strings.ToLower(s), "x")
	x, errX := strconv.Atoi(a)
	y, errY := strconv.Atoi(b)
	if !ok || errX != nil || errY != nil || x < 400 || y < 300 || x > 20000 || y > 20000 {
		return 0, 0, errors.New("give width and height of at least 400x300, as 1440x900")
	}
	return float32(x), float32(y), nil
}

// icon is the program's own, or none if the build lacks it.
func icon() fyne.Resource {
	const name = "icons/bandwright-512.png"
	data, err := assets.Icons.ReadFile(name)
	if err != nil {
		return nil
	}
	return fyne.NewStaticResource(name, data)
}
