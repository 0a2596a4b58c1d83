package session

import (
	"errors"
	"fmt"
	"maps"
	"math"
	"strings"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/ui/doc"
)

// Edit is a change of the study, one of the types of this file. Edits of View,
// Hold and Focus are not undoable; all others are.
type Edit interface {
	// apply returns the changed document. The session is for reading; the
	// drag says which edits are one step of the history.
	apply(s *Session, d doc.Document) (changed doc.Document, e drag, err error)
}

// UseSet takes a shipped parameter set with the crystal and the lattice
// constant it was made for. The path stays when the lattice is of the same
// kind, and so does spin–orbit coupling when the set has it.
type UseSet struct{ ID string }

// UseSetFile takes a parameter set of the user's own from a file and, when the
// file names one, its crystal. Applied again it reads the file anew.
type UseSetFile struct{ File string }

// SetCrystal replaces the crystal. The path stays when the lattice is of the
// same kind.
type SetCrystal struct{ Crystal doc.Crystal }

// SetLatticeConstant changes the lattice constant, Å; a crystal given by
// vectors is scaled. While Dragging, edits make one step of the history, which
// ends with the first edit that is not.
type SetLatticeConstant struct {
	A        float64
	Dragging bool
}

// SetSpinOrbit switches spin–orbit coupling.
type SetSpinOrbit struct{ On bool }

// SetFactor scales a term of the model by 0 … 2; 1 takes the factor away. Term
// is a subject as in tightbinding.Options: "shell1 spσ", "onsite Si1 s".
type SetFactor struct {
	Term     string
	Value    float64
	Dragging bool
}

// ClearFactors takes all factors away.
type ClearFactors struct{}

// SetPath replaces the k-path; no legs stand for the standard path.
type SetPath struct {
	Legs  []string
	Frame lattice.Frame
}

// SetMesh changes the divisions of the mesh for densities of states.
type SetMesh struct{ Divisions [3]int }

// SetTitle renames the study.
type SetTitle struct{ Title string }

// Hold holds a k point and focuses a level there.
type Hold struct {
	K lattice.FracK
	// Level from 0. NearestEnergy (−1) takes the level nearest to Energy, or
	// to that of the focused level when Energy is 0.
	Level  int
	Energy float64
}

// NearestEnergy, as the level of Hold, asks for the level nearest in energy.
const NearestEnergy = -1

// Focus focuses a level of the held k point.
type Focus struct{ Level int }

// PinLevel keeps the focused level as pin 'A' or 'B'.
type PinLevel struct{ Slot byte }

// ClearPin removes a pin.
type ClearPin struct{ Slot byte }

// SwapPins exchanges pins A and B.
type SwapPins struct{}

// SetView changes how the study is shown.
type SetView struct{ Change func(doc.View) doc.View }

func (e UseSet) apply(_ *Session, d doc.Document) (doc.Document, drag, error) {
	own, err := doc.ForSet(e.ID)
	if err != nil {
		return d, drag{}, err
	}
	set, err := own.Model.MakeSet("")
	if err != nil {
		return d, drag{}, err
	}
	return useSet(d, set, own.Crystal, own.Model), drag{}, nil
}

// useSet returns d with a set and its crystal.
func useSet(d doc.Document, set *catalog.Set, c doc.Crystal, m doc.Model) doc.Document {
	d = withCrystal(d, c)
	m.SpinOrbit = d.Model.SpinOrbit && lacksSpinOrbit(set, c) == ""
	if givenTitle(d) {
		d.Title = set.Title
	}
	d.Model = m
	return d
}

// givenTitle reports whether the title is the one that the study was given with
// its set, and not one that the user has typed.
func givenTitle(d doc.Document) bool {
	if d.Title == "" || d.Title == doc.New().Title {
		return true
	}
	own, err := doc.ForSet(d.Model.Set)
	return err == nil && d.Title == own.Title
}

// withCrystal returns d with another crystal; the path goes back to the
// standard one, and the held k point to Γ, when the lattice is of another kind.
func withCrystal(d doc.Document, c doc.Crystal) doc.Document {
	if !sameLatticeKind(d.Crystal, c) {
		d.Path.Legs, d.Path.Frame = nil, lattice.Primitive
		d.View.Held = lattice.FracK{}
	}
	d.Crystal = c
	return d
}

