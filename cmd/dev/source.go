package main

import (
	"bytes"
	"fmt"
	"go/ast"
	"go/format"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"
)

// codeFolders are the top-level folders that hold Go code.
var codeFolders = []string{"assets", "cmd", "physics", "render", "ui"}

// goFiles lists the Go files of the repository, slash-separated and relative
// to root, in order.
func goFiles(root string) ([]string, error) {
	var files []string
	for _, folder := range codeFolders {
		top := filepath.Join(root, folder)
		if _, err := os.Stat(top); os.IsNotExist(err) {
			continue
		}
		err := filepath.WalkDir(top, func(name string, d fs.DirEntry, err error) error {
			if err != nil {
				return err
			}
			if d.IsDir() && (d.Name() == "testdata" || strings.HasPrefix(d.Name(), ".")) {
				return fs.SkipDir
			}
			if !d.IsDir() && strings.HasSuffix(name, ".go") {
				rel, err := filepath.Rel(root, name)
				if err != nil {
					return err
				}
				files = append(files, filepath.ToSlash(rel))
			}
			return nil
		})
		if err != nil {
			return nil, err
		}
	}
	slices.Sort(files)
	return files, nil
}

// unformatted lists the files that gofmt would change.
func unformatted(root string, files []string) ([]string, error) {
	var list []string
	for _, name := range files {
		source, err := os.ReadFile(filepath.Join(root, name))
		if err != nil {
			return nil, err
		}
		good, err := format.Source(source)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
		if !bytes.Equal(source, good) {
			list = append(list, name)
		}
	}
	return list, nil
}

// testFunc is a test, benchmark or fuzz target and the folder of its package.
type testFunc struct{ folder, name string }

// testFuncs lists the functions of all _test.go files whose name starts with
// prefix and whose one parameter is *testing.kind, e.g. "Fuzz" and "F".
func testFuncs(root string, files []string, prefix, kind string) ([]testFunc, error) {
	var found []testFunc
	for _, name := range files {
		if !strings.HasSuffix(name, "_test.go") {
			continue
		}
		tree, err := parser.ParseFile(token.NewFileSet(), filepath.Join(root, name), nil, parser.SkipObjectResolution)
		if err != nil {
			return nil, err
		}
		for _, d := range tree.Decls {
			f, ok := d.(*ast.FuncDecl)
			if ok && f.Recv == nil && strings.HasPrefix(f.Name.Name, prefix) && takesTesting(f, kind) {
				found = append(found, testFunc{path.Dir(name), f.Name.Name})
			}
		}
	}
	return found, nil
}

func takesTesting(f *ast.FuncDecl, kind string) bool {
	if len(f.Type.Params.List) != 1 {
		return false
	}
	star, ok := f.Type.Params.List[0].Type.(*ast.StarExpr)
	if !ok {
		return false
	}
	sel, ok := star.X.(*ast.SelectorExpr)
	if !ok {
		return false
	}
	pkg, ok := sel.X.(*ast.Ident)
	return ok && pkg.Name == "testing" && sel.Sel.Name == kind
}

// packageFolders is the folders of files, each once, in order.
func packageFolders(files []string) []string {
	var folders []string
	for _, name := range files {
		folders = append(folders, path.Dir(name))
	}
	slices.Sort(folders)
	return slices.Compact(folders)
}
