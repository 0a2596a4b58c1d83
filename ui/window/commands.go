package window

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"

	"bandwright/ui/present"
	"bandwright/ui/session"
)

// command is something the window can do, with the keys that do it. Menu, key
// sheet and the list of commands are all made from these.
type command struct {
	menu string // the menu it stands in: "Study", "Edit", "Model", "Go", "View", "Help"
	name string
	keys string // "Ctrl+S", "A", "Left"; further ones after a comma
	do   func()
}

const (
	menuStudy = "Study"
	menuEdit  = "Edit"
	menuModel = "Model"
	menuGo    = "Go"
	menuView  = "View"
	menuHelp  = "Help"
)

var menus = []string{menuStudy, menuEdit, menuModel, menuGo, menuView, menuHelp}

// commands makes the list of all commands.
func (w *Window) commands() {
	along := func(direction, up [3]float64) func() { return func() { w.lookAlong(direction, up) } }
	w.command = []command{
		{menuStudy, "New study", "Ctrl+N", w.newStudy},
		{menuStudy, "Open …", "Ctrl+O", w.askOpen},
		{menuStudy, "Example studies …", "Ctrl+E", w.showExamples},
		{menuStudy, "Recent studies …", "Ctrl+R", w.showRecent},
		{menuStudy, "Save", "Ctrl+S", func() { w.save(nil) }},
		{menuStudy, "Save as …", "Ctrl+Shift+S", func() { w.askSave(nil) }},
		{menuStudy, "Title …", "Ctrl+T", w.askTitle},
		{menuStudy, "Quit", "Ctrl+Q", w.askClose},

		{menuEdit, "Undo", "Ctrl+Z", w.undo},
		{menuEdit, "Redo", "Ctrl+Shift+Z, Ctrl+Y", w.redo},
		{menuEdit, "Copy Ledger and Contrast as text", "Ctrl+C", w.copyLedger},
		{menuEdit, "Pin the focused level as A", "A", func() { w.pin('A') }},
		{menuEdit, "Pin the focused level as B", "B", func() { w.pin('B') }},
		{menuEdit, "Swap pins A and B", "X", func() { w.do(session.SwapPins{}) }},
		{menuEdit, "Clear pins", "Delete", w.clearPins},
		{menuEdit, "Pick path points in the Zone", "N", w.togglePicking},

		{menuModel, "Spin–orbit coupling on or off", "S", func() { w.do(session.SetSpinOrbit{On: !w.sn.Doc.Model.SpinOrbit}) }},
		{menuModel, "Own crystal …", "", w.askCrystal},
		{menuModel, "Own parameter set from a file …", "", w.askSet},
		{menuModel, "All terms as published", "", func() { w.do(session.ClearFactors{}) }},
		{menuModel, "Mesh of the density of states …", "M", w.askMesh},
		{menuModel, "Stop computing, or go on", "", w.stopOrResume},
		{menuModel, "Sources and limits", "I", w.showLimits},

		{menuGo, "Hold a typed k point …", "G", w.askPoint},
		{menuGo, "Valence top", "V", func() { w.goTo(present.ValenceTop) }},
		{menuGo, "Conduction bottom", "C", func() { w.goTo(present.ConductionBottom) }},
		{menuGo, "Smallest direct gap", "D", func() { w.goTo(present.DirectGap) }},
		{menuGo, "Next point of the path", "Right", func() { w.stepAlong(1, false) }},
		{menuGo, "Previous point of the path", "Left", func() { w.stepAlong(-1, false) }},
		{menuGo, "Next special point of the path", "Shift+Right", func() { w.stepAlong(1, true) }},
		{menuGo, "Previous special point of the path", "Shift+Left", func() { w.stepAlong(-1, true) }},
		{menuGo, "Next level up", "Up", func() { w.stepLevel(1) }},
		{menuGo, "Next level down", "Down", func() { w.stepLevel(-1) }},

		{menuView, "What the width of bands tells", "O", w.nextColour},
		{menuView, "Energy zero: valence top or Fermi level, or the model's", "E", w.toggleZero},
		{menuView, "Density: by shell, or bonding and antibonding", "P", w.toggleDOS},
		{menuView, "Frame of coordinates", "F", w.nextFrame},
		{menuView, "Magnify energies", "+", func() { w.zoomCentre(0.8) }},
		{menuView, "Show more energies", "-", func() { w.zoomCentre(1.25) }},
		{menuView, "Higher energies", "PageUp", func() { w.pan(0.15) }},
		{menuView, "Lower energies", "PageDown", func() { w.pan(-0.15) }},
		{menuView, "All energies that matter", "Home", w.automaticWindow},
		{menuView, "Look along [100]", "1", along(look100, upZ)},
		{menuView, "Look along [110]", "2", along(look110, upZ)},
		{menuView, "Look along [111]", "3", along(look111, upZ)},
		{menuView, "Usual side of the zone", "0", w.usualSide},
		{menuView, "Turn the zone left", "Ctrl+Left", func() { w.turn(-24, 0) }},
		{menuView, "Turn the zone right", "Ctrl+Right", func() { w.turn(24, 0) }},
		{menuView, "Turn the zone up", "Ctrl+Up", func() { w.turn(0, -24) }},
		{menuView, "Turn the zone down", "Ctrl+Down", func() { w.turn(0, 24) }},
		{menuView, "Irreducible wedge", "W", w.toggleWedge},
		{menuView, "Pick nearer", "[", func() { w.setDepth(w.v.Depth - 0.05) }},
		{menuView, "Pick deeper", "]", func() { w.setDepth(w.v.Depth + 0.05) }},
		{menuView, "Path or Ledger, in a narrow window", "Y", w.swapLower},
		{menuView, "Light or dark", "Ctrl+L", w.toggleTheme},

		{menuHelp, "Find a command", "/, Ctrl+F", w.showPalette},
		{menuHelp, "Keys", "F1, ?", w.showKeys},
		{menuHelp, "Let go of what is open or running", "Escape", w.escape},
	}
	w.keys = map[string]*command{}
	for i := range w.command {
		for _, k := range strings.Split(w.command[i].keys, ",") {
			if k = strings.TrimSpace(k); k != "" {
				w.keys[k] = &w.command[i]
			}
		}
	}
}

