package dos

import (
	"math"
	"math/rand/v2"
	"testing"
)

// splines returns the part of a tetrahedron below x and the density at x from
// divided differences: the density of a linear function over a simplex is the
// B-spline whose knots are its corner values (Curry, Schoenberg, J. Anal.
// Math. 17, 71 (1966)). Only for corners that differ.
func splines(e [4]float64, x float64) (n, g float64) {
	for i := range e {
		if e[i] >= x {
			continue
		}
		p := 1.0
		for j := range e {
			if j != i {
				p *= e[j] - e[i]
			}
		}
		n += math.Pow(x-e[i], 3) / p
		g += 3 * math.Pow(x-e[i], 2) / p
	}
	return n, g
}

func randomCorners(r *rand.Rand) [4]float64 {
	e, _ := sortCorners([4]float64{r.Float64(), r.Float64(), r.Float64(), r.Float64()})
	for i := 1; i < 4; i++ {
		e[i] = max(e[i], e[i-1]+0.02) // keep the divided differences accurate
	}
	return e
}

func TestTetrahedronAgainstSplines(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		e := randomCorners(r)
		x := -0.1 + 1.3*r.Float64()
		n, w := occupation(e, x)
		g, d := density(e, x)
		wantN, wantG := splines(e, x)
		if math.Abs(n-wantN) > 1e-9 || math.Abs(g-wantG) > 1e-8*(1+wantG) {
			t.Fatalf("corners %v at %g: occupied %.12g, density %.12g; splines give %.12g, %.12g", e, x, n, g, wantN, wantG)
		}
		if sum := w[0] + w[1] + w[2] + w[3]; math.Abs(sum-n) > 1e-12 {
			t.Fatalf("corners %v at %g: occupation weights sum to %g, want %g", e, x, sum, n)
		}
		if sum := d[0] + d[1] + d[2] + d[3]; math.Abs(sum-g) > 1e-12*(1+g) {
			t.Fatalf("corners %v at %g: density weights sum to %g, want %g", e, x, sum, g)
		}
		// A linear function interpolated with the density weights is its value
		// on the cut: the energy itself.
		if mean := d[0]*e[0] + d[1]*e[1] + d[2]*e[2] + d[3]*e[3]; math.Abs(mean-g*x) > 1e-10*(1+g) {
			t.Fatalf("corners %v at %g: Σ w e = %g, want g x = %g", e, x, mean, g*x)
		}
	}
}

// The density weight of corner i is −∂n/∂e_i, and the occupation weight is its
// integral over energy: both follow from n alone.
func TestCornerWeightsAgainstDerivatives(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 200 {
		e := randomCorners(r)
		x := e[0] + (e[3]-e[0])*r.Float64()
		_, d := density(e, x)
		const h = 1e-5
		for i := range e {
			up, down := e, e
			up[i] += h
			down[i] -= h
			a, _ := splines(up, x)
			b, _ := splines(down, x)
			if want := -(a - b) / (2 * h); math.Abs(d[i]-want) > 1e-3*(1+math.Abs(want)) {
				t.Fatalf("corners %v at %g: density weight %d is %g, −∂n/∂e gives %g", e, x, i, d[i], want)
			}
		}
		_, w := occupation(e, x)
		var sum [4]float64
		const steps = 4000
		for s := range steps { // midpoint rule
			y := e[0] + (x-e[0])*(float64(s)+0.5)/steps
			_, d := density(e, y)
			for i := range d {
				sum[i] += d[i] * (x - e[0]) / steps
			}
		}
		for i := range w {
			if math.Abs(w[i]-sum[i]) > 1e-5 {
				t.Fatalf("corners %v at %g: occupation weight %d is %g, its integral %g", e, x, i, w[i], sum[i])
			}
		}
	}
}

func TestDegenerateCorners(t *testing.T) {
	for _, e := range [][4]float64{{0, 0, 0, 0}, {0, 0, 0, 1}, {0, 0, 1, 1}, {0, 1, 1, 1}, {0, 0, 0.5, 1}, {0, 0.5, 0.5, 1}, {0, 0.5, 1, 1}} {
		for _, x := range []float64{-1, 0, 0.25, 0.5, 0.75, 1, 2} {
			n, w := occupation(e, x)
			g, d := density(e, x)
			c, k := corrected(e, x)
			for _, y := range append(append(append([]float64{n, g, c}, w[:]...), d[:]...), k[:]...) {
				if math.IsNaN(y) || math.IsInf(y, 0) {
					t.Errorf("corners %v at %g: not finite: %v %v %v %v", e, x, n, w, g, d)
				}
			}
			if n < 0 || n > 1 || g < 0 {
				t.Errorf("corners %v at %g: occupied %g, density %g", e, x, n, g)
			}
		}
	}
}

// The correction leaves the electron count alone: it only moves weight
// between corners (Blöchl, Jepsen, Andersen 1994, after eq. 22).
func TestCorrectionKeepsElectrons(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 500 {
		e := randomCorners(r)
		x := e[0] + (e[3]-e[0])*r.Float64()
		n, w := corrected(e, x)
		if sum := w[0] + w[1] + w[2] + w[3]; math.Abs(sum-n) > 1e-12 {
			t.Fatalf("corrected weights sum to %g, want %g", sum, n)
		}
	}
}
