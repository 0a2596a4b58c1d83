package main_test

import (
	"bufio"
	"encoding/binary"
	"fmt"
	"image"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"
)

// display is an X server that draws into a file of ours. It needs no graphics
// card and no desktop, and what is on it can be read at any time.
type display struct {
	name  string // ":7", for the variable DISPLAY
	frame string // the file that holds the picture, in XWD form
}

// startDisplay starts Xvfb on the first free display and stops it when the
// test ends.
func startDisplay(t *testing.T, width, height int) *display {
	t.Helper()
	if _, err := exec.LookPath("Xvfb"); err != nil {
		t.Fatal("Xvfb is missing: \"go run ./cmd/dev setup --for test\" installs it")
	}
	dir := t.TempDir()
	answer, number, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	defer answer.Close()
	server := exec.Command("Xvfb", "-displayfd", "3", "-screen", "0", fmt.Sprintf("%dx%dx24", width, height),
		"-fbdir", dir, "-nolisten", "tcp", "-noreset", "-dpi", "96")
	server.ExtraFiles = []*os.File{number}
	var complaint strings.Builder
	server.Stderr = &complaint
	if err := server.Start(); err != nil {
		t.Fatal(err)
	}
	number.Close()
	t.Cleanup(func() {
		server.Process.Kill()
		server.Wait()
	})
	answer.SetReadDeadline(time.Now().Add(20 * time.Second))
	line, err := bufio.NewReader(answer).ReadString('\n')
	if err != nil {
		t.Fatalf("Xvfb did not start: %v\n%s", err, complaint.String())
	}
	return &display{":" + strings.TrimSpace(line), filepath.Join(dir, "Xvfb_screen0")}
}

// picture is what the display shows now.
func (d *display) picture() (*image.RGBA, error) {
	data, err := os.ReadFile(d.frame)
	if err != nil {
		return nil, err
	}
	return readXWD(data)
}

// readXWD reads a picture in the X window dump format, version 7, of 32 bits a
// pixel in true colour: the header of X11/XWDFile.h is 32-bit big-endian words.
func readXWD(data []byte) (*image.RGBA, error) {
	const (
		headerSize   = 0
		version      = 1
		pixmapWidth  = 4
		pixmapHeight = 5
		byteOrder    = 7
		bitsPerPixel = 11
		bytesPerLine = 12
		colours      = 19
		words        = 25
		lsbFirst     = 0
	)
	if len(data) < 4*words {
		return nil, fmt.Errorf("XWD: %d bytes are no header", len(data))
	}
	word := func(i int) int { return int(binary.BigEndian.Uint32(data[4*i:])) }
	if word(version) != 7 || word(bitsPerPixel) != 32 || word(byteOrder) != lsbFirst {
		return nil, fmt.Errorf("XWD: version %d, %d bits a pixel, byte order %d", word(version), word(bitsPerPixel), word(byteOrder))
	}
	w, h, stride := word(pixmapWidth), word(pixmapHeight), word(bytesPerLine)
	pixels := data[word(headerSize)+12*word(colours):]
	if len(pixels) < h*stride || stride < 4*w {
		return nil, fmt.Errorf("XWD: %d bytes are too few for %d×%d", len(pixels), w, h)
	}
	img := image.NewRGBA(image.Rect(0, 0, w, h))
	for y := range h {
		row := pixels[y*stride:]
		for x := range w {
			to := img.Pix[img.PixOffset(x, y):]
			to[0], to[1], to[2], to[3] = row[4*x+2], row[4*x+1], row[4*x], 255
		}
	}
	return img, nil
}

// xdotool moves the pointer and presses keys; the words are its own.
func (d *display) xdotool(t *testing.T, args ...string) string {
	t.Helper()
	cmd := exec.Command("xdotool", args...)
	cmd.Env = append(os.Environ(), "DISPLAY="+d.name)
	out, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("xdotool %s: %v\n%s", strings.Join(args, " "), err, out)
	}
	return strings.TrimSpace(string(out))
}

func itoa(x float64) string { return strconv.Itoa(int(x + 0.5)) }
