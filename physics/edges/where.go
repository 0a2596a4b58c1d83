package edges

import (
	"fmt"
	"math"
	"strings"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
	"bandwright/physics/zone"
)

// places names k points by the special points of a lattice.
type places struct {
	setting lattice.Setting
	points  []zone.SpecialPoint
	lines   [][2]zone.SpecialPoint
}

// newPlaces collects the special points, the lines from Γ to each of them, and
// the other legs of the standard path. A lattice without known special points
// has none, and its k points are named by their coordinates.
func newPlaces(s lattice.Setting) *places {
	p := &places{setting: s}
	points, err := zone.SpecialPoints(s)
	if err != nil {
		return p
	}
	p.points = points
	byLabel := map[string]zone.SpecialPoint{}
	var centre *zone.SpecialPoint
	for i, point := range points {
		byLabel[point.Label] = point
		if point.K == (lattice.FracK{}) {
			centre = &points[i]
		}
	}
	if centre != nil {
		for _, point := range points {
			if point.Label != centre.Label {
				p.lines = append(p.lines, [2]zone.SpecialPoint{*centre, point})
			}
		}
	}
	runs, err := zone.StandardPath(s)
	if err != nil {
		return p
	}
	for _, run := range runs {
		for i := 1; i < len(run); i++ {
			from, ok1 := byLabel[run[i-1]]
			to, ok2 := byLabel[run[i]]
			if ok1 && ok2 {
				p.lines = append(p.lines, [2]zone.SpecialPoint{from, to})
			}
		}
	}
	return p
}

// name says where a star lies and which of its members, up to a reciprocal
// lattice vector, is meant.
func (p *places) name(star []lattice.FracK) (lattice.FracK, string) {
	unit := 2 * math.Pi / p.setting.A
	tol := placeTolerance * unit
	l := p.setting.Lattice
	nearest, label, image := math.Inf(1), "", star[0]
	for _, point := range p.points {
		for _, k := range star {
			for _, q := range images(k, point.K) {
				d := l.Cart(difference(q, point.K)).Vec().Len()
				if d < nearest*(1-1e-9) {
					nearest, label, image = d, point.Label, q
				}
				if d < tol {
					return point.K, point.Label
				}
			}
		}
	}
	for _, line := range p.lines {
		a, b := line[0].K, line[1].K
		d := l.Cart(difference(b, a)).Vec()
		for _, k := range star {
			for _, q := range append(images(k, a), images(k, b)...) {
				r := l.Cart(difference(q, a)).Vec()
				t := r.Dot(d) / d.Dot(d)
				if t > 0 && t < 1 && off(r, d, t) < tol {
					return q, fmt.Sprintf("%.4f of %s–%s", t, line[0].Label, line[1].Label)
				}
			}
		}
	}
	if nearest < 0.1*unit {
		return image, fmt.Sprintf("near %s, %.4f·2π/a off", label, nearest/unit)
	}
	k := star[0]
	for i := range k {
		k[i] -= math.Round(k[i])
	}
	c := p.setting.FromFrac(lattice.TwoPiOverA, k)
	for i, x := range c {
		c[i] = math.Round(x*1e4)/1e4 + 0 // no minus sign before zero
	}
	return k, strings.ReplaceAll(fmt.Sprintf("(%.4f, %.4f, %.4f)·2π/a", c[0], c[1], c[2]), "-", "−")
}

func off(r, d mgl64.Vec3, t float64) float64 { return r.Sub(d.Mul(t)).Len() }

func difference(a, b lattice.FracK) lattice.FracK {
	return lattice.FracK{a[0] - b[0], a[1] - b[1], a[2] - b[2]}
}

// images returns the k + G about the point, whose fractions differ from it by
// less than one.
func images(k, about lattice.FracK) []lattice.FracK {
	var base lattice.FracK
	for i := range k {
		base[i] = k[i] + math.Ceil(about[i]-k[i]-1)
	}
	var out []lattice.FracK
	for n := range 27 {
		out = append(out, base.Add(lattice.FracK{float64(n % 3), float64(n / 3 % 3), float64(n / 9)}))
	}
	return out
}
