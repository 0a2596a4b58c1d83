package typeset

import (
	"sync"
	"unicode"

	"bandwright/render/picture"
)

// Text is a laid-out line; see picture.Text.
type Text = picture.Text

// Style is the cut of the text that a markup starts with.
type Style struct{ Bold, Italic bool }

func (s Style) font() picture.Font {
	switch {
	case s.Bold && s.Italic:
		return BoldItalic
	case s.Bold:
		return Bold
	case s.Italic:
		return Italic
	}
	return Regular
}

// Proportions of scripts and bars in em of the text they belong to (common practice in print: scripts at 0.7).
const (
	scriptSize  = 0.70
	lowerShift  = 0.17
	upperShift  = 0.38
	barGap      = 0.10
	barWidth    = 0.065
	slantedGap  = 0.05 // between a slanted letter and what is raised beside it
	barInset    = 0.05 // a bar is that much shorter than the advance on each side
	smallestEm  = 0.01
	cachedTexts = 8192
)

type key struct {
	text  string
	size  float64
	style Style
	plain bool
}

var cache struct {
	sync.RWMutex
	texts map[key]*Text
}

// Layout lays out markup at a size in points. The same arguments give the same Text.
func Layout(markup string, size float64, style Style) *Text {
	return cached(key{markup, size, style, false})
}

// Plain lays out text without looking for markup.
func Plain(text string, size float64, style Style) *Text {
	return cached(key{text, size, style, true})
}

// Width is the advance of markup at a size, in points.
func Width(markup string, size float64, style Style) float64 {
	return Layout(markup, size, style).Width
}

func cached(k key) *Text {
	if !(k.size > smallestEm) || k.size > 1e4 { // also NaN, which would never be found again
		k.size = smallestEm
	}
	cache.RLock()
	t := cache.texts[k]
	cache.RUnlock()
	if t != nil {
		return t
	}
	t = layout(k)
	cache.Lock()
	defer cache.Unlock()
	if cache.texts == nil || len(cache.texts) >= cachedTexts {
		cache.texts = make(map[key]*Text, 256)
	}
	if old := cache.texts[k]; old != nil {
		return old
	}
	cache.texts[k] = t
	return t
}

// Shorten lays out plain text and, if it is wider than width points, leaves out its end for an ellipsis.
func Shorten(text string, size float64, style Style, width float64) *Text {
	t := Plain(text, size, style)
	if t.Width <= width {
		return t
	}
	letters := []rune(text)
	lo, hi := 0, len(letters) // lo letters and the ellipsis fit, hi do not
	for hi-lo > 1 {
		if m := (lo + hi) / 2; layout(key{string(letters[:m]) + "…", size, style, true}).Width <= width {
			lo = m
		} else {
			hi = m
		}
	}
	for lo > 0 && unicode.IsSpace(letters[lo-1]) {
		lo--
	}
	return Plain(string(letters[:lo])+"…", size, style)
}

// pen sets nodes from left to right.
type pen struct {
	t          *Text
	x          float64
	last       shape // the shape before, for kerning
	lastSize   float64
	lastShift  float64
	lastDigit  bool
	top, below float64 // reach of what was set
}

func layout(k key) *Text {
	faces.Lock()
	defer faces.Unlock()
	f := get(k.style.font())
	t := &Text{Source: k.text, Size: k.size, Ascent: f.ascent * k.size, Descent: f.descent * k.size, Cap: f.capital * k.size}
	w := pen{t: t}
	list := []node{{kind: run, text: k.text}}
	if k.plain {
		t.Source = Escape(k.text)
	} else {
		p := parser{text: k.text}
		list = p.nodes(0, 0)
	}
	w.set(list, k.size, 0, k.style)
	t.Width = w.x
	t.Ascent, t.Descent = max(t.Ascent, w.top), max(t.Descent, w.below)
	return t
}

func (w *pen) set(list []node, size, shift float64, style Style) {
	for i := 0; i < len(list); i++ {
		n := &list[i]
		switch n.kind {
		case run:
			w.run(n.text, size, shift, style)
		case italic:
			w.set(n.kids, size, shift, Style{style.Bold, !style.Italic})
		case bold:
			w.set(n.kids, size, shift, Style{true, style.Italic})
		case lower, upper:
			x := w.x
			w.script(n, size, shift, style)
			// A lower and an upper one next to each other stand above one another.
			if i+1 < len(list) && (list[i+1].kind == lower || list[i+1].kind == upper) && list[i+1].kind != n.kind {
				first := w.x
				w.x = x
				i++
				w.script(&list[i], size, shift, style)
				w.x = max(w.x, first)
			}
		case barred:
			x, outer := w.x, w.top
			w.top = 0
			w.set(n.kids, size, shift, style)
			if w.x > x {
				f := get(style.font())
				y := -max(w.top-barGap*size/2, f.capital*size-shift) - barGap*size
				inset := min(barInset*size, (w.x-x)/4)
				w.t.Rules = append(w.t.Rules, picture.Rect{X0: x + inset, Y0: y - barWidth*size, X1: w.x - inset, Y1: y})
				w.top = max(outer, -(y - barWidth*size))
			}
			w.top = max(w.top, outer)
		}
	}
}

func (w *pen) script(n *node, size, shift float64, style Style) {
	if n.kind == upper {
		if w.last.font == Italic || w.last.font == BoldItalic {
			w.x += slantedGap * size
		}
		w.set(n.kids, size*scriptSize, shift-upperShift*size, style)
	} else {
		w.set(n.kids, size*scriptSize, shift+lowerShift*size, style)
	}
}

func (w *pen) run(text string, size, shift float64, style Style) {
	number := style.font()
	f := get(number)
	for _, r := range text {
		if unicode.IsControl(r) {
			r = ' '
		}
		s := f.shape(number, r)
		digit := r >= '0' && r <= '9'
		if len(w.t.Glyphs) > 0 && s.font == w.last.font && size == w.lastSize && shift == w.lastShift && !(digit && w.lastDigit) {
			w.x += get(s.font).kern(w.last.index, s.index) * size
		}
		w.t.Glyphs = append(w.t.Glyphs, picture.Glyph{Font: s.font, Index: uint16(s.index), X: w.x + s.nudge*size, Y: shift, Size: size})
		w.x += s.advance * size
		w.last, w.lastSize, w.lastShift, w.lastDigit = s, size, shift, digit
	}
	if text != "" {
		w.top = max(w.top, f.capital*size-shift)
		w.below = max(w.below, shift)
		if shift != 0 {
			w.top, w.below = max(w.top, f.ascent*size-shift), max(w.below, f.descent*size+shift)
		}
	}
}
