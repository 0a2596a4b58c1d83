package tightbinding

import (
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/catalog"
	"bandwright/physics/hamiltonian"
)

// orbitalNames holds the functions of each shell in the order of the basis.
var orbitalNames = map[hamiltonian.AngularMomentum][]string{
	hamiltonian.S:     {"s"},
	hamiltonian.P:     {"px", "py", "pz"},
	hamiltonian.D:     {"dxy", "dyz", "dzx", "dx2-y2", "d3z2-r2"},
	hamiltonian.SStar: {"s*"},
}

// quadrupole holds the symmetric, traceless tensor Q, with tr Q² = 1, of each
// d function ∝ r·Q·r, in the order of orbitalNames.
var quadrupole = [5]mgl64.Mat3{
	{0, math.Sqrt2 / 2, 0, math.Sqrt2 / 2, 0, 0, 0, 0, 0},
	{0, 0, 0, 0, 0, math.Sqrt2 / 2, 0, math.Sqrt2 / 2, 0},
	{0, 0, math.Sqrt2 / 2, 0, 0, 0, math.Sqrt2 / 2, 0, 0},
	{math.Sqrt2 / 2, 0, 0, 0, -math.Sqrt2 / 2, 0, 0, 0, 0},
	{-1 / sqrt6, 0, 0, 0, -1 / sqrt6, 0, 0, 0, 2 / sqrt6},
}

var sqrt6 = math.Sqrt(6)

// along is a real orbital seen along a bond: its amplitude with no angular
// momentum about the bond, its part with one unit as a vector across the
// bond, and for d the tensor.
type along struct {
	sigma float64
	pi    mgl64.Vec3
	q     mgl64.Mat3
}

// resolve decomposes function i of shell l along the unit vector d.
//
// For d functions: σ = √(3/2) d·Q·d and π = √2 (Q d − (d·Q·d) d). With d
// along z these are 1 for d3z2−r2 and the unit vectors x, y for dzx, dyz.
func resolve(l hamiltonian.AngularMomentum, i int, d mgl64.Vec3) along {
	switch l {
	case hamiltonian.P:
		var e mgl64.Vec3
		e[i] = 1
		return along{sigma: d[i], pi: e.Sub(d.Mul(d[i]))}
	case hamiltonian.D:
		q := quadrupole[i]
		qd := q.Mul3x1(d)
		dqd := d.Dot(qd)
		return along{sigma: math.Sqrt(1.5) * dqd, pi: qd.Sub(d.Mul(dqd)).Mul(math.Sqrt2), q: q}
	}
	return along{sigma: 1}
}

// factor returns what a two-centre integral of the given symmetry is
// multiplied with in ⟨a|H|b⟩, for functions a, b resolved along the bond from
// a to b: Slater, Koster 1954, Table I, in a form without a table. The parts
// of one, of equal angular momentum about the bond, are the scalar products;
// for δ it is the whole product tr(Q_a Q_b) less the others.
func factor(symmetry catalog.Symmetry, a, b along) float64 {
	switch symmetry {
	case catalog.Sigma:
		return a.sigma * b.sigma
	case catalog.Pi:
		return a.pi.Dot(b.pi)
	}
	var whole float64
	for i := range a.q {
		whole += a.q[i] * b.q[i]
	}
	return whole - a.sigma*b.sigma - a.pi.Dot(b.pi)
}
