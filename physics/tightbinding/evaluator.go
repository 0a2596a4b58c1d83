package tightbinding

import (
	"math"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/linalg"
)

// evaluator computes matrices and energies of a model at a k point.
type evaluator struct {
	m *Model
	w []float64 // bond orders of one block

	// The matrix elements of each bond term at the k point of the last call
	// of TermEnergies; all levels of a k point share them.
	re, im []float64
	k      lattice.FracK
	summed bool
}

// NewEvaluator returns an evaluator for one goroutine.
func (m *Model) NewEvaluator() hamiltonian.Evaluator {
	size := 0
	for i := range m.blocks {
		size = max(size, len(m.blocks[i].v))
	}
	entries := len(m.sums.term)
	return &evaluator{m: m, w: make([]float64, size), re: make([]float64, entries), im: make([]float64, entries)}
}

// phase returns cos and sin of k·d, d the vector of the block.
func (b *block) phase(k lattice.FracK) (cos, sin float64) {
	sin, cos = math.Sincos(2 * math.Pi * (k[0]*b.turns[0] + k[1]*b.turns[1] + k[2]*b.turns[2]))
	return cos, sin
}

// Hamiltonian fills the lower triangle of H(k), eV.
func (e *evaluator) Hamiltonian(k lattice.FracK, h *linalg.Matrix) {
	m := e.m
	h.Zero()
	for i, energy := range m.onsite {
		h.Re[i*h.Stride+i] = energy
	}
	for i := range m.blocks {
		b := &m.blocks[i]
		cos, sin := b.phase(k)
		b.add(h, cos, sin)
	}
	if m.spinOrbit {
		m.copyDown(h)
		for i := range m.spins {
			s := &m.spins[i]
			at := s.i*h.Stride + s.j
			h.Re[at] += s.re
			h.Im[at] += s.im
		}
	}
}

// add adds (re + i im)·V to the block's place in the lower triangle and, on
// the diagonal, the same of the bond seen from its other end.
func (b *block) add(h *linalg.Matrix, re, im float64) {
	if b.onAtom {
		for i := range b.rows {
			at := (b.row+i)*h.Stride + b.col
			hr, hi := h.Re[at:at+i+1], h.Im[at:at+i+1]
			even, odd := b.even[i*b.cols:], b.odd[i*b.cols:]
			for j := range hr {
				hr[j] += re * even[j]
				hi[j] += im * odd[j]
			}
		}
		return
	}
	for i := range b.rows {
		at := (b.row+i)*h.Stride + b.col
		hr, hi := h.Re[at:at+b.cols], h.Im[at:at+b.cols]
		v := b.v[i*b.cols : i*b.cols+b.cols]
		for j, x := range v {
			hr[j] += re * x
			hi[j] += im * x
		}
	}
}

// addDerivative adds i·d·e^{ik·d}·V; the other end gets −i·d, so
// that on the diagonal even and odd change places.
func (b *block) addDerivative(h *linalg.Matrix, d, cos, sin float64) {
	if b.onAtom {
		for i := range b.rows {
			at := (b.row+i)*h.Stride + b.col
			hr, hi := h.Re[at:at+i+1], h.Im[at:at+i+1]
			even, odd := b.even[i*b.cols:], b.odd[i*b.cols:]
			for j := range hr {
				hr[j] -= d * sin * even[j]
				hi[j] += d * cos * odd[j]
			}
		}
		return
	}
	b.add(h, -d*sin, d*cos)
}

// copyDown copies the block of spin up to that of spin down.
func (m *Model) copyDown(h *linalg.Matrix) {
	for i := range m.n0 {
		up, down := i*h.Stride, (m.n0+i)*h.Stride+m.n0
		copy(h.Re[down:down+i+1], h.Re[up:up+i+1])
		copy(h.Im[down:down+i+1], h.Im[up:up+i+1])
	}
}

// Overlap fills the lower triangle of the unit matrix: the basis is orthogonal.
func (e *evaluator) Overlap(_ lattice.FracK, s *linalg.Matrix) {
	s.Zero()
	for i := range s.N {
		s.Re[i*s.Stride+i] = 1
	}
}

