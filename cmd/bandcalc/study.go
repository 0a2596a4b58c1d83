package main

import (
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/ui/doc"
)

// study is the one argument, built.
type study struct {
	doc doc.Document
	*doc.Built
}

// maxInput bounds what is read from standard input, bytes.
const maxInput = 8<<20 + 1

// input reads the file that is named, or standard input for "-".
func (c *call) input() (name, dir string, data []byte, err error) {
	if len(c.args) != 1 {
		return "", "", nil, &usageError{fmt.Sprintf("give one file, or - for standard input; there are %d arguments", len(c.args))}
	}
	if c.args[0] == "-" {
		data, err = io.ReadAll(io.LimitReader(c.in, maxInput))
		return "standard input", ".", data, err
	}
	name = c.args[0]
	f, err := os.Open(name)
	if err != nil {
		return "", "", nil, fmt.Errorf("%w; check the name of the file", err)
	}
	defer f.Close()
	if info, err := f.Stat(); err == nil && info.IsDir() {
		return "", "", nil, fmt.Errorf("%s is a folder; give a file", name)
	}
	data, err = io.ReadAll(io.LimitReader(f, maxInput))
	return name, filepath.Dir(name), data, err
}

// study reads and builds the study.
func (c *call) study() (*study, error) {
	name, dir, data, err := c.input()
	if err != nil {
		return nil, err
	}
	d, err := doc.Decode(name, data)
	if err != nil {
		return nil, err
	}
	b, err := d.Build(dir)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return &study{d, b}, nil
}

// points reads k points separated by semicolons: three numbers each, or a
// label.
func (s *study) points(text, frame string) ([]lattice.FracK, error) {
	f, err := lattice.ParseFrame(frame)
	if err != nil {
		return nil, &usageError{fmt.Sprintf("--frame %s: give primitive, conventional, 2pi/a or 1/Å", frame)}
	}
	var list []lattice.FracK
	for i, one := range strings.Split(text, ";") {
		one = strings.TrimSpace(one)
		if one == "" {
			continue
		}
		p, err := path.ParsePoint(one, f, s.Crystal.Setting)
		if err != nil {
			return nil, fmt.Errorf("--at, point %d (%s): %w", i+1, one, err)
		}
		list = append(list, p.K)
	}
	if len(list) == 0 {
		return nil, &usageError{"--at names no k point: give --at \"0.5 0.5 0.5; 0 0 0\""}
	}
	return list, nil
}

// figure writes a number with 12 significant digits; "" stands for one that
// does not exist.
func figure(v float64) string {
	if math.IsNaN(v) {
		return ""
	}
	if v == 0 {
		v = 0 // no −0
	}
	return strconv.FormatFloat(v, 'g', 12, 64)
}
