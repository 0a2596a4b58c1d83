package session

import (
	"time"

	"bandwright/physics/bands"
	"bandwright/physics/dos"
	"bandwright/physics/edges"
	"bandwright/physics/lattice"
	"bandwright/physics/ledger"
	"bandwright/ui/doc"
)

// Snapshot is the state of a session at one moment. Built, Bands and Held
// always belong to one and the same model; DOS, Curve and Edges may lag behind
// and are then marked stale. Results that do not belong to Doc, because they
// are still being computed or because Doc cannot be built, are the last good
// ones and marked stale.
type Snapshot struct {
	Doc      doc.Document
	Revision int    // grows with every change of Doc
	File     string // "" for a study that has none yet
	Modified bool   // whether Doc differs from what was last opened or saved

	Built    *doc.Built // of the last document that could be built; nil before the first
	BuildErr error      // why Doc cannot be built

	Bands       *bands.Bands
	BandsStale  bool  // not those of Doc
	BandsCoarse bool  // a preview with fewer points; the full ones follow
	BandsErr    error // why Built has none: no path, a path that cannot be read

	DOS      *dos.DOS
	Curve    *dos.Curve // on an even grid of energies that covers all bands
	DOSStale bool       // not those of Doc
	DOSErr   error      // why there is none for Doc; ErrStopped after Stop

	Edges      *edges.Edges
	EdgesStale bool
	EdgesErr   error

	// Held is the exact breakdown at Held.K, which is Doc.View.Held unless
	// HeldStale says that its solution is still on the way.
	Held        *ledger.Ledger
	HeldStale   bool
	HeldErr     error
	HeldLabel   string          // "L", "0.7311 of Γ–X", "Δ", "plane Γ X M", or "" in general position
	HeldPlace   string          // "4mm (C4v), star of 6"
	HeldStar    []lattice.FracK // points of equal energies by symmetry and time reversal, Held.K first
	HeldCoGroup string          // little co-group, Hermann–Mauguin: "4mm"
	Focus       *ledger.Entry   // the entry of Held with the focused level; nil without Held

	PinA, PinB *Pinned
	Contrast   []ledger.ContrastRow // B against A, when both pins are solved

	// Fermi is the energy up to which levels are filled: the valence top of
	// an insulator, else the Fermi level. While edges are on the way it comes
	// from the bands of an insulator; for a metal the last value stays and
	// FermiStale is set.
	Fermi      float64
	FermiKnown bool
	FermiStale bool
	Filled     int // levels per k point that the electrons would fill, rounded down

	Busy     bool
	Stopped  bool       // refining was stopped; Resume goes on
	Progress []Progress // of what runs, in order of importance
}

// Progress is one computation that is running.
type Progress struct {
	What        string // "bands", "density of states", "band edges", …
	Done, Total int    // Total is 0 when the extent is not known
	Since       time.Time
}

// Pinned is a kept level with its breakdown.
type Pinned struct {
	Name    string // "Si Γ, levels 2–4, 0.000 eV, vogl1983/Si"
	Formula string
	SetID   string
	KLabel  string // "Γ", or coordinates
	Pin     doc.Pin
	Ledger  *ledger.Ledger
	Entry   *ledger.Entry // of Pin.Level
	Err     error         // why there is no Entry

	pin *doc.Pin // that of the document, for identity
}
