package symmetry

import (
	"fmt"
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
)

// Operation is a space-group operation x' = R x + T on fractional positions.
type Operation struct {
	R           [3][3]int
	T           [3]float64 // in [0, 1)
	Permutation []int      // site i goes to site Permutation[i], up to a lattice vector
}

// Group is the space group of a crystal.
type Group struct {
	// Ops has one operation for each element of the point group, the identity first.
	Ops []Operation
	// Translations are the pure translations within the cell given, besides the
	// identity: not empty only when that cell is not primitive.
	Translations []Operation

	sites int
	k     [][3][3]int // k' = k[i] k on fractions of the reciprocal vectors
}

// DefaultTolerance, Å, is a distance by which atoms may miss their image and
// still count as symmetric: above the rounding of printed coordinates, far
// below a displacement that bands would show.
const DefaultTolerance = 1e-3

// Find returns the space group of c. Lattice vectors and atoms may miss their
// images by tol, Å. When the operations found within tol do not form a group,
// as happens for a structure distorted by about tol, the tolerance is halved
// until they do.
func Find(c *crystal.Crystal, tol float64) (*Group, error) {
	if math.IsNaN(tol) || tol <= 0 || tol > crystal.ClosestAtoms/2 {
		return nil, fmt.Errorf("symmetry tolerance is %v Å: give a number above 0, at most %g", tol, crystal.ClosestAtoms/2)
	}
	for range 20 {
		g := find(c, tol)
		if g.closed() {
			return g, nil
		}
		tol /= 2
	}
	return nil, fmt.Errorf("the symmetry operations of %s do not form a group at any tolerance down to %.1g Å: check the cell vectors and positions", c.Formula(), tol)
}

func find(c *crystal.Crystal, tol float64) *Group {
	g := &Group{sites: len(c.Sites)}
	for _, r := range latticeRotations(c.Lattice(), tol) {
		ops := withTranslations(c, r, tol)
		if len(ops) == 0 {
			continue
		}
		// Of the translations that go with one R, keep the shortest.
		best := 0
		for i := range ops {
			if cost(ops[i].T) < cost(ops[best].T)-1e-9 {
				best = i
			}
		}
		if r == identity {
			g.Ops = append([]Operation{ops[best]}, g.Ops...)
			g.Translations = append(ops[:best:best], ops[best+1:]...)
			continue
		}
		g.Ops = append(g.Ops, ops[best])
	}
	for _, o := range g.Ops {
		g.k = append(g.k, transpose(inverse(o.R)))
	}
	return g
}

// cost prefers the zero translation, then short ones.
func cost(t [3]float64) float64 {
	sum := 0.0
	for _, x := range t {
		x -= math.Round(x)
		sum += x * x
	}
	return sum
}

// latticeRotations returns the integer matrices that carry the lattice onto
// itself, keeping the lengths of the reduced vectors and of their differences
// within tol.
func latticeRotations(l lattice.Lattice, tol float64) [][3][3]int {
	r, n := l.Reduced()
	// Images of r[0], r[1], r[2] have their lengths, so all lie in a small box.
	var dual [3]mgl64.Vec3
	det := r[0].Dot(r[1].Cross(r[2]))
	longest := 0.0
	for i := range dual {
		dual[i] = r[(i+1)%3].Cross(r[(i+2)%3]).Mul(1 / det)
		longest = math.Max(longest, r[i].Len())
	}
	var reach [3]int
	for i := range reach {
		reach[i] = int(math.Floor((longest + tol) * dual[i].Len()))
	}
	type image struct {
		n [3]int
		v mgl64.Vec3
	}
	var images [3][]image
	for p := -reach[0]; p <= reach[0]; p++ {
		for q := -reach[1]; q <= reach[1]; q++ {
			for s := -reach[2]; s <= reach[2]; s++ {
				v := r[0].Mul(float64(p)).Add(r[1].Mul(float64(q))).Add(r[2].Mul(float64(s)))
				for i := range r {
					if math.Abs(v.Len()-r[i].Len()) <= tol {
						images[i] = append(images[i], image{[3]int{p, q, s}, v})
					}
				}
			}
		}
	}
	// r[i] = Σ n[i][j] a_j. An operation sends r to columns of w in the reduced
	// basis; on fractions of a it is P w P⁻¹ with P = transpose(n).
	P := transpose(n)
	back := inverse(P)
	var out [][3][3]int
	same := func(a, b mgl64.Vec3, i, j int) bool {
		return math.Abs(a.Sub(b).Len()-r[i].Sub(r[j]).Len()) <= tol && math.Abs(a.Add(b).Len()-r[i].Add(r[j]).Len()) <= tol
	}
	for _, x := range images[0] {
		for _, y := range images[1] {
			if !same(x.v, y.v, 0, 1) {
				continue
			}
			for _, z := range images[2] {
				if !same(x.v, z.v, 0, 2) || !same(y.v, z.v, 1, 2) {
					continue
				}
				w := transpose([3][3]int{x.n, y.n, z.n})
				if d := determinant(w); d != 1 && d != -1 {
					continue
				}
				out = append(out, multiply(P, multiply(w, back)))
			}
		}
	}
	return out
}

