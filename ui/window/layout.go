package window

import (
	"math"

	"fyne.io/fyne/v2"
)

// desk lays out the window: header above, limits below, and between them the
// panels. In a wide window Zone, Bands, DOS and Ladder stand in one row, with
// path and Ledger below; in a narrow one the three panels of the energy axis
// come first and Zone and Ledger (or path) below. Bands, DOS and Ladder always
// have the same top and height, as they share one axis.
type desk struct {
	header, foot               fyne.CanvasObject
	zone, bands, dos, ladder   fyne.CanvasObject
	path, ledger               fyne.CanvasObject
	rowGrip, zoneGrip, pathGap *grip

	split     float32 // share of the height that the upper row takes
	zoneShare float32 // of the width, wide window
	pathShare float32 // of the width, wide window
	showPath  bool    // narrow window: path instead of Ledger
	changed   func(narrow bool)
	origin    func() float32 // where the desk begins in the window, from the top
	narrow    bool
	size      fyne.Size
}

const (
	gap         = 6
	narrowBelow = 1080
)

// Layout implements fyne.Layout.
func (d *desk) Layout(_ []fyne.CanvasObject, size fyne.Size) {
	d.size = size
	narrow := size.Width < narrowBelow
	if narrow != d.narrow {
		d.narrow = narrow
		if d.changed != nil {
			d.changed(narrow)
		}
	}
	// Pictures must lie on whole pixels, or the toolkit leaves out rows of
	// them. The desk itself begins below a menu bar of any height.
	off := float32(0)
	if d.origin != nil {
		y := d.origin()
		off = float32(math.Ceil(float64(y))) - y
	}
	whole := func(v float32) float32 { return float32(math.Round(float64(v))) }
	place := func(o fyne.CanvasObject, x, y, w, h float32) {
		x0, y0 := whole(x), whole(y)
		o.Resize(fyne.NewSize(max(1, whole(x+w)-x0), max(1, whole(y+h)-y0)))
		o.Move(fyne.NewPos(x0, y0+off))
	}
	width := size.Width - 2*gap
	place(d.header, gap, gap, width, d.header.MinSize().Height)
	// The header learns its rows from its width.
	head := d.header.MinSize().Height
	place(d.header, gap, gap, width, head)
	foot := d.foot.MinSize().Height
	place(d.foot, gap, size.Height-foot-4, width, foot)
	top := head + 2*gap
	room := size.Height - foot - 6 - top
	upper := (room - gap) * d.split
	lower := room - gap - upper
	bottom := top + upper + gap

	if !narrow {
		zone := width * d.zoneShare
		rest := width - zone - 3*gap
		bands, dos := rest*0.46, rest*0.145
		ladder := rest - bands - dos
		x := float32(gap)
		place(d.zone, x, top, zone, upper)
		place(d.zoneGrip, x+zone, top, gap, upper)
		x += zone + gap
		place(d.bands, x, top, bands, upper)
		x += bands + gap
		place(d.dos, x, top, dos, upper)
		x += dos + gap
		place(d.ladder, x, top, ladder, upper)
		path := width * d.pathShare
		place(d.path, gap, bottom, path, lower)
		place(d.pathGap, gap+path, bottom, gap, lower)
		place(d.ledger, gap+path+gap, bottom, width-path-gap, lower)
		d.path.Show()
		d.ledger.Show()
	} else {
		rest := width - 2*gap
		bands, dos := rest*0.46, rest*0.15
		ladder := rest - bands - dos
		x := float32(gap)
		place(d.bands, x, top, bands, upper)
		x += bands + gap
		place(d.dos, x, top, dos, upper)
		x += dos + gap
		place(d.ladder, x, top, ladder, upper)
		zone := width * 0.38
		place(d.zone, gap, bottom, zone, lower)
		place(d.zoneGrip, gap+zone, bottom, gap, lower)
		right, other := d.ledger, d.path
		if d.showPath {
			right, other = d.path, d.ledger
		}
		other.Hide()
		right.Show()
		place(right, gap+zone+gap, bottom, width-zone-gap, lower)
		place(d.pathGap, 0, 0, 0, 0)
	}
	place(d.rowGrip, gap, top+upper, width, gap)
}

// MinSize implements fyne.Layout.
func (d *desk) MinSize([]fyne.CanvasObject) fyne.Size {
	return fyne.NewSize(640, 480)
}

// stacked puts a strip of controls below a panel, without a gap.
type stacked struct{}

// Layout implements fyne.Layout.
func (stacked) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	panel, strip := objects[0], objects[1]
	strip.Resize(fyne.NewSize(size.Width, strip.MinSize().Height))
	low := float32(math.Ceil(float64(strip.MinSize().Height))) // rows may depend on the width
	strip.Resize(fyne.NewSize(size.Width, low))
	strip.Move(fyne.NewPos(0, size.Height-low))
	panel.Resize(fyne.NewSize(size.Width, max(1, size.Height-low)))
	panel.Move(fyne.NewPos(0, 0))
}

// MinSize implements fyne.Layout.
func (stacked) MinSize(objects []fyne.CanvasObject) fyne.Size {
	a, b := objects[0].MinSize(), objects[1].MinSize()
	return fyne.NewSize(max(a.Width, b.Width), a.Height+b.Height)
}
