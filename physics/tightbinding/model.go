package tightbinding

import (
	"fmt"
	"math"
	"slices"

	"github.com/go-gl/mathgl/mgl64"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
)

// Options says how a model departs from its parameter set.
type Options struct {
	SpinOrbit bool
	// Factors scales terms by 0 … 2. A key is the subject of terms, from the
	// general to the particular: "onsite s", "onsite Si1 s", "spin_orbit p",
	// "spin_orbit Si1 p", "shell1 spσ", "shell1 spσ Ga s – As p" (a hyphen
	// may stand for the dash). The most particular key that fits counts.
	Factors map[string]float64
}

// lengthTolerance is the share of the bond length by which the bonds of one
// shell may differ, so that a strained crystal keeps its shells.
const lengthTolerance = 0.05

// Model is a two-centre model of a crystal. It implements hamiltonian.Model
// and is immutable.
type Model struct {
	crystal   *crystal.Crystal
	set       *catalog.Set
	spinOrbit bool
	basis     []hamiltonian.Orbital
	n0        int // functions without spin
	electrons float64
	terms     []hamiltonian.Term
	bonds     []crystal.Bond
	altered   []string

	onsite []float64 // orbital energy of each function without spin
	owner  []int     // its on-site term
	blocks []block   // one per bond
	spins  []spinEntry
	sums   termSums
}

// block is the interaction along one bond: element (i, j) stands between
// function row+i and function col+j, where row ≥ col.
type block struct {
	row, col, rows, cols int
	turns                [3]float64 // fractions of the vector from row atom to col atom
	vector               mgl64.Vec3 // the same, Å
	onAtom               bool       // both ends are the same site, in different cells
	v                    []float64  // rows×cols, eV
	even, odd            []float64  // V+Vᵀ, V−Vᵀ when onAtom
	parts                []part     // V by terms
}

// part is the share of one term in one element of a block.
type part struct {
	element int32
	term    int32
	value   float64
}

// spinEntry is one element of the spin–orbit matrix below the diagonal.
type spinEntry struct {
	i, j   int
	re, im float64
	term   int
}

// New returns the model of a crystal with a parameter set.
func New(c *crystal.Crystal, set *catalog.Set, o Options) (*Model, error) {
	m := &Model{crystal: c, set: set, spinOrbit: o.SpinOrbit}
	first, err := m.makeBasis()
	if err != nil {
		return nil, err
	}
	scale, err := readFactors(o.Factors)
	if err != nil {
		return nil, err
	}
	m.makeOnSite(scale)
	if o.SpinOrbit {
		if err := m.makeSpinOrbit(scale, first); err != nil {
			return nil, err
		}
	}
	bonds, shells, err := c.Bonds(set.Shells, min(1, lengthTolerance*set.Lengths[0]))
	if err != nil {
		return nil, fmt.Errorf("parameter set %s: %w", set.ID, err)
	}
	m.bonds = bonds
	if err := m.makeBonds(scale, first, shells); err != nil {
		return nil, err
	}
	if err := scale.unused(); err != nil {
		return nil, err
	}
	m.altered = append(m.compare(shells), scale.report()...)
	m.sums = sumByTerms(m.blocks)
	if m.spinOrbit {
		m.double()
	}
	return m, nil
}

// makeBasis lists the functions site by site and returns the first of each site.
func (m *Model) makeBasis() (first []int, err error) {
	for i, site := range m.crystal.Sites {
		shells := m.set.Basis(site.Element)
		if shells == nil {
			return nil, fmt.Errorf("parameter set %s has no orbitals for %s (site %s): choose a set for the elements of the crystal", m.set.ID, site.Element, site.Label)
		}
		first = append(first, len(m.basis))
		for _, l := range shells {
			for _, name := range orbitalNames[l] {
				m.basis = append(m.basis, hamiltonian.Orbital{Site: i, L: l, Name: name})
			}
		}
		m.electrons += m.set.Valence[site.Element]
	}
	m.n0 = len(m.basis)
	return first, nil
}

