package main_test

import (
	"testing"
)

// TestShots opens the window in several states, sizes, themes and scales and
// keeps what is seen.
func TestShots(t *testing.T) {
	for _, l := range []struct {
		name string
		launch
	}{
		{"wide-light", launch{width: 1600, height: 960}},
		{"wide-dark", launch{width: 1600, height: 960, theme: "dark"}},
		{"medium-light", launch{width: 1280, height: 800}},
		{"narrow-light", launch{width: 900, height: 760}},
		{"double-light", launch{width: 1280, height: 800, scale: 2}},
		{"double-dark", launch{width: 1280, height: 800, scale: 2, theme: "dark"}},
	} {
		t.Run(l.name, func(t *testing.T) {
			w := open(t, l.launch)
			w.settled()
			w.key("c")
			w.settled()
			w.shot("Si")
			w.key("w")
			w.palette("jancu1998/GaAs")
			w.wait("GaAs", patience, func(s state) bool { return s.Crystal == "GaAs" && !s.Busy })
			w.key("s")
			w.wait("spin–orbit", patience, func(s state) bool { return s.SpinOrbit && !s.Busy })
			w.settled()
			w.shot("GaAs")
			w.key("w")
			w.palette("fitted/Al-sp")
			w.wait("Al", patience, func(s state) bool { return s.Set == "fitted/Al-sp" && s.Kind == "metal" && !s.Busy })
			w.settled()
			w.shot("Al")
			w.close()
		})
	}
}
