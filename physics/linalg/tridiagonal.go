package linalg

import "math"

// negligibleSquares is the squared norm below which the rest of a row counts
// as zero: its square root is far below the rounding unit of every matrix that
// load lets through.
const negligibleSquares = 1e-280

// reduce brings the matrix in s.work to real tridiagonal form T (s.d, s.e) by
// reflections H_i = 1 − τ u u†, i = n−1 … 1, each acting on components 0 … i−1:
// T = H_1† … H_{n−1}† A H_{n−1} … H_1 (Householder 1958; the complex factor
// that makes T real at once: Lehoucq, ACM Trans. Math. Softw. 22 (1996) 393).
//
// The column to be shortened, x_j = A_ji, is the conjugate of row i, so the
// conjugate of u is kept, in the row itself: row i of s.work holds ū, s.tau
// holds τ. In these terms, with ρ = A_{i,i−1} and real β = ∓‖x‖,
//
//	ū = row − β e_{i−1},  τ = 1/(β(β−ρ)),
//	w = τ A u − ½|τ|²(u†Au) u,  A ← A − u w† − w u†.
func (s *Solver) reduce() {
	n, w := s.n, s.work
	for i := n - 1; i >= 2; i-- {
		ur, ui := w.row(i, i)
		s.d[i] = w.Re[i*w.Stride+i]
		// Padding to a multiple of four must be zero for the assembly kernels.
		tailR, tailI := w.row(i, (i+3)&^3)
		clear(tailR[i:])
		clear(tailI[i:])
		var sumR, sumI float64
		for k, x := range ur {
			y := ui[k]
			sumR += x * x
			sumI += y * y
		}
		squares := sumR + sumI
		if squares < negligibleSquares {
			s.e[i], s.tauR[i], s.tauI[i] = 0, 0, 0
			continue
		}
		rho := ur[i-1]
		beta := -math.Copysign(math.Sqrt(squares), rho)
		s.e[i] = beta
		ur[i-1] = rho - beta
		tr, ti := -ur[i-1], -ui[i-1] // β − ρ
		// The order of these products keeps them in range for short rows.
		inverseBeta := 1 / beta
		inverseT2 := 1 / (tr*tr + ti*ti)
		tauR := tr * inverseBeta * inverseT2
		tauI := -ti * inverseBeta * inverseT2
		s.tauR[i], s.tauI[i] = tauR, tauI

		qr, qi := s.qr[:i], s.qi[:i]
		if s.assembly {
			hermitianTimesAVX2(&qr[0], &qi[0], &w.Re[0], &w.Im[0], &ur[0], &ui[0], i, w.Stride)
			clear(s.qr[i : (i+3)&^3])
			clear(s.qi[i : (i+3)&^3])
		} else {
			hermitianTimes(qr, qi, w, ur, ui)
		}
		var uAu float64
		for k, x := range ur {
			uAu += x*qr[k] + ui[k]*qi[k]
		}
		eta := -0.5 * (uAu * inverseBeta * inverseBeta) * inverseT2
		for k, x := range qr {
			y := qi[k]
			qr[k] = tauR*x + tauI*y + eta*ur[k]
			qi[k] = tauR*y - tauI*x + eta*ui[k]
		}
		if s.assembly {
			subtractRankTwoAVX2(&w.Re[0], &w.Im[0], &ur[0], &ui[0], &qr[0], &qi[0], i, w.Stride)
		} else {
			subtractRankTwo(w, ur, ui, qr, qi)
		}
	}
	if n >= 2 {
		// The last reflection is a phase on component 0.
		s.d[1] = w.Re[w.Stride+1]
		x, y := w.Re[w.Stride], w.Im[w.Stride]
		if squares := x*x + y*y; squares >= negligibleSquares {
			r := math.Sqrt(squares)
			s.e[1], s.phaseR, s.phaseI = r, x/r, -y/r
		} else {
			s.e[1], s.phaseR, s.phaseI = 0, 1, 0
		}
	}
	if n >= 1 {
		s.d[0] = w.Re[0]
	}
}
