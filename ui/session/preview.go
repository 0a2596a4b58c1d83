package session

import (
	"context"
	"sync"
	"time"

	"bandwright/physics/bands"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/ui/doc"
	"bandwright/ui/task"
)

// source is everything that previews and refinements are computed from.
type source struct {
	doc      doc.Document // crystal, model, path and mesh alone
	fileRead int
}

func (s *Session) source() source {
	d := doc.Document{Crystal: s.doc.Crystal, Model: s.doc.Model, Path: s.doc.Path, Mesh: s.doc.Mesh}
	return source{doc: d, fileRead: s.fileRead}
}

func modelPart(d doc.Document) doc.Document {
	return doc.Document{Crystal: d.Crystal, Model: d.Model}
}

// sameModel reports whether a and b have the same model.
func (a source) sameModel(b source) bool {
	return modelPart(a.doc).Equal(modelPart(b.doc)) &&
		(a.doc.Model.File == "" || a.fileRead == b.fileRead)
}

func samePath(a, b doc.Document) bool {
	return doc.Document{Path: a.Path}.Equal(doc.Document{Path: b.Path})
}

func (a source) equal(b source) bool { return a.sameModel(b) && a.doc.Equal(b.doc) }

// core is what a preview computes from a document: it is there soon after every
// edit.
type core struct {
	source   source
	built    *doc.Built
	bands    *bands.Bands
	coarse   bool // bands have fewer points than they should
	bandsErr error
	top      float64 // of the valence bands on the path, eV
	gapped   bool    // there is a gap above top on the path
}

// preview is the result of a preview job. One of core and err is nil.
type preview struct {
	id   int
	core *core
	held *held
	err  error
}

// request is what a preview job starts from.
type request struct {
	id     int
	source source
	last   *core // to take from what fits
	moving bool
	k      lattice.FracK
	level  int
	wish   *wish
	costs  *costs
}

func (r request) run(ctx context.Context, _ task.Report) (*preview, error) {
	b, err := r.source.doc.Build("")
	if err != nil {
		return &preview{id: r.id, err: err}, nil
	}
	c := &core{source: r.source, built: b}
	kept := false
	if r.last != nil {
		kept = r.last.source.sameModel(r.source)
		c.keep(r.last)
	}
	if kept && !r.last.coarse && samePath(r.last.source.doc, r.source.doc) {
		c.bands, c.bandsErr = r.last.bands, r.last.bandsErr
	} else {
		c.computeBands(ctx, r.moving, r.costs)
	}
	c.findTop()
	h := hold(hamiltonian.NewStates(c.built.Model), c.built, c.samples(), r.k, r.level, r.wish)
	return &preview{id: r.id, core: c, held: h}, nil
}

// keep takes over from an earlier core what has not changed, so that results
// and drawings made from it stay valid.
func (c *core) keep(last *core) {
	now, before := c.source.doc, last.source.doc
	b, old := *c.built, last.built
	c.built = &b
	sameModel := last.source.sameModel(c.source)
	sameCrystal := doc.Document{Crystal: now.Crystal}.Equal(doc.Document{Crystal: before.Crystal})
	before.Crystal.A = now.Crystal.A
	scaled := now.Crystal.Prototype != "" && doc.Document{Crystal: now.Crystal}.Equal(doc.Document{Crystal: before.Crystal})
	if sameModel {
		b.Crystal, b.Set, b.Model = old.Crystal, old.Set, old.Model
	}
	if sameCrystal {
		b.Zone = old.Zone
	}
	if sameCrystal || scaled { // all in fractions
		b.Group, b.Points, b.PointsErr = old.Group, old.Points, old.PointsErr
		if now.Mesh == before.Mesh {
			b.Mesh = old.Mesh
		}
	}
}

// defaultPoints is the number of points along the whole path of a study that
// names no step.
const defaultPoints = 400

