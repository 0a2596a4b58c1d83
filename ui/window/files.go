package window

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/storage"
	"fyne.io/fyne/v2/widget"

	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/ui/doc"
	"bandwright/ui/session"
)

const studyEnding = ".bandstudy"

// open opens a study after asking what becomes of unsaved changes.
func (w *Window) open(file string) {
	w.unlessUnsaved("Open another study?", func() {
		if err := w.session.Open(file); err != nil {
			w.showProblem(filepath.Base(file)+" was not opened", err)
			return
		}
		w.prefs.opened(file)
		w.sn = w.session.Snapshot()
		w.takeView()
		w.changed(w.sn)
		w.say("Opened " + file)
	})
}

// use shows a document that has no file yet.
func (w *Window) use(d doc.Document, what string) {
	w.unlessUnsaved("Leave this study?", func() {
		w.session.New(d)
		w.sn = w.session.Snapshot()
		w.takeView()
		w.changed(w.sn)
		w.say(what)
	})
}

func (w *Window) newStudy() {
	d := doc.New()
	d.View.Frame = w.prefs.frame()
	w.use(d, "A new study of silicon.")
}

// unlessUnsaved goes on at once if there is nothing to lose, else asks.
func (w *Window) unlessUnsaved(question string, goOn func()) {
	if !w.sn.Modified {
		goOn()
		return
	}
	var d *dialog.CustomDialog
	text := widget.NewLabel("This study has changes that are not saved.")
	save := widget.NewButton("Save and go on", func() { d.Hide(); w.save(goOn) })
	save.Importance = widget.HighImportance
	d = dialog.NewCustomWithoutButtons(question, text, w.win)
	d.SetButtons([]fyne.CanvasObject{
		widget.NewButton("Cancel", func() { d.Hide() }),
		widget.NewButton("Go on without saving", func() { d.Hide(); goOn() }),
		save,
	})
	w.show(d, 420, 120)
}

// showProblem shows an error with all its lines.
func (w *Window) showProblem(title string, err error) {
	text := widget.NewLabel(err.Error())
	text.Wrapping = fyne.TextWrapWord
	d := dialog.NewCustom(title, "Close", text, w.win)
	w.show(d, 620, 200)
	w.fail(fmt.Errorf("%s: %w", title, err))
}

// save saves the study and then goes on; where it has no file it asks for one.
func (w *Window) save(then func()) {
	if w.session.File() == "" {
		w.askSave(then)
		return
	}
	if err := w.session.Save(); err != nil {
		w.showProblem("The study was not saved", err)
		return
	}
	w.say("Saved " + w.session.File())
	if then != nil {
		then()
	}
}

func (w *Window) saveAs(file string, then func()) {
	if filepath.Ext(file) == "" {
		file += studyEnding
	}
	if err := w.session.SaveAs(file); err != nil {
		w.showProblem("The study was not saved", err)
		return
	}
	w.prefs.opened(file)
	w.say("Saved " + file)
	if then != nil {
		then()
	}
}

func (w *Window) askOpen() { w.askFile(studyEnding, w.open) }

// askFile asks for a file with an ending, beginning where the last study lies.
func (w *Window) askFile(ending string, use func(file string)) {
	d := dialog.NewFileOpen(func(r fyne.URIReadCloser, err error) {
		if err != nil {
			w.showProblem("No file was opened", err)
			return
		}
		if r == nil {
			return
		}
		file := r.URI().Path()
		r.Close()
		use(file)
	}, w.win)
	d.SetFilter(storage.NewExtensionFileFilter([]string{ending}))
	if l, err := storage.ListerForURI(storage.NewFileURI(w.prefs.folder())); err == nil {
		d.SetLocation(l)
	}
	d.Resize(w.dialogSize(860, 560))
	d.Show()
}

