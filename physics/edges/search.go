package edges

import (
	"context"
	"fmt"
	"math"
	"slices"
	"sort"

	"github.com/go-gl/mathgl/mgl64"
	"gonum.org/v1/gonum/mat"

	"bandwright/physics/dos"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/symmetry"
)

// quantity is what a search makes smallest: E_upper − E_lower, where −1 leaves
// a level out. The top of a band is the smallest −E.
type quantity struct{ lower, upper int }

func (q quantity) of(e []float64) float64 {
	f := 0.0
	if q.upper >= 0 {
		f += e[q.upper]
	}
	if q.lower >= 0 {
		f -= e[q.lower]
	}
	return f
}

// search is the workspace of one search.
type search struct {
	states  *hamiltonian.States
	model   hamiltonian.Model
	l       lattice.Lattice
	unit    float64 // 2π/a, Å⁻¹
	spacing float64 // of the mesh, Å⁻¹
	group   *symmetry.Group
	mesh    *dos.DOS
	q       quantity
	e       []float64
	err     error
}

func newSearch(m hamiltonian.Model, g *symmetry.Group, d *dos.DOS, q quantity) *search {
	setting := m.Crystal().Setting
	s := &search{
		states: hamiltonian.NewStates(m), model: m, l: setting.Lattice, unit: 2 * math.Pi / setting.A,
		group: g, mesh: d, q: q, e: make([]float64, d.N),
	}
	for i, n := range d.Mesh.Divisions {
		s.spacing = max(s.spacing, s.l.B(i).Len()/float64(n))
	}
	return s
}

// at returns the quantity at k; after an error, infinity.
func (s *search) at(k lattice.FracK) float64 {
	if err := s.states.Energies(k, s.e); err != nil {
		s.err = fmt.Errorf("k point %v: %w", k, err)
		return math.Inf(1)
	}
	return s.q.of(s.e)
}

type candidate struct {
	k lattice.FracK
	f float64
}

// window is how far above the lowest mesh point a mesh minimum may lie and
// still be refined: more than refinement gains on any mesh in use.
const window = 0.5 // eV

const mostCandidates = 16

// tie is the difference of extrema that counts as none, eV.
const tie = 1e-8

// lowest returns the place and the value of the smallest quantity.
func (s *search) lowest(ctx context.Context, extra []lattice.FracK) (lattice.FracK, float64, error) {
	list := s.meshMinima()
	for _, k := range extra {
		list = append(list, candidate{k, s.at(k)})
	}
	lowest := math.Inf(1)
	for _, c := range list {
		lowest = min(lowest, c.f)
	}
	list = slices.DeleteFunc(list, func(c candidate) bool { return c.f > lowest+window })
	byValue := func() { sort.SliceStable(list, func(i, j int) bool { return list[i].f < list[j].f }) }
	// First all of them roughly, then those that may still win.
	for i := range list {
		if err := ctx.Err(); err != nil {
			return lattice.FracK{}, 0, err
		}
		list[i] = s.compass(list[i], s.spacing/2, 2e-3*s.unit)
	}
	byValue()
	rough := list[0].f
	best, smallest := candidate{f: math.Inf(1)}, math.MaxInt
	for _, c := range list {
		if err := ctx.Err(); err != nil {
			return lattice.FracK{}, 0, err
		}
		if c.f > rough+1e-3 {
			break
		}
		// Of equal extrema, as on a band that is flat along a line, take the
		// one of highest symmetry.
		c = s.polish(c)
		size := len(s.group.Star(c.k, true))
		if c.f < best.f-tie || c.f < best.f+tie && size < smallest {
			best, smallest = c, size
		}
	}
	return best.k, best.f, s.err
}

// meshMinima lists the mesh points that no neighbour lies below.
func (s *search) meshMinima() []candidate {
	mesh, d := s.mesh.Mesh, s.mesh.Mesh.Divisions
	value := func(ik int) float64 { return s.q.of(s.mesh.E[ik*s.mesh.N : (ik+1)*s.mesh.N]) }
	var list []candidate
	for ik, k := range mesh.K {
		f := value(ik)
		var at [3]int
		for i := range at {
			at[i] = int(math.Round(k[i] * float64(d[i])))
		}
		lowest := true
		for n := range 27 {
			step := [3]int{n%3 - 1, n/3%3 - 1, n/9 - 1}
			var p [3]int
			for i := range p {
				p[i] = ((at[i]+step[i])%d[i] + d[i]) % d[i]
			}
			if value(int(mesh.Index[p[0]+d[0]*(p[1]+d[1]*p[2])])) < f-1e-9 {
				lowest = false
				break
			}
		}
		if lowest {
			list = append(list, candidate{k, f})
		}
	}
	sort.SliceStable(list, func(i, j int) bool { return list[i].f < list[j].f })
	n := 0
	for n < len(list) && n < mostCandidates && list[n].f <= list[0].f+window {
		n++
	}
	return list[:n]
}

