package session

import (
	"context"

	"bandwright/physics/dos"
	"bandwright/physics/edges"
	"bandwright/physics/ledger"
	"bandwright/ui/doc"
	"bandwright/ui/task"
)

// schedule compares what the document asks for with what has been computed and
// submits what is missing and not under way.
func (s *Session) schedule() {
	want := s.source()
	if s.previewing.id == 0 || !s.previewing.key.equal(want) {
		r := request{
			id: s.previewing.submit(want, s.now()), source: want, last: s.core, moving: s.moving,
			k: s.doc.View.Held, level: s.doc.View.Level, wish: s.wish, costs: s.costs,
		}
		s.previews.Submit(r.run)
	}
	s.scheduleHold()
	s.scheduleRefining(want)
	s.schedulePins()
}

// current reports whether the core belongs to the document.
func (s *Session) current() bool { return s.core != nil && s.core.source.equal(s.source()) }

// scheduleHold solves the held k point when the last solution is of another.
func (s *Session) scheduleHold() {
	if s.core == nil || s.wish != nil && s.wish.kind != nearestEnergy && s.previewing.open {
		return // the preview that is under way answers the wish
	}
	v := s.doc.View
	if s.held.answers(s.core, v, s.wish) {
		return
	}
	key := holdKey{core: s.core, k: v.Held, level: v.Level, wish: s.wish}
	if s.holding.id > 0 && s.holding.key == key {
		return
	}
	id := s.holding.submit(key, s.now())
	solver := s.solver
	s.holds.Submit(func(context.Context, task.Report) (*held, error) {
		h := hold(solver.of(key.core.built.Model), key.core.built, key.core.samples(), key.k, key.level, key.wish)
		h.id = id
		return h, nil
	})
}

// answers reports whether h is the solution that the view asks for.
func (h *held) answers(c *core, v doc.View, w *wish) bool {
	return h != nil && w == nil && h.model == c.built.Model && h.k == v.Held
}

// scheduleRefining runs the next long computation for the document, unless it
// is being dragged.
func (s *Session) scheduleRefining(want source) {
	var key refineKey
	if s.current() && !s.moving && !s.stopped && s.buildErr == nil {
		key = s.nextStep()
	}
	if s.refining.open {
		stillWanted := s.core != nil && s.core.source.sameModel(want) && s.core.source.doc.Mesh == want.doc.Mesh &&
			s.refining.key.step != refineBands && !s.current() && !s.stopped
		if stillWanted || s.refining.key == key {
			return
		}
		s.refining.open = false
		if key.step == refineNothing {
			s.refiners.Cancel()
		}
	}
	if key.step != refineNothing {
		s.done, s.of = 0, 0
		id := s.refining.submit(key, s.now())
		s.refiners.Submit(s.refineJob(id, key))
	}
}

// schedulePins solves the pins of the document that have not been solved yet.
func (s *Session) schedulePins() {
	wanted := [2]*doc.Pin{s.doc.PinA, s.doc.PinB}
	known := s.pins
	complete := true
	for i, p := range wanted {
		s.pins[i] = nil
		for _, q := range known { // a pin may have moved to the other slot
			if p != nil && q != nil && q.of(p) {
				s.pins[i] = q
			}
		}
		complete = complete && (p == nil || s.pins[i] != nil)
	}
	if complete || s.pinning.open && s.pinning.key == wanted {
		return
	}
	id := s.pinning.submit(wanted, s.now())
	solved := s.pins
	s.pinners.Submit(func(context.Context, task.Report) (*pinned, error) {
		for i, p := range wanted {
			if p != nil && solved[i] == nil {
				solved[i] = solvePin(p)
			}
		}
		return &pinned{id: id, pins: solved}, nil
	})
}

// pinned is the result of solving the pins.
type pinned struct {
	id   int
	pins [2]*Pinned
}

func (s *Session) previewDone(p *preview, err error) {
	if err != nil { // a panic in the job
		p = &preview{id: s.previewing.id, err: err}
	}
	if p.id == s.previewing.id {
		s.previewing.open = false
		s.buildErr = p.err
	}
	if p.err != nil {
		if p.id == s.previewing.id && s.wish != nil && s.wish.kind == sameKind {
			s.wish = nil // the last good levels stay, and so does the focus in them
		}
	} else {
		s.core = p.core
		s.takeHeld(p.held)
	}
	s.schedule()
	s.publish()
}

func (s *Session) holdDone(h *held, err error) {
	if err != nil { // a panic in the job
		key := s.holding.key
		h = &held{id: s.holding.id, model: key.core.built.Model, k: key.k, wish: key.wish, level: key.level, err: err}
	}
	if h.id == s.holding.id {
		s.holding.open = false
	}
	if h.model == s.core.built.Model {
		s.takeHeld(h)
	}
	s.schedule()
	s.publish()
}

// takeHeld takes over a solution of the core's model, and the level that it
// chose if that is what is wished for.
func (s *Session) takeHeld(h *held) {
	s.held = h
	if h.k != s.doc.View.Held {
		return
	}
	level := s.doc.View.Level
	if s.wish != nil {
		if h.wish != s.wish {
			return
		}
		level, s.wish = h.level, nil
	}
	if s.current() { // a level that the model does not have
		level = min(level, s.core.levels()-1)
	}
	if level != s.doc.View.Level {
		s.doc.View.Level = level
		s.revision++
	}
}

