package present

import (
	"fmt"
	"strings"

	"bandwright/render/picture"
	"bandwright/ui/session"
)

// Status is what the strip below the panels tells besides the model's limits.
type Status struct {
	Notice  string // what just happened; "" is nothing
	Bad     bool   // it went wrong
	Running []session.Progress
}

// Foot draws the limits of the model and the state of the work.
func Foot(sn *session.Snapshot, v *View, st Status, w, h float64) *picture.Picture {
	t := v.Theme
	s := &sheet{picture.New(w, h), t}
	first, second := h/2-8, h/2+9
	limits := Limits(sn)
	colour, title := t.Soft, "Limits"
	if sn.BuildErr != nil {
		limits, colour, title = []string{sn.BuildErr.Error()}, t.Bad, "Not computed"
	} else if len(limits) > 0 && (strings.HasPrefix(limits[0], "Altered") || strings.HasPrefix(limits[0], "Stretched") || strings.HasPrefix(limits[0], "Lattice")) {
		colour = t.Caution
	}
	x := 4 + s.bold(title, 4, first, smallSize+1, colour, picture.Middle) + 10
	s.fitMiddle(strings.Join(limits, "  "), x, first, smallSize+1, colour, w-x-8)

	right := Sampling(sn) + " · F1 keys"
	width := s.write(right, w-4, second, smallSize, t.Soft, picture.Right|picture.Middle)
	room := w - width - 24
	switch {
	case st.Notice != "":
		c := t.Ink
		if st.Bad {
			c = t.Bad
		}
		s.fitMiddle(strings.ReplaceAll(st.Notice, "\n", "; "), 4, second, smallSize+1, c, room)
	case len(st.Running) > 0:
		s.progress(st.Running[0], 4, second, room)
	default:
		s.fitMiddle(About(sn), 4, second, smallSize, t.Soft, room)
	}
	return s.Picture
}

// progress draws a bar of what is done and says of what.
func (s *sheet) progress(p session.Progress, x, y, room float64) {
	const length = 120.0
	bar := picture.Span(x, y-3, x+length, y+3)
	s.FillRect(bar, picture.Fill{Color: alpha(s.t.Faint, 60), Crisp: true})
	text := "computing the " + p.What
	if p.Total > 0 {
		done := float64(p.Done) / float64(p.Total)
		bar.X1 = bar.X0 + length*min(1, done)
		s.FillRect(bar, picture.Fill{Color: s.t.Held, Crisp: true})
		text += fmt.Sprintf(", %.0f %%", 100*done)
	}
	s.fitMiddle(text, x+length+10, y, smallSize+1, s.t.Ink, room-length-10)
}
