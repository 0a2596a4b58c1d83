package bands

import (
	"context"
	"errors"
	"math"
	"slices"
	"strconv"
	"testing"

	"bandwright/physics/catalog"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/physics/tightbinding"
)

func model(tb testing.TB, id string, o tightbinding.Options) hamiltonian.Model {
	tb.Helper()
	set, err := catalog.Lookup(id)
	if err != nil {
		tb.Fatal(err)
	}
	c, err := set.Crystal()
	if err != nil {
		tb.Fatal(err)
	}
	m, err := tightbinding.New(c, set, o)
	if err != nil {
		tb.Fatal(err)
	}
	return m
}

func sampling(tb testing.TB, m hamiltonian.Model, step float64, frame lattice.Frame, legs ...string) *path.Sampling {
	tb.Helper()
	s := m.Crystal().Setting
	p, err := path.Parse(legs, frame, s)
	if err != nil {
		tb.Fatal(err)
	}
	return p.Sample(s.Lattice, step)
}

func compute(tb testing.TB, m hamiltonian.Model, s *path.Sampling, o Options) *Bands {
	tb.Helper()
	b, err := Compute(context.Background(), m, s, o)
	if err != nil {
		tb.Fatal(err)
	}
	return b
}

// Energies, weights and net bond energies against the states solved one by
// one and the terms of the model.
func TestAgainstSingleStates(t *testing.T) {
	for _, test := range []struct {
		id string
		so bool
	}{{"vogl1983/Si", false}, {"vogl1983/GaAs", true}, {"fitted/Al", false}, {"fitted/Pb", true}, {"jancu1998/GaAs", true}} {
		m := model(t, test.id, tightbinding.Options{SpinOrbit: test.so})
		b := compute(t, m, sampling(t, m, 0.2, lattice.Primitive, "Γ X W 0.1 0.2 0.3 Γ L", "U X"), Options{Weights: true, Workers: 2})
		st := hamiltonian.NewStates(m)
		terms := make([]float64, len(m.Terms()))
		w := make([]float64, len(b.Groups))
		for ik, k := range b.Sampling.K {
			e, v, err := st.Solve(k)
			if err != nil {
				t.Fatal(err)
			}
			for n := range e {
				if math.Abs(e[n]-b.Levels(ik)[n]) > 1e-12 {
					t.Fatalf("%s at %v: level %d is %g, alone %g", test.id, k, n, b.Levels(ik)[n], e[n])
				}
			}
			for _, set := range hamiltonian.Sets(e, hamiltonian.SetTolerance) {
				st.Evaluator().TermEnergies(k, v, set.First, set.Size, terms)
				net := 0.0
				for i, term := range m.Terms() {
					if term.Kind == hamiltonian.Bond {
						net += terms[i]
					}
				}
				mean := make([]float64, len(w))
				for n := set.First; n < set.First+set.Size; n++ {
					if err := st.GroupWeights(n, w); err != nil {
						t.Fatal(err)
					}
					for g := range w {
						mean[g] += w[g] / float64(set.Size)
					}
				}
				for n := set.First; n < set.First+set.Size; n++ {
					if got := b.NetBond[ik*b.N+n]; math.Abs(got-net) > 1e-10 {
						t.Fatalf("%s at %v: net bond energy of level %d is %g, bond terms sum to %g", test.id, k, n, got, net)
					}
					sum := 0.0
					for g, x := range b.Weights(ik, n) {
						sum += x
						if math.Abs(x-mean[g]) > 1e-10 {
							t.Fatalf("%s at %v: weight %d of level %d is %g, want %g", test.id, k, g, n, x, mean[g])
						}
					}
					if math.Abs(sum-1) > 1e-12 {
						t.Fatalf("%s at %v: weights of level %d sum to %g", test.id, k, n, sum)
					}
				}
			}
		}
	}
}

// species tells the symmetry of states on the line Δ along z of a crystal with
// one atom at the origin by their orbitals (L. P. Bouckaert, R. Smoluchowski,
// E. Wigner, Phys. Rev. 50, 58 (1936), Table III).
var species = map[string]int{
	"s": 1, "s*": 1, "pz": 1, "d3z2-r2": 1, // Δ1
	"dx2-y2": 2,                                        // Δ2
	"dxy":    3,                                        // Δ2′
	"px":     5, "py": 5, "dyz": 5, "dzx": 5, "dxz": 5, // Δ5
}

