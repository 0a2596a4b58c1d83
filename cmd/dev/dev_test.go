package main

import (
	"bytes"
	"context"
	"errors"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"
)

func debian(m machine) machine {
	m.goos, m.apt = "linux", true
	return m
}

var three = []systemPackage{
	{"gcc", "C compiler", "cc", ""},
	{"libgl-dev", "OpenGL headers", "", "gl"},
	{"xvfb", "a display", "Xvfb", ""},
}

func TestPlanInstall(t *testing.T) {
	all := map[string]bool{"gcc": true, "libgl-dev": true, "xvfb": true}
	for _, c := range []struct {
		name     string
		m        machine
		missing  []string
		commands int
		contains []string // in the description
	}{
		{"all there", debian(machine{root: true, installed: all}), nil, 0, nil},
		{"bare", debian(machine{root: true, listsEmpty: true}), []string{"gcc", "libgl-dev", "xvfb"}, 2,
			[]string{"apt-get -o DPkg::Lock::Timeout=120 -qq update", "install -y --no-install-recommends gcc libgl-dev xvfb", "OpenGL headers"}},
		{"one missing", debian(machine{root: true, installed: map[string]bool{"gcc": true, "xvfb": true}}), []string{"libgl-dev"}, 1,
			[]string{"recommends libgl-dev\n"}},
		{"with sudo", debian(machine{sudo: true, installed: map[string]bool{"gcc": true}}), []string{"libgl-dev", "xvfb"}, 1,
			[]string{"sudo env DEBIAN_FRONTEND=noninteractive apt-get"}},
		{"neither root nor sudo", debian(machine{listsEmpty: true}), []string{"gcc", "libgl-dev", "xvfb"}, 0,
			[]string{"Ask someone", "update\n", "install"}},
		{"no apt", machine{goos: "linux", root: true, present: func(p systemPackage) bool { return p.command == "cc" }},
			[]string{"libgl-dev", "xvfb"}, 0, []string{"package manager of this system", "--no-packages", "a display"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			plan := planInstall(c.m, three)
			var missing []string
			for _, p := range plan.missing {
				missing = append(missing, p.debian)
			}
			if !slices.Equal(missing, c.missing) {
				t.Errorf("missing %v, want %v", missing, c.missing)
			}
			if len(plan.commands) != c.commands {
				t.Errorf("%d commands, want %d: %v", len(plan.commands), c.commands, plan.commands)
			}
			var said strings.Builder
			plan.describe(&said)
			for _, s := range c.contains {
				if !strings.Contains(said.String(), s) {
					t.Errorf("the description lacks %q:\n%s", s, said.String())
				}
			}
			if len(c.missing) == 0 && said.Len() > 0 {
				t.Errorf("nothing is missing, yet it says %q", said.String())
			}
		})
	}
}

func TestReadStatus(t *testing.T) {
	got := readStatus("installed gcc\nconfig-files xvfb\nnot-installed libgl-dev\n\nhalf-installed xdotool\ninstalled python3\n")
	if len(got) != 2 || !got["gcc"] || !got["python3"] {
		t.Errorf("got %v", got)
	}
}

func TestPackagesFor(t *testing.T) {
	linux := packagesFor("linux", buildPackages, displayPackages, drivingPackages, peerPackages)
	seen := map[string]bool{}
	for _, p := range linux {
		if seen[p.debian] {
			t.Errorf("%s stands twice", p.debian)
		}
		seen[p.debian] = true
		if p.reason == "" {
			t.Errorf("%s: no reason given", p.debian)
		}
	}
	for _, name := range []string{"gcc", "libxi6", "xvfb", "python3-numpy"} {
		if !seen[name] {
			t.Errorf("%s is missing", name)
		}
	}
	if mac := packagesFor("darwin", buildPackages); len(mac) != 1 || mac[0].command != "cc" {
		t.Errorf("macOS needs a C compiler alone, got %v", mac)
	}
	if strings.Contains(buildTags("darwin"), "x11") || !strings.Contains(buildTags("linux"), "x11") {
		t.Error("x11 is a tag of Linux and the BSDs alone")
	}
}

func TestDisplayProblem(t *testing.T) {
	env := func(set ...string) func(string) string {
		return func(name string) string {
			if slices.Contains(set, name) {
				return "0"
			}
			return ""
		}
	}
	for _, c := range []struct {
		goos string
		env  func(string) string
		want string
	}{
		{"linux", env("DISPLAY"), ""},
		{"darwin", env(), ""},
		{"linux", env("WAYLAND_DISPLAY"), "xwayland"},
		{"linux", env("WAYLAND_DISPLAY", "DISPLAY"), ""},
		{"linux", env(), "dev shots"},
	} {
		got := displayProblem(c.goos, c.env)
		if (got == "") != (c.want == "") || !strings.Contains(got, c.want) {
			t.Errorf("%s: got %q, want %q", c.goos, got, c.want)
		}
	}
}