// sameLatticeKind reports whether two crystals have the same Bravais lattice,
// so that fractions and names of k points mean the same in both.
func sameLatticeKind(a, b doc.Crystal) bool {
	x, y := latticeKind(a), latticeKind(b)
	if x != "" || y != "" {
		return x == y
	}
	return a.Lattice == b.Lattice
}

// latticeKind returns the Bravais symbol of a crystal, "" when it is not
// recognised. Free vectors may be any basis of their lattice, so their
// fractions are a kind of their own.
func latticeKind(c doc.Crystal) string {
	for _, p := range crystal.Prototypes() {
		if p.Name == strings.ReplaceAll(c.Prototype, " ", "-") {
			return p.Bravais
		}
	}
	return ""
}

// lacksSpinOrbit returns an element of the crystal without spin–orbit value in
// the set, or "".
func lacksSpinOrbit(set *catalog.Set, c doc.Crystal) string {
	for _, element := range elements(c) {
		if _, ok := set.SpinOrbit[element]; !ok {
			return element
		}
	}
	return ""
}

func elements(c doc.Crystal) []string {
	if c.Prototype != "" {
		return c.Elements
	}
	var out []string
	for _, site := range c.Sites {
		out = append(out, site.Element)
	}
	return out
}

func (e UseSetFile) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	m := doc.Model{Kind: d.Model.Kind, File: within(s.dir, e.File)}
	set, err := m.MakeSet("")
	if err != nil {
		return d, drag{}, err
	}
	to := d.Crystal
	if set.Prototype != "" {
		to = doc.Crystal{Prototype: set.Prototype, Elements: set.Elements, A: set.A}
	}
	return useSet(d, set, to, m), drag{}, nil
}

func (e SetCrystal) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	if _, err := (doc.Document{Crystal: e.Crystal}).MakeCrystal(); err != nil {
		return d, drag{}, err
	}
	return withCrystal(d, e.Crystal), drag{}, nil
}

func (e SetLatticeConstant) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	if !(e.A > 0) || math.IsInf(e.A, 0) {
		return d, drag{}, fmt.Errorf("the lattice constant is %g: give a length above 0 Å", e.A)
	}
	c := d.Crystal
	if c.Prototype != "" {
		c.A = e.A
	} else {
		old, err := d.MakeCrystal()
		if err != nil {
			return d, drag{}, err
		}
		for i := range c.Lattice {
			for j := range c.Lattice[i] {
				c.Lattice[i][j] *= e.A / old.Setting.A
			}
		}
	}
	d.Crystal = c
	if _, err := d.MakeCrystal(); err != nil {
		return d, drag{}, err
	}
	return d, drag{"lattice constant", e.Dragging}, nil
}

func (e SetSpinOrbit) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	if e.On {
		set, err := s.setOf(d.Model)
		if err != nil {
			return d, drag{}, err
		}
		if element := lacksSpinOrbit(set, d.Crystal); element != "" {
			return d, drag{}, fmt.Errorf("not available: %s has no spin–orbit value for %s; use a set that has one, or add [spin_orbit.%s] to a set of your own", set.ID, element, element)
		}
	}
	d.Model.SpinOrbit = e.On
	return d, drag{}, nil
}

// setOf returns the parameter set of a model, the one in use if it is that.
func (s *Session) setOf(m doc.Model) (*catalog.Set, error) {
	if m.File != "" && s.core != nil && s.core.source.doc.Model.File == m.File {
		return s.core.built.Set, nil
	}
	return m.MakeSet("")
}

func (e SetFactor) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	if !(e.Value >= 0 && e.Value <= 2) {
		return d, drag{}, fmt.Errorf("the factor of %s is %g: give a number from 0 to 2", e.Term, e.Value)
	}
	if s.current() && !knownTerm(s.core.built.Model, e.Term) {
		return d, drag{}, fmt.Errorf("the model has no term %q", e.Term)
	}
	factors := maps.Clone(d.Model.Factors)
	if factors == nil {
		factors = map[string]float64{}
	}
	factors[e.Term] = e.Value
	if e.Value == 1 {
		delete(factors, e.Term)
	}
	if len(factors) == 0 {
		factors = nil
	}
	d.Model.Factors = factors
	return d, drag{"factor " + e.Term, e.Dragging}, nil
}

