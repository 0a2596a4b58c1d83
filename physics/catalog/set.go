package catalog

import (
	"fmt"
	"sort"
	"strings"

	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
)

// Set is a parameter set of a two-centre model in an orthogonal basis. It is
// immutable: the caller must not change its slices and maps.
type Set struct {
	ID        string // "vogl1983/Si"
	Title     string
	Prototype string    // structure the set was made for; "" when it has none
	Elements  []string  // of the sites of the prototype, in order
	A         float64   // lattice constant of the set, Å
	Shells    int       // shells of neighbours that interact
	Lengths   []float64 // bond length of each shell at which the parameters hold, Å

	Valence   map[string]float64           // valence electrons of each element
	OnSite    map[string]map[Shell]float64 // orbital energies, eV
	SpinOrbit map[string]SpinOrbit         // of the p shell; absent when unknown
	Bonds     []Parameter

	Source   Source
	Obtained map[string]string // how the values were obtained: "all", or the name of a value → seen, memory, computed, fitted, own
	Fit      Fit
	Limits   []string  // what the set cannot do, in sentences
	Notes    []string  // conventions and doubts, in sentences
	Measured *Measured // handbook values to print beside the model's; nil when there are none

	crystal *crystal.Crystal
}

// Shell is a shell of an atom.
type Shell = hamiltonian.AngularMomentum

// Source says where a set was published.
type Source struct {
	Authors, Journal, Place, Table string // Place: volume and first page, "44, 365"
	Year                           int
}

// String returns the source in one line.
func (s Source) String() string {
	if s.Authors == "" {
		return "source not stated"
	}
	out := s.Authors
	if s.Journal != "" {
		out += ", " + s.Journal
	}
	if s.Place != "" {
		out += " " + s.Place
	}
	if s.Year != 0 {
		out += fmt.Sprintf(" (%d)", s.Year)
	}
	if s.Table != "" {
		out += ", " + s.Table
	}
	return out
}

// Fit says what a set was fitted to.
type Fit struct {
	To          string     // in words
	ValenceOnly bool       // conduction bands are not part of the fit
	Window      [2]float64 // energies where the set is reliable, eV in its own zero
	HasWindow   bool
}

// Measured is handbook values of the crystal, to be printed beside those of the model.
type Measured struct {
	Kind           string   // "direct", "indirect", "zero gap", "metal"
	Where          string   // place of the conduction minimum
	Gap300K, Gap0K *float64 // eV; nil when not given
	SplitOff       *float64 // Δ₀, eV
	Source         string
	Obtained       string
}

// SpinOrbit is the on-site spin–orbit coupling of a p shell, H = λ L·σ with
// λ = Δ/3: a free p shell splits by Δ.
type SpinOrbit struct {
	Delta    float64 // eV
	Obtained string
	Note     string
}

// Lambda returns λ = Δ/3, eV.
func (s SpinOrbit) Lambda() float64 { return s.Delta / 3 }

// Symmetry is the angular momentum about the bond.
type Symmetry uint8

// Symmetries of two-centre integrals.
const (
	Sigma Symmetry = iota
	Pi
	Delta
)

// String returns "σ", "π" or "δ".
func (s Symmetry) String() string { return [...]string{"σ", "π", "δ"}[s] }

// Parameter is one two-centre integral. The direction runs from the atom of
// L1 to that of L2; L1 does not come after L2 in s, s*, p, d.
type Parameter struct {
	Shell         int    // of neighbours, 1-based
	First, Second string // elements of the atoms that carry L1 and L2
	L1, L2        Shell
	Symmetry      Symmetry
	Value         float64 // eV at the reference length
	Eta           float64 // V ∝ d^−Eta
	Published     string  // the number as printed when Value is derived from it: "V_xx = 1.715, V_xy = 4.575"
}

// Channel returns the usual name of the integral: "spσ", "s*pσ", "ddδ".
func (p Parameter) Channel() string { return p.L1.String() + p.L2.String() + p.Symmetry.String() }

// Detail tells apart the parameters of a channel between two elements:
// "As s – Ga p"; "" when there is nothing to tell apart.
func (p Parameter) Detail() string {
	if p.First == p.Second || p.L1 == p.L2 {
		return ""
	}
	return fmt.Sprintf("%s %s – %s %s", p.First, p.L1, p.Second, p.L2)
}

// rank orders shells as in the names of the integrals: s, s*, p, d.
func rank(l Shell) int {
	switch l {
	case hamiltonian.S:
		return 0
	case hamiltonian.SStar:
		return 1
	case hamiltonian.P:
		return 2
	}
	return 3
}

// Basis returns the shells of an element in the order s, p, d, s*; nil when
// the set does not know the element.
func (s *Set) Basis(element string) []Shell {
	var out []Shell
	for l := range s.OnSite[element] {
		out = append(out, l)
	}
	sort.Slice(out, func(i, j int) bool { return out[i] < out[j] })
	return out
}

// BasisName names the shells of a set as in print: "sp3", "sp3s*", "sp3d5s*", "sp", "spd".
// Tetrahedral crystals count their functions, metals do not.
func (s *Set) BasisName() string {
	tetrahedral := s.Prototype == "diamond" || s.Prototype == "zincblende"
	best := ""
	for element := range s.OnSite {
		name := ""
		for _, l := range s.Basis(element) {
			name += l.String()
			if tetrahedral {
				name += [...]string{"", "3", "5", ""}[l]
			}
		}
		if len(name) > len(best) || len(name) == len(best) && name > best {
			best = name
		}
	}
	return best
}

// Crystal returns the crystal the set was made for, at its own lattice
// constant.
func (s *Set) Crystal() (*crystal.Crystal, error) {
	if s.crystal == nil {
		return nil, fmt.Errorf("parameter set %s names no structure prototype: give the crystal", s.ID)
	}
	return s.crystal, nil
}

// commonLimits returns the cautions that follow from the kind of the set.
func (s *Set) commonLimits() []string {
	var out []string
	if s.Fit.ValenceOnly {
		out = append(out, "Fitted to valence bands only: the conduction bands are unreliable.")
	}
	basis := s.BasisName()
	switch {
	case basis == "sp3s*" && s.Shells == 1:
		out = append(out, "sp3s* with first neighbours: the transverse masses of a minimum at or near X come out far too large.")
	case basis == "sp3" && s.Shells == 1:
		out = append(out, "sp3 with first neighbours cannot give an indirect gap near X.")
	}
	if s.Shells == 1 {
		out = append(out, "Interactions reach first neighbours only.")
	}
	out = append(out,
		"Bond terms follow "+strings.Join(powers(s.etas()), " or ")+" when the lattice constant is moved; beyond ±5 % that is extrapolation.",
		"Energies of different crystals or sets have no common zero.",
		"Temperature changes the occupation only, not the levels.")
	return out
}

// etas returns the distinct distance exponents of the set.
func (s *Set) etas() []string {
	seen := make(map[string]bool)
	var out []string
	for _, p := range s.Bonds {
		text := fmt.Sprintf("%g", p.Eta)
		if !seen[text] {
			seen[text] = true
			out = append(out, text)
		}
	}
	sort.Strings(out)
	return out
}

// powers writes d to minus each exponent: "d⁻²", "d^−2.5".
func powers(etas []string) []string {
	out := make([]string, len(etas))
	for i, eta := range etas {
		if len(eta) == 1 && eta[0] >= '0' && eta[0] <= '9' {
			out[i] = "d⁻" + string([]rune("⁰¹²³⁴⁵⁶⁷⁸⁹")[eta[0]-'0'])
		} else {
			out[i] = "d^−" + eta
		}
	}
	return out
}