// On Δ of aluminium in an spd basis, levels of different symmetry cross, those
// of the same symmetry do not, and a curve keeps its symmetry: for any step.
func TestCurvesKeepSymmetry(t *testing.T) {
	m := model(t, "fitted/Al", tightbinding.Options{})
	basis := m.Basis()
	for _, o := range basis {
		if species[o.Name] == 0 {
			t.Fatalf("orbital %s is not in the table of species", o.Name)
		}
	}
	crossings := 0
	for _, step := range []float64{0.3, 0.1, 0.013, 0.004} {
		b := compute(t, m, sampling(t, m, step, lattice.TwoPiOverA, "0 0 0 0 0 1"), Options{})
		st := hamiltonian.NewStates(m)
		symmetry := make([]int, b.N) // of each curve
		last := map[int][]int32{}    // curves of each symmetry in order of energy
		for ik := 1; ik < len(b.Sampling.K)-1; ik++ {
			e, v, err := st.Solve(b.Sampling.K[ik])
			if err != nil {
				t.Fatal(err)
			}
			order := map[int][]int32{}
			for n := range e {
				var weight [6]float64
				for i, o := range basis {
					weight[species[o.Name]] += real(v.At(n, i))*real(v.At(n, i)) + imag(v.At(n, i))*imag(v.At(n, i))
				}
				kind := 0
				for s, w := range weight {
					if w > 1-1e-9 {
						kind = s
					}
				}
				if kind == 0 {
					t.Skipf("level %d at sample %d is no pure species: two levels meet there by chance", n, ik)
				}
				curve := b.Curve[ik*b.N+n]
				if symmetry[curve] == 0 {
					symmetry[curve] = kind
				}
				if symmetry[curve] != kind {
					t.Fatalf("step %g: curve %d changes from Δ%d to Δ%d at sample %d", step, curve, symmetry[curve], kind, ik)
				}
				order[kind] = append(order[kind], curve)
			}
			for kind, curves := range order {
				if kind == 5 {
					// Pairs of Δ5 have no order within.
					for i := 0; i+1 < len(curves); i += 2 {
						slices.Sort(curves[i : i+2])
					}
				}
				if last[kind] != nil && !slices.Equal(last[kind], curves) {
					t.Fatalf("step %g: curves of Δ%d are %v and were %v before sample %d: they do not cross", step, kind, curves, last[kind], ik)
				}
				last[kind] = curves
			}
			for n := range e {
				if ik > 1 && b.Curve[ik*b.N+n] != b.Curve[(ik-1)*b.N+n] {
					crossings++
				}
			}
		}
	}
	if crossings == 0 {
		t.Error("no crossings met: the test shows nothing")
	}
}

// With sp interactions off, s and p bands are independent: a curve is s or p
// from end to end, through every meeting, and whichever way the work is cut.
func TestCurvesOfIndependentBands(t *testing.T) {
	m := model(t, "fitted/Al-sp", tightbinding.Options{Factors: map[string]float64{"shell1 spσ": 0, "shell2 spσ": 0, "shell3 spσ": 0}})
	for _, step := range []float64{0.1, 0.01, 0.002} {
		s := sampling(t, m, step, lattice.Primitive, "Γ X W K Γ L U W", "0.1 0.2 0.3 0.45 −0.3 0.2", "L Γ")
		var first []int32
		for _, workers := range []int{1, 2, 7} {
			b := compute(t, m, s, Options{Weights: true, Workers: workers})
			kind := make([]float64, b.N)
			for ik := range s.K {
				if ik == 0 || s.Leg[ik] != s.Leg[ik-1] && s.X[ik] == s.X[ik-1] {
					for n := range kind {
						kind[n] = math.NaN() // a run begins
					}
				}
				for n := range b.N {
					w := b.Weights(ik, n)[0] // s
					if w > 1e-9 && w < 1-1e-9 {
						continue // s and p meet at this very point
					}
					c := b.Curve[ik*b.N+n]
					if math.IsNaN(kind[c]) {
						kind[c] = math.Round(w)
					}
					if math.Abs(kind[c]-w) > 1e-6 {
						t.Fatalf("step %g, %d workers: curve %d has s weight %g and then %g at sample %d", step, workers, c, kind[c], w, ik)
					}
				}
			}
			if workers == 1 {
				first = b.Curve
			} else if !slices.Equal(first, b.Curve) {
				t.Errorf("step %g: curves with %d workers differ from those with one", step, workers)
			}
			crossings := 0
			for ik := 1; ik < len(s.K); ik++ {
				for n := range b.N {
					if s.X[ik] != s.X[ik-1] && b.Curve[ik*b.N+n] != b.Curve[(ik-1)*b.N+n] {
						crossings++
					}
				}
			}
			if crossings == 0 {
				t.Error("no crossings met: the test shows nothing")
			}
		}
	}
}

// Every sample's curves are a permutation of the levels, and continuous: no
// level moves by more than its neighbour samples allow.
func TestCurvesContinuous(t *testing.T) {
	for _, id := range []string{"vogl1983/Si", "boykin2004/Ge", "jancu1998/GaAs"} {
		m := model(t, id, tightbinding.Options{SpinOrbit: id != "vogl1983/Si"})
		const step = 0.01
		b := compute(t, m, sampling(t, m, step, lattice.Primitive, "Γ X W K Γ L U W L K", "U X"), Options{})
		at := make([]float64, b.N)
		previous := make([]float64, b.N)
		for ik := range b.Sampling.K {
			seen := make([]bool, b.N)
			for n, c := range b.Curve[ik*b.N : (ik+1)*b.N] {
				if seen[c] {
					t.Fatalf("%s: curve %d twice at sample %d", id, c, ik)
				}
				seen[c] = true
				at[c] = b.E[ik*b.N+n]
			}
			if ik > 0 && b.Sampling.X[ik] > b.Sampling.X[ik-1] {
				for c := range at {
					// Bands of these models are no steeper than some 25 eV Å.
					if math.Abs(at[c]-previous[c]) > 25*step {
						t.Fatalf("%s: curve %d jumps from %g to %g at sample %d", id, c, previous[c], at[c], ik)
					}
				}
			}
			copy(previous, at)
		}
	}
}

