package present

import (
	"fmt"

	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/physics/zone"
	"bandwright/render/picture"
	"bandwright/ui/session"
)

const (
	pathRow = 19.0
	pathTop = 48.0
)

// PathLine is one line of the path's list: a point, or the break before a run.
type PathLine struct {
	Break  bool
	Run, I int
	Y      float64 // of its middle, before scrolling
}

// PathLines lists the points of the path from top to bottom.
func PathLines(p path.Path) []PathLine {
	var lines []PathLine
	y := pathTop + pathRow/2
	for r, run := range p.Runs {
		if r > 0 {
			lines = append(lines, PathLine{Break: true, Run: r, Y: y - 3})
			y += pathRow - 6
		}
		for i := range run {
			lines = append(lines, PathLine{Run: r, I: i, Y: y})
			y += pathRow
		}
	}
	return lines
}

// PathHeight is the height of the whole list.
func PathHeight(p path.Path) float64 {
	lines := PathLines(p)
	if len(lines) == 0 {
		return pathTop
	}
	return lines[len(lines)-1].Y + pathRow
}

// PathSlot is where a point dropped at height y (scrolling included) would go:
// before point j of run r.
func PathSlot(p path.Path, y float64) (r, j int) {
	for _, line := range PathLines(p) {
		if !line.Break {
			if y < line.Y {
				return line.Run, line.I
			}
			r, j = line.Run, line.I+1
		}
	}
	return r, j
}

// Moved is the path with point i of run r taken out and put before point j of
// run to. Runs left with fewer than two points join their neighbour.
func Moved(p path.Path, r, i, to, j int) path.Path {
	if r >= len(p.Runs) || i >= len(p.Runs[r]) || to >= len(p.Runs) {
		return p
	}
	point := p.Runs[r][i]
	q := clone(p)
	q.Runs[to] = insert(q.Runs[to], j, point)
	if to == r && j <= i {
		i++
	}
	q.Runs[r] = append(q.Runs[r][:i:i], q.Runs[r][i+1:]...)
	return mended(q)
}

// Without is the path less point i of run r.
func Without(p path.Path, r, i int) path.Path {
	q := clone(p)
	q.Runs[r] = append(q.Runs[r][:i:i], q.Runs[r][i+1:]...)
	return mended(q)
}

// WithPoint is the path with a point added at its end.
func WithPoint(p path.Path, point path.Point) path.Path {
	q := clone(p)
	if len(q.Runs) == 0 {
		q.Runs = [][]path.Point{nil}
	}
	last := len(q.Runs) - 1
	q.Runs[last] = append(q.Runs[last], point)
	return q
}

// WithBreak is the path broken after point i of run r, or mended there if it
// breaks already. Where either part would be a single point nothing changes.
func WithBreak(p path.Path, r, i int) path.Path {
	q := clone(p)
	run := q.Runs[r]
	switch {
	case i == len(run)-1 && r+1 < len(q.Runs):
		q.Runs[r] = append(run, q.Runs[r+1]...)
		q.Runs = append(q.Runs[:r+1], q.Runs[r+2:]...)
	case i >= 1 && len(run)-i-1 >= 2:
		tail := append([]path.Point(nil), run[i+1:]...)
		rest := append([][]path.Point{run[:i+1], tail}, q.Runs[r+1:]...)
		q.Runs = append(q.Runs[:r], rest...)
	}
	return q
}

// Reversed is the path walked the other way.
func Reversed(p path.Path) path.Path {
	q := path.Path{}
	for r := len(p.Runs) - 1; r >= 0; r-- {
		var run []path.Point
		for i := len(p.Runs[r]) - 1; i >= 0; i-- {
			run = append(run, p.Runs[r][i])
		}
		q.Runs = append(q.Runs, run)
	}
	return q
}

func clone(p path.Path) path.Path {
	q := path.Path{Runs: make([][]path.Point, len(p.Runs))}
	for i, run := range p.Runs {
		q.Runs[i] = append([]path.Point(nil), run...)
	}
	return q
}

func insert(run []path.Point, j int, p path.Point) []path.Point {
	run = append(run, path.Point{})
	copy(run[j+1:], run[j:])
	run[j] = p
	return run
}

// mended is the path without runs of fewer than two points: what is left of
// one goes to the run before, or else to the run after.
func mended(p path.Path) path.Path {
	var q path.Path
	var carry []path.Point
	for _, run := range p.Runs {
		run = append(carry, run...)
		carry = nil
		switch {
		case len(run) >= 2:
			q.Runs = append(q.Runs, run)
		case len(run) == 1 && len(q.Runs) > 0:
			last := len(q.Runs) - 1
			q.Runs[last] = append(q.Runs[last], run[0])
		default:
			carry = run
		}
	}
	if len(q.Runs) == 0 {
		return p // a path needs two points
	}
	return q
}