// menu is the menu bar.
func (w *Window) menu() *fyne.MainMenu {
	var list []*fyne.Menu
	for _, name := range menus {
		m := fyne.NewMenu(name)
		for i := range w.command {
			if c := &w.command[i]; c.menu == name {
				label := c.name
				if c.keys != "" {
					label += "   " + shownKeys(c.keys)
				}
				item := fyne.NewMenuItem(label, c.do)
				item.IsQuit = c.name == "Quit"
				m.Items = append(m.Items, item)
			}
		}
		list = append(list, m)
	}
	return fyne.NewMainMenu(list...)
}

// shownKeys is the keys of a command as printed.
func shownKeys(keys string) string {
	var list []string
	for _, k := range strings.Split(keys, ", ") {
		parts := strings.Split(k, "+")
		last := parts[len(parts)-1]
		switch last {
		case "Left", "Right", "Up", "Down", "PageUp", "PageDown":
			parts[len(parts)-1] = map[string]string{"Left": "←", "Right": "→", "Up": "↑", "Down": "↓", "PageUp": "Page ↑", "PageDown": "Page ↓"}[last]
		case "-":
			parts[len(parts)-1] = "−"
		}
		list = append(list, strings.Join(parts, "+"))
	}
	return strings.Join(list, " or ")
}

// bindKeys lets the keys of all commands reach them, whatever has the focus
// but a text being typed.
func (w *Window) bindKeys() {
	c := w.win.Canvas()
	c.SetOnTypedKey(w.key)
	c.SetOnTypedRune(w.rune)
	for keys := range w.keys {
		if s := shortcut(keys); s != nil {
			c.AddShortcut(s, func(fyne.Shortcut) { w.press(keys) })
		}
	}
	// The toolkit has shortcuts of its own for these.
	c.AddShortcut(&fyne.ShortcutCopy{}, func(fyne.Shortcut) { w.press("Ctrl+C") })
	c.AddShortcut(&fyne.ShortcutUndo{}, func(fyne.Shortcut) { w.press("Ctrl+Z") })
	c.AddShortcut(&fyne.ShortcutRedo{}, func(fyne.Shortcut) { w.press("Ctrl+Y") })
}

