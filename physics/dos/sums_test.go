package dos

import (
	"math"
	"testing"

	"bandwright/physics/catalog"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/tightbinding"
)

func model(tb testing.TB, id string, spinOrbit bool) hamiltonian.Model {
	tb.Helper()
	set, err := catalog.Lookup(id)
	if err != nil {
		tb.Fatal(err)
	}
	c, err := set.Crystal()
	if err != nil {
		tb.Fatal(err)
	}
	m, err := tightbinding.New(c, set, tightbinding.Options{SpinOrbit: spinOrbit})
	if err != nil {
		tb.Fatal(err)
	}
	return m
}

var everything = Options{Projections: true, Terms: true}

// Sum rules: projections add to the total, terms to energy × total, the
// integral of the total is the electron count, and so is the count at the
// Fermi level, to 1e-4 on the default mesh.
func TestSumRules(t *testing.T) {
	for _, test := range []struct {
		id string
		so bool
	}{{"vogl1983/Si", false}, {"vogl1983/GaAs", true}, {"vogl1983/Sn", false}, {"fitted/Al", false}, {"fitted/Pb", true}, {"boykin2004/Ge", true}} {
		m := model(t, test.id, test.so)
		d := computed(t, m, 24, everything)
		low, high := d.Range()
		const n = 6001
		c, err := d.Evaluate(evenly(low-0.1, high+0.1, n))
		if err != nil {
			t.Fatal(err)
		}
		step := c.E[1] - c.E[0]
		integral := 0.0
		for i, e := range c.E {
			groups, terms := 0.0, 0.0
			for _, g := range c.Groups {
				groups += g[i]
			}
			for _, x := range c.COHP {
				terms += x[i]
			}
			if math.Abs(groups-c.Total[i]) > 1e-9*(1+c.Total[i]) {
				t.Fatalf("%s at %g eV: projections sum to %g, total is %g", test.id, e, groups, c.Total[i])
			}
			// Tetrahedra narrower than the spacing are averaged over it, not
			// taken at e itself.
			if math.Abs(terms-e*c.Total[i]) > 1e-4*(1+c.Total[i]) {
				t.Fatalf("%s at %g eV: terms sum to %g, E × total is %g", test.id, e, terms, e*c.Total[i])
			}
			// Trapezium rule against the count in closed form.
			if i > 0 {
				integral += (c.Total[i] + c.Total[i-1]) / 2 * step
			}
			if math.Abs(integral-c.Integrated[i]) > 2e-2 {
				t.Fatalf("%s: integral to %g eV is %g by the trapezium rule, %g in closed form", test.id, e, integral, c.Integrated[i])
			}
		}
		all := d.Degeneracy * float64(d.N)
		if math.Abs(c.Integrated[n-1]-all) > 1e-9 || math.Abs(integral-all) > 2e-2 {
			t.Errorf("%s: all states hold %g electrons (trapezium rule %g), want %g", test.id, c.Integrated[n-1], integral, all)
		}
		at, err := d.Evaluate([]float64{d.FermiLevel})
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(at.Integrated[0]-m.Electrons()) > 1e-4 {
			t.Errorf("%s: %g electrons below the Fermi level %g, want %g", test.id, at.Integrated[0], d.FermiLevel, m.Electrons())
		}
	}
}

// Integrated to the Fermi level, on-site, spin–orbit and bond terms (COHP) add
// up to the band energy (Dronskowski, Blöchl 1993), which the mesh sum of a
// gapped crystal gives directly.
func TestBandEnergy(t *testing.T) {
	for _, test := range []struct {
		id string
		so bool
	}{{"vogl1983/Si", false}, {"jancu1998/GaAs", true}, {"fitted/Al", false}, {"fitted/Pb", true}} {
		m := model(t, test.id, test.so)
		d := computed(t, m, 24, everything)
		r := d.Integrate(d.FermiLevel)
		if math.Abs(r.Electrons-m.Electrons()) > 1e-6 {
			t.Errorf("%s: %g electrons, want %g", test.id, r.Electrons, m.Electrons())
		}
		terms, groups := 0.0, 0.0
		for _, x := range r.Terms {
			terms += x
		}
		for _, x := range r.Groups {
			groups += x
		}
		if math.Abs(terms-r.BandEnergy) > 1e-8*math.Abs(r.BandEnergy) {
			t.Errorf("%s: terms sum to %g eV, band energy is %g", test.id, terms, r.BandEnergy)
		}
		if math.Abs(groups-r.Electrons) > 1e-9 {
			t.Errorf("%s: groups hold %g electrons of %g", test.id, groups, r.Electrons)
		}
		if d.Gapped {
			sum := 0.0
			nb := int(d.Electrons / d.Degeneracy)
			for ik, w := range d.Mesh.Weight {
				for n := range nb {
					sum += d.Degeneracy * w * d.E[ik*d.N+n]
				}
			}
			if math.Abs(sum-r.BandEnergy) > 1e-9*math.Abs(sum) {
				t.Errorf("%s: band energy %.12g eV, sum over the mesh %.12g", test.id, r.BandEnergy, sum)
			}
		}
	}
}

