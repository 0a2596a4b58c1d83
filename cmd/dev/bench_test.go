package main

import (
	"slices"
	"strings"
	"testing"
)

func TestReadBenchmarks(t *testing.T) {
	rows := readBenchmarks("physics/linalg", `goos: linux
pkg: bandwright/physics/linalg
BenchmarkVectors/n=8-2         	  650000	      1820 ns/op	       0 B/op	       0 allocs/op
BenchmarkDrag-preview-2        	     100	  12100000 ns/op	        14.5 p99-ms	     512 B/op	       3 allocs/op
BenchmarkBroken
PASS
ok  	bandwright/physics/linalg	2.2s
`)
	if len(rows) != 2 {
		t.Fatalf("%d rows: %v", len(rows), rows)
	}
	if rows[0].name != "Vectors/n=8" || rows[1].name != "Drag-preview" {
		t.Errorf("names %q, %q", rows[0].name, rows[1].name)
	}
	var out strings.Builder
	printBenchmarks(&out, rows)
	for _, want := range []string{"1.82 µs", "12.1 ms", "14.5 p99-ms", "physics/linalg"} {
		if !strings.Contains(out.String(), want) {
			t.Errorf("the table lacks %q:\n%s", want, out.String())
		}
	}
}

func TestFoldersOf(t *testing.T) {
	all := []testFunc{{"physics/dos", "TestPeerDOS"}, {"render/raster", "TestPeerX"}, {"physics/dos", "TestPeerTwo"}, {"physics/bands", "TestPeerBands"}}
	for _, c := range []struct {
		only string
		want []string
	}{
		{"", []string{"physics/bands", "physics/dos", "render/raster"}},
		{"./physics/dos/", []string{"physics/dos"}},
		{"render,physics/bands", []string{"physics/bands", "render/raster"}},
		{"physics/do", nil},
	} {
		if got := foldersOf(all, c.only); !slices.Equal(got, c.want) {
			t.Errorf("only %q: %v, want %v", c.only, got, c.want)
		}
	}
}
