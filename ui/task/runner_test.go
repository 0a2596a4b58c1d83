package task

import (
	"context"
	"errors"
	"sync"
	"sync/atomic"
	"testing"
	"time"
)

// queue is a receiver's goroutine: posted functions run when drained.
type queue struct {
	mu    sync.Mutex
	items []func()
}

func (q *queue) post(f func()) {
	q.mu.Lock()
	q.items = append(q.items, f)
	q.mu.Unlock()
}

func (q *queue) drain() {
	for {
		q.mu.Lock()
		items := q.items
		q.items = nil
		q.mu.Unlock()
		if len(items) == 0 {
			return
		}
		for _, f := range items {
			f()
		}
	}
}

type result struct {
	value int
	err   error
}

func collect(q *queue, make func(Post, Receiver[int]) *Runner[int]) (*Runner[int], *[]result) {
	var got []result
	r := make(q.post, Receiver[int]{Result: func(v int, err error) { got = append(got, result{v, err}) }})
	return r, &got
}

// gated returns a job that says when it started and ends when released.
func gated(value int) (job Job[int], started, release chan struct{}) {
	started, release = make(chan struct{}), make(chan struct{})
	return func(ctx context.Context, _ Report) (int, error) {
		close(started)
		select {
		case <-release:
			return value, nil
		case <-ctx.Done():
			return 0, ctx.Err()
		}
	}, started, release
}

func plain(value int) Job[int] {
	return func(context.Context, Report) (int, error) { return value, nil }
}

func values(results []result) []int {
	var v []int
	for _, r := range results {
		if r.err == nil {
			v = append(v, r.value)
		}
	}
	return v
}

func TestCoalescingFinishesTheRunningAndKeepsTheNewest(t *testing.T) {
	q := &queue{}
	r, got := collect(q, NewCoalescing[int])
	job, started, release := gated(1)
	r.Submit(job)
	<-started
	var ran atomic.Int32
	for range 100 {
		r.Submit(func(context.Context, Report) (int, error) { ran.Add(1); return 2, nil })
	}
	r.Submit(plain(3))
	if !r.Busy() {
		t.Error("not busy while a job runs")
	}
	close(release)
	r.Wait()
	if r.Busy() {
		t.Error("busy after Wait")
	}
	if len(*got) != 0 {
		t.Error("results came without the receiver's goroutine")
	}
	q.drain()
	if v := values(*got); len(v) != 2 || v[0] != 1 || v[1] != 3 {
		t.Errorf("results %v, want 1 and 3", v)
	}
	if ran.Load() != 0 {
		t.Errorf("%d overtaken jobs ran", ran.Load())
	}
}

func TestReplacingCancelsTheRunning(t *testing.T) {
	q := &queue{}
	r, got := collect(q, NewReplacing[int])
	job, started, _ := gated(1)
	r.Submit(job)
	<-started
	r.Submit(plain(2))
	r.Wait()
	q.drain()
	if len(*got) != 1 || (*got)[0] != (result{2, nil}) {
		t.Errorf("results %v, want 2 alone: a cancelled job delivers nothing", *got)
	}
}

func TestCancelDropsAll(t *testing.T) {
	q := &queue{}
	r, got := collect(q, NewCoalescing[int])
	job, started, _ := gated(1)
	r.Submit(job)
	<-started
	r.Submit(plain(2))
	r.Cancel()
	r.Wait()
	q.drain()
	if len(*got) != 0 {
		t.Errorf("results %v after Cancel", *got)
	}
	r.Submit(plain(3))
	r.Wait()
	q.drain()
	if v := values(*got); len(v) != 1 || v[0] != 3 {
		t.Errorf("results %v, want 3: a cancelled runner runs on", v)
	}
}

func TestCloseRefusesMore(t *testing.T) {
	q := &queue{}
	r, got := collect(q, NewReplacing[int])
	job, started, _ := gated(1)
	r.Submit(job)
	<-started
	r.Close()
	r.Close()
	r.Submit(plain(2))
	r.Wait()
	q.drain()
	if len(*got) != 0 {
		t.Errorf("results %v after Close", *got)
	}
}

