package linalg

import (
	"fmt"
	"testing"
)

func BenchmarkVectors(b *testing.B) {
	for _, n := range []int{8, 10, 20, 40} {
		b.Run(fmt.Sprintf("n=%d", n), func(b *testing.B) {
			all := lcgMatrices(n)
			s, v, e := NewSolver(n), NewMatrix(n), make([]float64, n)
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if err := s.Vectors(e, v, all[i%len(all)]); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkValues(b *testing.B) {
	for _, n := range []int{8, 10, 20, 40} {
		b.Run(fmt.Sprintf("n=%d", n), func(b *testing.B) {
			all := lcgMatrices(n)
			s, e := NewSolver(n), make([]float64, n)
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if err := s.Values(e, all[i%len(all)]); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkGeneralVectors(b *testing.B) {
	for _, n := range []int{8, 20, 40} {
		b.Run(fmt.Sprintf("n=%d", n), func(b *testing.B) {
			all := lcgMatrices(n)
			overlap := NewMatrix(n)
			for i := range n {
				for j := range i {
					overlap.Set(i, j, all[0].Re[i*all[0].Stride+j]*0.3/float64(n), 0)
				}
				overlap.Set(i, i, 1, 0)
			}
			s, v, e := NewGeneralSolver(n), NewMatrix(n), make([]float64, n)
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if err := s.Vectors(e, v, all[i%len(all)], overlap); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
