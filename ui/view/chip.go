package view

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// Chip is a small flat button of one line of text: a fact to click, or a way
// to look. Without an action it is a label.
type Chip struct {
	widget.BaseWidget
	hints   *Hints
	text    string
	hint    string
	tapped  func()
	on      bool
	hovered bool
	focused bool
	back    *canvas.Rectangle
	label   *canvas.Text
}

// NewChip returns a chip; tapped may be nil.
func NewChip(h *Hints, text, hint string, tapped func()) *Chip {
	c := &Chip{hints: h, text: text, hint: hint, tapped: tapped, back: canvas.NewRectangle(color.Transparent), label: canvas.NewText(text, color.Black)}
	c.back.CornerRadius = 4
	c.ExtendBaseWidget(c)
	return c
}

// Put changes text, hint and action.
func (c *Chip) Put(text, hint string, tapped func()) {
	changed := c.text != text || (c.tapped == nil) != (tapped == nil)
	c.text, c.hint, c.tapped = text, hint, tapped
	if changed {
		c.Refresh()
	}
}

// SetOn marks the chip as the one in force.
func (c *Chip) SetOn(on bool) {
	if c.on != on {
		c.on = on
		c.Refresh()
	}
}

// Text is what the chip says.
func (c *Chip) Text() string { return c.text }

func (c *Chip) dress() {
	c.label.Text = c.text
	c.label.TextSize = theme.Size(theme.SizeNameText) - 0.5
	c.label.Color = theme.Color(theme.ColorNameForeground)
	c.back.FillColor = color.Transparent
	c.back.StrokeWidth = 0
	if c.tapped == nil {
		c.label.Color = theme.Color(theme.ColorNamePlaceHolder)
		return
	}
	c.back.StrokeWidth = 1
	c.back.StrokeColor = theme.Color(theme.ColorNameSeparator)
	c.back.FillColor = theme.Color(theme.ColorNameButton)
	switch {
	case c.hovered:
		c.back.FillColor = theme.Color(theme.ColorNameHover)
	case c.on:
		c.back.FillColor = theme.Color(theme.ColorNameSelection)
	}
	if c.focused {
		c.back.StrokeColor = theme.Color(theme.ColorNamePrimary)
	}
}

// CreateRenderer implements fyne.Widget.
func (c *Chip) CreateRenderer() fyne.WidgetRenderer {
	c.dress()
	return &chipRenderer{c}
}

type chipRenderer struct{ c *Chip }

const (
	chipSide = 6
	chipTop  = 4
)

func (r *chipRenderer) Destroy() {}
func (r *chipRenderer) Layout(s fyne.Size) {
	r.c.back.Resize(s)
	m := r.c.label.MinSize()
	r.c.label.Resize(m)
	r.c.label.Move(fyne.NewPos((s.Width-m.Width)/2, (s.Height-m.Height)/2))
}
func (r *chipRenderer) MinSize() fyne.Size {
	r.c.dress()
	return r.c.label.MinSize().AddWidthHeight(2*chipSide, 2*chipTop)
}
func (r *chipRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.c.back, r.c.label}
}
func (r *chipRenderer) Refresh() {
	r.c.dress()
	r.Layout(r.c.Size())
	r.c.back.Refresh()
	r.c.label.Refresh()
}

// Tapped implements fyne.Tappable.
func (c *Chip) Tapped(*fyne.PointEvent) {
	c.hints.hide()
	if c.tapped != nil {
		c.tapped()
	}
}

// MouseIn implements desktop.Hoverable.
func (c *Chip) MouseIn(*desktop.MouseEvent) {
	c.hovered = true
	c.Refresh()
	c.hints.show(c, c.hint)
}

// MouseMoved implements desktop.Hoverable.
func (c *Chip) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (c *Chip) MouseOut() {
	c.hovered = false
	c.Refresh()
	c.hints.hide()
}

// FocusGained implements fyne.Focusable.
func (c *Chip) FocusGained() { c.focused = true; c.Refresh() }

// FocusLost implements fyne.Focusable.
func (c *Chip) FocusLost() { c.focused = false; c.Refresh() }

// TypedRune implements fyne.Focusable.
func (c *Chip) TypedRune(rune) {}

// TypedKey implements fyne.Focusable.
func (c *Chip) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeySpace, fyne.KeyReturn, fyne.KeyEnter:
		c.Tapped(nil)
	}
}
