package main_test

import (
	"fmt"
	"math/rand/v2"
	"os/exec"
	"slices"
	"strings"
	"testing"
	"time"
)

// TestWindowRandomActions does 5,000 random things with the pointer, the wheel
// and the keyboard. The program must neither end nor grow, and must still do
// its work afterwards.
func TestWindowRandomActions(t *testing.T) {
	w := open(t, launch{width: 1280, height: 800})
	const actions, batch = 5000, 250
	// A fixed seed: a crash can be had again.
	random := rand.New(rand.NewPCG(1, 2))
	var sizes []float64
	for done := 0; done < actions; done += batch {
		var script strings.Builder
		for range batch {
			w.randomAction(random, &script)
		}
		// Whatever was opened or grabbed is let go.
		script.WriteString("mouseup 1\nkey Escape\nkey Escape\n")
		w.runScript(script.String())
		w.settled()
		sizes = append(sizes, w.memory())
	}
	w.shot("after")
	t.Logf("resident size after each %d actions, MiB: %.0f", batch, sizes)
	// Caches fill at first; then the size must stay. The medians of two
	// stretches are compared, since the collector makes single values jump.
	early, late := middle(sizes[5:10]), middle(sizes[len(sizes)-5:])
	if late > 1.2*early+24 {
		t.Errorf("the program grows: %.0f MiB after %d actions, %.0f MiB after %d", early, 8*batch, late, actions)
	}
	w.close()
}

func (w *window) randomAction(random *rand.Rand, script *strings.Builder) {
	x, y := func() int { return 2 + random.IntN(1276) }, func() int { return 2 + random.IntN(796) }
	switch n := random.IntN(100); {
	case n < 30:
		fmt.Fprintf(script, "mousemove %d %d\n", x(), y())
	case n < 50:
		fmt.Fprintf(script, "mousemove %d %d\nclick 1\n", x(), y())
	case n < 62:
		fmt.Fprintf(script, "mousemove %d %d\nmousedown 1\nmousemove %d %d\nmousemove %d %d\nmouseup 1\n", x(), y(), x(), y(), x(), y())
	case n < 78:
		fmt.Fprintf(script, "mousemove %d %d\nclick --repeat %d --delay 5 %d\n", x(), y(), 1+random.IntN(4), 4+random.IntN(2))
	case n < 82:
		fmt.Fprintf(script, "mousemove %d %d\nclick 3\n", x(), y())
	default:
		// Keys that neither end the program nor leave it for the file system.
		keys := []string{"Tab", "Escape", "Left", "Right", "Up", "Down", "Return", "space", "a", "b", "g", "x", "l", "1", "5",
			"plus", "minus", "Home", "End", "Prior", "Next", "BackSpace", "ctrl+z", "ctrl+y", "ctrl+shift+z", "F1", "shift+Tab"}
		fmt.Fprintf(script, "key --delay 4 %s\n", keys[random.IntN(len(keys))])
	}
	script.WriteString("sleep 0.004\n")
}

// runScript lets one xdotool carry out many lines.
func (w *window) runScript(script string) {
	w.t.Helper()
	cmd := exec.Command("xdotool", "-")
	cmd.Env = append(cmd.Environ(), "DISPLAY="+w.display.name)
	cmd.Stdin = strings.NewReader(script)
	if out, err := cmd.CombinedOutput(); err != nil {
		w.t.Fatalf("xdotool: %v\n%s", err, out)
	}
	select {
	case <-w.exited:
		w.t.Fatalf("the program ended (%v)\n%s", w.status, tail(w.stderr.String(), 4000))
	case <-time.After(time.Millisecond):
	}
}

// middle is the median of an odd number of values.
func middle(values []float64) float64 {
	sorted := slices.Sorted(slices.Values(values))
	return sorted[len(sorted)/2]
}
