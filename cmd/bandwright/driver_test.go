package main_test

import (
	"bytes"
	"encoding/json"
	"fmt"
	"image"
	"image/draw"
	"image/png"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"
)

// The environment variables that "go run ./cmd/dev test" and "shots" set.
const (
	binaryVariable = "BANDWRIGHT_BINARY" // the built program; unset: the tests here are skipped
	shotsVariable  = "BANDWRIGHT_SHOTS"  // folder that keeps the pictures
)

// launch is how the program is started.
type launch struct {
	width, height int
	theme         string  // "light" or "dark"
	scale         float64 // of text and lines; 0 means 1
	config        string  // folder of the preferences; "" means a fresh one
	study         string  // file to open; "" means the first start
	debugLog      string
}

// window is the running program on its own display.
type window struct {
	t        *testing.T
	display  *display
	process  *exec.Cmd
	log      *debugLog
	id       string // of the X window
	started  time.Time
	computed time.Duration // from the start to the first computed bands
	stderr   *safeBuffer
	exited   chan struct{}
	status   error // of the process, once exited is closed
}

// safeBuffer is a bytes.Buffer for a process that writes while we read.
type safeBuffer struct {
	mu sync.Mutex
	b  bytes.Buffer
}

func (s *safeBuffer) Write(p []byte) (int, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.b.Write(p)
}

func (s *safeBuffer) String() string {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.b.String()
}

// open starts the program on a display of its own and waits until the window
// shows a computed crystal.
func open(t *testing.T, l launch) *window {
	t.Helper()
	binary := os.Getenv(binaryVariable)
	if binary == "" {
		t.Skipf("%s is not set: \"go run ./cmd/dev test --only window\" builds the program and runs this", binaryVariable)
	}
	if l.width == 0 {
		l.width, l.height = 1440, 900
	}
	if l.theme == "" {
		l.theme = "light"
	}
	if l.config == "" {
		l.config = t.TempDir()
	}
	l.debugLog = filepath.Join(t.TempDir(), "debug.jsonl")
	args := []string{
		"--debug-log", l.debugLog,
		"--size", fmt.Sprintf("%dx%d", l.width, l.height),
		"--config", l.config,
		"--theme", l.theme,
	}
	if l.study != "" {
		args = append(args, l.study)
	}
	scale := l.scale
	if scale == 0 {
		scale = 1
	}
	d := startDisplay(t, int(float64(l.width)*scale), int(float64(l.height)*scale))
	w := &window{t: t, display: d, log: &debugLog{name: l.debugLog, scale: scale}, stderr: &safeBuffer{}, exited: make(chan struct{})}
	w.process = exec.Command(binary, args...)
	w.process.Env = append(os.Environ(), "DISPLAY="+d.name, "WAYLAND_DISPLAY=",
		"FYNE_SCALE="+strconv.FormatFloat(scale, 'g', -1, 64), "LIBGL_ALWAYS_SOFTWARE=1")
	w.process.Stdout, w.process.Stderr = w.stderr, w.stderr
	w.started = time.Now()
	if err := w.process.Start(); err != nil {
		t.Fatal(err)
	}
	go func() {
		w.status = w.process.Wait()
		close(w.exited)
	}()
	t.Cleanup(func() {
		if t.Failed() {
			w.shot("failed")
			t.Logf("what the program said:\n%s", tail(w.stderr.String(), 4000))
			t.Logf("the last state: %+v", w.log.last)
		}
		w.process.Process.Kill()
		<-w.exited
	})
	w.wait("bands on the screen", 60*time.Second, func(s state) bool { return s.Drawings["bands"] > 0 && s.FocusSize > 0 })
	w.computed = time.Since(w.started)
	w.wait("a computed crystal", 60*time.Second, func(s state) bool { return s.ready() })
	w.id = w.findWindow()
	// There is no window manager to give the window the keyboard.
	d.xdotool(t, "windowfocus", w.id)
	return w
}

func (w *window) findWindow() string {
	w.t.Helper()
	for range 100 {
		cmd := exec.Command("xdotool", "search", "--onlyvisible", "--name", "Bandwright")
		cmd.Env = append(os.Environ(), "DISPLAY="+w.display.name)
		if out, err := cmd.Output(); err == nil {
			if ids := strings.Fields(string(out)); len(ids) > 0 {
				return ids[0]
			}
		}
		time.Sleep(50 * time.Millisecond)
	}
	w.t.Fatal("no window named Bandwright appeared")
	return ""
}

