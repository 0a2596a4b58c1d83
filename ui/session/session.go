package session

import (
	"errors"
	"fmt"
	"path/filepath"
	"strings"
	"time"

	"bandwright/physics/lattice"
	"bandwright/physics/ledger"
	"bandwright/ui/doc"
	"bandwright/ui/task"
)

// Options say how to start a session.
type Options struct {
	// Post has functions run on the goroutine that owns the session, soon and
	// without waiting for them.
	Post     func(func())
	Document doc.Document     // the study to start with; the zero value stands for doc.New()
	Dir      string           // where files named in Document are looked for
	Now      func() time.Time // the clock of Progress.Since; nil: time.Now
}

// ErrStopped marks results that are missing because refining was stopped.
var ErrStopped = errors.New("stopped: not computed for the current study")

// Session is an open study with everything computed from it.
type Session struct {
	post func(func())
	now  func() time.Time

	doc      doc.Document
	saved    doc.Document // as last opened or saved
	revision int
	history  *doc.History
	file     string
	dir      string // where relative file names hold
	onChange []func(*Snapshot)
	snapshot *Snapshot
	closed   bool

	// A drag lasts from the first edit that says so to the first that does
	// not; it refines while it pauses.
	dragging string // what is dragged, "" between drags
	drags    int    // counts drags, to tell their steps of the history apart
	moving   bool   // dragged within the last dragPause
	moves    int

	// What has been computed. held always belongs to the model of core; the
	// others say themselves what they were made from.
	core     *core
	held     *held
	wish     *wish // how to choose the focused level; nil once chosen
	density  *density
	edges    *bandEdges
	pins     [2]*Pinned
	compared comparison

	buildErr error // why previewing.key cannot be built
	fileRead int   // grows when own files are to be read anew
	stopped  bool

	previews *task.Runner[*preview]
	holds    *task.Runner[*held]
	refiners *task.Runner[*refined]
	pinners  *task.Runner[*pinned]
	solver   *solver
	costs    *costs

	// What was last submitted to the runners, and whether it is under way.
	previewing ticket[source]
	holding    ticket[holdKey]
	refining   ticket[refineKey]
	pinning    ticket[[2]*doc.Pin]
	done, of   int // progress of refining
}

// ticket is what was last submitted to a runner.
type ticket[K any] struct {
	key   K
	id    int
	open  bool // not delivered yet
	since time.Time
}

func (t *ticket[K]) submit(key K, now time.Time) (id int) {
	t.key, t.open, t.since = key, true, now
	t.id++
	return t.id
}

// comparison keeps the Contrast of two entries.
type comparison struct {
	a, b *ledger.Entry
	rows []ledger.ContrastRow
}

// New starts a session; computing begins at once.
func New(o Options) *Session {
	s := &Session{now: o.Now, solver: &solver{}, costs: newCosts()}
	if s.now == nil {
		s.now = time.Now
	}
	s.post = func(f func()) {
		o.Post(func() {
			if !s.closed {
				f()
			}
		})
	}
	s.previews = task.NewCoalescing(s.post, task.Receiver[*preview]{Result: s.previewDone})
	s.holds = task.NewCoalescing(s.post, task.Receiver[*held]{Result: s.holdDone})
	s.refiners = task.NewReplacing(s.post, task.Receiver[*refined]{Result: s.refineDone, Progress: s.refineProgress})
	s.pinners = task.NewCoalescing(s.post, task.Receiver[*pinned]{Result: s.pinsDone})
	d := o.Document
	if d.Equal(doc.Document{}) {
		d = doc.New()
	}
	s.start(d, "", o.Dir)
	return s
}

// start begins with a document, new or opened.
func (s *Session) start(d doc.Document, file, dir string) {
	d = absolute(d, dir)
	s.doc, s.saved, s.file, s.dir = d, d, file, dir
	s.history = doc.NewHistory(d)
	s.dragging, s.moving = "", false
	s.fileRead++
	s.wish = nil
	if d.View.Level == doc.NotGiven {
		s.wish = &wish{kind: valenceTop}
	}
	s.changed()
}

