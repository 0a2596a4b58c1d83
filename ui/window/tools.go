package window

import (
	"fmt"
	"math"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/widget"

	"bandwright/physics/hamiltonian"
	"bandwright/ui/doc"
	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

// tools are the small controls on the panels: views of the zone, colouring of
// the bands, and the strip below the Ledger that scales a term.
type tools struct {
	w       *Window
	zone    *fyne.Container
	bands   *fyne.Container
	factors *fyne.Container

	wedge  *view.Check
	depth  *view.Slider
	colour *view.Select
	term   *view.Select
	factor *view.Slider
	value  *widget.Label
	reset  *view.Chip
	key    string // of the chosen term
}

// colouring is a way to draw the bands.
type colouring struct{ key, name string }

var colourings = []colouring{
	{"orbitals", "all shells"}, {"s", "s"}, {"p", "p"}, {"d", "d"}, {"s*", "s*"},
	{"atoms", "atoms"}, {"bonding", "bonding, antibonding"}, {"plain", "lines only"},
}

func newTools(w *Window) *tools {
	t := &tools{w: w}
	side := func(label, hint string, direction, up [3]float64) *view.Chip {
		return view.NewChip(w.hints, label, hint, func() { w.lookAlong(direction, up) })
	}
	home := view.NewChip(w.hints, "reset", "the usual side and size (0)", w.usualSide)
	t.wedge = view.NewCheck(w.hints, "wedge", "the irreducible wedge (W)", func(bool) { w.toggleWedge() })
	t.depth = view.NewSlider(w.hints, "how deep a click inside the zone goes: 0 is the near side ([ and ], or Ctrl and wheel)", 0, 1, 0.01,
		func(d float64) { w.setDepth(d) }, nil)
	t.depth.Orientation = widget.Vertical
	buttons := container.NewHBox(
		side("100", "look along [100] (1)", look100, upZ),
		side("110", "look along [110] (2)", look110, upZ),
		side("111", "look along [111] (3)", look111, upZ),
		home, layout.NewSpacer(), t.wedge)
	strip := container.New(layout.NewCustomPaddedLayout(27, 0, 6, 6), buttons)
	depth := container.NewVBox(layout.NewSpacer(), container.New(layout.NewGridWrapLayout(fyne.NewSize(22, 120)), t.depth), layout.NewSpacer())
	t.zone = container.NewBorder(strip, nil, nil, depth)

	var names []string
	for _, c := range colourings {
		names = append(names, c.name)
	}
	t.colour = view.NewSelect(w.hints, "what the width of a band tells (O)", names, func(name string) {
		for _, c := range colourings {
			if c.name == name {
				w.setColour(c.key)
			}
		}
	})
	choice := container.New(layout.NewGridWrapLayout(fyne.NewSize(176, 28)), t.colour)
	t.bands = container.New(layout.NewCustomPaddedLayout(3, 0, 0, 6), container.NewBorder(container.NewHBox(layout.NewSpacer(), choice), nil, nil, nil))

	t.term = view.NewSelect(w.hints, "the term to scale: what if it were off?", nil, func(name string) { t.choose(t.keyOf(name)) })
	t.term.PlaceHolder = "scale a term …"
	t.factor = view.NewSlider(w.hints, "the factor of the chosen term, 0 to 2; 1 is as published", 0, 2, 0.01,
		func(f float64) { t.scale(f, true) }, func(f float64) { t.scale(f, false) })
	t.value = widget.NewLabel("×1.00")
	t.reset = view.NewChip(w.hints, "As published", "", nil)
	sized := func(o fyne.CanvasObject, width float32) fyne.CanvasObject {
		return container.New(layout.NewGridWrapLayout(fyne.NewSize(width, 30)), o)
	}
	t.factors = container.NewPadded(container.New(&view.Flow{Gap: 5},
		sized(t.term, 190), sized(t.factor, 130), t.value, t.reset,
		view.NewChip(w.hints, "Pin A", "keep the focused level as A (A)", func() { w.pin('A') }),
		view.NewChip(w.hints, "Pin B", "keep the focused level as B: the Contrast shows B − A (B)", func() { w.pin('B') }),
		view.NewChip(w.hints, "Clear pins", "let both pinned levels go (Delete)", w.clearPins),
		view.NewChip(w.hints, "Copy", "copy Ledger and Contrast as text (Ctrl+C)", w.copyLedger),
	))
	return t
}

var (
	look100 = [3]float64{-1, 0, 0}
	look110 = [3]float64{-1, -1, 0}
	look111 = [3]float64{-1, -1, -1}
	upZ     = [3]float64{0, 0, 1}
)

// term is a term of the model that can be scaled.
type termChoice struct{ key, name string }

// terms lists what can be scaled, each once.
func (t *tools) terms() []termChoice {
	sn := t.w.sn
	if sn.Built == nil {
		return nil
	}
	sites := sn.Built.Crystal.Sites
	var list []termChoice
	seen := map[string]bool{}
	for _, term := range sn.Built.Model.Terms() {
		key, name := "", ""
		switch term.Kind {
		case hamiltonian.OnSite:
			key, name = "onsite "+term.Subject(sites), "on-site "+term.Subject(sites)
		case hamiltonian.SpinOrbit:
			key, name = "spin_orbit "+term.Subject(sites), "spin–orbit "+term.Subject(sites)
		default:
			key = fmt.Sprintf("shell%d %s", term.Shell, term.Channel)
			name = "bonds " + term.Channel
			if sn.Built.Set != nil && sn.Built.Set.Shells > 1 {
				name += fmt.Sprintf(", shell %d", term.Shell)
			}
		}
		if !seen[key] {
			seen[key] = true
			list = append(list, termChoice{key, name})
		}
	}
	return list
}

func (t *tools) keyOf(name string) string {
	for _, c := range t.terms() {
		if c.name == name {
			return c.key
		}
	}
	return ""
}

// choose takes a term to scale.
func (t *tools) choose(key string) {
	t.key = key
	t.show()
}

func (t *tools) scale(f float64, dragging bool) {
	if t.key == "" {
		t.w.say("Choose the term to scale first: from the list, or by a click on its row.")
		return
	}
	t.w.do(session.SetFactor{Term: t.key, Value: math.Round(100*f) / 100, Dragging: dragging})
}

// show brings the controls up to date.
func (t *tools) show() {
	sn := t.w.sn
	t.wedge.Put(t.w.v.Wedge)
	t.depth.Put(0, 1, t.w.v.Depth)
	var names []string
	shown := ""
	for _, c := range colourings {
		names = append(names, c.name)
		if c.key == sn.Doc.View.Colour {
			shown = c.name
		}
	}
	if shown == "" {
		shown = colourings[0].name
	}
	t.colour.Put(names, shown)

	var terms []string
	chosen, known := "", false
	for _, c := range t.terms() {
		terms = append(terms, c.name)
		if c.key == t.key {
			chosen, known = c.name, true
		}
	}
	if !known {
		t.key = ""
	}
	t.term.Put(terms, chosen)
	f := 1.0
	if v, ok := sn.Doc.Model.Factors[t.key]; ok {
		f = v
	}
	t.factor.Put(0, 2, f)
	if text := fmt.Sprintf("×%.2f", f); t.value.Text != text {
		t.value.SetText(text)
	}
	if len(sn.Doc.Model.Factors) == 0 {
		t.reset.Put(t.reset.Text(), "all terms are as published", nil)
	} else {
		t.reset.Put(t.reset.Text(), "take all factors away", func() { t.w.do(session.ClearFactors{}) })
	}
}

func (w *Window) setColour(key string) {
	if key != w.sn.Doc.View.Colour {
		w.do(session.SetView{Change: func(v doc.View) doc.View { v.Colour = key; return v }})
	}
}

func (w *Window) nextColour() {
	now := 0
	for i, c := range colourings {
		if c.key == w.sn.Doc.View.Colour {
			now = i
		}
	}
	w.setColour(colourings[(now+1)%len(colourings)].key)
}

func (w *Window) toggleWedge() {
	w.v.Wedge = !w.v.Wedge
	w.tools.show()
	w.drawZone()
}

func (w *Window) nextFrame() {
	for i, f := range present.Frames {
		if f == w.sn.Doc.View.Frame {
			w.setFrame(present.Frames[(i+1)%len(present.Frames)])
			return
		}
	}
}

func (w *Window) toggleZero() {
	w.do(session.SetView{Change: func(v doc.View) doc.View {
		if v.Zero == "model" {
			v.Zero = "edge"
		} else {
			v.Zero = "model"
		}
		return v
	}})
}

func (w *Window) toggleDOS() {
	w.do(session.SetView{Change: func(v doc.View) doc.View {
		if v.DOS == "bonding" {
			v.DOS = "projected"
		} else {
			v.DOS = "bonding"
		}
		return v
	}})
}

// swapLower shows the path in place of the Ledger, or back, in a narrow window.
func (w *Window) swapLower() {
	w.desk.showPath = !w.desk.showPath
	if w.desk.showPath {
		w.header.other.Put("Ledger", "the Ledger in place of the path (Y)", w.swapLower)
	} else {
		w.header.other.Put("Path", "the path in place of the Ledger (Y)", w.swapLower)
	}
	w.deskBox.Refresh()
}
