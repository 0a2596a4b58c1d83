package crystal

import (
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/lattice"
)

// Site is an atom of the primitive cell.
type Site struct {
	Element  string
	Label    string     // unique in the crystal: "Si1"
	Fraction [3]float64 // of the primitive vectors
	Position mgl64.Vec3 // Å
}

// Crystal is a lattice with atoms.
type Crystal struct {
	Prototype string // name of the prototype, "" for a free structure
	Setting   lattice.Setting
	Sites     []Site
}

// ClosestAtoms is the distance, Å, below which two atoms count as lying on top
// of each other. The shortest bond of all, in H2, is 0.74 Å (common practice);
// the bound is lower so that dimensionless models with a = 1 pass.
const ClosestAtoms = 0.4

// FromSites returns a crystal of given primitive vectors (Å) and sites. Of a
// site it reads Element, Fraction and, if there is one, Label; Position is
// computed. A lattice that is cubic is recognised however its vectors lie.
func FromSites(vectors [3]mgl64.Vec3, sites []Site) (*Crystal, error) {
	l, err := lattice.New(vectors[0], vectors[1], vectors[2])
	if err != nil {
		return nil, err
	}
	setting, ok := lattice.CubicSetting(l)
	if !ok {
		setting = lattice.Setting{Lattice: l, Conventional: vectors, A: vectors[0].Len()}
	}
	return build("", setting, sites)
}

func build(prototype string, s lattice.Setting, sites []Site) (*Crystal, error) {
	if len(sites) == 0 {
		return nil, fmt.Errorf("the crystal has no atoms: give at least one site")
	}
	c := &Crystal{Prototype: prototype, Setting: s, Sites: make([]Site, len(sites))}
	count := map[string]int{}
	place := map[string]int{}
	for i, site := range sites {
		if !ValidElement(site.Element) {
			return nil, unknownElement(site.Element, fmt.Sprintf("site %d", i+1))
		}
		for _, x := range site.Fraction {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return nil, fmt.Errorf("site %d (%s) has the position %v: give three finite fractions of the cell vectors", i+1, site.Element, site.Fraction)
			}
		}
		count[site.Element]++
		if site.Label == "" {
			site.Label = site.Element + strconv.Itoa(count[site.Element])
		}
		if before, taken := place[site.Label]; taken {
			return nil, fmt.Errorf("sites %d and %d are both labelled %q: give each site its own label", before, i+1, site.Label)
		}
		place[site.Label] = i + 1
		site.Position = s.Lattice.Position(site.Fraction)
		c.Sites[i] = site
	}
	if err := c.checkDistances(); err != nil {
		return nil, err
	}
	return c, nil
}

// unknownElement explains a symbol that is no element; a wrong case is the
// usual slip and gets its own remedy.
func unknownElement(symbol, where string) error {
	if symbol == "" {
		return fmt.Errorf("%s has no element: give a chemical symbol such as \"Si\"", where)
	}
	for _, s := range symbols {
		if strings.EqualFold(s, symbol) {
			return fmt.Errorf("%s: unknown element %q: did you mean %q?", where, symbol, s)
		}
	}
	return fmt.Errorf("%s: unknown element %q: give a chemical symbol such as \"Si\"", where, symbol)
}

func (c *Crystal) checkDistances() error {
	r, _ := c.Lattice().Reduced()
	for _, v := range r {
		if v.Len() < ClosestAtoms {
			return fmt.Errorf("the lattice repeats after %.4g Å, which puts atoms on top of each other: give lengths in Å (1 nm = 10 Å)", v.Len())
		}
	}
	var closest pair
	closest.length = math.Inf(1)
	c.eachPair(ClosestAtoms, func(p pair) {
		if p.length < closest.length {
			closest = p
		}
	})
	if closest.length < ClosestAtoms {
		a, b := c.Sites[closest.from], c.Sites[closest.to]
		if closest.from == closest.to {
			return fmt.Errorf("%s lies %.4g Å from its own image in the next cell: give lengths in Å (1 nm = 10 Å)", a.Label, closest.length)
		}
		return fmt.Errorf("%s and %s lie %.4g Å apart, on top of each other: remove one of them, or check the positions and that lengths are in Å (1 nm = 10 Å)", a.Label, b.Label, closest.length)
	}
	return nil
}

// Lattice returns the lattice of the crystal.
func (c *Crystal) Lattice() lattice.Lattice { return c.Setting.Lattice }

// WithLatticeConstant returns the same crystal scaled to the lattice constant a, Å.
func (c *Crystal) WithLatticeConstant(a float64) (*Crystal, error) {
	if err := checkConstant(a); err != nil {
		return nil, err
	}
	f := a / c.Setting.A
	s := c.Setting
	l, err := lattice.New(s.Lattice.A(0).Mul(f), s.Lattice.A(1).Mul(f), s.Lattice.A(2).Mul(f))
	if err != nil {
		return nil, err
	}
	s.Lattice, s.A = l, a
	for i := range s.Conventional {
		s.Conventional[i] = s.Conventional[i].Mul(f)
	}
	return build(c.Prototype, s, c.Sites)
}

func checkConstant(a float64) error {
	if math.IsNaN(a) || math.IsInf(a, 0) || a <= 0 {
		return fmt.Errorf("lattice constant a = %v: give a positive length in Å", a)
	}
	return nil
}

// Formula returns the chemical formula in lowest terms, electropositive
// elements first: "Si", "GaAs".
func (c *Crystal) Formula() string {
	count := map[string]int{}
	for _, s := range c.Sites {
		count[s.Element]++
	}
	var elements []string
	divisor := 0
	for e, n := range count {
		elements = append(elements, e)
		divisor = gcd(divisor, n)
	}
	sort.Slice(elements, func(i, j int) bool {
		a, b := elements[i], elements[j]
		if ra, rb := formulaRank(a), formulaRank(b); ra != rb {
			return ra < rb
		}
		return numbers[a] < numbers[b]
	})
	var b strings.Builder
	for _, e := range elements {
		b.WriteString(e)
		if n := count[e] / divisor; n > 1 {
			b.WriteString(strconv.Itoa(n))
		}
	}
	return b.String()
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}
