package crystal

import (
	"fmt"
	"math"
	"strings"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
)

// PrototypeInfo describes a prototype structure.
type PrototypeInfo struct {
	Name        string
	Bravais     string // IUCr symbol
	Elements    int    // how many elements it takes
	Description string
}

type prototype struct {
	PrototypeInfo
	// sites in units of a along the cubic axes, one per atom of the primitive cell
	sites   [][3]float64
	element []int // which of the elements sits on each site
}

var prototypes = []prototype{
	{PrototypeInfo{"fcc", "cF", 1, "face-centred cubic, the A1 structure of Cu"}, [][3]float64{{}}, []int{0}},
	{PrototypeInfo{"bcc", "cI", 1, "body-centred cubic, the A2 structure of W"}, [][3]float64{{}}, []int{0}},
	{PrototypeInfo{"sc", "cP", 1, "simple cubic, the A_h structure of α-Po"}, [][3]float64{{}}, []int{0}},
	{PrototypeInfo{"diamond", "cF", 1, "diamond, A4; the second atom at a/4 (1,1,1)"}, [][3]float64{{}, {.25, .25, .25}}, []int{0, 0}},
	{PrototypeInfo{"zincblende", "cF", 2, "zincblende, B3; elements [anion, cation], the cation at a/4 (1,1,1)"}, [][3]float64{{}, {.25, .25, .25}}, []int{0, 1}},
	{PrototypeInfo{"rock-salt", "cF", 2, "rock salt, B1; the second element at a/2 (1,1,1)"}, [][3]float64{{}, {.5, .5, .5}}, []int{0, 1}},
	{PrototypeInfo{"caesium-chloride", "cP", 2, "caesium chloride, B2; the second element at a/2 (1,1,1)"}, [][3]float64{{}, {.5, .5, .5}}, []int{0, 1}},
}

// Prototypes returns the prototypes that FromPrototype knows.
func Prototypes() []PrototypeInfo {
	out := make([]PrototypeInfo, len(prototypes))
	for i, p := range prototypes {
		out[i] = p.PrototypeInfo
	}
	return out
}

// cubicPrimitive holds the primitive vectors of the cubic lattices in units of
// a, as in W. Setyawan, S. Curtarolo, Comput. Mater. Sci. 49, 299 (2010), so
// that fractions of k points agree with the tables of special points.
var cubicPrimitive = map[string][3]mgl64.Vec3{
	"cP": {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}},
	"cF": {{0, .5, .5}, {.5, 0, .5}, {.5, .5, 0}},
	"cI": {{-.5, .5, .5}, {.5, -.5, .5}, {.5, .5, -.5}},
}

// FromPrototype returns the crystal of a named prototype with lattice constant
// a, Å. The name is one of Prototypes; a blank may stand for the hyphen.
func FromPrototype(name string, elements []string, a float64) (*Crystal, error) {
	p, err := findPrototype(name)
	if err != nil {
		return nil, err
	}
	if len(elements) != p.Elements {
		return nil, fmt.Errorf("prototype %q takes %d element(s), not %d: %s", p.Name, p.Elements, len(elements), p.Description)
	}
	for i, e := range elements {
		if !ValidElement(e) {
			return nil, unknownElement(e, fmt.Sprintf("element %d of %s", i+1, p.Name))
		}
	}
	if err := checkConstant(a); err != nil {
		return nil, err
	}
	v := cubicPrimitive[p.Bravais]
	l, err := lattice.New(v[0].Mul(a), v[1].Mul(a), v[2].Mul(a))
	if err != nil {
		return nil, err
	}
	s := lattice.Setting{Lattice: l, Conventional: [3]mgl64.Vec3{{a, 0, 0}, {0, a, 0}, {0, 0, a}}, A: a, Bravais: p.Bravais}
	sites := make([]Site, len(p.sites))
	for i, x := range p.sites {
		sites[i] = Site{Element: elements[p.element[i]], Fraction: l.Fraction(mgl64.Vec3(x).Mul(a))}
		for j, f := range sites[i].Fraction {
			// The sites are multiples of an eighth; drop the last bit of rounding.
			if n := math.Round(f * 8); math.Abs(n-f*8) < 1e-12 {
				sites[i].Fraction[j] = n / 8
			}
		}
	}
	return build(p.Name, s, sites)
}

func findPrototype(name string) (prototype, error) {
	wanted := strings.ReplaceAll(strings.TrimSpace(name), " ", "-")
	names := make([]string, len(prototypes))
	for i, p := range prototypes {
		if p.Name == wanted {
			return p, nil
		}
		names[i] = p.Name
	}
	return prototype{}, fmt.Errorf("unknown prototype %q: use %s", name, strings.Join(names, ", "))
}
