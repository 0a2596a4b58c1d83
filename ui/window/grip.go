package window

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// grip is the gap between panels: dragging it moves their border.
type grip struct {
	widget.BaseWidget
	upright bool // a vertical gap, moved sideways
	moved   func(d float32)
	line    *canvas.Rectangle
}

func newGrip(upright bool, moved func(d float32)) *grip {
	g := &grip{upright: upright, moved: moved, line: canvas.NewRectangle(color.Transparent)}
	g.ExtendBaseWidget(g)
	return g
}

// CreateRenderer implements fyne.Widget.
func (g *grip) CreateRenderer() fyne.WidgetRenderer { return widget.NewSimpleRenderer(g.line) }

// MinSize implements fyne.Widget.
func (g *grip) MinSize() fyne.Size { return fyne.NewSize(1, 1) }

// Cursor implements desktop.Cursorable.
func (g *grip) Cursor() desktop.Cursor {
	if g.upright {
		return desktop.HResizeCursor
	}
	return desktop.VResizeCursor
}

// MouseIn implements desktop.Hoverable.
func (g *grip) MouseIn(*desktop.MouseEvent) {
	g.line.FillColor = theme.Color(theme.ColorNameFocus)
	g.line.Refresh()
}

// MouseMoved implements desktop.Hoverable.
func (g *grip) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (g *grip) MouseOut() {
	g.line.FillColor = color.Transparent
	g.line.Refresh()
}

// Dragged implements fyne.Draggable.
func (g *grip) Dragged(e *fyne.DragEvent) {
	if g.upright {
		g.moved(e.Dragged.DX)
	} else {
		g.moved(e.Dragged.DY)
	}
}

// DragEnd implements fyne.Draggable.
func (g *grip) DragEnd() {}