// New replaces the study by a new one that has no file.
func (s *Session) New(d doc.Document) { s.start(d, "", s.dir) }

// Open replaces the study by one read from a file. On an error, given as
// doc.Load has it, nothing changes.
func (s *Session) Open(file string) error {
	d, err := doc.Load(file)
	if err != nil {
		return err
	}
	s.start(d, file, filepath.Dir(file))
	return nil
}

// Save writes the study to its file.
func (s *Session) Save() error {
	if s.file == "" {
		return errors.New("the study has no file yet: save it under a name")
	}
	return s.SaveAs(s.file)
}

// SaveAs writes the study to a file, which becomes its own. On an error nothing
// changes.
func (s *Session) SaveAs(file string) error {
	dir := filepath.Dir(file)
	d := withFiles(s.doc, func(name string) string { return relative(dir, name) })
	if err := doc.Save(file, d); err != nil {
		return err
	}
	s.file, s.dir, s.saved = file, dir, s.doc
	s.publish()
	return nil
}

// withFiles returns d with the names of the files it refers to changed.
func withFiles(d doc.Document, change func(string) string) doc.Document {
	file := func(name string) string {
		if name == "" {
			return ""
		}
		return change(name)
	}
	d.Model.File = file(d.Model.File)
	pin := func(p *doc.Pin) *doc.Pin {
		if p == nil || p.Model.File == "" {
			return p
		}
		q := *p
		q.Model.File = file(p.Model.File)
		return &q
	}
	d.PinA, d.PinB = pin(d.PinA), pin(d.PinB)
	return d
}

// absolute returns d with absolute file names, as sessions hold it; in a study
// file they are relative to its folder, so that both can move together.
func absolute(d doc.Document, dir string) doc.Document {
	return withFiles(d, func(name string) string { return within(dir, name) })
}

// within returns the absolute name of a file named relative to a folder.
func within(dir, name string) string {
	name = filepath.FromSlash(name)
	if !filepath.IsAbs(name) {
		name = filepath.Join(dir, name)
	}
	if abs, err := filepath.Abs(name); err == nil {
		return abs
	}
	return name
}

// relative returns file relative to a folder when it lies in it or close by.
func relative(dir, file string) string {
	dir, err := filepath.Abs(dir)
	if err != nil {
		return file
	}
	if r, err := filepath.Rel(dir, file); err == nil && !strings.HasPrefix(r, filepath.Join("..", "..")) {
		return filepath.ToSlash(r)
	}
	return file
}

// File returns the file of the study, "" if it has none.
func (s *Session) File() string { return s.file }

// Modified reports whether the study differs from what was last opened or
// saved. Where one looks (held k point, focused level, camera) does not count.
func (s *Session) Modified() bool { return !lasting(s.doc).Equal(lasting(s.saved)) }

func lasting(d doc.Document) doc.Document {
	d.View.Held, d.View.Level, d.View.Camera = lattice.FracK{}, 0, [5]float64{}
	return d
}

// Snapshot returns the present state.
func (s *Session) Snapshot() *Snapshot { return s.snapshot }

// OnChange has f called after each change, on the session's goroutine. f may
// edit the session.
func (s *Session) OnChange(f func(*Snapshot)) { s.onChange = append(s.onChange, f) }

// Close ends all computing. The session is not to be used afterwards, and calls
// nobody any more.
func (s *Session) Close() {
	s.closed = true
	s.previews.Close()
	s.holds.Close()
	s.refiners.Close()
	s.pinners.Close()
}

// Do applies an edit. An error is a message for the user, and nothing has
// changed then. The computing that follows is done in the background.
func (s *Session) Do(e Edit) error {
	if s.closed {
		return errors.New("the study is closed")
	}
	d, drag, err := e.apply(s, s.doc)
	if err != nil {
		return err
	}
	if _, ok := e.(UseSetFile); ok {
		s.fileRead++
	}
	s.wish = s.wishAfter(e, d)
	step := s.track(drag)
	if !undoable(d).Equal(undoable(s.doc)) {
		s.history.Push(d, step)
	}
	s.doc = d
	s.changed()
	return nil
}

