package linalg

import (
	"fmt"
	"math"
)

// GeneralSolver finds eigenvalues and eigenvectors of H c = E S c with a
// Hermitian H and a positive definite overlap S, for one size. It holds the
// workspace, so a solve allocates nothing; use one per goroutine.
type GeneralSolver struct {
	n        int
	plain    *Solver
	factor   *Matrix   // L, S = L L†
	inverse  []float64 // 1/L_ii
	x        *Matrix   // L⁻¹ A
	reduced  *Matrix   // L⁻¹ A L⁻†
	overlaps []float64 // eigenvalues of a suspect S
}

// NewGeneralSolver returns a solver for n×n matrices, n ≥ 0.
func NewGeneralSolver(n int) *GeneralSolver {
	return &GeneralSolver{
		n: n, plain: NewSolver(n), factor: NewMatrix(n), inverse: make([]float64, n),
		x: NewMatrix(n), reduced: NewMatrix(n), overlaps: make([]float64, n),
	}
}

// Size returns the size of the matrices the solver takes.
func (g *GeneralSolver) Size() int { return g.n }

// Values stores the eigenvalues of a c = E s c in dst, ascending. Only the
// lower triangles of a and s are read; both are left unchanged. The error is
// an *OverlapError if s is not safely positive definite, and wraps
// ErrNotFinite if an element of a or s is NaN or infinite.
func (g *GeneralSolver) Values(dst []float64, a, s *Matrix) error {
	mustHaveLength("Values", dst, g.n)
	scale, err := g.prepare("Values", a, s)
	if err != nil {
		return err
	}
	if err := g.plain.Values(dst, g.reduced); err != nil {
		return err
	}
	return scale.apply(dst)
}

// Vectors stores the eigenvalues of a c = E s c in dst, ascending, and in row
// i of v the components of an eigenvector of dst[i] with c† s c = 1. Otherwise
// it is like Values. v may be a or s.
func (g *GeneralSolver) Vectors(dst []float64, v, a, s *Matrix) error {
	mustHaveLength("Vectors", dst, g.n)
	mustHaveSize("Vectors", v, g.n)
	scale, err := g.prepare("Vectors", a, s)
	if err != nil {
		return err
	}
	if err := g.plain.Vectors(dst, v, g.reduced); err != nil {
		return err
	}
	// c = L⁻† y, row by row.
	factor := math.Ldexp(1, -scale.s/2)
	for i := range g.n {
		yr, yi := v.row(i, g.n)
		for k := g.n - 1; k >= 0; k-- {
			inv := g.inverse[k]
			cr, ci := yr[k]*inv, yi[k]*inv
			lr, li := g.factor.row(k, k)
			subtractConjugateRow(yr[:k], yi[:k], lr, li, cr, ci)
			yr[k], yi[k] = cr*factor, ci*factor
		}
	}
	return scale.apply(dst)
}

// scales are the binary exponents taken out of a and s.
type scales struct{ a, s int }

func (x scales) apply(values []float64) error {
	if x.a == x.s {
		return nil
	}
	for i := range values {
		values[i] = math.Ldexp(values[i], x.a-x.s)
		if !finite(values[i]) {
			return fmt.Errorf("eigenvalue %d is out of range, with elements near 2^%d and overlaps near 2^%d: %w", i+1, x.a, x.s, ErrNotFinite)
		}
	}
	return nil
}

// prepare checks a and s and leaves L⁻¹ a L⁻† in g.reduced, with s = L L†.
func (g *GeneralSolver) prepare(call string, a, s *Matrix) (scales, error) {
	mustHaveSize(call, a, g.n)
	mustHaveSize(call, s, g.n)
	largestS, err := largestElement("the overlap matrix element", s)
	if err != nil {
		return scales{}, err
	}
	largestA, err := largestElement("the matrix element", a)
	if err != nil {
		return scales{}, err
	}
	scale := scales{a: exponentOf(largestA), s: exponentOf(largestS) &^ 1} // even: its root is exact
	g.loadFull(a, math.Ldexp(1, -scale.a/2), math.Ldexp(1, -scale.a+scale.a/2))
	safe := g.factorise(s, scale.s)
	if !safe {
		if err := g.plain.Values(g.overlaps, s); err != nil {
			return scales{}, err
		}
		smallest, largest := g.overlaps[0], g.overlaps[g.n-1]
		if !(smallest > float64(g.n)*epsilon*largest) || g.inverse[g.n-1] == 0 {
			return scales{}, &OverlapError{Smallest: smallest}
		}
	}
	g.reduce()
	return scale, nil
}

