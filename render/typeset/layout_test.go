package typeset

import (
	"errors"
	"math"
	"strings"
	"testing"
	"unicode/utf8"

	"bandwright/render/picture"
)

func TestMarkup(t *testing.T) {
	for _, c := range []struct{ markup, want string }{
		{"Γ–X", "[Γ–X]"},
		{"Γ_{25}^{′}", "[Γ]_([25])^([′])"},
		{"*E* − *E*_{VBM} (eV)", "i([E])[ − ]i([E])_([VBM])[ (eV)]"},
		{"**Model limits** all", "b([Model limits])[ all]"},
		{"sp³s*", "[sp³s*]"},
		{"s* and s*pσ, 2*3", "[s* and s*pσ, 2*3]"},
		{"*a* = 5.431 Å", "i([a])[ = 5.431 Å]"},
		{`[1\overline{1}0]`, "[[1]o([1])[0]]"},
		{`\*not\* \_{this} \\`, `[*not* _{this} \]`},
		{"k_{*x*}", "[k]_(i([x]))"},
		{"***both***", "b(i([both]))"},
		{"**b *bi* b**", "b([b ]i([bi])[ b])"},
		{"*i **ib** i*", "i([i ]b([ib])[ i])"},
		{"a_{b", "[a_{b]"},
		{"a_b^c", "[a_b^c]"},
		{"*open", "[*open]"},
		{"a } b", "[a } b]"},
		{"E_{a^{b}}", "[E]_([a]^([b]))"},
		{"", ""},
	} {
		p := parser{text: c.markup}
		if got := show(p.nodes(0, 0)); got != c.want {
			t.Errorf("%q is read as %s, want %s", c.markup, got, c.want)
		}
	}
}

func show(list []node) string {
	var b strings.Builder
	for _, n := range list {
		if n.kind == run {
			b.WriteString("[" + n.text + "]")
			continue
		}
		b.WriteString([]string{"", "_", "^", "i", "b", "o"}[n.kind] + "(" + show(n.kids) + ")")
	}
	return b.String()
}

func TestCheckNamesThePlace(t *testing.T) {
	for _, c := range []struct {
		markup string
		column int // 0: nothing wrong
	}{{"Γ_{25}", 0}, {"sp³s*", 0}, {"Γ_{25", 2}, {"ab *c", 4}, {`ab \*c`, 0}, {strings.Repeat("_{", 12) + strings.Repeat("}", 12), 17}} {
		err := Check(c.markup)
		var m *MarkupError
		if errors.As(err, &m) != (c.column > 0) {
			t.Errorf("%q: %v", c.markup, err)
		} else if m != nil && (m.Column != c.column || m.Remedy == "" || m.Problem == "") {
			t.Errorf("%q: column %d, want %d (%v)", c.markup, m.Column, c.column, err)
		}
	}
}