// directions are the axes, face and space diagonals of a cube.
var directions = func() []mgl64.Vec3 {
	var out []mgl64.Vec3
	for n := range 27 {
		v := mgl64.Vec3{float64(n%3 - 1), float64(n/3%3 - 1), float64(n/9 - 1)}
		if n != 13 {
			out = append(out, v.Normalize())
		}
	}
	return out
}()

// turning is a rotation by one radian about an axis of no symmetry: applied at
// each refinement it lets the directions fill the sphere, so that the search
// does not stop on a crease between bands.
var turning = mgl64.HomogRotate3D(1, mgl64.Vec3{3, 5, 7}.Normalize()).Mat3()

// compass walks downhill in steps of step, halved when no direction leads
// down, until the step is below least (both Å⁻¹). It needs no derivatives, so
// it also finds extrema where bands touch.
func (s *search) compass(c candidate, step, least float64) candidate {
	turn := mgl64.Ident3()
	for step >= least && s.err == nil {
		best := c
		for _, d := range directions {
			move := s.l.Frac(lattice.CartK(turn.Mul3x1(d).Mul(step)))
			k := c.k.Add(move)
			if f := s.at(k); f < best.f {
				best = candidate{k, f}
			}
		}
		// A gain within rounding is none.
		if best.f < c.f-1e-14*(1+math.Abs(c.f)) {
			c = best
			continue
		}
		step /= 2
		turn = turning.Mul3(turn)
	}
	return c
}

// polish brings a rough minimum to its exact place: by Newton's method with
// velocities where the bands are smooth, else by compass alone; and onto the
// point, line or plane of symmetry that it lies on.
func (s *search) polish(c candidate) candidate {
	// A minimum on a symmetric place is often already at hand, up to the step
	// of the rough walk: try that place first.
	if near := s.symmetrised(c.k, 5e-3); near.f <= c.f {
		c = near
	}
	if refined, ok := s.newton(c); ok {
		c = refined
	} else {
		c = s.compass(c, 2e-3*s.unit, 1e-9*s.unit)
	}
	if exact := s.symmetrised(c.k, placeTolerance); exact.f <= c.f+1e-9 {
		c = exact
	}
	return c
}

// symmetrised returns the mean of the images of k that lie within tol (2π/a)
// of it: the point of higher symmetry nearby, if any.
func (s *search) symmetrised(k lattice.FracK, tol float64) candidate {
	var sum lattice.FracK
	n := 0.0
	for i := range s.group.Ops {
		image := s.group.ApplyK(i, k)
		for _, sign := range []float64{1, -1} {
			var d lattice.FracK
			for j := range d {
				d[j] = sign*image[j] - k[j]
				d[j] -= math.Round(d[j])
			}
			if s.l.Cart(d).Vec().Len() <= tol*s.unit {
				sum = sum.Add(d)
				n++
			}
		}
	}
	for j := range k {
		k[j] += sum[j] / n // the identity is always counted
		for _, denominator := range []float64{1, 48} {
			if r := math.Round(k[j]*denominator) / denominator; math.Abs(k[j]-r) < 1e-13 {
				k[j] = r
			}
		}
		k[j] += 0 // no negative zero
	}
	return candidate{k, s.at(k)}
}