// wait lets the program work until its log shows a state that fits.
func (w *window) wait(what string, limit time.Duration, fits func(state) bool) state {
	w.t.Helper()
	deadline := time.Now().Add(limit)
	for {
		if err := w.log.read(); err != nil && !os.IsNotExist(err) {
			w.t.Fatal(err)
		}
		if fits(w.log.last) {
			return w.log.last
		}
		select {
		case <-w.exited:
			w.t.Fatalf("waiting for %s: the program ended (%v)\n%s", what, w.status, tail(w.stderr.String(), 4000))
		default:
		}
		if time.Now().After(deadline) {
			w.t.Fatalf("waited %v for %s; the last state is %+v", limit, what, w.log.last)
		}
		time.Sleep(10 * time.Millisecond)
	}
}

// settled waits until the program is done with all that was asked of it.
func (w *window) settled() state {
	w.t.Helper()
	time.Sleep(100 * time.Millisecond) // so that the last event has been taken in
	w.wait("rest", 60*time.Second, func(s state) bool { return s.ready() })
	time.Sleep(200 * time.Millisecond) // for the finished pictures to reach the display
	return w.wait("rest", 60*time.Second, func(s state) bool { return s.ready() })
}

// spot is a place on the display, in its pixels.
type spot struct{ x, y float64 }

// in is the place at the fractions (fx, fy) of a panel's width and height.
func (w *window) in(panel string, fx, fy float64) spot {
	w.t.Helper()
	w.log.read()
	r, ok := w.log.panel(panel)
	if !ok {
		w.t.Fatalf("the log tells no place of panel %q; it knows %v", panel, w.log.names())
	}
	return spot{r.X + fx*r.W, r.Y + fy*r.H}
}

func (w *window) move(to spot) {
	w.t.Helper()
	w.display.xdotool(w.t, "mousemove", itoa(to.x), itoa(to.y))
}

func (w *window) click(at spot) {
	w.t.Helper()
	// A moment between the motion and the press, as a hand leaves it: the
	// program learns from the motion what lies under the pointer.
	w.display.xdotool(w.t, "mousemove", itoa(at.x), itoa(at.y), "sleep", "0.06", "mousedown", "1", "sleep", "0.03", "mouseup", "1")
}

func (w *window) doubleClick(at spot) {
	w.t.Helper()
	w.display.xdotool(w.t, "mousemove", itoa(at.x), itoa(at.y), "sleep", "0.06", "click", "--repeat", "2", "--delay", "60", "1")
}

// drag presses the left button at from and leaves it at to after the given
// number of motions.
func (w *window) drag(from, to spot, motions int) {
	w.t.Helper()
	args := []string{"mousemove", itoa(from.x), itoa(from.y), "sleep", "0.05", "mousedown", "1", "sleep", "0.05"}
	for i := 1; i <= motions; i++ {
		f := float64(i) / float64(motions)
		args = append(args, "mousemove", itoa(from.x+f*(to.x-from.x)), itoa(from.y+f*(to.y-from.y)), "sleep", "0.016")
	}
	w.display.xdotool(w.t, append(args, "sleep", "0.05", "mouseup", "1")...)
}

// wheel turns the wheel by notches; away from the hand is positive.
func (w *window) wheel(at spot, notches int) {
	w.t.Helper()
	button := "4"
	if notches < 0 {
		button, notches = "5", -notches
	}
	w.display.xdotool(w.t, "mousemove", itoa(at.x), itoa(at.y), "sleep", "0.03", "click", "--repeat", strconv.Itoa(notches), "--delay", "30", button)
}

// key presses a key or a combination, in xdotool's words: "ctrl+z", "Return".
func (w *window) key(keys ...string) {
	w.t.Helper()
	w.display.xdotool(w.t, append([]string{"key", "--clearmodifiers", "--delay", "40"}, keys...)...)
}

func (w *window) write(text string) {
	w.t.Helper()
	w.display.xdotool(w.t, "type", "--delay", "30", text)
}

// shot keeps a picture of the display under the given name.
func (w *window) shot(name string) *image.RGBA {
	w.t.Helper()
	picture, err := w.display.picture()
	if err != nil {
		w.t.Error(err)
		return nil
	}
	dir := os.Getenv(shotsVariable)
	if dir == "" {
		dir = w.t.TempDir()
	}
	if err := savePNG(filepath.Join(dir, strings.ReplaceAll(w.t.Name(), "/", "-")+"-"+name+".png"), picture); err != nil {
		w.t.Error(err)
	}
	return picture
}

func savePNG(name string, picture image.Image) error {
	if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
		return err
	}
	f, err := os.Create(name)
	if err != nil {
		return err
	}
	defer f.Close()
	if err := png.Encode(f, picture); err != nil {
		return err
	}
	return f.Close()
}

