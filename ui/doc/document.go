package doc

import (
	"maps"
	"slices"

	"bandwright/physics/catalog"
	"bandwright/physics/lattice"
)

// Document is a study.
type Document struct {
	Title      string
	Crystal    Crystal
	Model      Model
	Path       Path
	Mesh       [3]int // divisions along the reciprocal vectors
	View       View
	PinA, PinB *Pin
}

// Crystal is a named prototype with elements and lattice constant, or, when
// Prototype is "", a lattice with sites.
type Crystal struct {
	Prototype string
	Elements  []string
	A         float64 // Å

	Lattice [3][3]float64 // primitive vectors, Å
	Sites   []Site
}

// Site is an atom of a free crystal.
type Site struct {
	Element, Label string     // Label may be ""
	At             [3]float64 // fractions of the primitive vectors
}

// Model says which Hamiltonian describes the crystal.
type Model struct {
	Kind      string // TwoCentre
	Set       string // id of a shipped set, "" when File is used
	File      string // own set, named relative to the study
	SpinOrbit bool
	Factors   map[string]float64 // 0 … 2 by subject, as in tightbinding.Options; nil when as published
}

// TwoCentre is the kind of the models that this version computes.
const TwoCentre = "two-centre"

// Path is a k-path as text; no legs stand for the standard path.
type Path struct {
	Legs  []string
	Frame lattice.Frame
	Step  float64 // spacing of the samples, Å⁻¹; 0 stands for the default
}

// View is how the study is shown. It is no part of the history.
type View struct {
	Colour string        // one of Colours; "" stands for the first
	Zero   string        // one of Zeros; "" stands for the first
	Window [2]float64    // energies shown, in the model's zero; {0, 0}: automatic
	Held   lattice.FracK // held k point
	Level  int           // focused level there, or NotGiven
	Frame  lattice.Frame // in which coordinates are shown
	DOS    string        // one of Densities; "" stands for the first
	Camera [5]float64    // of the Zone: quaternion w x y z and zoom; all 0: the usual side
}

// NotGiven, as the level of a View, leaves the choice to whoever shows it: the
// valence top.
const NotGiven = -1

// The choices of a View.
var (
	Colours   = []string{"orbitals", "s", "p", "d", "s*", "atoms", "bonding", "plain"}
	Zeros     = []string{"edge", "model"}
	Densities = []string{"projected", "bonding"}
)

// Pin is a kept level with the model it belongs to.
type Pin struct {
	Crystal Crystal
	Model   Model
	K       lattice.FracK
	Level   int
}

// DefaultMesh is the mesh of a study that names none.
var DefaultMesh = [3]int{24, 24, 24}

// New returns the study that a first start shows: silicon.
func New() Document {
	d, err := ForSet("vogl1983/Si")
	if err != nil {
		// The set is embedded and read by tests.
		d = Document{Mesh: DefaultMesh}
	}
	d.Title = "Silicon"
	return d
}

// ForSet returns a study of the crystal that a shipped set was made for.
func ForSet(id string) (Document, error) {
	set, err := catalog.Lookup(id)
	if err != nil {
		return Document{}, err
	}
	return Document{
		Title:   set.Title,
		Crystal: Crystal{Prototype: set.Prototype, Elements: set.Elements, A: set.A},
		Model:   Model{Kind: TwoCentre, Set: id},
		Mesh:    DefaultMesh,
		View:    View{Frame: lattice.TwoPiOverA, Level: NotGiven},
	}, nil
}

// Equal reports whether two studies are the same, views included.
func (d Document) Equal(e Document) bool {
	return d.Title == e.Title && d.Crystal.equal(e.Crystal) && d.Model.equal(e.Model) &&
		slices.Equal(d.Path.Legs, e.Path.Legs) && d.Path.Frame == e.Path.Frame && d.Path.Step == e.Path.Step &&
		d.Mesh == e.Mesh && d.View == e.View && d.PinA.equal(e.PinA) && d.PinB.equal(e.PinB)
}

func (c Crystal) equal(e Crystal) bool {
	return c.Prototype == e.Prototype && slices.Equal(c.Elements, e.Elements) && c.A == e.A &&
		c.Lattice == e.Lattice && slices.Equal(c.Sites, e.Sites)
}

func (m Model) equal(n Model) bool {
	return m.Kind == n.Kind && m.Set == n.Set && m.File == n.File && m.SpinOrbit == n.SpinOrbit && maps.Equal(m.Factors, n.Factors)
}

func (p *Pin) equal(q *Pin) bool {
	if p == nil || q == nil {
		return p == q
	}
	return p.Crystal.equal(q.Crystal) && p.Model.equal(q.Model) && p.K == q.K && p.Level == q.Level
}
