package hamiltonian

import (
	"fmt"

	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
	"bandwright/physics/linalg"
)

// AngularMomentum is the kind of an atomic shell. SStar is the excited s
// shell of the sp3s* and sp3d5s* models (Vogl, Hjalmarson, Dow 1983).
type AngularMomentum uint8

// The shells in which models are written.
const (
	S AngularMomentum = iota
	P
	D
	SStar
)

var shellNames = [...]string{"s", "p", "d", "s*"}

// String returns "s", "p", "d" or "s*".
func (l AngularMomentum) String() string {
	if int(l) < len(shellNames) {
		return shellNames[l]
	}
	return fmt.Sprintf("AngularMomentum(%d)", uint8(l))
}

// ParseAngularMomentum reads "s", "p", "d" or "s*".
func ParseAngularMomentum(s string) (AngularMomentum, error) {
	for i, name := range shellNames {
		if s == name {
			return AngularMomentum(i), nil
		}
	}
	return 0, fmt.Errorf("unknown orbital shell %q: use s, p, d or s*", s)
}

// Degree returns the angular momentum quantum number: 0, 1 or 2.
func (l AngularMomentum) Degree() int {
	switch l {
	case P:
		return 1
	case D:
		return 2
	}
	return 0
}

// Orbital is one basis function.
type Orbital struct {
	Site int             // index into Crystal().Sites
	L    AngularMomentum // shell
	Name string          // "s", "px", "dxy", "dx2-y2", "s*", …
	Spin int8            // +1 up, −1 down, 0 when the model has no spin
}

// TermKind is the kind of a term of the energy.
type TermKind uint8

// The kinds of terms.
const (
	OnSite    TermKind = iota // orbital energy × weight
	SpinOrbit                 // on-site spin–orbit energy of a shell
	Bond                      // interaction of two atoms
)

var kindNames = [...]string{"onsite", "spin_orbit", "bond"}

// String returns "onsite", "spin_orbit" or "bond", as written in files.
func (k TermKind) String() string {
	if int(k) < len(kindNames) {
		return kindNames[k]
	}
	return fmt.Sprintf("TermKind(%d)", uint8(k))
}

// Term is one parameter of the model and the part of the Hamiltonian that is
// proportional to it. H is the sum of its terms, so by Hellmann and Feynman
// the energy of a term is Parameter × ∂E/∂Parameter.
type Term struct {
	Kind TermKind

	Site int             // OnSite, SpinOrbit: the atom
	L    AngularMomentum // OnSite, SpinOrbit: the shell

	Shell   int    // Bond: shell of neighbours, 1-based
	Channel string // Bond: "spσ", …
	Detail  string // Bond: "As s – Ga p" when a channel has several parameters, else ""

	Parameter float64 // eV, after factor and distance law; λ of a spin–orbit term
	Eta       float64 // Bond: V ∝ d^−Eta
}

// Subject names what a term is about, as written in the Ledger and in files:
// "Si1 p" for a shell of an atom, "shell1 ppσ" for a bond channel.
func (t Term) Subject(sites []crystal.Site) string {
	if t.Kind == Bond {
		return fmt.Sprintf("shell%d %s", t.Shell, t.Channel)
	}
	return sites[t.Site].Label + " " + t.L.String()
}

// Model is a Hamiltonian of a crystal as a function of k. It is immutable.
type Model interface {
	Crystal() *crystal.Crystal
	Basis() []Orbital
	Overlapping() bool  // whether the basis functions overlap (S ≠ 1)
	Electrons() float64 // valence electrons per primitive cell
	// SpinDegeneracy is the number of electrons that one level holds:
	// 2 without spin–orbit coupling, 1 with.
	SpinDegeneracy() int
	Terms() []Term
	Bonds() []crystal.Bond
	// Altered says in words what differs from the published parameter set;
	// empty means as published.
	Altered() []string
	// NewEvaluator returns an evaluator for one goroutine.
	NewEvaluator() Evaluator
}

// Evaluator computes matrices and energies at a k point. It belongs to one
// goroutine; its methods do not allocate. Matrices have the size of the basis.
type Evaluator interface {
	// Hamiltonian fills the lower triangle of H(k), eV.
	Hamiltonian(k lattice.FracK, h *linalg.Matrix)
	// Overlap fills the lower triangle of S(k). Only for an overlapping basis.
	Overlap(k lattice.FracK, s *linalg.Matrix)
	// Gradient fills the lower triangles of ∂H/∂k along x, y, z, eV Å.
	Gradient(k lattice.FracK, dh *[3]*linalg.Matrix)
	// TermEnergies stores the energy of each of Terms(), eV, averaged over
	// the eigenvectors v[first] … v[first+size−1] of H(k). The sum is the
	// mean energy of these levels.
	TermEnergies(k lattice.FracK, v *linalg.Matrix, first, size int, dst []float64)
	// BondEnergies stores the energy of each of Bonds(), eV, all channels
	// together, averaged in the same way.
	BondEnergies(k lattice.FracK, v *linalg.Matrix, first, size int, dst []float64)
}

// Group is the basis functions of one shell of one atom, both spins. Weights
// are summed over groups: the weight of a single function is not invariant
// under the rotations of the crystal.
type Group struct {
	Site    int
	L       AngularMomentum
	Members []int // indices into the basis
}

// Groups collects the basis by site and shell, in order of first appearance.
func Groups(basis []Orbital) []Group {
	var groups []Group
	type key struct {
		site int
		l    AngularMomentum
	}
	index := make(map[key]int)
	for i, o := range basis {
		k := key{o.Site, o.L}
		g, ok := index[k]
		if !ok {
			g = len(groups)
			index[k] = g
			groups = append(groups, Group{Site: o.Site, L: o.L})
		}
		groups[g].Members = append(groups[g].Members, i)
	}
	return groups
}

// Label names a group: "Si1 p".
func (g Group) Label(sites []crystal.Site) string {
	return sites[g.Site].Label + " " + g.L.String()
}