func TestRunStepsGoesOnAndNamesFailures(t *testing.T) {
	var out bytes.Buffer
	w := &workshop{out: &out, err: &out}
	var ran []string
	mark := func(name string, err error) step {
		return step{name, func(context.Context) error { ran = append(ran, name); return err }}
	}
	err := w.runSteps(context.Background(), []step{mark("a", nil), mark("b", errors.New("broken")), mark("c", nil)})
	if err == nil || err.Error() != "failed: b" {
		t.Errorf("error %v", err)
	}
	if !slices.Equal(ran, []string{"a", "b", "c"}) {
		t.Errorf("ran %v", ran)
	}
	if !strings.Contains(out.String(), "FAILED") || !strings.Contains(out.String(), "broken") {
		t.Errorf("the summary hides the failure:\n%s", out.String())
	}

	ctx, cancel := context.WithCancel(context.Background())
	stop := step{"stop", func(context.Context) error { cancel(); return nil }}
	if err := w.runSteps(ctx, []step{stop, mark("d", nil)}); err == nil {
		t.Error("an interrupted run counts as a success")
	}
	if err := w.runSteps(context.Background(), []step{mark("a", nil)}); err != nil {
		t.Error(err)
	}
}

func TestChooseSteps(t *testing.T) {
	all := []step{{name: "vet"}, {name: "fuzz"}, {name: "test"}}
	names := func(steps []step) (list []string) {
		for _, s := range steps {
			list = append(list, s.name)
		}
		return list
	}
	for _, c := range []struct {
		only []string
		fuzz time.Duration
		want []string
	}{
		{nil, time.Second, []string{"vet", "fuzz", "test"}},
		{nil, 0, []string{"vet", "test"}},
		{[]string{"test", "vet"}, time.Second, []string{"vet", "test"}},
	} {
		steps, err := chooseSteps(all, c.only, c.fuzz)
		if err != nil || !slices.Equal(names(steps), c.want) {
			t.Errorf("only %v, fuzz %v: %v, %v", c.only, c.fuzz, names(steps), err)
		}
	}
	var wrong *usageError
	if _, err := chooseSteps(all, []string{"vett"}, 0); !errors.As(err, &wrong) {
		t.Errorf("an unknown step: %v", err)
	}
}

func TestSourceScan(t *testing.T) {
	root := t.TempDir()
	write := func(name, text string) {
		name = filepath.Join(root, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(name, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	write("ui/doc/a.go", "package doc\n\nfunc FuzzNot() {}\n")
	write("ui/doc/a_test.go", "package doc\nimport \"testing\"\nfunc FuzzRead(f *testing.F) {}\nfunc FuzzHelper(f int) {}\nfunc TestX(t *testing.T) {}\n")
	write("ui/doc/testdata/x.go", "broken")
	write("physics/zone/z.go", "package zone\n")
	write("other/o.go", "package o\n")
	files, err := goFiles(root)
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"physics/zone/z.go", "ui/doc/a.go", "ui/doc/a_test.go"}; !slices.Equal(files, want) {
		t.Errorf("files %v, want %v", files, want)
	}
	found, err := testFuncs(root, files, "Fuzz", "F")
	if err != nil || len(found) != 1 || found[0] != (testFunc{"ui/doc", "FuzzRead"}) {
		t.Errorf("fuzz targets %v, %v", found, err)
	}
	bad, err := unformatted(root, files)
	if err != nil || !slices.Equal(bad, []string{"ui/doc/a_test.go"}) {
		t.Errorf("unformatted %v, %v", bad, err)
	}
	if got := racePackages(packageFolders(append(files, "ui/window/w.go", "cmd/dev/main.go"))); !slices.Equal(got, []string{"./physics/zone", "./ui/doc"}) {
		t.Errorf("race packages %v", got)
	}
}

func TestCommandLine(t *testing.T) {
	for _, c := range []struct {
		args   []string
		status int
		out    string
	}{
		{nil, exitUsage, ""},
		{[]string{"help"}, exitDone, "COMMAND"},
		{[]string{"help", "test"}, exitDone, "staticcheck"},
		{[]string{"setup", "--help"}, exitDone, "--dry-run"},
		{[]string{"brew"}, exitUsage, ""},
		{[]string{"test", "--fuzz", "often"}, exitUsage, ""},
		{[]string{"test", "extra"}, exitUsage, ""},
		{[]string{"setup", "--for", "fun"}, exitUsage, ""},
		{[]string{"test", "--only", "nothing"}, exitUsage, ""},
	} {
		var out, errw bytes.Buffer
		if got := run(context.Background(), c.args, &out, &errw); got != c.status {
			t.Errorf("%v: status %d, want %d: %s", c.args, got, c.status, errw.String())
		}
		if !strings.Contains(out.String(), c.out) {
			t.Errorf("%v prints %q, want %q in it", c.args, out.String(), c.out)
		}
		if c.status == exitUsage && errw.Len() == 0 {
			t.Errorf("%v: refused without a word", c.args)
		}
	}
	for _, c := range commands() {
		if !strings.HasPrefix(c.help, "usage: go run ./cmd/dev "+c.name) {
			t.Errorf("%s: its help starts %q", c.name, strings.SplitN(c.help, "\n", 2)[0])
		}
	}
}
