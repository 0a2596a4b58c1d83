package tightbinding

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/linalg"
	"bandwright/physics/symmetry"
)

func randomK(r *rand.Rand) lattice.FracK {
	return lattice.FracK{r.Float64()*2 - 1, r.Float64()*2 - 1, r.Float64()*2 - 1}
}

// everyModel runs f on each shipped set, without and where possible with
// spin–orbit coupling.
func everyModel(t *testing.T, f func(t *testing.T, m *Model)) {
	for _, set := range catalog.Shipped() {
		for _, spin := range []bool{false, true} {
			c, err := set.Crystal()
			if err != nil {
				t.Fatal(err)
			}
			m, err := New(c, set, Options{SpinOrbit: spin})
			if err != nil {
				if spin && len(set.SpinOrbit) < len(set.OnSite) {
					continue // no spin–orbit value of some element
				}
				t.Fatal(err)
			}
			if a := m.Altered(); len(a) != 0 {
				t.Errorf("%s as published reports %q", set.ID, a)
			}
			name := set.ID
			if spin {
				name += "+so"
			}
			t.Run(name, func(t *testing.T) { f(t, m) })
		}
	}
}

// slow builds H(k) without the evaluator's tricks: over ordered pairs of
// atoms in a block of cells, from the printed Table I, with σ matrices from
// the ladder operators of complex p functions.
func slow(t *testing.T, m *Model, k lattice.FracK) [][]complex128 {
	t.Helper()
	n := len(m.basis)
	h := make([][]complex128, n)
	for i := range h {
		h[i] = make([]complex128, n)
	}
	sites := m.crystal.Sites
	l := m.crystal.Lattice()
	kc := l.Cart(k).Vec()
	_, shells, err := m.crystal.Bonds(m.set.Shells, 0)
	if err != nil {
		t.Fatal(err)
	}
	for i := range m.n0 {
		o := m.basis[i]
		h[i][i] += complex(m.set.OnSite[sites[o.Site].Element][o.L], 0)
	}
	for a := range sites {
		for b := range sites {
			for x := -3; x <= 3; x++ {
				for y := -3; y <= 3; y++ {
					for z := -3; z <= 3; z++ {
						d := sites[b].Position.Sub(sites[a].Position).Add(l.Position([3]float64{float64(x), float64(y), float64(z)}))
						for _, s := range shells {
							if math.Abs(d.Len()-s.Distance) > 1e-6 {
								continue
							}
							phase := cmplx.Exp(complex(0, kc.Dot(d)))
							for i := range m.n0 {
								for j := range m.n0 {
									if m.basis[i].Site == a && m.basis[j].Site == b {
										h[i][j] += phase * complex(slowElement(m, i, j, s.Index, d.Normalize()), 0)
									}
								}
							}
						}
					}
				}
			}
		}
	}
	if m.spinOrbit {
		for i := range m.n0 {
			for j := range m.n0 {
				h[m.n0+i][m.n0+j] = h[i][j]
			}
		}
		addSlowSpinOrbit(m, h)
	}
	return h
}

// slowElement turns printed parameters into ⟨i|H|j⟩ with the table; axes are
// permuted for entries that the table leaves to symmetry.
func slowElement(m *Model, i, j, shell int, d mgl64.Vec3) float64 {
	a, b := m.basis[i], m.basis[j]
	sites := m.crystal.Sites
	x, y := sites[a.Site].Element, sites[b.Site].Element
	if rank(a.L) > rank(b.L) {
		a, b, x, y, d = b, a, y, x, d.Mul(-1)
	}
	saved := integrals
	defer func() { integrals = saved }()
	integrals = make(map[string]float64)
	plain := map[hamiltonian.AngularMomentum]string{hamiltonian.S: "s", hamiltonian.SStar: "s", hamiltonian.P: "p", hamiltonian.D: "d"}
	for _, p := range m.set.Bonds {
		same := p.First == x && p.Second == y || p.L1 == p.L2 && p.First == y && p.Second == x
		if p.Shell == shell && p.L1 == a.L && p.L2 == b.L && same {
			integrals[plain[a.L]+plain[b.L]+p.Symmetry.String()] = p.Value
		}
	}
	name := func(o hamiltonian.Orbital) string {
		if o.L == hamiltonian.SStar {
			return "s"
		}
		return o.Name
	}
	return fromTable(name(a), name(b), d)
}

