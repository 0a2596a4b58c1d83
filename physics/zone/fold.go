package zone

import (
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
)

// foldMargin is how far, in units of the squared length of the lattice vector,
// a point may lie beyond a bisector plane and still be left where it is.
const foldMargin = 1e-9

// Fold returns the point of the closed zone that equals k modulo a reciprocal
// lattice vector: k less its nearest reciprocal lattice point. A point of the
// closed zone, surface included, comes back unchanged. Fractions that are not
// finite come back as NaN.
//
// Steps along the vectors that bound the zone end at the nearest lattice point,
// as each shortens k and only points of the zone allow no step; rounding the
// fractions alone would miss it in oblique cells.
func (z *Zone) Fold(k lattice.FracK) lattice.FracK {
	if sum := k[0] + k[1] + k[2]; math.IsNaN(sum - sum) { // NaN or infinity among them
		return lattice.FracK{math.NaN(), math.NaN(), math.NaN()}
	}
	c := z.Lattice.Cart(k).Vec()
	if z.worstStep(c) < 0 {
		return k
	}
	// The lattice vector to subtract, in whole numbers, so that rounding enters
	// only once: at the end.
	var shift [3]float64
	for i, x := range k {
		if math.Abs(x) > 2 {
			shift[i] = math.Round(x)
		}
	}
	c = z.Lattice.Cart(lattice.FracK{k[0] - shift[0], k[1] - shift[1], k[2] - shift[2]}).Vec()
	for range 1000 {
		i := z.worstStep(c)
		if i < 0 {
			break
		}
		b := &z.relevant[i]
		x := b.v.Dot(c) / b.q
		n := math.Round(x)
		if n == 0 { // beyond the plane by less than rounds to a whole step
			n = math.Copysign(1, x)
		}
		c = c.Sub(b.v.Mul(n))
		for m := range shift {
			shift[m] += n * float64(b.g[m])
		}
	}
	for i := range k {
		k[i] -= shift[i]
	}
	return k
}

// worstStep returns which bounding vector c, Å⁻¹, exceeds most, or -1 if c is in
// the closed zone or not a number.
func (z *Zone) worstStep(c mgl64.Vec3) int {
	worst, at := 0.5+foldMargin, -1
	for i := range z.relevant {
		b := &z.relevant[i]
		if x := math.Abs(b.v.Dot(c)) / b.q; x > worst {
			worst, at = x, i
		}
	}
	return at
}

// Place says where a point lies with respect to the zone.
type Place uint8

// The places of a point.
const (
	Outside Place = iota
	Inside
	OnFace
	OnEdge
	AtVertex
)

// String returns the place in words.
func (p Place) String() string {
	switch p {
	case Outside:
		return "outside"
	case Inside:
		return "inside"
	case OnFace:
		return "on a face"
	case OnEdge:
		return "on an edge"
	case AtVertex:
		return "at a vertex"
	}
	return "nowhere"
}

// Place says where k lies, within Tolerance of the shortest reciprocal lattice
// vector. A point that is not finite is outside.
func (z *Zone) Place(k lattice.FracK) Place {
	c := z.Lattice.Cart(k).Vec()
	tol := Tolerance * z.scale
	onFace := false
	for i := range z.body.Faces {
		f := &z.body.Faces[i]
		d := f.Normal.Dot(c) - f.Offset
		if !(d <= tol) {
			return Outside
		}
		if d >= -tol {
			onFace = true
		}
	}
	if !onFace {
		return Inside
	}
	// A point may be near a vertex along two faces that meet there at a blunt
	// angle, so distances decide, not the number of faces.
	for _, v := range z.Vertices {
		if c.Sub(v.Vec()).Len() <= 2*tol {
			return AtVertex
		}
	}
	for _, e := range z.Edges {
		if segmentDistance(c, z.Vertices[e[0]].Vec(), z.Vertices[e[1]].Vec()) <= 2*tol {
			return OnEdge
		}
	}
	return OnFace
}

func segmentDistance(p, a, b mgl64.Vec3) float64 {
	d := b.Sub(a)
	t := p.Sub(a).Dot(d) / d.Dot(d)
	t = math.Max(0, math.Min(1, t))
	return p.Sub(a.Add(d.Mul(t))).Len()
}
