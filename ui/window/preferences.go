package window

import (
	"bytes"
	"os"
	"path/filepath"
	"slices"

	"github.com/BurntSushi/toml"

	"bandwright/physics/lattice"
)

// preferences is what the program remembers from one start to the next. A file
// that cannot be read or written does no harm: the usual values hold.
type preferences struct {
	Theme  string   `toml:"theme"` // "light" or "dark"
	Width  float32  `toml:"width"`
	Height float32  `toml:"height"`
	Frame  string   `toml:"frame"`
	Recent []string `toml:"recent"`

	file string
}

const mostRecent = 12

func loadPreferences(folder string) *preferences {
	p := &preferences{Theme: "light"}
	if folder == "" {
		return p
	}
	p.file = filepath.Join(folder, "preferences.toml")
	if data, err := os.ReadFile(p.file); err == nil {
		read := preferences{Theme: "light"}
		if toml.Unmarshal(data, &read) == nil {
			read.file = p.file
			*p = read
		}
	}
	return p
}

// save writes the file whole or not at all.
func (p *preferences) save() {
	if p.file == "" {
		return
	}
	var b bytes.Buffer
	if toml.NewEncoder(&b).Encode(p) != nil || os.MkdirAll(filepath.Dir(p.file), 0o755) != nil {
		return
	}
	next := p.file + ".new"
	if os.WriteFile(next, b.Bytes(), 0o644) == nil {
		os.Rename(next, p.file)
	}
}

// opened puts a file first in the list of recent ones.
func (p *preferences) opened(file string) {
	if whole, err := filepath.Abs(file); err == nil {
		file = whole
	}
	p.Recent = slices.DeleteFunc(p.Recent, func(f string) bool { return f == file })
	p.Recent = slices.Insert(p.Recent, 0, file)
	if len(p.Recent) > mostRecent {
		p.Recent = p.Recent[:mostRecent]
	}
	p.save()
}

// folder is where files are looked for first.
func (p *preferences) folder() string {
	if len(p.Recent) > 0 {
		return filepath.Dir(p.Recent[0])
	}
	if home, err := os.UserHomeDir(); err == nil {
		return home
	}
	return "."
}

func (p *preferences) frame() lattice.Frame {
	if p.Frame == "" {
		return lattice.TwoPiOverA
	}
	f, err := lattice.ParseFrame(p.Frame)
	if err != nil {
		return lattice.TwoPiOverA
	}
	return f
}

func (p *preferences) setFrame(f lattice.Frame) {
	p.Frame = f.String()
	p.save()
}
