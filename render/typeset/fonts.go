package typeset

import (
	"fmt"
	"sync"

	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"

	"bandwright/assets"
	"bandwright/render/picture"
)

// The fonts by number.
const (
	Regular picture.Font = iota
	Italic
	Bold
	BoldItalic
	Signs // what the others lack
	fontCount
)

var files = [fontCount]string{"Inter-Regular.otf", "Inter-Italic.otf", "Inter-SemiBold.otf", "Inter-SemiBoldItalic.otf", "DejaVuSans.ttf"}

// File is the content of a font's file, for those who embed or hand on whole fonts.
func File(f picture.Font) []byte {
	data, err := assets.Fonts.ReadFile("fonts/" + files[f])
	if err != nil {
		panic(fmt.Sprintf("typeset: embedded font %s: %v", files[f], err))
	}
	return data
}

// shape is a glyph with its advance in em, shifted right by nudge within it.
type shape struct {
	font           picture.Font
	index          sfnt.GlyphIndex
	advance, nudge float64
}

type face struct {
	font     *sfnt.Font
	unit     fixed.Int26_6 // size at which one design unit is one pixel
	em       float64       // design units per em
	shapes   map[rune]shape
	kerns    map[uint32]float64
	outlines map[sfnt.GlyphIndex]*picture.Path
	figure   float64 // advance of every digit, em
	// Heights in em: capitals, small letters, reach of letters above and below the baseline.
	capital, small, ascent, descent float64
}

// faces are read when first needed: most drawings use two of the five.
var faces struct {
	sync.Mutex
	list   [fontCount]*face
	buffer sfnt.Buffer
}

// get needs faces locked.
func get(f picture.Font) *face {
	if faces.list[f] == nil {
		faces.list[f] = parse(f)
	}
	return faces.list[f]
}

func parse(f picture.Font) *face {
	font, err := sfnt.Parse(File(f))
	if err != nil {
		panic(fmt.Sprintf("typeset: embedded font %s: %v", files[f], err))
	}
	units := font.UnitsPerEm()
	a := &face{font: font, unit: fixed.I(int(units)), em: float64(units), shapes: map[rune]shape{},
		kerns: map[uint32]float64{}, outlines: map[sfnt.GlyphIndex]*picture.Path{}}
	for r := '0'; r <= '9'; r++ {
		a.figure = max(a.figure, a.advance(a.index(r)))
	}
	reach := func(r rune) picture.Rect { return a.outline(a.index(r)).Bounds() }
	a.capital, a.small = -reach('H').Y0, -reach('x').Y0
	a.ascent, a.descent = -reach('d').Y0, reach('p').Y1
	return a
}

func (a *face) index(r rune) sfnt.GlyphIndex {
	i, err := a.font.GlyphIndex(&faces.buffer, r)
	if err != nil {
		return 0
	}
	return i
}

func (a *face) advance(i sfnt.GlyphIndex) float64 {
	w, err := a.font.GlyphAdvance(&faces.buffer, i, a.unit, font.HintingNone)
	if err != nil {
		return 0
	}
	return float64(w) / 64 / a.em
}

// shape finds the shape of a rune: in the font itself, else among the signs, else the font's mark for "missing".
func (a *face) shape(f picture.Font, r rune) shape {
	if s, ok := a.shapes[r]; ok {
		return s
	}
	s := shape{font: f, index: a.index(r)}
	if s.index == 0 && f != Signs {
		if b := get(Signs); b.index(r) != 0 {
			s = b.shape(Signs, r)
			a.shapes[r] = s
			return s
		}
	}
	s.advance = a.advance(s.index)
	if r >= '0' && r <= '9' {
		s.nudge = (a.figure - s.advance) / 2
		s.advance = a.figure
	}
	a.shapes[r] = s
	return s
}

// kern is the correction in em between two shapes of one font.
func (a *face) kern(l, r sfnt.GlyphIndex) float64 {
	key := uint32(l)<<16 | uint32(r)
	k, ok := a.kerns[key]
	if !ok {
		if v, err := a.font.Kern(&faces.buffer, l, r, a.unit, font.HintingNone); err == nil {
			k = float64(v) / 64 / a.em
		}
		a.kerns[key] = k
	}
	return k
}

func (a *face) outline(i sfnt.GlyphIndex) *picture.Path {
	if p, ok := a.outlines[i]; ok {
		return p
	}
	p := &picture.Path{}
	// A glyph that cannot be read (a colour glyph, say) is left empty.
	segments, err := a.font.LoadGlyph(&faces.buffer, i, a.unit, nil)
	if err == nil {
		k := 1 / (64 * a.em)
		at := func(q fixed.Point26_6) (float64, float64) { return float64(q.X) * k, float64(q.Y) * k }
		for _, s := range segments {
			x, y := at(s.Args[0])
			switch s.Op {
			case sfnt.SegmentOpMoveTo:
				p.Close()
				p.MoveTo(x, y)
			case sfnt.SegmentOpLineTo:
				p.LineTo(x, y)
			case sfnt.SegmentOpQuadTo:
				x1, y1 := at(s.Args[1])
				p.QuadTo(x, y, x1, y1)
			case sfnt.SegmentOpCubeTo:
				x1, y1 := at(s.Args[1])
				x2, y2 := at(s.Args[2])
				p.CubicTo(x, y, x1, y1, x2, y2)
			}
		}
		p.Close()
	}
	a.outlines[i] = p
	return p
}

// Outline is the shape of a glyph in units of the em, y down, origin on the baseline: to be filled by nonzero winding.
// It is shared and must not be changed.
func Outline(f picture.Font, index uint16) *picture.Path {
	faces.Lock()
	defer faces.Unlock()
	return get(f).outline(sfnt.GlyphIndex(index))
}

// Coverage says whether a font of ours has the rune.
func Coverage(r rune) bool {
	faces.Lock()
	defer faces.Unlock()
	return get(Regular).index(r) != 0 || get(Signs).index(r) != 0
}

// CapHeight is the height of capitals at a size, in points.
func CapHeight(size float64) float64 { return regular().capital * size }

// XHeight is the height of small letters at a size, in points.
func XHeight(size float64) float64 { return regular().small * size }

// LineHeight is the usual distance between the baselines of lines at a size, in points.
func LineHeight(size float64) float64 { return 1.35 * size }

func regular() *face {
	faces.Lock()
	defer faces.Unlock()
	return get(Regular)
}
