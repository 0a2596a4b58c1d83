package linalg

// rotate applies the rotations of the last sweep, on rows l … m, to the vectors.
func (s *Solver) rotate(l, m, sweeps int) {
	if s.assembly {
		rotateRowsAVX2(&s.z[l*s.zStride], s.zStride, (s.n+3)&^3, sweeps-l, m-l, &s.cos[l], &s.sin[l])
		return
	}
	rotateRows(s.z, s.zStride, s.n, l, m, sweeps, s.cos, s.sin)
}

// backTransform turns the real vectors of the tridiagonal matrix, taken in
// s.order, into those of the matrix itself, H_{n−1} … H_1 z, and stores them in
// the rows of v.
func (s *Solver) backTransform(v *Matrix) {
	switch {
	case s.n <= 1:
		for i := range s.n {
			v.Set(i, i, s.z[0], 0)
		}
	case s.assembly:
		s.backTransformColumns(v)
	default:
		s.backTransformRows(v)
	}
}

// backTransformColumns keeps the vectors in columns: a register then holds one
// component of four vectors, and no sum across a register is needed.
func (s *Solver) backTransformColumns(v *Matrix) {
	n, y := s.n, s.columns
	stride := y.Stride
	for j, from := range s.order {
		z := s.z[from*s.zStride:][:n]
		o := j
		for _, x := range z {
			y.Re[o] = x
			o += stride
		}
	}
	clear(y.Im)
	r, im := y.row(0, n)
	for j, x := range r {
		r[j], im[j] = s.phaseR*x, s.phaseI*x
	}
	reflectAVX2(&y.Re[0], &y.Im[0], stride, &s.work.Re[0], &s.work.Im[0], s.work.Stride, &s.tauR[0], &s.tauI[0], n, n)
	for j := range n {
		vr, vi := v.row(j, n)
		o := j
		for k := range vr {
			vr[k], vi[k] = y.Re[o], y.Im[o]
			o += stride
		}
	}
}

// backTransformRows works on the rows of v, two at a time.
func (s *Solver) backTransformRows(v *Matrix) {
	n := s.n
	for i := range n {
		xr, xi := v.row(i, n)
		copy(xr, s.z[s.order[i]*s.zStride:])
		clear(xi)
		xr[0], xi[0] = s.phaseR*xr[0], s.phaseI*xr[0]
	}
	i := 0
	for ; i+1 < n; i += 2 {
		xr, xi := v.row(i, n)
		yr, yi := v.row(i+1, n)
		for k := 2; k < n; k++ {
			ur, ui := s.work.row(k, k)
			reflectTwo(ur, ui, s.tauR[k], s.tauI[k], xr[:k], xi[:k], yr[:k], yi[:k])
		}
	}
	if i < n {
		xr, xi := v.row(i, n)
		for k := 2; k < n; k++ {
			ur, ui := s.work.row(k, k)
			reflectOne(ur, ui, s.tauR[k], s.tauI[k], xr[:k], xi[:k])
		}
	}
}
