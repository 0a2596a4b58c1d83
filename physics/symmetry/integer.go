package symmetry

var identity = [3][3]int{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}

func multiply(a, b [3][3]int) (c [3][3]int) {
	for i := range 3 {
		for j := range 3 {
			c[i][j] = a[i][0]*b[0][j] + a[i][1]*b[1][j] + a[i][2]*b[2][j]
		}
	}
	return c
}

func transpose(a [3][3]int) (t [3][3]int) {
	for i := range 3 {
		for j := range 3 {
			t[j][i] = a[i][j]
		}
	}
	return t
}

func determinant(a [3][3]int) int {
	return a[0][0]*(a[1][1]*a[2][2]-a[1][2]*a[2][1]) -
		a[0][1]*(a[1][0]*a[2][2]-a[1][2]*a[2][0]) +
		a[0][2]*(a[1][0]*a[2][1]-a[1][1]*a[2][0])
}

// inverse returns the inverse of an integer matrix of determinant ±1.
func inverse(a [3][3]int) (inv [3][3]int) {
	d := determinant(a)
	for i := range 3 {
		for j := range 3 {
			p, q, r, s := (j+1)%3, (j+2)%3, (i+1)%3, (i+2)%3
			inv[i][j] = d * (a[p][r]*a[q][s] - a[p][s]*a[q][r])
		}
	}
	return inv
}

func rotate(r [3][3]int, x [3]float64) (y [3]float64) {
	for i := range 3 {
		y[i] = float64(r[i][0])*x[0] + float64(r[i][1])*x[1] + float64(r[i][2])*x[2]
	}
	return y
}
