package doc

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
)

// anyDocument draws studies of every form that Decode accepts.
func anyDocument(t *rapid.T) Document {
	number := rapid.Float64Range(-50, 50)
	model := func(label string) (Crystal, Model) {
		sets := catalog.Shipped()
		set := sets[rapid.IntRange(0, len(sets)-1).Draw(t, label+" set")]
		c := Crystal{Prototype: set.Prototype, Elements: set.Elements, A: rapid.Float64Range(0.9, 1.1).Draw(t, label+" a") * set.A}
		m := Model{Kind: TwoCentre, Set: set.ID}
		so := true
		for _, e := range set.Elements {
			_, has := set.SpinOrbit[e]
			so = so && has
		}
		m.SpinOrbit = so && rapid.Bool().Draw(t, label+" so")
		if rapid.Bool().Draw(t, label+" altered") {
			m.Factors = map[string]float64{"shell1 ppσ": rapid.Float64Range(0, 2).Draw(t, "factor"), "onsite s": 0.5}
		}
		if rapid.Bool().Draw(t, label+" free") {
			// The same crystal by its vectors and sites.
			built, err := crystal.FromPrototype(c.Prototype, c.Elements, c.A)
			if err != nil {
				t.Fatal(err)
			}
			c = Crystal{}
			for i := range 3 {
				c.Lattice[i] = [3]float64(built.Lattice().A(i))
			}
			for _, s := range built.Sites {
				c.Sites = append(c.Sites, Site{Element: s.Element, Label: s.Label, At: s.Fraction})
			}
		}
		return c, m
	}
	d := Document{Title: rapid.StringMatching(`[a-zA-ZΓσ"\\ '#=\[\]\t]{0,20}`).Draw(t, "title")}
	d.Crystal, d.Model = model("study")
	if rapid.Bool().Draw(t, "path") {
		d.Path = Path{Legs: []string{"0 0 0; 0.5 0.25 0.75", "Γ 0.1 0.2 0.3"}[:1], Frame: lattice.Frame(rapid.IntRange(0, 3).Draw(t, "frame")), Step: rapid.Float64Range(0.001, 1).Draw(t, "step")}
	}
	for i := range d.Mesh {
		d.Mesh[i] = rapid.IntRange(1, 40).Draw(t, "mesh")
	}
	d.View = View{
		Colour: rapid.SampledFrom(append([]string{""}, Colours...)).Draw(t, "colour"), Zero: rapid.SampledFrom(append([]string{""}, Zeros...)).Draw(t, "zero"),
		DOS: rapid.SampledFrom(append([]string{""}, Densities...)).Draw(t, "dos"), Level: rapid.IntRange(NotGiven, 30).Draw(t, "level"),
		Frame: lattice.Frame(rapid.IntRange(0, 3).Draw(t, "view frame")),
	}
	for i := range d.View.Held {
		d.View.Held[i] = number.Draw(t, "held")
	}
	if rapid.Bool().Draw(t, "window") {
		lo := number.Draw(t, "lo")
		d.View.Window = [2]float64{lo, lo + rapid.Float64Range(0.1, 30).Draw(t, "span")}
	}
	if rapid.Bool().Draw(t, "camera") {
		d.View.Camera = [5]float64{0.5, number.Draw(t, "q"), -0.5, 1e-300, rapid.Float64Range(0.1, 9).Draw(t, "zoom")}
	}
	for _, slot := range []**Pin{&d.PinA, &d.PinB} {
		if rapid.Bool().Draw(t, "pin") {
			p := &Pin{Level: rapid.IntRange(0, 9).Draw(t, "pin level"), K: lattice.FracK{number.Draw(t, "k"), 0, 1.0 / 3}}
			p.Crystal, p.Model = model("pin")
			*slot = p
		}
	}
	return d
}

func TestDecodeUndoesEncode(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := anyDocument(t)
		text := d.Encode()
		e, err := Decode("study", text)
		if err != nil {
			t.Fatalf("%v\n%s", err, text)
		}
		if !e.Equal(d) {
			t.Fatalf("differs:\n%s\n%s", cmp.Diff(d, e), text)
		}
		if again := e.Encode(); !bytes.Equal(again, text) {
			t.Fatalf("the form is not canonical:\n%s\n%s", text, again)
		}
	})
}

