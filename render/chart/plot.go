package chart

import (
	"math"

	"bandwright/render/picture"
	"bandwright/render/typeset"
)

// Plot is a rectangle of a picture with a scale along each side.
type Plot struct {
	Rect picture.Rect
	X, Y Scale
}

// AxisStyle says how axes are drawn.
type AxisStyle struct {
	Ink   picture.Color // labels and title
	Line  picture.Color // frame and ticks
	Grid  picture.Color // lines across the plot; transparent for none
	Size  float64       // of labels
	Title float64       // size of the title
	Gap   float64       // between frame and labels; 0 means 5
}

const (
	majorTick = 5.0
	minorTick = 3.0
	hairline  = 1.0
)

func (s AxisStyle) gap() float64 {
	if s.Gap > 0 {
		return s.Gap
	}
	return 5
}

// Frame draws the border of the plot.
func (pl Plot) Frame(p *picture.Picture, s AxisStyle) {
	p.StrokeRect(pl.Rect, picture.Stroke{Color: s.Line, Width: hairline, Crisp: true})
}

// YAxis draws ticks on the left side, inwards, with labels and a title that
// reads upwards. Labels that would touch are left out.
func (pl Plot) YAxis(p *picture.Picture, ticks []Tick, title string, s AxisStyle) {
	stroke := picture.Stroke{Color: s.Line, Width: hairline, Crisp: true}
	widest := 0.0
	last := math.Inf(1)
	for _, t := range ticks {
		y := pl.Y.At(t.Value)
		if y < pl.Rect.Y0-0.01 || y > pl.Rect.Y1+0.01 {
			continue
		}
		length := minorTick
		if t.Major {
			length = majorTick
		}
		p.Line(pl.Rect.X0, y, pl.Rect.X0+length, y, stroke)
		p.Line(pl.Rect.X1-length, y, pl.Rect.X1, y, stroke)
		if t.Major && last-y > 1.25*s.Size {
			text := typeset.Plain(t.Label, s.Size, typeset.Style{})
			widest = max(widest, text.Width)
			p.Text(text, pl.Rect.X0-s.gap(), y, picture.TextStyle{Color: s.Ink, Align: picture.Right | picture.Middle})
			last = y
		}
	}
	if title != "" {
		text := typeset.Layout(title, s.Title, typeset.Style{})
		x := pl.Rect.X0 - s.gap() - widest - 7
		p.Text(text, x, (pl.Rect.Y0+pl.Rect.Y1)/2, picture.TextStyle{Color: s.Ink, Align: picture.Center, Angle: 90})
	}
}

// YTicks draws ticks without labels on both sides: of a plot that shares its
// axis with a neighbour.
func (pl Plot) YTicks(p *picture.Picture, ticks []Tick, s AxisStyle) {
	for _, t := range ticks {
		y := pl.Y.At(t.Value)
		if y < pl.Rect.Y0-0.01 || y > pl.Rect.Y1+0.01 {
			continue
		}
		length := minorTick
		if t.Major {
			length = majorTick
		}
		stroke := picture.Stroke{Color: s.Line, Width: hairline, Crisp: true}
		p.Line(pl.Rect.X0, y, pl.Rect.X0+length, y, stroke)
	}
}

// XTicks draws upright lines through the plot at labelled places, with the
// labels, in markup, below. Where labels would touch, the one further to the
// left keeps its place and the other is left out.
func (pl Plot) XTicks(p *picture.Picture, ticks []Tick, s AxisStyle) {
	end := math.Inf(-1)
	for _, t := range ticks {
		x := pl.X.At(t.Value)
		if x < pl.Rect.X0-0.01 || x > pl.Rect.X1+0.01 {
			continue
		}
		if s.Grid.A > 0 {
			p.Line(x, pl.Rect.Y0, x, pl.Rect.Y1, picture.Stroke{Color: s.Grid, Width: hairline, Crisp: true})
		}
		text := typeset.Layout(t.Label, s.Size, typeset.Style{})
		left := x - text.Width/2
		if t.Label == "" || left < end+3 {
			continue
		}
		p.Text(text, x, pl.Rect.Y1+s.gap(), picture.TextStyle{Color: s.Ink, Align: picture.Center | picture.CapTop})
		end = left + text.Width
	}
}

// XAxis draws short ticks with labels below the plot.
func (pl Plot) XAxis(p *picture.Picture, ticks []Tick, s AxisStyle) {
	stroke := picture.Stroke{Color: s.Line, Width: hairline, Crisp: true}
	end := math.Inf(-1)
	for _, t := range ticks {
		x := pl.X.At(t.Value)
		if !t.Major || x < pl.Rect.X0-0.01 || x > pl.Rect.X1+0.01 {
			continue
		}
		p.Line(x, pl.Rect.Y1, x, pl.Rect.Y1-majorTick, stroke)
		text := typeset.Plain(t.Label, s.Size, typeset.Style{})
		// Labels at the ends of the axis stay inside the picture.
		left := max(2, min(x-text.Width/2, p.Width-2-text.Width))
		if left > end+3 {
			p.Text(text, left, pl.Rect.Y1+s.gap(), picture.TextStyle{Color: s.Ink, Align: picture.CapTop})
			end = left + text.Width
		}
	}
}

// Level draws a level line at a value of Y.
func (pl Plot) Level(p *picture.Picture, y float64, s picture.Stroke) {
	if at := pl.Y.At(y); at >= pl.Rect.Y0 && at <= pl.Rect.Y1 {
		p.Line(pl.Rect.X0, at, pl.Rect.X1, at, s)
	}
}

// Upright draws an upright line at a value of X.
func (pl Plot) Upright(p *picture.Picture, x float64, s picture.Stroke) {
	if at := pl.X.At(x); at >= pl.Rect.X0-0.01 && at <= pl.Rect.X1+0.01 {
		p.Line(at, pl.Rect.Y0, at, pl.Rect.Y1, s)
	}
}

// Clip runs draw with everything outside the plot hidden.
func (pl Plot) Clip(p *picture.Picture, draw func()) {
	p.PushClip(pl.Rect)
	draw()
	p.PopClip()
}
