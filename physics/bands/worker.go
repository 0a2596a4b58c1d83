package bands

import (
	"fmt"
	"math"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/linalg"
)

func newMatrix(n int) *linalg.Matrix { return linalg.NewMatrix(n) }

// state is the solution at one k point.
type state struct {
	e []float64
	h *linalg.Matrix
	v *linalg.Matrix // vectors; those of a set may be turned among themselves
	s *linalg.Matrix // overlap, nil for an orthogonal basis
	w *linalg.Matrix // S v, or v itself
}

// worker is the workspace of one goroutine.
type worker struct {
	b         *Bands
	m         hamiltonian.Model
	starts    []marks
	evaluator hamiltonian.Evaluator
	solver    *linalg.Solver
	general   *linalg.GeneralSolver
	group     []int // of each basis function
	site      *onSite
	isBond    []bool
	terms     []float64
	now, then *state // this sample, the one before
	label     []int32
	join      *joiner
}

// groupsOf returns the group of each basis function.
func groupsOf(groups []hamiltonian.Group, n int) []int {
	of := make([]int, n)
	for g, group := range groups {
		for _, i := range group.Members {
			of[i] = g
		}
	}
	return of
}

func newWorker(m hamiltonian.Model, b *Bands, starts []marks, site *onSite) *worker {
	w := &worker{
		b: b, m: m, starts: starts, evaluator: m.NewEvaluator(), site: site,
		label: make([]int32, b.N), join: newJoiner(b.N), group: groupsOf(b.Groups, b.N),
	}
	newState := func() *state {
		s := &state{e: make([]float64, b.N), h: newMatrix(b.N), v: newMatrix(b.N)}
		s.w = s.v
		if m.Overlapping() {
			s.s, s.w = newMatrix(b.N), newMatrix(b.N)
		}
		return s
	}
	w.now, w.then = newState(), newState()
	if m.Overlapping() {
		w.general = linalg.NewGeneralSolver(b.N)
	} else {
		w.solver = linalg.NewSolver(b.N)
	}
	if site == nil && len(b.Groups) > 0 {
		for _, t := range m.Terms() {
			w.isBond = append(w.isBond, t.Kind == hamiltonian.Bond)
		}
		w.terms = make([]float64, len(w.isBond))
	}
	return w
}

// block solves the samples first … last−1 and stores them, with curves that
// refer to the levels of the base sample it returns. The base lies before the
// block, so that the chain of curves runs through the boundary.
func (w *worker) block(first, last int) (base int, err error) {
	b := w.b
	base, err = w.base(first)
	if err != nil {
		return 0, err
	}
	for i := base; i < last; i++ {
		if i > base { // base() left its sample in now
			w.now, w.then = w.then, w.now
			if err := w.solve(i, w.now); err != nil {
				return 0, err
			}
		}
		if i == base || w.starts[i]&runStart != 0 {
			for n := range w.label {
				w.label[n] = int32(n)
			}
		} else {
			w.join.step(w.then, w.now, w.label, i-1 == base || w.starts[i-1]&legStart != 0)
		}
		if i >= first {
			copy(b.E[i*b.N:], w.now.e)
			copy(b.Curve[i*b.N:], w.label)
			if len(b.Groups) > 0 {
				w.weights(i)
			}
		}
	}
	return base, nil
}

// base looks for a sample before the block where no levels just happen to
// meet: there the curves are told apart by their order alone. It leaves its
// solution in now.
func (w *worker) base(first int) (int, error) {
	i := first
	if err := w.solve(i, w.now); err != nil {
		return 0, err
	}
	const reach = 8
	for w.starts[i]&runStart == 0 && first-i < reach {
		w.now, w.then = w.then, w.now
		i--
		if err := w.solve(i, w.now); err != nil {
			return 0, err
		}
		if sameSets(w.now.e, w.then.e) {
			break
		}
	}
	return i, nil
}

func joined(e []float64, n int) bool { return e[n+1]-e[n] <= hamiltonian.SetTolerance }

