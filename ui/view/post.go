package view

import (
	"sync"

	"fyne.io/fyne/v2"
)

// posted is what waits for the UI goroutine.
var posted struct {
	sync.Mutex
	list []func()
}

// Post has f run on the UI goroutine. All that is posted before it gets to run
// runs in one go and in order: the toolkit takes a single function between two
// frames, and without a graphics card a frame can take long.
func Post(f func()) {
	posted.Lock()
	defer posted.Unlock()
	posted.list = append(posted.list, f)
	if len(posted.list) == 1 {
		fyne.Do(drain)
	}
}

func drain() {
	posted.Lock()
	list := posted.list
	posted.list = nil
	posted.Unlock()
	for _, f := range list {
		f()
	}
}