// knownTerm reports whether a factor of the subject would scale a term of m.
func knownTerm(m hamiltonian.Model, subject string) bool {
	sites := m.Crystal().Sites
	for _, t := range m.Terms() {
		if t.Kind == hamiltonian.Bond {
			general := fmt.Sprintf("shell%d %s", t.Shell, t.Channel)
			if subject == general || t.Detail != "" && subject == general+" "+t.Detail {
				return true
			}
			continue
		}
		if subject == fmt.Sprintf("%s %s", t.Kind, t.L) || subject == fmt.Sprintf("%s %s", t.Kind, t.Subject(sites)) {
			return true
		}
	}
	return false
}

func (ClearFactors) apply(_ *Session, d doc.Document) (doc.Document, drag, error) {
	d.Model.Factors = nil
	return d, drag{}, nil
}

func (e SetPath) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	c, err := d.MakeCrystal()
	if err != nil {
		return d, drag{}, err
	}
	d.Path.Legs, d.Path.Frame = append([]string(nil), e.Legs...), e.Frame
	if len(e.Legs) > 0 { // the standard path may be missing; the old one goes all the same
		if _, err := d.Path.MakePath(c); err != nil {
			return d, drag{}, err
		}
	}
	return d, drag{}, nil
}

func (e SetMesh) apply(_ *Session, d doc.Document) (doc.Document, drag, error) {
	for _, n := range e.Divisions {
		if n < 1 || n > maxDivisions {
			return d, drag{}, fmt.Errorf("the mesh has %d divisions: give 1 to %d along each vector", n, maxDivisions)
		}
	}
	d.Mesh = e.Divisions
	return d, drag{}, nil
}

// maxDivisions bounds the mesh along one vector in the window, where a larger
// one would not return in a time that anybody waits.
const maxDivisions = 128

func (e SetTitle) apply(_ *Session, d doc.Document) (doc.Document, drag, error) {
	if strings.ContainsAny(e.Title, "\n\r") {
		return d, drag{}, errors.New("the title has more than one line: give a single line")
	}
	d.Title = e.Title
	return d, drag{}, nil
}

func (e Hold) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	for _, x := range e.K {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return d, drag{}, errors.New("the k point is not finite: give three numbers")
		}
	}
	d.View.Held = e.K
	switch {
	case e.Level >= 0:
		if err := s.checkLevel(e.Level); err != nil {
			return d, drag{}, err
		}
		d.View.Level = e.Level
	case math.IsNaN(e.Energy) || math.IsInf(e.Energy, 0):
		return d, drag{}, errors.New("the energy is not finite: give a number")
	}
	return d, drag{}, nil
}

func (e Focus) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	if err := s.checkLevel(e.Level); err != nil {
		return d, drag{}, err
	}
	d.View.Level = e.Level
	return d, drag{}, nil
}

// checkLevel refuses levels that the model does not have, as far as it is known.
func (s *Session) checkLevel(level int) error {
	if level < 0 {
		return fmt.Errorf("there is no level %d: levels start at 0", level)
	}
	if s.current() {
		if n := len(s.core.built.Model.Basis()); level >= n {
			return fmt.Errorf("there is no level %d: the model has levels 0 to %d", level, n-1)
		}
	}
	return nil
}

func (e PinLevel) apply(s *Session, d doc.Document) (doc.Document, drag, error) {
	if s.buildErr != nil {
		return d, drag{}, errors.New("the levels shown are not those of this study, which cannot be computed: mend it before pinning")
	}
	if s.wish != nil {
		return d, drag{}, errors.New("the held k point is still being solved: pin its level when it is shown")
	}
	return withPin(d, e.Slot, &doc.Pin{Crystal: d.Crystal, Model: d.Model, K: d.View.Held, Level: d.View.Level})
}

func (e ClearPin) apply(_ *Session, d doc.Document) (doc.Document, drag, error) {
	return withPin(d, e.Slot, nil)
}

func withPin(d doc.Document, slot byte, p *doc.Pin) (doc.Document, drag, error) {
	switch slot {
	case 'A':
		d.PinA = p
	case 'B':
		d.PinB = p
	default:
		return d, drag{}, fmt.Errorf("there is no pin %q: use A or B", slot)
	}
	return d, drag{}, nil
}

func (SwapPins) apply(_ *Session, d doc.Document) (doc.Document, drag, error) {
	d.PinA, d.PinB = d.PinB, d.PinA
	return d, drag{}, nil
}

func (e SetView) apply(_ *Session, d doc.Document) (doc.Document, drag, error) {
	d.View = e.Change(d.View)
	return d, drag{}, nil
}
