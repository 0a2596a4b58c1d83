package project

import (
	"image"

	"bandwright/render/picture"
)

// tap notes what a picture strokes and to whom it belongs.
type tap struct {
	r  *renderer
	id picture.ID
}

func (t *tap) Begin(string)          {}
func (t *tap) End()                  {}
func (t *tap) Belongs(id picture.ID) { t.id = id }
func (t *tap) Clip(picture.Rect)     {}

func (t *tap) Fill(*picture.Path, picture.Fill) {}

func (t *tap) Stroke(p *picture.Path, s picture.Stroke) {
	t.r.strokes = append(t.r.strokes, stroke{t.id, s, append([]picture.Point(nil), p.Points...)})
}

func (t *tap) Text(*picture.Text, float64, float64, picture.TextStyle) {}
func (t *tap) Image(image.Image, picture.Rect)                         {}
