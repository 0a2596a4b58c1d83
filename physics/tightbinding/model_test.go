package tightbinding

import (
	"math"
	"strings"
	"testing"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/linalg"
)

func TestTermsAndSubjects(t *testing.T) {
	m := shippedModel(t, "vogl1983/GaAs", Options{SpinOrbit: true})
	var got []string
	for _, term := range m.Terms() {
		s := term.Kind.String() + " " + term.Subject(m.Crystal().Sites)
		if term.Detail != "" {
			s += " " + term.Detail
		}
		got = append(got, s)
	}
	want := []string{
		"onsite As1 s", "onsite As1 p", "onsite As1 s*", "onsite Ga1 s", "onsite Ga1 p", "onsite Ga1 s*",
		"spin_orbit As1 p", "spin_orbit Ga1 p",
		"bond shell1 ssσ", "bond shell1 spσ As s – Ga p", "bond shell1 spσ Ga s – As p",
		"bond shell1 s*pσ As s* – Ga p", "bond shell1 s*pσ Ga s* – As p", "bond shell1 ppσ", "bond shell1 ppπ",
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("terms:\n%s\nwant:\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
	if m.Electrons() != 8 || m.SpinDegeneracy() != 1 || len(m.Basis()) != 20 {
		t.Errorf("%v electrons, degeneracy %d, %d functions", m.Electrons(), m.SpinDegeneracy(), len(m.Basis()))
	}
	if n := shippedModel(t, "fitted/Al", Options{}).Electrons(); n != 3 {
		t.Errorf("Al has %v valence electrons, want 3", n)
	}
}

func TestRefusals(t *testing.T) {
	gaas, err := catalog.Lookup("vogl1983/GaAs")
	if err != nil {
		t.Fatal(err)
	}
	znte, err := catalog.Lookup("vogl1983/ZnTe")
	if err != nil {
		t.Fatal(err)
	}
	of := func(prototype string, a float64, elements ...string) *crystal.Crystal {
		c, err := crystal.FromPrototype(prototype, elements, a)
		if err != nil {
			t.Fatal(err)
		}
		return c
	}
	zb := of("zincblende", 5.6533, "As", "Ga")
	for _, test := range []struct {
		c    *crystal.Crystal
		set  *catalog.Set
		o    Options
		want []string
	}{
		{of("zincblende", 6.1, "Te", "Zn"), znte, Options{SpinOrbit: true}, []string{"Te", "[spin_orbit.Te]"}},
		{of("diamond", 5.4, "Si"), gaas, Options{}, []string{"no orbitals for Si", "Si1"}},
		{of("diamond", 5.4, "As"), gaas, Options{}, []string{"bond As1–As2", "shell 1"}},
		{zb, gaas, Options{Factors: map[string]float64{"shell1 spσ": 2.5}}, []string{"shell1 spσ", "0 to 2"}},
		{zb, gaas, Options{Factors: map[string]float64{"shell1 spσ": math.NaN()}}, []string{"shell1 spσ", "0 to 2"}},
		{zb, gaas, Options{Factors: map[string]float64{"shell2 spσ": 1}}, []string{"no such term", "shell1 spσ"}},
		{zb, gaas, Options{Factors: map[string]float64{"spin_orbit p": 1}}, []string{"no such term"}},
		{zb, gaas, Options{Factors: map[string]float64{"shell1 spσ As s - Ga p": 1, "shell1 spσ As s – Ga p": 0}}, []string{"same term"}},
	} {
		_, err := New(test.c, test.set, test.o)
		if err == nil {
			t.Errorf("%s with %v: no error", test.set.ID, test.o)
			continue
		}
		for _, want := range test.want {
			if !strings.Contains(err.Error(), want) {
				t.Errorf("error %q does not say %q", err, want)
			}
		}
	}
}

func TestAltered(t *testing.T) {
	m := shippedModel(t, "vogl1983/GaAs", Options{Factors: map[string]float64{"shell1 spσ": 0, "shell1 spσ Ga s – As p": 1.5, "onsite s": 1}})
	want := []string{"shell1 spσ × 0", "shell1 spσ Ga s – As p × 1.5"}
	if got := strings.Join(m.Altered(), "; "); got != strings.Join(want, "; ") {
		t.Errorf("altered: %s", got)
	}
	for _, term := range m.Terms() {
		if term.Channel != "spσ" {
			continue
		}
		want := 0.0
		if strings.HasPrefix(term.Detail, "Ga") {
			want = 1.5 * math.Sqrt(3) / 4 * 5.7839
		}
		if math.Abs(term.Parameter-want) > 1e-12 {
			t.Errorf("%s %s = %v, want %v", term.Channel, term.Detail, term.Parameter, want)
		}
	}
	c, err := m.Crystal().WithLatticeConstant(5.6533 * 1.06)
	if err != nil {
		t.Fatal(err)
	}
	far, err := New(c, m.Set(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if a := strings.Join(far.Altered(), "; "); a != "bond lengths +6 % against the set, beyond ±5 %: extrapolation" {
		t.Errorf("altered: %q", a)
	}
	si, err := catalog.Lookup("vogl1983/Si")
	if err != nil {
		t.Fatal(err)
	}
	fcc, err := crystal.FromPrototype("fcc", []string{"Si"}, 3.3259)
	if err != nil {
		t.Fatal(err)
	}
	other, err := New(fcc, si, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if a := other.Altered(); len(a) == 0 || !strings.Contains(a[0], "fcc") || !strings.Contains(a[0], "diamond") {
		t.Errorf("silicon in the fcc structure: altered %q", a)
	}
}

// A strain of 1 % along [111] makes two bond lengths; both stay in shell 1 and
// each follows the distance law with its own length.
func TestStrainKeepsShells(t *testing.T) {
	si, err := catalog.Lookup("vogl1983/Si")
	if err != nil {
		t.Fatal(err)
	}
	c, err := si.Crystal()
	if err != nil {
		t.Fatal(err)
	}
	const s = 0.01 / 3
	strain := mgl64.Mat3{1 + s, s, s, s, 1 + s, s, s, s, 1 + s}
	l := c.Lattice()
	strained, err := crystal.FromSites([3]mgl64.Vec3{strain.Mul3x1(l.A(0)), strain.Mul3x1(l.A(1)), strain.Mul3x1(l.A(2))}, c.Sites)
	if err != nil {
		t.Fatal(err)
	}
	m, err := New(strained, si, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Bonds()) != 4 {
		t.Fatalf("%d bonds, want 4", len(m.Bonds()))
	}
	// Γ: s levels E_s ± Σ_b V_b, V_b = ssσ (d₀/d)².
	var v float64
	for _, b := range m.Bonds() {
		v += -8.3 / 4 * math.Pow(si.Lengths[0]/b.Length, 2)
	}
	e := levels(t, m, pointGamma)
	if want := -4.2 + v; math.Abs(e[0]-want) > 1e-12 {
		// The s* shell does not couple to s at Γ; p does, through the strain.
		if math.Abs(e[0]-want) > 1e-3 {
			t.Errorf("Γ₁ = %.9f eV, want about %.9f", e[0], want)
		}
	}
	if len(m.Altered()) != 1 || !strings.Contains(m.Altered()[0], " to ") {
		t.Errorf("altered: %q", m.Altered())
	}
}

func TestNotFinite(t *testing.T) {
	st := hamiltonian.NewStates(shippedModel(t, "vogl1983/Si", Options{}))
	if _, _, err := st.Solve(lattice.FracK{math.NaN(), 0, 0}); err == nil {
		t.Error("k = NaN gives no error")
	}
}

func benchmarkModels(b *testing.B, f func(b *testing.B, m *Model)) {
	for _, test := range []struct {
		name, id string
		spin     bool
	}{{"Si-sp3s*", "vogl1983/Si", false}, {"GaAs-sp3d5s*-so", "jancu1998/GaAs", true}, {"Al-spd", "fitted/Al", false}} {
		b.Run(test.name, func(b *testing.B) {
			m := shippedModel(b, test.id, Options{SpinOrbit: test.spin})
			b.ReportAllocs()
			f(b, m)
		})
	}
}

func BenchmarkHamiltonian(b *testing.B) {
	benchmarkModels(b, func(b *testing.B, m *Model) {
		ev, h := m.NewEvaluator(), linalg.NewMatrix(len(m.Basis()))
		for b.Loop() {
			ev.Hamiltonian(lattice.FracK{.1, .2, .3}, h)
		}
	})
}

func BenchmarkGradient(b *testing.B) {
	benchmarkModels(b, func(b *testing.B, m *Model) {
		n := len(m.Basis())
		ev := m.NewEvaluator()
		dh := [3]*linalg.Matrix{linalg.NewMatrix(n), linalg.NewMatrix(n), linalg.NewMatrix(n)}
		for b.Loop() {
			ev.Gradient(lattice.FracK{.1, .2, .3}, &dh)
		}
	})
}

// BenchmarkTermEnergies breaks down all levels of one k point.
func BenchmarkTermEnergies(b *testing.B) {
	benchmarkModels(b, func(b *testing.B, m *Model) {
		st := hamiltonian.NewStates(m)
		k := lattice.FracK{.1, .2, .3}
		e, v, err := st.Solve(k)
		if err != nil {
			b.Fatal(err)
		}
		sets := hamiltonian.Sets(e, hamiltonian.SetTolerance)
		dst := make([]float64, len(m.Terms()))
		for b.Loop() {
			k[0] += 1e-9 // a new k point: nothing kept from the last one
			for _, set := range sets {
				st.Evaluator().TermEnergies(k, v, set.First, set.Size, dst)
			}
		}
	})
}