// shortcut is the toolkit's form of a combination with Ctrl; nil for others.
func shortcut(keys string) fyne.Shortcut {
	parts := strings.Split(keys, "+")
	var m fyne.KeyModifier
	for _, p := range parts[:len(parts)-1] {
		switch p {
		case "Ctrl":
			m |= fyne.KeyModifierControl
		case "Shift":
			m |= fyne.KeyModifierShift
		}
	}
	if m&fyne.KeyModifierControl == 0 {
		return nil
	}
	return &desktop.CustomShortcut{KeyName: fyne.KeyName(parts[len(parts)-1]), Modifier: m}
}

// press does what a key stands for.
func (w *Window) press(keys string) bool {
	if keys != "Escape" && w.win.Canvas().Overlays().Top() != nil {
		return false // what is open comes first
	}
	c, ok := w.keys[keys]
	if ok {
		c.do()
	}
	return ok
}

// keyNames are the keys that come as names and not as characters.
var keyNames = map[fyne.KeyName]string{
	fyne.KeyLeft: "Left", fyne.KeyRight: "Right", fyne.KeyUp: "Up", fyne.KeyDown: "Down",
	fyne.KeyPageUp: "PageUp", fyne.KeyPageDown: "PageDown", fyne.KeyHome: "Home", fyne.KeyDelete: "Delete",
	fyne.KeyEscape: "Escape", fyne.KeyF1: "F1",
}

func (w *Window) key(e *fyne.KeyEvent) {
	name, ok := keyNames[e.Name]
	if !ok {
		return
	}
	if d, ok := w.app.Driver().(desktop.Driver); ok && d.CurrentKeyModifiers()&fyne.KeyModifierShift != 0 {
		if w.press("Shift+" + name) {
			return
		}
	}
	w.press(name)
}

func (w *Window) rune(r rune) {
	text := strings.ToUpper(string(r))
	if text == "=" {
		text = "+"
	}
	w.press(text)
}

// escape lets go of what is open, picked or running, one at a time.
func (w *Window) escape() {
	switch {
	case w.shown != nil:
		w.shown.close()
	case w.dialog != nil:
		w.dialog.Hide()
	case w.win.Canvas().Overlays().Top() != nil:
	case w.picking:
		w.togglePicking()
	case len(w.sn.Progress) > 0 && !w.sn.Stopped:
		w.stopOrResume()
	default:
		w.quiet()
		w.win.Canvas().Unfocus()
	}
}

func (w *Window) zoomCentre(factor float64) {
	lo, hi := present.EnergyWindow(w.sn, &w.v)
	about := (lo + hi) / 2
	if f := w.sn.Focus; f != nil && f.Set.Energy > lo && f.Set.Energy < hi {
		about = f.Set.Energy
	}
	w.zoomEnergy(about, factor)
	w.keepWindow()
}

func (w *Window) pan(share float64) {
	lo, hi := present.EnergyWindow(w.sn, &w.v)
	w.setWindow(lo+share*(hi-lo), hi+share*(hi-lo))
	w.keepWindow()
}

func (w *Window) turn(dx, dy float64) {
	w.v.Camera = w.v.Camera.Turned(dx, dy, w.zoneArea())
	w.drawZone()
	w.keepCamera()
}

func (w *Window) undo() {
	if !w.session.CanUndo() {
		w.say("There is nothing to undo.")
		return
	}
	w.session.Undo()
	w.quiet()
}

func (w *Window) redo() {
	if !w.session.CanRedo() {
		w.say("There is nothing to redo.")
		return
	}
	w.session.Redo()
	w.quiet()
}

func (w *Window) toggleTheme() {
	if w.v.Theme.Dark {
		w.setTheme("light")
	} else {
		w.setTheme("dark")
	}
}
