package bands

import (
	"context"
	"fmt"
	"math"
	"runtime"
	"sync"
	"sync/atomic"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/path"
)

// Options say what Compute gathers beside the energies and curves.
type Options struct {
	Weights  bool // weights and net bond energies
	Workers  int  // 0: one per processor
	Progress func(done, total int)
}

// Bands are the levels along a path.
type Bands struct {
	Sampling *path.Sampling
	N        int       // levels per k point
	E        []float64 // [ik*N+n], ascending in n, eV
	Groups   []hamiltonian.Group
	W        []float64 // [(ik*N+n)*len(Groups)+g], mean over the level's set; a level's weights sum to 1
	NetBond  []float64 // [ik*N+n], sum of the bond terms of the level, mean over its set, eV; negative is bonding
	// Curve gives for [ik*N+n] the curve that level n belongs to, 0 … N−1
	// within each unbroken run: the levels of one curve change continuously
	// and keep their symmetry along a leg, so curves of different symmetry
	// cross and those of the same symmetry do not.
	Curve []int32
}

// Levels returns the energies at sample ik, ascending.
func (b *Bands) Levels(ik int) []float64 { return b.E[ik*b.N : (ik+1)*b.N] }

// Weights returns the weights of level n at sample ik, one per group.
func (b *Bands) Weights(ik, n int) []float64 {
	g := len(b.Groups)
	at := (ik*b.N + n) * g
	return b.W[at : at+g]
}

// Compute solves the model at every sample. Work is shared between goroutines
// in blocks of samples; nothing is allocated per sample.
func Compute(ctx context.Context, m hamiltonian.Model, s *path.Sampling, o Options) (*Bands, error) {
	basis := m.Basis()
	n, nk := len(basis), len(s.K)
	b := &Bands{
		Sampling: s, N: n,
		E:     make([]float64, nk*n),
		Curve: make([]int32, nk*n),
	}
	var site *onSite
	if o.Weights {
		b.Groups = hamiltonian.Groups(basis)
		b.W = make([]float64, nk*n*len(b.Groups))
		b.NetBond = make([]float64, nk*n)
		site = newOnSite(m, b.Groups)
	}
	if nk == 0 {
		return b, nil
	}
	starts := marksOf(s)

	workers := o.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	// The size of the blocks does not depend on the number of workers, nor
	// does the result.
	size := min(max(nk/32, 16), 1024)
	blocks := (nk + size - 1) / size
	workers = min(workers, blocks)
	bases := make([]int, blocks) // the sample to whose levels a block's curves refer

	var next, done atomic.Int64
	var failed atomic.Bool
	var once sync.Once
	var failure error
	fail := func(err error) {
		once.Do(func() { failure = err })
		failed.Store(true)
	}
	var progress sync.Mutex
	var wg sync.WaitGroup
	for range workers {
		wg.Go(func() {
			w := newWorker(m, b, starts, site)
			for !failed.Load() {
				if err := ctx.Err(); err != nil {
					fail(err)
					return
				}
				i := int(next.Add(1)) - 1
				if i >= blocks {
					return
				}
				first, last := i*size, min((i+1)*size, nk)
				base, err := w.block(first, last)
				if err != nil {
					fail(err)
					return
				}
				bases[i] = base
				if o.Progress != nil {
					progress.Lock()
					o.Progress(int(done.Add(int64(last-first))), nk)
					progress.Unlock()
				}
			}
		})
	}
	wg.Wait()
	if failure != nil {
		return nil, failure
	}
	b.chain(bases, size, starts)
	return b, nil
}

// marks of a sample: where curves begin anew, and where a leg begins.
type marks uint8

const (
	runStart marks = 1 << iota
	legStart
)

func marksOf(s *path.Sampling) []marks {
	m := make([]marks, len(s.K))
	m[0] |= runStart | legStart
	end := -1
	for _, leg := range s.Legs {
		m[leg.First] |= legStart
		if leg.First != end {
			m[leg.First] |= runStart
		}
		end = leg.Last
	}
	return m
}

