package lattice

import (
	"math"

	"github.com/go-gl/mathgl/mgl64"
)

// Superbase is an obtuse superbase of a lattice: four vectors V with sum zero,
// any three of which span the lattice, and V[i]·V[j] ≤ 0 for every pair
// (within rounding). V[i] = Σ_j N[i][j] v_j for the vectors v_j it was made of.
//
// Every three-dimensional lattice has one (E. Selling, J. reine angew. Math.
// 77, 143 (1874)), and the Voronoi cell can be read from it (J. H. Conway,
// N. J. A. Sloane, Proc. R. Soc. Lond. A 436, 55 (1992)).
type Superbase struct {
	V [4]mgl64.Vec3
	N [4][3]int
}

// obtuseness is the cosine between two vectors that still counts as a right
// angle: below it, a Selling step would only shuffle rounding errors.
const obtuseness = 1e-13

// Obtuse returns an obtuse superbase of the lattice spanned by three
// independent, finite vectors, in whatever unit they have.
func Obtuse(v [3]mgl64.Vec3) Superbase {
	var s Superbase
	for i := range v {
		s.V[i] = v[i]
		s.N[i][i] = 1
	}
	s.shorten()
	s.V[3] = s.V[0].Add(s.V[1]).Add(s.V[2]).Mul(-1)
	for j := range 3 {
		s.N[3][j] = -s.N[0][j] - s.N[1][j] - s.N[2][j]
	}
	// Selling's step for V[i]·V[j] > 0 changes the sign of V[i] and adds V[i] to the
	// other two; the sum of the squares falls by 4 V[i]·V[j], so it ends. The cap
	// guards against a cycle of rounding errors.
	for range 10_000 {
		i, j, ok := s.acutePair()
		if !ok {
			break
		}
		for k := range 4 {
			if k != i && k != j {
				s.add(k, i, 1)
			}
		}
		s.V[i] = s.V[i].Mul(-1)
		for m := range 3 {
			s.N[i][m] = -s.N[i][m]
		}
	}
	// The combinations once more from the vectors given: no drift of many sums.
	for i := range s.V {
		s.V[i] = mgl64.Vec3{}
		for j := range v {
			s.V[i] = s.V[i].Add(v[j].Mul(float64(s.N[i][j])))
		}
	}
	return s
}

// shorten subtracts from each of the first three vectors the nearest multiples
// of the other two while that makes it shorter. Selling's steps alone reach the
// end too, but one by one, which is slow for very oblique cells.
func (s *Superbase) shorten() {
	for range 1000 {
		changed := false
		for i := range 3 {
			for j := range 3 {
				if i == j {
					continue
				}
				n := math.Round(s.V[i].Dot(s.V[j]) / s.V[j].LenSqr())
				if n == 0 || math.Abs(n) > 1<<40 {
					continue
				}
				if s.V[i].Sub(s.V[j].Mul(n)).LenSqr() < s.V[i].LenSqr()*(1-1e-12) {
					s.add(i, j, -int(n))
					changed = true
				}
			}
		}
		if !changed {
			return
		}
	}
}

// add adds n times vector j to vector i.
func (s *Superbase) add(i, j, n int) {
	s.V[i] = s.V[i].Add(s.V[j].Mul(float64(n)))
	for m := range 3 {
		s.N[i][m] += n * s.N[j][m]
	}
}

// acutePair returns the pair with the largest positive product.
func (s *Superbase) acutePair() (i, j int, ok bool) {
	best := 0.0
	for p := range 4 {
		for q := p + 1; q < 4; q++ {
			d := s.V[p].Dot(s.V[q])
			if d > obtuseness*s.V[p].Len()*s.V[q].Len() && d > best {
				best, i, j, ok = d, p, q, true
			}
		}
	}
	return i, j, ok
}

// Vectors returns the primitive vectors, Å.
func (l Lattice) Vectors() [3]mgl64.Vec3 { return l.a }

// ReciprocalVectors returns the primitive reciprocal vectors, Å⁻¹.
func (l Lattice) ReciprocalVectors() [3]mgl64.Vec3 { return l.b }

// Reduced returns short vectors r (Å) that span the same lattice, and their
// integer coordinates: r[i] = Σ_j n[i][j] A(j). They are the three shortest
// vectors of an obtuse superbase.
func (l Lattice) Reduced() (r [3]mgl64.Vec3, n [3][3]int) {
	s := Obtuse(l.a)
	longest := 0
	for i := range s.V {
		if s.V[i].LenSqr() > s.V[longest].LenSqr() {
			longest = i
		}
	}
	for i, k := 0, 0; k < 4; k++ {
		if k != longest {
			r[i], n[i] = s.V[k], s.N[k]
			i++
		}
	}
	return r, n
}
