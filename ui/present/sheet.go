package present

import (
	"math"
	"strconv"
	"strings"

	"bandwright/physics/lattice"
	"bandwright/render/picture"
	"bandwright/render/typeset"
)

// Sizes of text and of the strips around the panels, points. Bands, DOS and
// Ladder share PlotTop and PlotBottom, so that equal panels have equal energy
// axes.
const (
	titleSize = 13.0
	textSize  = 11.5
	smallSize = 10.0
	edgePad   = 12.0

	PlotTop    = 50.0
	PlotBottom = 30.0
)

// sheet is a panel's picture in the making.
type sheet struct {
	*picture.Picture
	t *Theme
}

// newSheet begins a panel: its paper, its title on the left and a soft remark
// on the right that gives way when there is no room.
func newSheet(t *Theme, w, h float64, title, remark string) *sheet {
	s := &sheet{picture.New(w, h), t}
	s.FillRect(picture.R(0, 0, w, h), picture.Fill{Color: t.Panel, Crisp: true})
	s.StrokeRect(picture.R(0.5, 0.5, w-1, h-1), picture.Stroke{Color: t.Rule, Width: 1, Crisp: true})
	s.Begin("head")
	head := typeset.Layout(title, titleSize, typeset.Style{Bold: true})
	s.Text(head, edgePad, 21, picture.TextStyle{Color: t.Ink})
	if room := w - 2*edgePad - head.Width - 14; remark != "" && room > 30 {
		text := typeset.Layout(remark, smallSize, typeset.Style{})
		if text.Width > room {
			text = typeset.Shorten(plain(remark), smallSize, typeset.Style{}, room)
		}
		s.Text(text, w-edgePad, 21, picture.TextStyle{Color: t.Soft, Align: picture.Right})
	}
	s.End()
	return s
}

// plain drops the marks of a markup.
func plain(markup string) string {
	return strings.NewReplacer("*", "", "_{", "", "^{", "", "}", "", "\\", "").Replace(markup)
}

// write sets markup at (x, y) and returns its width.
func (s *sheet) write(markup string, x, y, size float64, c picture.Color, a picture.Align) float64 {
	text := typeset.Layout(markup, size, typeset.Style{})
	s.Text(text, x, y, picture.TextStyle{Color: c, Align: a})
	return text.Width
}

// bold is write in the heavy cut.
func (s *sheet) bold(markup string, x, y, size float64, c picture.Color, a picture.Align) float64 {
	text := typeset.Layout(markup, size, typeset.Style{Bold: true})
	s.Text(text, x, y, picture.TextStyle{Color: c, Align: a})
	return text.Width
}

// fit is write, shortened to a width.
func (s *sheet) fit(text string, x, y, size float64, c picture.Color, width float64) {
	if width < 8 {
		return
	}
	s.Text(typeset.Shorten(text, size, typeset.Style{}, width), x, y, picture.TextStyle{Color: c})
}

// wrap breaks plain text into lines no wider than width.
func wrap(text string, size, width float64) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		longer := word
		if line != "" {
			longer = line + " " + word
		}
		if line != "" && typeset.Plain(longer, size, typeset.Style{}).Width > width {
			lines = append(lines, line)
			longer = word
		}
		line = longer
	}
	if line != "" {
		lines = append(lines, line)
	}
	return lines
}

// paragraph writes plain text in lines and returns the y below the last.
func (s *sheet) paragraph(text string, x, y, size, width float64, c picture.Color) float64 {
	for _, line := range wrap(text, size, width) {
		s.Text(typeset.Plain(line, size, typeset.Style{}), x, y, picture.TextStyle{Color: c})
		y += typeset.LineHeight(size)
	}
	return y
}

// message fills an area with what stands in the way of its content.
func (s *sheet) message(text string, r picture.Rect, c picture.Color) {
	lines := wrap(text, textSize, max(60, r.W()-24))
	step := typeset.LineHeight(textSize)
	y := r.Y0 + r.H()/2 - step*float64(len(lines)-1)/2
	for _, line := range lines {
		s.Text(typeset.Plain(line, textSize, typeset.Style{}), r.X0+r.W()/2, y, picture.TextStyle{Color: c, Align: picture.Center})
		y += step
	}
}

const minus = "−"

// number writes v with a fixed number of decimals and a true minus, and never
// a negative zero.
func number(v float64, decimals int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "not available"
	}
	text := strconv.FormatFloat(v, 'f', decimals, 64)
	if rest, negative := strings.CutPrefix(text, "-"); negative {
		if strings.Trim(rest, "0.") == "" {
			return rest
		}
		return minus + rest
	}
	return text
}

// signed is number with a plus before what is positive.
func signed(v float64, decimals int) string {
	text := number(v, decimals)
	if strings.HasPrefix(text, minus) || strings.Trim(text, "0.") == "" || text == "not available" {
		return text
	}
	return "+" + text
}

var fractions = []struct {
	v    float64
	text string
}{
	{1. / 8, "⅛"}, {1. / 4, "¼"}, {1. / 3, "⅓"}, {3. / 8, "⅜"}, {1. / 2, "½"}, {5. / 8, "⅝"}, {2. / 3, "⅔"}, {3. / 4, "¾"}, {7. / 8, "⅞"},
}

// coordinate writes one coordinate of a k point: simple fractions as such.
func coordinate(v float64) string {
	const near = 1e-6
	if whole := math.Round(v); math.Abs(v-whole) < near {
		return number(whole, 0)
	}
	size := math.Abs(v)
	for _, f := range fractions {
		if math.Abs(size-f.v) < near {
			if v < 0 {
				return minus + f.text
			}
			return f.text
		}
	}
	return number(v, 4)
}

// Coordinates writes a k point in a frame: "(½, ½, ½)".
func Coordinates(s lattice.Setting, f lattice.Frame, k lattice.FracK) string {
	c := s.FromFrac(f, k)
	if f == lattice.InverseAngstrom {
		return "(" + number(c[0], 4) + ", " + number(c[1], 4) + ", " + number(c[2], 4) + ")"
	}
	return "(" + coordinate(c[0]) + ", " + coordinate(c[1]) + ", " + coordinate(c[2]) + ")"
}

// FrameName is the name of a frame as the window prints it.
func FrameName(f lattice.Frame) string {
	switch f {
	case lattice.Primitive:
		return "primitive"
	case lattice.Conventional:
		return "conventional"
	case lattice.TwoPiOverA:
		return "2π/a"
	}
	return "Å⁻¹"
}

// Frames are the frames in the order the window offers them.
var Frames = []lattice.Frame{lattice.TwoPiOverA, lattice.Primitive, lattice.Conventional, lattice.InverseAngstrom}

// superscript writes a small whole number raised.
func superscript(n int) string {
	digits := []rune("⁰¹²³⁴⁵⁶⁷⁸⁹")
	var b strings.Builder
	for _, d := range strconv.Itoa(n) {
		b.WriteRune(digits[d-'0'])
	}
	return b.String()
}