// chain turns curves that refer to the levels at each block's base sample into
// curves that refer to the start of the run.
func (b *Bands) chain(bases []int, size int, starts []marks) {
	nk := len(starts)
	for i, base := range bases {
		first, last := i*size, min((i+1)*size, nk)
		if base >= first {
			continue // began with a run
		}
		from := b.Curve[base*b.N : (base+1)*b.N]
		for ik := first; ik < last && starts[ik]&runStart == 0; ik++ {
			curve := b.Curve[ik*b.N : (ik+1)*b.N]
			for n, c := range curve {
				curve[n] = from[c]
			}
		}
	}
}

// onSite is the part of H within one atom that no k changes: on-site energies
// and spin–orbit coupling. What remains of a level's energy is bonds.
type onSite struct {
	row, column []int
	re, im      []float64
	level       []float64 // the energy of each group, if each has one and nothing couples them; else nil
}

// newOnSite finds it as the mean of H over a regular mesh fine enough that
// every bond's phase averages to zero.
func newOnSite(m hamiltonian.Model, groups []hamiltonian.Group) *onSite {
	if m.Overlapping() {
		return nil
	}
	mesh := 2
	for _, bond := range m.Bonds() {
		for _, c := range bond.Cell {
			mesh = max(mesh, c+1, -c+1)
		}
	}
	basis := m.Basis()
	n := len(basis)
	mean := newMatrix(n)
	h := newMatrix(n)
	evaluator := m.NewEvaluator()
	share := 1 / float64(mesh*mesh*mesh)
	for i := range mesh {
		for j := range mesh {
			for l := range mesh {
				k := lattice.FracK{float64(i) / float64(mesh), float64(j) / float64(mesh), float64(l) / float64(mesh)}
				evaluator.Hamiltonian(k, h)
				for a := range n {
					for c := range a + 1 {
						at := a*h.Stride + c
						mean.Re[at] += share * h.Re[at]
						mean.Im[at] += share * h.Im[at]
					}
				}
			}
		}
	}
	s := &onSite{}
	for a := range n {
		for c := range a + 1 {
			at := a*mean.Stride + c
			re, im := mean.Re[at], mean.Im[at]
			if basis[a].Site != basis[c].Site || re*re+im*im < 1e-24 {
				continue
			}
			s.row, s.column = append(s.row, a), append(s.column, c)
			s.re, s.im = append(s.re, re), append(s.im, im)
		}
	}
	s.level = s.levels(groups, n)
	return s
}

// levels returns the on-site energy of each group when H₀ is diagonal and the
// same for all functions of a group, as without spin–orbit coupling.
func (s *onSite) levels(groups []hamiltonian.Group, n int) []float64 {
	diagonal := make([]float64, n)
	for i, a := range s.row {
		if a != s.column[i] {
			return nil
		}
		diagonal[a] = s.re[i]
	}
	levels := make([]float64, len(groups))
	for g, group := range groups {
		levels[g] = diagonal[group.Members[0]]
		for _, a := range group.Members {
			if math.Abs(diagonal[a]-levels[g]) > 1e-12 {
				return nil
			}
		}
	}
	return levels
}

// energy returns c†H₀c of one state.
func (s *onSite) energy(re, im []float64) float64 {
	e := 0.0
	for i, a := range s.row {
		b := s.column[i]
		if a == b {
			e += s.re[i] * (re[a]*re[a] + im[a]*im[a])
			continue
		}
		// 2 Re(c_a* h c_b)
		xr := s.re[i]*re[b] - s.im[i]*im[b]
		xi := s.re[i]*im[b] + s.im[i]*re[b]
		e += 2 * (re[a]*xr + im[a]*xi)
	}
	return e
}

func at(k lattice.FracK) string { return fmt.Sprintf("(%.6g, %.6g, %.6g)", k[0], k[1], k[2]) }
