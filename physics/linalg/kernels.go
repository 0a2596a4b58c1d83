package linalg

// This file holds the four loops in which a solve spends its time, in plain
// Go. They work on slices of equal length, so that the compiler needs no bounds
// checks, and on two rows, two vectors or four columns at once, so that loaded
// numbers are used more than once. Where the processor has AVX2, the kernels of
// kernels_amd64.s do the same work; Solver.assembly chooses. They want full
// rows, not the lower triangle, and vectors in columns.

// hermitianTimes stores the conjugate of A u in q, where ū = (ur, ui) and A is
// the leading block of a of the length of u, lower triangle:
// q_j = Σ_{k≤j} Ā_jk ū_k + Σ_{k>j} A_kj ū_k.
func hermitianTimes(qr, qi []float64, a *Matrix, ur, ui []float64) {
	n := len(ur)
	ui, qr, qi = ui[:n], qr[:n], qi[:n]
	j := 0
	if n%2 == 1 {
		d := a.Re[0]
		qr[0], qi[0] = d*ur[0], d*ui[0]
		j = 1
	}
	for ; j+1 < n; j += 2 {
		xr, xi := a.row(j, j+1)
		yr, yi := a.row(j+1, j+2)
		u0r, u0i, u1r, u1i := ur[j], ui[j], ur[j+1], ui[j+1]
		var s0r, s0i, s1r, s1i float64
		kr, ki, pr, pi := ur[:j], ui[:j], qr[:j], qi[:j]
		x0, x1, y0, y1 := xr[:j], xi[:j], yr[:j], yi[:j]
		for k := range kr {
			vr, vi := kr[k], ki[k]
			ar, ai := x0[k], x1[k]
			br, bi := y0[k], y1[k]
			s0r += ar*vr + ai*vi
			s0i += ar*vi - ai*vr
			s1r += br*vr + bi*vi
			s1i += br*vi - bi*vr
			pr[k] += (ar*u0r - ai*u0i) + (br*u1r - bi*u1i)
			pi[k] += (ar*u0i + ai*u0r) + (br*u1i + bi*u1r)
		}
		d0, d1, cr, ci := xr[j], yr[j+1], yr[j], yi[j]
		qr[j] = s0r + d0*u0r + (cr*u1r - ci*u1i)
		qi[j] = s0i + d0*u0i + (cr*u1i + ci*u1r)
		qr[j+1] = s1r + d1*u1r + (cr*u0r + ci*u0i)
		qi[j+1] = s1i + d1*u1i + (cr*u0i - ci*u0r)
	}
}

// subtractRankTwo subtracts u w† + w u† from the lower triangle of the leading
// block of a; u and w are given by their conjugates.
func subtractRankTwo(a *Matrix, ur, ui, wr, wi []float64) {
	n := len(ur)
	ui, wr, wi = ui[:n], wr[:n], wi[:n]
	j := 0
	if n%2 == 1 {
		a.Re[0] -= 2 * (ur[0]*wr[0] + ui[0]*wi[0])
		j = 1
	}
	for ; j+1 < n; j += 2 {
		u0r, u0i, u1r, u1i := ur[j], ui[j], ur[j+1], ui[j+1]
		w0r, w0i, w1r, w1i := wr[j], wi[j], wr[j+1], wi[j+1]
		xr, xi := a.row(j, j+1)
		yr, yi := a.row(j+1, j+2)
		kr, ki, pr, pi := ur[:j], ui[:j], wr[:j], wi[:j]
		x0, x1, y0, y1 := xr[:j], xi[:j], yr[:j], yi[:j]
		for k := range kr {
			vr, vi, zr, zi := kr[k], ki[k], pr[k], pi[k]
			x0[k] -= (u0r*zr + u0i*zi) + (w0r*vr + w0i*vi)
			x1[k] -= (u0r*zi - u0i*zr) + (w0r*vi - w0i*vr)
			y0[k] -= (u1r*zr + u1i*zi) + (w1r*vr + w1i*vi)
			y1[k] -= (u1r*zi - u1i*zr) + (w1r*vi - w1i*vr)
		}
		xr[j] -= 2 * (u0r*w0r + u0i*w0i)
		yr[j] -= (u1r*w0r + u1i*w0i) + (w1r*u0r + w1i*u0i)
		yi[j] -= (u1r*w0i - u1i*w0r) + (w1r*u0i - w1i*u0r)
		yr[j+1] -= 2 * (u1r*w1r + u1i*w1i)
	}
}

// rotateRows applies the rotations of one sweep to the rows l … m of z, from
// the bottom up, four columns at a time: the row on its way up stays in
// registers. In the first sweeps z is still nearly diagonal; column k is zero
// below row k + sweeps, so the rotations there are left out.
func rotateRows(z []float64, stride, n, l, m, sweeps int, cosines, sines []float64) {
	for k := 0; k < n; k += 4 {
		bottom := min(m, k+3+sweeps)
		if bottom <= l {
			continue
		}
		c, s := cosines[l:bottom], sines[l:bottom]
		s = s[:len(c)]
		o := bottom*stride + k
		row := z[o : o+4 : o+4]
		x0, x1, x2, x3 := row[0], row[1], row[2], row[3]
		for i := len(c) - 1; i >= 0; i-- {
			ci, si := c[i], s[i]
			o -= stride
			up := z[o : o+4 : o+4]
			y0, y1, y2, y3 := up[0], up[1], up[2], up[3]
			row[0] = si*y0 + ci*x0
			row[1] = si*y1 + ci*x1
			row[2] = si*y2 + ci*x2
			row[3] = si*y3 + ci*x3
			x0 = ci*y0 - si*x0
			x1 = ci*y1 - si*x1
			x2 = ci*y2 - si*x2
			x3 = ci*y3 - si*x3
			row = up
		}
		row[0], row[1], row[2], row[3] = x0, x1, x2, x3
	}
}

// reflectTwo applies 1 − τ u u†, u given by its conjugate, to x and y.
func reflectTwo(ur, ui []float64, tauR, tauI float64, xr, xi, yr, yi []float64) {
	n := len(ur)
	ui, xr, xi, yr, yi = ui[:n], xr[:n], xi[:n], yr[:n], yi[:n]
	var sr, si, tr, ti float64
	for k, vr := range ur {
		vi := ui[k]
		ar, ai, br, bi := xr[k], xi[k], yr[k], yi[k]
		sr += vr*ar - vi*ai
		si += vr*ai + vi*ar
		tr += vr*br - vi*bi
		ti += vr*bi + vi*br
	}
	sr, si = tauR*sr-tauI*si, tauR*si+tauI*sr
	tr, ti = tauR*tr-tauI*ti, tauR*ti+tauI*tr
	for k, vr := range ur {
		vi := ui[k]
		xr[k] -= sr*vr + si*vi
		xi[k] -= si*vr - sr*vi
		yr[k] -= tr*vr + ti*vi
		yi[k] -= ti*vr - tr*vi
	}
}

// reflectOne is reflectTwo for a single vector.
func reflectOne(ur, ui []float64, tauR, tauI float64, xr, xi []float64) {
	n := len(ur)
	ui, xr, xi = ui[:n], xr[:n], xi[:n]
	var sr, si float64
	for k, vr := range ur {
		vi := ui[k]
		sr += vr*xr[k] - vi*xi[k]
		si += vr*xi[k] + vi*xr[k]
	}
	sr, si = tauR*sr-tauI*si, tauR*si+tauI*sr
	for k, vr := range ur {
		vi := ui[k]
		xr[k] -= sr*vr + si*vi
		xi[k] -= si*vr - sr*vi
	}
}
