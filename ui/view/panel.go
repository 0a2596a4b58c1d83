package view

import (
	"image"
	"sync"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"

	"bandwright/render/picture"
	"bandwright/render/raster"
)

// Draw makes the picture of a panel of the given size. It runs outside the UI
// goroutine and must only read what it was given.
type Draw func(width, height float64) *picture.Picture

// Pointer is where the pointer is over a panel and what lies under it.
type Pointer struct {
	X, Y   float64    // points, y down
	ID     picture.ID // topmost item within reach; 0 is none
	Shift  bool
	Ctrl   bool
	Double bool // the second click of a pair; the first was reported before
}

// Handler is what a panel tells its owner. Each function may be nil. All run
// on the UI goroutine.
type Handler struct {
	Hover func(Pointer) // the pointer moved over the panel with no button held
	Leave func()
	Press func(Pointer) // a button went down; what it starts is known later
	Click func(Pointer) // released where it was pressed
	Menu  func(Pointer) // right button
	Drag  func(p Pointer, dx, dy float64)
	// Drop ends a drag.
	Drop  func(Pointer)
	Wheel func(p Pointer, steps float64) // positive is away from the user
	Key   func(*fyne.KeyEvent)
	Rune  func(rune)
}

// Reach is how far from a drawn thing the pointer may be to mean it, points.
const Reach = 6

// slack is how far a press may move and still be a click, points.
const slack = 4

const doubleClick = 350 * time.Millisecond

// Panel shows a picture, redrawn in the background whenever its content or
// its size changes, and reports what the pointer does. Until the first image
// is ready it is blank.
type Panel struct {
	widget.BaseWidget
	handler Handler
	minimum fyne.Size
	drawn   func()
	cursor  desktop.Cursor
	nearest bool

	raster *canvas.Raster
	ring   [4]*canvas.Rectangle // top, bottom, left, right: a hollow one would be painted whole

	mu       sync.Mutex
	draw     Draw
	wanted   request
	busy     bool
	waiting  bool
	shown    *image.RGBA
	picture  *picture.Picture
	drawings int

	pressed  bool
	moved    bool
	pressAt  fyne.Position
	lastAt   fyne.Position
	modifier fyne.KeyModifier
	lastUp   time.Time
	upAt     fyne.Position
	focused  bool
}

type request struct {
	width, height float64 // points
	pixelW        int
	pixelH        int
}

// NewPanel returns an empty panel of at least the given size.
func NewPanel(minimum fyne.Size, h Handler) *Panel {
	p := &Panel{handler: h, minimum: minimum, cursor: desktop.DefaultCursor}
	p.raster = canvas.NewRaster(p.image)
	p.raster.ScaleMode = canvas.ImageScalePixels
	for i := range p.ring {
		p.ring[i] = canvas.NewRectangle(nil)
		p.ring[i].Hide()
	}
	p.ExtendBaseWidget(p)
	return p
}

// PickNearest makes the panel report the nearest item within Reach instead of
// the topmost one: right for crowded lines.
func (p *Panel) PickNearest() { p.nearest = true }

// OnDrawn has f called on the UI goroutine after each finished image is handed
// to the screen.
func (p *Panel) OnDrawn(f func()) { p.drawn = f }

// SetCursor sets the shape of the pointer over the panel.
func (p *Panel) SetCursor(c desktop.Cursor) { p.cursor = c }

// SetDraw replaces the content. The panel shows the old image until the new
// one is finished.
func (p *Panel) SetDraw(d Draw) {
	p.mu.Lock()
	p.draw = d
	p.mu.Unlock()
	p.redraw()
}

// Picture returns the picture on screen, or nil. It must not be changed.
func (p *Panel) Picture() *picture.Picture {
	p.mu.Lock()
	defer p.mu.Unlock()
	return p.picture
}

// Drawings counts the finished images, for tests.
func (p *Panel) Drawings() int {
	p.mu.Lock()
	defer p.mu.Unlock()
	return p.drawings
}

// Busy says whether a drawing is under way.
func (p *Panel) Busy() bool {
	p.mu.Lock()
	defer p.mu.Unlock()
	return p.busy
}

