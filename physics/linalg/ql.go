package linalg

import "math"

const (
	epsilon = 0x1p-52
	signBit = 1 << 63

	// zeroCosine is the squared pending diagonal element below which a
	// rotation counts as a quarter turn.
	zeroCosine = 1e-250

	sweepsPerValue = 40
)

// diagonalise finds the eigenvalues of the tridiagonal matrix in s.d, s.e by
// QL sweeps and leaves them, unsorted, in s.d. If vectors is set, row i of s.z
// becomes the eigenvector of s.d[i].
//
// The sweeps are those of Pal, Walker and Kahan (Parlett 1998, §8.15; also
// Reinsch, Comm. ACM 16 (1973) 689): squared off-diagonals, squared cosines
// and sines, and no square root on the path from one rotation to the next.
// With p the square of the pending diagonal element g, b the squared
// off-diagonal, a the next diagonal element less the shift σ:
//
//	r = p + b,  c² = p/r,  s² = b/r,  γ' = c² a − s² γ,  p' = γ'²/c².
//
// With N = p a − b γ, γ' = N/r and p' = γ'·N/p: the divisions are side by side.
//
// For the vectors the signs are needed too. Off-diagonals are taken as ≥ 0 by
// choice of the signs of the basis (the diagonal of the starting s.z). A
// sweep keeps them so but for the topmost, whose sign is tracked; sines are
// ≥ 0 but for the topmost too; and γ = c_before·g gives the sign of each
// cosine, sign g' = sign γ' · sign g. After a quarter turn (c = 0) γ' is zero
// and says nothing: then g' = −c_before·√b.
func (s *Solver) diagonalise(vectors bool) error {
	n := s.n
	if n == 0 {
		return nil
	}
	d, e2 := s.d, s.e2[:len(s.d)]
	norm := 0.0
	for i := 1; i < n; i++ {
		e2[i-1] = s.e[i] * s.e[i]
		norm = max(norm, math.Abs(d[i-1])+math.Abs(s.e[i]))
	}
	norm = max(norm, math.Abs(d[n-1]))
	e2[n-1] = 0
	if vectors {
		s.startVectors()
	}
	small := epsilon / 8 * norm
	candidate := 4 * epsilon * norm // above every t below
	candidate *= candidate
	sweeps := 0
	for l := 0; l < n-1; l++ {
		var topSign uint64 // sign of the off-diagonal l, l+1
		for {
			m := l
			for ; m < n-1; m++ {
				if e2[m] > candidate {
					continue
				}
				t := max(small, epsilon*(math.Abs(d[m])+math.Abs(d[m+1])))
				if e2[m] <= t*t {
					break
				}
			}
			if m == l {
				break
			}
			if sweeps++; sweeps > sweepsPerValue*n {
				return ErrNoConvergence
			}
			topSign = s.sweep(l, m, topSign)
			if vectors {
				s.takeRoots(l, m)
				s.rotate(l, m, sweeps)
			}
		}
	}
	return nil
}

// sweep does one QL sweep on rows l … m and leaves the squared cosine and sine
// of the rotation of rows i, i+1, with their signs, in s.cos[i], s.sin[i]. It
// takes and returns the sign bit of the topmost off-diagonal.
func (s *Solver) sweep(l, m int, topSign uint64) uint64 {
	d, e2 := s.d[:m+1], s.e2[:m+1]
	cosines, sines := s.cos[:m+1], s.sin[:m+1]

	// Wilkinson's shift: the eigenvalue of the top 2×2 block nearer to d[l].
	half := (d[l+1] - d[l]) / 2
	shift := d[l] - e2[l]/(half+math.Copysign(math.Sqrt(half*half+e2[l]), half))

	gamma := d[m] - shift
	p := gamma * gamma
	sign := math.Float64bits(gamma) & signBit // of g
	before := uint64(0)                       // sign of the cosine before
	cos2, sin2 := 1.0, 0.0
	for i := m - 1; i >= l; i-- {
		b := e2[i]
		r := p + b
		e2[i+1] = sin2 * r
		a := d[i]
		shifted := a - shift
		numerator := p*shifted - b*gamma
		inverse := 1 / r
		next := numerator * inverse
		d[i+1] = gamma + (a - next)
		oldCos2 := cos2
		cos2, sin2 = p*inverse, b*inverse
		cosines[i] = math.Float64frombits(math.Float64bits(cos2) | sign)
		sines[i] = sin2
		if p > zeroCosine {
			p = next * (numerator / p)
			before, sign = sign, sign^math.Float64bits(next)&signBit
		} else {
			p = oldCos2 * b
			before, sign = sign, before^signBit
		}
		gamma = next
	}
	e2[l] = sin2 * p
	d[l] = gamma + shift
	sines[l] = math.Float64frombits(math.Float64bits(sines[l]) | topSign)
	return topSign ^ sign
}

// takeRoots turns the signed squares that sweep left into cosines and sines.
// It is apart from the sweep, whose divisions would wait for the roots.
func (s *Solver) takeRoots(l, m int) {
	if s.assembly {
		rootsAVX2(&s.cos[l], &s.sin[l], m-l)
		return
	}
	c, sn := s.cos[l:m], s.sin[l:m]
	for i, x := range c {
		c[i] = math.Copysign(math.Sqrt(math.Abs(x)), x)
		sn[i] = math.Copysign(math.Sqrt(math.Abs(sn[i])), sn[i])
	}
}

// startVectors sets s.z to the diagonal of signs that makes all off-diagonals
// of the tridiagonal matrix non-negative.
func (s *Solver) startVectors() {
	clear(s.z)
	sign := 1.0
	for i := range s.n {
		if i > 0 && s.e[i] < 0 {
			sign = -sign
		}
		s.z[i*s.zStride+i] = sign
	}
}
