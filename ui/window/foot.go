package window

import (
	"strings"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/widget"

	"bandwright/render/picture"
	"bandwright/ui/present"
	"bandwright/ui/view"
)

// foot is the strip below the panels: the limits of the model, what is being
// computed, and what just happened.
type foot struct {
	w     *Window
	box   *fyne.Container
	panel *view.Panel
	stop  *view.Chip
	timer *time.Timer
}

// patience is how long a computation runs before its progress is shown.
const patience = 300 * time.Millisecond

func newFoot(w *Window) *foot {
	f := &foot{w: w}
	f.panel = view.NewPanel(fyne.NewSize(200, 42), view.Handler{
		Click: func(view.Pointer) { w.showLimits() },
		Key:   w.key, Rune: w.rune,
	})
	f.stop = view.NewChip(w.hints, "Stop", "stop what is being computed (Escape)", w.stopOrResume)
	f.stop.Hide()
	f.box = container.NewBorder(nil, nil, nil, container.NewCenter(f.stop), f.panel)
	return f
}

// show brings the strip up to date.
func (f *foot) show() {
	sn, v := f.w.sn, f.w.v
	now := time.Now()
	waiting := false
	s := present.Status{Notice: f.w.notice, Bad: f.w.noticeBad}
	for _, p := range sn.Progress {
		if now.Sub(p.Since) >= patience {
			s.Running = append(s.Running, p)
		} else {
			waiting = true
		}
	}
	if waiting {
		if f.timer != nil {
			f.timer.Stop()
		}
		f.timer = time.AfterFunc(patience, func() { view.Post(f.show) })
	}
	label := "Stop"
	if sn.Stopped {
		label = "Go on"
	}
	f.stop.Put(label, "stop what is being computed, or go on (Escape)", f.w.stopOrResume)
	if on := len(s.Running) > 0 || sn.Stopped; on != f.stop.Visible() {
		if on {
			f.stop.Show()
		} else {
			f.stop.Hide()
		}
		f.box.Refresh()
	}
	f.panel.SetDraw(func(width, height float64) *picture.Picture { return present.Foot(sn, &v, s, width, height) })
}

func (w *Window) stopOrResume() {
	if w.sn.Stopped {
		w.session.Resume()
		return
	}
	w.session.Stop()
	w.say("Stopped: what was not finished is marked; Go on takes it up again.")
}

// showLimits shows source, fit and limits of the model in full.
func (w *Window) showLimits() {
	var b strings.Builder
	b.WriteString(present.About(w.sn) + ".\n\n")
	for _, l := range present.Limits(w.sn) {
		b.WriteString("• " + l + "\n\n")
	}
	if w.sn.Built != nil && w.sn.Built.Set != nil {
		for _, n := range w.sn.Built.Set.Notes {
			b.WriteString("• " + n + "\n\n")
		}
	}
	text := widget.NewLabel(b.String())
	text.Wrapping = fyne.TextWrapWord
	w.show(dialog.NewCustom("Sources and limits of this model", "Close", container.NewVScroll(text), w.win), 640, 460)
}

// show shows a dialog of a wished size; Escape closes it.
func (w *Window) show(d *dialog.CustomDialog, width, height float32) {
	w.dialog = d
	d.SetOnClosed(func() {
		if w.dialog == d {
			w.dialog = nil
		}
	})
	d.Resize(w.dialogSize(width, height))
	d.Show()
}

// line is a field of a dialog: Escape closes the dialog from it.
type line struct {
	widget.Entry
	w *Window
}

func (w *Window) newLine(text string) *line {
	e := &line{w: w}
	e.ExtendBaseWidget(e)
	e.SetText(text)
	return e
}

// TypedKey implements fyne.Focusable.
func (e *line) TypedKey(k *fyne.KeyEvent) {
	if k.Name == fyne.KeyEscape {
		e.w.escape()
		return
	}
	e.Entry.TypedKey(k)
}

// dialogSize is a wished size, bounded by the window.
func (w *Window) dialogSize(width, height float32) fyne.Size {
	s := w.win.Canvas().Size()
	return fyne.NewSize(min(width, s.Width*0.92), min(height, s.Height*0.9))
}