func TestEscapedTextIsPlainText(t *testing.T) {
	for _, s := range []string{"s*", `*a* _{b} \overline{c}`, `\`, `\\*`, "k_{x}", "***", "{}"} {
		a, b := Layout(Escape(s), 10, Style{}), Plain(s, 10, Style{})
		if Check(Escape(s)) != nil || len(a.Glyphs) != utf8.RuneCountInString(s) || len(a.Glyphs) != len(b.Glyphs) || a.Width != b.Width {
			t.Errorf("%q: escaped %v, plain %v", s, a, b)
		}
	}
}

func TestLayout(t *testing.T) {
	w := func(m string) float64 { return Width(m, 10, Style{}) }
	if a := Layout("Γ_{1}", 10, Style{}); a != Layout("Γ_{1}", 10, Style{}) {
		t.Error("the same label is laid out twice")
	}
	// Digits stand under one another.
	for d := '0'; d <= '9'; d++ {
		if math.Abs(w(string(d)+string(d))-w("00")) > 1e-12 {
			t.Errorf("%c has its own width", d)
		}
	}
	if !(w("AV") < w("A")+w("V")) {
		t.Error("A and V are not kerned")
	}
	if got := w("Γ_{25}^{1}") - w("Γ"); math.Abs(got-w("_{25}")) > 1e-9 {
		t.Errorf("stacked scripts are %g wide, the wider is %g", got, w("_{25}"))
	}
	sub, super := Layout("x_{p}", 10, Style{}), Layout("x^{d}", 10, Style{})
	plain := Layout("x", 10, Style{})
	if !(sub.Descent > plain.Descent && super.Ascent > plain.Ascent) {
		t.Error("scripts do not reach beyond the line")
	}
	bar := Layout(`\overline{1}`, 10, Style{})
	if len(bar.Rules) != 1 {
		t.Fatal("no bar")
	}
	if r := bar.Rules[0]; !(r.Y1 < -bar.Cap && r.X0 > 0 && r.X1 < bar.Width && -r.Y0 <= bar.Ascent+1e-9) {
		t.Errorf("bar at %v over a text of width %g, capitals %g, ascent %g", r, bar.Width, bar.Cap, bar.Ascent)
	}
	// Twice the size is twice as large, everywhere.
	a, b := Layout("*E*_{F}^{2}", 7, Style{}), Layout("*E*_{F}^{2}", 14, Style{})
	for i := range a.Glyphs {
		if math.Abs(2*a.Glyphs[i].X-b.Glyphs[i].X) > 1e-9 || math.Abs(2*a.Glyphs[i].Y-b.Glyphs[i].Y) > 1e-9 {
			t.Errorf("glyph %d does not scale", i)
		}
	}
}

func TestNoShapeLeavesItsBox(t *testing.T) {
	for _, s := range []string{"Ladder at (0.731, 0, 0)", "Γ_{25}^{′} ÅÄgjpqy", `[1\overline{1}0]`} {
		l := Layout(s, 10, Style{})
		box := l.Box().Inset(-1.2) // accents on capitals and side bearings may stand out a little
		for _, g := range l.Glyphs {
			if o := Outline(g.Font, g.Index); !o.Empty() {
				b := o.Bounds()
				r := picture.Rect{X0: g.X + b.X0*g.Size, Y0: g.Y + b.Y0*g.Size, X1: g.X + b.X1*g.Size, Y1: g.Y + b.Y1*g.Size}
				if r.Union(box) != box {
					t.Errorf("%q: glyph at %v leaves %v", s, r, box)
				}
			}
		}
	}
}

func TestShorten(t *testing.T) {
	s := "First-neighbour sets have poor transverse masses at X"
	full := Plain(s, 9, Style{})
	if Shorten(s, 9, Style{}, full.Width) != full {
		t.Error("shortened without need")
	}
	for _, w := range []float64{150, 60, 20} {
		got := Shorten(s, 9, Style{}, w)
		if got.Width > w || !strings.HasSuffix(got.Source, "…") || got.Width < w-15 {
			t.Errorf("to %g points: %q of %g", w, got.Source, got.Width)
		}
	}
}

func TestOddSizes(t *testing.T) {
	for _, size := range []float64{0, -3, math.NaN(), math.Inf(1), 1e-9, 1e9} {
		l := Layout("Γ", size, Style{})
		if !(l.Width > 0) || math.IsInf(l.Width, 0) {
			t.Errorf("size %g gives width %g", size, l.Width)
		}
	}
}

func FuzzMarkup(f *testing.F) {
	for _, s := range []string{"Γ_{25}^{′}", "*E*_{F}", "**b**", `\overline{1}`, "***x***", "_{_{_{", "s*", "\xff_{\xfe}", "*a**b*"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		l := layout(key{s, 10, Style{}, false})
		if !(l.Width >= 0 || len(l.Glyphs) > 0) || math.IsNaN(l.Width) || len(l.Glyphs) > utf8.RuneCountInString(s) {
			t.Fatalf("%q: %d glyphs, width %g", s, len(l.Glyphs), l.Width)
		}
		err := Check(s)
		if err == nil && !strings.ContainsAny(s, `\_^*{}`) && len(l.Glyphs) != utf8.RuneCountInString(s) {
			t.Fatalf("%q: %d glyphs", s, len(l.Glyphs))
		}
		if e := layout(key{Escape(s), 10, Style{}, false}); Check(Escape(s)) != nil || len(e.Glyphs) != utf8.RuneCountInString(s) {
			t.Fatalf("%q escaped is %q: %v", s, Escape(s), Check(Escape(s)))
		}
	})
}

func BenchmarkLayoutAgain(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		Layout("*E*_{F} = 11.519 eV", 9, Style{})
	}
}

func BenchmarkLayoutNew(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		layout(key{"*E*_{F} = 11.519 eV", 9, Style{}, false})
	}
}