// newton refines a minimum of smooth bands. It reports failure where the bands
// are not smooth, and where it does not converge downhill.
func (s *search) newton(c candidate) (candidate, bool) {
	const delta = 1e-3 // Å⁻¹, for the change of the velocity
	for range 30 {
		gradient, sets, ok := s.gradient(c.k, nil)
		if !ok {
			return c, false
		}
		var hessian [9]float64
		for axis := range 3 {
			var shift lattice.CartK
			shift[axis] = delta
			f := s.l.Frac(shift)
			plus, _, ok1 := s.gradient(c.k.Add(f), sets)
			minus, _, ok2 := s.gradient(c.k.Add(lattice.FracK{-f[0], -f[1], -f[2]}), sets)
			if !ok1 || !ok2 {
				return c, false
			}
			for i := range 3 {
				h := (plus[i] - minus[i]) / (4 * delta) // half: both orders are added
				hessian[3*i+axis] += h
				hessian[3*axis+i] += h
			}
		}
		step, ok := downhill(hessian, gradient)
		if !ok {
			return c, false
		}
		if step.Len() < 1e-10 {
			return c, true
		}
		if limit := s.spacing / 2; step.Len() > limit {
			step = step.Mul(limit / step.Len())
		}
		for halving := 0; ; halving++ {
			k := c.k.Add(s.l.Frac(lattice.CartK(step)))
			if f := s.at(k); f <= c.f+1e-13*(1+math.Abs(c.f)) {
				c = candidate{k, f}
				break
			}
			if step.Len() < 1e-7 {
				return c, true // rounding decides from here on
			}
			if halving == 20 {
				return c, false
			}
			step = step.Mul(0.5)
		}
		if step.Len() < 1e-9 {
			return c, true
		}
	}
	return c, false
}

// downhill solves H p = −g for a Hessian that is nowhere negative; flat
// directions are left alone.
func downhill(h [9]float64, g mgl64.Vec3) (mgl64.Vec3, bool) {
	var eigen mat.EigenSym
	if !eigen.Factorize(mat.NewSymDense(3, h[:]), true) {
		return mgl64.Vec3{}, false
	}
	values := eigen.Values(nil)
	var v mat.Dense
	eigen.VectorsTo(&v)
	most := values[2]
	if !(most > 0) || values[0] < -1e-4*most {
		return mgl64.Vec3{}, false
	}
	var p mgl64.Vec3
	for i, value := range values {
		if value < 1e-5*most {
			continue
		}
		axis := mgl64.Vec3{v.At(0, i), v.At(1, i), v.At(2, i)}
		p = p.Sub(axis.Mul(axis.Dot(g) / value))
	}
	return p, true
}

// gradient returns the derivative of the quantity at k, Cartesian, eV Å. The
// sets are those of the levels in question, found here when nil is given. It
// reports failure when the levels of a set separate, or come close to others:
// there the band is no smooth function.
func (s *search) gradient(k lattice.FracK, sets []hamiltonian.Set) (mgl64.Vec3, []hamiltonian.Set, bool) {
	const apart = 1e-4 // eV, least distance to other levels
	e, _, err := s.states.Solve(k)
	if err != nil {
		s.err = fmt.Errorf("k point %v: %w", k, err)
		return mgl64.Vec3{}, nil, false
	}
	if sets == nil {
		for _, n := range []int{s.q.lower, s.q.upper} {
			if n >= 0 {
				sets = append(sets, setOf(e, n))
			}
		}
	}
	var sum mgl64.Vec3
	i := 0
	for side, n := range []int{s.q.lower, s.q.upper} {
		if n < 0 {
			continue
		}
		set := sets[i]
		i++
		last := set.First + set.Size - 1
		if e[last]-e[set.First] > 2e-7 ||
			set.First > 0 && e[set.First]-e[set.First-1] < apart ||
			last+1 < len(e) && e[last+1]-e[last] < apart {
			return mgl64.Vec3{}, nil, false
		}
		v, err := s.states.Velocity(set)
		if err != nil {
			return mgl64.Vec3{}, nil, false // no velocities in this basis: the compass finds it
		}
		if side == 0 {
			sum = sum.Sub(mgl64.Vec3(v))
		} else {
			sum = sum.Add(mgl64.Vec3(v))
		}
	}
	return sum, sets, true
}

// setOf returns the set that level n belongs to.
func setOf(e []float64, n int) hamiltonian.Set {
	for _, set := range hamiltonian.Sets(e, hamiltonian.SetTolerance) {
		if set.Contains(n) {
			return set
		}
	}
	return hamiltonian.Set{First: n, Size: 1, Energy: e[n]}
}

// edge describes the extremum found at k.
func (s *search) edge(k lattice.FracK, f float64, places *places) (*Edge, error) {
	e, _, err := s.states.Solve(k)
	if err != nil {
		return nil, err
	}
	out := &Edge{Energy: f, Star: s.group.Star(k, true)}
	switch {
	case s.q.upper < 0:
		out.Energy, out.Level = -f, s.q.lower
	default:
		out.Level = s.q.upper
	}
	out.Set = setOf(e, out.Level).Size
	out.Valleys = len(out.Star)
	out.K, out.Where = places.name(out.Star)
	return out, nil
}