func (m *Model) makeOnSite(scale *factors) {
	m.onsite = make([]float64, m.n0)
	m.owner = make([]int, m.n0)
	for _, g := range hamiltonian.Groups(m.basis) {
		site := m.crystal.Sites[g.Site]
		e := m.set.OnSite[site.Element][g.L] * scale.of("onsite "+g.L.String(), "onsite "+g.Label(m.crystal.Sites))
		for _, i := range g.Members {
			m.onsite[i], m.owner[i] = e, len(m.terms)
		}
		m.terms = append(m.terms, hamiltonian.Term{Kind: hamiltonian.OnSite, Site: g.Site, L: g.L, Parameter: e})
	}
}

// makeSpinOrbit sets up λ L·σ of each p shell. With ⟨i|L_k|j⟩ = −i ε_kij in
// real p functions, ⟨i↑|L·σ|j↑⟩ = −i ε_zij, ⟨i↓|L·σ|j↓⟩ = +i ε_zij and
// ⟨i↓|L·σ|j↑⟩ = ⟨i|L_x|j⟩ + i⟨i|L_y|j⟩ = −i ε_xij + ε_yij.
func (m *Model) makeSpinOrbit(scale *factors, first []int) error {
	for i, site := range m.crystal.Sites {
		at := slices.Index(m.set.Basis(site.Element), hamiltonian.P)
		if at < 0 {
			continue
		}
		so, ok := m.set.SpinOrbit[site.Element]
		if !ok {
			return fmt.Errorf("parameter set %s has no spin–orbit value for %s: switch spin–orbit coupling off, or use a set of your own with [spin_orbit.%s]", m.set.ID, site.Element, site.Element)
		}
		p := first[i]
		for _, l := range m.set.Basis(site.Element)[:at] {
			p += len(orbitalNames[l])
		}
		lambda := so.Lambda() * scale.of("spin_orbit p", "spin_orbit "+site.Label+" p")
		term := len(m.terms)
		m.terms = append(m.terms, hamiltonian.Term{Kind: hamiltonian.SpinOrbit, Site: i, L: hamiltonian.P, Parameter: lambda})
		for a := range 3 {
			for b := range 3 {
				if z := levi(2, a, b); z != 0 && b < a {
					m.spins = append(m.spins,
						spinEntry{p + a, p + b, 0, -lambda * z, term},
						spinEntry{m.n0 + p + a, m.n0 + p + b, 0, lambda * z, term})
				}
				if x, y := levi(0, a, b), levi(1, a, b); x != 0 || y != 0 {
					m.spins = append(m.spins, spinEntry{m.n0 + p + a, p + b, lambda * y, -lambda * x, term})
				}
			}
		}
	}
	return nil
}

// levi is the antisymmetric symbol ε_ijk.
func levi(i, j, k int) float64 { return float64((i-j)*(j-k)*(k-i)) / 2 }

