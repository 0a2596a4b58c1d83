package linalg

// Matrix is a complex N×N matrix: real and imaginary parts in two row-major
// arrays, element (i, j) at i*Stride+j. Of a Hermitian matrix only the lower
// triangle (j ≤ i) is read. As a set of vectors, row i is vector i.
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
