package window

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/ui/doc"
	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

// pathEditor is the line below the path's list: the path as text, its frame,
// and what can be done with it.
type pathEditor struct {
	w     *Window
	box   *fyne.Container
	text  *widget.Entry
	frame *view.Select
	pick  *view.Chip
	error *canvas.Text
	shown string // the path as it was last put into the entry
}

func newPathEditor(w *Window) *pathEditor {
	e := &pathEditor{w: w, text: widget.NewEntry(), error: canvas.NewText("", nil)}
	e.text.PlaceHolder = "Γ X W K Γ L | U X, or numbers: 0.5 0 0.5"
	e.text.OnSubmitted = e.submit
	var names []string
	for _, f := range present.Frames {
		names = append(names, present.FrameName(f))
	}
	e.frame = view.NewSelect(w.hints, "the frame in which coordinates are typed and shown (F)", names, func(name string) {
		for _, f := range present.Frames {
			if present.FrameName(f) == name {
				w.setFrame(f)
			}
		}
	})
	e.pick = view.NewChip(w.hints, "Pick in Zone", "clicks in the Zone add points at the end of the path (N)", w.togglePicking)
	e.error.TextSize = theme.Size(theme.SizeNameCaptionText)
	e.error.Hide()
	buttons := container.New(&view.Flow{Gap: 4},
		e.frame, e.pick,
		view.NewChip(w.hints, "Standard", "the standard path of this lattice", func() { w.do(session.SetPath{}) }),
		view.NewChip(w.hints, "Reverse", "walk the path the other way", func() {
			if w.sn.Built != nil {
				w.setPath(present.Reversed(w.sn.Built.Path))
			}
		}),
	)
	e.box = container.NewPadded(container.NewVBox(e.text, e.error, buttons))
	return e
}

// show brings the entry up to date, unless its user is typing.
func (e *pathEditor) show() {
	sn := e.w.sn
	e.frame.Put(e.frame.Options, present.FrameName(sn.Doc.View.Frame))
	e.pick.SetOn(e.w.picking)
	if sn.Built == nil {
		return
	}
	text := strings.Join(sn.Built.Path.Text(sn.Doc.View.Frame, sn.Built.Crystal.Setting), " | ")
	if text != e.shown {
		e.shown = text
		e.text.SetText(text)
		e.complain(nil)
	}
}

// complain shows what is wrong with the typed path, below it.
func (e *pathEditor) complain(err error) {
	if err == nil {
		if e.error.Visible() {
			e.error.Hide()
			e.box.Refresh()
		}
		return
	}
	e.error.Text = err.Error()
	e.error.Color = theme.Color(theme.ColorNameError)
	e.error.Show()
	e.box.Refresh()
	e.w.fail(err)
}

func (e *pathEditor) submit(text string) {
	var legs []string
	for _, leg := range strings.Split(text, "|") {
		if leg = strings.TrimSpace(leg); leg != "" {
			legs = append(legs, leg)
		}
	}
	err := e.w.session.Do(session.SetPath{Legs: legs, Frame: e.w.sn.Doc.View.Frame})
	e.complain(err)
	if err == nil {
		e.w.quiet()
	}
}

// setPath makes a path the study's.
func (w *Window) setPath(p path.Path) {
	if w.sn.Built == nil {
		return
	}
	frame := w.sn.Doc.View.Frame
	w.do(session.SetPath{Legs: p.Text(frame, w.sn.Built.Crystal.Setting), Frame: frame})
}

func (w *Window) setFrame(f lattice.Frame) {
	if f == w.sn.Doc.View.Frame {
		return
	}
	w.prefs.setFrame(f)
	w.do(session.SetView{Change: func(v doc.View) doc.View { v.Frame = f; return v }})
}

func (w *Window) togglePicking() {
	w.picking = !w.picking
	w.editor.show()
	if w.picking {
		w.say("Each click in the Zone adds a point to the path. Escape ends it.")
	} else {
		w.quiet()
	}
}

func (w *Window) pathHandler() view.Handler {
	target := func(p view.Pointer) (present.Target, bool) {
		t := present.TargetOf(p.ID)
		ok := w.sn.Built != nil && t.I < len(w.sn.Built.Path.Runs) && t.J < len(w.sn.Built.Path.Runs[t.I])
		return t, ok
	}
	return view.Handler{
		Hover: func(p view.Pointer) {
			g := present.Glance{}
			if t, ok := target(p); ok && t.Kind >= present.PathPoint {
				point := w.sn.Built.Path.Runs[t.I][t.J]
				g = present.Glance{On: true, K: point.K, Note: point.Label}
				if b := w.sn.Bands; b != nil && b.Sampling != nil {
					g.X, _, g.OnPath = b.Sampling.Nearest(w.sn.Built.Crystal.Lattice(), point.K, 1e-6)
				}
			}
			if g != w.v.Glance {
				w.v.Glance = g
				w.drawZone()
				w.drawBands()
			}
		},
		Leave: w.leave,
		Press: func(p view.Pointer) {
			w.v.Drag = present.DragRow{}
			if t, ok := target(p); ok && t.Kind == present.PathPoint {
				w.v.Drag = present.DragRow{Run: t.I, I: t.J}
				w.dragging = true
			}
		},
		Click: func(p view.Pointer) {
			w.dragging = false
			t, ok := target(p)
			if !ok {
				return
			}
			built := w.sn.Built
			switch t.Kind {
			case present.PathPoint:
				w.do(session.Hold{K: built.Path.Runs[t.I][t.J].K, Level: session.NearestEnergy})
			case present.Remove:
				w.setPath(present.Without(built.Path, t.I, t.J))
			case present.BreakAfter:
				w.setPath(present.WithBreak(built.Path, t.I, t.J))
			}
		},
		Drag: func(p view.Pointer, _, dy float64) {
			if !w.dragging || w.sn.Built == nil {
				w.scrollPath(-dy)
				return
			}
			w.v.Drag.On = true
			w.v.Drag.ToRun, w.v.Drag.J = present.PathSlot(w.sn.Built.Path, p.Y+w.v.Down)
			w.drawPath()
		},
		Drop: func(view.Pointer) {
			d := w.v.Drag
			w.v.Drag, w.dragging = present.DragRow{}, false
			if d.On && w.sn.Built != nil {
				w.setPath(present.Moved(w.sn.Built.Path, d.Run, d.I, d.ToRun, d.J))
			}
			w.drawPath()
		},
		Wheel: func(_ view.Pointer, steps float64) { w.scrollPath(-32 * steps) },
		Key:   w.key, Rune: w.rune,
	}
}

func (w *Window) scrollPath(d float64) {
	if w.sn.Built == nil {
		return
	}
	_, height := plotSize(w.path)
	w.v.Down = max(0, min(w.v.Down+d, present.PathHeight(w.sn.Built.Path)-height))
	w.drawPath()
}
