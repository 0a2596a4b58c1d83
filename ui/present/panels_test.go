package present

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/go-gl/mathgl/mgl64"
	"pgregory.net/rapid"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/ledger"
	"bandwright/physics/path"
	"bandwright/render/picture"
	"bandwright/render/typeset"
	"bandwright/ui/session"
)

// panels are all that the window shows, by name.
func panels(sn *session.Snapshot, v *View) map[string]func(w, h float64) *picture.Picture {
	var zone ZonePanel
	return map[string]func(w, h float64) *picture.Picture{
		"zone":   func(w, h float64) *picture.Picture { return zone.Draw(sn, v, w, h) },
		"bands":  func(w, h float64) *picture.Picture { return Bands(sn, v, w, h) },
		"dos":    func(w, h float64) *picture.Picture { return DOS(sn, v, w, h) },
		"ladder": func(w, h float64) *picture.Picture { return Ladder(sn, v, w, h) },
		"ledger": func(w, h float64) *picture.Picture { p, _ := Ledger(sn, v, w, h); return p },
		"path":   func(w, h float64) *picture.Picture { return Path(sn, v, w, h) },
		"foot":   func(w, h float64) *picture.Picture { return Foot(sn, v, Status{Notice: "Saved"}, w, h) },
	}
}

// snapshots are states that the window can meet: computed ones, and ones in
// which something is missing.
func snapshots(t *testing.T) map[string]*session.Snapshot {
	t.Helper()
	si, gaas, al := computed(t, "vogl1983/Si", false), computed(t, "jancu1998/GaAs", true), computed(t, "fitted/Al", false)
	list := map[string]*session.Snapshot{"Si": si, "GaAs": gaas, "Al": al, "nothing": {Doc: si.Doc}}
	broken := *si
	broken.BuildErr, broken.BandsStale, broken.DOSStale, broken.EdgesStale = errors.New("the crystal cannot be built"), true, true, true
	list["broken"] = &broken
	bare := *si
	bare.Bands, bare.DOS, bare.Curve, bare.Edges, bare.Held, bare.Focus, bare.FermiKnown = nil, nil, nil, nil, nil, nil, false
	list["bare"] = &bare
	pathless := *si
	built := *si.Built
	built.Path, built.PathErr = path.Path{}, errors.New("no path")
	pathless.Built, pathless.Bands, pathless.BandsErr = &built, nil, errors.New("no path")
	list["pathless"] = &pathless
	pinned := *gaas
	pinned.Doc.View.Colour, pinned.Doc.View.DOS = "bonding", "bonding"
	pinned.PinA = &session.Pinned{Name: "A", Formula: "GaAs", SetID: "jancu1998/GaAs", Ledger: gaas.Held, Entry: &gaas.Held.Entries[1]}
	pinned.PinB = &session.Pinned{Name: "B", Formula: "Si", SetID: "vogl1983/Si", Ledger: si.Held, Entry: &si.Held.Entries[1]}
	pinned.Contrast = ledger.Contrast(gaas.Held.Entries[1], si.Held.Entries[1])
	list["pinned"] = &pinned
	return list
}

// Every panel can be drawn in every state at every size, shows something, and
// lets no letter leave it.
func TestPanelsAtAllSizes(t *testing.T) {
	themes := []*Theme{Light(), Night()}
	if testing.Short() {
		themes = themes[:1]
	}
	for name, sn := range snapshots(t) {
		if testing.Short() && name == "broken" {
			continue
		}
		for _, theme := range themes {
			v := viewOf(theme)
			v.Wedge = true
			v.Glance = Glance{On: true, K: lattice.FracK{0.1, 0.2, 0.3}, X: 1, OnPath: true, Energy: -3, HasEnergy: true, Note: "Δ"}
			for panel, draw := range panels(sn, v) {
				for _, size := range [][2]float64{{1, 1}, {60, 40}, {300, 260}, {900, 700}, {2500, 1400}} {
					if testing.Short() && size[0] > 1000 {
						continue
					}
					p := draw(size[0], size[1])
					if p == nil || p.Len() == 0 {
						t.Fatalf("%s, %s at %v: nothing is drawn", name, panel, size)
					}
					if size[0] < 300 {
						continue
					}
					for _, text := range texts(p) {
						b := text.box
						if b.X0 < -1 || b.X1 > size[0]+1 || b.Y0 < -3 && panel != "ledger" && panel != "path" {
							t.Errorf("%s, %s at %v: %q stands at %v", name, panel, size, text.source, b)
						}
					}
				}
			}
		}
	}
}