// Path draws the list of the path's points.
func Path(sn *session.Snapshot, v *View, w, h float64) *picture.Picture {
	t := v.Theme
	frame := sn.Doc.View.Frame
	s := newSheet(t, w, h, "Path", "drag reorders · click holds")
	if sn.Built == nil {
		s.message("The path is not available until the crystal is.", picture.Span(0, 30, w, max(31, h)), t.Soft)
		return s.Picture
	}
	if err := sn.Built.PathErr; err != nil {
		s.message(err.Error(), picture.Span(0, 30, w, max(31, h)), t.Bad)
		return s.Picture
	}
	p := sn.Built.Path
	setting := sn.Built.Crystal.Setting
	label, at, group, place := edgePad, edgePad+48.0, edgePad+190.0, edgePad+244.0
	if w < 330 {
		place = w
	}
	y := pathTop - 6
	s.write("point", label, y, smallSize, t.Soft, 0)
	s.write("*k* / "+frameAxis(frame), at, y, smallSize, t.Soft, 0)
	s.write("co-group", group, y, smallSize, t.Soft, 0)
	if place < w-60 {
		s.write("place", place, y, smallSize, t.Soft, 0)
	}
	s.PushClip(picture.Span(0, pathTop, w, max(pathTop+1, h)))
	for n, line := range PathLines(p) {
		y := line.Y - v.Down
		if line.Break {
			s.Line(label, y, w-edgePad-34, y, picture.Stroke{Color: t.Path, Width: 1, Dash: picture.Dash{On: 3, Off: 3}, Crisp: true})
			s.write("break", w-edgePad-30, y, smallSize, t.Soft, picture.Middle)
			continue
		}
		point := p.Runs[line.Run][line.I]
		ink := t.Ink
		if v.Drag.On && v.Drag.Run == line.Run && v.Drag.I == line.I {
			ink = t.Faint
		}
		s.SetID(Target{Kind: PathPoint, I: line.Run, J: line.I}.id())
		row := picture.Span(4, y-pathRow/2, w-6, y+pathRow/2)
		if n%2 == 0 {
			s.FillRect(row, picture.Fill{Color: alpha(t.Faint, 18), Crisp: true})
		} else {
			s.FillRect(row, picture.Fill{})
		}
		name := point.Label
		if len([]rune(name)) > 6 {
			name = "·"
		}
		s.bold(name, label+4, y, textSize+0.5, ink, picture.Middle)
		s.fitMiddle(Coordinates(setting, frame, point.K), at, y, textSize, ink, group-at-6)
		s.fitMiddle(fmt.Sprintf("%d", len(sn.Built.Group.LittleCoGroup(point.K))), group+8, y, textSize, ink, 40)
		if place < w-60 {
			s.fitMiddle(placeOf(sn, point), place, y, textSize, t.Soft, w-place-58)
		}
		s.SetID(Target{Kind: BreakAfter, I: line.Run, J: line.I}.id())
		s.FillRect(picture.Span(w-50, y-8, w-30, y+8), picture.Fill{})
		s.write("|", w-40, y, textSize, t.Faint, picture.Center|picture.Middle)
		s.SetID(Target{Kind: Remove, I: line.Run, J: line.I}.id())
		s.FillRect(picture.Span(w-30, y-8, w-10, y+8), picture.Fill{})
		s.write("×", w-20, y, textSize+2, t.Soft, picture.Center|picture.Middle)
		s.SetID(0)
	}
	if v.Drag.On {
		s.dropMark(p, v, w)
	}
	s.PopClip()
	s.scrollMark(v.Down, PathHeight(p), w, h)
	return s.Picture
}

func (s *sheet) dropMark(p path.Path, v *View, w float64) {
	for _, line := range PathLines(p) {
		if line.Break || line.Run != v.Drag.ToRun {
			continue
		}
		y := line.Y - v.Down
		switch {
		case line.I == v.Drag.J:
			y -= pathRow / 2
		case line.I == v.Drag.J-1 && v.Drag.J == len(p.Runs[line.Run]):
			y += pathRow / 2
		default:
			continue
		}
		s.Line(6, y, w-6, y, picture.Stroke{Color: s.t.Held, Width: 2, Crisp: true})
	}
}

func frameAxis(f lattice.Frame) string {
	switch f {
	case lattice.Primitive:
		return "**b**_{1}, **b**_{2}, **b**_{3}"
	case lattice.Conventional:
		return "**a***, **b***, **c***"
	}
	return FrameName(f)
}

// placeOf says in words where a point of the path lies.
func placeOf(sn *session.Snapshot, p path.Point) string {
	for _, sp := range sn.Built.Points {
		if sp.Label == p.Label {
			return sp.Note
		}
	}
	if sn.Built.Zone.Place(p.K) == zone.Outside {
		return "outside, like " + sn.Built.Zone.Place(sn.Built.Zone.Fold(p.K)).String()
	}
	if name := zone.SymmetryName(sn.Built.Crystal.Setting, p.K); name != "" {
		return "on " + name
	}
	return sn.Built.Zone.Place(p.K).String()
}
