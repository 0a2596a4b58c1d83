// Package task runs work in the background, one job at a time, and hands the
// results to the goroutine that asked for them.
//
// A runner keeps the job that runs and the newest that waits; jobs in between
// are dropped without being started. A coalescing runner lets the running job
// finish, as suits previews that follow a slider; a replacing runner cancels it,
// as suits long computations whose inputs have changed. Results come through an
// injected post function, so a window can have them on its own goroutine and a
// test where it likes. A result may arrive after newer work was submitted: the
// receiver tells by what the result itself carries, such as a revision.
//
// Times are wall-clock. Whatever a job returns belongs to the receiver. A panic
// in a job is caught and delivered as a *PanicError; a panic in a goroutine that
// the job itself started cannot be caught here. Submitting a nil job panics.
package task