// look is the part of the display that a panel covers.
func (w *window) look(panel string) *image.RGBA {
	w.t.Helper()
	whole, err := w.display.picture()
	if err != nil {
		w.t.Fatal(err)
	}
	a, b := w.in(panel, 0, 0), w.in(panel, 1, 1)
	r := image.Rect(int(a.x), int(a.y), int(b.x), int(b.y)).Intersect(whole.Bounds())
	part := image.NewRGBA(image.Rect(0, 0, r.Dx(), r.Dy()))
	draw.Draw(part, part.Bounds(), whole, r.Min, draw.Src)
	return part
}

// changed is the share of pixels that differ between two pictures of a panel.
func changed(a, b *image.RGBA) float64 {
	if a.Bounds() != b.Bounds() || len(a.Pix) == 0 {
		return 1
	}
	n := 0
	for i := 0; i < len(a.Pix); i += 4 {
		if !bytes.Equal(a.Pix[i:i+3], b.Pix[i:i+3]) {
			n++
		}
	}
	return float64(n) / float64(len(a.Pix)/4)
}

// colours is how many different colours a picture holds: an empty panel has
// one or two.
func colours(p *image.RGBA) int {
	seen := map[[3]byte]bool{}
	for i := 0; i < len(p.Pix); i += 4 {
		seen[[3]byte(p.Pix[i:i+3])] = true
	}
	return len(seen)
}

// close ends the program as its user would and checks that it went well.
func (w *window) close() {
	w.t.Helper()
	w.settled()
	w.key("ctrl+q")
	if w.log.last.Modified {
		// The question about unsaved changes: go on without saving.
		time.Sleep(400 * time.Millisecond)
		w.key("Tab", "Tab", "space")
	}
	select {
	case <-w.exited:
	case <-time.After(20 * time.Second):
		w.t.Fatal("the program did not end within 20 s of Ctrl+Q")
	}
	if w.status != nil {
		w.t.Errorf("the program ended with %v\n%s", w.status, tail(w.stderr.String(), 4000))
	}
	if said := w.stderr.String(); strings.Contains(said, "panic") || strings.Contains(said, "goroutine ") {
		w.t.Errorf("the program panicked:\n%s", tail(said, 4000))
	}
}

// memory is the resident size of the program in MiB, from Linux's /proc.
func (w *window) memory() float64 {
	w.t.Helper()
	status, err := os.ReadFile(fmt.Sprintf("/proc/%d/status", w.process.Process.Pid))
	if err != nil {
		w.t.Fatal(err)
	}
	_, rest, ok := strings.Cut(string(status), "VmRSS:")
	if !ok {
		w.t.Fatal("/proc tells no resident size")
	}
	kib, err := strconv.ParseFloat(strings.Fields(rest)[0], 64)
	if err != nil {
		w.t.Fatal(err)
	}
	return kib / 1024
}

func tail(s string, n int) string {
	if len(s) > n {
		return "…" + s[len(s)-n:]
	}
	return s
}

// debugLog follows the file that --debug-log names: one JSON object a line.
type debugLog struct {
	name   string
	scale  float64 // pixels of the display per unit of the log's places
	offset int64
	rest   []byte
	lines  int
	last   state
}

type place struct{ X, Y, W, H float64 }

// read takes in what was written since the last call.
func (l *debugLog) read() error {
	f, err := os.Open(l.name)
	if err != nil {
		return err
	}
	defer f.Close()
	if _, err := f.Seek(l.offset, 0); err != nil {
		return err
	}
	var more bytes.Buffer
	n, err := more.ReadFrom(f)
	l.offset += n
	l.rest = append(l.rest, more.Bytes()...)
	for {
		end := bytes.IndexByte(l.rest, '\n')
		if end < 0 {
			return err
		}
		line := l.rest[:end]
		l.rest = l.rest[end+1:]
		l.lines++
		if err := l.take(line); err != nil {
			return fmt.Errorf("%s:%d: %w", filepath.Base(l.name), l.lines, err)
		}
	}
}

func (l *debugLog) take(line []byte) error {
	if len(bytes.TrimSpace(line)) == 0 {
		return nil
	}
	// Maps would be added to, not replaced.
	l.last.Panels, l.last.Points, l.last.Drawings = nil, nil, nil
	return json.Unmarshal(line, &l.last)
}

// panel is the place of a panel in pixels of the display.
func (l *debugLog) panel(name string) (place, bool) {
	p, ok := l.last.Panels[name]
	return place{p.X * l.scale, p.Y * l.scale, p.W * l.scale, p.H * l.scale}, ok
}

func (l *debugLog) names() []string {
	var names []string
	for n := range l.last.Panels {
		names = append(names, n)
	}
	return names
}
