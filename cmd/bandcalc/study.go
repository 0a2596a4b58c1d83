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

// study reads and builds the study. Without a mesh it has one point, as the
// finest take long to reduce.
func (c *call) study(mesh bool) (*study, error) {
	name, dir, data, err := c.input()
	if err != nil {
		return nil, err
	}
	d, err := doc.Decode(name, data)
	if err != nil {
		return nil, err
	}
	if !mesh {
		d.Mesh = [3]int{1, 1, 1}
	}
	b, err := d.Build(dir)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	if problem, remedy := b.Stretch(); problem != "" {
		fmt.Fprintf(c.err, "bandcalc: note: %s: %s; %s\n", name, problem, remedy)
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
		if far(p.K) {
			return nil, fmt.Errorf("--at, point %d (%s): so far out rounding hides the phases; give an equivalent point near the first zone", i+1, one)
		}
		list = append(list, p.K)
	}
	if len(list) == 0 {
		return nil, &usageError{"--at names no k point: give --at \"0.5 0.5 0.5; 0 0 0\""}
	}
	return list, nil
}

// farthest bounds the fractions of k points: beyond, the phase 2πk·n has fewer
// than ten decimals left, and energies could be wrong by 10⁻⁹ eV or more.
const farthest = 1e6

func far(k lattice.FracK) bool {
	return math.Abs(k[0]) > farthest || math.Abs(k[1]) > farthest || math.Abs(k[2]) > farthest
}

// faintest is below the rounding of everything that is printed: energies of
// some eV, weights, and k points near the zone. Smaller numbers are zeros.
const faintest = 1e-14

// figure writes a number with 12 significant digits; "" stands for one that
// does not exist.
func figure(v float64) string {
	if math.IsNaN(v) {
		return ""
	}
	if math.Abs(v) < faintest {
		v = 0
	}
	return strconv.FormatFloat(v, 'g', 12, 64)
}