const good = `bandstudy = 1
title = "Silicon"
[crystal]
prototype = "diamond"
elements  = ["Si"]
a         = 5.431
[model]
kind       = "two-centre"
set        = "vogl1983/Si"
spin_orbit = false
[path]
legs = ["Γ X W K Γ L", "U X"]
[mesh]
divisions = [24, 24, 24]
`

func TestStudyOfTheDesign(t *testing.T) {
	for name, text := range map[string]string{
		"as it stands": good, "carriage returns": strings.ReplaceAll(good, "\n", "\r\n"), "byte order mark": "\ufeff" + good,
	} {
		d, err := Decode("study", []byte(text))
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		b, err := d.Build("")
		if err != nil || b.PathErr != nil {
			t.Fatalf("%s: %v, %v", name, err, b.PathErr)
		}
		if got := b.Path.String(); got != "Γ–X–W–K–Γ–L | U–X" {
			t.Errorf("%s: the path is %s", name, got)
		}
		// 413 irreducible points of 24³ in fcc: common practice, as any table of special-point meshes has it.
		if len(b.Mesh.K) != 413 {
			t.Errorf("%s: %d mesh points", name, len(b.Mesh.K))
		}
	}
}

// Each fault gives its line, says what is wrong and what to do.
func TestBadStudies(t *testing.T) {
	change := func(old, new string) string {
		if !strings.Contains(good, old) {
			t.Fatalf("the good study holds no %q", old)
		}
		return strings.Replace(good, old, new, 1)
	}
	free := func(vectors, sites string) string {
		return "bandstudy = 1\n[crystal]\nlattice = " + vectors + "\n" + sites + "[model]\nset = \"vogl1983/Si\"\n"
	}
	site := func(at string) string { return "[[crystal.site]]\nelement = \"Si\"\nat = " + at + "\n" }
	for _, c := range []struct {
		name, text string
		line       int
		says       string
	}{
		{"no study", "title = \"x\"\n", 0, "bandstudy is missing"},
		{"empty", "", 0, "bandstudy is missing"},
		{"newer form", change("bandstudy = 1", "bandstudy = 2"), 1, "newer version"},
		{"form of no kind", change("bandstudy = 1", "bandstudy = \"one\""), 1, "not a whole number"},
		{"no TOML", change("title =", "title"), 2, "TOML"},
		{"key twice", change("a         = 5.431", "a = 5.431\na = 5.4"), 7, "TOML"},
		{"zero byte", "bandstudy = 1\n\x00", 2, "zero byte"},
		{"unknown key", change("a         = 5.431", "a = 5.431\ncolour = 1"), 7, "unknown key crystal.colour"},
		{"unknown key with a remedy", change("prototype", "protoype"), 4, "did you mean \"prototype\""},
		{"unknown table", good + "[meshes]\nx = 1\n", 15, "did you mean \"mesh\""},
		{"text for a number", change("5.431", "\"5.431\""), 6, "a text, not a number"},
		{"number for a text", change("\"diamond\"", "8"), 4, "a number, not a text"},
		{"text for a list", change("[\"Si\"]", "\"Si\""), 5, "a text, not a list"},
		{"NaN", change("5.431", "nan"), 6, "not finite"},
		{"infinity", change("5.431", "-inf"), 6, "not finite"},
		{"a = 0", change("5.431", "0"), 6, "above 0"},
		{"negative a", change("5.431", "-5.431"), 6, "above 0"},
		{"no a", change("a         = 5.431\n", ""), 3, "crystal.a is missing"},
		{"unknown prototype", change("\"diamond\"", "\"diamant\""), 4, "diamant"},
		{"wrong number of elements", change("[\"Si\"]", "[\"Si\", \"Ge\"]"), 5, "takes 1"},
		{"unknown element", change("[\"Si\"]", "[\"Sl\"]"), 5, "Sl"},
		{"no crystal", "bandstudy = 1\n[model]\nset = \"vogl1983/Si\"\n", 0, "no crystal"},
		{"no model", "bandstudy = 1\n[crystal]\nprototype = \"diamond\"\nelements = [\"Si\"]\na = 5.4\n", 0, "no model"},
		{"unknown set", change("vogl1983/Si", "vogl1984/Si"), 9, "vogl1983/Si"},
		{"set of another element", change("vogl1983/Si", "vogl1983/C"), 9, "Si"},
		{"no set", change("set        = \"vogl1983/Si\"\n", ""), 7, "no parameter set"},
		{"set and file", change("spin_orbit = false", "file = \"own.toml\""), 10, "keep one"},
		{"kind of a later version", change("two-centre", "extended-hueckel"), 8, "not available"},
		{"spin–orbit as a text", change("false", "\"no\""), 10, "true or false"},
		{"factor too large", good + "[model.factors]\n\"shell1 ppσ\" = 3\n", 16, "0 to 2"},
		{"factor of nothing", good + "[model.factors]\n\"shell7 ppσ\" = 1.5\n", 15, "shell7"},
		{"path off the lattice", change("U X", "U Q"), 12, "Q"},
		{"path of one point", change("\"U X\"", "\"U\""), 12, "two points"},
		{"unknown frame", change("[mesh]", "frame = \"cubic\"\n[mesh]"), 13, "2pi/a"},
		{"step of no length", change("[mesh]", "step = 0.0\n[mesh]"), 13, "above 0"},
		{"mesh of two numbers", change("[24, 24, 24]", "[24, 24]"), 14, "3"},
		{"mesh of fractions", change("[24, 24, 24]", "[24, 24, 2.5]"), 14, "whole numbers"},
		{"mesh of nothing", change("[24, 24, 24]", "[24, 24, 0]"), 14, "whole numbers"},
		{"huge mesh", change("[24, 24, 24]", "[9999, 24, 24]"), 14, "whole numbers"},
		{"unknown colour", good + "[view]\ncolour = \"rainbow\"\n", 16, "orbitals"},
		{"empty window", good + "[view]\nwindow = [3, 3]\n", 16, "lowest, highest"},
		{"held point of two numbers", good + "[view]\nheld = [0, 1]\n", 16, "3 numbers"},
		{"negative level", good + "[view]\nlevel = -3\n", 16, "out of range"},
		{"camera without zoom", good + "[view]\ncamera = [1, 0, 0, 0, 0]\n", 16, "camera"},
		{"pin without a model", good + "[pin.A]\nheld = [0, 0, 0]\n", 15, "no model"},
		{"pin C", good + "[pin.C]\nheld = [0, 0, 0]\n", 15, "unknown key"},
		{"singular cell", free("[[1, 0, 0], [0, 1, 0], [1, 1, 0]]", site("[0, 0, 0]")), 3, "plane"},
		{"two vectors", free("[[1, 0, 0], [0, 1, 0]]", site("[0, 0, 0]")), 3, "three vectors"},
		{"atoms on top of each other", free("[[0, 2.7, 2.7], [2.7, 0, 2.7], [2.7, 2.7, 0]]", site("[0, 0, 0]")+site("[0.25, 0.25, 0.25]")+site("[1, 0, 0]")), 12, "Si1 and Si3"},
		{"site without a neighbour cell", free("[[0.1, 0, 0], [0, 5, 0], [0, 0, 5]]", site("[0, 0, 0]")), 3, "10 Å"},
		{"label twice", free("[[0, 2.7, 2.7], [2.7, 0, 2.7], [2.7, 2.7, 0]]", strings.ReplaceAll(site("[0, 0, 0]")+site("[0.25, 0.25, 0.25]"), "at =", "label = \"A\"\nat =")), 10, "own label"},
		{"a of another unit", change("5.431", "0.5431"), 6, "lengths in Å"},
		{"a beyond all bounds", change("5.431", "1e300"), 6, "length"},
		{"bracket left open", change("[crystal]", "[crystal"), 3, "table name"},
		{"text left open", change("\"Silicon\"", "\"Silicon"), 2, "newlines"},
		{"no value", change("5.431", ""), 6, "expected value"},
		{"site without a position", free("[[0, 2.7, 2.7], [2.7, 0, 2.7], [2.7, 2.7, 0]]", "[[crystal.site]]\nelement = \"Si\"\n"), 4, "position"},
		{"site of no element", free("[[0, 2.7, 2.7], [2.7, 0, 2.7], [2.7, 2.7, 0]]", "[[crystal.site]]\nelement = \"Xx\"\nat = [0, 0, 0]\n"), 5, "no element"},
		{"prototype and lattice", change("a         = 5.431", "a = 5.431\nlattice = [[1, 0, 0], [0, 1, 0], [0, 0, 1]]"), 4, "keep one"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Decode("x.bandstudy", []byte(c.text))
			var p *Problems
			if !errors.As(err, &p) || len(p.List) == 0 {
				t.Fatalf("no problems but %v", err)
			}
			first := p.List[0]
			if first.Line != c.line {
				t.Errorf("line %d, not %d: %v", first.Line, c.line, err)
			}
			if !strings.Contains(err.Error(), c.says) {
				t.Errorf("%q does not say %q", err, c.says)
			}
			for _, one := range p.List {
				if one.Remedy == "" {
					t.Errorf("no remedy: %v", one)
				}
				if one.Line > 0 && one.Column < 1 && !strings.Contains(one.Problem, "zero byte") {
					t.Errorf("no column: %v", one)
				}
			}
		})
	}
}

