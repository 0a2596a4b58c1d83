package linalg

import (
	"fmt"
	"math"
)

// Solver finds eigenvalues and eigenvectors of Hermitian matrices of one size.
// It holds the workspace, so a solve allocates nothing; use one Solver per
// goroutine.
type Solver struct {
	n          int
	work       *Matrix   // reduced in place; afterwards row i holds reflector i
	qr, qi     []float64 // A·u of a reflection, then its partner w
	tauR, tauI []float64 // factors of the reflections
	phaseR     float64   // the last reflection is a phase on component 0
	phaseI     float64
	e          []float64 // e[i] couples i-1 and i
	e2         []float64 // e2[i] = e[i+1]², shifted as the sweeps use it
	d          []float64
	z          []float64 // real vectors of the tridiagonal matrix, one per row
	zStride    int
	cos, sin   []float64 // rotations of one sweep
	order      []int
	columns    *Matrix // the vectors in columns, for the assembly kernels
	assembly   bool    // use the kernels of kernels_amd64.s
}

// NewSolver returns a solver for n×n matrices, n ≥ 0.
func NewSolver(n int) *Solver {
	// The kernels work on four numbers at a time and may touch the padding.
	padded := n + 4
	floats := make([]float64, 9*padded)
	take := func() []float64 {
		part := floats[:n:padded]
		floats = floats[padded:]
		return part
	}
	stride := paddedStride(n)
	return &Solver{
		n: n, work: NewMatrix(n),
		qr: take(), qi: take(), tauR: take(), tauI: take(),
		e: take(), e2: take(), d: take(), cos: take(), sin: take(),
		z: make([]float64, n*stride), zStride: stride, order: make([]int, n),
		columns: NewMatrix(n), assembly: haveAVX2,
	}
}

// Size returns the size of the matrices the solver takes.
func (s *Solver) Size() int { return s.n }

// Values stores the eigenvalues of the Hermitian matrix a in dst, ascending.
// Only the lower triangle of a is read; a is left unchanged. The error wraps
// ErrNotFinite if an element, or an eigenvalue, is NaN or infinite.
func (s *Solver) Values(dst []float64, a *Matrix) error {
	mustHaveLength("Values", dst, s.n)
	mustHaveSize("Values", a, s.n)
	scale, err := s.load(a)
	if err != nil {
		return err
	}
	s.reduce()
	if err := s.diagonalise(false); err != nil {
		return err
	}
	copy(dst, s.d)
	insertionSort(dst)
	return rescale(dst, scale)
}

// Vectors stores the eigenvalues of the Hermitian matrix a in dst, ascending,
// and in row i of v the components of a normalised eigenvector of dst[i].
// Only the lower triangle of a is read; a is left unchanged unless v is a,
// which is allowed. The error wraps ErrNotFinite if an element is NaN or
// infinite.
func (s *Solver) Vectors(dst []float64, v, a *Matrix) error {
	mustHaveLength("Vectors", dst, s.n)
	mustHaveSize("Vectors", a, s.n)
	mustHaveSize("Vectors", v, s.n)
	scale, err := s.load(a)
	if err != nil {
		return err
	}
	s.reduce()
	if err := s.diagonalise(true); err != nil {
		return err
	}
	s.sortOrder()
	for i, from := range s.order {
		dst[i] = s.d[from]
	}
	s.backTransform(v)
	return rescale(dst, scale)
}

// Sums of squares within these bounds leave room for all intermediate
// products; other matrices are scaled by a power of two first.
const (
	smallestSquares = 1e-60
	largestSquares  = 1e60
)

// load copies the lower triangle of a into the workspace (both triangles, if
// the assembly kernels are to work there), checks it, and scales it if its size
// demands. It returns the factor that undoes the scaling (a power of two), 0 for
// the zero matrix.
func (s *Solver) load(a *Matrix) (undo float64, err error) {
	n, w := s.n, s.work
	var sumR, sumI, sumD float64
	for i := range n {
		ar, ai := a.row(i, i+1)
		wr, wi := w.row(i, i+1)
		for j := range i {
			x, y := ar[j], ai[j]
			wr[j], wi[j] = x, y
			sumR += x * x
			sumI += y * y
		}
		x := ar[i]
		wr[i], wi[i] = x, 0
		sumD += x * x
	}
	// A NaN or an infinity anywhere makes the sum fail this test too.
	if sum := sumR + sumI + sumD; sum >= smallestSquares && sum <= largestSquares {
		s.fillUpper()
		return 1, nil
	}
	largest, err := largestElement("the matrix element", a)
	if err != nil {
		return 0, err
	}
	if largest == 0 {
		s.fillUpper()
		return 0, nil
	}
	_, exponent := math.Frexp(largest)
	for i := range n {
		wr, wi := w.row(i, i+1)
		for j := range wr {
			wr[j] = math.Ldexp(wr[j], -exponent)
			wi[j] = math.Ldexp(wi[j], -exponent)
		}
	}
	s.fillUpper()
	// 2^1024 itself is out of range, so the undoing factor is halved and
	// rescale doubles: see there.
	return math.Ldexp(1, exponent-1), nil
}

// fillUpper completes the matrix in the workspace for the assembly kernels.
func (s *Solver) fillUpper() {
	if !s.assembly {
		return
	}
	w := s.work
	for i := range s.n {
		wr, wi := w.row(i, i)
		o := i
		for j := range wr {
			w.Re[o], w.Im[o] = wr[j], -wi[j]
			o += w.Stride
		}
	}
}

// rescale undoes the scaling of load.
func rescale(values []float64, undo float64) error {
	if undo == 1 || undo == 0 {
		return nil
	}
	for i := range values {
		values[i] = values[i] * undo * 2
		if !finite(values[i]) {
			return fmt.Errorf("eigenvalue %d (counted from 1) is out of range: %w", i+1, ErrNotFinite)
		}
	}
	return nil
}

// largestElement returns the largest real or imaginary part of the lower
// triangle, or an error that names the first element that is not finite.
func largestElement(name string, a *Matrix) (float64, error) {
	var largest float64
	for i := range a.N {
		ar, ai := a.row(i, i+1)
		for j := range ar {
			if !finite(ar[j]) {
				return 0, notFinite("the real part of "+name, i, j, ar[j])
			}
			largest = max(largest, math.Abs(ar[j]))
			if j == i {
				break // the imaginary part of the diagonal is not read
			}
			if !finite(ai[j]) {
				return 0, notFinite("the imaginary part of "+name, i, j, ai[j])
			}
			largest = max(largest, math.Abs(ai[j]))
		}
	}
	return largest, nil
}

func insertionSort(x []float64) {
	for i := 1; i < len(x); i++ {
		v := x[i]
		j := i
		for ; j > 0 && x[j-1] > v; j-- {
			x[j] = x[j-1]
		}
		x[j] = v
	}
}

// sortOrder lists the eigenvalues' places in ascending order.
func (s *Solver) sortOrder() {
	for i := range s.order {
		v := s.d[i]
		j := i
		for ; j > 0 && s.d[s.order[j-1]] > v; j-- {
			s.order[j] = s.order[j-1]
		}
		s.order[j] = i
	}
}
