package linalg

import (
	"encoding/binary"
	"errors"
	"math"
	"testing"
)

// matrixFrom makes a matrix of the numbers in data, cycling; it is not finite
// if one of the numbers used is not.
func matrixFrom(data []byte, n int) *Matrix {
	at := 0
	next := func() float64 {
		var word [8]byte
		for i := range word {
			word[i] = data[at%len(data)]
			at++
		}
		return math.Float64frombits(binary.LittleEndian.Uint64(word[:]))
	}
	m := NewMatrix(n)
	for i := range n {
		for j := range i {
			re := next()
			m.Set(i, j, re, next())
		}
		m.Set(i, i, next(), 0)
	}
	return m
}

func words(x ...float64) []byte {
	var out []byte
	for _, v := range x {
		out = binary.LittleEndian.AppendUint64(out, math.Float64bits(v))
	}
	return out
}

// FuzzVectors: whatever the bits, either an element is not finite and the
// error says so, or values and vectors pass the tests of the batteries.
func FuzzVectors(f *testing.F) {
	f.Add(uint8(4), words(1, 2, 3))
	f.Add(uint8(7), words(0, 0, 1))
	f.Add(uint8(5), words(math.NaN(), 1))
	f.Add(uint8(6), words(1e308, -1e-308, 5e-324))
	f.Add(uint8(9), words(1, 1e-160, 0, 0, -1))
	f.Add(uint8(12), words(1, 0))
	f.Fuzz(func(t *testing.T, size uint8, data []byte) {
		n := int(size)%16 + 1
		if len(data) == 0 {
			return
		}
		a := matrixFrom(data, n)
		largest, wantErr := largestElement("", a)
		s, v, e := NewSolver(n), NewMatrix(n), make([]float64, n)
		for _, s.assembly = range kernelChoices() {
			err := s.Vectors(e, v, a)
			if wantErr != nil {
				if !errors.Is(err, ErrNotFinite) {
					t.Fatalf("error is %v, should be %v", err, wantErr)
				}
				continue
			}
			if err != nil {
				if errors.Is(err, ErrNotFinite) && largest > math.MaxFloat64/float64(2*n) {
					continue
				}
				t.Fatal(err)
			}
			b, f := a, e
			if largest > 1e290 { // room for the sums of the check
				b, f = NewMatrix(n), make([]float64, n)
				b.Copy(a)
				scaled(b, 0x1p-100)
				for i := range e {
					f[i] = e[i] * 0x1p-100
				}
			}
			if err := check(b, nil, f, v); err != nil {
				t.Fatalf("assembly=%t: %v", s.assembly, err)
			}
			only := make([]float64, n)
			if err := s.Values(only, a); err != nil {
				t.Fatal(err)
			}
			for i := range e {
				if d := math.Abs(e[i]/2 - only[i]/2); d > 1e-13*float64(n)*largest && d > 1e-320 {
					t.Fatalf("value %d is %g with vectors, %g without", i, e[i], only[i])
				}
			}
		}
	})
}

// FuzzGeneral: no panic, and either an error of a known kind or finite results.
func FuzzGeneral(f *testing.F) {
	f.Add(uint8(3), words(1, 2, 3), words(1, 0, 0))
	f.Add(uint8(3), words(1e300, 2, 3), words(1e-300))
	f.Add(uint8(2), words(1), words(math.Inf(1)))
	f.Fuzz(func(t *testing.T, size uint8, dataA, dataS []byte) {
		n := int(size)%10 + 1
		if len(dataA) == 0 || len(dataS) == 0 {
			return
		}
		a, s := matrixFrom(dataA, n), matrixFrom(dataS, n)
		g, v, e := NewGeneralSolver(n), NewMatrix(n), make([]float64, n)
		err := g.Vectors(e, v, a, s)
		var overlap *OverlapError
		switch {
		case errors.As(err, &overlap), errors.Is(err, ErrNotFinite):
			return
		case err != nil:
			t.Fatal(err)
		}
		for i, x := range e {
			if !finite(x) {
				t.Fatalf("value %d is %v", i, x)
			}
		}
	})
}