// askSave asks where the study goes by a typed name: quicker than a tour of
// folders, and the tour is one button away.
func (w *Window) askSave(then func()) {
	start := w.session.File()
	if start == "" {
		name := strings.ToLower(strings.Join(strings.FieldsFunc(w.sn.Doc.Title, func(r rune) bool {
			return !(r >= '0' && r <= '9' || r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z')
		}), "-"))
		if name == "" {
			name = "study"
		}
		start = filepath.Join(w.prefs.folder(), name+studyEnding)
	}
	entry := w.newLine(start)
	w.ask("Save the study as", "Save", "File", entry, func() error {
		file := strings.TrimSpace(entry.Text)
		if file == "" {
			return errors.New("there is no file name: type one")
		}
		if filepath.Ext(file) == "" {
			file += studyEnding
		}
		if !filepath.IsAbs(file) {
			file = filepath.Join(w.prefs.folder(), file)
		}
		if _, err := os.Stat(file); err == nil && file != w.session.File() {
			dialog.ShowConfirm("Replace this file?", file+" exists already.", func(yes bool) {
				if yes {
					w.saveAs(file, then)
				}
			}, w.win)
			return nil
		}
		w.saveAs(file, then)
		return nil
	})
}

// ask shows a dialog with one field. What stands against the answer is told in
// the dialog, which stays open.
func (w *Window) ask(title, confirm, label string, field *line, answer func() error) {
	problem := widget.NewLabel("")
	problem.Importance = widget.DangerImportance
	problem.Wrapping = fyne.TextWrapWord
	problem.Hide()
	form := widget.NewForm(widget.NewFormItem(label, field))
	w.askForm(title, confirm, form, problem, answer)
	field.OnSubmitted = func(string) { w.confirm() }
	w.win.Canvas().Focus(field)
}

// askForm shows a form; answer takes it or says what is wrong.
func (w *Window) askForm(title, confirm string, form *widget.Form, problem *widget.Label, answer func() error) {
	var d *dialog.CustomDialog
	content := container.NewVBox(form, problem)
	d = dialog.NewCustomWithoutButtons(title, content, w.win)
	w.confirm = func() {
		if err := answer(); err != nil {
			problem.SetText(err.Error())
			problem.Show()
			return
		}
		d.Hide()
	}
	yes := widget.NewButton(confirm, func() { w.confirm() })
	yes.Importance = widget.HighImportance
	d.SetButtons([]fyne.CanvasObject{widget.NewButton("Cancel", func() { d.Hide() }), yes})
	w.show(d, 560, 180)
}

func (w *Window) askTitle() {
	entry := w.newLine(w.sn.Doc.Title)
	w.ask("Title of the study", "Set", "Title", entry, func() error {
		return w.session.Do(session.SetTitle{Title: strings.TrimSpace(entry.Text)})
	})
}

func (w *Window) askMesh() {
	d := w.sn.Doc.Mesh
	entry := w.newLine(fmt.Sprintf("%d %d %d", d[0], d[1], d[2]))
	w.ask("Mesh of the zone", "Compute", "Divisions", entry, func() error {
		fields := strings.Fields(strings.NewReplacer("×", " ", "x", " ", ",", " ").Replace(entry.Text))
		if len(fields) == 1 {
			fields = []string{fields[0], fields[0], fields[0]}
		}
		var mesh [3]int
		if len(fields) != 3 {
			return fmt.Errorf("%q has %d numbers: type one or three, as 24 or 24 24 24", entry.Text, len(fields))
		}
		for i, f := range fields {
			n, err := strconv.Atoi(f)
			if err != nil {
				return fmt.Errorf("%q is not a whole number", f)
			}
			mesh[i] = n
		}
		return w.session.Do(session.SetMesh{Divisions: mesh})
	})
}

// askPoint holds a k point that is typed.
func (w *Window) askPoint() {
	if w.sn.Built == nil {
		return
	}
	entry := w.newLine("")
	entry.PlaceHolder = "L, or 0.5 0.25 0.75"
	w.ask("Hold a k point", "Hold", "k in "+frameWords(w.sn.Doc.View.Frame), entry, func() error {
		p, err := path.ParsePoint(entry.Text, w.sn.Doc.View.Frame, w.sn.Built.Crystal.Setting)
		if err != nil {
			return err
		}
		return w.session.Do(session.Hold{K: p.K, Level: session.NearestEnergy})
	})
}

func frameWords(f lattice.Frame) string {
	switch f {
	case lattice.Primitive:
		return "primitive fractions"
	case lattice.Conventional:
		return "conventional fractions"
	case lattice.TwoPiOverA:
		return "units of 2π/a"
	}
	return "Å⁻¹"
}

func (w *Window) hold(k lattice.FracK) {
	w.do(session.Hold{K: k, Level: session.NearestEnergy})
}

// askCrystal builds a crystal from a prototype, elements and lattice constant.
func (w *Window) askCrystal() {
	var names []string
	for _, p := range crystal.Prototypes() {
		names = append(names, p.Name)
	}
	now := w.sn.Doc.Crystal
	prototype := widget.NewSelect(names, nil)
	prototype.SetSelected(now.Prototype)
	elements := w.newLine(strings.Join(now.Elements, " "))
	a := w.newLine(strconv.FormatFloat(now.A, 'g', -1, 64))
	form := widget.NewForm(
		widget.NewFormItem("Prototype", prototype),
		widget.NewFormItem("Elements", elements),
		widget.NewFormItem("a / Å", a))
	form.Items[1].HintText = "of compounds the anion first: As Ga"
	problem := widget.NewLabel("The model stays the same: its set must know these elements.")
	problem.Wrapping = fyne.TextWrapWord
	w.askForm("Own crystal", "Build", form, problem, func() error {
		length, err := strconv.ParseFloat(strings.Replace(strings.TrimSpace(a.Text), ",", ".", 1), 64)
		if err != nil {
			return fmt.Errorf("the lattice constant %q is not a number: type a length in Å", a.Text)
		}
		c := doc.Crystal{Prototype: prototype.Selected, Elements: strings.Fields(strings.ReplaceAll(elements.Text, ",", " ")), A: length}
		return w.session.Do(session.SetCrystal{Crystal: c})
	})
}

// askSet takes a parameter set from a file of the user's own.
func (w *Window) askSet() { w.askFile(".toml", w.useSetFile) }

func (w *Window) useSetFile(file string) {
	if err := w.session.Do(session.UseSetFile{File: file}); err != nil {
		w.showProblem("The parameter set was not taken", err)
		return
	}
	w.say("Parameters from " + file)
}

// dropped takes files that are dropped on the window.
func (w *Window) dropped(_ fyne.Position, list []fyne.URI) {
	if len(list) == 0 {
		return
	}
	file := list[0].Path()
	if strings.EqualFold(filepath.Ext(file), ".toml") {
		w.useSetFile(file)
		return
	}
	w.open(file)
}

func (w *Window) showExamples() {
	var items []choice
	list, err := session.Examples()
	if err != nil {
		w.fail(err)
		return
	}
	for _, e := range list {
		items = append(items, choice{e.Document.Title, e.Name, func() { w.use(e.Document, "An example study: "+e.Document.Title) }})
	}
	w.openPalette("example studies", items)
}

func (w *Window) showRecent() {
	var items []choice
	for _, file := range w.prefs.Recent {
		items = append(items, choice{filepath.Base(file), filepath.Dir(file), func() { w.open(file) }})
	}
	if len(items) == 0 {
		w.say("No study was opened or saved yet.")
		return
	}
	w.openPalette("recent studies", items)
}

// askClose ends the program after asking what becomes of unsaved changes.
func (w *Window) askClose() {
	w.unlessUnsaved("Quit?", func() {
		s := w.win.Canvas().Size()
		w.prefs.Width, w.prefs.Height = s.Width, s.Height
		w.prefs.save()
		w.win.SetCloseIntercept(nil)
		w.win.Close()
	})
}
