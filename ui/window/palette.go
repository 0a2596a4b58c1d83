package window

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"bandwright/ui/session"
)

// palette is a list to choose from, narrowed by typing.
type palette struct {
	w       *Window
	popup   *widget.PopUp
	entry   *searchEntry
	list    *widget.List
	items   []choice
	found   []choice
	current int
}

// choice is one line of a palette.
type choice struct {
	name, remark string
	do           func()
}

// searchEntry is a line of text that leaves the arrows and Escape to the list.
type searchEntry struct {
	widget.Entry
	p *palette
}

// TypedKey implements fyne.Focusable.
func (e *searchEntry) TypedKey(k *fyne.KeyEvent) {
	switch k.Name {
	case fyne.KeyEscape:
		e.p.close()
	case fyne.KeyDown:
		e.p.move(1)
	case fyne.KeyUp:
		e.p.move(-1)
	case fyne.KeyReturn, fyne.KeyEnter:
		e.p.take()
	default:
		e.Entry.TypedKey(k)
	}
}

// openPalette shows a list to choose from.
func (w *Window) openPalette(hint string, items []choice) {
	if w.shown != nil {
		w.shown.close()
	}
	p := &palette{w: w, items: items, found: items}
	p.entry = &searchEntry{p: p}
	p.entry.ExtendBaseWidget(p.entry)
	p.entry.PlaceHolder = hint
	p.entry.OnChanged = p.narrow
	p.list = widget.NewList(
		func() int { return len(p.found) },
		func() fyne.CanvasObject {
			remark := widget.NewLabel("")
			remark.Importance = widget.LowImportance
			name := widget.NewLabel("")
			name.Truncation = fyne.TextTruncateEllipsis
			return container.NewBorder(nil, nil, nil, remark, name)
		},
		func(i widget.ListItemID, o fyne.CanvasObject) {
			if i < 0 || i >= len(p.found) {
				return
			}
			row := o.(*fyne.Container)
			row.Objects[0].(*widget.Label).SetText(p.found[i].name)
			row.Objects[1].(*widget.Label).SetText(p.found[i].remark)
		})
	p.list.OnSelected = func(i widget.ListItemID) {
		if i != p.current {
			p.current = i
			p.take()
		}
	}
	content := container.NewBorder(container.NewPadded(p.entry), nil, nil, nil, p.list)
	p.popup = widget.NewModalPopUp(content, w.win.Canvas())
	p.popup.Resize(w.dialogSize(560, 480))
	w.shown = p
	p.popup.Show()
	w.win.Canvas().Focus(p.entry)
	p.list.Select(0)
}

func (p *palette) narrow(text string) {
	words := strings.Fields(strings.ToLower(text))
	p.found = nil
	for _, c := range p.items {
		whole := strings.ToLower(c.name + " " + c.remark)
		fits := true
		for _, word := range words {
			fits = fits && strings.Contains(whole, word)
		}
		if fits {
			p.found = append(p.found, c)
		}
	}
	p.current = 0
	p.list.UnselectAll()
	p.list.Refresh()
	if len(p.found) > 0 {
		p.list.Select(0)
	}
}

func (p *palette) move(d int) {
	if len(p.found) == 0 {
		return
	}
	p.current = max(0, min(len(p.found)-1, p.current+d))
	p.list.Select(p.current)
	p.list.ScrollTo(p.current)
}

func (p *palette) take() {
	if p.current < 0 || p.current >= len(p.found) {
		return
	}
	do := p.found[p.current].do
	p.close()
	do()
}

func (p *palette) close() {
	p.popup.Hide()
	if p.w.shown == p {
		p.w.shown = nil
	}
}

// showPalette lists all commands.
func (w *Window) showPalette() {
	var items []choice
	for i := range w.command {
		c := &w.command[i]
		items = append(items, choice{c.name, shownKeys(c.keys), c.do})
	}
	if w.sn.Built != nil {
		for _, p := range w.sn.Built.Points {
			items = append(items, choice{"Hold " + p.Label, p.Note, func() { w.hold(p.K) }})
		}
	}
	for _, c := range w.header.crystals {
		for _, set := range c.sets {
			items = append(items, choice{"Compute " + c.name + " with " + set.ID, set.BasisName(), func() { w.do(session.UseSet{ID: set.ID}) }})
		}
	}
	w.openPalette("type a few letters of what you want to do", items)
}

// showKeys shows the sheet of keys and what the pointer does.
func (w *Window) showKeys() {
	left, right := container.NewVBox(), container.NewVBox()
	for _, m := range menus {
		box := left
		if m == menuView || m == menuGo {
			box = right
		}
		box.Add(widget.NewLabelWithStyle(m, fyne.TextAlignLeading, fyne.TextStyle{Bold: true}))
		for _, c := range w.command {
			if c.menu == m && c.keys != "" {
				box.Add(keyLine(shownKeys(c.keys), c.name))
			}
		}
	}
	left.Add(widget.NewLabelWithStyle("Pointer", fyne.TextAlignLeading, fyne.TextStyle{Bold: true}))
	for _, l := range [][2]string{
		{"Zone: drag", "turn; with Shift move, with Ctrl roll"},
		{"Zone: wheel", "magnify; with Ctrl choose the depth of a pick"},
		{"Zone: click", "hold a special point, a place on the path, or a point inside"},
		{"Zone: double click", "look along the nearest of ⟨100⟩, ⟨110⟩, ⟨111⟩"},
		{"Bands: click", "hold this k point and focus the nearest band"},
		{"Bands: drag on a band", "hold along the band"},
		{"Bands: drag beside", "move the energies; with Shift always"},
		{"Bands, DOS, Ladder: wheel", "magnify energies; double click shows all"},
		{"Ladder: click", "focus a level"},
		{"Ledger: click a row", "choose the term to scale"},
		{"Path: drag a row", "reorder; | breaks, × removes"},
	} {
		left.Add(keyLine(l[0], l[1]))
	}
	columns := container.NewGridWithColumns(2, left, right)
	w.show(dialog.NewCustom("Keys and pointer", "Close", container.NewVScroll(columns), w.win), 980, 680)
}

func keyLine(key, does string) fyne.CanvasObject {
	line := widget.NewRichText(
		&widget.TextSegment{Text: key, Style: widget.RichTextStyle{ColorName: theme.ColorNamePrimary, Inline: true, TextStyle: fyne.TextStyle{Bold: true}}},
		&widget.TextSegment{Text: "   " + does, Style: widget.RichTextStyle{Inline: true}})
	line.Truncation = fyne.TextTruncateEllipsis
	return container.New(layout.NewCustomPaddedLayout(-4, -4, 0, 0), line)
}