func TestAllProblemsInOrder(t *testing.T) {
	text := strings.NewReplacer("5.431", "nan", "24, 24, 24", "24", "\"two-centre\"", "3").Replace(good)
	_, err := Decode("x", []byte(text))
	var p *Problems
	if !errors.As(err, &p) || len(p.List) != 3 {
		t.Fatalf("%v", err)
	}
	if lines := fmt.Sprint(p.List[0].Line, p.List[1].Line, p.List[2].Line); lines != "6 8 14" {
		t.Errorf("lines %s", lines)
	}
}

func TestHugeFilesAreRefused(t *testing.T) {
	if _, err := Decode("x", bytes.Repeat([]byte("#"), maxStudy+1)); err == nil || !strings.Contains(err.Error(), "larger than") {
		t.Error(err)
	}
}

func TestPositions(t *testing.T) {
	at := positions("a = 1\n  b.c = 2 # x = 3\n[t]\n\"q r\" = 1\n[[l]]\nx = [\n 1,\n 2]\n[[l]]\n x = '''\ny = 1\n'''\n[l.sub]\nz = 1\n")
	for name, want := range map[string]place{
		"a": {1, 1}, "b": {2, 3}, "b.c": {2, 3}, "t": {3, 1}, "t.q r": {4, 1}, "l": {5, 1}, "l[0]": {5, 1}, "l[0].x": {6, 1},
		"l[1]": {9, 1}, "l[1].x": {10, 2}, "l[1].sub": {13, 1}, "l[1].sub.z": {14, 1},
	} {
		if at[name] != want {
			t.Errorf("%s stands at %v, found at %v", name, want, at[name])
		}
	}
	if p, ok := at["l[1].y"]; ok {
		t.Errorf("a line of a text counts as a key at %v", p)
	}
}

