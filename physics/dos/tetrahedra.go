package dos

import (
	"math"
	"math/bits"
	"sort"

	"bandwright/physics/lattice"
	"bandwright/physics/symmetry"
)

// Tetrahedra is the partition of the zone into tetrahedra whose corners are
// mesh points. Tetrahedra with the same irreducible corners have the same
// energies and are kept once, with their share of the zone.
type Tetrahedra struct {
	Corners [][4]int32 // irreducible mesh points, ascending
	Weight  []float64  // volume as a fraction of the zone; sums to 1
}

// NewTetrahedra splits every micro-cell of the mesh into six tetrahedra about
// its shortest diagonal: the interpolation is best along short edges (Blöchl,
// Jepsen, Andersen 1994, sec. II).
func NewTetrahedra(mesh *symmetry.Mesh, l lattice.Lattice) *Tetrahedra {
	d := mesh.Divisions
	shape := split(d, l)
	table := newTable(len(mesh.K))
	index := func(i, j, k int) int32 { return mesh.Index[i+d[0]*(j+d[1]*k)] }
	for k := range d[2] {
		k1 := (k + 1) % d[2]
		for j := range d[1] {
			j1 := (j + 1) % d[1]
			for i := range d[0] {
				i1 := (i + 1) % d[0]
				c := [8]int32{
					index(i, j, k), index(i1, j, k), index(i, j1, k), index(i1, j1, k),
					index(i, j, k1), index(i1, j, k1), index(i, j1, k1), index(i1, j1, k1),
				}
				for _, t := range shape {
					table.add(sorted(c[t[0]], c[t[1]], c[t[2]], c[t[3]]))
				}
			}
		}
	}
	return table.tetrahedra(6 * float64(d[0]) * float64(d[1]) * float64(d[2]))
}

// split returns the corners of the six tetrahedra of a micro-cell; bit 0, 1, 2
// of a corner says whether it lies at the far end along b1, b2, b3. Each runs
// from one end of the shortest diagonal to the other along three edges, in
// each of the six orders.
func split(d [3]int, l lattice.Lattice) [6][4]int {
	best, start := math.Inf(1), 0
	for corner := range 4 { // a diagonal per corner of the face at b3 = 0
		var k lattice.FracK
		for i := range k {
			step := 1 / float64(d[i])
			if corner>>i&1 == 1 {
				step = -step
			}
			k[i] = step
		}
		// Ties go to the first, up to rounding.
		if length := l.Cart(k).Vec().Len(); length < best*(1-1e-9) {
			best, start = length, corner
		}
	}
	orders := [6][2]int{{1, 2}, {1, 4}, {2, 1}, {2, 4}, {4, 1}, {4, 2}}
	var out [6][4]int
	for i, o := range orders {
		out[i] = [4]int{start, start ^ o[0], start ^ o[0] ^ o[1], start ^ 7}
	}
	return out
}

// sorted returns four indices ascending.
func sorted(a, b, c, d int32) [4]int32 {
	if a > b {
		a, b = b, a
	}
	if c > d {
		c, d = d, c
	}
	if a > c {
		a, c = c, a
	}
	if b > d {
		b, d = d, b
	}
	if b > c {
		b, c = c, b
	}
	return [4]int32{a, b, c, d}
}

// table counts tetrahedra by their corners: an open hash with linear probing,
// since 663 552 look-ups of a 48³ mesh are most of the work of keying.
type table struct {
	slots []int32 // index into keys, or -1
	shift uint
	keys  [][4]int32
	count []int32
}

func newTable(points int) *table {
	// Some five tetrahedra per irreducible point, at a load below one half.
	size := 1 << bits.Len(uint(12*points+64))
	t := &table{slots: make([]int32, size), shift: uint(64 - bits.Len(uint(size-1)))}
	for i := range t.slots {
		t.slots[i] = -1
	}
	return t
}

func (t *table) slot(key [4]int32) uint64 {
	h := uint64(uint32(key[0]))*0x9e3779b97f4a7c15 ^ uint64(uint32(key[1]))*0xc2b2ae3d27d4eb4f ^
		uint64(uint32(key[2]))*0x165667b19e3779f9 ^ uint64(uint32(key[3]))*0xd6e8feb86659fd93
	h ^= h >> 29
	return h * 0x9e3779b97f4a7c15 >> t.shift
}

func (t *table) add(key [4]int32) {
	mask := uint64(len(t.slots) - 1)
	for i := t.slot(key); ; i = (i + 1) & mask {
		s := t.slots[i]
		if s < 0 {
			t.slots[i] = int32(len(t.keys))
			t.keys = append(t.keys, key)
			t.count = append(t.count, 1)
			if 2*len(t.keys) > len(t.slots) {
				t.grow()
			}
			return
		}
		if t.keys[s] == key {
			t.count[s]++
			return
		}
	}
}

func (t *table) grow() {
	t.slots = make([]int32, 2*len(t.slots))
	t.shift--
	for i := range t.slots {
		t.slots[i] = -1
	}
	mask := uint64(len(t.slots) - 1)
	for n, key := range t.keys {
		i := t.slot(key)
		for t.slots[i] >= 0 {
			i = (i + 1) & mask
		}
		t.slots[i] = int32(n)
	}
}

// tetrahedra returns the counted tetrahedra in order of their corners, so that
// the sums that follow do not depend on the hash and walk memory forwards.
func (t *table) tetrahedra(total float64) *Tetrahedra {
	order := make([]int, len(t.keys))
	for i := range order {
		order[i] = i
	}
	sort.Slice(order, func(i, j int) bool {
		a, b := t.keys[order[i]], t.keys[order[j]]
		for n := range a {
			if a[n] != b[n] {
				return a[n] < b[n]
			}
		}
		return false
	})
	out := &Tetrahedra{Corners: make([][4]int32, len(order)), Weight: make([]float64, len(order))}
	for i, n := range order {
		out.Corners[i] = t.keys[n]
		out.Weight[i] = float64(t.count[n]) / total
	}
	return out
}
