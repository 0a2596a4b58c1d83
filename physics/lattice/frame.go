package lattice

import (
	"fmt"
	"math"

	"github.com/go-gl/mathgl/mgl64"
)

// Frame says in which coordinates a k point is written.
type Frame uint8

// The frames in which users and papers write k points.
const (
	Primitive       Frame = iota // fractions of the primitive reciprocal vectors
	Conventional                 // fractions of the reciprocal vectors of the conventional cell
	TwoPiOverA                   // Cartesian, units of 2π/a
	InverseAngstrom              // Cartesian, Å⁻¹ with the 2π inside
)

var frameNames = [...]string{"primitive", "conventional", "2pi/a", "1/Å"}

// String returns the name of the frame as written in a study file.
func (f Frame) String() string {
	if int(f) < len(frameNames) {
		return frameNames[f]
	}
	return fmt.Sprintf("Frame(%d)", uint8(f))
}

// ParseFrame reads the name of a frame. "1/A" stands for "1/Å" where the
// keyboard has no Å, "2π/a" for "2pi/a"; the empty text means Primitive.
func ParseFrame(s string) (Frame, error) {
	switch s {
	case "", "primitive":
		return Primitive, nil
	case "conventional":
		return Conventional, nil
	case "2pi/a", "2π/a":
		return TwoPiOverA, nil
	case "1/Å", "1/A", "1/\u212b":
		return InverseAngstrom, nil
	}
	return 0, fmt.Errorf("unknown frame %q: use primitive, conventional, 2pi/a or 1/Å", s)
}

// Setting is a lattice together with its conventional cell, so that k points
// can be read and written in every frame.
type Setting struct {
	Lattice      Lattice
	Conventional [3]mgl64.Vec3 // conventional cell vectors, Å
	A            float64       // the lattice constant a, Å, of the frame 2π/a
	Bravais      string        // IUCr symbol of the Bravais lattice: cP, cF, cI, …; "" when unknown
}

// ToFrac reads k, written in frame f, as fractions of the primitive
// reciprocal vectors.
func (s Setting) ToFrac(f Frame, k [3]float64) FracK {
	switch f {
	case Conventional:
		// k·A_i = 2π k_i fixes k; the primitive fraction is k·a_j/2π, and a_j
		// is a sum of conventional vectors.
		conventional, err := New(s.Conventional[0], s.Conventional[1], s.Conventional[2])
		if err != nil {
			return FracK{math.NaN(), math.NaN(), math.NaN()}
		}
		return s.Lattice.Frac(conventional.Cart(FracK(k)))
	case TwoPiOverA:
		u := 2 * math.Pi / s.A
		return s.Lattice.Frac(CartK{k[0] * u, k[1] * u, k[2] * u})
	case InverseAngstrom:
		return s.Lattice.Frac(CartK(k))
	default:
		return FracK(k)
	}
}

// FromFrac writes k in frame f.
func (s Setting) FromFrac(f Frame, k FracK) [3]float64 {
	switch f {
	case Conventional:
		c := s.Lattice.Cart(k).Vec()
		var out [3]float64
		for i, v := range s.Conventional {
			out[i] = c.Dot(v) / (2 * math.Pi)
		}
		return out
	case TwoPiOverA:
		c := s.Lattice.Cart(k)
		u := s.A / (2 * math.Pi)
		return [3]float64{c[0] * u, c[1] * u, c[2] * u}
	case InverseAngstrom:
		return s.Lattice.Cart(k)
	default:
		return k
	}
}
