package lattice

import (
	"fmt"
	"math"

	"github.com/go-gl/mathgl/mgl64"
)

// FracK is a k point in fractions of the primitive reciprocal vectors b1, b2, b3.
type FracK [3]float64

// CartK is a k point in Cartesian coordinates, Å⁻¹ with the 2π inside.
type CartK [3]float64

// Vec returns k as a Cartesian vector, Å⁻¹.
func (k CartK) Vec() mgl64.Vec3 { return mgl64.Vec3(k) }

// Add returns the sum k + g of two k points in the same fractions.
func (k FracK) Add(g FracK) FracK { return FracK{k[0] + g[0], k[1] + g[1], k[2] + g[2]} }

// Lattice is a three-dimensional Bravais lattice with its reciprocal lattice.
// The zero value is not a lattice; use New.
type Lattice struct {
	a, b   [3]mgl64.Vec3
	volume float64
}

// flatness is the smallest |a1·(a2×a3)| / (|a1||a2||a3|) that still counts as
// a cell with volume; below it the vectors lie in one plane within rounding.
const flatness = 1e-9

// New returns the lattice spanned by a1, a2, a3 (Å). It refuses vectors that
// are not finite or zero, and those that lie in one plane.
func New(a1, a2, a3 mgl64.Vec3) (Lattice, error) {
	a := [3]mgl64.Vec3{a1, a2, a3}
	product := 1.0
	for i, v := range a {
		for _, x := range v {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return Lattice{}, fmt.Errorf("lattice vector a%d = %v is not finite: give three numbers in Å", i+1, v)
			}
		}
		length := v.Len()
		if length == 0 || math.IsInf(length, 0) {
			return Lattice{}, fmt.Errorf("lattice vector a%d has length %g Å: give a vector of finite, non-zero length", i+1, length)
		}
		product *= length
	}
	det := a1.Dot(a2.Cross(a3))
	if !(math.Abs(det) > flatness*product) {
		return Lattice{}, fmt.Errorf("lattice vectors %v, %v, %v lie in one plane: the cell has no volume; give three independent vectors", a1, a2, a3)
	}
	l := Lattice{a: a, volume: math.Abs(det)}
	for i := range l.b {
		l.b[i] = a[(i+1)%3].Cross(a[(i+2)%3]).Mul(2 * math.Pi / det)
	}
	return l, nil
}

// A returns the primitive vector a_(i+1), Å.
func (l Lattice) A(i int) mgl64.Vec3 { return l.a[i] }

// B returns the reciprocal vector b_(i+1), Å⁻¹.
func (l Lattice) B(i int) mgl64.Vec3 { return l.b[i] }

// Volume returns the volume of the primitive cell, Å³.
func (l Lattice) Volume() float64 { return l.volume }

// ZoneVolume returns the volume of the first zone, (2π)³/V, Å⁻³.
func (l Lattice) ZoneVolume() float64 { return 8 * math.Pi * math.Pi * math.Pi / l.volume }

// Cart converts fractions of the reciprocal vectors to Å⁻¹.
func (l Lattice) Cart(k FracK) CartK {
	return CartK(l.b[0].Mul(k[0]).Add(l.b[1].Mul(k[1])).Add(l.b[2].Mul(k[2])))
}

// Frac converts Å⁻¹ to fractions of the reciprocal vectors: f_i = k·a_i/2π.
func (l Lattice) Frac(k CartK) FracK {
	var f FracK
	for i := range f {
		f[i] = l.a[i].Dot(mgl64.Vec3(k)) / (2 * math.Pi)
	}
	return f
}

// Position converts fractions of the primitive vectors to Å.
func (l Lattice) Position(f [3]float64) mgl64.Vec3 {
	return l.a[0].Mul(f[0]).Add(l.a[1].Mul(f[1])).Add(l.a[2].Mul(f[2]))
}

// Fraction converts Å to fractions of the primitive vectors: f_i = r·b_i/2π.
func (l Lattice) Fraction(r mgl64.Vec3) [3]float64 {
	var f [3]float64
	for i := range f {
		f[i] = l.b[i].Dot(r) / (2 * math.Pi)
	}
	return f
}
