package zone

import (
	"fmt"
	"math"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
)

// Tolerance, relative to the shortest reciprocal lattice vector, is the length
// up to which edges of the zone are contracted to a point, and the distance up
// to which a k point counts as on a face, edge or vertex. Lattices typed with
// seven digits so get the zone of the symmetry they stand for.
const Tolerance = 1e-6

// Face is a face of the zone: it lies in the bisector plane of G.
type Face struct {
	G      [3]int     // in primitive reciprocal vectors
	Normal mgl64.Vec3 // G/2, Å⁻¹: outward, and at the same time the centre of the face
	Loop   []int      // vertices, counter-clockwise seen from outside
}

// Zone is the first Brillouin zone: the points of reciprocal space that lie no
// farther from Γ than from any other reciprocal lattice point.
type Zone struct {
	Lattice  lattice.Lattice
	Vertices []lattice.CartK
	Edges    [][2]int
	Faces    []Face

	body     *Polyhedron
	scale    float64 // length of the shortest reciprocal lattice vector, Å⁻¹
	relevant [7]bisector
}

// bisector holds one of the vectors, with its opposite, that bound the zone.
type bisector struct {
	g [3]int
	v mgl64.Vec3
	q float64 // v·v
}

// First returns the first zone of l.
//
// With an obtuse superbase v0…v3 of the reciprocal lattice, the sums v_S over
// the 14 proper subsets S of {0,1,2,3} bound the cell, and its 24 vertices
// belong to the permutations of 0…3: vertex (i,j,k,l) lies on the bisectors of
// v_i, v_i+v_j and v_i+v_j+v_k. Edges join permutations that differ in one swap
// of neighbours; those of the swap i↔j are parallel and have a length in
// proportion to −v_i·v_j. Where that product vanishes they shrink to points, a
// hexagon becomes a parallelogram and a parallelogram an edge, and nothing else
// changes (Conway, Sloane 1992). So the shape never depends on which of several
// nearly coincident vertices rounding prefers.
func First(l lattice.Lattice) (*Zone, error) {
	if !(l.Volume() > 0) {
		return nil, fmt.Errorf("the lattice has no volume: make it with lattice.New")
	}
	s := lattice.Obtuse(l.ReciprocalVectors())
	z := &Zone{Lattice: l}
	z.scale = math.Inf(1)
	for i := range z.relevant {
		// The subsets {i} and {0,i}: one of each pair of complements.
		set := [...]int{1, 2, 4, 8, 3, 5, 9}[i]
		g, v := subset(s, set)
		z.relevant[i] = bisector{g, v, v.Dot(v)}
		z.scale = math.Min(z.scale, v.Len())
	}
	corner, place := z.corners(s)
	z.Vertices = corner
	for set := 1; set < 15; set++ {
		g, v := subset(s, set)
		f := Face{G: g, Normal: v.Mul(0.5)}
		for _, p := range faceLoop(set) {
			c := place[p]
			if n := len(f.Loop); n == 0 || f.Loop[n-1] != c && (f.Loop[0] != c || n == 1) {
				f.Loop = append(f.Loop, c)
			}
		}
		if len(f.Loop) < 3 {
			continue // shrunk to an edge or a point
		}
		if loopNormal(z.Vertices, f.Loop).Dot(f.Normal) < 0 {
			for a, b := 0, len(f.Loop)-1; a < b; a, b = a+1, b-1 {
				f.Loop[a], f.Loop[b] = f.Loop[b], f.Loop[a]
			}
		}
		z.Faces = append(z.Faces, f)
	}
	z.body = &Polyhedron{Vertices: z.Vertices}
	for _, f := range z.Faces {
		d := f.Normal.Len()
		z.body.Faces = append(z.body.Faces, Facet{Normal: f.Normal.Mul(1 / d), Offset: d, Loop: f.Loop})
	}
	z.body.setEdges()
	z.Edges = z.body.Edges
	return z, nil
}

// subset returns the sum of the superbase vectors whose bits are in set.
func subset(s lattice.Superbase, set int) (g [3]int, v mgl64.Vec3) {
	for i := range 4 {
		if set&(1<<i) != 0 {
			v = v.Add(s.V[i])
			for m := range g {
				g[m] += s.N[i][m]
			}
		}
	}
	return g, v
}

// permutations of 0, 1, 2, 3 in lexicographic order.
var permutations = func() (out [24][4]int) {
	n := 0
	for i := range 4 {
		for j := range 4 {
			for k := range 4 {
				if i != j && i != k && j != k {
					out[n] = [4]int{i, j, k, 6 - i - j - k}
					n++
				}
			}
		}
	}
	return out
}()

func permutationIndex(p [4]int) int {
	for i := range permutations {
		if permutations[i] == p {
			return i
		}
	}
	panic("zone: not a permutation")
}

