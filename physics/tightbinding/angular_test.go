package tightbinding

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/catalog"
	"bandwright/physics/hamiltonian"
)

// integrals is one two-centre integral of each kind, all different.
var integrals = map[string]float64{
	"ssσ": 1.1, "spσ": 1.3, "ppσ": 1.7, "ppπ": 1.9, "sdσ": 2.3,
	"pdσ": 2.9, "pdπ": 3.1, "ddσ": 3.7, "ddπ": 4.1, "ddδ": 4.3,
}

var allOrbitals = []string{"s", "px", "py", "pz", "dxy", "dyz", "dzx", "dx2-y2", "d3z2-r2"}

func shellOf(name string) (hamiltonian.AngularMomentum, int) {
	for l, names := range orbitalNames {
		for i, n := range names {
			if n == name {
				return l, i
			}
		}
	}
	panic(name)
}

// element returns ⟨a|H|b⟩ by the code under test.
func element(a, b string, d mgl64.Vec3) float64 {
	la, ia := shellOf(a)
	lb, ib := shellOf(b)
	first, second, direction := la, lb, d
	if la > lb { // s, p, d
		first, second, direction = lb, la, d.Mul(-1)
	}
	var sum float64
	for symmetry := catalog.Sigma; int(symmetry) <= min(la.Degree(), lb.Degree()); symmetry++ {
		v := integrals[first.String()+second.String()+symmetry.String()]
		sum += v * factor(symmetry, resolve(la, ia, direction), resolve(lb, ib, direction))
	}
	return sum
}

// slaterKoster is Table I of J. C. Slater, G. F. Koster, Phys. Rev. 94, 1498
// (1954), as printed, for the entries it prints; the others follow by turning
// the axes in the order x → y → z → x.
func slaterKoster(d mgl64.Vec3) map[string]float64 {
	l, m, n := d[0], d[1], d[2]
	l2, m2, n2 := l*l, m*m, n*n
	r3 := math.Sqrt(3)
	v := integrals
	return map[string]float64{
		"s s":             v["ssσ"],
		"s px":            l * v["spσ"],
		"px px":           l2*v["ppσ"] + (1-l2)*v["ppπ"],
		"px py":           l*m*v["ppσ"] - l*m*v["ppπ"],
		"px pz":           l*n*v["ppσ"] - l*n*v["ppπ"],
		"s dxy":           r3 * l * m * v["sdσ"],
		"s dx2-y2":        r3 / 2 * (l2 - m2) * v["sdσ"],
		"s d3z2-r2":       (n2 - (l2+m2)/2) * v["sdσ"],
		"px dxy":          r3*l2*m*v["pdσ"] + m*(1-2*l2)*v["pdπ"],
		"px dyz":          r3*l*m*n*v["pdσ"] - 2*l*m*n*v["pdπ"],
		"px dzx":          r3*l2*n*v["pdσ"] + n*(1-2*l2)*v["pdπ"],
		"px dx2-y2":       r3/2*l*(l2-m2)*v["pdσ"] + l*(1-l2+m2)*v["pdπ"],
		"py dx2-y2":       r3/2*m*(l2-m2)*v["pdσ"] - m*(1+l2-m2)*v["pdπ"],
		"pz dx2-y2":       r3/2*n*(l2-m2)*v["pdσ"] - n*(l2-m2)*v["pdπ"],
		"px d3z2-r2":      l*(n2-(l2+m2)/2)*v["pdσ"] - r3*l*n2*v["pdπ"],
		"py d3z2-r2":      m*(n2-(l2+m2)/2)*v["pdσ"] - r3*m*n2*v["pdπ"],
		"pz d3z2-r2":      n*(n2-(l2+m2)/2)*v["pdσ"] + r3*n*(l2+m2)*v["pdπ"],
		"dxy dxy":         3*l2*m2*v["ddσ"] + (l2+m2-4*l2*m2)*v["ddπ"] + (n2+l2*m2)*v["ddδ"],
		"dxy dyz":         3*l*m2*n*v["ddσ"] + l*n*(1-4*m2)*v["ddπ"] + l*n*(m2-1)*v["ddδ"],
		"dxy dzx":         3*l2*m*n*v["ddσ"] + m*n*(1-4*l2)*v["ddπ"] + m*n*(l2-1)*v["ddδ"],
		"dxy dx2-y2":      1.5*l*m*(l2-m2)*v["ddσ"] + 2*l*m*(m2-l2)*v["ddπ"] + l*m*(l2-m2)/2*v["ddδ"],
		"dyz dx2-y2":      1.5*m*n*(l2-m2)*v["ddσ"] - m*n*(1+2*(l2-m2))*v["ddπ"] + m*n*(1+(l2-m2)/2)*v["ddδ"],
		"dzx dx2-y2":      1.5*n*l*(l2-m2)*v["ddσ"] + n*l*(1-2*(l2-m2))*v["ddπ"] - n*l*(1-(l2-m2)/2)*v["ddδ"],
		"dxy d3z2-r2":     r3 * (l*m*(n2-(l2+m2)/2)*v["ddσ"] - 2*l*m*n2*v["ddπ"] + l*m*(1+n2)/2*v["ddδ"]),
		"dyz d3z2-r2":     r3 * (m*n*(n2-(l2+m2)/2)*v["ddσ"] + m*n*(l2+m2-n2)*v["ddπ"] - m*n*(l2+m2)/2*v["ddδ"]),
		"dzx d3z2-r2":     r3 * (l*n*(n2-(l2+m2)/2)*v["ddσ"] + l*n*(l2+m2-n2)*v["ddπ"] - l*n*(l2+m2)/2*v["ddδ"]),
		"dx2-y2 dx2-y2":   .75*(l2-m2)*(l2-m2)*v["ddσ"] + (l2+m2-(l2-m2)*(l2-m2))*v["ddπ"] + (n2+(l2-m2)*(l2-m2)/4)*v["ddδ"],
		"dx2-y2 d3z2-r2":  r3 * ((l2-m2)*(n2-(l2+m2)/2)/2*v["ddσ"] + n2*(m2-l2)*v["ddπ"] + (1+n2)*(l2-m2)/4*v["ddδ"]),
		"d3z2-r2 d3z2-r2": (n2-(l2+m2)/2)*(n2-(l2+m2)/2)*v["ddσ"] + 3*n2*(l2+m2)*v["ddπ"] + .75*(l2+m2)*(l2+m2)*v["ddδ"],
	}
}

