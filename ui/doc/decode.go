package doc

import (
	"errors"
	"fmt"
	"sort"
	"strings"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/lattice"
	"bandwright/physics/path"
	"bandwright/physics/symmetry"
	"bandwright/physics/tightbinding"
)

// Version is that of the form of study files.
const Version = 1

// maxStudy bounds the size of a study file, bytes.
const maxStudy = 8 << 20

// Bounds of what a study may hold.
const (
	maxSites     = 2000
	maxLevel     = 100_000
	maxDivisions = 512
)

// Decode reads a study:
//
//	bandstudy = 1
//	title = "Silicon"
//	[crystal]
//	prototype = "diamond"       # or lattice = [[..],[..],[..]] and [[crystal.site]]
//	elements  = ["Si"]          # of compounds the anion first
//	a         = 5.431           # Å
//	[model]
//	kind       = "two-centre"
//	set        = "vogl1983/Si"  # or file = "own.toml"
//	spin_orbit = false
//	factors    = {"shell1 spσ" = 0.5}
//	[path]                      # the standard path when absent
//	legs  = ["Γ X W K Γ L", "U X"]
//	frame = "primitive"         # "conventional", "2pi/a", "1/Å"
//	step  = 0.02                # Å⁻¹
//	[mesh]
//	divisions = [24, 24, 24]
//	[view]                      # colour, zero, window, held, level, frame, dos, camera
//	[pin.A]                     # held, level, [pin.A.crystal], [pin.A.model]
//
// The name is used in errors only, which are of type *Problems. Parameter sets
// of the user's own are not read: Build does that.
func Decode(name string, data []byte) (Document, error) {
	d, r := decode(name, data)
	if err := r.err(); err != nil {
		return Document{}, err
	}
	return d, nil
}

func decode(name string, data []byte) (Document, *reader) {
	if len(data) > maxStudy {
		r := &reader{file: name, failed: map[string]bool{}}
		r.fail("", "give a study file", "the file is larger than %d MB and is no study", maxStudy>>20)
		return Document{}, r
	}
	r, root := open(name, data)
	if root.m == nil {
		return Document{}, r
	}
	if _, ok := root.m["bandstudy"]; !ok {
		r.fail("bandstudy", "begin the file with bandstudy = 1", "the file is no study: bandstudy is missing")
		return Document{}, r
	}
	if v, ok := root.m["bandstudy"].(int64); ok && v > Version {
		r.fail("bandstudy", "open it with a newer version of the program", "the study has form %d, this program reads forms up to %d", v, Version)
		return Document{}, r
	}
	root.whole("bandstudy", 1, Version, Version)
	d := Document{Title: root.text("title"), Mesh: DefaultMesh}
	sub := root.table("crystal")
	if sub.m == nil && !r.failed["crystal"] {
		root.fail("crystal", "add [crystal] with prototype, elements and a", "the study has no crystal")
	}
	var c *crystal.Crystal
	d.Crystal, c = decodeCrystal(sub)
	sub = root.table("model")
	if sub.m == nil && !r.failed["model"] {
		root.fail("model", "add [model] with set = \"vogl1983/Si\" or another shipped set", "the study has no model")
	}
	d.Model = decodeModel(sub, c)
	d.Path = decodePath(root.table("path"), c)
	d.Mesh = decodeMesh(root.table("mesh"))
	d.View = decodeView(root.table("view"))
	pins := root.table("pin")
	d.PinA, d.PinB = decodePin(pins.table("A")), decodePin(pins.table("B"))
	pins.unused()
	root.unused()
	return d, r
}