// image hands the finished image to Fyne. When its size is not the wanted one
// a new drawing starts, and Fyne stretches the old image for that moment.
func (p *Panel) image(w, h int) image.Image {
	size := p.Size()
	p.mu.Lock()
	defer p.mu.Unlock()
	want := request{float64(size.Width), float64(size.Height), w, h}
	if want != p.wanted && w > 0 && h > 0 {
		p.wanted = want
		p.start()
	}
	if p.shown == nil {
		return image.NewRGBA(image.Rect(0, 0, 1, 1))
	}
	return p.shown
}

func (p *Panel) redraw() {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.wanted.pixelW > 0 {
		p.start()
	}
}

// start runs a drawing, or notes that another one is due after the one that
// runs. The caller holds mu.
func (p *Panel) start() {
	if p.draw == nil {
		return
	}
	if p.busy {
		p.waiting = true
		return
	}
	p.busy = true
	go p.work()
}

// work draws until nothing waits. It never holds mu while drawing.
func (p *Panel) work() {
	for {
		p.mu.Lock()
		draw, want := p.draw, p.wanted
		p.waiting = false
		p.mu.Unlock()

		pic := draw(want.width, want.height)
		// A fresh image each time: Fyne may still be reading the last one.
		img := image.NewRGBA(image.Rect(0, 0, want.pixelW, want.pixelH))
		if pic != nil {
			raster.Draw(img, pic, float64(want.pixelW)/want.width)
		}

		p.mu.Lock()
		p.shown, p.picture = img, pic
		p.drawings++
		again := p.waiting
		if !again {
			p.busy = false
		}
		p.mu.Unlock()
		Post(func() {
			p.raster.Refresh()
			if p.drawn != nil {
				p.drawn()
			}
		})
		if !again {
			return
		}
	}
}

func (p *Panel) pointer(at fyne.Position, m fyne.KeyModifier) Pointer {
	q := Pointer{X: float64(at.X), Y: float64(at.Y), Shift: m&fyne.KeyModifierShift != 0, Ctrl: m&fyne.KeyModifierControl != 0}
	if pic := p.Picture(); pic != nil {
		if p.nearest {
			q.ID, _ = pic.HitNearest(q.X, q.Y, Reach)
		} else {
			q.ID, _ = pic.HitTest(q.X, q.Y, Reach)
		}
	}
	return q
}

// MouseIn implements desktop.Hoverable.
func (p *Panel) MouseIn(e *desktop.MouseEvent) { p.MouseMoved(e) }

// MouseMoved implements desktop.Hoverable.
func (p *Panel) MouseMoved(e *desktop.MouseEvent) {
	if !p.pressed && p.handler.Hover != nil {
		p.handler.Hover(p.pointer(e.Position, e.Modifier))
	}
}

// MouseOut implements desktop.Hoverable.
func (p *Panel) MouseOut() {
	if p.handler.Leave != nil {
		p.handler.Leave()
	}
}

// MouseDown implements desktop.Mouseable.
func (p *Panel) MouseDown(e *desktop.MouseEvent) {
	if c := fyne.CurrentApp().Driver().CanvasForObject(p); c != nil {
		c.Focus(p)
	}
	if e.Button == desktop.MouseButtonSecondary {
		if p.handler.Menu != nil {
			p.handler.Menu(p.pointer(e.Position, e.Modifier))
		}
		return
	}
	p.pressed, p.moved = true, false
	p.pressAt, p.lastAt, p.modifier = e.Position, e.Position, e.Modifier
	if p.handler.Press != nil {
		p.handler.Press(p.pointer(e.Position, e.Modifier))
	}
}

// MouseUp implements desktop.Mouseable. Clicks are told apart here, because
// Fyne holds a tap back for a possible second one.
func (p *Panel) MouseUp(e *desktop.MouseEvent) {
	if e.Button == desktop.MouseButtonSecondary || !p.pressed {
		return
	}
	p.pressed = false
	if p.moved {
		return
	}
	q := p.pointer(e.Position, e.Modifier)
	now := time.Now()
	if now.Sub(p.lastUp) < doubleClick && near(p.upAt, e.Position) {
		q.Double = true
		p.lastUp = time.Time{}
	} else {
		p.lastUp, p.upAt = now, e.Position
	}
	if p.handler.Click != nil {
		p.handler.Click(q)
	}
}

