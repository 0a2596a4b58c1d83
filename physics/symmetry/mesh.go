package symmetry

import (
	"fmt"

	"bandwright/physics/lattice"
)

// Mesh is a regular Γ-centred mesh of k points reduced by symmetry and time
// reversal.
type Mesh struct {
	Divisions [3]int
	K         []lattice.FracK // irreducible points, fractions in (−1/2, 1/2]
	Weight    []float64       // share of the full mesh; sums to 1
	// Index gives for each point (i, j, l)/Divisions of the full mesh, at
	// i + d0·(j + d1·l), its irreducible point.
	Index []int32
}

// MaxMesh bounds the number of points of a full mesh: 512³.
const MaxMesh = 1 << 27

// Mesh returns the Γ-centred mesh with the given divisions along b1, b2, b3.
// Operations that do not carry the mesh onto itself, as happens when the
// divisions are lower in symmetry than the crystal, are left out.
func (g *Group) Mesh(div [3]int) (*Mesh, error) {
	total := 1
	for i, d := range div {
		if d < 1 || d > MaxMesh {
			return nil, fmt.Errorf("mesh divisions %v: number %d is %d; give whole numbers from 1", div, i+1, d)
		}
		total *= d
		if total > MaxMesh {
			return nil, fmt.Errorf("mesh divisions %v make more than %d points: give fewer", div, MaxMesh)
		}
	}
	ops := g.meshOperations(div)
	m := &Mesh{Divisions: div, Index: make([]int32, total)}
	for i := range m.Index {
		m.Index[i] = -1
	}
	var count []int
	at := 0
	for l := range div[2] {
		for j := range div[1] {
			for i := range div[0] {
				if m.Index[at] < 0 {
					id := int32(len(m.K))
					m.K = append(m.K, lattice.FracK{centred(i, div[0]), centred(j, div[1]), centred(l, div[2])})
					count = append(count, m.spread(ops, id, i, j, l))
				}
				at++
			}
		}
	}
	m.Weight = make([]float64, len(count))
	for i, n := range count {
		m.Weight[i] = float64(n) / float64(total)
	}
	return m, nil
}

// spread marks all images of the mesh point (i, j, l) with id and counts them.
func (m *Mesh) spread(ops [][3][3]int, id int32, i, j, l int) int {
	d := m.Divisions
	n := 0
	for _, r := range ops {
		p := modulo(r[0][0]*i+r[0][1]*j+r[0][2]*l, d[0])
		q := modulo(r[1][0]*i+r[1][1]*j+r[1][2]*l, d[1])
		s := modulo(r[2][0]*i+r[2][1]*j+r[2][2]*l, d[2])
		if at := p + d[0]*(q+d[1]*s); m.Index[at] < 0 {
			m.Index[at] = id
			n++
		}
	}
	return n
}

// meshOperations returns the matrices that act on mesh indices, time reversal
// included.
func (g *Group) meshOperations(div [3]int) [][3][3]int {
	seen := map[[3][3]int]bool{}
	var out [][3][3]int
	for _, k := range g.k {
		var r, reversed [3][3]int
		whole := true
		for a := range 3 {
			for b := range 3 {
				n := k[a][b] * div[a]
				if n%div[b] != 0 {
					whole = false
				}
				r[a][b] = n / div[b]
				reversed[a][b] = -r[a][b]
			}
		}
		if !whole {
			continue
		}
		for _, x := range [][3][3]int{r, reversed} {
			if !seen[x] {
				seen[x] = true
				out = append(out, x)
			}
		}
	}
	return out
}

func modulo(x, d int) int {
	x %= d
	if x < 0 {
		x += d
	}
	return x
}

func centred(i, d int) float64 {
	if 2*i > d {
		i -= d
	}
	return float64(i) / float64(d)
}
