package doc

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/path"
	"bandwright/physics/symmetry"
	"bandwright/physics/tightbinding"
	"bandwright/physics/zone"
)

// Built is the physics made from a study.
type Built struct {
	Crystal   *crystal.Crystal
	Set       *catalog.Set
	Model     hamiltonian.Model
	Group     *symmetry.Group
	Zone      *zone.Zone
	Points    []zone.SpecialPoint // nil when the lattice has no table
	PointsErr error               // why
	Path      path.Path
	PathErr   error // why there is no path
	Mesh      *symmetry.Mesh
}

// MakeCrystal returns the crystal of the study.
func (d Document) MakeCrystal() (*crystal.Crystal, error) {
	c := d.Crystal
	if c.Prototype != "" {
		return crystal.FromPrototype(c.Prototype, c.Elements, c.A)
	}
	if len(c.Sites) == 0 {
		return nil, errors.New("the crystal has neither a prototype nor sites: give one of them")
	}
	var vectors [3]mgl64.Vec3
	for i, v := range c.Lattice {
		vectors[i] = mgl64.Vec3(v)
	}
	sites := make([]crystal.Site, len(c.Sites))
	for i, s := range c.Sites {
		sites[i] = crystal.Site{Element: s.Element, Label: s.Label, Fraction: s.At}
	}
	return crystal.FromSites(vectors, sites)
}

// maxSetFile bounds the size of a parameter set file, bytes.
const maxSetFile = 1 << 20

// MakeSet returns the parameter set of the study; files of the user's own are
// named relative to dir.
func (m Model) MakeSet(dir string) (*catalog.Set, error) {
	if m.Kind != "" && m.Kind != TwoCentre {
		return nil, fmt.Errorf("not available: models of kind %q are not part of this version; use %q", m.Kind, TwoCentre)
	}
	if m.File == "" {
		if m.Set == "" {
			return nil, errors.New("the model names no parameter set: give set = \"vogl1983/Si\" or file = \"own.toml\"")
		}
		return catalog.Lookup(m.Set)
	}
	name := filepath.FromSlash(m.File)
	if !filepath.IsAbs(name) {
		name = filepath.Join(dir, name)
	}
	data, err := readFile(name, maxSetFile)
	if err != nil {
		return nil, fmt.Errorf("the parameter set cannot be read: %w", err)
	}
	return catalog.ParseFile(m.File, data)
}

// MakePath returns the k-path of the study on a crystal.
func (p Path) MakePath(c *crystal.Crystal) (path.Path, error) {
	if len(p.Legs) == 0 {
		return path.Standard(c.Setting)
	}
	return path.Parse(p.Legs, p.Frame, c.Setting)
}

// Build makes crystal, model and all that follows from them. dir is the folder
// of the study. A path or a table of special points that cannot be had is no
// error: the rest is built, and PathErr and PointsErr say why.
func (d Document) Build(dir string) (*Built, error) {
	c, err := d.MakeCrystal()
	if err != nil {
		return nil, err
	}
	set, err := d.Model.MakeSet(dir)
	if err != nil {
		return nil, err
	}
	b := &Built{Crystal: c, Set: set}
	b.Model, err = tightbinding.New(c, set, tightbinding.Options{SpinOrbit: d.Model.SpinOrbit, Factors: d.Model.Factors})
	if err != nil {
		return nil, err
	}
	if b.Group, err = symmetry.Find(c, symmetry.DefaultTolerance); err != nil {
		return nil, err
	}
	if b.Zone, err = zone.First(c.Lattice()); err != nil {
		return nil, err
	}
	b.Points, b.PointsErr = zone.SpecialPoints(c.Setting)
	b.Path, b.PathErr = d.Path.MakePath(c)
	mesh := d.Mesh
	if mesh == [3]int{} {
		mesh = DefaultMesh
	}
	if b.Mesh, err = b.Group.Mesh(mesh); err != nil {
		return nil, err
	}
	return b, nil
}

// Stretch says that the set is used for another structure than it was made for,
// and what to do; both are "" when it is not. Such a model can be computed, but
// coordination and distances are none that the set was fitted to. A crystal
// given by its sites has no structure by name and is not judged.
func (b *Built) Stretch() (problem, remedy string) {
	made, used := b.Set.Prototype, b.Crystal.Prototype
	alike := func(p string) string { // one structure, with atoms of one or two kinds
		if p == "diamond" {
			return "zincblende"
		}
		return p
	}
	if made == "" || used == "" || alike(made) == alike(used) {
		return "", ""
	}
	return fmt.Sprintf("the crystal is %s, and parameter set %s was made for %s", used, b.Set.ID, made),
		fmt.Sprintf("write prototype = %q, or choose a set for %s", made, used)
}

// readFile reads a regular file of bounded size.
func readFile(name string, most int64) ([]byte, error) {
	f, err := os.Open(name)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, err
	}
	if info.IsDir() {
		return nil, fmt.Errorf("%s is a folder: give a file", name)
	}
	data, err := io.ReadAll(io.LimitReader(f, most+1))
	if err != nil {
		return nil, err
	}
	if int64(len(data)) > most {
		return nil, fmt.Errorf("%s is larger than %d MB and is not read: give a text file", name, most>>20)
	}
	return data, nil
}

// isSet says whether a file looks like a parameter set and not like a study.
func isSet(name string, data []byte) bool {
	for _, line := range strings.Split(string(data), "\n") {
		line = strings.TrimSpace(line)
		switch {
		case strings.HasPrefix(line, "bandset"):
			return true
		case strings.HasPrefix(line, "bandstudy"):
			return false
		}
	}
	return strings.EqualFold(filepath.Ext(name), ".toml")
}