func near(a, b fyne.Position) bool {
	dx, dy := a.X-b.X, a.Y-b.Y
	return dx*dx+dy*dy <= slack*slack
}

// Dragged implements fyne.Draggable.
func (p *Panel) Dragged(e *fyne.DragEvent) {
	if !p.pressed {
		return
	}
	if !p.moved {
		if near(p.pressAt, e.Position) {
			return
		}
		p.moved = true
	}
	dx, dy := float64(e.Position.X-p.lastAt.X), float64(e.Position.Y-p.lastAt.Y)
	p.lastAt = e.Position
	if p.handler.Drag != nil {
		p.handler.Drag(p.pointer(e.Position, p.modifier), dx, dy)
	}
}

// DragEnd implements fyne.Draggable.
func (p *Panel) DragEnd() {
	p.pressed = false
	if p.moved && p.handler.Drop != nil {
		p.handler.Drop(p.pointer(p.lastAt, p.modifier))
	}
}

// wheelStep is what Fyne reports for one notch of a wheel.
const wheelStep = 10

// Scrolled implements fyne.Scrollable.
func (p *Panel) Scrolled(e *fyne.ScrollEvent) {
	if p.handler.Wheel != nil && e.Scrolled.DY != 0 {
		var held fyne.KeyModifier
		if d, ok := fyne.CurrentApp().Driver().(desktop.Driver); ok {
			held = d.CurrentKeyModifiers()
		}
		p.handler.Wheel(p.pointer(e.Position, held), float64(e.Scrolled.DY)/wheelStep)
	}
}

// Cursor implements desktop.Cursorable.
func (p *Panel) Cursor() desktop.Cursor { return p.cursor }

// FocusGained implements fyne.Focusable.
func (p *Panel) FocusGained() { p.focused = true; p.showRing() }

// FocusLost implements fyne.Focusable.
func (p *Panel) FocusLost() { p.focused = false; p.showRing() }

func (p *Panel) showRing() {
	for _, r := range p.ring {
		if p.focused {
			r.FillColor = ringColour()
			r.Show()
		} else {
			r.Hide()
		}
		r.Refresh()
	}
}

// TypedKey implements fyne.Focusable.
func (p *Panel) TypedKey(e *fyne.KeyEvent) {
	if p.handler.Key != nil {
		p.handler.Key(e)
	}
}

// TypedRune implements fyne.Focusable.
func (p *Panel) TypedRune(r rune) {
	if p.handler.Rune != nil {
		p.handler.Rune(r)
	}
}

// MinSize implements fyne.Widget.
func (p *Panel) MinSize() fyne.Size {
	p.ExtendBaseWidget(p)
	return p.minimum
}

// CreateRenderer implements fyne.Widget.
func (p *Panel) CreateRenderer() fyne.WidgetRenderer {
	return &panelRenderer{p, []fyne.CanvasObject{p.raster, p.ring[0], p.ring[1], p.ring[2], p.ring[3]}}
}

type panelRenderer struct {
	p       *Panel
	objects []fyne.CanvasObject
}

func (r *panelRenderer) Destroy()                     {}
func (r *panelRenderer) MinSize() fyne.Size           { return r.p.minimum }
func (r *panelRenderer) Objects() []fyne.CanvasObject { return r.objects }
func (r *panelRenderer) Refresh()                     { r.p.redraw() }
func (r *panelRenderer) Layout(s fyne.Size) {
	r.p.raster.Resize(s)
	const wide = 2
	for i, at := range []struct{ x, y, w, h float32 }{
		{0, 0, s.Width, wide}, {0, s.Height - wide, s.Width, wide}, {0, 0, wide, s.Height}, {s.Width - wide, 0, wide, s.Height},
	} {
		r.p.ring[i].Resize(fyne.NewSize(at.w, at.h))
		r.p.ring[i].Move(fyne.NewPos(at.x, at.y))
	}
}