func decodeCrystal(t table) (Crystal, *crystal.Crystal) {
	var c Crystal
	if t.m == nil {
		return c, nil
	}
	problems := len(t.r.list)
	c.Prototype = t.text("prototype")
	c.Elements = t.texts("elements")
	var hasA bool
	c.A, hasA = t.number("a")
	if v, ok := t.take("lattice"); ok {
		rows, ok := v.([]any)
		if !ok || len(rows) != 3 {
			t.fail("lattice", "write lattice = [[..], [..], [..]] in Å", "crystal.lattice is not a list of three vectors")
		}
		for i, row := range rows {
			if i < 3 {
				t.fill("lattice", fmt.Sprintf("vector %d of %s", i+1, join(t.name, "lattice")), row, c.Lattice[i][:])
			}
		}
	}
	sites := t.tables("site")
	if len(sites) > maxSites {
		t.fail("site", fmt.Sprintf("give at most %d", maxSites), "the crystal has %d sites", len(sites))
		sites = nil
	}
	for _, site := range sites {
		s := Site{Element: site.text("element"), Label: site.text("label")}
		if !site.numbers("at", s.At[:]) {
			site.fail("at", "add at = [x, y, z] in fractions of the vectors", "%s has no position", site.name)
		}
		if !crystal.ValidElement(s.Element) {
			site.fail("element", "write the symbol of an element, as \"Si\"", "%s.element = %q is no element", site.name, s.Element)
		}
		site.unused()
		c.Sites = append(c.Sites, s)
	}
	t.unused()
	if len(t.r.list) > problems {
		return c, nil // what seems to be missing may be misspelled
	}
	free := t.used["lattice"] || len(c.Sites) > 0
	switch {
	case c.Prototype != "" && free:
		t.fail("prototype", "keep one of the two", "the crystal has a prototype and a lattice with sites")
	case c.Prototype == "" && !free:
		t.fail("prototype", "give prototype, elements and a, or lattice and [[crystal.site]]", "the crystal has neither a prototype nor a lattice")
	case c.Prototype == "" && (len(c.Elements) > 0 || hasA):
		t.fail("elements", "remove elements and a: they belong to a prototype", "a crystal given by its lattice has no elements and a")
	case c.Prototype != "" && !hasA:
		t.fail("a", "add a = … in Å", "crystal.a is missing")
	case c.Prototype != "" && !(c.A > 0):
		t.fail("a", "write a length above 0 Å", "crystal.a = %v is no length", c.A)
	}
	if c.Prototype != "" {
		checkElements(t, c)
	}
	if len(t.r.list) > problems {
		return c, nil
	}
	built, err := Document{Crystal: c}.MakeCrystal()
	if err != nil {
		problem, remedy := parts(err)
		t.r.fail(join(t.name, crystalKey(c)), remedy, "%s", problem)
		return c, nil
	}
	return c, built
}

// checkElements compares the elements with the prototype they are for. An
// unknown prototype is left to whoever makes the crystal.
func checkElements(t table, c Crystal) {
	for _, p := range crystal.Prototypes() {
		if p.Name == strings.ReplaceAll(c.Prototype, " ", "-") && len(c.Elements) != p.Elements {
			example := []string{`["Si"]`, `["As", "Ga"]`}[min(p.Elements, 2)-1]
			t.fail("elements", fmt.Sprintf("give %d, as elements = %s", p.Elements, example),
				"crystal.elements has %d items, and prototype %q takes %d", len(c.Elements), p.Name, p.Elements)
		}
	}
	for i, e := range c.Elements {
		if !crystal.ValidElement(e) {
			t.fail("elements", "write symbols of elements, as \"Si\"", "item %d of crystal.elements, %q, is no element", i+1, e)
		}
	}
}