// makeBonds sets up the terms and blocks of the bonds.
func (m *Model) makeBonds(scale *factors, first []int, shells []crystal.Shell) error {
	terms := make(map[int]int) // index of the set's parameter → term
	for i := range m.set.Bonds {
		p := &m.set.Bonds[i]
		if !m.present(p) {
			continue
		}
		t := hamiltonian.Term{Kind: hamiltonian.Bond, Shell: p.Shell, Channel: p.Channel(), Detail: m.detail(p), Eta: p.Eta}
		subject := t.Subject(m.crystal.Sites)
		// Factors of details are read from the set's names, even when only one
		// of them occurs in the crystal.
		f := scale.of(subject, subject+" "+p.Detail())
		t.Parameter = p.Value * f * law(p, m.set, shells[p.Shell-1].Distance)
		terms[i] = len(m.terms)
		m.terms = append(m.terms, t)
		scale.bond(i, f)
	}
	l := m.crystal.Lattice()
	for _, b := range m.bonds {
		from, to := m.crystal.Sites[b.From].Element, m.crystal.Sites[b.To].Element
		if !m.set.HasPair(b.Shell, from, to) {
			return fmt.Errorf("parameter set %s has no parameters for the bond %s–%s of shell %d (%.4g Å): choose a set for this structure",
				m.set.ID, m.crystal.Sites[b.From].Label, m.crystal.Sites[b.To].Label, b.Shell, b.Length)
		}
		// The row atom is the later one, so that the block lies in the lower triangle.
		row, col, d := b.From, b.To, b.Vector
		if row < col {
			row, col, d = col, row, d.Mul(-1)
		}
		k := block{row: first[row], col: first[col], vector: d, turns: l.Fraction(d), onAtom: row == col}
		k.rows, k.cols = m.size(row), m.size(col)
		k.v = make([]float64, k.rows*k.cols)
		for i := range m.set.Bonds {
			p := &m.set.Bonds[i]
			term, ok := terms[i]
			if !ok || p.Shell != b.Shell {
				continue
			}
			m.addParts(&k, p, row, col, term, p.Value*scale.bonds[i]*law(p, m.set, b.Length), d.Mul(1/b.Length))
		}
		if k.onAtom {
			k.even, k.odd = make([]float64, len(k.v)), make([]float64, len(k.v))
			for i := range k.rows {
				for j := range k.cols {
					a, b := k.v[i*k.cols+j], k.v[j*k.cols+i]
					k.even[i*k.cols+j], k.odd[i*k.cols+j] = a+b, a-b
				}
			}
		}
		m.blocks = append(m.blocks, k)
	}
	return nil
}

// law returns (d₀/d)^η, d₀ the bond length of the set.
func law(p *catalog.Parameter, set *catalog.Set, d float64) float64 {
	return math.Pow(set.Lengths[p.Shell-1]/d, p.Eta)
}

// present says whether bonds of the parameter's elements occur in its shell.
func (m *Model) present(p *catalog.Parameter) bool {
	for _, b := range m.bonds {
		x, y := m.crystal.Sites[b.From].Element, m.crystal.Sites[b.To].Element
		if b.Shell == p.Shell && (x == p.First && y == p.Second || x == p.Second && y == p.First) {
			return true
		}
	}
	return false
}

// detail names the elements when the channel has several parameters in the crystal.
func (m *Model) detail(p *catalog.Parameter) string {
	several := 0
	for i := range m.set.Bonds {
		o := &m.set.Bonds[i]
		if o.Shell == p.Shell && o.Channel() == p.Channel() && m.present(o) {
			several++
		}
	}
	if several < 2 {
		return ""
	}
	if d := p.Detail(); d != "" {
		return d
	}
	return fmt.Sprintf("%s %s – %s %s", p.First, p.L1, p.Second, p.L2)
}

// size returns the number of functions of a site.
func (m *Model) size(site int) int {
	n := 0
	for _, l := range m.set.Basis(m.crystal.Sites[site].Element) {
		n += len(orbitalNames[l])
	}
	return n
}

// addParts adds parameter p, of the given value along this bond, to a block.
// The unit vector runs from the row atom to the col atom.
func (m *Model) addParts(k *block, p *catalog.Parameter, row, col, term int, value float64, unit mgl64.Vec3) {
	x, y := m.crystal.Sites[row].Element, m.crystal.Sites[col].Element
	for i := range k.rows {
		for j := range k.cols {
			a, b := m.basis[k.row+i], m.basis[k.col+j]
			direction := unit
			switch {
			case a.L == p.L1 && b.L == p.L2 && x == p.First && y == p.Second,
				a.L == p.L1 && b.L == p.L2 && p.L1 == p.L2 && x == p.Second && y == p.First:
			case a.L == p.L2 && b.L == p.L1 && x == p.Second && y == p.First:
				direction = unit.Mul(-1) // from the atom of L1 to that of L2
			default:
				continue
			}
			f := factor(p.Symmetry, resolve(a.L, index(k.row+i, m.basis), direction), resolve(b.L, index(k.col+j, m.basis), direction))
			if f == 0 {
				continue
			}
			k.v[i*k.cols+j] += value * f
			k.parts = append(k.parts, part{int32(i*k.cols + j), int32(term), value * f})
		}
	}
}

