package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"runtime"
	"strings"
	"testing"
)

// TestReadmeRuns does what the README tells its readers to do with bandcalc,
// with the study that it shows.
func TestReadmeRuns(t *testing.T) {
	if testing.Short() {
		t.Skip("builds bandcalc")
	}
	root := repository(t)
	text, err := os.ReadFile(filepath.Join(root, "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	program := filepath.Join(dir, "bandcalc")
	if runtime.GOOS == "windows" {
		program += ".exe"
	}
	build := exec.Command("go", "build", "-o", program, "./cmd/bandcalc")
	build.Dir = root
	build.Env = append(os.Environ(), "CGO_ENABLED=0")
	if out, err := build.CombinedOutput(); err != nil {
		t.Fatalf("bandcalc does not build without a C compiler: %v\n%s", err, out)
	}
	_, study, ok := strings.Cut(string(text), "```toml\n")
	study, _, closed := strings.Cut(study, "```")
	if !ok || !closed {
		t.Fatal("the README shows no study")
	}
	file := filepath.Join(dir, "readme.bandstudy")
	if err := os.WriteFile(file, []byte(study), 0o666); err != nil {
		t.Fatal(err)
	}
	run := 0
	for line := range strings.Lines(string(text)) {
		if !strings.HasPrefix(line, "bandcalc ") {
			continue
		}
		run++
		args := shellWords(strings.TrimSpace(line))[1:]
		for i, a := range args {
			if a == "STUDY" || a == "FILE" {
				args[i] = file
			}
		}
		cmd := exec.Command(program, args...)
		var out, errw bytes.Buffer
		cmd.Stdout, cmd.Stderr = &out, &errw
		if err := cmd.Run(); err != nil {
			t.Errorf("%s: %v\n%s", strings.TrimSpace(line), err, errw.String())
		} else if out.Len() == 0 && args[0] != "check" {
			t.Errorf("%s prints nothing", strings.TrimSpace(line))
		}
	}
	if run < 5 {
		t.Errorf("the README shows %d commands of bandcalc", run)
	}
}

// shellWords splits a command line up to its comment. Double quotes hold words
// together.
func shellWords(line string) []string {
	line, _, _ = strings.Cut(line, " #")
	var words []string
	for i, part := range strings.Split(line, `"`) {
		if i%2 == 1 {
			words = append(words, part)
		} else {
			words = append(words, strings.Fields(part)...)
		}
	}
	return words
}

func TestShellWords(t *testing.T) {
	got := strings.Join(shellWords(`bandcalc levels STUDY --at "0 0 0; 0.5 0 0"   # levels at k points`), "|")
	if want := "bandcalc|levels|STUDY|--at|0 0 0; 0.5 0 0"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
}

var link = regexp.MustCompile(`\]\(([^)#:]+)(#[^)]*)?\)`)

// TestLinks: what the documents point to is there.
func TestLinks(t *testing.T) {
	root := repository(t)
	for _, name := range []string{"README.md", "DEVELOPERS.md"} {
		text, err := os.ReadFile(filepath.Join(root, name))
		if err != nil {
			t.Fatal(err)
		}
		found := link.FindAllStringSubmatch(string(text), -1)
		if len(found) < 2 {
			t.Errorf("%s: %d links found", name, len(found))
		}
		for _, m := range found {
			if _, err := os.Stat(filepath.Join(root, filepath.FromSlash(m[1]))); err != nil {
				t.Errorf("%s points to %s, which is not there", name, m[1])
			}
		}
	}
}

// TestNamedTests: the tests that DEVELOPERS.md names are there.
func TestNamedTests(t *testing.T) {
	root := repository(t)
	text, err := os.ReadFile(filepath.Join(root, "DEVELOPERS.md"))
	if err != nil {
		t.Fatal(err)
	}
	files, err := goFiles(root)
	if err != nil {
		t.Fatal(err)
	}
	tests, err := testFuncs(root, files, "Test", "T")
	if err != nil {
		t.Fatal(err)
	}
	there := map[testFunc]bool{}
	for _, f := range tests {
		there[f] = true
	}
	named := 0
	for _, m := range regexp.MustCompile("`((?:physics|render|ui|cmd)/[a-z]+)` (Test[^|]+)").FindAllStringSubmatch(string(text), -1) {
		for _, name := range strings.Split(m[2], ",") {
			named++
			if !there[testFunc{m[1], strings.TrimSpace(name)}] {
				t.Errorf("DEVELOPERS.md names %s of %s, which is not there", strings.TrimSpace(name), m[1])
			}
		}
	}
	if named < 20 {
		t.Errorf("DEVELOPERS.md names %d tests", named)
	}
}