type placedText struct {
	source string
	box    picture.Rect
}

// texts are the texts of a picture with their boxes.
func texts(p *picture.Picture) []placedText {
	c := &collector{}
	p.Replay(c)
	return c.list
}

type collector struct {
	picture.Renderer
	clip picture.Rect
	list []placedText
}

func (c *collector) Clip(r picture.Rect)                  { c.clip = r }
func (c *collector) Fill(*picture.Path, picture.Fill)     {}
func (c *collector) Stroke(*picture.Path, picture.Stroke) {}
func (c *collector) Text(t *picture.Text, x, y float64, s picture.TextStyle) {
	if s.Angle == 0 {
		c.list = append(c.list, placedText{t.Source, t.Box().Shift(x, y)})
	}
}

// Every letter that the panels print is in the project's fonts.
func TestFontsCoverThePanels(t *testing.T) {
	for name, sn := range snapshots(t) {
		v := viewOf(Light())
		v.Wedge = true
		for panel, draw := range panels(sn, v) {
			for _, text := range texts(draw(900, 700)) {
				for _, r := range text.source {
					if !typeset.Coverage(r) {
						t.Errorf("%s, %s: no shape for %q in %q", name, panel, r, text.source)
					}
				}
			}
		}
		for _, r := range strings.Join(append(Limits(sn), About(sn), Sampling(sn)), "") {
			if !typeset.Coverage(r) {
				t.Errorf("%s: no shape for %q in the limits", name, r)
			}
		}
	}
}

// Bands, DOS and Ladder of one height have the same energy axis.
func TestOneEnergyAxis(t *testing.T) {
	sn, v := computed(t, "vogl1983/Si", false), viewOf(Light())
	bands, dos := BandsPlot(sn, v, 700, 500), DOSPlot(sn, v, 150, 500)
	if bands.Y != dos.Y || bands.Y != EnergyScale(sn, v, 400, 500) {
		t.Errorf("the axes differ: %v, %v", bands.Y, dos.Y)
	}
	for _, e := range sn.Held.Entries {
		// The tick of a level in the Ladder stands at its energy.
		if e.Set.Energy > bands.Y.Lo && e.Set.Energy < bands.Y.Hi {
			p := Ladder(sn, v, 400, 500)
			if id, ok := p.HitTest(5, bands.Y.At(e.Set.Energy), 1); !ok || TargetOf(id) != (Target{Kind: Level, I: e.Set.First}) {
				t.Errorf("no tick at %.3f eV", e.Set.Energy)
			}
		}
	}
}

// Rows of the Ladder keep the order of energies and do not overlap.
func TestLadderRows(t *testing.T) {
	sn, v := computed(t, "jancu1998/GaAs", true), viewOf(Light())
	states := hamiltonian.NewStates(sn.Built.Model)
	for _, k := range []lattice.FracK{{}, {0.5, 0.5, 0.5}, {0.13, 0.21, 0.37}} {
		held, err := ledger.At(states, k)
		if err != nil {
			t.Fatal(err)
		}
		sn.Held, sn.Focus = held, &held.Entries[0]
		v.Window = [2]float64{held.Levels[0] - 1, held.Levels[len(held.Levels)-1] + 1}
		p := Ladder(sn, v, 420, 520)
		last := math.Inf(1)
		pitch := min(ladderRow, (520-PlotTop-PlotBottom-4)/float64(len(held.Entries)))
		for i := range held.Entries {
			b := p.BoundsOf(Target{Kind: Level, I: held.Entries[i].Set.First}.id())
			if b.Empty() {
				t.Fatalf("no row for set %d", i)
			}
			row := rowMiddle(p, held.Entries[i].Set.First)
			if row > last-0.95*pitch {
				t.Errorf("rows %d and %d are %.1f apart", i-1, i, last-row)
			}
			last = row
		}
	}
}