// crystalKey is the key, within [crystal], that keeps the crystal from being
// made: of sites, the first one with which it cannot be.
func crystalKey(c Crystal) string {
	if c.Prototype != "" {
		if _, err := crystal.FromPrototype(c.Prototype, c.Elements, 5); err != nil {
			return "prototype"
		}
		return "a"
	}
	fails := func(sites int) bool {
		part := c
		part.Sites = c.Sites[:sites]
		_, err := Document{Crystal: part}.MakeCrystal()
		return err != nil
	}
	if len(c.Sites) == 0 || fails(1) {
		return "lattice"
	}
	// A part that fails fails with more sites too.
	n := 1 + sort.Search(len(c.Sites)-1, func(i int) bool { return fails(i + 2) })
	key := "at"
	for _, before := range c.Sites[:n] {
		if before.Label != "" && before.Label == c.Sites[n].Label {
			key = "label"
		}
	}
	return fmt.Sprintf("site[%d].%s", n, key)
}

// parts splits a message of the physics packages into problem and remedy.
func parts(err error) (problem, remedy string) {
	text := err.Error()
	for _, mark := range []string{"; ", ": "} {
		if i := strings.LastIndex(text, mark); i > 0 {
			return text[:i], text[i+len(mark):]
		}
	}
	return text, "correct it"
}

func decodeModel(t table, c *crystal.Crystal) Model {
	m := Model{Kind: TwoCentre}
	if t.m == nil {
		return m
	}
	problems := len(t.r.list)
	if kind := t.text("kind"); kind != "" && kind != TwoCentre {
		t.fail("kind", "write kind = \"two-centre\"", "not available: models of kind %q are not part of this version", kind)
	}
	m.Set, m.File, m.SpinOrbit = t.text("set"), t.text("file"), t.truth("spin_orbit")
	factors := t.table("factors")
	var subjects []string
	for subject := range factors.m {
		subjects = append(subjects, subject)
	}
	sort.Strings(subjects)
	for _, subject := range subjects {
		f, _ := factors.number(subject)
		if f < 0 || f > 2 {
			factors.fail(subject, "write a number from 0 to 2", "the factor of %q is %v", subject, f)
		}
		if m.Factors == nil {
			m.Factors = map[string]float64{}
		}
		m.Factors[subject] = f
	}
	t.unused()
	switch {
	case m.Set == "" && m.File == "":
		t.fail("set", "add set = \"vogl1983/Si\" or another shipped set, or file = \"own.toml\"", "the model names no parameter set")
	case m.Set != "" && m.File != "":
		t.fail("file", "keep one of the two", "the model names a shipped set and a file")
	}
	if len(t.r.list) > problems || m.Set == "" {
		return m
	}
	set, err := catalog.Lookup(m.Set)
	if err != nil {
		problem, remedy := parts(err)
		t.fail("set", remedy, "%s", problem)
		return m
	}
	if c == nil {
		return m
	}
	misfit(t.r, t.name, c, set, m)
	return m
}

// misfit notes why a set cannot describe a crystal, if it cannot.
func misfit(r *reader, name string, c *crystal.Crystal, set *catalog.Set, m Model) {
	fits := func(s *catalog.Set, o tightbinding.Options) bool {
		_, err := tightbinding.New(c, s, o)
		return err == nil
	}
	_, err := tightbinding.New(c, set, tightbinding.Options{SpinOrbit: m.SpinOrbit, Factors: m.Factors})
	if err == nil {
		return
	}
	problem, remedy := parts(err)
	switch {
	case fits(set, tightbinding.Options{SpinOrbit: m.SpinOrbit}):
		r.fail(join(name, "factors"), "name a term of the model: "+remedy, "%s", problem)
		return
	case fits(set, tightbinding.Options{}):
		r.fail(join(name, "spin_orbit"), remedy, "%s", problem)
		return
	}
	var others []string
	for _, s := range catalog.Shipped() {
		if fits(s, tightbinding.Options{}) {
			others = append(others, s.ID)
		}
	}
	if len(others) > 0 {
		remedy += ": " + strings.Join(others, ", ")
	}
	key := "set"
	if m.File != "" {
		key = "file"
	}
	r.fail(join(name, key), remedy, "%s", problem)
}