// sampling cuts the path with the step of the study, at most so many points.
func (c *core) sampling(most int) (s *path.Sampling, coarse bool) {
	l := c.built.Crystal.Lattice()
	total := 0.0
	for _, leg := range c.built.Path.Sample(l, 1e9).Legs {
		total += leg.Length
	}
	step := c.source.doc.Path.Step
	if step == 0 {
		step = total / defaultPoints
	}
	if most > 0 && total/step > float64(most) {
		return c.built.Path.Sample(l, total/float64(most)), true
	}
	return c.built.Path.Sample(l, step), false
}

const (
	dragTime  = 7 * time.Millisecond  // for bands while the study is dragged
	firstTime = 60 * time.Millisecond // for the first bands after another edit
	leastDrag = 60                    // points along the path, even if slower
)

// computeBands computes bands within the time that suits the moment, with fewer
// points if need be.
func (c *core) computeBands(ctx context.Context, moving bool, costs *costs) {
	if c.bandsErr = c.built.PathErr; c.bandsErr != nil {
		return
	}
	limit := firstTime
	if moving {
		limit = dragTime
	}
	n := c.levels()
	s, coarse := c.sampling(max(leastDrag, costs.points(n, limit)))
	begin := time.Now()
	c.bands, c.bandsErr = bands.Compute(ctx, c.built.Model, s, bands.Options{Weights: true})
	c.coarse = coarse && c.bandsErr == nil
	costs.note(n, len(s.K), time.Since(begin))
}

// levels returns the number of levels per k point.
func (c *core) levels() int { return len(c.built.Model.Basis()) }

// samples returns the samples of the bands, nil when there are none.
func (c *core) samples() *path.Sampling {
	if c.bands == nil {
		return nil
	}
	return c.bands.Sampling
}

// findTop looks for a gap between filled and empty bands on the path.
func (c *core) findTop() {
	filled := filledLevels(c.built.Model)
	if c.bands == nil || filled == 0 || filled >= c.bands.N ||
		float64(filled*c.built.Model.SpinDegeneracy()) < c.built.Model.Electrons()-1e-9 {
		return
	}
	var bottom float64
	for ik := range c.bands.Sampling.K {
		e := c.bands.Levels(ik)
		if ik == 0 || e[filled-1] > c.top {
			c.top = e[filled-1]
		}
		if ik == 0 || e[filled] < bottom {
			bottom = e[filled]
		}
	}
	c.gapped = bottom-c.top > hamiltonian.SetTolerance
}

// costs remembers how long bands take per k point, by the number of levels.
type costs struct {
	mu       sync.Mutex
	perPoint map[int]time.Duration
}

func newCosts() *costs { return &costs{perPoint: map[int]time.Duration{}} }

// points returns how many k points fit into a time.
func (c *costs) points(levels int, limit time.Duration) int {
	c.mu.Lock()
	defer c.mu.Unlock()
	per, known := c.perPoint[levels]
	if !known {
		// A cautious guess before the first measurement; solving grows with
		// the third power.
		per = max(time.Microsecond, time.Duration(levels*levels*levels)*3*time.Nanosecond)
	}
	return int(limit / per)
}

// note takes a measurement. Single slow ones, as on a busy machine, count little.
func (c *costs) note(levels, points int, took time.Duration) {
	if points == 0 {
		return
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	per := max(took/time.Duration(points), 1)
	if old, known := c.perPoint[levels]; known {
		per = (3*old + min(per, 2*old)) / 4
	}
	c.perPoint[levels] = per
}

// solver keeps the workspace of the held k point between jobs, which run one
// at a time.
type solver struct{ states *hamiltonian.States }

func (s *solver) of(m hamiltonian.Model) *hamiltonian.States {
	if s.states == nil || s.states.Model() != m {
		s.states = hamiltonian.NewStates(m)
	}
	return s.states
}

// holdKey is what a hold job was submitted for.
type holdKey struct {
	core  *core
	k     lattice.FracK
	level int
	wish  *wish
}
