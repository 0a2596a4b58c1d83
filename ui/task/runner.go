package task

import (
	"context"
	"fmt"
	"runtime/debug"
	"sync"
	"time"
)

// ProgressInterval is the least time between two reports of one job that are
// passed on. Those in between are dropped.
const ProgressInterval = 50 * time.Millisecond

// Post has a function run soon on the receiver's goroutine. It must not wait
// for that goroutine.
type Post func(func())

// Report tells how much of a job is done. It may be called from any goroutine
// of the job and as often as the job likes.
type Report func(done, total int)

// Job is a piece of work. When ctx is cancelled its result is no longer wanted,
// and it should return soon.
type Job[T any] func(ctx context.Context, report Report) (T, error)

// Receiver is where results go. Both functions are called through Post.
type Receiver[T any] struct {
	Result   func(T, error)
	Progress func(done, total int) // may be nil
}

// PanicError is a panic in a job.
type PanicError struct {
	Value any
	Stack []byte
}

// Error returns what the job panicked with.
func (e *PanicError) Error() string {
	return fmt.Sprintf("internal error: %v", e.Value)
}

// Runner runs jobs one after the other. Its methods may be called from any
// goroutine.
type Runner[T any] struct {
	post    Post
	to      Receiver[T]
	replace bool

	mu      sync.Mutex
	idle    *sync.Cond
	waiting Job[T]
	running bool
	cancel  context.CancelFunc // of the running job; nil between two jobs
	closed  bool
}

// NewCoalescing returns a runner that lets a running job finish and deliver
// before it starts the newest one that waits.
func NewCoalescing[T any](post Post, to Receiver[T]) *Runner[T] {
	return newRunner(post, to, false)
}

// NewReplacing returns a runner that cancels a running job when a newer one is
// submitted. A cancelled job delivers nothing, whatever it returns.
func NewReplacing[T any](post Post, to Receiver[T]) *Runner[T] {
	return newRunner(post, to, true)
}

func newRunner[T any](post Post, to Receiver[T], replace bool) *Runner[T] {
	r := &Runner[T]{post: post, to: to, replace: replace}
	r.idle = sync.NewCond(&r.mu)
	return r
}

// Submit starts the job, or has it wait in the place of any that waits. It does
// not block. After Close it does nothing.
func (r *Runner[T]) Submit(job Job[T]) {
	if job == nil {
		panic("task: nil job")
	}
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.closed {
		return
	}
	r.waiting = job
	if r.running {
		if r.replace && r.cancel != nil {
			r.cancel()
		}
		return
	}
	r.running = true
	go r.run()
}

// Cancel cancels the running job and drops the one that waits. Neither delivers
// a result, unless it has been posted already.
func (r *Runner[T]) Cancel() {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.stop()
}

func (r *Runner[T]) stop() {
	r.waiting = nil
	if r.cancel != nil {
		r.cancel()
	}
}

// Busy reports whether a job runs or waits.
func (r *Runner[T]) Busy() bool {
	r.mu.Lock()
	defer r.mu.Unlock()
	return r.running
}

// Wait returns when no job runs or waits; all results have been posted by then.
func (r *Runner[T]) Wait() {
	r.mu.Lock()
	defer r.mu.Unlock()
	for r.running {
		r.idle.Wait()
	}
}

// Close cancels all work, refuses more, and does not wait for a running job to
// notice.
func (r *Runner[T]) Close() {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.closed = true
	r.stop()
}

// run works until nothing waits.
func (r *Runner[T]) run() {
	for {
		r.mu.Lock()
		job := r.waiting
		r.waiting = nil
		if job == nil {
			r.running = false
			r.idle.Broadcast()
			r.mu.Unlock()
			return
		}
		ctx, cancel := context.WithCancel(context.Background())
		r.cancel = cancel
		r.mu.Unlock()

		value, err := guarded(ctx, job, r.reporter(ctx))

		r.mu.Lock()
		dropped := ctx.Err() != nil
		r.cancel = nil
		r.mu.Unlock()
		cancel()
		if !dropped {
			r.post(func() { r.to.Result(value, err) })
		}
	}
}

// guarded runs a job and turns a panic into an error.
func guarded[T any](ctx context.Context, job Job[T], report Report) (value T, err error) {
	defer func() {
		if p := recover(); p != nil {
			err = &PanicError{Value: p, Stack: debug.Stack()}
		}
	}()
	return job(ctx, report)
}

// reporter returns a Report that passes on one call per ProgressInterval.
func (r *Runner[T]) reporter(ctx context.Context) Report {
	if r.to.Progress == nil {
		return func(int, int) {}
	}
	var mu sync.Mutex
	var last time.Time
	return func(done, total int) {
		if ctx.Err() != nil {
			return
		}
		now := time.Now()
		mu.Lock()
		due := last.IsZero() || now.Sub(last) >= ProgressInterval
		if due {
			last = now
		}
		mu.Unlock()
		if due {
			r.post(func() { r.to.Progress(done, total) })
		}
	}
}