func (s *Session) refineDone(r *refined, err error) {
	if err != nil { // a panic in the job
		r = &refined{id: s.refining.id, err: err}
	}
	if r.id != s.refining.id || !s.refining.open {
		return
	}
	s.refining.open = false
	s.store(s.refining.key, r)
	s.schedule()
	s.publish()
}

func (s *Session) refineProgress(done, total int) {
	if s.refining.open {
		s.done, s.of = done, total
		s.publish()
	}
}

func (s *Session) pinsDone(p *pinned, err error) {
	if err != nil { // a panic in the job
		p = &pinned{id: s.pinning.id}
		for i, pin := range s.pinning.key {
			if pin != nil {
				p.pins[i] = &Pinned{Name: pin.Model.Set, Pin: *pin, Err: err, pin: pin}
			}
		}
	}
	if p.id == s.pinning.id {
		s.pinning.open = false
		s.pins = p.pins
	}
	s.schedule()
	s.publish()
}

// publish replaces the snapshot and tells everyone.
func (s *Session) publish() {
	snap := &Snapshot{
		Doc: s.doc, Revision: s.revision, File: s.file, Modified: s.Modified(),
		BuildErr: s.buildErr, Stopped: s.stopped,
	}
	if c := s.core; c != nil {
		current := s.current()
		snap.Built = c.built
		snap.Bands, snap.BandsErr, snap.BandsCoarse = c.bands, c.bandsErr, c.coarse
		snap.BandsStale = !current
		snap.Filled = filledLevels(c.built.Model)
		if d := s.density; d != nil {
			snap.DOS, snap.Curve = d.dos, d.curve
		}
		if e := s.edges; e != nil {
			snap.Edges = e.edges
		}
		if s.density.fits(c) {
			snap.DOSErr = s.density.err
		} else if s.stopped {
			snap.DOSErr = ErrStopped
		}
		if s.edges.fits(c) {
			snap.EdgesErr = s.edges.err
		} else if s.stopped {
			snap.EdgesErr = ErrStopped
		}
		snap.DOSStale = snap.DOS != nil && !(current && s.density.fits(c) && s.density.err == nil)
		snap.EdgesStale = snap.Edges != nil && !(current && s.edges.fits(c) && s.edges.err == nil)
		snap.Fermi, snap.FermiKnown, snap.FermiStale = s.fermi()
	}
	if h := s.held; h != nil {
		snap.Held, snap.HeldErr = h.ledger, h.err
		snap.HeldLabel, snap.HeldPlace, snap.HeldStar, snap.HeldCoGroup = h.label, h.place, h.star, h.coGroup
		fresh := h.answers(s.core, s.doc.View, s.wish)
		snap.HeldStale = !fresh || !s.current()
		if h.ledger != nil {
			level := h.level
			if fresh {
				level = min(s.doc.View.Level, s.core.levels()-1)
			}
			snap.Focus = h.ledger.EntryOf(level)
		}
	}
	snap.PinA, snap.PinB = s.pins[0], s.pins[1]
	snap.Contrast = s.contrast(snap.PinA, snap.PinB)
	snap.Busy = s.previewing.open || s.holding.open || s.refining.open || s.pinning.open
	if s.previewing.open {
		snap.Progress = append(snap.Progress, Progress{What: "bands", Since: s.previewing.since})
	}
	if s.refining.open {
		snap.Progress = append(snap.Progress, Progress{What: s.refining.key.step.String(), Done: s.done, Total: s.of, Since: s.refining.since})
	}
	s.snapshot = snap
	for _, f := range s.onChange {
		if s.snapshot != snap {
			return // an edit by one of them has told all about a newer one
		}
		f(snap)
	}
}

// contrast compares the pins, once for each pair.
func (s *Session) contrast(a, b *Pinned) []ledger.ContrastRow {
	if a == nil || b == nil || a.Entry == nil || b.Entry == nil {
		return nil
	}
	if s.compared.a != a.Entry || s.compared.b != b.Entry {
		s.compared = comparison{a: a.Entry, b: b.Entry, rows: ledger.Contrast(*a.Entry, *b.Entry)}
	}
	return s.compared.rows
}

// fermi returns the energy up to which levels are filled, from the best that is
// known of the core's model, else from what was known before.
func (s *Session) fermi() (e float64, known, stale bool) {
	filledTo := func(x *edges.Edges) float64 {
		if x.Kind == edges.Direct || x.Kind == edges.Indirect {
			return x.VBM.Energy
		}
		return x.Fermi
	}
	fromDOS := func(d *dos.DOS) float64 {
		if d.Gapped {
			return d.Top
		}
		return d.FermiLevel
	}
	switch {
	case s.edges.fits(s.core) && s.edges.err == nil:
		return filledTo(s.edges.edges), true, false
	case s.core.gapped:
		return s.core.top, true, false
	case s.density.fits(s.core) && s.density.err == nil:
		return fromDOS(s.density.dos), true, false
	case s.edges != nil && s.edges.edges != nil:
		return filledTo(s.edges.edges), true, true
	case s.density != nil && s.density.dos != nil:
		return fromDOS(s.density.dos), true, true
	}
	return 0, false, false
}
