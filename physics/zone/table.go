package zone

import (
	"fmt"
	"math"
	"strings"
	"sync"

	"github.com/BurntSushi/toml"
	"github.com/go-gl/mathgl/mgl64"

	"bandwright/assets"
	"bandwright/physics/lattice"
)

// Table holds the special points and the standard path of one Bravais lattice,
// or of one case of its metric.
type Table struct {
	Name      string // "cF", "oF-2"
	Bravais   string // "cF", "oF"
	Condition string // in words, for which cell parameters the table holds
	Points    []TablePoint
	Path      [][]string // unbroken runs of typographic labels

	vectors    [3][3]expression
	parameters []parameter
}

// TablePoint is a special point of a Table.
type TablePoint struct {
	Label string // typographic
	At    string // where it lies: "centre", "face", "edge", "vertex", "outside"
	HalfG bool   // an edge or vertex point that is half a reciprocal lattice vector too
	k     [3]expression
}

type parameter struct {
	name  string
	value expression
}

// Cell holds the lengths, Å, and angles, radians, of a conventional cell.
type Cell struct{ A, B, C, Alpha, Beta, Gamma float64 }

// Evaluate returns the primitive vectors (Å, Cartesian, in the orientation of
// the table) and the special points of a cell, in the order of t.Points. It
// does not check that the cell meets the condition, but that all is finite.
func (t *Table) Evaluate(cell Cell) (vectors [3]mgl64.Vec3, points []lattice.FracK, err error) {
	v := map[string]float64{"a": cell.A, "b": cell.B, "c": cell.C, "alpha": cell.Alpha, "beta": cell.Beta, "gamma": cell.Gamma}
	for i, x := range [...]float64{cell.A, cell.B, cell.C, cell.Alpha, cell.Beta, cell.Gamma} {
		if !(x >= 0) || math.IsInf(x, 0) {
			return vectors, nil, fmt.Errorf("cell parameter %s is %v: give lengths in Å and angles in radians", [...]string{"a", "b", "c", "alpha", "beta", "gamma"}[i], x)
		}
	}
	for _, p := range t.parameters {
		v[p.name] = p.value(v)
	}
	finite := true
	evaluate := func(e [3]expression) (out [3]float64) {
		for i := range e {
			out[i] = e[i](v)
			finite = finite && !math.IsNaN(out[i]) && !math.IsInf(out[i], 0)
		}
		return out
	}
	for i := range vectors {
		vectors[i] = evaluate(t.vectors[i])
	}
	points = make([]lattice.FracK, len(t.Points))
	for i := range points {
		points[i] = evaluate(t.Points[i].k)
	}
	if !finite {
		return vectors, nil, fmt.Errorf("table %s of special points gives no finite values for the cell %+v: it holds for %s", t.Name, cell, t.Condition)
	}
	return vectors, points, nil
}

// tables are read once, when first asked for.
var tables = sync.OnceValues(func() ([]*Table, error) {
	const name = "zones/special_points.toml"
	data, err := assets.Zones.ReadFile(name)
	if err != nil {
		return nil, err
	}
	t, err := parseTables(string(data))
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return t, nil
})

// Tables returns the tables of all Bravais lattices, in the order of their file.
func Tables() ([]*Table, error) { return tables() }

// Lookup returns the table of the given name.
func Lookup(name string) (*Table, error) {
	all, err := tables()
	if err != nil {
		return nil, err
	}
	for _, t := range all {
		if t.Name == name {
			return t, nil
		}
	}
	return nil, fmt.Errorf("no table of special points named %q", name)
}

type rawTable struct {
	Condition  string
	Vectors    [][]string
	Parameters [][]string
	Path       [][]string
	Points     map[string]struct {
		K     []string
		At    string
		HalfG bool `toml:"half_g"`
	}
}

func parseTables(text string) ([]*Table, error) {
	raw := map[string]rawTable{}
	meta, err := toml.Decode(text, &raw)
	if err != nil {
		return nil, err
	}
	if extra := meta.Undecoded(); len(extra) > 0 {
		return nil, fmt.Errorf("unknown key %s", extra[0])
	}
	var out []*Table
	place := map[string]*Table{}
	points := map[string][]string{} // in the order of the file
	for _, key := range meta.Keys() {
		switch {
		case len(key) == 1:
			t := &Table{Name: key[0]}
			t.Bravais, _, _ = strings.Cut(key[0], "-")
			place[key[0]] = t
			out = append(out, t)
		case len(key) == 3 && key[1] == "points":
			points[key[0]] = append(points[key[0]], key[2])
		}
	}
	for _, t := range out {
		if err := t.fill(raw[t.Name], points[t.Name]); err != nil {
			return nil, fmt.Errorf("table %s: %w", t.Name, err)
		}
	}
	return out, nil
}

func (t *Table) fill(raw rawTable, order []string) error {
	t.Condition = raw.Condition
	known := map[string]bool{"a": true, "b": true, "c": true, "alpha": true, "beta": true, "gamma": true}
	three := func(what string, text []string) (e [3]expression, err error) {
		if len(text) != 3 {
			return e, fmt.Errorf("%s has %d components, not 3", what, len(text))
		}
		for i := range e {
			if e[i], err = parseExpression(text[i], known); err != nil {
				return e, fmt.Errorf("%s: %w", what, err)
			}
		}
		return e, nil
	}
	var err error
	if len(raw.Vectors) != 3 {
		return fmt.Errorf("%d vectors, not 3", len(raw.Vectors))
	}
	for i, v := range raw.Vectors {
		if t.vectors[i], err = three(fmt.Sprintf("vector a%d", i+1), v); err != nil {
			return err
		}
	}
	for _, p := range raw.Parameters {
		if len(p) != 2 {
			return fmt.Errorf("parameter %v is not a name and an expression", p)
		}
		value, err := parseExpression(p[1], known)
		if err != nil {
			return fmt.Errorf("parameter %s: %w", p[0], err)
		}
		t.parameters = append(t.parameters, parameter{p[0], value})
		known[p[0]] = true
	}
	labels := map[string]bool{}
	for _, name := range order {
		p := raw.Points[name]
		k, err := three("point "+name, p.K)
		if err != nil {
			return err
		}
		t.Points = append(t.Points, TablePoint{Label: Typographic(name), At: p.At, HalfG: p.HalfG, k: k})
		labels[Typographic(name)] = true
	}
	for _, run := range raw.Path {
		var labelled []string
		for _, name := range run {
			l := Typographic(name)
			if !labels[l] {
				return fmt.Errorf("the path names %s, which is not among the points", name)
			}
			labelled = append(labelled, l)
		}
		t.Path = append(t.Path, labelled)
	}
	return nil
}

var greek = strings.NewReplacer("Gamma", "Γ", "Sigma", "Σ", "Delta", "Δ", "Lambda", "Λ",
	"0", "₀", "1", "₁", "2", "₂", "3", "₃", "4", "₄", "5", "₅", "6", "₆", "7", "₇", "8", "₈", "9", "₉")

// Typographic returns the label of a special point as it is printed: "Γ" for
// "Gamma", "Z₁" for "Z1".
func Typographic(label string) string { return greek.Replace(label) }