// Equivalent atoms share alike, and the reduced mesh gives what the full mesh
// gives.
func TestReducedAgainstFull(t *testing.T) {
	for _, id := range []string{"vogl1983/Si", "vogl1983/GaAs"} {
		m := model(t, id, false)
		reduced := computed(t, m, 8, everything)
		full := unreduced(t, m, [3]int{8, 8, 8}, everything)
		energies := evenly(-12.9, 12, 301)
		a, err := reduced.Evaluate(energies)
		if err != nil {
			t.Fatal(err)
		}
		b, err := full.Evaluate(energies)
		if err != nil {
			t.Fatal(err)
		}
		for i, e := range energies {
			// Full-mesh levels of one star differ by rounding, which moves a
			// density near a kink.
			if math.Abs(a.Total[i]-b.Total[i]) > 1e-6*(1+b.Total[i]) {
				t.Fatalf("%s at %g eV: reduced %g, full %g", id, e, a.Total[i], b.Total[i])
			}
			for g := range a.Groups {
				if math.Abs(a.Groups[g][i]-b.Groups[g][i]) > 1e-6*(1+b.Total[i]) {
					t.Fatalf("%s at %g eV: group %d reduced %g, full %g", id, e, g, a.Groups[g][i], b.Groups[g][i])
				}
			}
			for c := range a.COHP {
				if math.Abs(a.COHP[c][i]-b.COHP[c][i]) > 1e-5*(1+b.Total[i]) {
					t.Fatalf("%s at %g eV: term %d reduced %g, full %g", id, e, c, a.COHP[c][i], b.COHP[c][i])
				}
			}
		}
	}
}

// On 48³ the density is within 1 % of the converged one away from van Hove
// energies; 120³ stands for converged. An energy is away from them where the
// converged curve is straight to 2 % over 0.4 eV. In the metals, whose bands
// bend sharply at every Bragg plane, hardly an energy is.
func TestConverged(t *testing.T) {
	if testing.Short() {
		t.Skip("solves 120³")
	}
	const step, reach = 0.02, 10
	for _, id := range []string{"vogl1983/Si", "vogl1983/GaAs"} {
		m := model(t, id, false)
		d, fine := computed(t, m, 48, Options{}), computed(t, m, 120, Options{})
		low, high := d.Range()
		energies := evenly(low, high, int((high-low)/step)+1)
		a, err := d.Evaluate(energies)
		if err != nil {
			t.Fatal(err)
		}
		b, err := fine.Evaluate(energies)
		if err != nil {
			t.Fatal(err)
		}
		away := 0
		for i := reach; i < len(energies)-reach; i++ {
			want := b.Total[i]
			straight := want > 0.01
			for h := 1; h <= reach && straight; h++ {
				straight = math.Abs(b.Total[i-h]+b.Total[i+h]-2*want) < 2*0.02*want
			}
			if !straight {
				continue
			}
			away++
			if math.Abs(a.Total[i]-want) > 0.01*want {
				t.Errorf("%s at %.2f eV: 48³ gives %g, 120³ %g", id, energies[i], a.Total[i], want)
			}
		}
		if away < len(energies)/5 {
			t.Errorf("%s: only %d of %d energies are away from van Hove energies", id, away, len(energies))
		}
	}
}

// The fitted metals: Fermi level, occupied width, density at the Fermi level
// and occupations as printed with the sets (computed with them independently,
// 48³; see assets/sets/fitted). Three of eight places of Al-sp are filled.
func TestMetals(t *testing.T) {
	for _, test := range []struct {
		id                     string
		so                     bool
		fermi, bottom, density float64
		s, p, d                float64
	}{
		{"fitted/Al", false, 11.519, -0.112, 0.375, 1.200, 1.499, 0.301},
		{"fitted/Al-sp", false, 11.657, 0.064, 0.386, 1.526, 1.474, 0},
		{"fitted/Pb", false, 9.107, -0.798, 0.584, 1.930, 1.880, 0.190},
		{"fitted/Pb-sp", false, 9.154, -0.810, 0.631, 1.986, 2.014, 0},
		{"fitted/Pb", true, 9.0924, math.NaN(), math.NaN(), math.NaN(), 0, 0},
		{"fitted/Pb-sp", true, 9.0925, math.NaN(), math.NaN(), math.NaN(), 0, 0},
	} {
		d := computed(t, model(t, test.id, test.so), 48, Options{Projections: true})
		if math.Abs(d.FermiLevel-test.fermi) > 0.001 {
			t.Errorf("%s: Fermi level %.4f eV, want %.4f", test.id, d.FermiLevel, test.fermi)
		}
		if d.Gapped {
			t.Errorf("%s is a metal and has a gap", test.id)
		}
		if test.so {
			continue
		}
		// The printed bottom is the level at Γ, the first point of the mesh.
		if low := d.E[0]; math.Abs(low-test.bottom) > 0.001 {
			t.Errorf("%s: lowest level at Γ %.4f eV, want %.3f", test.id, low, test.bottom)
		}
		if _, g := d.Count(d.FermiLevel); math.Abs(g-test.density) > 0.003 {
			t.Errorf("%s: %.4f states per eV and atom at the Fermi level, want %.3f", test.id, g, test.density)
		}
		r := d.Integrate(d.FermiLevel)
		for i, want := range []float64{test.s, test.p, test.d}[:len(r.Groups)] {
			if math.Abs(r.Groups[i]-want) > 0.004 {
				t.Errorf("%s: %.4f electrons in shell %v, want %.3f", test.id, r.Groups[i], d.Groups[i].L, want)
			}
		}
	}
	d := computed(t, model(t, "fitted/Al-sp", false), 24, Options{})
	if filled := d.Electrons / (d.Degeneracy * float64(d.N)); filled != 3.0/8 {
		t.Errorf("Al-sp: %g of the places are filled, want 3/8", filled)
	}
}

func BenchmarkDensity48(b *testing.B) {
	m := model(b, "vogl1983/Si", false)
	energies := evenly(-13, 13, 2000)
	for b.Loop() {
		d := computed(b, m, 48, Options{Projections: true})
		if _, err := d.Evaluate(energies); err != nil {
			b.Fatal(err)
		}
	}
}
