package window

import (
	"fmt"
	"strconv"
	"strings"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/widget"

	"bandwright/physics/bands"
	"bandwright/physics/catalog"
	"bandwright/physics/dos"
	"bandwright/physics/edges"
	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

// header is the row of controls above the panels: crystal, set, spin–orbit,
// lattice constant, gap and edges.
type header struct {
	w       *Window
	box     *fyne.Container
	crystal *view.Select
	set     *view.Select
	orbit   *view.Check
	slider  *view.Slider
	entry   *widget.Entry
	chips   []*view.Chip
	other   *view.Chip // path or Ledger, in a narrow window
	find    *view.Chip

	crystals []crystalChoice
	shownA   string
	made     chipsOf
}

// crystalChoice is a crystal of the shipped sets with the sets that describe it.
type crystalChoice struct {
	name string
	sets []*catalog.Set
}

const (
	ownCrystal = "Own crystal …"
	ownSet     = "Own set from file …"
	mostChips  = 4
)

// crystalChoices gathers the shipped sets by crystal.
func crystalChoices() []crystalChoice {
	var list []crystalChoice
	for _, set := range catalog.Shipped() {
		c, err := set.Crystal()
		if err != nil {
			continue
		}
		name := c.Formula() + "  " + c.Prototype
		at := -1
		for i := range list {
			if list[i].name == name {
				at = i
			}
		}
		if at < 0 {
			list = append(list, crystalChoice{name: name})
			at = len(list) - 1
		}
		list[at].sets = append(list[at].sets, set)
	}
	return list
}

func setName(s *catalog.Set) string {
	return strings.NewReplacer("sp3", "sp³", "d5", "d⁵").Replace(s.BasisName()) + "  " + s.ID
}

func newHeader(w *Window) *header {
	h := &header{w: w, crystals: crystalChoices(), entry: widget.NewEntry()}
	h.crystal = view.NewSelect(w.hints, "the crystal, with the sets that describe it", nil, h.chooseCrystal)
	h.set = view.NewSelect(w.hints, "whose parameters: the published set, or one of your own", nil, h.chooseSet)
	h.orbit = view.NewCheck(w.hints, "spin–orbit", "on-site spin–orbit coupling of the p shells, λ = Δ/3 (S)", func(on bool) {
		if !w.do(session.SetSpinOrbit{On: on}) {
			h.orbit.Put(w.sn.Doc.Model.SpinOrbit)
		}
	})
	h.slider = view.NewSlider(w.hints, "drag the lattice constant: parameters follow d to the power of −η", 4, 7, 0.001,
		func(a float64) {
			began := time.Now()
			if w.do(session.SetLatticeConstant{A: a, Dragging: true}) {
				w.lag.asked(w.session.Snapshot().Doc.Crystal.A, began)
			}
		},
		func(a float64) { w.do(session.SetLatticeConstant{A: a}) })
	h.entry.OnSubmitted = func(text string) {
		a, err := strconv.ParseFloat(strings.Replace(strings.TrimSpace(text), ",", ".", 1), 64)
		if err != nil {
			w.fail(fmt.Errorf("the lattice constant %q is not a number: type a length in Å, as 5.431", text))
			return
		}
		w.do(session.SetLatticeConstant{A: a})
	}
	for range mostChips {
		h.chips = append(h.chips, view.NewChip(w.hints, "", "", nil))
	}
	h.other = view.NewChip(w.hints, "Path", "the path in place of the Ledger (Y)", w.swapLower)
	h.other.Hide()
	h.find = view.NewChip(w.hints, "Commands  /", "all commands with their keys", w.showPalette)

	wide := func(o fyne.CanvasObject, width float32) fyne.CanvasObject {
		return container.New(layout.NewGridWrapLayout(fyne.NewSize(width, 32)), o)
	}
	row := []fyne.CanvasObject{
		wide(h.crystal, 140), wide(h.set, 186), h.orbit,
		widget.NewLabelWithStyle("a", fyne.TextAlignTrailing, fyne.TextStyle{Italic: true}),
		wide(h.slider, 100), wide(h.entry, 66), widget.NewLabel("Å"),
	}
	for _, c := range h.chips {
		row = append(row, c)
	}
	row = append(row, h.other, h.find)
	h.box = container.New(&view.Flow{Gap: 4}, row...)
	return h
}

func (h *header) narrowed() {
	if h.w.desk != nil && h.w.desk.narrow {
		h.other.Show()
	} else {
		h.other.Hide()
	}
}

// current is the choice that holds the study's set; nil for own sets.
func (h *header) current() *crystalChoice {
	if h.w.sn.Doc.Model.File != "" {
		return nil
	}
	for i := range h.crystals {
		for _, s := range h.crystals[i].sets {
			if s.ID == h.w.sn.Doc.Model.Set {
				return &h.crystals[i]
			}
		}
	}
	return nil
}

// show brings the controls up to date.
func (h *header) show() {
	sn := h.w.sn
	var names []string
	for _, c := range h.crystals {
		names = append(names, c.name)
	}
	now := h.current()
	name := ""
	if built := sn.Built; built != nil {
		name = built.Crystal.Formula() + "  " + built.Crystal.Prototype
	}
	h.crystal.Put(append(names, ownCrystal), name)

	var sets []string
	chosen := sn.Doc.Model.File
	if now != nil {
		for _, s := range now.sets {
			sets = append(sets, setName(s))
			if s.ID == sn.Doc.Model.Set {
				chosen = setName(s)
			}
		}
	}
	h.set.Put(append(sets, ownSet), chosen)
	h.orbit.Put(sn.Doc.Model.SpinOrbit)

	a, reference := sn.Doc.Crystal.A, sn.Doc.Crystal.A
	if built := sn.Built; built != nil {
		if sn.Doc.Crystal.Prototype == "" {
			a, reference = built.Crystal.Setting.A, built.Crystal.Setting.A
		}
		if built.Set != nil && built.Set.A > 0 {
			reference = built.Set.A
		}
	}
	h.slider.Put(reference*0.9, reference*1.1, a)
	if text := strconv.FormatFloat(a, 'f', 4, 64); text != h.shownA {
		h.shownA = text
		h.entry.SetText(text)
	}

	// Finding edges on the path takes some milliseconds, too long for every
	// step of a drag, in which the edges are out of date anyway.
	if made := (chipsOf{sn.Edges, sn.DOS, sn.Bands, sn.EdgesStale, sn.EdgesErr}); made != h.made && !(sn.EdgesStale && h.made.edges != nil) {
		h.made = made
		h.showChips(present.Chips(sn))
	}
}

// chipsOf is what chips were made from.
type chipsOf struct {
	edges *edges.Edges
	dos   *dos.DOS
	bands *bands.Bands
	stale bool
	err   error
}

func (h *header) showChips(chips []present.Chip) {
	for i, b := range h.chips {
		if i >= len(chips) {
			b.Hide()
			continue
		}
		c := chips[i]
		var tapped func()
		if c.Goes {
			tapped = func() { h.w.do(session.Hold{K: c.K, Level: c.Level}) }
		}
		b.Put(c.Text, c.Hint, tapped)
		b.Show()
	}
	h.box.Refresh()
}

// chooseCrystal takes a crystal with the set of the same family, if there is
// one.
func (h *header) chooseCrystal(name string) {
	if name == ownCrystal {
		h.show()
		h.w.askCrystal()
		return
	}
	family, _, _ := strings.Cut(h.w.sn.Doc.Model.Set, "/")
	for _, c := range h.crystals {
		if c.name != name {
			continue
		}
		id := c.sets[0].ID
		for _, s := range c.sets {
			if f, _, _ := strings.Cut(s.ID, "/"); f == family {
				id = s.ID
			}
		}
		h.w.do(session.UseSet{ID: id})
		return
	}
}

func (h *header) chooseSet(name string) {
	if name == ownSet {
		h.show()
		h.w.askSet()
		return
	}
	for _, c := range h.crystals {
		for _, s := range c.sets {
			if setName(s) == name && s.ID != h.w.sn.Doc.Model.Set {
				h.w.do(session.UseSet{ID: s.ID})
			}
		}
	}
}
