package zone

import (
	"math"
	"sort"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
)

// Facet is a face of a Polyhedron.
type Facet struct {
	Normal mgl64.Vec3 // of length one, outward
	Offset float64    // the face lies in Normal·k = Offset, Å⁻¹
	Loop   []int      // vertices, counter-clockwise seen from outside
}

// Polyhedron is a convex polyhedron in reciprocal space.
type Polyhedron struct {
	Vertices []lattice.CartK
	Edges    [][2]int
	Faces    []Facet
}

// Crossing says where a line enters and leaves a polyhedron.
type Crossing struct {
	Enter, Exit         float64 // parameters t of origin + t·direction, Enter ≤ Exit
	EnterFace, ExitFace int
}

// Ray returns where the line origin + t·direction, t any real number, enters and
// leaves p; ok is false if it misses p, or if direction is zero or not finite.
func (p *Polyhedron) Ray(origin lattice.CartK, direction mgl64.Vec3) (hit Crossing, ok bool) {
	length := direction.Len()
	if !(length > 0) || math.IsInf(length, 0) {
		return Crossing{}, false
	}
	hit = Crossing{math.Inf(-1), math.Inf(1), -1, -1}
	o := origin.Vec()
	for i := range p.Faces {
		f := &p.Faces[i]
		speed := f.Normal.Dot(direction)
		left := f.Offset - f.Normal.Dot(o)
		if math.Abs(speed) <= 1e-14*length {
			if !(left >= 0) {
				return Crossing{}, false
			}
			continue
		}
		t := left / speed
		if speed < 0 && t > hit.Enter {
			hit.Enter, hit.EnterFace = t, i
		}
		if speed > 0 && t < hit.Exit {
			hit.Exit, hit.ExitFace = t, i
		}
	}
	if hit.EnterFace < 0 || hit.ExitFace < 0 || !(hit.Enter <= hit.Exit) {
		return Crossing{}, false
	}
	return hit, true
}

// Contains reports whether k lies in p, its surface included, within tol, Å⁻¹.
func (p *Polyhedron) Contains(k lattice.CartK, tol float64) bool {
	for i := range p.Faces {
		if !(p.Faces[i].Normal.Dot(k.Vec())-p.Faces[i].Offset <= tol) {
			return false
		}
	}
	return true
}

// Volume returns the volume, Å⁻³: the sum of the tetrahedra that the faces,
// split into triangles, form with the first vertex.
func (p *Polyhedron) Volume() float64 {
	if len(p.Vertices) == 0 {
		return 0
	}
	o := p.Vertices[0].Vec()
	sum := 0.0
	for _, f := range p.Faces {
		a := p.Vertices[f.Loop[0]].Vec().Sub(o)
		for i := 2; i < len(f.Loop); i++ {
			b, c := p.Vertices[f.Loop[i-1]].Vec().Sub(o), p.Vertices[f.Loop[i]].Vec().Sub(o)
			sum += a.Dot(b.Cross(c))
		}
	}
	return sum / 6
}

// Centre returns the mean of the vertices.
func (p *Polyhedron) Centre() lattice.CartK {
	var c mgl64.Vec3
	for _, v := range p.Vertices {
		c = c.Add(v.Vec())
	}
	return lattice.CartK(c.Mul(1 / float64(len(p.Vertices))))
}

// setEdges collects the edges from the loops, each once, in ascending order.
func (p *Polyhedron) setEdges() {
	p.Edges = nil
	for _, f := range p.Faces {
		for i, a := range f.Loop {
			// The other face runs along the edge in the opposite sense.
			if b := f.Loop[(i+1)%len(f.Loop)]; a < b {
				p.Edges = append(p.Edges, [2]int{a, b})
			}
		}
	}
	sort.Slice(p.Edges, func(i, j int) bool {
		if p.Edges[i][0] != p.Edges[j][0] {
			return p.Edges[i][0] < p.Edges[j][0]
		}
		return p.Edges[i][1] < p.Edges[j][1]
	})
}