func sameSets(a, b []float64) bool {
	for n := range len(a) - 1 {
		if joined(a, n) != joined(b, n) {
			return false
		}
	}
	return true
}

func (w *worker) solve(i int, s *state) error {
	k := w.b.Sampling.K[i]
	w.evaluator.Hamiltonian(k, s.h)
	var err error
	if w.general != nil {
		w.evaluator.Overlap(k, s.s)
		if err = w.general.Vectors(s.e, s.v, s.h, s.s); err == nil {
			timesHermitian(s.w, s.s, s.v)
		}
	} else {
		err = w.solver.Vectors(s.e, s.v, s.h)
	}
	if err != nil {
		return fmt.Errorf("k point %s of the path: %w", at(k), err)
	}
	return nil
}

// timesHermitian sets row i of dst to S v_i; of S the lower triangle is read.
func timesHermitian(dst, s, v *linalg.Matrix) {
	for i := range v.N {
		for a := range v.N {
			re, im := 0.0, 0.0
			for c := range v.N {
				sr, si := s.Re[a*s.Stride+c], s.Im[a*s.Stride+c]
				if c > a {
					sr, si = s.Re[c*s.Stride+a], -s.Im[c*s.Stride+a]
				}
				vr, vi := v.Re[i*v.Stride+c], v.Im[i*v.Stride+c]
				re += sr*vr - si*vi
				im += sr*vi + si*vr
			}
			dst.Re[i*dst.Stride+a], dst.Im[i*dst.Stride+a] = re, im
		}
	}
}

// weights stores the weights and net bond energies of sample i, averaged over
// each set.
func (w *worker) weights(i int) {
	b, s := w.b, w.now
	g := len(b.Groups)
	all := b.W[i*b.N*g : (i+1)*b.N*g] // zero so far
	for first := 0; first < b.N; {
		size := 1
		for first+size < b.N && joined(s.e, first+size-1) {
			size++
		}
		row := all[first*g : (first+1)*g]
		onSite, energy := 0.0, 0.0
		for n := first; n < first+size; n++ {
			re, im := s.v.Re[n*s.v.Stride:][:b.N], s.v.Im[n*s.v.Stride:][:b.N]
			wr, wi := s.w.Re[n*s.w.Stride:][:b.N], s.w.Im[n*s.w.Stride:][:b.N]
			// Mulliken weight Re c*(Sc); |c|² in an orthogonal basis.
			for a, x := range re {
				row[w.group[a]] += x*wr[a] + im[a]*wi[a]
			}
			energy += s.e[n]
			if w.site != nil && w.site.level == nil {
				onSite += w.site.energy(re, im)
			}
		}
		if w.site != nil {
			for g, level := range w.site.level {
				onSite += level * row[g]
			}
		}
		net := (energy - onSite) / float64(size)
		if w.site == nil {
			w.evaluator.TermEnergies(w.b.Sampling.K[i], s.v, first, size, w.terms)
			net = 0
			for t, x := range w.terms {
				if w.isBond[t] {
					net += x
				}
			}
		}
		b.NetBond[i*b.N+first] = net
		if size > 1 {
			share := 1 / float64(size)
			for j := range row {
				row[j] *= share
			}
			for n := first + 1; n < first+size; n++ {
				copy(all[n*g:(n+1)*g], row)
				b.NetBond[i*b.N+n] = net
			}
		}
		first += size
	}
}

// change returns the Frobenius norm of H' − H, from the lower triangles: no
// level moves by more (Weyl 1912).
func change(a, b *linalg.Matrix) float64 {
	sum := 0.0
	for i := range a.N {
		ar, ai := a.Re[i*a.Stride:][:i+1], a.Im[i*a.Stride:][:i+1]
		br, bi := b.Re[i*b.Stride:][:i+1], b.Im[i*b.Stride:][:i+1]
		for j := range i {
			dr, di := ar[j]-br[j], ai[j]-bi[j]
			sum += 2 * (dr*dr + di*di)
		}
		d := ar[i] - br[i]
		sum += d * d
	}
	return math.Sqrt(sum)
}
