package dos

import (
	"context"
	"math"
	"testing"

	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/linalg"
	"bandwright/physics/symmetry"
)

// cosine is one s orbital per cell of a simple cubic crystal with different
// hopping along x, y, z: E = e₀ − 2 Σ t_i cos k_i a, whose density is known in
// closed form.
type cosine struct {
	c         *crystal.Crystal
	t         [3]float64
	e0        float64
	electrons float64
}

func newCosine(tb testing.TB, electrons float64, t ...float64) cosine {
	tb.Helper()
	c, err := crystal.FromPrototype("sc", []string{"Po"}, 3)
	if err != nil {
		tb.Fatal(err)
	}
	return cosine{c: c, t: [3]float64(t), electrons: electrons}
}

func (m cosine) Crystal() *crystal.Crystal { return m.c }
func (m cosine) Basis() []hamiltonian.Orbital {
	return []hamiltonian.Orbital{{Site: 0, L: hamiltonian.S, Name: "s"}}
}
func (m cosine) Overlapping() bool   { return false }
func (m cosine) Electrons() float64  { return m.electrons }
func (m cosine) SpinDegeneracy() int { return 2 }
func (m cosine) Terms() []hamiltonian.Term {
	return []hamiltonian.Term{{Kind: hamiltonian.OnSite, L: hamiltonian.S}, {Kind: hamiltonian.Bond, Shell: 1, Channel: "ssσ"}}
}
func (m cosine) Bonds() []crystal.Bond                 { return nil }
func (m cosine) Altered() []string                     { return nil }
func (m cosine) NewEvaluator() hamiltonian.Evaluator   { return m }
func (m cosine) Overlap(lattice.FracK, *linalg.Matrix) {}
func (m cosine) energy(k lattice.FracK) float64 {
	e := m.e0
	for i, t := range m.t {
		e -= 2 * t * math.Cos(2*math.Pi*k[i])
	}
	return e
}
func (m cosine) Hamiltonian(k lattice.FracK, h *linalg.Matrix)                   { h.Set(0, 0, m.energy(k), 0) }
func (m cosine) Gradient(k lattice.FracK, dh *[3]*linalg.Matrix)                 {}
func (m cosine) BondEnergies(lattice.FracK, *linalg.Matrix, int, int, []float64) {}
func (m cosine) TermEnergies(k lattice.FracK, _ *linalg.Matrix, _, _ int, dst []float64) {
	dst[0], dst[1] = m.e0, m.energy(k)-m.e0
}

func computed(tb testing.TB, m hamiltonian.Model, n int, o Options) *DOS {
	tb.Helper()
	g, err := symmetry.Find(m.Crystal(), symmetry.DefaultTolerance)
	if err != nil {
		tb.Fatal(err)
	}
	mesh, err := g.Mesh([3]int{n, n, n})
	if err != nil {
		tb.Fatal(err)
	}
	d, err := Compute(context.Background(), m, g, mesh, o)
	if err != nil {
		tb.Fatal(err)
	}
	return d
}

// unreduced computes on every point of the mesh.
func unreduced(tb testing.TB, m hamiltonian.Model, n [3]int, o Options) *DOS {
	tb.Helper()
	g, err := symmetry.Find(m.Crystal(), symmetry.DefaultTolerance)
	if err != nil {
		tb.Fatal(err)
	}
	mesh := &symmetry.Mesh{Divisions: n}
	total := n[0] * n[1] * n[2]
	for at := range total {
		i, j, l := at%n[0], at/n[0]%n[1], at/n[0]/n[1]
		mesh.Index = append(mesh.Index, int32(at))
		mesh.K = append(mesh.K, lattice.FracK{float64(i) / float64(n[0]), float64(j) / float64(n[1]), float64(l) / float64(n[2])})
		mesh.Weight = append(mesh.Weight, 1/float64(total))
	}
	d, err := Compute(context.Background(), m, g, mesh, o)
	if err != nil {
		tb.Fatal(err)
	}
	return d
}