func TestCancelled(t *testing.T) {
	m := model(t, "vogl1983/Si", tightbinding.Options{})
	s := sampling(t, m, 0.001, lattice.Primitive, "Γ X W K Γ L")
	ctx, cancel := context.WithCancel(context.Background())
	most := 0
	_, err := Compute(ctx, m, s, Options{Progress: func(done, total int) {
		most = max(most, done)
		cancel()
	}})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("error is %v, want context.Canceled", err)
	}
	if most == 0 || most == len(s.K) {
		t.Errorf("cancelled after %d of %d samples", most, len(s.K))
	}
}

func TestNoAllocationPerSample(t *testing.T) {
	m := model(t, "vogl1983/Si", tightbinding.Options{})
	count := func(step float64) float64 {
		s := sampling(t, m, step, lattice.Primitive, "Γ X W K Γ L")
		return testing.AllocsPerRun(3, func() { compute(t, m, s, Options{Weights: true, Workers: 1}) })
	}
	if few, many := count(0.01), count(0.001); many > few+20 {
		t.Errorf("%g allocations for some 500 samples, %g for ten times as many", few, many)
	}
}

// A sample exactly where bands meet does not lose them.
func TestCrossingAtSample(t *testing.T) {
	m := model(t, "fitted/Al-sp", tightbinding.Options{Factors: map[string]float64{"shell1 spσ": 0, "shell2 spσ": 0, "shell3 spσ": 0}})
	st := hamiltonian.NewStates(m)
	setting := m.Crystal().Setting
	// The s band and the lowest p band along Γ–X, in units of 2π/a along z.
	difference := func(x float64) float64 {
		e, v, err := st.Solve(setting.ToFrac(lattice.TwoPiOverA, [3]float64{0, 0, x}))
		if err != nil {
			t.Fatal(err)
		}
		s, p := math.NaN(), math.Inf(1)
		for n := range e {
			c := v.At(n, 0)
			if w := real(c)*real(c) + imag(c)*imag(c); w > 0.5 {
				s = e[n]
			} else {
				p = min(p, e[n])
			}
		}
		return s - p
	}
	low, high := 0.05, 0.95
	if difference(low)*difference(high) > 0 {
		t.Fatal("the bands do not cross: choose another line")
	}
	for range 80 {
		middle := (low + high) / 2
		if difference(low)*difference(middle) <= 0 {
			high = middle
		} else {
			low = middle
		}
	}
	end := min(2*low, 1)
	for _, step := range []float64{low / 2, low / 20, low / 200} {
		s := sampling(t, m, step*2*math.Pi/setting.A, lattice.TwoPiOverA, "0 0 0 0 0 "+strconv.FormatFloat(end, 'g', -1, 64))
		b := compute(t, m, s, Options{Weights: true})
		kind := make([]float64, b.N)
		met := false
		for ik := 1; ik < len(s.K); ik++ {
			for n := range b.N {
				w := b.Weights(ik, n)[0]
				if w > 1e-9 && w < 1-1e-9 {
					met = true
					continue
				}
				c := b.Curve[ik*b.N+n]
				if ik == 1 {
					kind[c] = w
				} else if math.Abs(kind[c]-w) > 1e-6 {
					t.Fatalf("step %g: curve %d changes from s weight %g to %g at sample %d", step, c, kind[c], w, ik)
				}
			}
		}
		if end < 1 && !met {
			t.Errorf("step %g: no sample lies on the crossing at %g", step, low)
		}
	}
}

// BenchmarkBands is the time per sample of bands with weights, one worker.
func BenchmarkBands(b *testing.B) {
	m := model(b, "vogl1983/Si", tightbinding.Options{})
	s := sampling(b, m, 6.0/40000, lattice.Primitive, "Γ X W K Γ L")
	for b.Loop() {
		compute(b, m, s, Options{Weights: true, Workers: 1})
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(s.K)), "ns/k")
}

// BenchmarkDrag is what a drag of the lattice constant needs: a new model and
// its bands with weights on 400 samples.
func BenchmarkDrag(b *testing.B) {
	set, err := catalog.Lookup("vogl1983/Si")
	if err != nil {
		b.Fatal(err)
	}
	c, err := set.Crystal()
	if err != nil {
		b.Fatal(err)
	}
	for i := 0; b.Loop(); i++ {
		strained, err := c.WithLatticeConstant(5.3 + 0.001*float64(i%200))
		if err != nil {
			b.Fatal(err)
		}
		m, err := tightbinding.New(strained, set, tightbinding.Options{})
		if err != nil {
			b.Fatal(err)
		}
		p, err := path.Standard(strained.Setting)
		if err != nil {
			b.Fatal(err)
		}
		compute(b, m, p.Sample(strained.Setting.Lattice, 0.0185), Options{Weights: true})
	}
}