// rowMiddle is where the row of a set stands, found by its area.
func rowMiddle(p *picture.Picture, first int) float64 {
	top, bottom := math.Inf(1), math.Inf(-1)
	for y := 0.0; y < 520; y += 0.5 {
		if id, ok := p.HitTest(200, y, 0); ok && TargetOf(id) == (Target{Kind: Level, I: first}) {
			top, bottom = min(top, y), max(bottom, y)
		}
	}
	return (top + bottom) / 2
}

// The figures that the Ledger prints add up to the sum that it prints.
func TestPrintedTermsAddUp(t *testing.T) {
	sn := computed(t, "jancu1998/GaAs", true)
	for i := range sn.Held.Entries {
		sn.Focus = &sn.Held.Entries[i]
		sum, printed, terms := 0.0, math.NaN(), 0
		for _, line := range strings.Split(LedgerText(sn), "\n") {
			cells := strings.Split(line, "\t")
			if len(cells) != 3 || cells[2] != "eV" || strings.HasPrefix(cells[0], "net bond") {
				continue
			}
			var v float64
			if _, err := fmt.Sscanf(strings.ReplaceAll(cells[1], "−", "-"), "%g", &v); err != nil {
				t.Fatalf("%q: %v", line, err)
			}
			if cells[0] == "sum = E" {
				printed = v
			} else {
				sum += v
				terms++
			}
		}
		if math.Abs(sum-printed) > 1e-6*float64(terms+1) || math.Abs(printed-sn.Focus.Set.Energy) > 1e-6 {
			t.Errorf("set %d: the terms print a sum of %.6f, the sum is printed as %.6f, the level is %.6f", i, sum, printed, sn.Focus.Set.Energy)
		}
	}
}

func TestTargetsThereAndBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		want := Target{Kind(rapid.IntRange(0, int(BreakAfter)).Draw(t, "kind")), rapid.IntRange(0, 1<<14-1).Draw(t, "i"), rapid.IntRange(0, 1<<12-1).Draw(t, "j")}
		if got := TargetOf(want.id()); got != want {
			t.Fatalf("%v comes back as %v", want, got)
		}
	})
}

// Editing moves and drops points, and never leaves a run of fewer than two.
func TestPathEditing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var p path.Path
		n := 0
		for range rapid.IntRange(1, 4).Draw(t, "runs") {
			var run []path.Point
			for range rapid.IntRange(2, 5).Draw(t, "points") {
				run = append(run, path.Point{Label: fmt.Sprint(n)})
				n++
			}
			p.Runs = append(p.Runs, run)
		}
		before := labels(p)
		r := rapid.IntRange(0, len(p.Runs)-1).Draw(t, "run")
		i := rapid.IntRange(0, len(p.Runs[r])-1).Draw(t, "point")
		to, j := PathSlot(p, rapid.Float64Range(-50, 800).Draw(t, "y"))
		check := func(what string, q path.Path, change int) {
			got := labels(q)
			if len(got) != len(before)+change {
				t.Fatalf("%s: %v becomes %v", what, before, got)
			}
			for _, run := range q.Runs {
				if len(run) < 2 {
					t.Fatalf("%s leaves a run of %d points", what, len(run))
				}
			}
			slices.Sort(got)
			if len(slices.Compact(got)) != len(before)+change {
				t.Fatalf("%s doubles a point", what)
			}
		}
		check("moving", Moved(p, r, i, to, j), 0)
		if n > 2 {
			check("removing", Without(p, r, i), -1)
		}
		check("breaking", WithBreak(p, r, i), 0)
		check("reversing", Reversed(p), 0)
		if got := labels(Reversed(Reversed(p))); !slices.Equal(got, before) {
			t.Fatalf("twice reversed: %v", got)
		}
		check("adding", WithPoint(p, path.Point{Label: "new"}), 1)
		if got := labels(p); !slices.Equal(got, before) {
			t.Fatalf("an edit changed the path itself: %v", got)
		}
	})
}

