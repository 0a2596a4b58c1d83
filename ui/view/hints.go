package view

import (
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// hintDelay is how long the pointer rests before a hint appears.
const hintDelay = 600 * time.Millisecond

// Hints is a layer over the window that shows what the control under the
// pointer does. Nothing in it takes part in the window's events.
type Hints struct {
	Layer *fyne.Container
	back  *canvas.Rectangle
	text  *canvas.Text
	timer *time.Timer
	turn  int // tells a hint that came too late
}

// NewHints returns an empty layer.
func NewHints() *Hints {
	h := &Hints{back: canvas.NewRectangle(nil), text: canvas.NewText("", nil)}
	h.back.CornerRadius = 4
	h.back.StrokeWidth = 1
	h.Layer = container.NewWithoutLayout(h.back, h.text)
	h.back.Hide()
	h.text.Hide()
	return h
}

// show shows a text below an object after a while.
func (h *Hints) show(o fyne.CanvasObject, text string) {
	if h == nil || text == "" {
		return
	}
	h.hide()
	turn := h.turn
	h.timer = time.AfterFunc(hintDelay, func() {
		Post(func() {
			if turn == h.turn {
				h.place(o, text)
			}
		})
	})
}

func (h *Hints) place(o fyne.CanvasObject, text string) {
	h.text.Text = text
	h.text.TextSize = theme.Size(theme.SizeNameCaptionText)
	h.text.Color = theme.Color(theme.ColorNameForeground)
	h.back.FillColor = theme.Color(theme.ColorNameOverlayBackground)
	h.back.StrokeColor = theme.Color(theme.ColorNameSeparator)
	size := h.text.MinSize().Add(fyne.NewSize(14, 8))
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(o).Subtract(fyne.CurrentApp().Driver().AbsolutePositionForObject(h.Layer))
	at.Y += o.Size().Height + 4
	whole := h.Layer.Size()
	if at.Y+size.Height > whole.Height {
		at.Y -= o.Size().Height + size.Height + 8
	}
	at.X = max(2, min(at.X, whole.Width-size.Width-2))
	h.back.Resize(size)
	h.back.Move(at)
	h.text.Resize(h.text.MinSize())
	h.text.Move(at.AddXY(7, 4))
	h.back.Show()
	h.text.Show()
	h.Layer.Refresh()
}

// hide takes the hint away.
func (h *Hints) hide() {
	if h == nil {
		return
	}
	h.turn++
	if h.timer != nil {
		h.timer.Stop()
	}
	if h.back.Visible() {
		h.back.Hide()
		h.text.Hide()
		h.Layer.Refresh()
	}
}

// Check is a check box with a hint.
type Check struct {
	widget.Check
	hints *Hints
	hint  string
}

// NewCheck returns a check box.
func NewCheck(h *Hints, label, hint string, changed func(bool)) *Check {
	c := &Check{hints: h, hint: hint}
	c.Text = label
	c.OnChanged = changed
	c.ExtendBaseWidget(c)
	return c
}

// SetHint replaces the hint.
func (c *Check) SetHint(hint string) { c.hint = hint }

// Put sets the mark without telling the owner.
func (c *Check) Put(on bool) {
	if c.Checked != on {
		c.Checked = on
		c.Refresh()
	}
}

// MouseIn implements desktop.Hoverable.
func (c *Check) MouseIn(e *desktop.MouseEvent) {
	c.Check.MouseIn(e)
	c.hints.show(c, c.hint)
}

// MouseOut implements desktop.Hoverable.
func (c *Check) MouseOut() {
	c.Check.MouseOut()
	c.hints.hide()
}

// Select is a choice with a hint.
type Select struct {
	widget.Select
	hints *Hints
	hint  string
}

// NewSelect returns a choice.
func NewSelect(h *Hints, hint string, options []string, changed func(string)) *Select {
	s := &Select{hints: h, hint: hint}
	s.Options = options
	s.OnChanged = changed
	s.ExtendBaseWidget(s)
	return s
}

// Put sets options and choice without telling the owner.
func (s *Select) Put(options []string, selected string) {
	same := s.Selected == selected && len(options) == len(s.Options)
	for i := range options {
		same = same && options[i] == s.Options[i]
	}
	if same {
		return
	}
	s.Options, s.Selected = options, selected
	s.Refresh()
}

// MouseIn implements desktop.Hoverable.
func (s *Select) MouseIn(e *desktop.MouseEvent) {
	s.Select.MouseIn(e)
	s.hints.show(s, s.hint)
}

// MouseOut implements desktop.Hoverable.
func (s *Select) MouseOut() {
	s.Select.MouseOut()
	s.hints.hide()
}

// Tapped implements fyne.Tappable.
func (s *Select) Tapped(e *fyne.PointEvent) {
	s.hints.hide()
	s.Select.Tapped(e)
}

// Slider is a slider with a hint that tells a drag from its end.
type Slider struct {
	widget.Slider
	hints   *Hints
	hint    string
	putting bool
}

// NewSlider returns a slider. moved is called while the value changes, ended
// when the hand lets go.
func NewSlider(h *Hints, hint string, lo, hi, step float64, moved, ended func(float64)) *Slider {
	s := &Slider{hints: h, hint: hint}
	s.Min, s.Max, s.Step = lo, hi, step
	s.Orientation = widget.Horizontal
	s.OnChanged = func(v float64) {
		if !s.putting && moved != nil {
			moved(v)
		}
	}
	s.OnChangeEnded = func(v float64) {
		if !s.putting && ended != nil {
			ended(v)
		}
	}
	s.ExtendBaseWidget(s)
	return s
}

// Put sets range and value without telling the owner.
func (s *Slider) Put(lo, hi, value float64) {
	if s.Min == lo && s.Max == hi && s.Value == value {
		return
	}
	s.putting = true
	s.Min, s.Max = lo, hi
	s.Value = max(lo, min(hi, value))
	s.Refresh()
	s.putting = false
}

// MouseIn implements desktop.Hoverable.
func (s *Slider) MouseIn(e *desktop.MouseEvent) {
	s.Slider.MouseIn(e)
	s.hints.show(s, s.hint)
}

// MouseOut implements desktop.Hoverable.
func (s *Slider) MouseOut() {
	s.Slider.MouseOut()
	s.hints.hide()
}
