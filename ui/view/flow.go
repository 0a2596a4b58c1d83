package view

import "fyne.io/fyne/v2"

// Flow lays objects out in rows from the left, beginning a new row where one
// is full. Rows are as high as their highest object, and objects are centred
// in them.
type Flow struct {
	Gap   float32
	width float32
}

// Layout implements fyne.Layout.
func (f *Flow) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	f.width = size.Width
	f.arrange(objects, size.Width, func(o fyne.CanvasObject, at fyne.Position, s fyne.Size) {
		o.Resize(s)
		o.Move(at)
	})
}

// MinSize implements fyne.Layout. Its height is that of the rows at the last
// width laid out.
func (f *Flow) MinSize(objects []fyne.CanvasObject) fyne.Size {
	var widest float32
	for _, o := range objects {
		if o.Visible() {
			widest = max(widest, o.MinSize().Width)
		}
	}
	width := f.width
	if width == 0 {
		width = 1200
	}
	return fyne.NewSize(widest, f.arrange(objects, max(width, widest), nil))
}

func (f *Flow) arrange(objects []fyne.CanvasObject, width float32, put func(fyne.CanvasObject, fyne.Position, fyne.Size)) float32 {
	var y float32
	for i := 0; i < len(objects); {
		// The objects of this row, and its height.
		var x, height float32
		n := i
		for ; n < len(objects); n++ {
			if !objects[n].Visible() {
				continue
			}
			s := objects[n].MinSize()
			if x > 0 && x+s.Width > width {
				break
			}
			x += s.Width + f.Gap
			height = max(height, s.Height)
		}
		if put != nil {
			x = 0
			for _, o := range objects[i:n] {
				if !o.Visible() {
					continue
				}
				s := o.MinSize()
				put(o, fyne.NewPos(x, y+(height-s.Height)/2), s)
				x += s.Width + f.Gap
			}
		}
		if height > 0 {
			y += height + f.Gap
		}
		i = n
	}
	return max(0, y-f.Gap)
}
