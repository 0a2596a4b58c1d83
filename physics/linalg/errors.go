package linalg

import (
	"errors"
	"fmt"
	"math"
)

// ErrNotFinite says that a matrix holds NaN or infinity, or that a result
// would; the error returned wraps it with row and column.
var ErrNotFinite = errors.New("number is not finite")

// ErrNoConvergence says that the QL sweeps did not converge. No matrix is
// known that causes it.
var ErrNoConvergence = errors.New("linalg: the QL sweeps did not converge")

// OverlapError says that an overlap matrix is not positive definite, or so
// close to singular that its states mean nothing: basis functions depend on
// each other.
type OverlapError struct {
	// Smallest is the smallest eigenvalue of the overlap matrix.
	Smallest float64
}

func (e *OverlapError) Error() string {
	return fmt.Sprintf("the overlap matrix is not positive definite: its smallest eigenvalue is %.6g; "+
		"use fewer or less diffuse basis functions, or check the distances between atoms", e.Smallest)
}

func notFinite(name string, row, column int, value float64) error {
	return fmt.Errorf("%s at row %d, column %d (counted from 1) is %v: %w", name, row+1, column+1, value, ErrNotFinite)
}

func finite(x float64) bool {
	return math.Abs(x) <= math.MaxFloat64
}
