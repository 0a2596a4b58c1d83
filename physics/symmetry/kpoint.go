package symmetry

import (
	"math"

	"bandwright/physics/lattice"
)

// Coincidence is the largest difference of fractions by which two k points
// still count as one. It lets points typed with eight digits be special.
const Coincidence = 1e-7

// SameK reports whether a and b are equal modulo a reciprocal lattice vector.
func SameK(a, b lattice.FracK) bool {
	for i := range a {
		d := a[i] - b[i]
		if !(math.Abs(d-math.Round(d)) <= Coincidence) {
			return false
		}
	}
	return true
}

// ApplyK returns k turned by operation i, not folded back.
func (g *Group) ApplyK(i int, k lattice.FracK) lattice.FracK {
	return rotate(g.k[i], k)
}

// Star returns the star of k: the distinct points, modulo reciprocal lattice
// vectors, that the operations make of it, k first. With timeReversal the
// points −k belong to it too.
func (g *Group) Star(k lattice.FracK, timeReversal bool) []lattice.FracK {
	star := []lattice.FracK{k}
	add := func(q lattice.FracK) {
		for _, s := range star {
			if SameK(s, q) {
				return
			}
		}
		star = append(star, q)
	}
	for i := range g.Ops {
		add(g.ApplyK(i, k))
	}
	if timeReversal {
		for i := range g.Ops {
			q := g.ApplyK(i, k)
			add(lattice.FracK{-q[0], -q[1], -q[2]})
		}
	}
	for i := range star {
		for j, x := range star[i] {
			star[i][j] = x + 0 // no negative zero
		}
	}
	return star
}

// LittleCoGroup returns the indices of the operations that leave k where it is,
// modulo a reciprocal lattice vector.
func (g *Group) LittleCoGroup(k lattice.FracK) []int {
	var out []int
	for i := range g.Ops {
		if SameK(g.ApplyK(i, k), k) {
			out = append(out, i)
		}
	}
	return out
}
