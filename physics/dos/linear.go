package dos

// Formulas of one linear tetrahedron of unit volume with corner energies
// e1 ≤ e2 ≤ e3 ≤ e4. The plane of energy E cuts the edges i–j at the
// fraction f_ij = (E−e_i)/(e_j−e_i) from corner i. Weights of the corners are
// the integrals of the barycentric coordinates, so a quantity known at the
// corners and linear in between is its corner values times the weights.

// sortCorners orders four energies ascending and tells which corner each came
// from.
func sortCorners(e [4]float64) (s [4]float64, from [4]int) {
	s, from = e, [4]int{0, 1, 2, 3}
	order := func(i, j int) {
		if s[i] > s[j] {
			s[i], s[j] = s[j], s[i]
			from[i], from[j] = from[j], from[i]
		}
	}
	order(0, 1)
	order(2, 3)
	order(0, 2)
	order(1, 3)
	order(1, 2)
	return s, from
}

// density returns the density of states at energy x and the share of each
// corner in it (Lehmann, Taut 1972). The cut is a triangle near e1 and e4, and
// between e2 and e3 two triangles; a triangle's corners lie on edges, and
// those points' barycentric coordinates, averaged, are the shares. Between e2
// and e3 the density is written 3[f14(1−f24) + (1−f23)f24]/(e3−e1), which has
// no 0/0 when e1 = e2.
func density(e [4]float64, x float64) (g float64, w [4]float64) {
	e1, e2, e3, e4 := e[0], e[1], e[2], e[3]
	switch {
	case x < e1 || x >= e4:
		return 0, w
	case x < e2:
		f12, f13, f14 := (x-e1)/(e2-e1), (x-e1)/(e3-e1), (x-e1)/(e4-e1)
		g = 3 * f12 * f13 / (e4 - e1)
		w[0] = g / 3 * (3 - f12 - f13 - f14)
		w[1] = g / 3 * f12
		w[2] = g / 3 * f13
		w[3] = g / 3 * f14
	case x < e3:
		f13, f14 := (x-e1)/(e3-e1), (x-e1)/(e4-e1)
		f23, f24 := (x-e2)/(e3-e2), (x-e2)/(e4-e2)
		a := f14 * (1 - f24) / (e3 - e1) // triangle on edges 13, 14, 24; a third of its density
		b := (1 - f23) * f24 / (e3 - e1) // triangle on edges 13, 23, 24
		g = 3 * (a + b)
		w[0] = a*(2-f13-f14) + b*(1-f13)
		w[1] = a*(1-f24) + b*(2-f23-f24)
		w[2] = a*f13 + b*(f13+f23)
		w[3] = a*(f14+f24) + b*f24
	default:
		f14, f24, f34 := (x-e1)/(e4-e1), (x-e2)/(e4-e2), (x-e3)/(e4-e3)
		g = 3 * (1 - f14) * (1 - f24) / (e4 - e3)
		w[0] = g / 3 * (1 - f14)
		w[1] = g / 3 * (1 - f24)
		w[2] = g / 3 * (1 - f34)
		w[3] = g / 3 * (f14 + f24 + f34)
	}
	return g, w
}

// occupation returns the occupied part of the tetrahedron below energy x and
// the integrals of the barycentric coordinates over it (Blöchl, Jepsen,
// Andersen 1994, Appendix B). The occupied part is cut into tetrahedra with
// corners at tetrahedron corners and edge cuts; each has the mean of its
// corners times its volume.
func occupation(e [4]float64, x float64) (n float64, w [4]float64) {
	e1, e2, e3, e4 := e[0], e[1], e[2], e[3]
	switch {
	case x < e1:
		return 0, w
	case x >= e4:
		return 1, [4]float64{0.25, 0.25, 0.25, 0.25}
	case x < e2:
		f12, f13, f14 := (x-e1)/(e2-e1), (x-e1)/(e3-e1), (x-e1)/(e4-e1)
		n = f12 * f13 * f14
		w[0] = n / 4 * (4 - f12 - f13 - f14)
		w[1] = n / 4 * f12
		w[2] = n / 4 * f13
		w[3] = n / 4 * f14
	case x < e3:
		f13, f14 := (x-e1)/(e3-e1), (x-e1)/(e4-e1)
		f23, f24 := (x-e2)/(e3-e2), (x-e2)/(e4-e2)
		a := f13 * f14             // volume of the tetrahedron 1, 2, 13, 14
		b := (1 - f13) * f14 * f23 // of 2, 13, 14, 23
		c := (1 - f14) * f23 * f24 // of 2, 14, 23, 24
		n = a + b + c
		w[0] = (a*(1+(1-f13)+(1-f14)) + b*((1-f13)+(1-f14)) + c*(1-f14)) / 4
		w[1] = (a + b*(1+(1-f23)) + c*(1+(1-f23)+(1-f24))) / 4
		w[2] = (a*f13 + b*(f13+f23) + c*f23) / 4
		w[3] = (a*f14 + b*f14 + c*(f14+f24)) / 4
	default:
		f14, f24, f34 := (x-e1)/(e4-e1), (x-e2)/(e4-e2), (x-e3)/(e4-e3)
		v := (1 - f14) * (1 - f24) * (1 - f34) // the empty tip
		n = 1 - v
		w[0] = 0.25 - v/4*(1-f14)
		w[1] = 0.25 - v/4*(1-f24)
		w[2] = 0.25 - v/4*(1-f34)
		w[3] = 0.25 - v/4*(1+f14+f24+f34)
	}
	return n, w
}

// corrected adds to the occupation weights the correction of Blöchl, Jepsen,
// Andersen 1994, eq. (22), for the curvature of the bands that linear
// interpolation misses at the Fermi surface: D(E)/40 Σ_j (e_j − e_i).
func corrected(e [4]float64, x float64) (n float64, w [4]float64) {
	n, w = occupation(e, x)
	g, _ := density(e, x)
	if g > 0 {
		sum := e[0] + e[1] + e[2] + e[3]
		for i := range w {
			w[i] += g / 40 * (sum - 4*e[i])
		}
	}
	return n, w
}
