package zone

import (
	"fmt"
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
)

// SpecialPoint is a point of high symmetry with its usual name.
type SpecialPoint struct {
	Label string // typographic: "Γ", "X"
	K     lattice.FracK
	Place Place
	Note  string // where it lies, in words: "centre of a face"
}

// SpecialPoints returns the special points of the lattice, in its own fractions,
// in the order of the table. Lattices without a table give an error that says
// so; the tables of cP, cF and cI are matched so far. Place is that in the ideal
// lattice, even if the vectors miss it by rounding.
func SpecialPoints(s lattice.Setting) ([]SpecialPoint, error) {
	t, err := tableOf(s)
	if err != nil {
		return nil, err
	}
	vectors, points, err := t.Evaluate(Cell{A: s.A, B: s.A, C: s.A})
	if err != nil {
		return nil, err
	}
	table, err := lattice.New(vectors[0], vectors[1], vectors[2])
	if err != nil {
		return nil, err
	}
	toPrimitive := cubicAxes(s).Inv()
	if toPrimitive == (mgl64.Mat3{}) {
		return nil, fmt.Errorf("the conventional vectors %v do not span a cell of the lattice", s.Conventional)
	}
	out := make([]SpecialPoint, len(points))
	for i, p := range t.Points {
		k := points[i]
		if vectors != s.Lattice.Vectors() {
			// The table has the cubic axes along x, y, z: k in units of 2π/a.
			u := table.Cart(k).Vec().Mul(s.A / (2 * math.Pi))
			k = lattice.FracK(toPrimitive.Mul3x1(u))
		}
		at := places[p.At]
		out[i] = SpecialPoint{Label: p.Label, K: k, Place: at.place, Note: at.note}
	}
	return out, nil
}

// cubicAxes returns the matrix that turns fractions of the primitive reciprocal
// vectors into those of the conventional cell: its rows are the conventional
// vectors in primitive ones, whole numbers, so that it is exact even where the
// vectors are cubic within rounding only.
func cubicAxes(s lattice.Setting) mgl64.Mat3 {
	var m mgl64.Mat3
	for i, v := range s.Conventional {
		for j, x := range s.Lattice.Fraction(v) {
			m.Set(i, j, math.Round(x))
		}
	}
	return m
}

// places says where the points of a table lie.
var places = map[string]struct {
	place Place
	note  string
}{
	"centre": {Inside, "centre of the zone"}, "face": {OnFace, "centre of a face"}, "edge": {OnEdge, "on an edge"},
	"vertex": {AtVertex, "vertex"}, "outside": {Outside, "outside the first zone"},
}

// StandardPath returns the standard path through the zone as unbroken runs of
// labels of SpecialPoints (W. Setyawan, S. Curtarolo 2010).
func StandardPath(s lattice.Setting) ([][]string, error) {
	t, err := tableOf(s)
	if err != nil {
		return nil, err
	}
	out := make([][]string, len(t.Path))
	for i := range out {
		out[i] = append([]string(nil), t.Path[i]...)
	}
	return out, nil
}

func tableOf(s lattice.Setting) (*Table, error) {
	switch s.Bravais {
	case "cP", "cF", "cI":
		return Lookup(s.Bravais)
	case "":
		return nil, fmt.Errorf("special points are not available: the lattice is not recognised as cubic, and only cP, cF and cI are matched; give k points as numbers")
	}
	return nil, fmt.Errorf("special points are not available for the Bravais lattice %s: only cP, cF and cI are matched; give k points as numbers", s.Bravais)
}