func FuzzDecode(f *testing.F) {
	f.Add([]byte(good))
	f.Add([]byte("bandstudy = 1\n[crystal]\nlattice = [[0,2,2],[2,0,2],[2,2,0]]\n[[crystal.site]]\nelement=\"Si\"\nat=[0,0,0]\n[model]\nfile=\"x\"\n"))
	f.Add([]byte("bandstudy = 1\n[pin.A]\nheld=[1e999,0,0]\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		d, err := Decode("x", data)
		if err != nil {
			if !strings.Contains(err.Error(), "x") {
				t.Fatalf("the error does not name the file: %v", err)
			}
			return
		}
		e, err := Decode("x", d.Encode())
		if err != nil || !e.Equal(d) {
			t.Fatalf("what was read is not read again: %v\n%s", err, d.Encode())
		}
		Check("x", "", data)
	})
}

func TestHistory(t *testing.T) {
	doc := func(title string) Document { return Document{Title: title} }
	h := NewHistory(doc("0"))
	if h.CanUndo() || h.CanRedo() || h.Depth() != 0 {
		t.Error("a new history has steps")
	}
	h.Push(doc("1"), "")
	h.Push(doc("2"), "drag")
	h.Push(doc("3"), "drag")
	h.Push(doc("4"), "other drag")
	if h.Depth() != 3 {
		t.Errorf("a drag and two steps make %d", h.Depth())
	}
	for _, want := range []string{"3", "1", "0"} {
		if d, ok := h.Undo(); !ok || d.Title != want {
			t.Errorf("undo gives %q, not %q", d.Title, want)
		}
	}
	if _, ok := h.Undo(); ok {
		t.Error("undo before the beginning")
	}
	h.Redo()
	h.Push(doc("5"), "")
	if h.CanRedo() {
		t.Error("what was undone survives a new step")
	}
	for i := range 3 * deepest {
		h.Push(doc(fmt.Sprint(i)), "")
	}
	if h.Depth() != deepest {
		t.Errorf("%d steps are kept", h.Depth())
	}
}

