package linalg

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"
)

// A battery is one family of matrices; matrices of every family are tried at
// many sizes by TestBatteries.
type battery struct {
	name string
	make func(r *rand.Rand, n int) *Matrix
}

func randomHermitian(r *rand.Rand, n int) *Matrix {
	m := NewMatrix(n)
	for i := range n {
		for j := range i {
			m.Set(i, j, r.NormFloat64(), r.NormFloat64())
		}
		m.Set(i, i, r.NormFloat64(), 0)
	}
	return m
}

// withSpectrum returns Q diag(values) Q† for a random unitary Q.
func withSpectrum(r *rand.Rand, values []float64) *Matrix {
	n := len(values)
	q := randomUnitary(r, n)
	m := NewMatrix(n)
	for i := range n {
		for j := range i + 1 {
			var sum complex128
			for k, v := range values {
				sum += q[i][k] * complex(v, 0) * cmplx.Conj(q[j][k])
			}
			if i == j {
				sum = complex(real(sum), 0)
			}
			m.Set(i, j, real(sum), imag(sum))
		}
	}
	return m
}

// randomUnitary orthonormalises random vectors by Gram and Schmidt's method,
// twice over.
func randomUnitary(r *rand.Rand, n int) [][]complex128 {
	q := make([][]complex128, n)
	for i := range q {
		q[i] = make([]complex128, n)
		for j := range q[i] {
			q[i][j] = complex(r.NormFloat64(), r.NormFloat64())
		}
		for range 2 {
			for _, p := range q[:i] {
				var dot complex128
				for k := range p {
					dot += cmplx.Conj(p[k]) * q[i][k]
				}
				for k := range p {
					q[i][k] -= dot * p[k]
				}
			}
			var squares float64
			for _, x := range q[i] {
				squares += real(x)*real(x) + imag(x)*imag(x)
			}
			for k := range q[i] {
				q[i][k] /= complex(math.Sqrt(squares), 0)
			}
		}
	}
	return q
}

func scaled(m *Matrix, f float64) *Matrix {
	for i := range m.Re {
		m.Re[i] *= f
		m.Im[i] *= f
	}
	return m
}

// laplacian is the chain with 2 on the diagonal and −e^{iφ} beside it.
func laplacian(n int, phase float64) *Matrix {
	m := NewMatrix(n)
	for i := range n {
		m.Set(i, i, 2, 0)
		if i > 0 {
			m.Set(i, i-1, -math.Cos(phase), -math.Sin(phase))
		}
	}
	return m
}

