package zone

import (
	"fmt"
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
	"bandwright/physics/symmetry"
)

// Wedge returns an irreducible wedge of the zone: a convex part whose images
// under the point group and time reversal fill the zone without overlap. The
// group must be that of a crystal on the same lattice.
//
// It is the part of the zone nearer to a point in general position than to all
// images of that point: the Dirichlet domain of the group. In cubic lattices
// the point is chosen so that the wedge holds the tabled special points.
func (z *Zone) Wedge(g *symmetry.Group) (*Polyhedron, error) {
	if g == nil || len(g.Ops) == 0 {
		return nil, fmt.Errorf("no symmetry operations given: find the group of the crystal first")
	}
	var rotations []mgl64.Mat3
	for i := range g.Ops {
		r := g.Rotation(i, z.Lattice)
		rotations = append(rotations, r)
		if !g.HasInversion() {
			rotations = append(rotations, r.Mul(-1))
		}
	}
	point, err := z.generalPoint(rotations)
	if err != nil {
		return nil, err
	}
	w := z.body
	for _, r := range rotations {
		// Nearer to the point than to its image: k·(image − point) ≤ 0.
		d := r.Mul3x1(point).Sub(point)
		if d.Len() < 1e-9*point.Len() {
			continue // the identity
		}
		if w = w.clip(d.Normalize(), 0, Tolerance*z.scale); w == nil {
			return nil, fmt.Errorf("the symmetry operations leave nothing of the zone: do they belong to this lattice?")
		}
	}
	share := z.Volume() / float64(len(rotations))
	if math.Abs(w.Volume()-share) > 1e-4*share {
		return nil, fmt.Errorf("the irreducible wedge has %.4g of its share of the zone: the lattice is too far from the symmetry of the group", w.Volume()/share)
	}
	if w == z.body {
		copied := *w
		w = &copied
	}
	return w, nil
}

// generalPoint returns a point that no rotation but the identity leaves in
// place, as far from its images as the choice allows.
func (z *Zone) generalPoint(rotations []mgl64.Mat3) (mgl64.Vec3, error) {
	var candidates []mgl64.Vec3
	if s, ok := lattice.CubicSetting(z.Lattice); ok {
		if points, err := SpecialPoints(s); err == nil {
			var sum mgl64.Vec3
			for _, p := range points {
				sum = sum.Add(z.Lattice.Cart(p.K).Vec())
			}
			candidates = append(candidates, sum)
		}
	}
	// Otherwise a spiral of directions over the sphere, turned off the axes.
	const n = 400
	for i := range n {
		h := 1 - (2*float64(i)+1)/n
		turn := 2.399963229728653*float64(i) + 0.3 // the golden angle
		s := math.Sqrt(1 - h*h)
		candidates = append(candidates, mgl64.Vec3{s * math.Cos(turn), s * math.Sin(turn), h}.Mul(z.scale))
	}
	best, at := 0.0, mgl64.Vec3{}
	for i, c := range candidates {
		nearest := math.Inf(1)
		identities := 0
		for _, r := range rotations {
			if isIdentity(r) {
				identities++
				continue
			}
			nearest = math.Min(nearest, r.Mul3x1(c).Sub(c).Len()/c.Len())
		}
		if identities != 1 {
			return mgl64.Vec3{}, fmt.Errorf("the symmetry operations hold the identity %d times: do they belong to this lattice?", identities)
		}
		if len(rotations) == 1 {
			return c, nil
		}
		// The first candidate of a cubic lattice wins unless it is special.
		if i == 0 && len(candidates) > n && nearest > 0.05 {
			return c, nil
		}
		if nearest > best {
			best, at = nearest, c
		}
	}
	if best < 1e-3 {
		return mgl64.Vec3{}, fmt.Errorf("no point of the zone is in general position under the symmetry operations given")
	}
	return at, nil
}

func isIdentity(r mgl64.Mat3) bool {
	d := r.Sub(mgl64.Ident3())
	for _, x := range d {
		if math.Abs(x) > 1e-6 {
			return false
		}
	}
	return true
}