func labels(p path.Path) (list []string) {
	for _, run := range p.Runs {
		for _, point := range run {
			list = append(list, point.Label)
		}
	}
	return list
}

func TestNumbers(t *testing.T) {
	for _, c := range []struct {
		got, want string
	}{
		{number(-0.0001, 3), "0.000"}, {number(-1.5, 2), "−1.50"}, {number(math.NaN(), 2), "not available"}, {signed(0, 1), "0.0"},
		{signed(2, 1), "+2.0"}, {signed(-2, 1), "−2.0"}, {signed(1e-9, 3), "0.000"}, {coordinate(0.375), "⅜"}, {coordinate(-1. / 3), "−⅓"},
		{coordinate(0.7311), "0.7311"}, {coordinate(-2), "−2"}, {superscript(48), "⁴⁸"},
	} {
		if c.got != c.want {
			t.Errorf("%q, want %q", c.got, c.want)
		}
	}
}

// A chip of an edge leads to its k point and level; those of aluminium to none.
func TestChips(t *testing.T) {
	sn := computed(t, "vogl1983/Si", false)
	chips := Chips(sn)
	if !strings.Contains(chips[0].Text, "1.171") || !strings.Contains(chips[0].Text, "indirect") || !strings.Contains(chips[0].Text, "measured") {
		t.Errorf("the first chip says %q", chips[0].Text)
	}
	goes := 0
	for _, c := range chips {
		if c.Goes {
			goes++
		}
	}
	if goes != 3 {
		t.Errorf("%d chips lead somewhere: %v", goes, chips)
	}
	al := Chips(computed(t, "fitted/Al", false))
	if !strings.HasPrefix(al[0].Text, "metal") {
		t.Errorf("aluminium: %q", al[0].Text)
	}
	// An altered or stretched model says so first.
	d := sn.Doc
	d.Model.Factors = map[string]float64{"shell1 spσ": 0.5}
	d.Crystal.A *= 1.07
	b, err := d.Build("")
	if err != nil {
		t.Fatal(err)
	}
	altered := &session.Snapshot{Doc: d, Built: b}
	for _, panel := range []string{"bands", "dos", "ladder", "ledger"} {
		if dump := panels(altered, viewOf(Light()))[panel](600, 400).Dump(); !strings.Contains(dump, "altered") {
			t.Errorf("%s does not say that the model is altered", panel)
		}
	}
	limits := Limits(altered)
	if !strings.HasPrefix(limits[0], "Altered") || !strings.Contains(limits[1], "extrapolation") {
		t.Errorf("the limits begin with %q, %q", limits[0], limits[1])
	}
}

func TestZonePicksWhereItDraws(t *testing.T) {
	sn, v := computed(t, "vogl1983/Si", false), viewOf(Light())
	var zone ZonePanel
	for range 20 {
		v.Camera = v.Camera.Turned(37, 21, ZoneArea(500, 480))
		p := zone.Draw(sn, v, 500, 480)
		seen := ZoneView(sn, v, 500, 480)
		for i, point := range sn.Built.Points {
			at, _ := seen.Project(mgl64.Vec3(sn.Built.Crystal.Lattice().Cart(point.K)))
			found := false
			for _, hit := range p.HitAll(nil, at.X, at.Y, 2) {
				found = found || TargetOf(hit.ID) == Target{Kind: SpecialPoint, I: i}
			}
			if !found {
				t.Errorf("%s is not where it is seen", point.Label)
			}
		}
	}
}
