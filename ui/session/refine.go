package session

import (
	"context"

	"bandwright/physics/bands"
	"bandwright/physics/dos"
	"bandwright/physics/edges"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/symmetry"
	"bandwright/ui/task"
)

// refineStep is one of the long computations, in the order in which they run.
type refineStep uint8

const (
	refineNothing refineStep = iota
	refineBands
	refineDOS
	refineEdges
)

func (r refineStep) String() string {
	return [...]string{"", "bands", "density of states", "band edges"}[r]
}

// refineKey is what a refining job was submitted for.
type refineKey struct {
	step  refineStep
	core  *core // of bands
	model hamiltonian.Model
	mesh  *symmetry.Mesh
}

// refined is the result of a refining job; what it is depends on the step.
type refined struct {
	id    int
	bands *bands.Bands
	dos   *dos.DOS
	curve *dos.Curve
	edges *edges.Edges
	err   error
}

// density is the last density of states, and the model and mesh that a density
// was last computed for. After a failure the two differ.
type density struct {
	model hamiltonian.Model
	mesh  *symmetry.Mesh
	dos   *dos.DOS
	curve *dos.Curve
	err   error
}

// bandEdges are the last edges, in the same way.
type bandEdges struct {
	model hamiltonian.Model
	mesh  *symmetry.Mesh
	edges *edges.Edges
	err   error
}

func (d *density) fits(c *core) bool {
	return d != nil && d.model == c.built.Model && d.mesh == c.built.Mesh
}

func (e *bandEdges) fits(c *core) bool {
	return e != nil && e.model == c.built.Model && e.mesh == c.built.Mesh
}

// nextStep returns the first long computation that the core lacks.
func (s *Session) nextStep() refineKey {
	b := s.core.built
	switch {
	case s.core.coarse:
		return refineKey{step: refineBands, core: s.core}
	case b.Mesh == nil:
	case !s.density.fits(s.core):
		return refineKey{step: refineDOS, model: b.Model, mesh: b.Mesh}
	case !s.edges.fits(s.core):
		return refineKey{step: refineEdges, model: b.Model, mesh: b.Mesh}
	}
	return refineKey{}
}

// refineJob returns the computation of a step.
func (s *Session) refineJob(id int, key refineKey) task.Job[*refined] {
	c, density := s.core, s.density
	return func(ctx context.Context, report task.Report) (*refined, error) {
		r := &refined{id: id}
		switch key.step {
		case refineBands:
			sampling, _ := c.sampling(0)
			r.bands, r.err = bands.Compute(ctx, c.built.Model, sampling, bands.Options{Weights: true, Progress: report})
		case refineDOS:
			r.dos, r.err = dos.Compute(ctx, key.model, c.built.Group, key.mesh, dos.Options{Projections: true, Terms: true, Progress: report})
			if r.err == nil {
				r.curve, r.err = r.dos.Evaluate(energyGrid(r.dos))
			}
		case refineEdges:
			o := edges.Options{}
			if density.err == nil {
				o.DOS = density.dos
			}
			r.edges, r.err = edges.Find(ctx, key.model, c.built.Group, key.mesh, o)
		}
		return r, nil
	}
}

// The curve of a density of states.
const (
	curvePoints = 1200
	curveMargin = 0.5 // eV beyond the bands
)

// energyGrid returns even energies that cover all bands.
func energyGrid(d *dos.DOS) []float64 {
	low, high := d.Range()
	low, high = low-curveMargin, high+curveMargin
	e := make([]float64, curvePoints)
	for i := range e {
		e[i] = low + (high-low)*float64(i)/(curvePoints-1)
	}
	return e
}

// store takes over a refined result.
func (s *Session) store(key refineKey, r *refined) {
	switch key.step {
	case refineBands:
		// A new core: whoever sees the old one never sees it change.
		c := *key.core
		c.coarse = false
		if r.err == nil {
			c.bands = r.bands
			c.findTop()
		}
		c.bandsErr = r.err
		s.core = &c
	case refineDOS:
		d := &density{model: key.model, mesh: key.mesh, dos: r.dos, curve: r.curve, err: r.err}
		if r.err != nil && s.density != nil {
			d.dos, d.curve = s.density.dos, s.density.curve
		}
		s.density = d
	case refineEdges:
		e := &bandEdges{model: key.model, mesh: key.mesh, edges: r.edges, err: r.err}
		if r.err != nil && s.edges != nil {
			e.edges = s.edges.edges
		}
		s.edges = e
	}
}
