package dos

import (
	"context"
	"fmt"
	"math"
	"runtime"
	"sync"
	"sync/atomic"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/symmetry"
)

// Options say what Compute gathers beside the energies.
type Options struct {
	Projections bool // weights by atom and angular momentum
	Terms       bool // energies of the Hamiltonian's terms, for COHP and band-energy parts
	Workers     int  // 0: one per processor
	Progress    func(done, total int)
	Tetrahedra  *Tetrahedra // of the same mesh and lattice, to reuse; nil: made here
}

// DOS holds the energies of a model on a mesh, ready for tetrahedra. It is
// read-only and safe to share.
type DOS struct {
	Mesh       *symmetry.Mesh
	N          int       // levels per k point
	E          []float64 // [ik*N+n], ascending in n, eV
	Degeneracy float64   // electrons per level: 2, or 1 with spin–orbit coupling
	Electrons  float64   // valence electrons per cell
	Groups     []hamiltonian.Group
	Terms      []hamiltonian.Term

	// FermiLevel is where the electrons are used up (eV); in the middle of the
	// gap when there is one on the mesh.
	FermiLevel float64
	// Gapped reports that whole bands are filled and a gap follows on the
	// mesh, from Top to Bottom (eV).
	Gapped      bool
	Top, Bottom float64

	tetrahedra *Tetrahedra
	columns    int       // quantities per state
	values     []float64 // [(ik*N+n)*columns+c]
	groups     []share   // per Groups
	terms      []share   // per Terms
}

// share says which column of values holds a quantity, summed over equivalent
// atoms, and what part of it belongs to one atom.
type share struct {
	column int
	part   float64
}

// Compute solves the model on the irreducible mesh. Weights of a single
// orbital or of one of several equivalent atoms are not invariant under the
// point group: they are summed over the shell and the equivalent atoms before
// the mesh is reduced, and shared out equally afterwards.
func Compute(ctx context.Context, m hamiltonian.Model, g *symmetry.Group, mesh *symmetry.Mesh, o Options) (*DOS, error) {
	basis := m.Basis()
	n := len(basis)
	d := &DOS{
		Mesh: mesh, N: n, E: make([]float64, len(mesh.K)*n),
		Degeneracy: float64(m.SpinDegeneracy()), Electrons: m.Electrons(),
		tetrahedra: o.Tetrahedra,
	}
	if most := d.Degeneracy * float64(n); d.Electrons < 0 || d.Electrons > most {
		return nil, fmt.Errorf("the model has %g electrons per cell and room for %g: check the electron count of the parameter set", d.Electrons, most)
	}
	if d.tetrahedra == nil {
		d.tetrahedra = NewTetrahedra(mesh, m.Crystal().Lattice())
	}
	d.layOut(m, g, o)
	if err := d.solve(ctx, m, o); err != nil {
		return nil, err
	}
	d.findFermiLevel()
	return d, nil
}

// layOut assigns columns.
func (d *DOS) layOut(m hamiltonian.Model, g *symmetry.Group, o Options) {
	orbit := make([]int, len(m.Crystal().Sites))
	size := make([]float64, len(orbit))
	for i, sites := range g.EquivalentSites() {
		for _, s := range sites {
			orbit[s], size[s] = i, float64(len(sites))
		}
	}
	type key struct {
		kind  hamiltonian.TermKind
		group bool
		orbit int
		l     hamiltonian.AngularMomentum
	}
	columns := map[key]int{}
	column := func(k key) int {
		c, ok := columns[k]
		if !ok {
			c = d.columns
			columns[k] = c
			d.columns++
		}
		return c
	}
	if o.Projections {
		d.Groups = hamiltonian.Groups(m.Basis())
		for _, group := range d.Groups {
			c := column(key{group: true, orbit: orbit[group.Site], l: group.L})
			d.groups = append(d.groups, share{c, 1 / size[group.Site]})
		}
	}
	if o.Terms {
		d.Terms = m.Terms()
		for _, term := range d.Terms {
			if term.Kind == hamiltonian.Bond {
				// A bond term runs over all bonds of a shell: invariant already.
				d.terms = append(d.terms, share{d.columns, 1})
				d.columns++
				continue
			}
			c := column(key{kind: term.Kind, orbit: orbit[term.Site], l: term.L})
			d.terms = append(d.terms, share{c, 1 / size[term.Site]})
		}
	}
	d.values = make([]float64, len(d.E)*d.columns)
}