func TestPanicBecomesAnError(t *testing.T) {
	q := &queue{}
	r, got := collect(q, NewCoalescing[int])
	r.Submit(func(context.Context, Report) (int, error) {
		var none []int
		return none[len(none)], nil
	})
	r.Wait()
	q.drain()
	if len(*got) != 1 {
		t.Fatalf("results %v", *got)
	}
	var p *PanicError
	if !errors.As((*got)[0].err, &p) || len(p.Stack) == 0 {
		t.Errorf("error %v, want a *PanicError with its stack", (*got)[0].err)
	}
	r.Submit(plain(2))
	r.Wait()
	q.drain()
	if v := values(*got); len(v) != 1 || v[0] != 2 {
		t.Errorf("results %v: the runner must survive a panic", v)
	}
}

func TestErrorsAreDelivered(t *testing.T) {
	q := &queue{}
	r, got := collect(q, NewCoalescing[int])
	sad := errors.New("no")
	r.Submit(func(context.Context, Report) (int, error) { return 0, sad })
	r.Wait()
	q.drain()
	if len(*got) != 1 || (*got)[0].err != sad {
		t.Errorf("results %v", *got)
	}
}

func TestProgressIsThinned(t *testing.T) {
	q := &queue{}
	type report struct{ done, total int }
	var reports []report
	r := NewReplacing(q.post, Receiver[int]{
		Result:   func(int, error) {},
		Progress: func(done, total int) { reports = append(reports, report{done, total}) },
	})
	start := time.Now()
	r.Submit(func(_ context.Context, tell Report) (int, error) {
		var wg sync.WaitGroup
		for range 4 {
			wg.Go(func() {
				for time.Since(start) < 4*ProgressInterval {
					tell(1, 2)
					time.Sleep(time.Millisecond)
				}
			})
		}
		wg.Wait()
		return 0, nil
	})
	r.Wait()
	passed := time.Since(start)
	q.drain()
	most := int(passed/ProgressInterval) + 1
	if len(reports) == 0 || len(reports) > most {
		t.Errorf("%d reports in %v, want 1 to %d", len(reports), passed, most)
	}
	for _, p := range reports {
		if p != (report{1, 2}) {
			t.Errorf("report %v", p)
		}
	}
}

func TestNoProgressAfterTheEnd(t *testing.T) {
	q := &queue{}
	reports := 0
	r := NewReplacing(q.post, Receiver[int]{
		Result:   func(int, error) {},
		Progress: func(int, int) { reports++ },
	})
	var late Report
	r.Submit(func(_ context.Context, tell Report) (int, error) { late = tell; return 0, nil })
	r.Wait()
	late(1, 1)
	q.drain()
	if reports != 0 {
		t.Error("a job that has ended reports progress")
	}
}

func TestManySubmitters(t *testing.T) {
	q := &queue{}
	for _, make := range []func(Post, Receiver[int]) *Runner[int]{NewCoalescing[int], NewReplacing[int]} {
		r, got := collect(q, make)
		var running, most atomic.Int32
		var wg sync.WaitGroup
		for g := range 8 {
			wg.Go(func() {
				for i := range 200 {
					r.Submit(func(context.Context, Report) (int, error) {
						if n := running.Add(1); n > most.Load() {
							most.Store(n)
						}
						defer running.Add(-1)
						return g*1000 + i, nil
					})
					if i%50 == 0 {
						r.Busy()
					}
				}
			})
		}
		wg.Wait()
		r.Submit(plain(-1))
		r.Wait()
		q.drain()
		if most.Load() > 1 {
			t.Errorf("%d jobs ran at once", most.Load())
		}
		if v := values(*got); len(v) == 0 || v[len(v)-1] != -1 {
			t.Errorf("the newest job is missing: %v", v)
		}
	}
}

func TestNilJobPanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("no panic")
		}
	}()
	NewCoalescing(func(f func()) { f() }, Receiver[int]{}).Submit(nil)
}