func TestNewAndForSet(t *testing.T) {
	if d := New(); d.Model.Set != "vogl1983/Si" || d.Crystal.A != 5.431 {
		t.Errorf("a first start shows %+v", d)
	}
	for _, set := range catalog.Shipped() {
		d, err := ForSet(set.ID)
		if err != nil {
			t.Fatal(err)
		}
		b, err := d.Build("")
		if err != nil || b.PathErr != nil || b.PointsErr != nil {
			t.Errorf("%s: %v", set.ID, err)
		}
		if e, err := Decode("x", d.Encode()); err != nil || !e.Equal(d) {
			t.Errorf("%s: %v", set.ID, err)
		}
	}
	if _, err := ForSet("nobody/X"); err == nil {
		t.Error("a set that is not there")
	}
}

func TestOwnSetFiles(t *testing.T) {
	dir := t.TempDir()
	text, err := os.ReadFile("../../assets/sets/vogl1983/Si.toml")
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, "own.toml"), text, 0o666); err != nil {
		t.Fatal(err)
	}
	d := New()
	d.Model.Set, d.Model.File = "", "own.toml"
	if _, err := d.Build(dir); err != nil {
		t.Error(err)
	}
	if _, err := d.Build(t.TempDir()); err == nil || !strings.Contains(err.Error(), "own.toml") {
		t.Errorf("a set that is not there: %v", err)
	}
	if err := os.WriteFile(filepath.Join(dir, "own.toml"), []byte("bandset = 1\nid = 3\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, err := d.Build(dir); err == nil || !strings.Contains(err.Error(), "own.toml:2:") {
		t.Errorf("a bad set: %v", err)
	}
	if p := Check("own.toml", dir, []byte("bandset = 1\nid = 3\n")); len(p) == 0 || p[0].Line != 2 {
		t.Errorf("check of a bad set: %v", p)
	}
	if p := Check("x.bandstudy", dir, []byte(good)); len(p) != 0 {
		t.Errorf("check of a good study: %v", p)
	}
	bad := strings.Replace(good, "set        = \"vogl1983/Si\"", "file = \"gone.toml\"", 1)
	if p := Check("x.bandstudy", dir, []byte(bad)); len(p) != 1 || p[0].Line != 9 {
		t.Errorf("check of a study with a missing set: %v", p)
	}
}

