package path

import (
	"math"
	"sort"

	"bandwright/physics/lattice"
)

// Sampling is a path cut into points of constant spacing. Both ends of every
// leg are among them, exactly; a point where two legs of one run meet occurs
// once, and a break is two points at the same X.
type Sampling struct {
	K     []lattice.FracK
	X     []float64 // distance along the path, Å⁻¹; breaks have no width
	Leg   []int     // leg of each point; where two meet, the one that ends there
	Ticks []Tick
	Legs  []LegSpan
}

// Tick marks the end of a leg on the axis.
type Tick struct {
	X     float64 // Å⁻¹
	Label string  // "X", or "U | K" at a break
	Index int     // index into K; at a break, of the point before it
}

// LegSpan is one leg in a Sampling: its points are K[First] … K[Last], both
// ends included. It shares First with the leg before it in the same run.
type LegSpan struct {
	First, Last int
	From, To    Point
	Length      float64 // Å⁻¹
}

// maxPoints bounds a sampling, so that a step typed too small is not an
// attempt to fill the memory.
const maxPoints = 1_000_000

// Sample cuts every leg into equal steps as near to step (Å⁻¹) as a whole
// number allows, at least one. A step that is not positive, or so small that
// the path would exceed a million points, is taken as the smallest
// that does not.
func (p Path) Sample(l lattice.Lattice, step float64) *Sampling {
	legs := p.Legs()
	total := 0.0
	lengths := make([]float64, len(legs))
	for i, leg := range legs {
		lengths[i] = length(l, leg.From.K, leg.To.K)
		total += lengths[i]
	}
	if floor := total / maxPoints; !(step > floor) {
		step = floor
	}
	counts := make([]int, len(legs))
	n := len(p.Runs)
	for i := range legs {
		counts[i] = 1
		if step > 0 {
			counts[i] = max(1, int(math.Round(lengths[i]/step)))
		}
		n += counts[i]
	}
	s := &Sampling{
		K:   make([]lattice.FracK, 0, n),
		X:   make([]float64, 0, n),
		Leg: make([]int, 0, n),
	}
	add := func(k lattice.FracK, x float64, leg int) {
		s.K, s.X, s.Leg = append(s.K, k), append(s.X, x), append(s.Leg, leg)
	}
	x, leg := 0.0, 0
	for r, run := range p.Runs {
		if r == 0 {
			s.Ticks = append(s.Ticks, Tick{X: x, Label: run[0].Label, Index: 0})
		} else if last := &s.Ticks[len(s.Ticks)-1]; last.Label != run[0].Label {
			last.Label += " | " + run[0].Label
		}
		add(run[0].K, x, leg)
		for i := 1; i < len(run); i++ {
			from, to, m := run[i-1], run[i], counts[leg]
			span := LegSpan{First: len(s.K) - 1, From: from, To: to, Length: lengths[leg]}
			for j := 1; j < m; j++ {
				t := float64(j) / float64(m)
				add(between(from.K, to.K, t), x+t*lengths[leg], leg)
			}
			x += lengths[leg]
			add(to.K, x, leg)
			span.Last = len(s.K) - 1
			s.Legs = append(s.Legs, span)
			s.Ticks = append(s.Ticks, Tick{X: x, Label: to.Label, Index: span.Last})
			leg++
		}
	}
	return s
}

// between keeps coordinates that do not change along a leg exactly constant,
// so that points of a symmetry line stay on it.
func between(a, b lattice.FracK, t float64) lattice.FracK {
	var k lattice.FracK
	for i := range k {
		k[i] = a[i] + t*(b[i]-a[i])
	}
	return k
}

func length(l lattice.Lattice, a, b lattice.FracK) float64 {
	return l.Cart(lattice.FracK{b[0] - a[0], b[1] - a[1], b[2] - a[2]}).Vec().Len()
}

// At returns the k point at distance x along the path, exactly on its leg; x
// outside the path gives its ends. Where the path breaks, the end of the
// earlier run is returned.
func (s *Sampling) At(x float64) lattice.FracK {
	if len(s.Legs) == 0 {
		return lattice.FracK{}
	}
	i := sort.Search(len(s.Legs)-1, func(i int) bool { return x <= s.X[s.Legs[i].Last] })
	leg := s.Legs[i]
	start := s.X[leg.First]
	t := 0.0
	if leg.Length > 0 {
		t = min(max((x-start)/leg.Length, 0), 1)
	}
	if t == 1 {
		return leg.To.K
	}
	return between(leg.From.K, leg.To.K, t)
}

// Index returns the sample nearest to the distance x.
func (s *Sampling) Index(x float64) int {
	i := sort.SearchFloat64s(s.X, x)
	if i == len(s.X) {
		return len(s.X) - 1
	}
	if i > 0 && x-s.X[i-1] <= s.X[i]-x {
		return i - 1
	}
	return i
}

// Nearest returns the place on the path nearest to k, up to reciprocal
// lattice vectors: the distance x along the path and how far off k lies
// (Å⁻¹). On reports whether that is within tol (Å⁻¹). It looks along the
// legs, not only at the samples.
func (s *Sampling) Nearest(l lattice.Lattice, k lattice.FracK, tol float64) (x, off float64, on bool) {
	off = math.Inf(1)
	for _, leg := range s.Legs {
		a := l.Cart(leg.From.K).Vec()
		d := l.Cart(leg.To.K).Vec().Sub(a)
		length2 := d.Dot(d)
		// The images of k that can be nearest: those about both ends.
		for _, image := range imagesNear(k, leg.From.K, leg.To.K) {
			r := l.Cart(image).Vec().Sub(a)
			t := 0.0
			if length2 > 0 {
				t = min(max(r.Dot(d)/length2, 0), 1)
			}
			if gap := r.Sub(d.Mul(t)).Len(); gap < off {
				off, x = gap, s.X[leg.First]+t*leg.Length
			}
		}
	}
	return x, off, off <= tol
}

// imagesNear lists the k + G whose fractions lie within one of the box spanned
// by a and b.
func imagesNear(k, a, b lattice.FracK) []lattice.FracK {
	var lo, hi [3]int
	for i := range k {
		lo[i] = int(math.Floor(min(a[i], b[i]) - k[i] - 1))
		hi[i] = int(math.Ceil(max(a[i], b[i]) - k[i] + 1))
	}
	var out []lattice.FracK
	for i := lo[0]; i <= hi[0]; i++ {
		for j := lo[1]; j <= hi[1]; j++ {
			for m := lo[2]; m <= hi[2]; m++ {
				out = append(out, k.Add(lattice.FracK{float64(i), float64(j), float64(m)}))
			}
		}
	}
	return out
}
