package bands

import (
	"math"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/linalg"
)

// joiner carries curve labels from one sample to the next.
//
// Both samples lie on one leg, so both have at least the symmetry of the leg,
// and a state overlaps only with states of its own symmetry at the other
// sample. States linked by overlaps, directly or in steps, therefore form one
// symmetry species; within a species levels do not cross (von Neumann, Wigner
// 1929) and are joined in order of energy; those of different species cross
// freely. This holds for any step, however coarse.
//
// Where levels meet at a sample, the solver returns mixtures. Those of such a
// set are turned among themselves into the projections of the states that run
// into it, which have one symmetry each.
type joiner struct {
	n            int
	or, oi       []float64 // overlaps ⟨then_i|now_j⟩, row-major
	mark         []int     // species of the states before
	markNew      []int     // and after
	next         []int32
	ar, ai       []float64 // residual projections in align
	qr, qi       []float64 // orthonormal projections, a row each
	picked       []int
	tr, ti       []float64
	used         []bool
	oldOf, newOf []int
}

func newJoiner(n int) *joiner {
	f := func() []float64 { return make([]float64, n*n) }
	return &joiner{
		n: n, or: f(), oi: f(), ar: f(), ai: f(), qr: f(), qi: f(), tr: f(), ti: f(),
		mark: make([]int, n), markNew: make([]int, n), next: make([]int32, n),
		picked: make([]int, 0, n), used: make([]bool, n), oldOf: make([]int, 0, n), newOf: make([]int, 0, n),
	}
}

// linked is the |overlap|² from which two states are of one symmetry. Numerical
// mixing of levels a set tolerance apart stays below 1e-15.
const linked = 1e-12

// step turns label, the curves of the levels of then, into those of now. At
// the start of a leg the states of then's sets are first turned to suit the
// leg.
func (j *joiner) step(then, now *state, label []int32, start bool) {
	// Two levels can change order only if their distance at both ends, taken
	// together, is within what both can move; the factor allows for bends.
	limit := 3*change(then.h, now.h) + 4*hamiltonian.SetTolerance
	for first := 0; first < j.n; {
		last := first + 1
		for last < j.n && then.e[last]-then.e[last-1]+now.e[last]-now.e[last-1] <= limit {
			last++
		}
		if last-first > 1 && !(oneSet(then.e[first:last]) && oneSet(now.e[first:last])) {
			j.cluster(then, now, label, first, last, start)
		}
		first = last
	}
}

func oneSet(e []float64) bool {
	for n := range len(e) - 1 {
		if !joined(e, n) {
			return false
		}
	}
	return true
}

// cluster joins the levels first … last−1, which may change order among
// themselves but with no others.
func (j *joiner) cluster(then, now *state, label []int32, first, last int, start bool) {
	j.overlaps(then, now, first, last)
	if start {
		j.alignSets(then, first, last, true)
	}
	j.alignSets(now, first, last, false)

	// Species by flooding along overlaps.
	for i := first; i < last; i++ {
		j.mark[i], j.markNew[i] = -1, -1
	}
	species := 0
	for i := first; i < last; i++ {
		if j.mark[i] < 0 {
			j.mark[i] = species
			j.flood(first, last, species)
			species++
		}
	}
	for s := range species {
		j.oldOf, j.newOf = j.oldOf[:0], j.newOf[:0]
		for i := first; i < last; i++ {
			if j.mark[i] == s {
				j.oldOf = append(j.oldOf, i)
			}
			if j.markNew[i] == s {
				j.newOf = append(j.newOf, i)
			}
		}
		if len(j.oldOf) != len(j.newOf) {
			// A state left the cluster's span: only in order can they be told.
			copy(j.next[first:last], label[first:last])
			break
		}
		for i, o := range j.oldOf {
			j.next[j.newOf[i]] = label[o]
		}
	}
	copy(label[first:last], j.next[first:last])
}

func (j *joiner) flood(first, last, species int) {
	for changed := true; changed; {
		changed = false
		for i := first; i < last; i++ {
			for k := first; k < last; k++ {
				old, now := j.mark[i] == species, j.markNew[k] == species
				if old == now {
					continue
				}
				at := i*j.n + k
				if j.or[at]*j.or[at]+j.oi[at]*j.oi[at] > linked {
					j.mark[i], j.markNew[k] = species, species
					changed = true
				}
			}
		}
	}
}

// overlaps fills ⟨then_i|S|now_k⟩ of the cluster.
func (j *joiner) overlaps(then, now *state, first, last int) {
	n := j.n
	for i := first; i < last; i++ {
		ur, ui := then.v.Re[i*then.v.Stride:][:n], then.v.Im[i*then.v.Stride:][:n]
		for k := first; k < last; k++ {
			vr, vi := now.w.Re[k*now.w.Stride:][:n], now.w.Im[k*now.w.Stride:][:n]
			re, im := 0.0, 0.0
			for a, x := range ur {
				re += x*vr[a] + ui[a]*vi[a]
				im += x*vi[a] - ui[a]*vr[a]
			}
			j.or[i*n+k], j.oi[i*n+k] = re, im
		}
	}
}