func rank(l hamiltonian.AngularMomentum) int {
	return [...]int{0, 2, 3, 1}[l]
}

// fromTable looks an entry up, turning the axes until the table has it.
func fromTable(a, b string, d mgl64.Vec3) float64 {
	next := map[string]string{"s": "s", "px": "py", "py": "pz", "pz": "px", "dxy": "dyz", "dyz": "dzx", "dzx": "dxy"}
	sign := 1.0
	for range 3 {
		table := slaterKoster(d)
		if v, ok := table[a+" "+b]; ok {
			return sign * v
		}
		if v, ok := table[b+" "+a]; ok && a[0] == b[0] {
			return sign * v // even for two orbitals of one l
		}
		na, oka := next[a]
		nb, okb := next[b]
		if !oka || !okb {
			break
		}
		a, b, d = na, nb, mgl64.Vec3{d[2], d[0], d[1]}
	}
	panic("no entry " + a + " " + b)
}

// addSlowSpinOrbit adds λ L·σ = λ (L_z σ_z + L₊σ₋ + L₋σ₊) from complex p
// functions |m⟩: p₊₁ = −(x + iy)/√2, p₀ = z, p₋₁ = (x − iy)/√2.
func addSlowSpinOrbit(m *Model, h [][]complex128) {
	r := complex(1/math.Sqrt2, 0)
	c := [3][3]complex128{{-r, -1i * r, 0}, {0, 0, 1}, {r, -1i * r, 0}} // m = 1, 0, −1 in x, y, z
	var full [6][6]complex128                                           // m↑, m↓
	for i, mz := range []float64{1, 0, -1} {
		full[i][i] += complex(mz, 0)
		full[3+i][3+i] -= complex(mz, 0)
	}
	// L₊|m⟩ = √2 |m+1⟩; L₊σ₋ with σ₋ = |↓⟩⟨↑| and L·σ = L_zσ_z + L₊σ₋ + L₋σ₊.
	for i := 1; i < 3; i++ {
		full[3+i-1][i] += complex(math.Sqrt2, 0)
		full[i][3+i-1] += complex(math.Sqrt2, 0)
	}
	for site, s := range m.crystal.Sites {
		lambda := complex(m.set.SpinOrbit[s.Element].Lambda(), 0)
		var p []int
		for i := range m.n0 {
			if m.basis[i].Site == site && m.basis[i].L == hamiltonian.P {
				p = append(p, i)
			}
		}
		for a := range p {
			for b := range p {
				for s1 := range 2 {
					for s2 := range 2 {
						var sum complex128
						for i := range 3 {
							for j := range 3 {
								// ⟨a|m_i⟩ full ⟨m_j|b⟩
								sum += c[i][a] * full[3*s1+i][3*s2+j] * cmplx.Conj(c[j][b])
							}
						}
						h[s1*m.n0+p[a]][s2*m.n0+p[b]] += lambda * sum
					}
				}
			}
		}
	}
}

func TestHamiltonianAgainstSlowOne(t *testing.T) {
	everyModel(t, func(t *testing.T, m *Model) {
		r := rand.New(rand.NewPCG(5, 6))
		h := linalg.NewMatrix(len(m.Basis()))
		for range 2 {
			k := randomK(r)
			want := slow(t, m, k)
			m.NewEvaluator().Hamiltonian(k, h)
			for i := range want {
				for j := range i + 1 {
					if cmplx.Abs(want[i][j]-cmplx.Conj(want[j][i])) > 1e-12 {
						t.Fatalf("the slow H is not Hermitian at %d, %d", i, j)
					}
					if d := cmplx.Abs(h.At(i, j) - want[i][j]); d > 1e-11 {
						t.Fatalf("H[%d][%d] (%v, %v) = %v, slowly %v", i, j, m.basis[i], m.basis[j], h.At(i, j), want[i][j])
					}
				}
			}
		}
	})
}

