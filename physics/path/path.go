package path

import (
	"math"
	"strconv"
	"strings"

	"bandwright/physics/lattice"
	"bandwright/physics/zone"
)

// Point is a named point of a path. Points typed as numbers are labelled by
// those numbers.
type Point struct {
	Label string // typographic: "Γ", "X", "(0.5, 0.25, 0.1)"
	K     lattice.FracK
}

// Leg is a straight piece of a path.
type Leg struct{ From, To Point }

// Path is a list of runs. A run has at least two points and is unbroken; the
// path breaks between runs.
type Path struct {
	Runs [][]Point
}

// Standard returns the standard path of the lattice, with its breaks. It fails
// for lattices whose standard path is not known.
func Standard(s lattice.Setting) (Path, error) {
	runs, err := zone.StandardPath(s)
	if err != nil {
		return Path{}, err
	}
	legs := make([]string, len(runs))
	for i, labels := range runs {
		legs[i] = strings.Join(labels, " ")
	}
	return Parse(legs, lattice.Primitive, s)
}

// Legs returns the straight pieces of the path in order.
func (p Path) Legs() []Leg {
	var legs []Leg
	for _, run := range p.Runs {
		for i := 1; i < len(run); i++ {
			legs = append(legs, Leg{From: run[i-1], To: run[i]})
		}
	}
	return legs
}

// String writes the path as the trade does: "Γ–X–W | U–X".
func (p Path) String() string {
	var b strings.Builder
	for i, run := range p.Runs {
		if i > 0 {
			b.WriteString(" | ")
		}
		for j, point := range run {
			if j > 0 {
				b.WriteString("–")
			}
			b.WriteString(point.Label)
		}
	}
	return b.String()
}

// Text writes the path as legs that Parse reads back in the same frame: named
// points by name, the others as three numbers. Points typed as numbers that
// happen to be a special point are written by its name.
func (p Path) Text(f lattice.Frame, s lattice.Setting) []string {
	names := newNames(s)
	legs := make([]string, len(p.Runs))
	for i, run := range p.Runs {
		items := make([]string, len(run))
		for j, point := range run {
			if k, ok := names.find(point.Label); ok && k == point.K {
				items[j] = point.Label
				continue
			}
			items[j] = triple(s.FromFrac(f, point.K), " ")
		}
		legs[i] = strings.Join(items, " ")
	}
	return legs
}

// triple writes three coordinates so that they are read back exactly.
func triple(k [3]float64, separator string) string {
	var parts [3]string
	for i, x := range k {
		if x == 0 {
			x = 0 // no minus sign before zero
		}
		parts[i] = strconv.FormatFloat(x, 'g', -1, 64)
	}
	return strings.Join(parts[:], separator)
}

// label names a point given by numbers: by the special point that it is, else
// by the numbers as they were typed.
func (n names) label(k lattice.FracK, typed [3]float64) string {
	for _, p := range n.points {
		if distance(p.K, k) < sameK {
			return p.Label
		}
	}
	return "(" + strings.ReplaceAll(triple(typed, ", "), "-", "−") + ")"
}

// sameK is the largest difference of fractions at which two points are one.
const sameK = 1e-9

func distance(a, b lattice.FracK) float64 {
	d := 0.0
	for i := range a {
		d = max(d, math.Abs(a[i]-b[i]))
	}
	return d
}

// names are the special points that a path may name.
type names struct {
	points []zone.SpecialPoint
	err    error // why there are none
}

func newNames(s lattice.Setting) names {
	points, err := zone.SpecialPoints(s)
	return names{points: points, err: err}
}

// find looks a name up in any of its spellings.
func (n names) find(name string) (lattice.FracK, bool) {
	key := spelling(name)
	for _, p := range n.points {
		if spelling(p.Label) == key {
			return p.K, true
		}
	}
	return lattice.FracK{}, false
}

// typographic returns the label as the lattice's table spells it.
func (n names) typographic(name string) string {
	key := spelling(name)
	for _, p := range n.points {
		if spelling(p.Label) == key {
			return p.Label
		}
	}
	return name
}

func (n names) list() string {
	labels := make([]string, len(n.points))
	for i, p := range n.points {
		labels[i] = p.Label
	}
	return strings.Join(labels, ", ")
}

var greek = strings.NewReplacer(
	"Gamma", "Γ", "GAMMA", "Γ", "gamma", "Γ", "Delta", "Δ", "Lambda", "Λ", "Sigma", "Σ",
	`\`, "", "_", "", "{", "", "}", "",
	"₀", "0", "₁", "1", "₂", "2", "₃", "3", "₄", "4", "₅", "5", "₆", "6", "₇", "7", "₈", "8", "₉", "9",
	"'", "′", "’", "′", "`", "′",
)

// spelling maps every way to type a label to one key: Gamma, G and Γ are the
// same, and so are X1, X_1 and X₁, X' and X′.
func spelling(label string) string {
	key := greek.Replace(label)
	if key == "G" {
		return "Γ"
	}
	return key
}