// corners returns the vertices of the zone and, for each permutation, which of
// them is its own.
func (z *Zone) corners(s lattice.Superbase) (corner []lattice.CartK, place [24]int) {
	var at [24]mgl64.Vec3
	for n, p := range permutations {
		a, b, c := s.V[p[0]], s.V[p[1]], s.V[p[2]]
		// x·a = |a|²/2, x·(a+b) = |a+b|²/2, x·(a+b+c) = |a+b+c|²/2
		ha := a.Dot(a) / 2
		hb := b.Dot(b)/2 + a.Dot(b)
		hc := c.Dot(c)/2 + c.Dot(a.Add(b))
		det := a.Dot(b.Cross(c))
		at[n] = b.Cross(c).Mul(ha).Add(c.Cross(a).Mul(hb)).Add(a.Cross(b).Mul(hc)).Mul(1 / det)
	}
	// Contract the short edges.
	for n := range place {
		place[n] = n
	}
	for i := range 4 {
		for j := i + 1; j < 4; j++ {
			if z.edgeLength(s, i, j) > Tolerance*z.scale {
				continue
			}
			for n, p := range permutations {
				for m := range 3 {
					if p[m] == i && p[m+1] == j {
						p[m], p[m+1] = j, i
						merge(&place, n, permutationIndex(p))
					}
				}
			}
		}
	}
	number := map[int]int{}
	var sum []mgl64.Vec3
	var count []float64
	for n, root := range place {
		id, ok := number[root]
		if !ok {
			id = len(sum)
			number[root] = id
			sum = append(sum, mgl64.Vec3{})
			count = append(count, 0)
		}
		place[n] = id
		sum[id] = sum[id].Add(at[n])
		count[id]++
	}
	for i := range sum {
		corner = append(corner, lattice.CartK(sum[i].Mul(1/count[i])))
	}
	return corner, place
}

func merge(place *[24]int, a, b int) {
	from, to := place[b], place[a]
	for n := range place {
		if place[n] == from {
			place[n] = to
		}
	}
}

// edgeLength returns the length of the six edges that belong to the pair i, j.
func (z *Zone) edgeLength(s lattice.Superbase, i, j int) float64 {
	k, l := -1, -1
	for m := range 4 {
		if m != i && m != j {
			k, l = l, m
		}
	}
	across := s.V[k].Cross(s.V[l])
	return math.Abs(s.V[i].Dot(s.V[j])) * across.Len() / math.Abs(s.V[i].Dot(across))
}

// faceLoop returns the permutations around the face of a subset, in cyclic order.
func faceLoop(set int) []int {
	var in, out []int
	for i := range 4 {
		if set&(1<<i) != 0 {
			in = append(in, i)
		} else {
			out = append(out, i)
		}
	}
	var loop [][4]int
	switch len(in) {
	case 1:
		i, a, b, c := in[0], out[0], out[1], out[2]
		loop = [][4]int{{i, a, b, c}, {i, b, a, c}, {i, b, c, a}, {i, c, b, a}, {i, c, a, b}, {i, a, c, b}}
	case 2:
		a, b, c, d := in[0], in[1], out[0], out[1]
		loop = [][4]int{{a, b, c, d}, {b, a, c, d}, {b, a, d, c}, {a, b, d, c}}
	case 3:
		a, b, c, l := in[0], in[1], in[2], out[0]
		loop = [][4]int{{a, b, c, l}, {b, a, c, l}, {b, c, a, l}, {c, b, a, l}, {c, a, b, l}, {a, c, b, l}}
	}
	ids := make([]int, len(loop))
	for i, p := range loop {
		ids[i] = permutationIndex(p)
	}
	return ids
}

// Volume returns the volume of the zone, Å⁻³, from its faces.
func (z *Zone) Volume() float64 { return z.body.Volume() }

// Polyhedron returns the zone as a polyhedron, with the same vertices and faces.
func (z *Zone) Polyhedron() *Polyhedron { return z.body }

// FaceCentre returns the centre G/2 of face i.
func (z *Zone) FaceCentre(i int) lattice.FracK {
	g := z.Faces[i].G
	return lattice.FracK{float64(g[0]) / 2, float64(g[1]) / 2, float64(g[2]) / 2}
}

// EdgeMidpoint returns the middle of edge i.
func (z *Zone) EdgeMidpoint(i int) lattice.FracK {
	a, b := z.Vertices[z.Edges[i][0]].Vec(), z.Vertices[z.Edges[i][1]].Vec()
	return z.Lattice.Frac(lattice.CartK(a.Add(b).Mul(0.5)))
}

// Vertex returns vertex i as fractions of the reciprocal vectors.
func (z *Zone) Vertex(i int) lattice.FracK { return z.Lattice.Frac(z.Vertices[i]) }

// Ray returns where the line origin + t·direction, t any real number, enters and
// leaves the zone; ok is false if it misses the zone or direction is zero.
func (z *Zone) Ray(origin lattice.CartK, direction mgl64.Vec3) (hit Crossing, ok bool) {
	return z.body.Ray(origin, direction)
}