// withTranslations returns the operations with the rotation r that carry every
// atom onto one of its element.
func withTranslations(c *crystal.Crystal, r [3][3]int, tol float64) []Operation {
	// The rarest element leaves the fewest translations to try.
	count := map[string]int{}
	for _, s := range c.Sites {
		count[s.Element]++
	}
	first := 0
	for i, s := range c.Sites {
		if count[s.Element] < count[c.Sites[first].Element] {
			first = i
		}
	}
	var out []Operation
	x0 := rotate(r, c.Sites[first].Fraction)
	for _, s := range c.Sites {
		if s.Element != c.Sites[first].Element {
			continue
		}
		var t [3]float64
		for i := range t {
			t[i] = wrap(s.Fraction[i] - x0[i])
		}
		if p, ok := permutation(c, r, t, tol); ok {
			out = append(out, Operation{R: r, T: t, Permutation: p})
		}
	}
	return out
}

func permutation(c *crystal.Crystal, r [3][3]int, t [3]float64, tol float64) ([]int, bool) {
	l := c.Lattice()
	p := make([]int, len(c.Sites))
	taken := make([]bool, len(c.Sites))
	for i, s := range c.Sites {
		x := rotate(r, s.Fraction)
		found := false
		for j, u := range c.Sites {
			if taken[j] || u.Element != s.Element {
				continue
			}
			var d [3]float64
			for m := range d {
				d[m] = x[m] + t[m] - u.Fraction[m]
				d[m] -= math.Round(d[m])
			}
			if l.Position(d).Len() <= tol {
				p[i], taken[j], found = j, true, true
				break
			}
		}
		if !found {
			return nil, false
		}
	}
	return p, true
}

// wrap brings x into [0, 1); what lies within rounding of 1 becomes 0.
func wrap(x float64) float64 {
	x -= math.Floor(x)
	if x > 1-1e-9 || x < 1e-9 {
		return 0
	}
	return x
}

// closed reports whether the rotations form a group.
func (g *Group) closed() bool {
	if len(g.Ops) == 0 {
		return false
	}
	set := make(map[[3][3]int]bool, len(g.Ops))
	for _, o := range g.Ops {
		set[o.R] = true
	}
	for _, a := range g.Ops {
		for _, b := range g.Ops {
			if !set[multiply(a.R, b.R)] {
				return false
			}
		}
	}
	return true
}

// EquivalentSites returns the sites grouped by symmetry, each group ascending,
// the groups in the order of their first site.
func (g *Group) EquivalentSites() [][]int {
	orbit := make([]int, g.sites)
	for i := range orbit {
		orbit[i] = -1
	}
	var out [][]int
	for i := range orbit {
		if orbit[i] >= 0 {
			continue
		}
		orbit[i] = len(out)
		queue := []int{i}
		for len(queue) > 0 {
			s := queue[0]
			queue = queue[1:]
			for _, ops := range [][]Operation{g.Ops, g.Translations} {
				for _, o := range ops {
					if t := o.Permutation[s]; orbit[t] < 0 {
						orbit[t] = len(out)
						queue = append(queue, t)
					}
				}
			}
		}
		out = append(out, nil)
	}
	for i, o := range orbit {
		out[o] = append(out[o], i)
	}
	return out
}

// Rotation returns the rotation or rotoinversion of operation i as a Cartesian
// matrix, for a lattice whose fractions the group was found in.
func (g *Group) Rotation(i int, l lattice.Lattice) mgl64.Mat3 {
	a := mgl64.Mat3FromCols(l.A(0), l.A(1), l.A(2))
	b := mgl64.Mat3FromRows(l.B(0), l.B(1), l.B(2)).Mul(1 / (2 * math.Pi))
	var r mgl64.Mat3
	for p := range 3 {
		for q := range 3 {
			r.Set(p, q, float64(g.Ops[i].R[p][q]))
		}
	}
	return a.Mul3(r).Mul3(b)
}

// HasInversion reports whether the point group holds the inversion. Without it,
// E(−k) = E(k) still follows from time reversal.
func (g *Group) HasInversion() bool {
	for _, o := range g.Ops {
		if o.R == [3][3]int{{-1, 0, 0}, {0, -1, 0}, {0, 0, -1}} {
			return true
		}
	}
	return false
}
