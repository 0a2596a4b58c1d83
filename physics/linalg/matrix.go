package linalg

import "fmt"

// Matrix is a complex N×N matrix: real and imaginary parts in two row-major
// arrays, element (i, j) at i*Stride+j. Of a Hermitian matrix only the lower
// triangle (j ≤ i) is read, and of its diagonal only the real part. As a set
// of vectors, row i is vector i.
type Matrix struct {
	N, Stride int
	Re, Im    []float64
}

// NewMatrix returns a zero matrix of size n.
func NewMatrix(n int) *Matrix {
	stride := paddedStride(n)
	return &Matrix{N: n, Stride: stride, Re: make([]float64, n*stride), Im: make([]float64, n*stride)}
}

// paddedStride keeps rows of different vectors out of the same cache sets.
func paddedStride(n int) int {
	stride := (n + 3) &^ 3
	if stride%64 == 0 && stride > 0 {
		stride += 4
	}
	return stride
}

// Zero sets all elements to zero.
func (m *Matrix) Zero() {
	clear(m.Re)
	clear(m.Im)
}

// Set stores re + i·im at row i, column j.
func (m *Matrix) Set(i, j int, re, im float64) {
	m.Re[i*m.Stride+j], m.Im[i*m.Stride+j] = re, im
}

// At returns the element at row i, column j.
func (m *Matrix) At(i, j int) complex128 {
	return complex(m.Re[i*m.Stride+j], m.Im[i*m.Stride+j])
}

// Copy makes m equal to src, element by element. It panics if the sizes differ.
func (m *Matrix) Copy(src *Matrix) {
	mustHaveSize("Copy", src, m.N)
	for i := range m.N {
		re, im := src.row(i, m.N)
		copy(m.Re[i*m.Stride:], re)
		copy(m.Im[i*m.Stride:], im)
	}
}

// row returns the first n elements of row i.
func (m *Matrix) row(i, n int) (re, im []float64) {
	o := i * m.Stride
	return m.Re[o : o+n : o+n], m.Im[o : o+n : o+n]
}

func mustHaveSize(call string, m *Matrix, n int) {
	if m.N != n {
		panic(fmt.Sprintf("linalg: %s: matrix of size %d where %d is needed", call, m.N, n))
	}
}

func mustHaveLength(call string, dst []float64, n int) {
	if len(dst) != n {
		panic(fmt.Sprintf("linalg: %s: %d places for %d eigenvalues", call, len(dst), n))
	}
}