// undoable is the part of a document that undo restores.
func undoable(d doc.Document) doc.Document {
	d.View = doc.View{}
	return d
}

// drag is what an edit belongs to: the dragging of something, or its end.
type drag struct {
	what string // "" for an edit that cannot be dragged
	on   bool
}

// dragPause is how long a drag rests before the picture is refined.
const dragPause = 150 * time.Millisecond

// track follows drags and returns the name of the step of the history that the
// edit belongs to.
func (s *Session) track(e drag) (step string) {
	joins := e.what != "" && s.dragging == e.what
	s.moves++
	s.moving, s.dragging = e.on, ""
	if e.on {
		s.dragging = e.what
		if !joins {
			s.drags++
		}
		move := s.moves
		time.AfterFunc(dragPause, func() {
			s.post(func() {
				if s.moves == move {
					s.moving = false
					s.schedule()
					s.publish()
				}
			})
		})
	}
	if e.on || joins {
		return fmt.Sprintf("drag %d", s.drags)
	}
	return ""
}

// Undo takes back the last step.
func (s *Session) Undo() { s.travel(s.history.Undo) }

// Redo takes back the last Undo.
func (s *Session) Redo() { s.travel(s.history.Redo) }

// CanUndo reports whether there is a step to take back.
func (s *Session) CanUndo() bool { return s.history.CanUndo() }

// CanRedo reports whether there is an undone step.
func (s *Session) CanRedo() bool { return s.history.CanRedo() }

// UndoDepth returns the number of steps that Undo can take back.
func (s *Session) UndoDepth() int { return s.history.Depth() }

func (s *Session) travel(step func() (doc.Document, bool)) {
	d, ok := step()
	if !ok {
		return
	}
	d.View = s.doc.View
	if !sameLatticeKind(d.Crystal, s.doc.Crystal) {
		d.View.Held = lattice.FracK{}
	}
	s.wish = s.wishAfter(nil, d)
	s.track(drag{})
	s.doc = d
	s.changed()
}

// wishAfter returns how to choose the focused level once the document has
// become d by an edit, nil when d says it itself.
func (s *Session) wishAfter(e Edit, d doc.Document) *wish {
	switch e := e.(type) {
	case Focus:
		return nil
	case Hold:
		switch {
		case e.Level >= 0:
			return nil
		case e.Energy != 0:
			return &wish{kind: nearestEnergy, energy: e.Energy}
		case s.wish != nil:
			return s.wish
		}
		if focus := s.snapshot.Focus; focus != nil {
			return &wish{kind: nearestEnergy, energy: focus.Set.Energy}
		}
		return &wish{kind: valenceTop}
	}
	switch {
	case sameBasis(s.doc, d):
		if d.View.Level != s.doc.View.Level {
			return nil
		}
		return s.wish
	case s.core == nil || s.held == nil:
		return &wish{kind: valenceTop}
	case s.wish != nil && s.wish.kind != nearestEnergy:
		return s.wish
	}
	level := s.doc.View.Level
	if s.wish != nil { // not chosen yet
		level = s.held.level
	}
	m := s.core.built.Model
	return &wish{kind: sameKind, level: level, filled: filledLevels(m), holds: m.SpinDegeneracy()}
}

// sameBasis reports whether the models of two documents have the same levels,
// possibly at other energies.
func sameBasis(a, b doc.Document) bool {
	b.Crystal.A, b.Crystal.Lattice, b.Model.Factors = a.Crystal.A, a.Crystal.Lattice, a.Model.Factors
	return modelPart(a).Equal(modelPart(b))
}

// Stop ends refining; what is missing then is marked with ErrStopped until the
// study changes or Resume is called.
func (s *Session) Stop() {
	s.stopped = true
	s.schedule()
	s.publish()
}

// Resume goes on with what Stop has stopped.
func (s *Session) Resume() {
	s.stopped = false
	s.schedule()
	s.publish()
}

// changed follows a change of the document.
func (s *Session) changed() {
	s.revision++
	if !s.previewing.key.equal(s.source()) {
		s.stopped = false
	}
	s.schedule()
	s.publish()
}
