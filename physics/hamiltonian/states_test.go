package hamiltonian_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/google/go-cmp/cmp"

	"bandwright/physics/catalog"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/linalg"
	"bandwright/physics/tightbinding"
)

func shipped(t *testing.T, id string, spin bool) hamiltonian.Model {
	t.Helper()
	set, err := catalog.Lookup(id)
	if err != nil {
		t.Fatal(err)
	}
	c, err := set.Crystal()
	if err != nil {
		t.Fatal(err)
	}
	m, err := tightbinding.New(c, set, tightbinding.Options{SpinOrbit: spin})
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func TestSets(t *testing.T) {
	for _, test := range []struct {
		e    []float64
		want []hamiltonian.Set
	}{
		{nil, nil},
		{[]float64{1}, []hamiltonian.Set{{First: 0, Size: 1, Energy: 1}}},
		{[]float64{-1, 0, 0.5e-6, 2}, []hamiltonian.Set{{First: 0, Size: 1, Energy: -1}, {First: 1, Size: 2, Energy: 0.25e-6}, {First: 3, Size: 1, Energy: 2}}},
		// A chain: each within the tolerance of the one below.
		{[]float64{0, 0.75e-6, 1.5e-6}, []hamiltonian.Set{{First: 0, Size: 3, Energy: 0.75e-6}}},
	} {
		got := hamiltonian.Sets(test.e, hamiltonian.SetTolerance)
		near := cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) < 1e-15 })
		if d := cmp.Diff(test.want, got, near); d != "" {
			t.Errorf("sets of %v: %s", test.e, d)
		}
	}
	if s := (hamiltonian.Set{First: 1, Size: 2}); s.Contains(0) || !s.Contains(1) || !s.Contains(2) || s.Contains(3) {
		t.Error("Contains")
	}
}

func TestGroups(t *testing.T) {
	m := shipped(t, "vogl1983/GaAs", true)
	var got []string
	functions := 0
	for _, g := range hamiltonian.Groups(m.Basis()) {
		got = append(got, g.Label(m.Crystal().Sites))
		functions += len(g.Members)
		if want := 2 * (2*g.L.Degree() + 1); len(g.Members) != want {
			t.Errorf("%s has %d functions, want %d", got[len(got)-1], len(g.Members), want)
		}
	}
	if d := cmp.Diff([]string{"As1 s", "As1 p", "As1 s*", "Ga1 s", "Ga1 p", "Ga1 s*"}, got); d != "" {
		t.Error(d)
	}
	if functions != len(m.Basis()) {
		t.Errorf("groups hold %d of %d functions", functions, len(m.Basis()))
	}
}

func TestParseAngularMomentum(t *testing.T) {
	for _, l := range []hamiltonian.AngularMomentum{hamiltonian.S, hamiltonian.P, hamiltonian.D, hamiltonian.SStar} {
		if got, err := hamiltonian.ParseAngularMomentum(l.String()); err != nil || got != l {
			t.Errorf("%v read back as %v, %v", l, got, err)
		}
	}
	if _, err := hamiltonian.ParseAngularMomentum("f"); err == nil {
		t.Error("f is no error")
	}
}

// Velocities against difference quotients of the energies.
func TestVelocity(t *testing.T) {
	for _, id := range []string{"vogl1983/GaAs", "fitted/Al", "boykin2004/Si"} {
		m := shipped(t, id, id == "boykin2004/Si")
		st := hamiltonian.NewStates(m)
		l := m.Crystal().Lattice()
		r := rand.New(rand.NewPCG(1, 1))
		k := lattice.FracK{r.Float64(), r.Float64(), r.Float64()}
		e, _, err := st.Solve(k)
		if err != nil {
			t.Fatal(err)
		}
		sets := hamiltonian.Sets(e, hamiltonian.SetTolerance)
		velocities := make([][3]float64, st.Len())
		if err := st.Velocities(velocities); err != nil {
			t.Fatal(err)
		}
		plus, minus := make([]float64, st.Len()), make([]float64, st.Len())
		for axis := range 3 {
			var d lattice.CartK
			d[axis] = 1e-5
			f := l.Frac(d)
			if err := st.Energies(k.Add(f), plus); err != nil {
				t.Fatal(err)
			}
			if err := st.Energies(k.Add(lattice.FracK{-f[0], -f[1], -f[2]}), minus); err != nil {
				t.Fatal(err)
			}
			for _, s := range sets {
				v, err := st.Velocity(s)
				if err != nil {
					t.Fatal(err)
				}
				var want, mean float64
				for n := s.First; n < s.First+s.Size; n++ {
					want += (plus[n] - minus[n]) / 2e-5 / float64(s.Size)
					mean += velocities[n][axis] / float64(s.Size)
				}
				if math.Abs(v[axis]-want) > 1e-5 || math.Abs(mean-v[axis]) > 1e-12 {
					t.Errorf("%s level %d axis %d: %.8f eV Å, single %.8f, by differences %.8f", id, s.First, axis, v[axis], mean, want)
				}
			}
		}
	}
}

// stretched is an orthogonal model seen through a basis of length 2: S = 4,
// H four times as large. Its levels are those of the model.
type stretched struct{ hamiltonian.Model }

func (stretched) Overlapping() bool { return true }
func (s stretched) NewEvaluator() hamiltonian.Evaluator {
	return stretchedEvaluator{s.Model.NewEvaluator()}
}

type stretchedEvaluator struct{ hamiltonian.Evaluator }

func (e stretchedEvaluator) Hamiltonian(k lattice.FracK, h *linalg.Matrix) {
	e.Evaluator.Hamiltonian(k, h)
	for i := range h.Re {
		h.Re[i], h.Im[i] = 4*h.Re[i], 4*h.Im[i]
	}
}

func (e stretchedEvaluator) Overlap(_ lattice.FracK, s *linalg.Matrix) {
	s.Zero()
	for i := range s.N {
		s.Set(i, i, 4, 0)
	}
}

func TestOverlappingBasis(t *testing.T) {
	m := shipped(t, "vogl1983/Si", false)
	k := lattice.FracK{.1, .2, .3}
	want, _, err := hamiltonian.NewStates(m).Solve(k)
	if err != nil {
		t.Fatal(err)
	}
	st := hamiltonian.NewStates(stretched{m})
	got, v, err := st.Solve(k)
	if err != nil {
		t.Fatal(err)
	}
	values := make([]float64, st.Len())
	if err := st.Energies(k, values); err != nil {
		t.Fatal(err)
	}
	for i := range want {
		if math.Abs(got[i]-want[i]) > 1e-11 || math.Abs(values[i]-want[i]) > 1e-11 {
			t.Errorf("level %d = %.12g and %.12g, want %.12g", i+1, got[i], values[i], want[i])
		}
	}
	var norm float64
	for j := range v.N {
		norm += v.Re[j]*v.Re[j] + v.Im[j]*v.Im[j]
	}
	if math.Abs(norm-0.25) > 1e-12 { // c†Sc = 1
		t.Errorf("|c|² = %v, want 1/4", norm)
	}
	if err := st.Velocities(make([][3]float64, st.Len())); err != hamiltonian.ErrOverlapping {
		t.Errorf("velocities of an overlapping basis: %v", err)
	}
}