// Check sees what Decode lets pass, as it may be computed or needs other files.
func TestCheckSeesMore(t *testing.T) {
	for _, c := range []struct {
		name, old, new string
		line           int // 0: no problem
		says           string
	}{
		{"silicon as it is", "Silicon", "Silicon", 0, ""},
		{"silicon as zincblende", "diamond\"\nelements  = [\"Si\"]", "zincblende\"\nelements  = [\"Si\", \"Si\"]", 0, ""},
		{"silicon as fcc", "diamond", "fcc", 4, "was made for diamond"},
		{"mesh of any size", "[24, 24, 24]", "[512, 512, 512]", 0, ""},
		{"pin beyond the levels", "[mesh]", "[pin.A]\nheld = [0, 0, 0]\nlevel = 10\n[pin.A.crystal]\nprototype = \"diamond\"\nelements = [\"C\"]\na = 3.567\n" +
			"[pin.A.model]\nset = \"vogl1983/C\"\n[mesh]", 15, "from 0 to 9"},
		{"pin with a missing file", "[mesh]", "[pin.B]\nheld = [0, 0, 0]\n[pin.B.crystal]\nprototype = \"diamond\"\nelements = [\"C\"]\na = 3.567\n" +
			"[pin.B.model]\nfile = \"gone.toml\"\n[mesh]", 20, "gone.toml"},
	} {
		if !strings.Contains(good, c.old) {
			t.Fatalf("the good study holds no %q", c.old)
		}
		text := []byte(strings.Replace(good, c.old, c.new, 1))
		if _, err := Decode("x", text); err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
		list := Check("x.bandstudy", t.TempDir(), text)
		switch {
		case c.line == 0 && len(list) > 0:
			t.Errorf("%s: %v", c.name, list[0])
		case c.line > 0 && (len(list) != 1 || list[0].Line != c.line || !strings.Contains(list[0].Error(), c.says) || list[0].Remedy == ""):
			t.Errorf("%s: %v, want line %d and %q", c.name, list, c.line, c.says)
		}
	}
}

// An own set is judged by what it says of the crystal, at the line that names
// it; what is wrong in the set itself, at the set's line.
func TestCheckOfOwnSets(t *testing.T) {
	dir := t.TempDir()
	set, err := os.ReadFile("../../assets/sets/vogl1983/C.toml")
	if err != nil {
		t.Fatal(err)
	}
	study := []byte(strings.Replace(good, "set        = \"vogl1983/Si\"", "file = \"own.toml\"", 1))
	for text, want := range map[string]string{
		string(set): "x.bandstudy:9:1: ", "bandset = 1\nid = 3\n": "own.toml:2:",
	} {
		if err := os.WriteFile(filepath.Join(dir, "own.toml"), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		list := Check("x.bandstudy", dir, study)
		if len(list) != 1 || !strings.HasPrefix(list[0].Error(), want) || list[0].Remedy == "" {
			t.Errorf("%v does not begin with %q", list, want)
		}
	}
}

func TestEqualSeesEveryField(t *testing.T) {
	base := New()
	pin := &Pin{Crystal: base.Crystal, Model: base.Model}
	for i, change := range []func(*Document){
		func(d *Document) { d.Title = "x" }, func(d *Document) { d.Crystal.A++ }, func(d *Document) { d.Crystal.Elements = []string{"C"} },
		func(d *Document) { d.Crystal.Prototype = "" }, func(d *Document) { d.Crystal.Lattice[0][0] = 1 }, func(d *Document) { d.Crystal.Sites = []Site{{}} },
		func(d *Document) { d.Model.Set = "x" }, func(d *Document) { d.Model.File = "x" }, func(d *Document) { d.Model.SpinOrbit = true },
		func(d *Document) { d.Model.Factors = map[string]float64{"x": 1} }, func(d *Document) { d.Path.Legs = []string{"Γ X"} },
		func(d *Document) { d.Path.Frame = lattice.TwoPiOverA }, func(d *Document) { d.Path.Step = 1 }, func(d *Document) { d.Mesh[2] = 5 },
		func(d *Document) { d.View.Level = 5 }, func(d *Document) { d.View.Held[1] = math.Pi }, func(d *Document) { d.PinA = pin }, func(d *Document) { d.PinB = pin },
	} {
		d := base
		change(&d)
		if d.Equal(base) || base.Equal(d) {
			t.Errorf("change %d is not seen", i)
		}
	}
	if !base.Equal(New()) {
		t.Error("equal studies differ")
	}
}
