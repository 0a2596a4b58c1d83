package present

import (
	"context"
	"fmt"
	"image"
	"testing"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/bands"
	"bandwright/physics/dos"
	"bandwright/physics/edges"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/ledger"
	"bandwright/render/picture"
	"bandwright/render/raster"
	"bandwright/render/scene"
	"bandwright/ui/doc"
	"bandwright/ui/session"
)

var made = map[string]*session.Snapshot{}

// computed is a snapshot as a session would publish it, of a shipped set. Each
// caller has one of its own.
func computed(tb testing.TB, id string, orbit bool) *session.Snapshot {
	tb.Helper()
	key := fmt.Sprint(id, orbit)
	if made[key] == nil {
		made[key] = compute(tb, id, orbit)
	}
	own := *made[key]
	return &own
}

func compute(tb testing.TB, id string, orbit bool) *session.Snapshot {
	tb.Helper()
	d, err := doc.ForSet(id)
	if err != nil {
		tb.Fatal(err)
	}
	d.Model.SpinOrbit = orbit
	d.Mesh = [3]int{12, 12, 12}
	b, err := d.Build("")
	if err != nil {
		tb.Fatal(err)
	}
	ctx := context.Background()
	sn := &session.Snapshot{Doc: d, Revision: 1, Built: b}
	sampling := b.Path.Sample(b.Crystal.Lattice(), 0.02)
	if sn.Bands, err = bands.Compute(ctx, b.Model, sampling, bands.Options{Weights: true}); err != nil {
		tb.Fatal(err)
	}
	if sn.DOS, err = dos.Compute(ctx, b.Model, b.Group, b.Mesh, dos.Options{Projections: true, Terms: true}); err != nil {
		tb.Fatal(err)
	}
	lo, hi := sn.DOS.Range()
	energies := make([]float64, 600)
	for i := range energies {
		energies[i] = lo - 0.5 + (hi-lo+1)*float64(i)/float64(len(energies)-1)
	}
	if sn.Curve, err = sn.DOS.Evaluate(energies); err != nil {
		tb.Fatal(err)
	}
	if sn.Edges, err = edges.Find(ctx, b.Model, b.Group, b.Mesh, edges.Options{DOS: sn.DOS}); err != nil {
		tb.Fatal(err)
	}
	sn.Fermi, sn.FermiKnown = sn.DOS.FermiLevel, true
	if sn.Edges.VBM != nil {
		sn.Fermi = sn.Edges.VBM.Energy
	}
	if sn.Held, err = ledger.At(hamiltonian.NewStates(b.Model), d.View.Held); err != nil {
		tb.Fatal(err)
	}
	sn.HeldLabel, sn.HeldStar = "Γ", b.Group.Star(d.View.Held, true)
	sn.Focus = &sn.Held.Entries[1]
	return sn
}

func viewOf(t *Theme) *View {
	return &View{Theme: t, Camera: scene.NewCamera(mgl64.Vec3{}, 1), Depth: 0.5}
}

// BenchmarkFrames draws what the window draws at once while something moves:
// the turning zone, the bands with the pointer over them, and the others, each
// from snapshot to pixels at 1000×800. A frame at 60 a second has 16.7 ms.
func BenchmarkFrames(b *testing.B) {
	const w, h = 1000, 800
	sn := computed(b, "vogl1983/Si", false)
	var zone ZonePanel
	v := viewOf(Light())
	img := image.NewRGBA(image.Rect(0, 0, w, h))
	for _, panel := range []struct {
		name string
		draw func(i int) *picture.Picture
	}{
		{"zone", func(i int) *picture.Picture {
			v.Camera = v.Camera.Turned(5, 1, ZoneArea(w, h))
			return zone.Draw(sn, v, w, h)
		}},
		{"bands", func(int) *picture.Picture { return Bands(sn, v, w, h) }},
		{"dos", func(int) *picture.Picture { return DOS(sn, v, w, h) }},
		{"ladder", func(int) *picture.Picture { return Ladder(sn, v, w, h) }},
		{"ledger", func(int) *picture.Picture { p, _ := Ledger(sn, v, w, h); return p }},
	} {
		b.Run(panel.name, func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				p := panel.draw(i)
				raster.Draw(img, p, 1)
			}
		})
	}
}
