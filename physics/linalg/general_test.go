package linalg

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// positive returns a Hermitian matrix with values between smallest and 2.
func positive(r *rand.Rand, n int, smallest float64) *Matrix {
	values := make([]float64, n)
	for i := range values {
		values[i] = smallest + (2-smallest)*r.Float64()
	}
	values[0] = smallest
	return withSpectrum(r, values)
}

func TestGeneralBatteries(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	for _, b := range batteries {
		for _, n := range []int{1, 2, 3, 4, 5, 7, 8, 9, 10, 16, 20, 31, 40, 60} {
			if testing.Short() && n > 20 {
				continue
			}
			a, s := b.make(r, n), positive(r, n, 0.4)
			g, v := NewGeneralSolver(n), NewMatrix(n)
			e, only := make([]float64, n), make([]float64, n)
			for _, g.plain.assembly = range kernelChoices() {
				if err := g.Vectors(e, v, a, s); err != nil {
					t.Fatalf("%s, n = %d: %v", b.name, n, err)
				}
				if err := check(a, s, e, v); err != nil {
					t.Fatalf("%s, n = %d: %v", b.name, n, err)
				}
			}
			if err := g.Values(only, a, s); err != nil {
				t.Fatal(err)
			}
			for i := range e {
				if math.Abs(e[i]-only[i]) > 1e-14*float64(n)*frobenius(a) {
					t.Errorf("%s, n = %d: value %d is %g with vectors, %g without", b.name, n, i, e[i], only[i])
				}
			}
		}
	}
}

// Two s functions with overlap S: E± = (ε ± h)/(1 ± S), c± = (1, ±1)/√(2(1 ± S))
// (the hydrogen molecule ion of every textbook, common practice).
func TestTwoOverlappingOrbitals(t *testing.T) {
	const energy, h, overlap = -13.6, -17.1, 0.59
	a, s := NewMatrix(2), NewMatrix(2)
	a.Set(0, 0, energy, 0)
	a.Set(1, 1, energy, 0)
	a.Set(1, 0, h, 0)
	s.Set(0, 0, 1, 0)
	s.Set(1, 1, 1, 0)
	s.Set(1, 0, overlap, 0)
	e, v := make([]float64, 2), NewMatrix(2)
	if err := NewGeneralSolver(2).Vectors(e, v, a, s); err != nil {
		t.Fatal(err)
	}
	for i, sign := range []float64{1, -1} {
		want := (energy + sign*h) / (1 + sign*overlap)
		if math.Abs(e[i]-want) > 1e-13 {
			t.Errorf("E%d = %.15g, should be %.15g", i, e[i], want)
		}
		c := 1 / math.Sqrt(2*(1+sign*overlap))
		if math.Abs(math.Abs(real(v.At(i, 0)))-c) > 1e-14 || math.Abs(real(v.At(i, 1)-v.At(i, 0)*complex(sign, 0))) > 1e-14 {
			t.Errorf("state %d is %v, %v, should be ±%g (1, %g)", i, v.At(i, 0), v.At(i, 1), c, sign)
		}
	}
}

func TestGeneralWithUnitOverlapIsPlain(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	for n := 1; n < 20; n++ {
		a, unit := randomHermitian(r, n), NewMatrix(n)
		for i := range n {
			unit.Set(i, i, 1, 0)
		}
		want, _ := solveBoth(t, a)
		e := make([]float64, n)
		if err := NewGeneralSolver(n).Values(e, a, unit); err != nil {
			t.Fatal(err)
		}
		for i := range e {
			if e[i] != want[i] && math.Abs(e[i]-want[i]) > 1e-14*float64(n) {
				t.Errorf("n = %d: value %d is %g, should be %g", n, i, e[i], want[i])
			}
		}
	}
}

func TestOverlapScales(t *testing.T) {
	r := rand.New(rand.NewPCG(17, 18))
	for _, c := range []struct{ a, s float64 }{{1, 1e300}, {1, 1e-300}, {1e300, 1e300}, {1e-300, 1e-300}, {1e290, 1e10}, {1e40, 1e-41}, {1e-200, 1e100}} {
		const n = 6
		a, s := randomHermitian(r, n), positive(r, n, 0.4)
		want := make([]float64, n)
		g, v := NewGeneralSolver(n), NewMatrix(n)
		if err := g.Values(want, a, s); err != nil {
			t.Fatal(err)
		}
		e := make([]float64, n)
		if err := g.Vectors(e, v, scaled(a, c.a), scaled(s, c.s)); err != nil {
			t.Fatalf("%v: %v", c, err)
		}
		for i := range e {
			if got := e[i] / c.a * c.s; math.Abs(got-want[i]) > 1e-13*max(1, math.Abs(want[i])) {
				t.Errorf("%v: value %d is %g, should be %g", c, i, got, want[i])
			}
		}
		if err := check(scaled(a, 1/c.a), scaled(s, 1/c.s), want, scaled(v, math.Sqrt(c.s))); err != nil {
			t.Errorf("%v: %v", c, err)
		}
	}
	a, s := NewMatrix(1), NewMatrix(1)
	a.Set(0, 0, 1e300, 0)
	s.Set(0, 0, 1e-300, 0)
	if err := NewGeneralSolver(1).Values(make([]float64, 1), a, s); !errors.Is(err, ErrNotFinite) {
		t.Errorf("an eigenvalue of 1e600 gives %v", err)
	}
}

func TestBadOverlap(t *testing.T) {
	r := rand.New(rand.NewPCG(19, 20))
	for _, n := range []int{1, 2, 3, 5, 8, 20} {
		for _, smallest := range []float64{-1.5, -1e-3, -1e-9, 0, 1e-17} {
			for _, scale := range []float64{1, 1e200, 1e-200} {
				if n == 1 && smallest > 0 {
					continue // a 1×1 overlap is small, not singular
				}
				a, s := randomHermitian(r, n), scaled(positive(r, n, smallest), scale)
				e, v := make([]float64, n), NewMatrix(n)
				err := NewGeneralSolver(n).Vectors(e, v, a, s)
				var overlap *OverlapError
				if !errors.As(err, &overlap) {
					t.Fatalf("n = %d, smallest %g·%g: error is %v", n, smallest, scale, err)
				}
				if math.Abs(overlap.Smallest/scale-smallest) > 1e-14 {
					t.Errorf("n = %d: smallest is %g·%g, should be %g", n, overlap.Smallest/scale, scale, smallest)
				}
			}
		}
	}
}

// A nearly singular overlap is solved as long as its smallest value stands
// clear of rounding; errors grow with 1/smallest.
func TestNearlySingularOverlap(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	for _, smallest := range []float64{1e-2, 1e-5, 1e-8, 1e-11} {
		for _, n := range []int{2, 5, 12} {
			a, s := randomHermitian(r, n), positive(r, n, smallest)
			g, v, e := NewGeneralSolver(n), NewMatrix(n), make([]float64, n)
			if err := g.Vectors(e, v, a, s); err != nil {
				t.Fatalf("smallest %g, n = %d: %v", smallest, n, err)
			}
			for i := range n {
				var norm complex128
				for mu := range n {
					for nu := range n {
						norm += complex(real(v.At(i, mu)), -imag(v.At(i, mu))) * element(s, mu, nu) * v.At(i, nu)
					}
				}
				if math.Abs(real(norm)-1) > 1e-14*float64(n)/smallest {
					t.Errorf("smallest %g, n = %d: state %d has norm %v", smallest, n, i, norm)
				}
			}
		}
	}
}
