package doc

import (
	"fmt"
	"sort"
	"strconv"
	"strings"

	"bandwright/physics/lattice"
)

// Encode returns the study as text in one form: fixed order of keys, numbers
// in the fewest digits that read back the same. Decode(Encode(d)) is d.
func (d Document) Encode() []byte {
	var w writer
	w.line("bandstudy = %d", Version)
	if d.Title != "" {
		w.line("title = %s", quoted(d.Title))
	}
	w.crystal("crystal", d.Crystal)
	w.model("model", d.Model)
	if len(d.Path.Legs) > 0 || d.Path.Frame != lattice.Primitive || d.Path.Step != 0 {
		w.table("path")
		if len(d.Path.Legs) > 0 {
			w.line("legs = %s", quotedList(d.Path.Legs))
		}
		w.line("frame = %s", quoted(d.Path.Frame.String()))
		if d.Path.Step != 0 {
			w.line("step = %s", figure(d.Path.Step))
		}
	}
	w.table("mesh")
	w.line("divisions = [%d, %d, %d]", d.Mesh[0], d.Mesh[1], d.Mesh[2])
	w.view(d.View)
	w.pin("pin.A", d.PinA)
	w.pin("pin.B", d.PinB)
	return []byte(w.String())
}

type writer struct{ strings.Builder }

func (w *writer) line(format string, args ...any) { fmt.Fprintf(w, format+"\n", args...) }

func (w *writer) table(name string) { w.line("\n[%s]", name) }

func (w *writer) crystal(name string, c Crystal) {
	w.table(name)
	if c.Prototype != "" {
		w.line("prototype = %s", quoted(c.Prototype))
		w.line("elements = %s", quotedList(c.Elements))
		w.line("a = %s", figure(c.A))
		return
	}
	rows := make([]string, 3)
	for i, v := range c.Lattice {
		rows[i] = figures(v[:])
	}
	w.line("lattice = [%s]", strings.Join(rows, ", "))
	for _, s := range c.Sites {
		w.line("\n[[%s.site]]", name)
		w.line("element = %s", quoted(s.Element))
		if s.Label != "" {
			w.line("label = %s", quoted(s.Label))
		}
		w.line("at = %s", figures(s.At[:]))
	}
}

func (w *writer) model(name string, m Model) {
	w.table(name)
	kind := m.Kind
	if kind == "" {
		kind = TwoCentre
	}
	w.line("kind = %s", quoted(kind))
	if m.Set != "" {
		w.line("set = %s", quoted(m.Set))
	}
	if m.File != "" {
		w.line("file = %s", quoted(m.File))
	}
	w.line("spin_orbit = %t", m.SpinOrbit)
	if len(m.Factors) == 0 {
		return
	}
	var subjects []string
	for s := range m.Factors {
		subjects = append(subjects, s)
	}
	sort.Strings(subjects)
	w.table(name + ".factors")
	for _, s := range subjects {
		w.line("%s = %s", quoted(s), figure(m.Factors[s]))
	}
}

func (w *writer) view(v View) {
	w.table("view")
	for _, one := range []struct{ key, text string }{{"colour", v.Colour}, {"zero", v.Zero}, {"dos", v.DOS}} {
		if one.text != "" {
			w.line("%s = %s", one.key, quoted(one.text))
		}
	}
	if v.Window != [2]float64{} {
		w.line("window = %s", figures(v.Window[:]))
	}
	w.line("held = %s", figures(v.Held[:]))
	if v.Level >= 0 {
		w.line("level = %d", v.Level)
	}
	w.line("frame = %s", quoted(v.Frame.String()))
	if v.Camera != [5]float64{} {
		w.line("camera = %s", figures(v.Camera[:]))
	}
}

func (w *writer) pin(name string, p *Pin) {
	if p == nil {
		return
	}
	w.table(name)
	w.line("held = %s", figures(p.K[:]))
	w.line("level = %d", p.Level)
	w.crystal(name+".crystal", p.Crystal)
	w.model(name+".model", p.Model)
}

// figure writes a number in the fewest digits that read back the same.
func figure(v float64) string {
	text := strconv.FormatFloat(v, 'g', -1, 64)
	if !strings.ContainsAny(text, ".e") {
		text += ".0"
	}
	return text
}

func figures(list []float64) string {
	texts := make([]string, len(list))
	for i, v := range list {
		texts[i] = figure(v)
	}
	return "[" + strings.Join(texts, ", ") + "]"
}

// quoted writes a text as a basic string of TOML.
func quoted(s string) string {
	var b strings.Builder
	b.WriteByte('"')
	for _, r := range s {
		switch {
		case r == '"' || r == '\\':
			b.WriteByte('\\')
			b.WriteRune(r)
		case r < 0x20 || r == 0x7f:
			fmt.Fprintf(&b, "\\u%04X", r)
		default:
			b.WriteRune(r)
		}
	}
	b.WriteByte('"')
	return b.String()
}

func quotedList(list []string) string {
	texts := make([]string, len(list))
	for i, s := range list {
		texts[i] = quoted(s)
	}
	return "[" + strings.Join(texts, ", ") + "]"
}