// index returns the place of basis function i within its shell.
func index(i int, basis []hamiltonian.Orbital) int {
	return slices.Index(orbitalNames[basis[i].L], basis[i].Name)
}

// double adds the functions with spin down after those with spin up.
func (m *Model) double() {
	for i := range m.n0 {
		down := m.basis[i]
		down.Spin = -1
		m.basis[i].Spin = 1
		m.basis = append(m.basis, down)
	}
}

// compare says where the crystal differs from that of the set.
func (m *Model) compare(shells []crystal.Shell) []string {
	var out []string
	own, err := m.set.Crystal()
	if err == nil {
		_, reference, err := own.Bonds(m.set.Shells, 0)
		if err == nil && !sameCounts(shells, reference) || own.Prototype != m.crystal.Prototype && m.crystal.Prototype != "" {
			name := m.crystal.Prototype
			if name == "" {
				name = "other neighbours"
			}
			out = append(out, fmt.Sprintf("structure: %s; the set was made for %s", name, own.Prototype))
		}
	}
	shortest, longest := math.Inf(1), math.Inf(-1)
	for _, b := range m.bonds {
		r := b.Length/m.set.Lengths[b.Shell-1] - 1
		shortest, longest = min(shortest, r), max(longest, r)
	}
	if max(math.Abs(shortest), math.Abs(longest)) > 1e-6 {
		text := fmt.Sprintf("bond lengths %s against the set", percent(shortest))
		if longest-shortest > 1e-6 {
			text = fmt.Sprintf("bond lengths %s to %s against the set", percent(shortest), percent(longest))
		}
		if max(math.Abs(shortest), math.Abs(longest)) > 0.05 {
			text += ", beyond ±5 %: extrapolation"
		}
		out = append(out, text)
	}
	return out
}

func sameCounts(a, b []crystal.Shell) bool {
	for i := range a {
		if i >= len(b) {
			return false
		}
		// Sites may come in another order and in another number.
		if slices.Max(a[i].Count) != slices.Max(b[i].Count) || slices.Min(a[i].Count) != slices.Min(b[i].Count) {
			return false
		}
	}
	return true
}

// percent writes a share with its sign, "+1.27 %", with a true minus.
func percent(x float64) string {
	sign := "+"
	if x < 0 {
		sign = "−"
	}
	return fmt.Sprintf("%s%.3g %%", sign, 100*math.Abs(x))
}

// Crystal returns the crystal of the model.
func (m *Model) Crystal() *crystal.Crystal { return m.crystal }

// Set returns the parameter set of the model.
func (m *Model) Set() *catalog.Set { return m.set }

// Basis returns the basis functions. The caller must not change them.
func (m *Model) Basis() []hamiltonian.Orbital { return m.basis }

// Overlapping returns false: the basis is orthogonal.
func (m *Model) Overlapping() bool { return false }

// Electrons returns the number of valence electrons per primitive cell.
func (m *Model) Electrons() float64 { return m.electrons }

// SpinDegeneracy returns 1 with spin–orbit coupling, 2 without.
func (m *Model) SpinDegeneracy() int {
	if m.spinOrbit {
		return 1
	}
	return 2
}

// Terms returns the terms of the energy. The caller must not change them.
func (m *Model) Terms() []hamiltonian.Term { return m.terms }

// Bonds returns the bonds of the model. The caller must not change them.
func (m *Model) Bonds() []crystal.Bond { return m.bonds }

// Altered says in words what differs from the published set.
func (m *Model) Altered() []string { return m.altered }