func TestSlaterKosterTable(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 200 {
		d := direction(r)
		for name, want := range slaterKoster(d) {
			var a, b string
			if _, err := fmt.Sscan(name, &a, &b); err != nil {
				t.Fatal(err)
			}
			if got := element(a, b, d); math.Abs(got-want) > 1e-13*10 {
				t.Fatalf("%s along %v = %.15g, want %.15g (Slater, Koster 1954, Table I)", name, d, got, want)
			}
		}
	}
}

func direction(r *rand.Rand) mgl64.Vec3 {
	for {
		v := mgl64.Vec3{r.NormFloat64(), r.NormFloat64(), r.NormFloat64()}
		if v.Len() > 0.1 {
			return v.Normalize()
		}
	}
}

// harmonic is the real spherical harmonic of an orbital, ∫|Y|² dΩ = 4π.
func harmonic(name string, r mgl64.Vec3) float64 {
	x, y, z := r[0], r[1], r[2]
	switch name {
	case "s":
		return 1
	case "px":
		return math.Sqrt(3) * x
	case "py":
		return math.Sqrt(3) * y
	case "pz":
		return math.Sqrt(3) * z
	case "dxy":
		return math.Sqrt(15) * x * y
	case "dyz":
		return math.Sqrt(15) * y * z
	case "dzx":
		return math.Sqrt(15) * z * x
	case "dx2-y2":
		return math.Sqrt(15) / 2 * (x*x - y*y)
	}
	return math.Sqrt(5) / 2 * (3*z*z - 1)
}

// TestRotatedFrame checks the factors by turning the bond onto z, where every
// integral is diagonal: ⟨a|H|b⟩ = Σ_m D_am V_m D_bm, with D_am = ⟨a|R m⟩
// integrated over the sphere (Gauss–Legendre in cos θ, equal steps in φ;
// exact for these products).
func TestRotatedFrame(t *testing.T) {
	nodes := [4]float64{-0.8611363115940526, -0.3399810435848563, 0.3399810435848563, 0.8611363115940526}
	weights := [4]float64{0.3478548451374538, 0.6521451548625461, 0.6521451548625461, 0.3478548451374538}
	var points []mgl64.Vec3
	var weight []float64
	for i, c := range nodes {
		for j := range 8 {
			phi := 2 * math.Pi * float64(j) / 8
			s := math.Sqrt(1 - c*c)
			points = append(points, mgl64.Vec3{s * math.Cos(phi), s * math.Sin(phi), c})
			weight = append(weight, weights[i]/16)
		}
	}
	about := map[string]catalog.Symmetry{"s": 0, "pz": 0, "d3z2-r2": 0, "px": 1, "py": 1, "dzx": 1, "dyz": 1, "dxy": 2, "dx2-y2": 2}
	partner := map[string][2]string{"px": {"px", "dzx"}, "py": {"py", "dyz"}, "dzx": {"px", "dzx"}, "dyz": {"py", "dyz"}}
	onZ := func(a, b string) float64 { // for a not after b in s, p, d
		if about[a] != about[b] {
			return 0
		}
		if p, ok := partner[a]; ok && p != partner[b] {
			return 0
		}
		if about[a] == 2 && a != b {
			return 0
		}
		la, _ := shellOf(a)
		lb, _ := shellOf(b)
		return integrals[la.String()+lb.String()+about[a].String()]
	}
	r := rand.New(rand.NewPCG(3, 4))
	for range 20 {
		d := direction(r)
		turn := mgl64.QuatBetweenVectors(mgl64.Vec3{0, 0, 1}, d).Mat4().Mat3()
		back := turn.Transpose()
		overlap := func(a, m string) (sum float64) {
			for i, p := range points {
				sum += weight[i] * harmonic(a, p) * harmonic(m, back.Mul3x1(p))
			}
			return sum
		}
		for i, a := range allOrbitals {
			for _, b := range allOrbitals[i:] {
				var want float64
				for _, m := range allOrbitals {
					for _, n := range allOrbitals {
						lm, _ := shellOf(m)
						ln, _ := shellOf(n)
						la, _ := shellOf(a)
						lb, _ := shellOf(b)
						if lm == la && ln == lb {
							want += overlap(a, m) * onZ(m, n) * overlap(b, n)
						}
					}
				}
				if got := element(a, b, d); math.Abs(got-want) > 1e-12 {
					t.Fatalf("⟨%s|H|%s⟩ along %v = %.15g, in the turned frame %.15g", a, b, d, got, want)
				}
			}
		}
	}
}