func evenly(from, to float64, n int) []float64 {
	e := make([]float64, n)
	for i := range e {
		e[i] = from + (to-from)*float64(i)/float64(n-1)
	}
	return e
}

// ellipticK is the complete elliptic integral of the first kind by the
// arithmetic–geometric mean (Gauss): K(k) = π / 2 agm(1, k'), from k'.
func ellipticK(complement float64) float64 {
	a, b := 1.0, complement
	for math.Abs(a-b) > 1e-15*a {
		a, b = (a+b)/2, math.Sqrt(a*b)
	}
	return math.Pi / (2 * a)
}

// square is the density, one spin, of the square lattice with hopping t:
// K(√(1−(E/4t)²)) / 2π²t (see Economou, Green's Functions in Quantum Physics,
// eq. 5.40).
func square(e, t float64) float64 {
	x := math.Abs(e) / (4 * t)
	if x >= 1 {
		return 0
	}
	return ellipticK(x) / (2 * math.Pi * math.Pi * t)
}

// cubic averages square over the third direction.
func cubic(e, t float64) float64 {
	const n = 200000 // midpoint rule; the logarithm of square is integrable
	sum := 0.0
	for i := range n {
		sum += square(e+2*t*math.Cos(math.Pi*(float64(i)+0.5)/n), t)
	}
	return sum / n
}

func TestSimpleCubicDensity(t *testing.T) {
	d := computed(t, newCosine(t, 1, 1, 1, 1), 48, Options{})
	// Away from the van Hove energies ±2t, ±6t.
	for _, e := range []float64{-5, -4, -3, -1, 0, 1, 3, 4, 5} {
		c, err := d.Evaluate([]float64{e})
		if err != nil {
			t.Fatal(err)
		}
		want := 2 * cubic(e, 1)
		if math.Abs(c.Total[0]-want) > 0.01*want {
			t.Errorf("density at %g t is %.6f, elliptic integrals give %.6f (more than 1 %% apart)", e, c.Total[0], want)
		}
	}
	// Particle–hole symmetry: half filling has its Fermi level at zero.
	if math.Abs(d.FermiLevel) > 1e-6 {
		t.Errorf("Fermi level of the half-filled band is %g, want 0", d.FermiLevel)
	}
}

// The second moment of the density is the number of hops there and back: 6t²
// per spin (F. Cyrot-Lackmann, J. Phys. Chem. Solids 29, 1235 (1968)).
func TestSecondMoment(t *testing.T) {
	d := computed(t, newCosine(t, 1, 1, 1, 1), 48, Options{})
	c, err := d.Evaluate(evenly(-6.0005, 5.9995, 12001)) // midpoints of 1e-3 t
	if err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for i, e := range c.E {
		sum += e * e * c.Total[i] * 1e-3
	}
	if math.Abs(sum-12) > 0.005*12 {
		t.Errorf("∫ E² g = %.5f t², want 12", sum)
	}
}

// A chain: g = 1/(π√(4t²−E²)) per spin; N(E) = 1 − arccos(E/2t)/π.
func TestChain(t *testing.T) {
	// The model has less symmetry than its crystal: no reduction.
	d := unreduced(t, newCosine(t, 1, 1, 0, 0), [3]int{200, 2, 2}, Options{})
	c, err := d.Evaluate([]float64{-1.5, -1, -0.5, 0, 0.5, 1, 1.5})
	if err != nil {
		t.Fatal(err)
	}
	for i, e := range c.E {
		want := 2 * (1 - math.Acos(e/2)/math.Pi)
		if math.Abs(c.Integrated[i]-want) > 2e-3 {
			t.Errorf("N(%g) = %.5f, want %.5f", e, c.Integrated[i], want)
		}
	}
}

