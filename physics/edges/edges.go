package edges

import (
	"context"
	"fmt"
	"math"
	"sync"

	"bandwright/physics/dos"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/physics/symmetry"
)

// Kind of a crystal by its bands.
type Kind string

// The kinds.
const (
	Direct    Kind = "direct"    // gap, both edges at one k point
	Indirect  Kind = "indirect"  // gap, edges at different k points
	Semimetal Kind = "semimetal" // filled and empty bands touch or overlap a little
	Metal     Kind = "metal"
)

// Edge is an extremum of a band over the zone.
type Edge struct {
	Energy float64 // eV; of Edges.Direct the vertical gap
	K      lattice.FracK
	Where  string // "Γ", "L", "0.7311 of Γ–X", "near X …"
	Set    int    // levels that share this energy at K
	Level  int    // level that has the extremum, from 0
	Star   []lattice.FracK
	// Valleys is the number of distinct equivalent extrema in the zone: the
	// two halves on opposite faces of the zone are one.
	Valleys int
}

// Edges of a model. VBM, CBM and Direct are nil for a metal, which has none.
type Edges struct {
	Kind  Kind
	Gap   float64 // CBM − VBM, eV; 0 for metals and semimetals
	Fermi float64 // eV; mid-gap when there is a gap
	VBM   *Edge
	CBM   *Edge
	// Direct is the smallest vertical gap between filled and empty bands,
	// anywhere in the zone.
	Direct *Edge
	// Overlap is VBM − CBM of a semimetal, eV; 0 when bands just touch.
	Overlap float64
}

// Options for Find.
type Options struct {
	Workers int
	DOS     *dos.DOS // of the same model, when at hand: its energies are used for the mesh
}

const (
	energyTolerance = 1e-6 // eV: edges closer than this are one
	placeTolerance  = 2e-5 // 2π/a: k points closer than this are one place

	// A crystal whose overlapping bands hold fewer electrons per atom than
	// this is called a semimetal. The line is ours: bismuth, antimony and
	// graphite have 1e-5 to 5e-3, lead 0.4 (common practice; computed).
	semimetalCarriers = 0.1

	leastDivisions = 12 // of the mesh on which extrema are looked for

	// fermiDivisions is the least mesh for the Fermi level of a metal, which
	// linear tetrahedra give to some 5 meV there (aluminium: 11.519 eV on
	// 48³, 11.533 on 24³, 11.514 in the limit; computed).
	fermiDivisions = 48
)

// Find searches the whole zone: extrema on the mesh first, then each to its
// exact place. A mesh coarser than 12 divisions is refined for the search.
func Find(ctx context.Context, m hamiltonian.Model, g *symmetry.Group, mesh *symmetry.Mesh, o Options) (*Edges, error) {
	d := o.DOS
	var err error
	if d == nil || coarse(mesh.Divisions, leastDivisions) {
		if d, err = solve(ctx, m, g, mesh, leastDivisions, o); err != nil {
			return nil, err
		}
	}
	metal := func() (*Edges, error) {
		if coarse(d.Mesh.Divisions, fermiDivisions) {
			if d, err = solve(ctx, m, g, mesh, fermiDivisions, o); err != nil {
				return nil, err
			}
		}
		return &Edges{Kind: Metal, Fermi: d.FermiLevel}, nil
	}
	filled := math.Round(d.Electrons / d.Degeneracy)
	nb := int(filled)
	if math.Abs(d.Electrons/d.Degeneracy-filled) > 1e-9 || nb == 0 || nb == d.N {
		return metal()
	}

	places := newPlaces(m.Crystal().Setting)
	find := func(q quantity, extra ...lattice.FracK) (*Edge, error) {
		s := newSearch(m, g, d, q)
		for _, point := range places.points {
			extra = append(extra, point.K)
		}
		k, f, err := s.lowest(ctx, extra)
		if err != nil {
			return nil, err
		}
		return s.edge(k, f, places)
	}
	e := &Edges{Fermi: d.FermiLevel}
	var errs [2]error
	var wg sync.WaitGroup
	wg.Go(func() { e.VBM, errs[0] = find(quantity{lower: nb - 1, upper: -1}) })
	wg.Go(func() { e.CBM, errs[1] = find(quantity{lower: -1, upper: nb}) })
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	gap := e.CBM.Energy - e.VBM.Energy
	if gap < -energyTolerance {
		if carriers := d.Above(nb, d.FermiLevel); carriers > semimetalCarriers*float64(len(m.Crystal().Sites)) {
			return metal()
		}
		if d, err = solve(ctx, m, g, mesh, fermiDivisions, o); err != nil {
			return nil, err
		}
		e.Fermi = d.FermiLevel
	}
	if e.Direct, err = find(quantity{lower: nb - 1, upper: nb}, e.VBM.K, e.CBM.K); err != nil {
		return nil, err
	}
	e.Direct.Energy = max(e.Direct.Energy, 0)
	switch {
	case gap < -energyTolerance:
		e.Kind, e.Overlap = Semimetal, -gap
	case gap <= energyTolerance:
		e.Kind, e.Fermi = Semimetal, (e.VBM.Energy+e.CBM.Energy)/2
	default:
		e.Gap, e.Fermi = gap, (e.VBM.Energy+e.CBM.Energy)/2
		e.Kind = Indirect
		if e.Direct.Energy-gap <= energyTolerance {
			e.Kind = Direct
		}
	}
	return e, nil
}

func coarse(div [3]int, least int) bool {
	return min(div[0], div[1], div[2]) < least
}

// solve computes energies on the mesh, or on one with multiples of its
// divisions that are not below least.
func solve(ctx context.Context, m hamiltonian.Model, g *symmetry.Group, mesh *symmetry.Mesh, least int, o Options) (*dos.DOS, error) {
	if div := mesh.Divisions; coarse(div, least) {
		for i, n := range div {
			div[i] = n * max(1, (least+n-1)/n)
		}
		var err error
		if mesh, err = g.Mesh(div); err != nil {
			return nil, err
		}
	}
	return dos.Compute(ctx, m, g, mesh, dos.Options{Workers: o.Workers})
}

// OnPath reports whether the edge, or a k point equivalent to it, lies on the
// path, and how far off the nearest is, Å⁻¹.
func (e *Edge) OnPath(s lattice.Setting, p *path.Sampling) (on bool, distance float64) {
	distance = math.Inf(1)
	for _, k := range e.Star {
		if _, off, _ := p.Nearest(s.Lattice, k, 0); off < distance {
			distance = off
		}
	}
	return distance <= placeTolerance*2*math.Pi/s.A, distance
}

// String says the edge in words: "1.1713 eV at 0.7311 of Γ–X (6 valleys)".
func (e *Edge) String() string {
	return fmt.Sprintf("%.4f eV at %s (%d valleys)", e.Energy, e.Where, e.Valleys)
}
