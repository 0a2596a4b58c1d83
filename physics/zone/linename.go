package zone

import (
	"math"
	"sort"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
)

// nameTolerance, in units of 2π/a, is how near a point must be to a line to bear
// its name.
const nameTolerance = 1e-6

// cubicNames holds the special points, lines and planes of a cubic zone in the
// wedge x ≥ y ≥ z ≥ 0, units 2π/a, with the letters of L. P. Bouckaert,
// R. Smoluchowski, E. Wigner, Phys. Rev. 50, 58 (1936).
type cubicNames struct {
	points map[string]mgl64.Vec3
	lines  []namedLine
	planes []namedPlane
	shifts []mgl64.Vec3 // the shortest reciprocal lattice vectors, one of each ± and permutation
}

type namedLine struct{ name, from, to string }

// namedPlane is a plane of symmetry. The trade has no letters for planes, so
// they are named by special points in them.
type namedPlane struct {
	name    string
	through [3]string
}

var cubic = map[string]*cubicNames{
	"cP": {
		points: map[string]mgl64.Vec3{"Γ": {}, "X": {.5, 0, 0}, "M": {.5, .5, 0}, "R": {.5, .5, .5}},
		lines: []namedLine{
			{"Δ", "Γ", "X"}, {"Σ", "Γ", "M"}, {"Λ", "Γ", "R"}, {"Z", "X", "M"}, {"S", "X", "R"}, {"T", "M", "R"},
		},
		planes: []namedPlane{
			{"plane Γ X M", [3]string{"Γ", "X", "M"}}, {"plane X M R", [3]string{"X", "M", "R"}},
			{"plane Γ M R", [3]string{"Γ", "M", "R"}}, {"plane Γ X R", [3]string{"Γ", "X", "R"}},
		},
		shifts: []mgl64.Vec3{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}},
	},
	"cF": {
		points: map[string]mgl64.Vec3{"Γ": {}, "X": {1, 0, 0}, "L": {.5, .5, .5}, "W": {1, .5, 0}, "K": {.75, .75, 0}, "U": {1, .25, .25}},
		lines: []namedLine{
			{"Δ", "Γ", "X"}, {"Λ", "Γ", "L"}, {"Σ", "Γ", "K"}, {"S", "X", "U"}, {"Z", "X", "W"}, {"Q", "L", "W"},
			// The edge U–W equals K–W modulo a reciprocal vector, so it takes the same name.
			{"plane Γ X W K", "U", "W"},
		},
		planes: []namedPlane{
			{"plane Γ X W K", [3]string{"Γ", "X", "W"}}, {"plane X W U", [3]string{"X", "W", "U"}},
			// One plane {110}, of which the wedge holds two parts that meet on the hexagon.
			{"plane Γ X U L K", [3]string{"Γ", "K", "L"}}, {"plane Γ X U L K", [3]string{"Γ", "X", "L"}},
		},
		shifts: []mgl64.Vec3{{1, 1, 1}, {1, 1, -1}, {1, -1, 1}, {-1, 1, 1}, {2, 0, 0}, {0, 2, 0}, {0, 0, 2}},
	},
	"cI": {
		points: map[string]mgl64.Vec3{"Γ": {}, "H": {1, 0, 0}, "N": {.5, .5, 0}, "P": {.5, .5, .5}},
		lines: []namedLine{
			{"Δ", "Γ", "H"}, {"Σ", "Γ", "N"}, {"Λ", "Γ", "P"}, {"G", "N", "H"}, {"F", "P", "H"}, {"D", "N", "P"},
		},
		planes: []namedPlane{
			{"plane Γ H N", [3]string{"Γ", "H", "N"}}, {"plane H N P", [3]string{"H", "N", "P"}},
			{"plane Γ N P", [3]string{"Γ", "N", "P"}}, {"plane Γ H P", [3]string{"Γ", "H", "P"}},
		},
		shifts: []mgl64.Vec3{{1, 1, 0}, {1, -1, 0}, {1, 0, 1}, {1, 0, -1}, {0, 1, 1}, {0, 1, -1}},
	},
}

// LineName returns the name of the special point ("X"), symmetry line ("Δ") or
// plane of symmetry ("plane Γ X M") on which k lies, or "" for a point in
// general position or a lattice that is not cP, cF or cI. k is in fractions of
// the reciprocal vectors of the tabled primitive cell, as in SpecialPoints and
// the prototypes; SymmetryName takes any cell. A name also stands for the
// equivalents of its points, by symmetry of the cube or by a reciprocal vector.
func LineName(bravais string, k lattice.FracK) string {
	// k·A/2π for the cubic axes A, which are sums of primitive vectors.
	switch bravais {
	case "cP":
		return cubicName(bravais, mgl64.Vec3(k))
	case "cF":
		return cubicName(bravais, mgl64.Vec3{-k[0] + k[1] + k[2], k[0] - k[1] + k[2], k[0] + k[1] - k[2]})
	case "cI":
		return cubicName(bravais, mgl64.Vec3{k[1] + k[2], k[0] + k[2], k[0] + k[1]})
	}
	return ""
}

// SymmetryName is LineName for any choice of the primitive vectors.
func SymmetryName(s lattice.Setting, k lattice.FracK) string {
	if _, ok := cubic[s.Bravais]; !ok {
		return ""
	}
	return cubicName(s.Bravais, cubicAxes(s).Mul3x1(mgl64.Vec3(k)))
}

// cubicName names the point u along the cubic axes, units 2π/a.
func cubicName(bravais string, u mgl64.Vec3) string {
	c := cubic[bravais]
	u, ok := c.fold(u)
	if !ok {
		return ""
	}
	for i := range u {
		u[i] = math.Abs(u[i])
	}
	sort.Sort(sort.Reverse(sort.Float64Slice(u[:])))
	for name, p := range c.points {
		if u.Sub(p).Len() <= nameTolerance {
			return name
		}
	}
	for _, l := range c.lines {
		if segmentDistance(u, c.points[l.from], c.points[l.to]) <= nameTolerance {
			return l.name
		}
	}
	for _, p := range c.planes {
		a, b, d := c.points[p.through[0]], c.points[p.through[1]], c.points[p.through[2]]
		n := b.Sub(a).Cross(d.Sub(a)).Normalize()
		if math.Abs(n.Dot(u.Sub(a))) <= nameTolerance {
			return p.name
		}
	}
	return ""
}

// fold brings u into the closed zone, leaving what already lies there.
func (c *cubicNames) fold(u mgl64.Vec3) (mgl64.Vec3, bool) {
	for range 1000 {
		moved := false
		for _, g := range c.shifts {
			x := u.Dot(g) / g.Dot(g)
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return u, false
			}
			if math.Abs(x) > 0.5+1e-9 {
				n := math.Round(x)
				if n == 0 {
					n = math.Copysign(1, x)
				}
				u = u.Sub(g.Mul(n))
				moved = true
			}
		}
		if !moved {
			return u, true
		}
	}
	return u, false
}
