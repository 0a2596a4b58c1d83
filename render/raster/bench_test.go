package raster

import (
	"image"
	"testing"

	"bandwright/render/picture"
)

func benchmark(b *testing.B, w, h int, scale float64, draw func(p *picture.Picture, i int)) {
	var p picture.Picture
	var r Rasteriser
	img := image.NewRGBA(image.Rect(0, 0, w, h))
	draw(&p, 0)
	r.Draw(img, &p, scale)
	b.ReportAllocs()
	i := 0
	for b.Loop() {
		i++
		draw(&p, i)
		Clear(img, light.paper)
		r.Draw(img, &p, scale)
	}
}

// A zone that turns, built anew for every frame.
func BenchmarkZone1000x800(b *testing.B) {
	benchmark(b, 1000, 800, 1, func(p *picture.Picture, i int) { zonePicture(p, 1000, 800, float64(i)*0.01, light) })
}

func BenchmarkZone2000x1600(b *testing.B) {
	benchmark(b, 2000, 1600, 2, func(p *picture.Picture, i int) { zonePicture(p, 1000, 800, float64(i)*0.01, light) })
}

// Twenty ribbons of 600 points with a line in each.
func BenchmarkFatBands1000x800(b *testing.B) {
	benchmark(b, 1000, 800, 1, func(p *picture.Picture, i int) { bandPicture(p, 1000, 800, 20, 600, light) })
}

// The painting alone, as when only the pointer moved.
func BenchmarkFatBandsPaintOnly(b *testing.B) {
	benchmark(b, 1000, 800, 1, func(p *picture.Picture, i int) {
		if i == 0 {
			bandPicture(p, 1000, 800, 20, 600, light)
		}
	})
}

func BenchmarkClear1000x800(b *testing.B) {
	img := image.NewRGBA(image.Rect(0, 0, 1000, 800))
	for b.Loop() {
		Clear(img, light.paper)
	}
}

func BenchmarkSample(b *testing.B) {
	benchmark(b, 840, 600, 2, func(p *picture.Picture, i int) { samplePicture(p, light) })
}
