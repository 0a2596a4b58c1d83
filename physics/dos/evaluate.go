package dos

import (
	"errors"
	"fmt"
	"math"
	"sort"
	"sync"
)

// Curve is a density of states on a list of energies.
type Curve struct {
	E          []float64   // eV
	Total      []float64   // states eV⁻¹ cell⁻¹, both spins
	Groups     [][]float64 // per DOS.Groups; they sum to Total
	COHP       [][]float64 // per DOS.Terms, eV per eV and cell: the energy-resolved terms; they sum to E × Total
	Integrated []float64   // electrons per cell in states below E
}

// flat is the width below which a tetrahedron counts as a step of the
// integrated density rather than as a density at a point, eV.
const flat = 1e-3

// Evaluate returns the densities at the given energies, which must ascend.
//
// Values are those at the energies, not averages, with one exception: a
// tetrahedron narrower than 1 meV and than the spacing is averaged over the
// spacing, so that a band without dispersion keeps its electrons.
func (d *DOS) Evaluate(energies []float64) (*Curve, error) {
	g, err := newGrid(energies)
	if err != nil {
		return nil, err
	}
	workers := min(workerCount(0), d.N)
	sums := make([]*sum, workers)
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() {
			s := d.newSum(g)
			for n := w; n < d.N; n += workers {
				s.band(n)
			}
			sums[w] = s
		})
	}
	wg.Wait()

	ne := len(energies)
	c := &Curve{E: append([]float64(nil), energies...), Total: make([]float64, ne), Integrated: make([]float64, ne)}
	columns := make([][]float64, d.columns)
	for i := range columns {
		columns[i] = make([]float64, ne)
	}
	for _, s := range sums {
		addTo(c.Total, s.total)
		addTo(c.Integrated, s.count)
		steps := 0.0
		for i := range c.Integrated {
			steps += s.steps[i]
			c.Integrated[i] += steps
		}
		for i := range columns {
			addTo(columns[i], s.columns[i])
		}
	}
	c.Groups = spread(d.groups, columns)
	c.COHP = spread(d.terms, columns)
	return c, nil
}

func addTo(dst, src []float64) {
	for i, x := range src {
		dst[i] += x
	}
}

func spread(shares []share, columns [][]float64) [][]float64 {
	if shares == nil {
		return nil
	}
	out := make([][]float64, len(shares))
	for i, s := range shares {
		out[i] = make([]float64, len(columns[s.column]))
		for j, x := range columns[s.column] {
			out[i][j] = s.part * x
		}
	}
	return out
}

// grid finds places in an ascending list of energies; quickly when the list
// is even.
type grid struct {
	e       []float64
	perStep float64 // 1/spacing when even, else 0
}

func newGrid(energies []float64) (*grid, error) {
	if len(energies) == 0 {
		return nil, errors.New("no energies asked for: give at least one")
	}
	for i, x := range energies {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return nil, fmt.Errorf("energy %d is %v: give finite energies", i+1, x)
		}
		if i > 0 && x <= energies[i-1] {
			return nil, fmt.Errorf("energy %d, %g eV, does not exceed the one before it, %g eV: give ascending energies", i+1, x, energies[i-1])
		}
	}
	g := &grid{e: energies}
	if last := len(energies) - 1; last > 1 {
		step := (energies[last] - energies[0]) / float64(last)
		even := true
		for i, x := range energies {
			if math.Abs(x-energies[0]-float64(i)*step) > 0.01*step {
				even = false
				break
			}
		}
		if even {
			g.perStep = 1 / step
		}
	}
	return g, nil
}

// at returns the first index whose energy is at least x.
func (g *grid) at(x float64) int {
	if g.perStep == 0 {
		return sort.SearchFloat64s(g.e, x)
	}
	guess := (x - g.e[0]) * g.perStep
	if !(guess > 0) {
		guess = 0
	}
	i := len(g.e)
	if guess < float64(i) {
		i = int(guess)
	}
	for i > 0 && g.e[i-1] >= x {
		i--
	}
	for i < len(g.e) && g.e[i] < x {
		i++
	}
	return i
}

