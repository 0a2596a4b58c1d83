package linalg

import "golang.org/x/sys/cpu"

// haveAVX2 chooses the assembly kernels (AVX2 and FMA: Intel and AMD
// processors since about 2013 and 2015).
var haveAVX2 = cpu.X86.HasAVX2 && cpu.X86.HasFMA

//go:noescape
func hermitianTimesAVX2(qr, qi, ar, ai, ur, ui *float64, n, stride int)

//go:noescape
func subtractRankTwoAVX2(ar, ai, ur, ui, wr, wi *float64, n, stride int)

//go:noescape
func rotateRowsAVX2(z *float64, stride, columns, reach, count int, c, s *float64)

//go:noescape
func rootsAVX2(c, s *float64, count int)

//go:noescape
func reflectAVX2(yr, yi *float64, yStride int, ur, ui *float64, uStride int, tauR, tauI *float64, n, columns int)
