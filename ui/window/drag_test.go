package window

import (
	"image"
	"testing"
	"time"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/render/raster"
	"bandwright/render/scene"
	"bandwright/ui/doc"
	"bandwright/ui/present"
	"bandwright/ui/session"
)

// dragger is a session whose results arrive on the goroutine that asks.
type dragger struct {
	s     *session.Session
	posts chan func()
	sn    *session.Snapshot
}

func newDragger(tb testing.TB) *dragger {
	d := &dragger{posts: make(chan func(), 1000)}
	d.s = session.New(session.Options{Post: func(f func()) { d.posts <- f }, Document: doc.New()})
	d.s.OnChange(func(sn *session.Snapshot) { d.sn = sn })
	d.sn = d.s.Snapshot()
	tb.Cleanup(d.s.Close)
	d.until(tb, func() bool { return d.sn.Edges != nil && !d.sn.Busy })
	return d
}

func (d *dragger) until(tb testing.TB, fits func() bool) {
	tb.Helper()
	deadline := time.After(60 * time.Second)
	for !fits() {
		select {
		case f := <-d.posts:
			f()
		case <-deadline:
			tb.Fatal("the session does not come to rest")
		}
	}
}

// BenchmarkDrag moves the lattice constant of silicon and waits until its new
// bands are pixels of a panel of the usual size: all that a frame of 16.7 ms
// must hold but for what the toolkit takes to show it. The peer beside it is
// the same with everything computed and drawn anew.
func BenchmarkDrag(b *testing.B) {
	const w, h = 560, 430
	v := &present.View{Theme: present.Light(), Camera: scene.NewCamera(mgl64.Vec3{}, 1), Depth: 0.5}
	img := image.NewRGBA(image.Rect(0, 0, w, h))
	draw := func(sn *session.Snapshot) {
		raster.Draw(img, present.Bands(sn, v, w, h), 1)
	}
	b.Run("drag", func(b *testing.B) {
		d := newDragger(b)
		a := 5.431
		for b.Loop() {
			a += 0.001
			if a > 5.7 {
				a = 5.2
			}
			if err := d.s.Do(session.SetLatticeConstant{A: a, Dragging: true}); err != nil {
				b.Fatal(err)
			}
			d.until(b, func() bool { return !d.sn.BandsStale && d.sn.Built.Crystal.Setting.A == a })
			draw(d.sn)
		}
	})
	b.Run("peer/anew", func(b *testing.B) {
		for b.Loop() {
			draw(newDragger(b).sn)
		}
	})
}