func TestPeriodicityAndStars(t *testing.T) {
	everyModel(t, func(t *testing.T, m *Model) {
		r := rand.New(rand.NewPCG(7, 8))
		g, err := symmetry.Find(m.Crystal(), 1e-5)
		if err != nil {
			t.Fatal(err)
		}
		n := len(m.Basis())
		st := hamiltonian.NewStates(m)
		h := linalg.NewMatrix(n)
		want, got := make([]float64, n), make([]float64, n)
		same := func(what string, k lattice.FracK) {
			t.Helper()
			if err := st.Energies(k, got); err != nil {
				t.Fatal(err)
			}
			for i := range want {
				if math.Abs(got[i]-want[i]) > 1e-10 {
					t.Fatalf("%s: level %d = %.12g, want %.12g", what, i+1, got[i], want[i])
				}
			}
		}
		for range 3 {
			k := randomK(r)
			if err := st.Energies(k, want); err != nil {
				t.Fatal(err)
			}
			same("E(k+G)", k.Add(lattice.FracK{1, -2, 3}))
			same("E(−k)", lattice.FracK{-k[0], -k[1], -k[2]})
			for _, q := range g.Star(k, true) {
				same("star", q)
			}
			st.Evaluator().Hamiltonian(k, h)
			var trace, sum float64
			for i := range n {
				trace += real(h.At(i, i))
				sum += want[i]
			}
			if math.Abs(trace-sum) > 1e-9 {
				t.Fatalf("Σ E = %.12g, tr H = %.12g", sum, trace)
			}
		}
	})
}

// Kramers, Proc. Amsterdam Acad. 33, 959 (1930): with time reversal every
// level is double where k and −k are the same point, and everywhere when the
// crystal has inversion too.
func TestKramersPairs(t *testing.T) {
	everyModel(t, func(t *testing.T, m *Model) {
		if m.SpinDegeneracy() != 1 {
			return
		}
		r := rand.New(rand.NewPCG(9, 10))
		g, err := symmetry.Find(m.Crystal(), 1e-5)
		if err != nil {
			t.Fatal(err)
		}
		points := []lattice.FracK{{}, {.5, 0, .5}, {.5, .5, .5}, {.5, 0, 0}}
		if g.HasInversion() {
			points = append(points, randomK(r), randomK(r), randomK(r))
		}
		for _, k := range points {
			e := levels(t, m, k)
			for i := 0; i < len(e); i += 2 {
				if e[i+1]-e[i] > 1e-11 {
					t.Fatalf("levels %d and %d at %v differ by %g eV", i+1, i+2, k, e[i+1]-e[i])
				}
			}
		}
	})
}

func TestGradientAgainstDifferences(t *testing.T) {
	everyModel(t, func(t *testing.T, m *Model) {
		r := rand.New(rand.NewPCG(11, 12))
		n := len(m.Basis())
		ev := m.NewEvaluator()
		dh := [3]*linalg.Matrix{linalg.NewMatrix(n), linalg.NewMatrix(n), linalg.NewMatrix(n)}
		plus, minus := linalg.NewMatrix(n), linalg.NewMatrix(n)
		l := m.Crystal().Lattice()
		k := randomK(r)
		ev.Gradient(k, &dh)
		const step = 1e-4 // Å⁻¹
		for axis := range 3 {
			var d lattice.CartK
			d[axis] = step
			f := l.Frac(d)
			ev.Hamiltonian(k.Add(f), plus)
			ev.Hamiltonian(lattice.FracK{k[0] - f[0], k[1] - f[1], k[2] - f[2]}, minus)
			for i := range n {
				for j := range i + 1 {
					want := (plus.At(i, j) - minus.At(i, j)) / complex(2*step, 0)
					if cmplx.Abs(dh[axis].At(i, j)-want) > 1e-5 {
						t.Fatalf("∂H/∂k%c at %d, %d = %v, by differences %v", "xyz"[axis], i, j, dh[axis].At(i, j), want)
					}
				}
			}
		}
	})
}

// single returns the first level from n on that stands alone (or in a Kramers
// pair) by 10 meV, so that its derivatives exist.
func single(sets []hamiltonian.Set, n, size int) (hamiltonian.Set, bool) {
	for i := n; i < len(sets); i++ {
		if sets[i].Size == size && (i == 0 || sets[i].Energy-sets[i-1].Energy > 0.01) &&
			(i == len(sets)-1 || sets[i+1].Energy-sets[i].Energy > 0.01) {
			return sets[i], true
		}
	}
	return hamiltonian.Set{}, false
}

