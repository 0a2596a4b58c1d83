package linalg

import (
	"errors"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// solveBoth solves a with every choice of kernels and checks residual and
// orthonormality; it returns the last result.
func solveBoth(t *testing.T, a *Matrix) ([]float64, *Matrix) {
	t.Helper()
	s, v, e := NewSolver(a.N), NewMatrix(a.N), make([]float64, a.N)
	for _, s.assembly = range kernelChoices() {
		if err := s.Vectors(e, v, a); err != nil {
			t.Fatal(err)
		}
		if err := check(a, nil, e, v); err != nil {
			t.Fatalf("assembly=%t: %v", s.assembly, err)
		}
	}
	return e, v
}

func wantValues(t *testing.T, a *Matrix, want []float64) {
	t.Helper()
	want = slices.Sorted(slices.Values(want))
	e, _ := solveBoth(t, a)
	limit := 1e-15 * float64(a.N) * max(1, frobenius(a))
	for i := range e {
		if math.Abs(e[i]-want[i]) > limit {
			t.Fatalf("n = %d: value %d is %.16g, should be %.16g", a.N, i, e[i], want[i])
		}
	}
}

// Open chain: E_k = 2 − 2 cos(kπ/(n+1)), whatever the phases of the bonds
// (R. T. Gregory, D. L. Karney, A Collection of Matrices for Testing
// Computational Algorithms, 1969, the second-difference matrix; formula from
// memory). Ring with a flux nφ: E_k = 2 − 2 cos(2πk/n + φ), a circulant matrix
// (P. J. Davis, Circulant Matrices, 1979, §3.2; formula from memory).
func TestChainAndRing(t *testing.T) {
	for n := 1; n <= 60; n++ {
		want := make([]float64, n)
		for k := range want {
			want[k] = 2 - 2*math.Cos(float64(k+1)*math.Pi/float64(n+1))
		}
		wantValues(t, laplacian(n, 0), want)
		wantValues(t, laplacian(n, 0.7), want)
		if n < 3 {
			continue
		}
		for _, phase := range []float64{0, 0.1, math.Pi / float64(n), 1.3} {
			ring := laplacian(n, phase)
			// Element (0, n−1) continues the chain; its partner is stored.
			ring.Set(n-1, 0, -math.Cos(phase), math.Sin(phase))
			for k := range want {
				want[k] = 2 - 2*math.Cos(2*math.Pi*float64(k)/float64(n)+phase)
			}
			wantValues(t, ring, want)
		}
	}
}

// Angular momentum: J_x, J_y and a slanted component of J have the values
// −j … j (E. U. Condon, G. H. Shortley, The Theory of Atomic Spectra, 1935, ch.
// III; matrix elements from memory).
func TestAngularMomentum(t *testing.T) {
	for n := 1; n <= 60; n++ {
		j := float64(n-1) / 2
		want := make([]float64, n)
		for i := range want {
			want[i] = float64(i) - j
		}
		for _, axis := range [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}, {0.48, 0.6, 0.64}, {0.6, 0.8, 0}} {
			a := NewMatrix(n)
			for i := range n {
				m := float64(i) - j
				a.Set(i, i, axis[2]*m, 0)
				if i > 0 {
					half := math.Sqrt((j+m)*(j-m+1)) / 2 // ⟨m|J₊|m−1⟩/2
					a.Set(i, i-1, axis[0]*half, -axis[1]*half)
				}
			}
			wantValues(t, a, want)
		}
	}
}

// The doubled real problem [[Re, −Im], [Im, Re]] has each value twice; gonum's
// EigenSym solves it as the slow, obvious check.
func TestAgainstDoubledRealProblem(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	skip := map[string]bool{"huge": true, "tiny": true, "denormal": true, "all exponents": true} // EigenSym does not scale
	for _, b := range batteries {
		if skip[b.name] {
			continue
		}
		for _, n := range []int{1, 2, 3, 4, 5, 8, 10, 13, 20, 31, 40} {
			a := b.make(r, n)
			double := mat.NewSymDense(2*n, nil)
			for i := range n {
				for j := range i + 1 {
					x := element(a, i, j)
					double.SetSym(i, j, real(x))
					double.SetSym(n+i, n+j, real(x))
					double.SetSym(n+i, j, imag(x))
					double.SetSym(n+j, i, -imag(x))
				}
			}
			var eigen mat.EigenSym
			if !eigen.Factorize(double, false) {
				t.Fatalf("%s, n = %d: EigenSym failed", b.name, n)
			}
			want := eigen.Values(nil)
			e, _ := solveBoth(t, a)
			for i := range e {
				if math.Abs(e[i]-want[2*i]) > 1e-14*float64(n)*frobenius(a) {
					t.Errorf("%s, n = %d: value %d is %.15g, EigenSym has %.15g", b.name, n, i, e[i], want[2*i])
				}
			}
		}
	}
}