var batteries = []battery{
	{"random", randomHermitian},
	{"zero", func(_ *rand.Rand, n int) *Matrix { return NewMatrix(n) }},
	{"unit", func(_ *rand.Rand, n int) *Matrix {
		m := NewMatrix(n)
		for i := range n {
			m.Set(i, i, 1, 0)
		}
		return m
	}},
	{"diagonal", func(r *rand.Rand, n int) *Matrix {
		m := NewMatrix(n)
		for i := range n {
			m.Set(i, i, r.NormFloat64(), 0)
		}
		return m
	}},
	{"ones", func(_ *rand.Rand, n int) *Matrix {
		m := NewMatrix(n)
		for i := range n {
			for j := range i + 1 {
				m.Set(i, j, 1, 0)
			}
		}
		return m
	}},
	{"real", func(r *rand.Rand, n int) *Matrix {
		m := randomHermitian(r, n)
		clear(m.Im)
		return m
	}},
	{"imaginary", func(r *rand.Rand, n int) *Matrix {
		m := randomHermitian(r, n)
		clear(m.Re)
		return m
	}},
	{"chain", func(_ *rand.Rand, n int) *Matrix { return laplacian(n, 0) }},
	{"chain with phase", func(r *rand.Rand, n int) *Matrix { return laplacian(n, 2*math.Pi*r.Float64()) }},
	// Wilkinson's W⁺: pairs of values that agree to working precision
	// (Wilkinson, The Algebraic Eigenvalue Problem, 1965, ch. 5 §45).
	{"Wilkinson", func(_ *rand.Rand, n int) *Matrix {
		m := NewMatrix(n)
		for i := range n {
			m.Set(i, i, math.Abs(float64(n-1)/2-float64(i)), 0)
			if i > 0 {
				m.Set(i, i-1, 1, 0)
			}
		}
		return m
	}},
	// Zero diagonal, quarter turns in the sweeps.
	{"bipartite chain", func(_ *rand.Rand, n int) *Matrix {
		m := NewMatrix(n)
		for i := 1; i < n; i++ {
			m.Set(i, i-1, float64(1+i%2), 0)
		}
		return m
	}},
	{"Kramers pairs", func(r *rand.Rand, n int) *Matrix {
		values := make([]float64, n)
		for i := range values {
			values[i] = float64(i / 2)
		}
		return withSpectrum(r, values)
	}},
	{"few levels", func(r *rand.Rand, n int) *Matrix {
		values := make([]float64, n)
		for i := range values {
			values[i] = []float64{-3, 1, 1e-8}[r.IntN(3)]
		}
		return withSpectrum(r, values)
	}},
	{"clustered", func(r *rand.Rand, n int) *Matrix {
		values := make([]float64, n)
		for i := range values {
			values[i] = float64(i%3) + 1e-14*r.NormFloat64()
		}
		return withSpectrum(r, values)
	}},
	{"one large", func(r *rand.Rand, n int) *Matrix {
		values := make([]float64, n)
		for i := range values {
			values[i] = 1e-12 * r.NormFloat64()
		}
		values[n-1] = 1
		return withSpectrum(r, values)
	}},
	{"graded up", func(r *rand.Rand, n int) *Matrix { return graded(r, n, 1) }},
	{"graded down", func(r *rand.Rand, n int) *Matrix { return graded(r, n, -1) }},
	{"graded steeply", func(r *rand.Rand, n int) *Matrix { return graded(r, n, 9) }},
	{"graded steeply down", func(r *rand.Rand, n int) *Matrix { return graded(r, n, -9) }},
	{"blocks", func(r *rand.Rand, n int) *Matrix {
		m := randomHermitian(r, n)
		for i := range n {
			for j := range i {
				if i/3 != j/3 {
					m.Set(i, j, 0, 0)
				}
			}
		}
		return m
	}},
	{"scattered blocks", func(r *rand.Rand, n int) *Matrix {
		m := randomHermitian(r, n)
		for i := range n {
			for j := range i {
				if i%3 != j%3 {
					m.Set(i, j, 0, 0)
				}
			}
		}
		return m
	}},
	{"weakly coupled blocks", func(r *rand.Rand, n int) *Matrix {
		m := randomHermitian(r, n)
		for i := range n {
			for j := range i {
				if i/4 != j/4 {
					m.Set(i, j, 1e-160*r.NormFloat64(), 1e-170*r.NormFloat64())
				}
			}
		}
		return m
	}},
	{"sparse", func(r *rand.Rand, n int) *Matrix {
		m := randomHermitian(r, n)
		for i := range n {
			for j := range i + 1 {
				if r.Float64() < 0.8 {
					m.Set(i, j, 0, 0)
				}
			}
		}
		return m
	}},
	{"arrow", func(r *rand.Rand, n int) *Matrix {
		m := NewMatrix(n)
		for i := range n {
			m.Set(n-1, i, r.NormFloat64(), r.NormFloat64())
			m.Set(i, i, r.NormFloat64(), 0)
		}
		return m
	}},
	{"all exponents", func(r *rand.Rand, n int) *Matrix {
		m := randomHermitian(r, n)
		for i := range n {
			for j := range i + 1 {
				m.Set(i, j, m.Re[i*m.Stride+j]*math.Pow(10, 280*r.Float64()-280), m.Im[i*m.Stride+j]*math.Pow(10, 280*r.Float64()-280))
			}
		}
		return m
	}},
	{"huge", func(r *rand.Rand, n int) *Matrix { return scaled(randomHermitian(r, n), 1e305) }},
	{"large", func(r *rand.Rand, n int) *Matrix { return scaled(randomHermitian(r, n), 1e31) }},
	{"small", func(r *rand.Rand, n int) *Matrix { return scaled(randomHermitian(r, n), 1e-29) }},
	{"tiny", func(r *rand.Rand, n int) *Matrix { return scaled(randomHermitian(r, n), 1e-305) }},
	{"denormal", func(r *rand.Rand, n int) *Matrix { return scaled(randomHermitian(r, n), 1e-317) }},
}

// graded scales row and column i by 10^(−step·i/2) (down) or the reverse.
func graded(r *rand.Rand, n int, step float64) *Matrix {
	m := randomHermitian(r, n)
	for i := range n {
		for j := range i + 1 {
			at := float64(i + j)
			if step < 0 {
				at -= 2 * float64(n-1)
			}
			f := math.Pow(10, -step*at/2)
			m.Set(i, j, m.Re[i*m.Stride+j]*f, m.Im[i*m.Stride+j]*f)
		}
	}
	return m
}

