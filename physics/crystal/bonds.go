package crystal

import (
	"fmt"
	"math"
	"sort"

	"github.com/go-gl/mathgl/mgl64"
)

// Bond is a pair of atoms, counted once: between site From of the home cell and
// site To of the cell displaced by Cell.
type Bond struct {
	From, To int
	Cell     [3]int     // in primitive vectors
	Vector   mgl64.Vec3 // from From to To, Å
	Length   float64    // Å
	Shell    int        // from 1, over the whole crystal
}

// Shell is a set of neighbours at one distance. Shells are numbered over the
// whole crystal: a site may have no neighbour in a shell of others.
type Shell struct {
	Index    int
	Distance float64 // Å, the mean over the shell
	Count    []int   // neighbours of each site
}

// ShellTolerance is the difference, Å, up to which distances count as one shell
// when Bonds is given no tolerance: above the rounding of printed coordinates,
// far below the distance between shells.
const ShellTolerance = 1e-3

// MaxShells bounds the number of shells that Bonds looks for.
const MaxShells = 60

// Bonds returns the bonds of the first shells of neighbours, each unordered
// pair once, ordered by shell, From, To and Cell, and the shells. Distances
// that follow each other within tol (Å) belong to one shell; tol = 0 stands for
// ShellTolerance.
func (c *Crystal) Bonds(shells int, tol float64) (bonds []Bond, shellsInfo []Shell, err error) {
	if shells < 1 || shells > MaxShells {
		return nil, nil, fmt.Errorf("%d shells of neighbours asked for: give 1 to %d", shells, MaxShells)
	}
	if math.IsNaN(tol) || tol < 0 || tol > 1 {
		return nil, nil, fmt.Errorf("tolerance of the neighbour shells is %v Å: give a number from 0 to 1", tol)
	}
	if tol == 0 {
		tol = ShellTolerance
	}
	radius := 1.5 * math.Cbrt(c.Lattice().Volume()/float64(len(c.Sites)))
	for {
		var pairs []pair
		c.eachPair(radius, func(p pair) { pairs = append(pairs, p) })
		sort.Slice(pairs, func(i, j int) bool { return pairs[i].length < pairs[j].length })
		last := 0.0
		found := 0
		for i := range pairs {
			if i == 0 || pairs[i].length-last > tol {
				found++
			}
			last = pairs[i].length
			pairs[i].shell = found
		}
		// One shell more than wanted shows that the last one wanted is complete.
		if found > shells {
			bonds, shellsInfo = c.gather(pairs, shells)
			return bonds, shellsInfo, nil
		}
		radius *= 1.25
	}
}

func (c *Crystal) gather(pairs []pair, shells int) ([]Bond, []Shell) {
	info := make([]Shell, shells)
	members := make([]int, shells)
	for i := range info {
		info[i] = Shell{Index: i + 1, Count: make([]int, len(c.Sites))}
	}
	var bonds []Bond
	for _, p := range pairs {
		if p.shell > shells {
			break
		}
		bonds = append(bonds, Bond{From: p.from, To: p.to, Cell: p.cell, Vector: p.vector, Length: p.length, Shell: p.shell})
		s := &info[p.shell-1]
		s.Count[p.from]++
		s.Count[p.to]++
		s.Distance += p.length
		members[p.shell-1]++
	}
	for i := range info {
		info[i].Distance /= float64(members[i])
	}
	sort.Slice(bonds, func(i, j int) bool {
		a, b := &bonds[i], &bonds[j]
		switch {
		case a.Shell != b.Shell:
			return a.Shell < b.Shell
		case a.From != b.From:
			return a.From < b.From
		case a.To != b.To:
			return a.To < b.To
		}
		return before(a.Cell, b.Cell)
	})
	return bonds, info
}

func before(a, b [3]int) bool {
	for i := range a {
		if a[i] != b[i] {
			return a[i] < b[i]
		}
	}
	return false
}

type pair struct {
	from, to int
	cell     [3]int
	vector   mgl64.Vec3
	length   float64
	shell    int
}

// eachPair calls f for every pair of atoms no farther apart than radius, each
// once. It walks the cells of the reduced lattice, so that oblique vectors cost
// no more than good ones.
func (c *Crystal) eachPair(radius float64, f func(pair)) {
	l := c.Lattice()
	r, n := l.Reduced()
	// Heights of the cell: |r_i · d_i| with d_i the dual vector along r_j × r_k.
	var dual [3]mgl64.Vec3
	var reach [3]float64
	det := r[0].Dot(r[1].Cross(r[2]))
	for i := range dual {
		dual[i] = r[(i+1)%3].Cross(r[(i+2)%3]).Mul(1 / det)
		reach[i] = radius * dual[i].Len()
	}
	for i := range c.Sites {
		for j := i; j < len(c.Sites); j++ {
			d := c.Sites[j].Position.Sub(c.Sites[i].Position)
			var low, high [3]int
			for m := range 3 {
				x := d.Dot(dual[m])
				low[m] = int(math.Ceil(-x - reach[m] - 1e-9))
				high[m] = int(math.Floor(-x + reach[m] + 1e-9))
			}
			for p := low[0]; p <= high[0]; p++ {
				for q := low[1]; q <= high[1]; q++ {
					for s := low[2]; s <= high[2]; s++ {
						var cell [3]int
						for m := range 3 {
							cell[m] = p*n[0][m] + q*n[1][m] + s*n[2][m]
						}
						if i == j && !before([3]int{}, cell) {
							continue // the pair of an atom and its image, from the other end, or itself
						}
						v := d.Add(l.Position([3]float64{float64(cell[0]), float64(cell[1]), float64(cell[2])}))
						if length := v.Len(); length <= radius {
							f(pair{from: i, to: j, cell: cell, vector: v, length: length})
						}
					}
				}
			}
		}
	}
}
