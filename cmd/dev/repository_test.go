package main

import (
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"os/exec"
	"path"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func repository(t *testing.T) string {
	t.Helper()
	root, err := findRoot()
	if err != nil {
		t.Fatal(err)
	}
	return root
}

func TestTopLevel(t *testing.T) {
	allowed := []string{"cmd", "ui", "render", "physics", "assets", "testdata",
		"go.mod", "go.sum", "README.md", "DEVELOPERS.md", "FyneApp.toml", "LICENSE", ".gitignore", ".ci"}
	root := repository(t)
	// Ask git, so that what a build leaves behind does not count.
	listing, err := exec.Command("git", "-C", root, "ls-files").Output()
	if err != nil {
		t.Skipf("not a git checkout: %v", err)
	}
	for name := range strings.Lines(string(listing)) {
		top, _, _ := strings.Cut(strings.TrimSpace(name), "/")
		if !slices.Contains(allowed, top) {
			t.Errorf("%s: %s does not belong at the top level", strings.TrimSpace(name), top)
		}
	}
}

func TestEveryPackageSaysItsJob(t *testing.T) {
	root := repository(t)
	files, err := goFiles(root)
	if err != nil {
		t.Fatal(err)
	}
	for _, folder := range packageFolders(files) {
		if slices.Contains([]string{"util", "utils", "common", "types", "helpers", "misc"}, path.Base(folder)) {
			t.Errorf("%s: a package is named after what it holds", folder)
		}
		name := path.Join(folder, "doc.go")
		tree, err := parser.ParseFile(token.NewFileSet(), filepath.Join(root, name), nil, parser.ParseComments)
		if err != nil {
			t.Errorf("%s: every package has a doc.go: %v", folder, err)
			continue
		}
		want := "Package " + path.Base(folder) + " "
		if strings.HasPrefix(folder, "cmd/") {
			want = "Command " + path.Base(folder) + " "
		}
		if doc := tree.Doc.Text(); !strings.HasPrefix(doc, want) || len(doc) < 100 {
			t.Errorf("%s: the comment starts with %q and says the package's job, got %q", name, want, doc)
		}
		// One package comment only, or the documentation shows a heap of them.
		for _, other := range files {
			if path.Dir(other) != folder || other == name || strings.HasSuffix(other, "_test.go") {
				continue
			}
			tree, err := parser.ParseFile(token.NewFileSet(), filepath.Join(root, other), nil, parser.ParseComments|parser.PackageClauseOnly)
			if err != nil {
				t.Error(err)
			} else if strings.HasPrefix(tree.Doc.Text(), want) {
				t.Errorf("%s: the package comment belongs in doc.go", other)
			}
		}
	}
}

// TestFontsHaveLicences: what others made may be shipped only with their terms.
func TestFontsHaveLicences(t *testing.T) {
	root := repository(t)
	fonts := 0
	err := filepath.WalkDir(filepath.Join(root, "assets"), func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		switch strings.ToLower(filepath.Ext(name)) {
		case ".ttf", ".otf", ".woff", ".woff2":
		default:
			return nil
		}
		fonts++
		beside, err := os.ReadDir(filepath.Dir(name))
		if err != nil {
			return err
		}
		if !slices.ContainsFunc(beside, func(e fs.DirEntry) bool {
			upper := strings.ToUpper(e.Name())
			return strings.Contains(upper, "LICEN") || strings.HasPrefix(upper, "OFL") || strings.HasPrefix(upper, "COPYING")
		}) {
			t.Errorf("%s has no licence beside it", name)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("%d fonts", fonts)
}

// TestIcons: the icon that the window and the application file name is there.
func TestIcons(t *testing.T) {
	root := repository(t)
	text, err := os.ReadFile(filepath.Join(root, "FyneApp.toml"))
	if err != nil {
		t.Fatal(err)
	}
	_, rest, ok := strings.Cut(string(text), "Icon = \"")
	icon, _, closed := strings.Cut(rest, "\"")
	if !ok || !closed {
		t.Fatal("FyneApp.toml names no icon")
	}
	if _, err := os.Stat(filepath.Join(root, filepath.FromSlash(icon))); err != nil {
		t.Error(err)
	}
}