func decodePath(t table, c *crystal.Crystal) Path {
	var p Path
	if t.m == nil {
		return p
	}
	p.Legs = t.texts("legs")
	p.Frame = decodeFrame(t, "frame", lattice.Primitive)
	if step, ok := t.number("step"); ok {
		if !(step > 0) {
			t.fail("step", "write a length above 0 Å⁻¹, as 0.02", "path.step = %v is no spacing", step)
		}
		p.Step = step
	}
	t.unused()
	if c == nil || len(p.Legs) == 0 || t.r.failed[join(t.name, "frame")] {
		return p
	}
	if _, err := path.Parse(p.Legs, p.Frame, c.Setting); err != nil {
		remedy := "correct the path"
		var pe *path.Error
		if errors.As(err, &pe) {
			remedy = pe.Remedy
			one := *pe
			one.Remedy = ""
			t.fail("legs", remedy, "%s", strings.TrimSuffix(one.Error(), "; "))
			return p
		}
		t.fail("legs", remedy, "%v", err)
	}
	return p
}

func decodeFrame(t table, key string, otherwise lattice.Frame) lattice.Frame {
	text := t.text(key)
	if text == "" {
		return otherwise
	}
	f, err := lattice.ParseFrame(text)
	if err != nil {
		t.fail(key, "write \"primitive\", \"conventional\", \"2pi/a\" or \"1/Å\"", "%s = %q is no frame", join(t.name, key), text)
		return otherwise
	}
	return f
}

func decodeMesh(t table) [3]int {
	mesh := DefaultMesh
	if t.m == nil {
		return mesh
	}
	var n [3]float64
	if t.numbers("divisions", n[:]) {
		product := 1.0
		for i, x := range n {
			if x != float64(int(x)) || x < 1 || x > maxDivisions {
				t.fail("divisions", fmt.Sprintf("write three whole numbers from 1 to %d", maxDivisions), "mesh.divisions holds %v", x)
				break
			}
			mesh[i], product = int(x), product*x
		}
		if product > symmetry.MaxMesh {
			t.fail("divisions", "give fewer", "the mesh has %.0f points", product)
		}
	}
	t.unused()
	return mesh
}

func decodeView(t table) View {
	v := View{Frame: lattice.TwoPiOverA, Level: NotGiven}
	if t.m == nil {
		return v
	}
	v.Colour, v.Zero, v.DOS = t.choice("colour", Colours), t.choice("zero", Zeros), t.choice("dos", Densities)
	v.Frame = decodeFrame(t, "frame", lattice.TwoPiOverA)
	if t.numbers("window", v.Window[:]) && !(v.Window[1] > v.Window[0]) && v.Window != [2]float64{} {
		t.fail("window", "write [lowest, highest] in eV", "view.window is empty")
	}
	t.numbers("held", v.Held[:])
	v.Level = t.whole("level", 0, maxLevel, NotGiven)
	t.numbers("camera", v.Camera[:])
	if c := v.Camera; c != [5]float64{} && (c[4] <= 0 || c[0]*c[0]+c[1]*c[1]+c[2]*c[2]+c[3]*c[3] == 0) {
		t.fail("camera", "remove it to see the zone from the usual side", "view.camera is no turn and zoom")
	}
	t.unused()
	return v
}

func decodePin(t table) *Pin {
	if t.m == nil {
		return nil
	}
	p := &Pin{Level: t.whole("level", 0, maxLevel, 0)}
	if !t.numbers("held", p.K[:]) {
		t.fail("held", "add held = [k1, k2, k3] in primitive fractions", "%s has no k point", t.name)
	}
	var c *crystal.Crystal
	for _, key := range []string{"crystal", "model"} {
		if _, ok := t.m[key]; !ok {
			t.fail(key, "add ["+join(t.name, key)+"], or remove the pin", "%s has no %s", t.name, key)
		}
	}
	p.Crystal, c = decodeCrystal(t.table("crystal"))
	p.Model = decodeModel(t.table("model"), c)
	t.unused()
	return p
}
