package window

import (
	"slices"
	"time"
)

// latency measures how long edits wait for the picture that shows them.
type latency struct {
	waiting []waiting
	took    []time.Duration // of the last edits
}

type waiting struct {
	value float64
	since time.Time
}

// mostLags bounds the edits that the median is taken over.
const mostLags = 201

// asked notes an edit of the lattice constant.
func (l *latency) asked(value float64, since time.Time) {
	if len(l.waiting) < mostLags {
		l.waiting = append(l.waiting, waiting{value, since})
	}
}

// shown notes that the bands of a value, and with them the answer to all
// earlier edits, are on the screen.
func (l *latency) shown(value float64) {
	n := len(l.waiting)
	for n > 0 && l.waiting[n-1].value != value {
		n--
	}
	now := time.Now()
	for _, w := range l.waiting[:n] {
		l.took = append(l.took, now.Sub(w.since))
	}
	l.waiting = slices.Delete(l.waiting, 0, n)
	if n := len(l.took); n > mostLags {
		l.took = slices.Delete(l.took, 0, n-mostLags)
	}
}

// median is that of the last edits; 0 before the first.
func (l *latency) median() time.Duration {
	if len(l.took) == 0 {
		return 0
	}
	sorted := slices.Sorted(slices.Values(l.took))
	return sorted[len(sorted)/2]
}