// In degenerate levels the vectors are arbitrary, their span is not: the
// projector on each level must be that of the unitary the matrix was made of.
func TestSubspaces(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for n := 2; n <= 40; n += 3 {
		values := make([]float64, n)
		for i := range values {
			values[i] = float64(i / 3)
		}
		q := randomUnitary(r, n)
		a := NewMatrix(n)
		for i := range n {
			for j := range i + 1 {
				var sum complex128
				for k, x := range values {
					sum += q[k][i] * complex(x, 0) * cmplx.Conj(q[k][j])
				}
				a.Set(i, j, real(sum), imag(sum))
			}
		}
		_, v := solveBoth(t, a)
		for first := 0; first < n; first += 3 {
			for i := range n {
				for j := range n {
					var got, want complex128
					for k := first; k < min(n, first+3); k++ {
						got += v.At(k, i) * cmplx.Conj(v.At(k, j))
						want += q[k][i] * cmplx.Conj(q[k][j])
					}
					if cmplx.Abs(got-want) > 1e-13*float64(n) {
						t.Fatalf("n = %d: projector on the level of state %d differs at (%d, %d) by %.3g", n, first, i, j, cmplx.Abs(got-want))
					}
				}
			}
		}
	}
}

func TestOnlyLowerTriangleIsRead(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for _, n := range []int{1, 2, 5, 10} {
		a := randomHermitian(r, n)
		want, _ := solveBoth(t, a)
		want = slices.Clone(want)
		for i := range n {
			a.Im[i*a.Stride+i] = math.NaN()
			for j := i + 1; j < a.Stride; j++ {
				a.Set(i, j, math.Inf(1), math.NaN())
			}
		}
		e := make([]float64, n)
		if err := NewSolver(n).Values(e, a); err != nil {
			t.Fatal(err)
		}
		for i := range e {
			if math.Abs(e[i]-want[i]) > 1e-13 {
				t.Errorf("value %d is %g, should be %g", i, e[i], want[i])
			}
		}
	}
}

func TestNotFinite(t *testing.T) {
	for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		for _, c := range []struct {
			row, column int
			imaginary   bool
			want        string
		}{
			{3, 1, false, "the real part of the matrix element at row 4, column 2 (counted from 1)"},
			{3, 1, true, "the imaginary part of the matrix element at row 4, column 2 (counted from 1)"},
			{0, 0, false, "row 1, column 1"},
			{4, 4, false, "row 5, column 5"},
		} {
			a := randomHermitian(rand.New(rand.NewPCG(1, 1)), 5)
			if c.imaginary {
				a.Im[c.row*a.Stride+c.column] = bad
			} else {
				a.Re[c.row*a.Stride+c.column] = bad
			}
			unit := NewMatrix(5)
			for i := range 5 {
				unit.Set(i, i, 1, 0)
			}
			s, g, e, v := NewSolver(5), NewGeneralSolver(5), make([]float64, 5), NewMatrix(5)
			for name, err := range map[string]error{
				"Values": s.Values(e, a), "Vectors": s.Vectors(e, v, a),
				"general Values": g.Values(e, a, unit), "general Vectors": g.Vectors(e, v, a, unit),
			} {
				if !errors.Is(err, ErrNotFinite) || !strings.Contains(err.Error(), c.want) {
					t.Errorf("%s with %v: error is %q, should name %q", name, bad, err, c.want)
				}
			}
			err := g.Values(e, unit, a)
			if !errors.Is(err, ErrNotFinite) || !strings.Contains(err.Error(), "overlap") {
				t.Errorf("overlap with %v: error is %q", bad, err)
			}
			// The solver is good for the next matrix.
			if err := s.Vectors(e, v, unit); err != nil || e[0] != 1 {
				t.Errorf("after an error: %v, %v", e, err)
			}
		}
	}
}

