package main

import (
	"go/parser"
	"go/token"
	"path"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// module is the import path of the repository.
const module = "bandwright"

// arrows is the import table: for each package, the packages of ours that it
// may import. Entries stand from the bottom to the top, so that a package can
// only name what is above it in the list, and no cycle can be written down.
// An entry ending in "/..." means all packages of that tree that are listed
// above.
//
// A new package gets a line; a new arrow is a decision about the design.
var arrows = []struct {
	folder string
	may    []string
}{
	{"assets", nil},

	// Physics: from vectors to results. It knows no drawing and no window.
	{"physics/lattice", nil},
	{"physics/linalg", nil},
	{"physics/crystal", []string{"physics/lattice"}},
	{"physics/symmetry", []string{"physics/lattice", "physics/crystal"}},
	{"physics/zone", []string{"assets", "physics/lattice", "physics/crystal", "physics/symmetry"}},
	{"physics/hamiltonian", []string{"physics/lattice", "physics/linalg", "physics/crystal"}},
	{"physics/catalog", []string{"assets", "physics/lattice", "physics/crystal", "physics/hamiltonian"}},
	{"physics/tightbinding", []string{"physics/lattice", "physics/linalg", "physics/crystal", "physics/hamiltonian", "physics/catalog"}},
	{"physics/path", []string{"physics/lattice", "physics/crystal", "physics/symmetry", "physics/zone"}},
	// Whatever reads a model's states sees the hamiltonian package alone, never
	// one kind of model.
	{"physics/bands", []string{"physics/lattice", "physics/linalg", "physics/crystal", "physics/symmetry", "physics/hamiltonian", "physics/path"}},
	{"physics/dos", []string{"physics/lattice", "physics/linalg", "physics/crystal", "physics/symmetry", "physics/hamiltonian"}},
	{"physics/edges", []string{"physics/lattice", "physics/linalg", "physics/crystal", "physics/symmetry", "physics/zone", "physics/hamiltonian", "physics/path", "physics/dos"}},
	{"physics/ledger", []string{"physics/lattice", "physics/linalg", "physics/crystal", "physics/hamiltonian"}},

	// Drawing: from points and labels to pixels. It knows no physics.
	{"render/picture", nil},
	{"render/typeset", []string{"assets", "render/picture"}},
	{"render/mark", []string{"render/picture", "render/typeset"}},
	{"render/scene", []string{"render/picture", "render/typeset", "render/mark"}},
	{"render/chart", []string{"render/picture", "render/typeset", "render/mark"}},
	{"render/project", []string{"render/picture", "render/typeset", "render/mark", "render/scene"}},
	{"render/raster", []string{"render/picture", "render/typeset"}},

	// The window's logic, headless; present is where physics and drawing meet.
	{"ui/task", nil},
	{"ui/doc", []string{"assets", "physics/..."}},
	{"ui/session", []string{"assets", "physics/...", "ui/doc", "ui/task"}},
	{"ui/present", []string{"assets", "physics/...", "render/...", "ui/doc", "ui/session"}},

	// Widgets and the window: the only users of the toolkit.
	{"ui/view", []string{"assets", "physics/...", "render/...", "ui/..."}},
	{"ui/window", []string{"assets", "physics/...", "render/...", "ui/..."}},

	{"cmd/bandcalc", []string{"assets", "physics/...", "ui/doc"}},
	{"cmd/bandwright", []string{"assets", "physics/...", "render/...", "ui/..."}},
	{"cmd/dev", nil},
}

// outside is who may import which module of others: the longest fitting entry
// counts. The standard library is open to all.
var outside = []struct {
	prefix string
	may    []string // folders or trees; "tests" means _test.go files anywhere but in cmd/dev
}{
	{"fyne.io", []string{"ui/view", "ui/window", "cmd/bandwright"}},
	{"fyne.io/fyne/v2/app", []string{"cmd/bandwright"}},
	{"fyne.io/fyne/v2/driver/desktop", []string{"ui/view", "ui/window", "cmd/bandwright"}},
	{"gonum.org/v1/gonum", []string{"physics/...", "render/...", "tests"}},
	{"github.com/go-gl/mathgl", []string{"physics/...", "render/...", "ui/...", "cmd/bandcalc", "tests"}},
	{"golang.org/x/sys/cpu", []string{"physics/linalg"}}, // which vector instructions the processor has
	{"golang.org/x/image", []string{"render/...", "ui/view", "ui/window", "tests"}},
	{"github.com/BurntSushi/toml", []string{"physics/zone", "physics/catalog", "ui/doc", "ui/window", "tests"}},
	{"github.com/spf13/pflag", []string{"cmd/bandcalc", "cmd/bandwright"}},
	{"pgregory.net/rapid", []string{"tests"}},
	{"github.com/google/go-cmp", []string{"tests"}},
}

func TestImportTable(t *testing.T) {
	root := repository(t)
	files, err := goFiles(root)
	if err != nil {
		t.Fatal(err)
	}
	allowed := spellOut(t)
	for _, name := range files {
		folder, isTest := path.Dir(name), strings.HasSuffix(name, "_test.go")
		mine, listed := allowed[folder]
		if !listed {
			t.Errorf("%s: package %s has no line in the import table", name, folder)
			continue
		}
		tree, err := parser.ParseFile(token.NewFileSet(), filepath.Join(root, name), nil, parser.ImportsOnly)
		if err != nil {
			t.Error(err)
			continue
		}
		for _, spec := range tree.Imports {
			imported, err := strconv.Unquote(spec.Path.Value)
			if err != nil {
				t.Fatal(err)
			}
			first, rest, _ := strings.Cut(imported, "/")
			switch {
			case first == module:
				if !mine[rest] && rest != folder && !(isTest && testMay(folder, rest)) {
					t.Errorf("%s imports %s: no such arrow in the import table", name, imported)
				}
			case imported == "C":
				t.Errorf("%s uses cgo: only the window's toolkit may", name)
			case strings.Contains(first, "."):
				if !outsideMay(folder, imported, isTest) {
					t.Errorf("%s imports %s: not allowed here", name, imported)
				}
			}
		}
	}
}

// spellOut turns the table into sets and checks its order.
func spellOut(t *testing.T) map[string]map[string]bool {
	t.Helper()
	allowed := map[string]map[string]bool{}
	for _, a := range arrows {
		if allowed[a.folder] != nil {
			t.Errorf("import table: %s stands twice", a.folder)
		}
		set := map[string]bool{}
		for _, m := range a.may {
			tree, whole := strings.CutSuffix(m, "...")
			if !whole {
				if allowed[m] == nil {
					t.Errorf("import table: %s may import %s, which does not stand above it", a.folder, m)
				}
				set[m] = true
				continue
			}
			for above := range allowed {
				if strings.HasPrefix(above, tree) {
					set[above] = true
				}
			}
		}
		allowed[a.folder] = set
	}
	return allowed
}

// testMay: tests build their subjects with whatever their own side of the
// repository offers, but a physics test draws nothing and a drawing test
// computes nothing.
func testMay(folder, imported string) bool {
	side, _, _ := strings.Cut(folder, "/")
	switch side {
	case "cmd":
		return folder != "cmd/dev"
	case "ui":
		return true
	}
	return imported == "assets" || strings.HasPrefix(imported, side+"/")
}

func outsideMay(folder, imported string, isTest bool) bool {
	var may []string
	longest := -1
	for _, o := range outside {
		if (imported == o.prefix || strings.HasPrefix(imported, o.prefix+"/")) && len(o.prefix) > longest {
			longest, may = len(o.prefix), o.may
		}
	}
	return slices.ContainsFunc(may, func(m string) bool {
		if m == "tests" {
			return isTest && folder != "cmd/dev"
		}
		tree, whole := strings.CutSuffix(m, "...")
		return m == folder || whole && strings.HasPrefix(folder, tree)
	})
}

// The rules that the table must contain whatever else changes in it.
func TestImportTableKeepsTheSides(t *testing.T) {
	allowed := spellOut(t)
	for folder, may := range allowed {
		for imported := range may {
			if strings.HasPrefix(folder, "physics/") && !strings.HasPrefix(imported, "physics/") && imported != "assets" ||
				strings.HasPrefix(folder, "render/") && !strings.HasPrefix(imported, "render/") && imported != "assets" ||
				strings.HasPrefix(folder, "ui/") && strings.HasPrefix(imported, "cmd/") {
				t.Errorf("import table lets %s import %s", folder, imported)
			}
		}
	}
	for _, c := range []struct {
		folder, imported string
		isTest, want     bool
	}{
		{"ui/view", "fyne.io/fyne/v2/widget", false, true},
		{"ui/window", "fyne.io/fyne/v2/app", false, false},
		{"cmd/bandwright", "fyne.io/fyne/v2/app", false, true},
		{"ui/session", "fyne.io/fyne/v2", false, false},
		{"physics/bands", "fyne.io/fyne/v2", true, false},
		{"cmd/dev", "github.com/google/go-cmp/cmp", true, false},
		{"physics/bands", "github.com/google/go-cmp/cmp", true, true},
		{"physics/bands", "github.com/google/go-cmp/cmp", false, false},
		{"physics/bands", "example.org/anything", true, false},
	} {
		if got := outsideMay(c.folder, c.imported, c.isTest); got != c.want {
			t.Errorf("outsideMay(%s, %s, test %t) = %t", c.folder, c.imported, c.isTest, got)
		}
	}
}