// cell returns the limits of the interval that energy i stands for.
func (g *grid) cell(i int) (low, high float64) {
	if len(g.e) == 1 {
		return g.e[0] - flat, g.e[0] + flat
	}
	last := len(g.e) - 1
	if i > 0 {
		low = (g.e[i-1] + g.e[i]) / 2
	} else {
		low = g.e[0] - (g.e[1]-g.e[0])/2
	}
	if i < last {
		high = (g.e[i] + g.e[i+1]) / 2
	} else {
		high = g.e[last] + (g.e[last]-g.e[last-1])/2
	}
	return low, high
}

// sum gathers the bands of one goroutine. The density at a corner, over all
// tetrahedra that share it, is collected first, for one band at a time, over
// just those energies that its tetrahedra reach; then each corner's weights
// are applied once.
type sum struct {
	d            *DOS
	g            *grid
	total, count []float64
	steps        []float64 // electrons that are full from this index on
	columns      [][]float64

	low, high []float64 // per mesh point: energies reached by its tetrahedra
	first     []int32   // per mesh point: index of the first energy in reach
	offset    []int     // per mesh point: where its densities begin in buffer
	buffer    []float64
}

func (d *DOS) newSum(g *grid) *sum {
	ne, nk := len(g.e), len(d.Mesh.K)
	s := &sum{
		d: d, g: g,
		total: make([]float64, ne), count: make([]float64, ne), steps: make([]float64, ne+1),
		columns: make([][]float64, d.columns),
		low:     make([]float64, nk), high: make([]float64, nk),
		first: make([]int32, nk), offset: make([]int, nk+1),
	}
	for i := range s.columns {
		s.columns[i] = make([]float64, ne)
	}
	return s
}

// reach finds the energies that the tetrahedra about each mesh point span.
func (s *sum) reach(n int) {
	d := s.d
	for i := range s.low {
		s.low[i], s.high[i] = math.Inf(1), math.Inf(-1)
	}
	for t := range d.tetrahedra.Corners {
		c := &d.tetrahedra.Corners[t]
		a, b := d.E[int(c[0])*d.N+n], d.E[int(c[1])*d.N+n]
		e, f := d.E[int(c[2])*d.N+n], d.E[int(c[3])*d.N+n]
		low, high := min(a, b, e, f), max(a, b, e, f)
		for _, k := range c {
			if low < s.low[k] {
				s.low[k] = low
			}
			if high > s.high[k] {
				s.high[k] = high
			}
		}
	}
	at := 0
	for k := range s.low {
		// One energy more on either side for tetrahedra averaged over a step.
		first, last := max(s.g.at(s.low[k])-1, 0), min(s.g.at(s.high[k])+1, len(s.g.e))
		s.first[k], s.offset[k] = int32(first), at
		at += max(last-first, 0)
	}
	s.offset[len(s.low)] = at
	if cap(s.buffer) < at {
		s.buffer = make([]float64, at+at/4)
	}
	s.buffer = s.buffer[:at]
	clear(s.buffer)
}

func (s *sum) band(n int) {
	d, g := s.d, s.g
	s.reach(n)
	for t, weight := range d.tetrahedra.Weight {
		e, from := d.corners(t, n)
		i1, i4 := g.at(e[0]), g.at(e[3])
		weight *= d.Degeneracy
		s.steps[i4] += weight
		c := &d.tetrahedra.Corners[t]
		if e[3]-e[0] < flat && s.narrow(e, from, c, weight, i1, i4) {
			continue
		}
		if i1 == i4 {
			continue
		}
		var w [4][]float64 // densities of the corners from energy i1 on
		for i, f := range from {
			k := c[f]
			start := s.offset[k] + i1 - int(s.first[k])
			w[i] = s.buffer[start : start+i4-i1]
		}
		s.wide(e, weight, i1, i4, w)
	}
	for k := range s.first {
		first, values := int(s.first[k]), s.buffer[s.offset[k]:s.offset[k+1]]
		if len(values) == 0 {
			continue
		}
		addTo(s.total[first:first+len(values)], values)
		at := (k*d.N + n) * d.columns
		for c, v := range d.values[at : at+d.columns] {
			if v != 0 {
				addScaled(s.columns[c][first:first+len(values)], v, values)
			}
		}
	}
}

