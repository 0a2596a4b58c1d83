package present

import (
	"math"

	"bandwright/physics/lattice"
	"bandwright/render/scene"
	"bandwright/ui/session"
)

// View is what the window adds to a snapshot: where the pointer is and how
// the panels look at the moment. None of it belongs to the study's results.
type View struct {
	Theme  *Theme
	Camera scene.Camera // of the Zone; target and radius follow from the lattice
	Window [2]float64   // energies shown, eV in the model's zero; {0, 0}: automatic
	Wedge  bool         // show the irreducible wedge
	Depth  float64      // of a pick inside the zone: 0 is its near side, 1 its far side
	// Lagging says that results have been out of date for long enough to say
	// so: in a drag they always are for a moment.
	Lagging bool
	Glance  Glance
	Scroll  float64 // of the Ledger, points
	Down    float64 // scroll of the path's points, points
	Drag    DragRow // of a path point
}

// Glance is the k point, and perhaps the level, that the pointer passes over.
type Glance struct {
	On        bool
	K         lattice.FracK
	X         float64 // distance along the path, Å⁻¹
	OnPath    bool
	Energy    float64 // eV, of the level near the pointer
	HasEnergy bool
	Note      string // what it is: "L", "0.7311 of Γ–X"
}

// DragRow is a path point on its way to another place.
type DragRow struct {
	On       bool
	Run, I   int
	ToRun, J int
}

// EnergyWindow is the energies that Bands, DOS and Ladder show, eV in the
// model's zero: those of the view, or from below the lowest level to 8 eV
// above the valence top or Fermi level.
func EnergyWindow(sn *session.Snapshot, v *View) (lo, hi float64) {
	if w := v.Window; w[1] > w[0] {
		return w[0], w[1]
	}
	lo, top := -1.0, 1.0
	switch b := sn.Bands; {
	case b != nil && len(b.E) > 0:
		lo, top = math.Inf(1), math.Inf(-1)
		for _, e := range b.E {
			lo, top = min(lo, e), max(top, e)
		}
	case sn.Held != nil && len(sn.Held.Levels) > 0:
		lo, top = sn.Held.Levels[0], sn.Held.Levels[len(sn.Held.Levels)-1]
	}
	hi = top
	if sn.FermiKnown && sn.Fermi+8 < top {
		hi = sn.Fermi + 8
	}
	span := max(hi-lo, 0.5)
	return lo - 0.05*span, hi + 0.03*span
}

// Zero is the energy, in the model's zero, that the window prints as 0, and
// the axis title that says so.
func Zero(sn *session.Snapshot) (zero float64, title string) {
	if sn.Doc.View.Zero == "model" || !sn.FermiKnown {
		return 0, "*E* (eV)"
	}
	if sn.Edges != nil && !sn.EdgesStale && sn.Edges.VBM != nil {
		return sn.Edges.VBM.Energy, "*E* − *E*_{V} (eV)"
	}
	return sn.Fermi, "*E* − *E*_{F} (eV)"
}
