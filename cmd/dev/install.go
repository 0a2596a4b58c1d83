package main

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
)

// machine is what planInstall knows of the machine: a snapshot, so that the
// plan can be tested for machines other than this one.
type machine struct {
	goos       string
	apt        bool            // Debian or one of its children, with apt-get
	root       bool            // we may install
	sudo       bool            // or can become root
	listsEmpty bool            // apt has no package lists yet
	installed  map[string]bool // by dpkg, where apt is true
	present    func(systemPackage) bool
}

// installPlan is what has to happen before the work can begin.
type installPlan struct {
	missing  []systemPackage
	commands [][]string // to run in order; none where a person has to act
	advice   string     // what that person has to do
}

// planInstall compares what is wanted with what is there. It changes nothing.
func planInstall(m machine, want []systemPackage) installPlan {
	var plan installPlan
	for _, p := range want {
		there := false
		if m.apt {
			there = m.installed[p.debian]
		} else if m.present != nil {
			there = m.present(p)
		}
		if !there {
			plan.missing = append(plan.missing, p)
		}
	}
	if len(plan.missing) == 0 {
		return plan
	}
	if !m.apt {
		plan.advice = "Install these with the package manager of this system (the names are Debian's;\n" +
			"yours may differ), then run the command again, with --no-packages if they are\n" +
			"there but were not found."
		return plan
	}
	update := []string{"apt-get", "-o", "DPkg::Lock::Timeout=120", "-qq", "update"}
	install := []string{"apt-get", "-o", "DPkg::Lock::Timeout=120", "-qq", "install", "-y", "--no-install-recommends"}
	for _, p := range plan.missing {
		install = append(install, p.debian)
	}
	steps := [][]string{install}
	if m.listsEmpty {
		steps = [][]string{update, install}
	}
	switch {
	case m.root:
		plan.commands = steps
	case m.sudo:
		for _, s := range steps {
			// env: sudo drops the variable that keeps apt from asking questions.
			plan.commands = append(plan.commands, append([]string{"sudo", "env", "DEBIAN_FRONTEND=noninteractive"}, s...))
		}
	default:
		plan.advice = "Ask someone who may install packages here to run:\n"
		for _, s := range steps {
			plan.advice += "  " + strings.Join(s, " ") + "\n"
		}
	}
	return plan
}

// describe prints what is missing and what for, and what will be done.
func (p installPlan) describe(w io.Writer) {
	if len(p.missing) == 0 {
		return
	}
	fmt.Fprintf(w, "Missing on this machine:\n")
	for _, m := range p.missing {
		fmt.Fprintf(w, "  %-18s %s\n", m.debian, m.reason)
	}
	if len(p.commands) > 0 {
		fmt.Fprintln(w, "To be run:")
		for _, c := range p.commands {
			fmt.Fprintf(w, "  %s\n", strings.Join(c, " "))
		}
	}
	if p.advice != "" {
		fmt.Fprintln(w, strings.TrimRight(p.advice, "\n"))
	}
}

var errNotInstalled = errors.New("the packages named above are missing")

// ensure finds what is missing, says so, and installs it where it can.
func (w *workshop) ensure(ctx context.Context, want []systemPackage, dryRun bool) error {
	m, err := thisMachine(ctx, want)
	if err != nil {
		return err
	}
	plan := planInstall(m, want)
	plan.describe(w.out)
	if len(plan.missing) == 0 || dryRun {
		return nil
	}
	if len(plan.commands) == 0 {
		return errNotInstalled
	}
	err = w.apt(ctx, plan.commands)
	if err != nil && !m.listsEmpty && ctx.Err() == nil {
		// Old lists name packages that the archive no longer has.
		fmt.Fprintln(w.out, "Trying once more with fresh package lists.")
		m.listsEmpty = true
		err = w.apt(ctx, planInstall(m, want).commands)
	}
	return err
}

func (w *workshop) apt(ctx context.Context, commands [][]string) error {
	for _, c := range commands {
		cmd := exec.CommandContext(ctx, c[0], c[1:]...)
		cmd.Env = append(os.Environ(), "DEBIAN_FRONTEND=noninteractive")
		cmd.Stdin = os.Stdin // sudo may ask for the password
		cmd.Stdout, cmd.Stderr = w.out, w.err
		if err := cmd.Run(); err != nil {
			return fmt.Errorf("%s: %w", strings.Join(c, " "), err)
		}
	}
	return nil
}

// thisMachine takes the snapshot of the machine that dev runs on.
func thisMachine(ctx context.Context, want []systemPackage) (machine, error) {
	m := machine{
		goos:    runtime.GOOS,
		root:    os.Geteuid() == 0,
		sudo:    hasCommand("sudo"),
		apt:     hasCommand("apt-get") && hasCommand("dpkg-query"),
		present: present,
	}
	if !m.apt {
		return m, nil
	}
	lists, err := filepath.Glob("/var/lib/apt/lists/*_Packages*")
	if err != nil {
		return m, err
	}
	m.listsEmpty = len(lists) == 0
	args := []string{"-W", "-f", "${db:Status-Status} ${Package}\n"}
	for _, p := range want {
		args = append(args, p.debian)
	}
	var out, complaint bytes.Buffer
	query := exec.CommandContext(ctx, "dpkg-query", args...)
	query.Stdout, query.Stderr = &out, &complaint
	// Status 1 means that some are unknown: they are simply not listed.
	if err := query.Run(); err != nil {
		var exit *exec.ExitError
		if !errors.As(err, &exit) || exit.ExitCode() != 1 {
			return m, fmt.Errorf("dpkg-query: %w: %s", err, strings.TrimSpace(complaint.String()))
		}
	}
	m.installed = readStatus(out.String())
	return m, nil
}

// readStatus reads lines "installed gcc" as dpkg-query prints them. Any other
// state (removed with its configuration left, half installed) is not there.
func readStatus(listing string) map[string]bool {
	installed := map[string]bool{}
	for line := range strings.Lines(listing) {
		state, name, ok := strings.Cut(strings.TrimSpace(line), " ")
		if ok && state == "installed" {
			installed[name] = true
		}
	}
	return installed
}

func hasCommand(name string) bool {
	_, err := exec.LookPath(name)
	return err == nil
}

// present tells without dpkg whether a package is there.
func present(p systemPackage) bool {
	switch {
	case p.command != "":
		return hasCommand(p.command)
	case p.module != "":
		return exec.Command("pkg-config", "--exists", p.module).Run() == nil
	}
	// The C library's headers come with the compiler on most systems.
	return hasCommand("cc") || hasCommand("gcc")
}
