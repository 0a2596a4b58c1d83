package window

import (
	"bytes"
	"encoding/json"
	"io"
	"time"

	"fyne.io/fyne/v2"

	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

// recorder writes the state of the window as JSON, one object a line, whenever
// it has changed. Tests that drive the window follow it.
type recorder struct {
	w    *Window
	out  io.Writer
	last []byte
	quit chan struct{}
}

// state is one line of the record.
type state struct {
	Title       string           `json:"title"`
	Set         string           `json:"set"`
	Crystal     string           `json:"crystal"`
	SpinOrbit   bool             `json:"spin_orbit"`
	A           float64          `json:"a"`
	Held        [3]float64       `json:"held"` // primitive fractions
	HeldLabel   string           `json:"held_label"`
	FocusFirst  int              `json:"focus_first"`
	FocusSize   int              `json:"focus_size"`
	FocusEnergy float64          `json:"focus_energy"`
	LedgerSum   float64          `json:"ledger_sum"`
	Gap         float64          `json:"gap"`
	Kind        string           `json:"kind"`
	Fermi       float64          `json:"fermi"`
	PinA        string           `json:"pin_a"`
	PinB        string           `json:"pin_b"`
	Contrast    int              `json:"contrast"` // rows
	Path        string           `json:"path"`
	Camera      [5]float64       `json:"camera"`
	Window      [2]float64       `json:"window"`
	Colour      string           `json:"colour"`
	Frame       string           `json:"frame"`
	Revision    int              `json:"revision"`
	UndoDepth   int              `json:"undo_depth"`
	File        string           `json:"file"`
	Modified    bool             `json:"modified"`
	Notice      string           `json:"notice"`
	Problem     string           `json:"problem"` // why the study is not computed
	Busy        bool             `json:"busy"`
	LagMS       float64          `json:"lag_ms"` // median time from a drag of the lattice constant to its bands
	Drawings    map[string]int   `json:"drawings"`
	Panels      map[string]place `json:"panels"`
	Points      map[string]place `json:"points"` // special points as seen in the Zone
}

type place struct {
	X float32 `json:"x"`
	Y float32 `json:"y"`
	W float32 `json:"w"`
	H float32 `json:"h"`
}

// recordStep is how often the state is looked at.
const recordStep = 40 * time.Millisecond

func newRecorder(w *Window, out io.Writer) *recorder {
	return &recorder{w: w, out: out, quit: make(chan struct{})}
}

func (r *recorder) start() {
	if r.out == nil {
		return
	}
	go func() {
		tick := time.NewTicker(recordStep)
		defer tick.Stop()
		for {
			select {
			case <-tick.C:
				view.Post(r.write)
			case <-r.quit:
				return
			}
		}
	}()
}

func (r *recorder) stop() { close(r.quit) }

func (r *recorder) write() {
	line, err := json.Marshal(r.w.state())
	if err != nil || bytes.Equal(line, r.last) {
		return
	}
	r.last = line
	r.out.Write(append(line, '\n'))
}

// state is what the window shows now.
func (w *Window) state() state {
	sn := w.sn
	s := state{
		Title: sn.Doc.Title, Set: sn.Doc.Model.Set, SpinOrbit: sn.Doc.Model.SpinOrbit, A: sn.Doc.Crystal.A,
		Held: sn.Doc.View.Held, HeldLabel: sn.HeldLabel,
		Camera: sn.Doc.View.Camera, Window: w.v.Window, Colour: sn.Doc.View.Colour, Frame: sn.Doc.View.Frame.String(),
		Revision: sn.Revision, UndoDepth: w.session.UndoDepth(), File: sn.File, Modified: sn.Modified,
		Notice: w.notice, Busy: sn.Busy, LagMS: float64(w.lag.median().Microseconds()) / 1000,
	}
	if sn.Doc.Model.File != "" {
		s.Set = sn.Doc.Model.File
	}
	if sn.BuildErr != nil {
		s.Problem = sn.BuildErr.Error()
	}
	if sn.Built != nil {
		s.Crystal = sn.Built.Crystal.Formula()
		s.A = sn.Built.Crystal.Setting.A
		s.Path = sn.Built.Path.String()
	}
	if f := sn.Focus; f != nil {
		s.FocusFirst, s.FocusSize, s.FocusEnergy, s.LedgerSum = f.Set.First, f.Set.Size, f.Set.Energy, f.Sum
	}
	if e := sn.Edges; e != nil {
		s.Gap, s.Kind = e.Gap, string(e.Kind)
	}
	if sn.FermiKnown {
		s.Fermi = sn.Fermi
	}
	s.PinA, s.PinB, s.Contrast = pinName(sn.PinA), pinName(sn.PinB), len(sn.Contrast)
	s.Drawings, s.Panels = map[string]int{}, map[string]place{}
	for name, p := range map[string]*view.Panel{"zone": w.zone, "bands": w.bands, "dos": w.dos, "ladder": w.ladder, "ledger": w.ledger, "path": w.path, "foot": w.foot.panel} {
		s.Panels[name] = w.placeOf(p)
		s.Drawings[name] = p.Drawings()
		s.Busy = s.Busy || p.Busy()
	}
	for name, o := range map[string]fyne.CanvasObject{
		"crystal": w.header.crystal, "set": w.header.set, "spin_orbit": w.header.orbit, "lattice_slider": w.header.slider,
		"lattice_entry": w.header.entry, "find": w.header.find, "path_entry": w.editor.text, "colour": w.tools.colour,
		"factor": w.tools.factor,
	} {
		s.Panels[name] = w.placeOf(o)
	}
	if sn.Built != nil {
		s.Points = map[string]place{}
		width, height := plotSize(w.zone)
		seen := present.ZoneView(sn, &w.v, width, height)
		for _, p := range sn.Built.Points {
			at, _ := seen.Project(sn.Built.Crystal.Lattice().Cart(p.K).Vec())
			zone := s.Panels["zone"]
			s.Points[p.Label] = place{X: zone.X + float32(at.X), Y: zone.Y + float32(at.Y)}
		}
	}
	return s
}

func pinName(p *session.Pinned) string {
	if p == nil {
		return ""
	}
	return p.Name
}

func (w *Window) placeOf(o fyne.CanvasObject) place {
	at, size := w.app.Driver().AbsolutePositionForObject(o), o.Size()
	if !o.Visible() {
		return place{}
	}
	return place{at.X, at.Y, size.Width, size.Height}
}