// alignSets turns the vectors of each set among the levels first … last−1 into
// the projections, onto the set, of those states of the other sample that have
// most of themselves in it. The overlaps follow. With old, the sets are those
// of the earlier sample.
func (j *joiner) alignSets(s *state, first, last int, old bool) {
	for a := first; a < last; {
		b := a + 1
		for b < last && joined(s.e, b-1) {
			b++
		}
		if b-a > 1 {
			j.align(s, a, b, first, last, old)
		}
		a = b
	}
}

func (j *joiner) align(s *state, a, b, first, last int, old bool) {
	n, g := j.n, b-a
	// Row i of ar, ai: components of source state i along the set's vectors.
	for i := first; i < last; i++ {
		for m := range g {
			if old { // ⟨set_m|source_i⟩
				j.ar[i*n+m], j.ai[i*n+m] = j.or[(a+m)*n+i], j.oi[(a+m)*n+i]
			} else { // the overlaps are ⟨source_i|set_m⟩
				j.ar[i*n+m], j.ai[i*n+m] = j.or[i*n+a+m], -j.oi[i*n+a+m]
			}
		}
		j.used[i] = false
	}
	j.picked = j.picked[:0]
	for range g {
		best, most := -1, 1e-6
		for i := first; i < last; i++ {
			if j.used[i] {
				continue
			}
			norm := 0.0
			for m := range g {
				norm += j.ar[i*n+m]*j.ar[i*n+m] + j.ai[i*n+m]*j.ai[i*n+m]
			}
			if norm > most*(1+1e-9) {
				best, most = i, norm
			}
		}
		if best < 0 {
			return // the states about do not span the set: leave it as it is
		}
		j.used[best] = true
		j.picked = append(j.picked, best)
		normalise(j.ar[best*n:][:g], j.ai[best*n:][:g])
		for i := first; i < last; i++ {
			if !j.used[i] {
				removeComponent(j.ar[i*n:][:g], j.ai[i*n:][:g], j.ar[best*n:][:g], j.ai[best*n:][:g])
			}
		}
	}
	// In the order of the sources, so that curves keep their order where
	// nothing tells them apart.
	m := 0
	for i := first; i < last; i++ {
		if j.used[i] {
			copy(j.qr[m*n:][:g], j.ar[i*n:][:g])
			copy(j.qi[m*n:][:g], j.ai[i*n:][:g])
			m++
		}
	}
	j.turn(s.v, a, g)
	if s.w != s.v {
		j.turn(s.w, a, g)
	}
	// Overlaps with the turned vectors.
	for i := first; i < last; i++ {
		for m := range g {
			re, im := 0.0, 0.0
			for k := range g {
				qr, qi := j.qr[m*n+k], j.qi[m*n+k]
				at := i*n + a + k
				if old {
					at, qi = (a+k)*n+i, -qi // ⟨Σ q v|…⟩ takes conjugate q
				}
				re += qr*j.or[at] - qi*j.oi[at]
				im += qr*j.oi[at] + qi*j.or[at]
			}
			j.tr[i*n+m], j.ti[i*n+m] = re, im
		}
	}
	for i := first; i < last; i++ {
		for m := range g {
			at := i*n + a + m
			if old {
				at = (a+m)*n + i
			}
			j.or[at], j.oi[at] = j.tr[i*n+m], j.ti[i*n+m]
		}
	}
}

// turn replaces rows a … a+g−1 of v by the combinations in qr, qi.
func (j *joiner) turn(v *linalg.Matrix, a, g int) {
	n := j.n
	for m := range g {
		tr, ti := j.tr[m*n:][:n], j.ti[m*n:][:n]
		clear(tr)
		clear(ti)
		for k := range g {
			qr, qi := j.qr[m*n+k], j.qi[m*n+k]
			vr, vi := v.Re[(a+k)*v.Stride:][:n], v.Im[(a+k)*v.Stride:][:n]
			for x := range tr {
				tr[x] += qr*vr[x] - qi*vi[x]
				ti[x] += qr*vi[x] + qi*vr[x]
			}
		}
	}
	for m := range g {
		copy(v.Re[(a+m)*v.Stride:][:n], j.tr[m*n:])
		copy(v.Im[(a+m)*v.Stride:][:n], j.ti[m*n:])
	}
}

func normalise(re, im []float64) {
	norm := 0.0
	for m := range re {
		norm += re[m]*re[m] + im[m]*im[m]
	}
	scale := 1 / math.Sqrt(norm)
	for m := range re {
		re[m] *= scale
		im[m] *= scale
	}
}

// removeComponent subtracts from x its component along the unit vector q.
func removeComponent(xr, xi, qr, qi []float64) {
	re, im := 0.0, 0.0
	for m := range xr {
		re += qr[m]*xr[m] + qi[m]*xi[m]
		im += qr[m]*xi[m] - qi[m]*xr[m]
	}
	for m := range xr {
		xr[m] -= re*qr[m] - im*qi[m]
		xi[m] -= re*qi[m] + im*qr[m]
	}
}