const block = 32 // k points a worker takes at a time

func (d *DOS) solve(ctx context.Context, m hamiltonian.Model, o Options) error {
	total := len(d.Mesh.K)
	blocks := (total + block - 1) / block
	workers := min(workerCount(o.Workers), blocks)
	var next, done atomic.Int64
	var once sync.Once
	var failed atomic.Bool
	var failure error
	fail := func(err error) {
		once.Do(func() { failure = err })
		failed.Store(true)
	}
	var progress sync.Mutex
	var wg sync.WaitGroup
	for range workers {
		wg.Go(func() {
			w := d.newWorker(m)
			for !failed.Load() {
				if err := ctx.Err(); err != nil {
					fail(err)
					return
				}
				b := int(next.Add(1)) - 1
				if b >= blocks {
					return
				}
				first, last := b*block, min((b+1)*block, total)
				for ik := first; ik < last; ik++ {
					if err := w.solve(ik); err != nil {
						fail(fmt.Errorf("k point %v of the mesh: %w", d.Mesh.K[ik], err))
						return
					}
				}
				if o.Progress != nil {
					progress.Lock()
					o.Progress(int(done.Add(int64(last-first))), total)
					progress.Unlock()
				}
			}
		})
	}
	wg.Wait()
	return failure
}

func workerCount(asked int) int {
	if asked > 0 {
		return asked
	}
	return runtime.GOMAXPROCS(0)
}

// worker is the workspace of one goroutine.
type worker struct {
	d       *DOS
	states  *hamiltonian.States
	terms   []float64
	weights []float64
}

func (d *DOS) newWorker(m hamiltonian.Model) *worker {
	return &worker{
		d: d, states: hamiltonian.NewStates(m),
		terms: make([]float64, len(d.Terms)), weights: make([]float64, len(d.Groups)),
	}
}

func (w *worker) solve(ik int) error {
	d := w.d
	k := d.Mesh.K[ik]
	e := d.E[ik*d.N : (ik+1)*d.N]
	if d.columns == 0 {
		return w.states.Energies(k, e)
	}
	levels, v, err := w.states.Solve(k)
	if err != nil {
		return err
	}
	copy(e, levels)
	for first := 0; first < d.N; {
		size := 1
		for first+size < d.N && e[first+size]-e[first+size-1] <= hamiltonian.SetTolerance {
			size++
		}
		row := d.values[(ik*d.N+first)*d.columns : (ik*d.N+first+1)*d.columns]
		if len(d.Groups) > 0 {
			for n := first; n < first+size; n++ {
				if err := w.states.GroupWeights(n, w.weights); err != nil {
					return err
				}
				for i, s := range d.groups {
					row[s.column] += w.weights[i] / float64(size)
				}
			}
		}
		if len(d.Terms) > 0 {
			w.states.Evaluator().TermEnergies(k, v, first, size, w.terms)
			for i, s := range d.terms {
				row[s.column] += w.terms[i]
			}
		}
		for i := 1; i < size; i++ {
			at := (ik*d.N + first + i) * d.columns
			copy(d.values[at:at+d.columns], row)
		}
		first += size
	}
	return nil
}

// corners returns the energies of band n at the corners of tetrahedron t,
// ascending, and which corner each belongs to.
func (d *DOS) corners(t, n int) ([4]float64, [4]int) {
	c := &d.tetrahedra.Corners[t]
	return sortCorners([4]float64{
		d.E[int(c[0])*d.N+n], d.E[int(c[1])*d.N+n], d.E[int(c[2])*d.N+n], d.E[int(c[3])*d.N+n],
	})
}

// BandRange returns the lowest and highest energy of band n on the mesh.
func (d *DOS) BandRange(n int) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for i := n; i < len(d.E); i += d.N {
		low, high = min(low, d.E[i]), max(high, d.E[i])
	}
	return low, high
}

// Range returns the lowest and the highest energy on the mesh, eV.
func (d *DOS) Range() (low, high float64) {
	low, _ = d.BandRange(0)
	_, high = d.BandRange(d.N - 1)
	return low, high
}

// Count returns the number of electrons per cell in states below energy x and
// the density of states there, from the linear tetrahedra.
func (d *DOS) Count(x float64) (electrons, dens float64) {
	for n := range d.N {
		low, high := d.BandRange(n)
		c, g := d.countBand(n, low, high, x)
		electrons += c
		dens += g
	}
	return d.Degeneracy * electrons, d.Degeneracy * dens
}