func TestEigenvalueOutOfRange(t *testing.T) {
	a := NewMatrix(3)
	for i := range 3 {
		for j := range i + 1 {
			a.Set(i, j, math.MaxFloat64, 0)
		}
	}
	if err := NewSolver(3).Values(make([]float64, 3), a); !errors.Is(err, ErrNotFinite) {
		t.Errorf("error is %v", err)
	}
}

func TestSizes(t *testing.T) {
	if err := NewSolver(0).Vectors(nil, NewMatrix(0), NewMatrix(0)); err != nil {
		t.Error(err)
	}
	if err := NewGeneralSolver(0).Vectors(nil, NewMatrix(0), NewMatrix(0), NewMatrix(0)); err != nil {
		t.Error(err)
	}
	for name, call := range map[string]func(){
		"places": func() { _ = NewSolver(3).Values(make([]float64, 2), NewMatrix(3)) },
		"matrix": func() { _ = NewSolver(3).Values(make([]float64, 3), NewMatrix(4)) },
		"vector": func() { _ = NewSolver(3).Vectors(make([]float64, 3), NewMatrix(2), NewMatrix(3)) },
		"copy":   func() { NewMatrix(3).Copy(NewMatrix(2)) },
		"lapped": func() { _ = NewGeneralSolver(3).Values(make([]float64, 3), NewMatrix(3), NewMatrix(2)) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			call()
		}()
	}
}

func TestVectorsInPlace(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 9))
	a := randomHermitian(r, 7)
	want, wantV := solveBoth(t, a)
	e := make([]float64, 7)
	if err := NewSolver(7).Vectors(e, a, a); err != nil {
		t.Fatal(err)
	}
	for i := range e {
		if e[i] != want[i] || a.At(i, 3) != wantV.At(i, 3) {
			t.Fatalf("state %d differs in place", i)
		}
	}
}

func TestNoAllocation(t *testing.T) {
	const n = 10
	r := rand.New(rand.NewPCG(11, 12))
	a, v, e, overlap := randomHermitian(r, n), NewMatrix(n), make([]float64, n), positive(r, n, 0.3)
	huge := scaled(randomHermitian(r, n), 1e300)
	s, g := NewSolver(n), NewGeneralSolver(n)
	for name, solve := range map[string]func() error{
		"Values":          func() error { return s.Values(e, a) },
		"Vectors":         func() error { return s.Vectors(e, v, a) },
		"rescaled":        func() error { return s.Vectors(e, v, huge) },
		"general Values":  func() error { return g.Values(e, a, overlap) },
		"general Vectors": func() error { return g.Vectors(e, v, a, overlap) },
	} {
		if got := testing.AllocsPerRun(50, func() {
			if err := solve(); err != nil {
				t.Fatal(err)
			}
		}); got != 0 {
			t.Errorf("%s allocates %v times per solve", name, got)
		}
	}
}

// Matrices of few small integers give exact zeros everywhere: quarter turns,
// splits and degenerate levels in all combinations.
func TestSmallIntegers(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 24))
	pick := func(from []float64) float64 { return from[r.IntN(len(from))] }
	choices := [][]float64{{0, 1}, {0, 0, 0, 1, -1}, {0, 1, -1, 2}, {0, 1, 1e-9, 1e-17}, {0, 0, 1, 1e-140, 1e140}}
	count := 4000
	if testing.Short() {
		count = 400
	}
	for i := range count {
		from := choices[i%len(choices)]
		n := 2 + r.IntN(11)
		a := NewMatrix(n)
		tridiagonal, real := r.IntN(3) == 0, r.IntN(2) == 0
		for i := range n {
			for j := range i {
				if tridiagonal && j < i-1 {
					continue
				}
				im := pick(from)
				if real {
					im = 0
				}
				a.Set(i, j, pick(from), im)
			}
			if r.IntN(2) == 0 {
				a.Set(i, i, pick(from), 0)
			}
		}
		solveBoth(t, a)
	}
}
