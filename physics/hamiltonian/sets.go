package hamiltonian

// SetTolerance is the energy difference, eV, below which levels form a set.
const SetTolerance = 1e-6

// Set is levels of one energy: First … First+Size−1 in ascending order.
// Weights and terms are averaged over a set, because the single eigenvectors
// in it depend on the solver's arbitrary choice of basis.
type Set struct {
	First, Size int
	Energy      float64 // mean, eV
}

// Contains says whether level n belongs to the set.
func (s Set) Contains(n int) bool { return n >= s.First && n < s.First+s.Size }

// Sets groups ascending levels e: a level within tol (eV) of the one below
// joins its set.
func Sets(e []float64, tol float64) []Set { return AppendSets(nil, e, tol) }

// AppendSets appends the sets of e to dst, so that a caller can reuse memory.
func AppendSets(dst []Set, e []float64, tol float64) []Set {
	for first := 0; first < len(e); {
		size, sum := 1, e[first]
		for first+size < len(e) && e[first+size]-e[first+size-1] <= tol {
			sum += e[first+size]
			size++
		}
		dst = append(dst, Set{First: first, Size: size, Energy: sum / float64(size)})
		first += size
	}
	return dst
}