// A band without dispersion is a δ: it has no density at a point but keeps its
// electrons, averaged over the spacing.
func TestFlatBand(t *testing.T) {
	d := computed(t, newCosine(t, 1, 0, 0, 0), 8, Options{Projections: true})
	for _, e := range [][]float64{evenly(-1, 1, 201), evenly(-1.0037, 1, 201), evenly(-1, 1, 200)} {
		c, err := d.Evaluate(e)
		if err != nil {
			t.Fatal(err)
		}
		sum := 0.0
		for i := range c.Total {
			sum += c.Total[i] * (e[1] - e[0])
			if math.Abs(c.Groups[0][i]-c.Total[i]) > 1e-9 {
				t.Fatalf("projection %g differs from total %g", c.Groups[0][i], c.Total[i])
			}
		}
		if math.Abs(sum-2) > 1e-9 || c.Integrated[len(e)-1] != 2 {
			t.Errorf("flat band holds %g (integrated %g) electrons, want 2", sum, c.Integrated[len(e)-1])
		}
	}
	if d.FermiLevel != 0 {
		t.Errorf("Fermi level %g, want 0", d.FermiLevel)
	}
}

func TestFilledAndEmpty(t *testing.T) {
	for _, test := range []struct{ electrons, fermi float64 }{{0, -6}, {2, 6}} {
		d := computed(t, newCosine(t, test.electrons, 1, 1, 1), 8, Options{})
		if math.Abs(d.FermiLevel-test.fermi) > 1e-12 {
			t.Errorf("%g electrons: Fermi level %g, want %g", test.electrons, d.FermiLevel, test.fermi)
		}
	}
	m := newCosine(t, 3, 1, 1, 1)
	g, err := symmetry.Find(m.c, symmetry.DefaultTolerance)
	if err != nil {
		t.Fatal(err)
	}
	mesh, err := g.Mesh([3]int{4, 4, 4})
	if err != nil {
		t.Fatal(err)
	}
	if _, err := Compute(context.Background(), m, g, mesh, Options{}); err == nil {
		t.Error("three electrons in a band for two: want an error")
	}
	cancelled, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Compute(cancelled, newCosine(t, 1, 1, 1, 1), g, mesh, Options{}); err == nil {
		t.Error("cancelled computation: want an error")
	}
}

func TestBadEnergies(t *testing.T) {
	d := computed(t, newCosine(t, 1, 1, 1, 1), 4, Options{})
	for _, e := range [][]float64{nil, {math.NaN()}, {0, math.Inf(1)}, {1, 0}, {0, 0}} {
		if _, err := d.Evaluate(e); err == nil {
			t.Errorf("energies %v: want an error", e)
		}
	}
}

// Tetrahedra fill the zone, whatever the divisions, and merging them changes
// nothing: the sum over all 6·n³ by the obvious formulas is the same.
func TestAgainstEveryTetrahedron(t *testing.T) {
	d := unreduced(t, newCosine(t, 1, 1, 0.7, 0.3), [3]int{6, 5, 4}, Options{Projections: true})
	energies := evenly(-5, 5, 137)
	c, err := d.Evaluate(energies)
	if err != nil {
		t.Fatal(err)
	}
	for i, x := range energies {
		total, count := 0.0, 0.0
		for tet, w := range d.tetrahedra.Weight {
			e, _ := d.corners(tet, 0)
			g, _ := density(e, x)
			n, _ := occupation(e, x)
			total += 2 * w * g
			count += 2 * w * n
		}
		if math.Abs(total-c.Total[i]) > 1e-11 || math.Abs(count-c.Integrated[i]) > 1e-11 {
			t.Fatalf("at %g eV: density %g and count %g, one by one %g and %g", x, c.Total[i], c.Integrated[i], total, count)
		}
	}
	sum := 0.0
	for _, w := range d.tetrahedra.Weight {
		sum += w
	}
	if math.Abs(sum-1) > 1e-12 {
		t.Errorf("tetrahedra fill %g of the zone", sum)
	}
}