// Hellmann, Feynman: a term is its parameter times ∂E/∂parameter.
func TestTermsAgainstDifferences(t *testing.T) {
	const h = 1e-4
	for _, test := range []struct {
		id   string
		spin bool
		keys []string
	}{
		{"vogl1983/GaAs", false, []string{"onsite s", "onsite As1 p", "onsite s*", "shell1 ssσ", "shell1 spσ", "shell1 spσ Ga s – As p", "shell1 s*pσ As s* - Ga p", "shell1 ppσ", "shell1 ppπ"}},
		{"jancu1998/GaAs", true, []string{"onsite d", "spin_orbit p", "spin_orbit Ga1 p", "shell1 sdσ", "shell1 pdπ Ga p – As d", "shell1 ddδ", "shell1 ss*σ", "shell1 s*s*σ", "shell1 s*dσ"}},
		{"fitted/Al", false, []string{"onsite p", "shell1 sdσ", "shell2 pdσ", "shell2 ppπ", "shell1 ddπ"}},
		{"fitted/Pb", true, []string{"onsite s", "spin_orbit p", "shell1 spσ", "shell1 pdσ"}},
	} {
		m := shippedModel(t, test.id, Options{SpinOrbit: test.spin})
		k := lattice.FracK{0.137, -0.291, 0.418}
		st := hamiltonian.NewStates(m)
		e, v, err := st.Solve(k)
		if err != nil {
			t.Fatal(err)
		}
		size := 1
		if test.spin && m.Crystal().Sites[0].Element == "Pb" {
			size = 2
		}
		set, ok := single(hamiltonian.Sets(e, 1e-9), 2, size)
		if !ok {
			t.Fatalf("%s: no single level", test.id)
		}
		values := make([]float64, len(m.Terms()))
		st.Evaluator().TermEnergies(k, v, set.First, set.Size, values)
		for _, key := range test.keys {
			shifted := func(f float64) float64 {
				return levels(t, shippedModel(t, test.id, Options{SpinOrbit: test.spin, Factors: map[string]float64{key: f}}), k)[set.First]
			}
			want := (shifted(1+h) - shifted(1-h)) / (2 * h)
			var got float64
			matched := 0
			for i, term := range m.Terms() {
				if keyMatches(m, term, key) {
					got += values[i]
					matched++
				}
			}
			if matched == 0 {
				t.Fatalf("%s: no term for %q", test.id, key)
			}
			if math.Abs(got-want) > 2e-6 {
				t.Errorf("%s: %s = %.9f eV, by differences %.9f", test.id, key, got, want)
			}
		}
	}
}

func keyMatches(m *Model, term hamiltonian.Term, key string) bool {
	subject := term.Subject(m.Crystal().Sites)
	if term.Kind != hamiltonian.Bond {
		return key == term.Kind.String()+" "+subject || key == term.Kind.String()+" "+term.L.String()
	}
	return key == subject || normal(key) == subject+" "+term.Detail
}

// The distance law: dE/d ln d = −Σ η · bond terms, against two lattice constants.
func TestDistanceLawAgainstDifferences(t *testing.T) {
	for _, id := range []string{"vogl1983/Si", "boykin2004/Ge", "fitted/Al", "fitted/Pb-sp"} {
		m := shippedModel(t, id, Options{})
		k := lattice.FracK{0.137, -0.291, 0.418}
		st := hamiltonian.NewStates(m)
		e, v, err := st.Solve(k)
		if err != nil {
			t.Fatal(err)
		}
		set, ok := single(hamiltonian.Sets(e, 1e-9), 1, 1)
		if !ok {
			t.Fatal("no single level")
		}
		values := make([]float64, len(m.Terms()))
		st.Evaluator().TermEnergies(k, v, set.First, 1, values)
		var got float64
		for i, term := range m.Terms() {
			got -= term.Eta * values[i]
		}
		const h = 1e-4
		stretched := func(f float64) float64 {
			c, err := m.Crystal().WithLatticeConstant(m.Set().A * f)
			if err != nil {
				t.Fatal(err)
			}
			moved, err := New(c, m.Set(), Options{})
			if err != nil {
				t.Fatal(err)
			}
			if len(moved.Altered()) != 1 {
				t.Fatalf("a stretched %s reports %q", id, moved.Altered())
			}
			return levels(t, moved, k)[set.First]
		}
		want := (stretched(1+h) - stretched(1-h)) / (2 * h)
		if math.Abs(got-want) > 1e-5*math.Max(1, math.Abs(want)) {
			t.Errorf("%s: dE/d ln d = %.8f eV, by differences %.8f", id, got, want)
		}
	}
}