// loopNormal returns twice the area vector of a loop.
func loopNormal(vertices []lattice.CartK, loop []int) mgl64.Vec3 {
	var n mgl64.Vec3
	a := vertices[loop[0]].Vec()
	for i := 2; i < len(loop); i++ {
		n = n.Add(vertices[loop[i-1]].Vec().Sub(a).Cross(vertices[loop[i]].Vec().Sub(a)))
	}
	return n
}

// clip returns the part of p with normal·k ≤ offset; normal has length one.
// Vertices within tol of the plane count as on it. p itself comes back when
// nothing is cut off, nil when nothing is left.
func (p *Polyhedron) clip(normal mgl64.Vec3, offset, tol float64) *Polyhedron {
	side := make([]int, len(p.Vertices))
	distance := make([]float64, len(p.Vertices))
	in, out := 0, 0
	for i, v := range p.Vertices {
		distance[i] = normal.Dot(v.Vec()) - offset
		switch {
		case distance[i] > tol:
			side[i] = 1
			out++
		case distance[i] < -tol:
			side[i] = -1
			in++
		}
	}
	if out == 0 {
		return p
	}
	if in == 0 {
		return nil
	}
	vertices := append([]lattice.CartK(nil), p.Vertices...)
	onPlane := make([]bool, len(vertices))
	cut := map[[2]int]int{}
	crossing := func(a, b int) int {
		if a > b {
			a, b = b, a
		}
		id, ok := cut[[2]int{a, b}]
		if !ok {
			t := distance[a] / (distance[a] - distance[b])
			va, vb := p.Vertices[a].Vec(), p.Vertices[b].Vec()
			id = len(vertices)
			vertices = append(vertices, lattice.CartK(va.Add(vb.Sub(va).Mul(t))))
			onPlane = append(onPlane, true)
			cut[[2]int{a, b}] = id
		}
		return id
	}
	q := &Polyhedron{}
	for _, f := range p.Faces {
		var loop []int
		inside := false
		for i, a := range f.Loop {
			b := f.Loop[(i+1)%len(f.Loop)]
			if side[a] <= 0 {
				loop = append(loop, a)
				inside = inside || side[a] < 0
				if side[a] == 0 {
					onPlane[a] = true
				}
			}
			if side[a]*side[b] < 0 {
				loop = append(loop, crossing(a, b))
			}
		}
		if inside && len(loop) >= 3 {
			q.Faces = append(q.Faces, Facet{f.Normal, f.Offset, loop})
		}
	}
	var lid []int
	for i, on := range onPlane {
		if on {
			lid = append(lid, i)
		}
	}
	if len(lid) >= 3 {
		sortAround(vertices, lid, normal)
		q.Faces = append(q.Faces, Facet{normal, offset, lid})
	}
	q.keepUsed(vertices)
	q.setEdges()
	return q
}

// sortAround orders the vertices of a convex polygon counter-clockwise about normal.
func sortAround(vertices []lattice.CartK, loop []int, normal mgl64.Vec3) {
	var centre mgl64.Vec3
	for _, i := range loop {
		centre = centre.Add(vertices[i].Vec().Mul(1 / float64(len(loop))))
	}
	x := vertices[loop[0]].Vec().Sub(centre)
	y := normal.Cross(x)
	angle := make(map[int]float64, len(loop))
	for _, i := range loop {
		d := vertices[i].Vec().Sub(centre)
		angle[i] = math.Atan2(d.Dot(y), d.Dot(x))
	}
	sort.Slice(loop, func(a, b int) bool { return angle[loop[a]] < angle[loop[b]] })
}

// keepUsed numbers the vertices of the faces anew and drops the others.
func (p *Polyhedron) keepUsed(vertices []lattice.CartK) {
	number := make([]int, len(vertices))
	p.Vertices = nil
	for f := range p.Faces {
		for i, v := range p.Faces[f].Loop {
			if number[v] == 0 {
				p.Vertices = append(p.Vertices, vertices[v])
				number[v] = len(p.Vertices)
			}
			p.Faces[f].Loop[i] = number[v] - 1
		}
	}
}
