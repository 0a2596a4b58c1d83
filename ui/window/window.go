package window

import (
	"fmt"
	"io"
	"math"
	"path/filepath"
	"strings"
	"sync/atomic"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/theme"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/render/picture"
	"bandwright/render/scene"
	"bandwright/ui/doc"
	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

// Options say how the window starts.
type Options struct {
	App    fyne.App
	Width  float32 // 0: as remembered, or as the screen allows
	Height float32
	Config string    // folder of the preferences; "" keeps none
	Theme  string    // "light" or "dark"; "" as remembered
	Log    io.Writer // receives the window's state, one JSON object a line; may be nil
	Study  string    // file to open at the start; "" starts with silicon
}

// Window is the one window of the program.
type Window struct {
	app     fyne.App
	win     fyne.Window
	session *session.Session
	sn      *session.Snapshot
	v       present.View
	prefs   *preferences
	record  *recorder
	lag     latency

	bandsShown atomic.Uint64 // bits of the lattice constant of the bands drawn last

	zonePicture present.ZonePanel
	zone        *view.Panel
	bands       *view.Panel
	dos         *view.Panel
	ladder      *view.Panel
	ledger      *view.Panel
	path        *view.Panel
	desk        *desk
	deskBox     *fyne.Container
	hints       *view.Hints
	strips      []*canvas.Rectangle // behind the controls below path and Ledger

	header  *header
	editor  *pathEditor
	tools   *tools
	foot    *foot
	command []command
	keys    map[string]*command
	shown   *palette

	scrub     scrub
	turning   *fyne.Animation
	soon      *time.Timer          // until results out of date are drawn as such
	dragging  bool                 // a point of the path's list is being dragged
	picking   bool                 // clicks in the Zone add points to the path
	dialog    *dialog.CustomDialog // the one that is open
	confirm   func()               // takes the form that is open
	ledgerEnd float64              // height of the Ledger's content
	notice    string               // what just happened, or went wrong
	noticeBad bool
}

// New makes the window. It is not shown yet.
func New(o Options) (*Window, error) {
	w := &Window{app: o.App, hints: view.NewHints()}
	w.prefs = loadPreferences(o.Config)
	if o.Theme != "" {
		w.prefs.Theme = o.Theme
	}
	w.v = present.View{Theme: themeNamed(w.prefs.Theme), Depth: 0.5}
	w.v.Camera = scene.NewCamera(mgl64.Vec3{}, 1)
	o.App.Settings().SetTheme(&view.Theme{Colours: w.v.Theme})

	d := doc.New()
	d.View.Frame = w.prefs.frame()
	var openErr error
	if o.Study != "" {
		if read, err := doc.Load(o.Study); err != nil {
			openErr = err
		} else {
			d = read
		}
	}
	w.session = session.New(session.Options{Post: view.Post, Document: d})
	if o.Study != "" && openErr == nil {
		openErr = w.session.Open(o.Study)
	}
	w.sn = w.session.Snapshot()
	w.win = o.App.NewWindow("Bandwright")
	w.win.SetPadded(false)
	w.build()
	w.takeView()
	w.session.OnChange(w.changed)
	w.changed(w.session.Snapshot())
	if openErr != nil {
		w.fail(fmt.Errorf("%s was not opened: %w", filepath.Base(o.Study), openErr))
	} else if o.Study != "" {
		w.prefs.opened(o.Study)
	}
	w.record = newRecorder(w, o.Log)

	width, height := o.Width, o.Height
	if width == 0 {
		width, height = w.prefs.Width, w.prefs.Height
	}
	if width < 400 || height < 300 {
		width, height = 1440, 900
	}
	w.win.Resize(fyne.NewSize(width, height))
	w.win.SetCloseIntercept(w.askClose)
	w.win.SetOnDropped(w.dropped)
	w.win.SetMaster()
	return w, nil
}

// ShowAndRun shows the window and returns when it is closed.
func (w *Window) ShowAndRun() {
	w.record.start()
	w.win.ShowAndRun()
	w.record.stop()
	w.session.Close()
}

func themeNamed(name string) *present.Theme {
	if name == "dark" {
		return present.Night()
	}
	return present.Light()
}

// build makes the panels and the controls.
func (w *Window) build() {
	w.commands()
	w.zone = view.NewPanel(fyne.NewSize(180, 160), w.zoneHandler())
	w.bands = view.NewPanel(fyne.NewSize(200, 160), w.bandsHandler())
	w.bands.OnDrawn(func() { w.lag.shown(math.Float64frombits(w.bandsShown.Load())) })
	w.dos = view.NewPanel(fyne.NewSize(80, 160), w.dosHandler())
	w.ladder = view.NewPanel(fyne.NewSize(180, 160), w.ladderHandler())
	w.ledger = view.NewPanel(fyne.NewSize(200, 80), w.ledgerHandler())
	w.path = view.NewPanel(fyne.NewSize(160, 60), w.pathHandler())

	w.header = newHeader(w)
	w.editor = newPathEditor(w)
	w.tools = newTools(w)
	w.foot = newFoot(w)

	// The pictures bring their own paper. A rectangle below each would cost as
	// much as the picture where there is no graphics card.
	strip := func(content fyne.CanvasObject) fyne.CanvasObject {
		back := canvas.NewRectangle(theme.Color(theme.ColorNameHeaderBackground))
		w.strips = append(w.strips, back)
		return container.NewStack(back, content)
	}
	w.desk = &desk{
		header: w.header.box, foot: w.foot.box,
		zone:   container.NewStack(w.zone, w.tools.zone),
		bands:  container.NewStack(w.bands, w.tools.bands),
		dos:    w.dos,
		ladder: w.ladder,
		path:   container.New(stacked{}, w.path, strip(w.editor.box)),
		ledger: container.New(stacked{}, w.ledger, strip(w.tools.factors)),
		split:  0.57, zoneShare: 0.26, pathShare: 0.34,
	}
	w.desk.changed = func(bool) { w.header.narrowed() }
	share := func(f *float32, whole func() float32, lo, hi float32) func(float32) {
		return func(d float32) {
			*f = max(lo, min(hi, *f+d/max(1, whole())))
			w.deskBox.Refresh()
		}
	}
	d := w.desk
	d.rowGrip = newGrip(false, share(&d.split, func() float32 { return d.size.Height }, 0.3, 0.8))
	d.zoneGrip = newGrip(true, share(&d.zoneShare, func() float32 { return d.size.Width }, 0.15, 0.45))
	d.pathGap = newGrip(true, share(&d.pathShare, func() float32 { return d.size.Width }, 0.2, 0.55))
	w.deskBox = container.New(d, d.header, d.zone, d.bands, d.dos, d.ladder, d.path, d.ledger, d.foot, d.rowGrip, d.zoneGrip, d.pathGap)
	d.origin = func() float32 { return w.app.Driver().AbsolutePositionForObject(w.deskBox).Y }
	w.win.SetContent(container.NewStack(w.deskBox, w.hints.Layer))
	w.win.SetMainMenu(w.menu())
	w.bindKeys()
}

// takeView makes the window look as the study says.
func (w *Window) takeView() {
	dv := w.sn.Doc.View
	w.v.Window = dv.Window
	c := scene.NewCamera(mgl64.Vec3{}, 1)
	if q := dv.Camera; q[4] > 0 {
		c.Orientation = mgl64.Quat{W: q[0], V: mgl64.Vec3{q[1], q[2], q[3]}}.Normalize()
		c.Zoom = q[4]
	}
	w.v.Camera = c
	w.v.Glance = present.Glance{}
	w.v.Scroll, w.v.Down = 0, 0
}

// changed shows a new snapshot.
func (w *Window) changed(sn *session.Snapshot) {
	old := w.sn
	w.sn = sn
	if old == nil || old.Doc.View.Window != sn.Doc.View.Window {
		w.v.Window = sn.Doc.View.Window
	}
	w.title()
	w.header.show()
	if !underway(old, sn) {
		w.editor.show()
		w.tools.show()
		w.foot.show()
	}
	if w.soon != nil {
		w.soon.Stop()
	}
	w.v.Lagging = false
	if sn.BandsStale || sn.DOSStale || sn.EdgesStale {
		w.soon = time.AfterFunc(staleAfter, func() {
			view.Post(func() {
				w.v.Lagging = true
				w.drawAll()
				w.foot.show()
			})
		})
		if underway(old, sn) {
			// The new results will be here in a moment: drawing the old ones
			// once more would only keep them waiting.
			return
		}
	}
	w.drawAll()
}

// staleAfter is how long results may be out of date before it shows.
const staleAfter = 150 * time.Millisecond

// underway says whether nothing to be drawn has changed but that the results
// no longer belong to the study.
func underway(old, sn *session.Snapshot) bool {
	return old != nil && sn.BandsStale && sn.BuildErr == nil && sn.Bands == old.Bands && sn.Held == old.Held &&
		sn.Edges == old.Edges && sn.Curve == old.Curve && sn.Doc.View == old.Doc.View && sn.PinA == old.PinA && sn.PinB == old.PinB
}

func (w *Window) title() {
	name := "untitled"
	if w.sn.File != "" {
		name = filepath.Base(w.sn.File)
	}
	if w.sn.Modified {
		name += " •"
	}
	if t := w.sn.Doc.Title; t != "" {
		name = t + " – " + name
	}
	if name += " – Bandwright"; name != w.win.Title() {
		w.win.SetTitle(name)
	}
}

func (w *Window) drawAll() {
	w.drawZone()
	w.drawEnergies()
	w.drawLedger()
	w.drawPath()
}

func (w *Window) drawZone() {
	sn, v := w.sn, w.v
	w.zone.SetDraw(func(width, height float64) *picture.Picture {
		return w.zonePicture.Draw(sn, &v, width, height)
	})
}

func (w *Window) drawEnergies() {
	w.drawBands()
	sn, v := w.sn, w.v
	w.dos.SetDraw(func(width, height float64) *picture.Picture { return present.DOS(sn, &v, width, height) })
	w.ladder.SetDraw(func(width, height float64) *picture.Picture { return present.Ladder(sn, &v, width, height) })
}

func (w *Window) drawBands() {
	sn, v := w.sn, w.v
	w.bands.SetDraw(func(width, height float64) *picture.Picture {
		if sn.Built != nil {
			w.bandsShown.Store(math.Float64bits(sn.Built.Crystal.Setting.A))
		}
		return present.Bands(sn, &v, width, height)
	})
}

func (w *Window) drawLedger() {
	sn, v := w.sn, w.v
	w.ledger.SetDraw(func(width, height float64) *picture.Picture {
		p, end := present.Ledger(sn, &v, width, height)
		view.Post(func() { w.ledgerEnd = end })
		return p
	})
}

func (w *Window) drawPath() {
	sn, v := w.sn, w.v
	w.path.SetDraw(func(width, height float64) *picture.Picture { return present.Path(sn, &v, width, height) })
}

// do carries out an edit; what stands against it is told in the foot.
func (w *Window) do(e session.Edit) bool {
	if err := w.session.Do(e); err != nil {
		w.fail(err)
		return false
	}
	w.quiet()
	return true
}

// say tells what happened.
func (w *Window) say(text string) {
	w.notice, w.noticeBad = text, false
	w.foot.show()
}

// fail tells what went wrong.
func (w *Window) fail(err error) {
	text := strings.TrimSpace(err.Error())
	w.notice, w.noticeBad = text, true
	w.foot.show()
}

// quiet takes back the last notice.
func (w *Window) quiet() {
	if w.notice != "" {
		w.notice, w.noticeBad = "", false
		w.foot.show()
	}
}

// setTheme changes between light and dark.
func (w *Window) setTheme(name string) {
	w.prefs.Theme = name
	w.v.Theme = themeNamed(name)
	w.app.Settings().SetTheme(&view.Theme{Colours: w.v.Theme})
	for _, r := range w.strips {
		r.FillColor = theme.Color(theme.ColorNameHeaderBackground)
		r.Refresh()
	}
	w.drawAll()
	w.foot.show()
	w.prefs.save()
}