func (d *DOS) countBand(n int, low, high, x float64) (filled, dens float64) {
	switch {
	case x < low:
		return 0, 0
	case x >= high:
		return 1, 0
	}
	for t, weight := range d.tetrahedra.Weight {
		e, _ := d.corners(t, n)
		switch {
		case x < e[0]:
		case x >= e[3]:
			filled += weight
		default:
			c, _ := occupation(e, x)
			g, _ := density(e, x)
			filled += weight * c
			dens += weight * g
		}
	}
	return filled, dens
}

// Above returns the electrons per cell in the bands from the given one (from 0)
// upwards, when states below energy x are filled: the carriers of a semimetal.
func (d *DOS) Above(band int, x float64) float64 {
	filled := 0.0
	for n := band; n < d.N; n++ {
		low, high := d.BandRange(n)
		c, _ := d.countBand(n, low, high, x)
		filled += c
	}
	return d.Degeneracy * filled
}

// findFermiLevel brackets the level where the electron count is reached and
// halves the bracket, taking a Newton step instead where that stays inside.
func (d *DOS) findFermiLevel() {
	type limits struct{ low, high float64 }
	bands := make([]limits, d.N)
	for n := range bands {
		bands[n].low, bands[n].high = d.BandRange(n)
	}
	wanted := d.Electrons / d.Degeneracy
	if filled := math.Round(wanted); math.Abs(wanted-filled) < 1e-9 {
		nb := int(filled)
		switch {
		case nb == 0:
			d.FermiLevel = bands[0].low
			return
		case nb == d.N:
			d.FermiLevel = bands[nb-1].high
			return
		case bands[nb].low >= bands[nb-1].high:
			d.Top, d.Bottom = bands[nb-1].high, bands[nb].low
			d.Gapped = d.Bottom-d.Top > hamiltonian.SetTolerance
			d.FermiLevel = (d.Top + d.Bottom) / 2
			return
		}
	}
	low, high := bands[0].low, bands[d.N-1].high
	x := (low + high) / 2
	for range 200 {
		if high-low <= 1e-13*max(1, math.Abs(low)+math.Abs(high)) {
			break
		}
		count, dens := 0.0, 0.0
		for n, b := range bands {
			c, g := d.countBand(n, b.low, b.high, x)
			count += c
			dens += g
		}
		if count == wanted {
			break
		}
		if count < wanted {
			low = x
		} else {
			high = x
		}
		step := (wanted - count) / dens // infinite or NaN where the density vanishes
		if next := x + step; next > low && next < high {
			x = next
			if math.Abs(step) < 1e-12 {
				break
			}
			continue
		}
		x = (low + high) / 2
	}
	d.FermiLevel = x
}

// Integrals are sums over the occupied states, per cell and both spins.
type Integrals struct {
	Electrons  float64
	BandEnergy float64   // Σ of occupied level energies, eV
	Groups     []float64 // electrons, per DOS.Groups
	Terms      []float64 // eV, per DOS.Terms: integrated COHP of bond terms, on-site and spin–orbit energies; they sum to BandEnergy
}

// Integrate sums over the states below energy x with the corrected weights of
// Blöchl, Jepsen, Andersen 1994.
func (d *DOS) Integrate(x float64) Integrals {
	weights := make([]float64, len(d.E))
	for t, weight := range d.tetrahedra.Weight {
		corner := &d.tetrahedra.Corners[t]
		for n := range d.N {
			e, from := d.corners(t, n)
			if x < e[0] {
				break // and so are the bands above at every corner of this order
			}
			_, w := corrected(e, x)
			for i, f := range from {
				weights[int(corner[f])*d.N+n] += weight * w[i]
			}
		}
	}
	var r Integrals
	sums := make([]float64, d.columns)
	for i, w := range weights {
		if w == 0 {
			continue
		}
		w *= d.Degeneracy
		r.Electrons += w
		r.BandEnergy += w * d.E[i]
		for c, v := range d.values[i*d.columns : (i+1)*d.columns] {
			sums[c] += w * v
		}
	}
	r.Groups = shared(d.groups, sums)
	r.Terms = shared(d.terms, sums)
	return r
}

func shared(shares []share, sums []float64) []float64 {
	if shares == nil {
		return nil
	}
	out := make([]float64, len(shares))
	for i, s := range shares {
		out[i] = s.part * sums[s.column]
	}
	return out
}