// Gradient fills the lower triangles of ∂H/∂k along x, y, z, eV Å.
func (e *evaluator) Gradient(k lattice.FracK, dh *[3]*linalg.Matrix) {
	m := e.m
	for _, h := range dh {
		h.Zero()
	}
	for i := range m.blocks {
		b := &m.blocks[i]
		cos, sin := b.phase(k)
		for axis, h := range dh {
			b.addDerivative(h, b.vector[axis], cos, sin)
		}
	}
	if m.spinOrbit {
		for _, h := range dh {
			m.copyDown(h)
		}
	}
}

// orders stores w_μν = 2 Re⟨c_μ* e^{ik·d} c_ν⟩ of a block, averaged over rows
// first … first+size−1 of v and summed over spins, so that the energy of the
// bond is Σ w_μν V_μν.
func (e *evaluator) orders(b *block, k lattice.FracK, v *linalg.Matrix, first, size int) []float64 {
	w := e.w[:b.rows*b.cols]
	clear(w)
	cos, sin := b.phase(k)
	scale := 2 / float64(size)
	cos, sin = scale*cos, scale*sin
	for n := first; n < first+size; n++ {
		for spin := 0; spin < v.N; spin += e.m.n0 {
			at := n*v.Stride + spin
			rowRe, rowIm := v.Re[at+b.row:at+b.row+b.rows], v.Im[at+b.row:at+b.row+b.rows]
			colRe, colIm := v.Re[at+b.col:at+b.col+b.cols], v.Im[at+b.col:at+b.col+b.cols]
			for i := range rowRe {
				// c_μ* e^{ik·d}
				re := rowRe[i]*cos + rowIm[i]*sin
				im := rowRe[i]*sin - rowIm[i]*cos
				out := w[i*b.cols : i*b.cols+b.cols]
				for j := range out {
					out[j] += re*colRe[j] - im*colIm[j]
				}
			}
		}
	}
	return w
}

// TermEnergies stores the energy of each term, eV, averaged over rows
// first … first+size−1 of v.
func (e *evaluator) TermEnergies(k lattice.FracK, v *linalg.Matrix, first, size int, dst []float64) {
	m := e.m
	dst = dst[:len(m.terms)]
	clear(dst)
	mean := 1 / float64(size)
	for n := first; n < first+size; n++ {
		row := n * v.Stride
		for spin := 0; spin < v.N; spin += m.n0 {
			re, im := v.Re[row+spin:row+spin+m.n0], v.Im[row+spin:row+spin+m.n0]
			for i := range re {
				dst[m.owner[i]] += mean * m.onsite[i] * (re[i]*re[i] + im[i]*im[i])
			}
		}
		re, im := v.Re[row:row+v.N], v.Im[row:row+v.N]
		for i := range m.spins {
			s := &m.spins[i]
			// 2 Re(c_i* H_ij c_j)
			tr := s.re*re[s.j] - s.im*im[s.j]
			ti := s.re*im[s.j] + s.im*re[s.j]
			dst[s.term] += 2 * mean * (re[s.i]*tr + im[s.i]*ti)
		}
	}
	if !e.summed || e.k != k {
		m.sums.at(k, m.blocks, e.re, e.im)
		e.k, e.summed = k, true
	}
	for i := range m.sums.cells {
		c := &m.sums.cells[i]
		// ρ = ⟨c_row* c_col⟩; an element off the diagonal stands for two.
		var rr, ri float64
		for n := first; n < first+size; n++ {
			for spin := 0; spin < v.N; spin += m.n0 {
				at := n*v.Stride + spin
				ar, ai, br, bi := v.Re[at+c.row], v.Im[at+c.row], v.Re[at+c.col], v.Im[at+c.col]
				rr += ar*br + ai*bi
				ri += ar*bi - ai*br
			}
		}
		scale := 2 * mean
		if c.row == c.col {
			scale = mean
		}
		rr, ri = scale*rr, scale*ri
		for entry := c.first; entry < c.last; entry++ {
			dst[m.sums.term[entry]] += rr*e.re[entry] - ri*e.im[entry]
		}
	}
}

// BondEnergies stores the energy of each bond, eV, averaged over rows
// first … first+size−1 of v.
func (e *evaluator) BondEnergies(k lattice.FracK, v *linalg.Matrix, first, size int, dst []float64) {
	for i := range e.m.blocks {
		b := &e.m.blocks[i]
		var sum float64
		for j, w := range e.orders(b, k, v, first, size) {
			sum += w * b.v[j]
		}
		dst[i] = sum
	}
}
