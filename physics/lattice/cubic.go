package lattice

import (
	"math"

	"github.com/go-gl/mathgl/mgl64"
)

// CubicTolerance is the relative deviation from a cubic metric, in lengths and
// in cosines, within which CubicSetting calls a lattice cubic.
const CubicTolerance = 1e-5

// CubicSetting recognises a cubic lattice however its vectors were chosen and
// turned: it returns the setting with the cubic axes as conventional vectors
// and the Bravais symbol cP, cI or cF. ok is false for any other lattice.
// Of the equivalent choices of axes it takes the one nearest to x, y, z.
func CubicSetting(l Lattice) (s Setting, ok bool) {
	r, _ := l.Reduced()
	// Conventional axes are sums of at most two of each reduced vector.
	var short []mgl64.Vec3
	limit := 2.6 * math.Cbrt(l.volume) * math.Cbrt(l.volume) // a² is at most (4V)^(2/3) = 2.52 V^(2/3)
	for i := -2; i <= 2; i++ {
		for j := -2; j <= 2; j++ {
			for k := -2; k <= 2; k++ {
				v := r[0].Mul(float64(i)).Add(r[1].Mul(float64(j))).Add(r[2].Mul(float64(k)))
				if q := v.LenSqr(); q > 0 && q < limit {
					short = append(short, v)
				}
			}
		}
	}
	best := math.Inf(-1)
	for i, x := range short {
		for j, y := range short {
			if i == j || !alike(x, y) {
				continue
			}
			for k, z := range short {
				if k == i || k == j || !alike(x, z) || !alike(y, z) {
					continue
				}
				det := x.Dot(y.Cross(z))
				if det <= 0 {
					continue
				}
				bravais := cubicCentring(l, x, y, z, det/l.volume)
				if bravais == "" {
					continue
				}
				a := math.Cbrt(det)
				// Diagonal elements say how near the axes are to x, y, z.
				near := (x[0] + y[1] + z[2]) / a
				if near > best+1e-9 {
					best = near
					s = Setting{Lattice: l, Conventional: [3]mgl64.Vec3{x, y, z}, A: a, Bravais: bravais}
				}
			}
		}
	}
	return s, s.Bravais != ""
}

// alike reports whether x and y are of equal length and at right angles.
func alike(x, y mgl64.Vec3) bool {
	q := x.LenSqr()
	return math.Abs(y.LenSqr()-q) <= 2*CubicTolerance*q && math.Abs(x.Dot(y)) <= CubicTolerance*q
}

// cubicCentring returns the Bravais symbol of l in the cubic cell x, y, z, which
// holds ratio lattice points, or "" when the points are not where they should be.
func cubicCentring(l Lattice, x, y, z mgl64.Vec3, ratio float64) string {
	n := math.Round(ratio)
	if math.Abs(ratio-n) > 10*CubicTolerance*n {
		return ""
	}
	switch n {
	case 1:
		return "cP"
	case 2:
		if l.holds(x.Add(y).Add(z).Mul(0.5)) {
			return "cI"
		}
	case 4:
		if l.holds(x.Add(y).Mul(0.5)) && l.holds(y.Add(z).Mul(0.5)) && l.holds(x.Add(z).Mul(0.5)) {
			return "cF"
		}
	}
	return ""
}

// holds reports whether v is a lattice vector, within the rounding of the
// integer combinations that made it.
func (l Lattice) holds(v mgl64.Vec3) bool {
	for _, f := range l.Fraction(v) {
		if math.Abs(f-math.Round(f)) > 1e-6 {
			return false
		}
	}
	return true
}
