package zone

import (
	"fmt"

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
// so; the tables of cP, cF and cI are matched so far.
func SpecialPoints(s lattice.Setting) ([]SpecialPoint, error) {
	points, err := tabledPoints(s)
	if err != nil {
		return nil, err
	}
	z, err := First(s.Lattice)
	if err != nil {
		return nil, err
	}
	for i := range points {
		points[i].Place = z.Place(points[i].K)
	}
	return points, nil
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

var notes = map[string]string{
	"centre": "centre of the zone", "face": "centre of a face", "edge": "on an edge", "vertex": "vertex", "outside": "outside the first zone",
}

// tabledPoints returns the special points without their places.
func tabledPoints(s lattice.Setting) ([]SpecialPoint, error) {
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
	// The table has the cubic axes along x, y, z; turn them to those of s.
	var turn [3]mgl64.Vec3
	for i, v := range s.Conventional {
		if !(v.Len() > 0) {
			return nil, fmt.Errorf("conventional vector %d has no length: the setting of the lattice is incomplete", i+1)
		}
		turn[i] = v.Normalize()
	}
	out := make([]SpecialPoint, len(points))
	for i, p := range t.Points {
		k := points[i]
		if vectors != s.Lattice.Vectors() {
			c := table.Cart(k)
			k = s.Lattice.Frac(lattice.CartK(turn[0].Mul(c[0]).Add(turn[1].Mul(c[1])).Add(turn[2].Mul(c[2]))))
		}
		out[i] = SpecialPoint{Label: p.Label, K: k, Note: notes[p.At]}
	}
	return out, nil
}