// element returns element (i, j) of the full Hermitian matrix whose lower
// triangle m holds.
func element(m *Matrix, i, j int) complex128 {
	switch {
	case i > j:
		return m.At(i, j)
	case i < j:
		return cmplx.Conj(m.At(j, i))
	}
	return complex(real(m.At(i, i)), 0)
}

// frobenius is the norm of the Hermitian matrix, safe for all scales.
func frobenius(m *Matrix) float64 {
	norm := 0.0
	for i := range m.N {
		for j := range m.N {
			x := element(m, i, j)
			norm = math.Hypot(norm, math.Hypot(real(x), imag(x)))
		}
	}
	return norm
}

// check applies the tests of residual and orthonormality to energies e and
// vectors v of a (overlap s, or nil), at 1e-13·‖H‖·n.
func check(a, s *Matrix, e []float64, v *Matrix) error {
	n := a.N
	limit := 1e-13 * float64(n)
	norm := frobenius(a)
	if norm == 0 {
		norm = 1
	}
	// Denormal results carry an absolute error of the smallest number.
	floor := 16 * float64(n) * math.SmallestNonzeroFloat64
	for i := range n {
		if i > 0 && e[i] < e[i-1] {
			return fmt.Errorf("eigenvalues %d and %d are not ascending: %g, %g", i-1, i, e[i-1], e[i])
		}
		sum := 0.0
		for mu := range n {
			var hc, sc complex128
			for nu := range n {
				c := v.At(i, nu)
				hc += element(a, mu, nu) * c
				if s != nil {
					sc += element(s, mu, nu) * c
				}
			}
			if s == nil {
				sc = v.At(i, mu)
			}
			sum = math.Hypot(sum, cmplx.Abs(hc-complex(e[i], 0)*sc))
		}
		if !(sum <= limit*norm+floor) {
			return fmt.Errorf("residual of state %d of %d is %.3g of the norm, allowed %.3g", i, n, sum/norm, limit)
		}
		for j := range i + 1 {
			var dot complex128
			for mu := range n {
				sc := v.At(j, mu)
				if s != nil {
					sc = 0
					for nu := range n {
						sc += element(s, mu, nu) * v.At(j, nu)
					}
				}
				dot += cmplx.Conj(v.At(i, mu)) * sc
			}
			if i == j {
				dot--
			}
			if !(cmplx.Abs(dot) <= limit) {
				return fmt.Errorf("states %d and %d of %d: product differs from %d by %.3g, allowed %.3g", i, j, n, btoi(i == j), cmplx.Abs(dot), limit)
			}
		}
	}
	return nil
}

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}

// kernelChoices are the values of Solver.assembly that this machine can run.
func kernelChoices() []bool {
	if haveAVX2 {
		return []bool{false, true}
	}
	return []bool{false}
}

func TestBatteries(t *testing.T) {
	for _, assembly := range kernelChoices() {
		t.Run(fmt.Sprintf("assembly=%t", assembly), func(t *testing.T) { testBatteries(t, assembly) })
	}
}

func testBatteries(t *testing.T, assembly bool) {
	for _, b := range batteries {
		t.Run(b.name, func(t *testing.T) {
			r := rand.New(rand.NewPCG(1, 2))
			for n := 1; n <= 60; n++ {
				if n > 24 && n%6 != 0 && n != 31 && n != 33 || testing.Short() && n > 12 && n%11 != 0 {
					continue
				}
				a := b.make(r, n)
				before := NewMatrix(n)
				before.Copy(a)
				solver, v := NewSolver(n), NewMatrix(n)
				solver.assembly = assembly
				e, only := make([]float64, n), make([]float64, n)
				if err := solver.Vectors(e, v, a); err != nil {
					t.Fatalf("n = %d: %v", n, err)
				}
				if err := check(a, nil, e, v); err != nil {
					t.Fatalf("n = %d: %v", n, err)
				}
				if err := solver.Values(only, a); err != nil {
					t.Fatalf("n = %d: %v", n, err)
				}
				norm := frobenius(a)
				for i := range e {
					if math.Abs(e[i]-only[i]) > 1e-14*float64(n)*norm {
						t.Errorf("n = %d: value %d is %g with vectors, %g without", n, i, e[i], only[i])
					}
				}
				for i := range a.Re {
					if a.Re[i] != before.Re[i] || a.Im[i] != before.Im[i] {
						t.Fatalf("n = %d: the matrix was changed", n)
					}
				}
			}
		})
	}
}
