//go:build !amd64

package linalg

const haveAVX2 = false

func hermitianTimesAVX2(qr, qi, ar, ai, ur, ui *float64, n, stride int) { panic(noAVX2) }

func subtractRankTwoAVX2(ar, ai, ur, ui, wr, wi *float64, n, stride int) { panic(noAVX2) }

func rotateRowsAVX2(z *float64, stride, columns, reach, count int, c, s *float64) { panic(noAVX2) }

func rootsAVX2(c, s *float64, count int) { panic(noAVX2) }

func reflectAVX2(yr, yi *float64, yStride int, ur, ui *float64, uStride int, tauR, tauI *float64, n, columns int) {
	panic(noAVX2)
}

const noAVX2 = "linalg: assembly kernel called on a processor without it"