// Levels, terms and bonds know nothing of the choice of origin and of the
// cell in which an atom is listed.
func TestOriginAndCell(t *testing.T) {
	m := shippedModel(t, "vogl1983/GaAs", Options{SpinOrbit: true})
	c := m.Crystal()
	l := c.Lattice()
	sites := append([]crystal.Site(nil), c.Sites...)
	for i := range sites {
		for d := range 3 {
			sites[i].Fraction[d] += 0.1731 * float64(d+1)
		}
	}
	sites[1].Fraction[2] -= 1
	moved, err := crystal.FromSites([3]mgl64.Vec3{l.A(0), l.A(1), l.A(2)}, sites)
	if err != nil {
		t.Fatal(err)
	}
	other, err := New(moved, m.Set(), Options{SpinOrbit: true})
	if err != nil {
		t.Fatal(err)
	}
	if a := other.Altered(); len(a) != 0 {
		t.Errorf("a moved origin counts as altered: %q", a)
	}
	r := rand.New(rand.NewPCG(13, 14))
	for range 5 {
		k := randomK(r)
		a, b := hamiltonian.NewStates(m), hamiltonian.NewStates(other)
		ea, va, err := a.Solve(k)
		if err != nil {
			t.Fatal(err)
		}
		eb, vb, err := b.Solve(k)
		if err != nil {
			t.Fatal(err)
		}
		ta, tb := make([]float64, len(m.Terms())), make([]float64, len(m.Terms()))
		for _, set := range hamiltonian.Sets(ea, hamiltonian.SetTolerance) {
			if math.Abs(ea[set.First]-eb[set.First]) > 1e-11 {
				t.Fatalf("level %d = %.12g and %.12g", set.First, ea[set.First], eb[set.First])
			}
			a.Evaluator().TermEnergies(k, va, set.First, set.Size, ta)
			b.Evaluator().TermEnergies(k, vb, set.First, set.Size, tb)
			for i := range ta {
				if math.Abs(ta[i]-tb[i]) > 1e-9 {
					t.Fatalf("term %v of level %d = %.10g and %.10g", m.Terms()[i], set.First, ta[i], tb[i])
				}
			}
		}
	}
}

func TestNoAllocation(t *testing.T) {
	for _, id := range []string{"vogl1983/Si", "fitted/Al"} {
		m := shippedModel(t, id, Options{})
		allocations(t, m)
	}
	allocations(t, shippedModel(t, "jancu1998/GaAs", Options{SpinOrbit: true}))
}

func allocations(t *testing.T, m *Model) {
	n := len(m.Basis())
	ev := m.NewEvaluator()
	h := linalg.NewMatrix(n)
	dh := [3]*linalg.Matrix{linalg.NewMatrix(n), linalg.NewMatrix(n), linalg.NewMatrix(n)}
	st := hamiltonian.NewStates(m)
	k := lattice.FracK{.1, .2, .3}
	_, v, err := st.Solve(k)
	if err != nil {
		t.Fatal(err)
	}
	terms, bonds := make([]float64, len(m.Terms())), make([]float64, len(m.Bonds()))
	velocity := make([][3]float64, n)
	if err := st.Velocities(velocity); err != nil {
		t.Fatal(err)
	}
	sets := make([]hamiltonian.Set, 0, n)
	allocs := testing.AllocsPerRun(20, func() {
		ev.Hamiltonian(k, h)
		ev.Gradient(k, &dh)
		ev.TermEnergies(k, v, 0, n, terms)
		ev.BondEnergies(k, v, 1, 2, bonds)
		if e, _, err := st.Solve(k); err == nil {
			sets = hamiltonian.AppendSets(sets[:0], e, hamiltonian.SetTolerance)
		}
		if err := st.Velocities(velocity); err != nil {
			t.Fatal(err)
		}
	})
	if allocs != 0 {
		t.Errorf("%s: %v allocations for one k point", m.Set().ID, allocs)
	}
}