// exponentOf is the binary exponent to take out of a matrix with this largest
// element: 0 unless the matrix is of unusual size.
func exponentOf(largest float64) int {
	if largest == 0 || largest > 1e-30 && largest < 1e30 {
		return 0
	}
	_, exponent := math.Frexp(largest)
	return exponent
}

// loadFull copies a, scaled by f1·f2, into g.x with both triangles filled.
func (g *GeneralSolver) loadFull(a *Matrix, f1, f2 float64) {
	x := g.x
	for i := range g.n {
		ar, ai := a.row(i, i+1)
		xr, xi := x.row(i, i+1)
		for j := range i {
			re, im := ar[j]*f1*f2, ai[j]*f1*f2
			xr[j], xi[j] = re, im
			x.Re[j*x.Stride+i], x.Im[j*x.Stride+i] = re, -im
		}
		xr[i], xi[i] = ar[i]*f1*f2, 0
	}
}

// factorise finds the Cholesky factor of s/2^exponent, row by row, and the
// inverses of its diagonal. It reports whether all pivots are safely positive;
// if one is not positive it stops, with the last inverse 0.
func (g *GeneralSolver) factorise(s *Matrix, exponent int) (safe bool) {
	if g.n == 0 {
		return true
	}
	f := g.factor
	f1, f2 := math.Ldexp(1, -exponent/2), math.Ldexp(1, -exponent+exponent/2)
	safe = true
	for i := range g.n {
		sr, si := s.row(i, i+1)
		lr, li := f.row(i, i+1)
		var squares float64
		for j := range i {
			kr, ki := f.row(j, j)
			dr, di := dotConjugate(lr[:j], li[:j], kr, ki)
			inv := g.inverse[j]
			re, im := (sr[j]*f1*f2-dr)*inv, (si[j]*f1*f2-di)*inv
			lr[j], li[j] = re, im
			squares += re*re + im*im
		}
		diagonal := sr[i] * f1 * f2
		pivot := diagonal - squares
		if !(pivot > 0) {
			g.inverse[g.n-1] = 0
			return false
		}
		if pivot < 1e-10*diagonal {
			safe = false // near singular: the eigenvalues of s decide
		}
		root := math.Sqrt(pivot)
		lr[i], li[i] = root, 0
		g.inverse[i] = 1 / root
	}
	return safe
}

// reduce forms g.reduced = L⁻¹ x L⁻†, lower triangle, from the full matrix in
// g.x, which it overwrites with L⁻¹ x.
func (g *GeneralSolver) reduce() {
	n, x, f, c := g.n, g.x, g.factor, g.reduced
	for i := range n {
		xr, xi := x.row(i, n)
		lr, li := f.row(i, i)
		for k := range i {
			kr, ki := x.row(k, n)
			subtractRow(xr, xi, kr, ki, lr[k], li[k])
		}
		inv := g.inverse[i]
		for j := range xr {
			xr[j] *= inv
			xi[j] *= inv
		}
		cr, ci := c.row(i, i+1)
		for j := range i + 1 {
			kr, ki := f.row(j, j)
			dr, di := dotConjugate(cr[:j], ci[:j], kr, ki)
			cr[j], ci[j] = (xr[j]-dr)*g.inverse[j], (xi[j]-di)*g.inverse[j]
		}
		ci[i] = 0
	}
}

// dotConjugate returns Σ a_k b̄_k.
func dotConjugate(ar, ai, br, bi []float64) (re, im float64) {
	n := len(ar)
	ai, br, bi = ai[:n], br[:n], bi[:n]
	for k, x := range ar {
		y := ai[k]
		re += x*br[k] + y*bi[k]
		im += y*br[k] - x*bi[k]
	}
	return re, im
}

// subtractRow subtracts (cr + i ci)·b from a.
func subtractRow(ar, ai, br, bi []float64, cr, ci float64) {
	n := len(ar)
	ai, br, bi = ai[:n], br[:n], bi[:n]
	for k := range ar {
		x, y := br[k], bi[k]
		ar[k] -= cr*x - ci*y
		ai[k] -= cr*y + ci*x
	}
}

// subtractConjugateRow subtracts (cr + i ci)·b̄ from a.
func subtractConjugateRow(ar, ai, br, bi []float64, cr, ci float64) {
	n := len(ar)
	ai, br, bi = ai[:n], br[:n], bi[:n]
	for k := range ar {
		x, y := br[k], bi[k]
		ar[k] -= cr*x + ci*y
		ai[k] -= ci*x - cr*y
	}
}