func addScaled(dst []float64, a float64, src []float64) {
	dst = dst[:len(src)]
	for i, x := range src {
		dst[i] += a * x
	}
}

// narrow adds a tetrahedron that is narrower than the spacing, averaged over
// the intervals it touches. It reports whether it was so narrow.
func (s *sum) narrow(e [4]float64, from [4]int, c *[4]int32, weight float64, i1, i4 int) bool {
	first, last := max(i1-1, 0), min(i4, len(s.g.e)-1)
	for i := first; i <= last; i++ {
		if low, high := s.g.cell(i); high-low <= e[3]-e[0] {
			return false
		}
	}
	for i := first; i <= last; i++ {
		low, high := s.g.cell(i)
		_, below := occupation(e, low)
		_, above := occupation(e, high)
		for j, f := range from {
			k := c[f]
			s.buffer[s.offset[k]+i-int(s.first[k])] += weight * (above[j] - below[j]) / (high - low)
		}
	}
	for i := i1; i < i4; i++ {
		n, _ := occupation(e, s.g.e[i])
		s.count[i] += weight * n
	}
	return true
}

// wide adds a tetrahedron over the energies i1 … i4−1: the formulas of
// density and occupation with everything that does not change along a region
// taken out of the loop.
func (s *sum) wide(e [4]float64, weight float64, i1, i4 int, w [4][]float64) {
	e1, e2, e3, e4 := e[0], e[1], e[2], e[3]
	energies, count := s.g.e[i1:i4], s.count[i1:i4]
	w1, w2, w3, w4 := w[0][:len(energies)], w[1][:len(energies)], w[2][:len(energies)], w[3][:len(energies)]
	count = count[:len(energies)]
	i := 0
	if e2 > e1 && i < len(energies) && energies[i] < e2 {
		r2, r3, r4 := 1/(e2-e1), 1/(e3-e1), 1/(e4-e1)
		a := weight * r2 * r3 * r4
		for ; i < len(energies) && energies[i] < e2; i++ {
			x := energies[i] - e1
			third := a * x * x // a third of the density
			cube := third * x
			count[i] += cube
			u2, u3, u4 := cube*r2, cube*r3, cube*r4
			w1[i] += 3*third - u2 - u3 - u4
			w2[i] += u2
			w3[i] += u3
			w4[i] += u4
		}
	}
	if e3 > e2 && i < len(energies) && energies[i] < e3 {
		r13, r14, r23, r24 := 1/(e3-e1), 1/(e4-e1), 1/(e3-e2), 1/(e4-e2)
		scale := weight * r13
		for ; i < len(energies) && energies[i] < e3; i++ {
			x1, x2 := energies[i]-e1, energies[i]-e2
			f13, f14, f23, f24 := x1*r13, x1*r14, x2*r23, x2*r24
			a := scale * f14 * (1 - f24)
			b := scale * (1 - f23) * f24
			ab := a + b
			g3, g4, g2 := ab*f13+b*f23, a*f14+ab*f24, a*(1-f24)+b*(2-f23-f24)
			w1[i] += 3*ab - g2 - g3 - g4
			w2[i] += g2
			w3[i] += g3
			w4[i] += g4
			count[i] += weight * (f13*f14 + (1-f13)*f14*f23 + (1-f14)*f23*f24)
		}
	}
	if i < len(energies) {
		r1, r2, r3 := 1/(e4-e1), 1/(e4-e2), 1/(e4-e3)
		a := weight * r1 * r2 * r3
		for ; i < len(energies); i++ {
			y := e4 - energies[i]
			third := a * y * y
			cube := third * y
			count[i] += weight - cube
			u1, u2, u3 := cube*r1, cube*r2, cube*r3
			w1[i] += u1
			w2[i] += u2
			w3[i] += u3
			w4[i] += 3*third - u1 - u2 - u3
		}
	}
}
