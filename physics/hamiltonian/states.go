package hamiltonian

import (
	"errors"

	"bandwright/physics/lattice"
	"bandwright/physics/linalg"
)

// States solves a model at k points: evaluator, solver and workspaces of one
// goroutine. After the first call nothing is allocated.
type States struct {
	model     Model
	evaluator Evaluator
	basis     []Orbital
	groups    []Group

	solver  *linalg.Solver
	general *linalg.GeneralSolver // only for an overlapping basis

	h, s, v *linalg.Matrix
	dh      [3]*linalg.Matrix
	e       []float64
	k       lattice.FracK // where e and v were solved
}

// NewStates returns a solver of m for one goroutine.
func NewStates(m Model) *States {
	basis := m.Basis()
	n := len(basis)
	st := &States{
		model:     m,
		evaluator: m.NewEvaluator(),
		basis:     basis,
		groups:    Groups(basis),
		h:         linalg.NewMatrix(n),
		v:         linalg.NewMatrix(n),
		e:         make([]float64, n),
	}
	if m.Overlapping() {
		st.general = linalg.NewGeneralSolver(n)
		st.s = linalg.NewMatrix(n)
	} else {
		st.solver = linalg.NewSolver(n)
	}
	return st
}

// Model returns the model that is solved.
func (st *States) Model() Model { return st.model }

// Evaluator returns the evaluator of this goroutine.
func (st *States) Evaluator() Evaluator { return st.evaluator }

// Basis returns the basis functions. The caller must not change them.
func (st *States) Basis() []Orbital { return st.basis }

// Groups returns the basis by site and shell. The caller must not change them.
func (st *States) Groups() []Group { return st.groups }

// Len returns the number of levels per k point.
func (st *States) Len() int { return len(st.basis) }

// Energies stores the levels at k, ascending, eV, in dst, of length Len.
func (st *States) Energies(k lattice.FracK, dst []float64) error {
	st.evaluator.Hamiltonian(k, st.h)
	if st.general != nil {
		st.evaluator.Overlap(k, st.s)
		return st.general.Values(dst, st.h, st.s)
	}
	return st.solver.Values(dst, st.h)
}

// Solve returns the levels at k, ascending, eV, and the eigenvectors, row i
// that of level i, with c†Sc = 1. Both are overwritten by the next Solve.
func (st *States) Solve(k lattice.FracK) ([]float64, *linalg.Matrix, error) {
	st.k = k
	st.evaluator.Hamiltonian(k, st.h)
	var err error
	if st.general != nil {
		st.evaluator.Overlap(k, st.s)
		err = st.general.Vectors(st.e, st.v, st.h, st.s)
	} else {
		err = st.solver.Vectors(st.e, st.v, st.h)
	}
	if err != nil {
		return nil, nil, err
	}
	return st.e, st.v, nil
}

// ErrOverlapping says that a quantity is written for an orthogonal basis.
var ErrOverlapping = errors.New("not available: the basis functions of this model overlap")

// Velocities stores ∂E/∂k, Cartesian, eV Å, of each level of the last Solve
// in dst, of length Len, by Hellmann and Feynman: c†(∂H/∂k)c. Within a set
// only the mean over its members has a meaning; see Velocity.
func (st *States) Velocities(dst [][3]float64) error {
	if err := st.gradient(); err != nil {
		return err
	}
	for n := range dst {
		for d := range 3 {
			dst[n][d] = expectation(st.dh[d], st.v, n)
		}
	}
	return nil
}

// Velocity returns ∂E/∂k, Cartesian, eV Å, averaged over the set of the last
// Solve. Energy is not used.
func (st *States) Velocity(set Set) ([3]float64, error) {
	var v [3]float64
	if err := st.gradient(); err != nil {
		return v, err
	}
	for n := set.First; n < set.First+set.Size; n++ {
		for d := range 3 {
			v[d] += expectation(st.dh[d], st.v, n) / float64(set.Size)
		}
	}
	return v, nil
}

// gradient evaluates ∂H/∂k at the k point of the last Solve.
func (st *States) gradient() error {
	if st.general != nil {
		return ErrOverlapping
	}
	if st.dh[0] == nil {
		for d := range st.dh {
			st.dh[d] = linalg.NewMatrix(len(st.basis))
		}
	}
	st.evaluator.Gradient(st.k, &st.dh)
	return nil
}

// expectation returns c†Ac for row n of v and a Hermitian matrix of which
// only the lower triangle is read.
func expectation(a, v *linalg.Matrix, n int) float64 {
	re := v.Re[n*v.Stride : n*v.Stride+v.N]
	im := v.Im[n*v.Stride : n*v.Stride+v.N]
	var sum float64
	for i := range a.N {
		ar := a.Re[i*a.Stride : i*a.Stride+i+1]
		ai := a.Im[i*a.Stride : i*a.Stride+i+1]
		// t = Σ_{j<i} A_ij c_j; the pair (i, j), (j, i) gives 2 Re(c_i* t).
		var tr, ti float64
		for j := range i {
			tr += ar[j]*re[j] - ai[j]*im[j]
			ti += ar[j]*im[j] + ai[j]*re[j]
		}
		sum += 2*(re[i]*tr+im[i]*ti) + ar[i]*(re[i]*re[i]+im[i]*im[i])
	}
	return sum
}

// GroupWeights stores the weight |c|² of each of Groups in level n of the
// last Solve. The weights of a level sum to 1. Only for an orthogonal basis.
func (st *States) GroupWeights(n int, dst []float64) error {
	if st.general != nil {
		return ErrOverlapping
	}
	re := st.v.Re[n*st.v.Stride : n*st.v.Stride+st.v.N]
	im := st.v.Im[n*st.v.Stride : n*st.v.Stride+st.v.N]
	for g := range st.groups {
		var w float64
		for _, i := range st.groups[g].Members {
			w += re[i]*re[i] + im[i]*im[i]
		}
		dst[g] = w
	}
	return nil
}
