package session

import (
	"context"
	"fmt"
	"os"
	"slices"
	"testing"
	"time"

	"bandwright/physics/bands"
	"bandwright/physics/dos"
	"bandwright/physics/edges"
	"bandwright/ui/doc"
)

// dragTo moves the lattice constant and returns how long it took until a
// snapshot had the new bands.
func dragTo(t testing.TB, s *Session, l *loop, a float64) (edit, bands time.Duration) {
	begin := time.Now()
	if err := s.Do(SetLatticeConstant{A: a, Dragging: true}); err != nil {
		t.Fatal(err)
	}
	edit = time.Since(begin)
	for s.Snapshot().BandsStale {
		l.turn(t)
	}
	bands = time.Since(begin)
	if got := s.Snapshot().Built.Crystal.Setting.A; got != a {
		t.Fatalf("bands at a = %g, want %g", got, a)
	}
	return edit, bands
}

// everything computes all that the window shows from the document at once, as
// without previews: build, bands, density, edges.
func everything(t testing.TB, d doc.Document) time.Duration {
	begin := time.Now()
	b, err := d.Build("")
	if err != nil {
		t.Fatal(err)
	}
	ctx := context.Background()
	c := &core{source: source{doc: d}, built: b}
	sampling, _ := c.sampling(0)
	if _, err := bands.Compute(ctx, b.Model, sampling, bands.Options{Weights: true}); err != nil {
		t.Fatal(err)
	}
	x, err := dos.Compute(ctx, b.Model, b.Group, b.Mesh, dos.Options{Projections: true, Terms: true})
	if err != nil {
		t.Fatal(err)
	}
	if _, err := x.Evaluate(energyGrid(x)); err != nil {
		t.Fatal(err)
	}
	if _, err := edges.Find(ctx, b.Model, b.Group, b.Mesh, edges.Options{DOS: x}); err != nil {
		t.Fatal(err)
	}
	return time.Since(begin)
}

func median(d []time.Duration) time.Duration {
	slices.Sort(d)
	return d[len(d)/2]
}

// measureDrag returns medians over a drag of the lattice constant.
func measureDrag(t testing.TB, s *Session, l *loop, rounds int) (edit, bands time.Duration, points int) {
	settle(t, s, l)
	a := s.Snapshot().Doc.Crystal.A
	var es, bs []time.Duration
	for i := range rounds {
		e, b := dragTo(t, s, l, a*(1+1e-4*float64(i+1)))
		es, bs = append(es, e), append(bs, b)
	}
	points = len(s.Snapshot().Bands.Sampling.K)
	do(t, s, SetLatticeConstant{A: a})
	settle(t, s, l)
	return median(es), median(bs), points
}

// dragSets are the models of the latency figures, from the usual to the largest.
var dragSets = []struct {
	id        string
	spinOrbit bool
}{
	{"vogl1983/Si", false},
	{"vogl1983/GaAs", true},
	{"boykin2004/Si", true},
}

// TestPeerDrag checks that bands follow a dragged lattice constant within
// a frame, beside computing everything anew.
func TestPeerDrag(t *testing.T) {
	if os.Getenv("BANDWRIGHT_BENCH") != "1" {
		t.Skip("set BANDWRIGHT_BENCH=1 to measure")
	}
	const frame = 16 * time.Millisecond
	for _, set := range dragSets {
		s, l := start(t, doc.Document{})
		do(t, s, UseSet{set.id})
		settle(t, s, l)
		do(t, s, SetSpinOrbit{set.spinOrbit})
		edit, bands, points := measureDrag(t, s, l, 101)
		var all []time.Duration
		for range 5 {
			all = append(all, everything(t, s.Snapshot().Doc))
		}
		whole := median(all)
		fmt.Printf("Dragged lattice constant, %s, spin–orbit %v: new bands on %d k points after %.1f ms (edit %.3f ms, medians), everything anew %.0f ms, ratio %.0f\n",
			set.id, set.spinOrbit, points, bands.Seconds()*1e3, edit.Seconds()*1e3, whole.Seconds()*1e3, whole.Seconds()/bands.Seconds())
		if bands > frame {
			t.Errorf("%s: %v until new bands, a frame is %v", set.id, bands, frame)
		}
		if edit > time.Millisecond {
			t.Errorf("%s: the edit itself takes %v", set.id, edit)
		}
		if whole < 3*bands {
			t.Errorf("%s: bands come after %v, everything after %v", set.id, bands, whole)
		}
	}
}

func BenchmarkDrag(b *testing.B) {
	for _, set := range dragSets {
		b.Run(fmt.Sprintf("%s/%v", set.id, set.spinOrbit), func(b *testing.B) {
			s, l := start(b, doc.Document{})
			do(b, s, UseSet{set.id})
			do(b, s, SetSpinOrbit{set.spinOrbit})
			settle(b, s, l)
			a := s.Snapshot().Doc.Crystal.A
			b.ResetTimer()
			for i := range b.N {
				dragTo(b, s, l, a*(1+1e-6*float64(i+1)))
			}
		})
		b.Run(fmt.Sprintf("everything anew/%s/%v", set.id, set.spinOrbit), func(b *testing.B) {
			s, l := start(b, doc.Document{})
			do(b, s, UseSet{set.id})
			do(b, s, SetSpinOrbit{set.spinOrbit})
			d := settle(b, s, l).Doc
			b.ResetTimer()
			for range b.N {
				everything(b, d)
			}
		})
	}
}

// BenchmarkStart is the time from nothing to the first bands.
func BenchmarkStart(b *testing.B) {
	for range b.N {
		l := newLoop()
		s := New(Options{Post: l.post})
		for s.Snapshot().Bands == nil {
			l.turn(b)
		}
		s.Close()
	}
}

// BenchmarkHold is the time from a click to the exact breakdown of the k point.
func BenchmarkHold(b *testing.B) {
	s, l := start(b, doc.Document{})
	settle(b, s, l)
	b.ResetTimer()
	for i := range b.N {
		do(b, s, Hold{K: [3]float64{float64(i%1000) / 3000, 0.1, 0.2}, Level: 3})
		settle(b, s, l)
	}
}
