package catalog

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
)

// maxShells bounds the shells of a set: beyond, two-centre integrals are no
// longer a model of bonds.
const maxShells = 12

// formVersion is the version of the form of set files.
const formVersion = 1

// ParseFile reads a parameter set. The name is used in errors only. Errors
// are of type *FileError.
func ParseFile(name string, data []byte) (*Set, error) {
	r, root, fe := open(name, data)
	if fe != nil {
		return nil, fe
	}
	s := parse(root)
	if r.err != nil {
		return nil, r.err
	}
	s.Limits = append(s.Limits, s.commonLimits()...)
	return s, nil
}

func parse(root table) *Set {
	s := &Set{}
	if !root.has("bandset") {
		root.fail("bandset", "begin the file with bandset = 1", "the file is no parameter set: bandset is missing")
	}
	root.count("bandset", formVersion, formVersion)
	root.only("bandset", "id", "title", "prototype", "elements", "a", "shells", "lengths", "limits", "notes",
		"source", "obtained", "fit", "measured", "valence", "onsite", "spin_orbit", "distance_law", "bond")
	s.ID = required(root, "id", "give the set a name, such as id = \"mine/Si\"")
	s.Title = root.text("title")
	if s.Title == "" {
		s.Title = s.ID
	}
	parseStructure(root, s)
	s.Limits, s.Notes = root.texts("limits"), root.texts("notes")
	parseSource(root, s)
	parseFit(root.table("fit"), s)
	parseMeasured(root, s)
	parseOnSite(root, s)
	parseSpinOrbit(root.table("spin_orbit"), s)
	parseBonds(root, s)
	return s
}

func required(t table, key, remedy string) string {
	if !t.has(key) {
		t.fail(key, remedy, "%s is missing", key)
	}
	v := t.text(key)
	if v == "" {
		t.fail(key, remedy, "%s is empty", key)
	}
	return v
}

func parseStructure(root table, s *Set) {
	s.Prototype = root.text("prototype")
	s.Elements = root.texts("elements")
	var hasA bool
	s.A, hasA = root.number("a")
	s.Shells = root.count("shells", 1, maxShells)
	s.Lengths = root.numbers("lengths")
	if root.r.err != nil {
		return
	}
	if s.Prototype != "" {
		if !hasA {
			root.fail("a", "give the lattice constant in Å, such as a = 5.431", "a is missing")
			return
		}
		c, err := crystal.FromPrototype(s.Prototype, s.Elements, s.A)
		if err != nil {
			root.fail("prototype", "correct prototype, elements or a", "%v", err)
			return
		}
		s.crystal, s.Prototype = c, c.Prototype
	}
	switch {
	case s.Lengths != nil:
		if len(s.Lengths) != s.Shells {
			root.fail("lengths", "give one bond length for each shell of neighbours", "lengths has %d items for %d shells", len(s.Lengths), s.Shells)
		}
		for i, d := range s.Lengths {
			if d <= 0 || i > 0 && d <= s.Lengths[i-1] {
				root.fail("lengths", "give positive lengths in Å, from the nearest shell outward", "lengths[%d] = %g Å is not greater than the one before", i, d)
			}
		}
	case s.crystal != nil:
		_, shells, err := s.crystal.Bonds(s.Shells, 0)
		if err != nil {
			root.fail("shells", "correct shells or a", "%v", err)
			return
		}
		for _, shell := range shells {
			s.Lengths = append(s.Lengths, shell.Distance)
		}
	default:
		root.fail("lengths", "name the prototype and its lattice constant, or give the bond lengths of the shells, such as lengths = [2.352]",
			"the lengths at which the bond parameters hold are not given")
	}
}

func parseSource(root table, s *Set) {
	t := root.table("source")
	t.only("authors", "journal", "place", "year", "table")
	s.Source = Source{Authors: t.text("authors"), Journal: t.text("journal"), Place: t.text("place"), Table: t.text("table")}
	s.Source.Year = t.count("year", 0, 9999)
	s.Obtained = make(map[string]string)
	o := root.table("obtained")
	for _, key := range o.keys() {
		v := o.text(key)
		checkObtained(o, key, v)
		s.Obtained[key] = v
	}
	if len(s.Obtained) == 0 {
		s.Obtained["all"] = "own"
	}
}

// checkObtained makes sure that a value says how it was obtained in one of
// the agreed words; more may follow.
func checkObtained(t table, key, v string) {
	word := strings.FieldsFunc(v, func(r rune) bool { return r == ' ' || r == ',' || r == '+' || r == ':' })
	if len(word) > 0 {
		switch word[0] {
		case "seen", "memory", "computed", "fitted", "own":
			return
		}
	}
	t.fail(key, "begin with seen, memory, computed, fitted or own", "%s = %q does not say how the value was obtained", dotted(t.at(key)), v)
}

func parseFit(t table, s *Set) {
	t.only("to", "valence_only", "window")
	s.Fit.To = t.text("to")
	s.Fit.ValenceOnly = t.truth("valence_only")
	if w := t.numbers("window"); w != nil {
		if len(w) != 2 || w[0] >= w[1] {
			t.fail("window", "give two energies in eV, the lower first", "fit.window is not a range")
			return
		}
		s.Fit.Window, s.Fit.HasWindow = [2]float64{w[0], w[1]}, true
	}
}

func parseMeasured(root table, s *Set) {
	if !root.has("measured") {
		return
	}
	t := root.table("measured")
	t.only("kind", "where", "gap_300K", "gap_0K", "split_off", "source", "obtained")
	m := &Measured{Kind: t.text("kind"), Where: t.text("where"), Source: t.text("source"), Obtained: t.text("obtained")}
	for _, f := range []struct {
		key string
		dst **float64
	}{{"gap_300K", &m.Gap300K}, {"gap_0K", &m.Gap0K}, {"split_off", &m.SplitOff}} {
		if x, ok := t.number(f.key); ok {
			*f.dst = &x
		}
	}
	s.Measured = m
}

func checkElement(t table, key string) {
	if !crystal.ValidElement(key) {
		t.fail(key, "write a chemical symbol such as Si", "%q in %s is no chemical element", key, dotted(t.path))
	}
}

func parseOnSite(root table, s *Set) {
	s.OnSite = make(map[string]map[Shell]float64)
	s.Valence = make(map[string]float64)
	t := root.table("onsite")
	valence := root.table("valence")
	for _, element := range t.keys() {
		checkElement(t, element)
		sub := t.table(element)
		shells := make(map[Shell]float64)
		for _, name := range sub.keys() {
			l, err := hamiltonian.ParseAngularMomentum(name)
			if err != nil {
				sub.fail(name, "use s, p, d or \"s*\"", "%v", err)
				return
			}
			shells[l], _ = sub.number(name)
		}
		if len(shells) == 0 {
			t.fail(element, "give the orbital energies, such as s = -4.2", "%s has no orbitals", element)
		}
		s.OnSite[element] = shells
		if !valence.has(element) {
			root.fail("valence", "add it to [valence], such as Si = 4", "the number of valence electrons of %s is missing", element)
		}
	}
	for _, element := range valence.keys() {
		x, _ := valence.number(element)
		if x < 0 || x > 32 {
			valence.fail(element, "write the number of valence electrons of the atom", "%g valence electrons of %s are out of range", x, element)
		}
		if s.OnSite[element] == nil {
			valence.fail(element, "add [onsite."+element+"] or remove the entry", "%s has valence electrons but no orbitals", element)
		}
		s.Valence[element] = x
	}
	for _, element := range s.Elements {
		if s.OnSite[element] == nil {
			root.fail("onsite", "add [onsite."+element+"]", "the orbital energies of %s are missing", element)
		}
	}
	if len(s.OnSite) == 0 {
		root.fail("onsite", "add a table such as [onsite.Si]", "the set has no orbitals")
	}
}

func parseSpinOrbit(t table, s *Set) {
	s.SpinOrbit = make(map[string]SpinOrbit)
	for _, element := range t.keys() {
		sub := t.table(element)
		sub.only("delta", "lambda", "obtained", "note")
		delta, hasDelta := sub.number("delta")
		lambda, hasLambda := sub.number("lambda")
		so := SpinOrbit{Delta: delta, Obtained: sub.text("obtained"), Note: sub.text("note")}
		switch {
		case hasDelta == hasLambda:
			t.fail(element, "give delta, the splitting of the free p shell, or lambda = delta/3, in eV", "spin-orbit coupling of %s must be given once, as delta or as lambda", element)
		case hasLambda:
			so.Delta = 3 * lambda
		}
		if so.Obtained != "" {
			checkObtained(sub, "obtained", so.Obtained)
		}
		if _, ok := s.OnSite[element][hamiltonian.P]; !ok {
			t.fail(element, "remove it, or give "+element+" a p orbital", "spin-orbit coupling of %s acts on a p shell that the set does not have", element)
		}
		s.SpinOrbit[element] = so
	}
}

func parseBonds(root table, s *Set) {
	etas := root.table("distance_law")
	law := map[string]float64{"default": 2}
	for _, key := range etas.keys() {
		x, _ := etas.number(key)
		if _, _, _, ok := splitKey(key); !ok && key != "default" {
			etas.fail(key, "use default or the name of a parameter, such as sp_sigma", "%s is no bond parameter", key)
		}
		if math.Abs(x) > 20 {
			etas.fail(key, "write the exponent η of V ∝ d^−η, usually 2", "exponent %g is out of range", x)
		}
		law[key] = x
	}
	bonds := root.table("bond")
	shells := make([]string, s.Shells)
	for i := range shells {
		shells[i] = fmt.Sprintf("shell%d", i+1)
	}
	bonds.only(shells...)
	for shell := 1; shell <= s.Shells; shell++ {
		key := shells[shell-1]
		if !bonds.has(key) {
			root.fail("shells", fmt.Sprintf("add tables such as [bond.%s.%s]", key, examplePair(s)), "the bond parameters of shell %d are missing", shell)
			return
		}
		pairs := bonds.table(key)
		if len(pairs.keys()) == 0 {
			bonds.fail(key, fmt.Sprintf("add a table such as [bond.%s.%s]", key, examplePair(s)), "shell %d has no bond parameters", shell)
		}
		for _, pair := range pairs.keys() {
			parsePair(pairs, pair, shell, law, s)
			if root.r.err != nil {
				return
			}
		}
	}
	checkPairs(root, s)
}

func examplePair(s *Set) string {
	switch len(s.Elements) {
	case 0:
		return "Si-Si"
	case 1:
		return s.Elements[0] + "-" + s.Elements[0]
	}
	return s.Elements[0] + "-" + s.Elements[1]
}

// checkPairs makes sure that every bond of the set's own crystal has parameters.
func checkPairs(root table, s *Set) {
	if s.crystal == nil || root.r.err != nil {
		return
	}
	bonds, _, err := s.crystal.Bonds(s.Shells, 0)
	if err != nil {
		return // reported by parseStructure
	}
	for _, b := range bonds {
		x, y := s.crystal.Sites[b.From].Element, s.crystal.Sites[b.To].Element
		if !s.HasPair(b.Shell, x, y) {
			root.fail("bond", fmt.Sprintf("add [bond.shell%d.%s-%s]", b.Shell, x, y), "the parameters of the bond %s–%s in shell %d are missing", x, y, b.Shell)
			return
		}
	}
}

// HasPair says whether the set has parameters for bonds between two elements.
func (s *Set) HasPair(shell int, x, y string) bool {
	for i := range s.Bonds {
		p := &s.Bonds[i]
		if p.Shell == shell && (p.First == x && p.Second == y || p.First == y && p.Second == x) {
			return true
		}
	}
	return false
}

func parsePair(pairs table, pair string, shell int, law map[string]float64, s *Set) {
	x, y, ok := strings.Cut(pair, "-")
	if !ok || s.OnSite[x] == nil || s.OnSite[y] == nil {
		pairs.fail(pair, "name two elements that have orbitals, such as "+examplePair(s), "%q names no pair of elements of the set", pair)
		return
	}
	if s.HasPair(shell, x, y) {
		pairs.fail(pair, "keep one of the two tables", "the pair %s is given twice in shell %d", pair, shell)
		return
	}
	p := pairReader{t: pairs.table(pair), shell: shell, x: x, y: y, law: law, set: s, found: make(map[slot]Parameter)}
	p.read()
	p.complete()
	slots := make([]Parameter, 0, len(p.found))
	for _, v := range p.found {
		slots = append(slots, v)
	}
	sort.Slice(slots, func(i, j int) bool { return before(slots[i], slots[j]) })
	s.Bonds = append(s.Bonds, slots...)
}

// before orders parameters as tables print them: ssσ, spσ, …, ddδ.
func before(a, b Parameter) bool {
	ka := [...]int{rank(a.L1), rank(a.L2), int(a.Symmetry)}
	kb := [...]int{rank(b.L1), rank(b.L2), int(b.Symmetry)}
	for i := range ka {
		if ka[i] != kb[i] {
			return ka[i] < kb[i]
		}
	}
	return a.First < b.First
}

// slot is the place of a parameter within a pair of elements.
type slot struct {
	first    string // element that carries l1; "" when the two cannot be told apart
	l1, l2   Shell
	symmetry Symmetry
}

// key returns the name of the slot in a file.
func (p *pairReader) key(sl slot) string {
	a, b := sl.l1, sl.l2
	if sl.first != "" && sl.first != p.x {
		a, b = b, a
	}
	return a.String() + b.String() + "_" + [...]string{"sigma", "pi", "delta"}[sl.symmetry]
}

// pairReader reads the bond parameters of one pair of elements.
type pairReader struct {
	t     table
	shell int
	x, y  string
	law   map[string]float64
	set   *Set
	found map[slot]Parameter
}

// splitKey reads "s*p_sigma" as s*, p, σ.
func splitKey(key string) (a, b Shell, symmetry Symmetry, ok bool) {
	name, suffix, found := strings.Cut(key, "_")
	if !found {
		return
	}
	switch suffix {
	case "sigma":
		symmetry = Sigma
	case "pi":
		symmetry = Pi
	case "delta":
		symmetry = Delta
	default:
		return
	}
	a, name, ok = cutShell(name)
	if !ok {
		return
	}
	b, name, ok = cutShell(name)
	ok = ok && name == "" && int(symmetry) <= min(a.Degree(), b.Degree())
	return a, b, symmetry, ok
}

func cutShell(name string) (l Shell, rest string, ok bool) {
	switch {
	case strings.HasPrefix(name, "s*"):
		return hamiltonian.SStar, name[2:], true
	case strings.HasPrefix(name, "s"):
		return hamiltonian.S, name[1:], true
	case strings.HasPrefix(name, "p"):
		return hamiltonian.P, name[1:], true
	case strings.HasPrefix(name, "d"):
		return hamiltonian.D, name[1:], true
	}
	return 0, name, false
}

// put stores the integral between shell a of element x and shell b of y.
func (p *pairReader) put(key string, a, b Shell, symmetry Symmetry, value float64, published string) {
	first, second := p.x, p.y
	if rank(a) > rank(b) {
		if first == second {
			p.t.fail(key, "name the orbital that comes first in s, s*, p, d first: the two are the same number", "%s stands for a bond of two %s atoms in the wrong order", key, first)
			return
		}
		a, b, first, second = b, a, second, first
	}
	for l, element := range map[Shell]string{a: first, b: second} {
		if a == b {
			break
		}
		if _, ok := p.set.OnSite[element][l]; !ok {
			p.t.fail(key, "remove it, or give the orbital an energy in [onsite."+element+"]", "%s needs %s of %s, which the set does not have", key, l, element)
			return
		}
	}
	if a == b {
		for _, element := range [...]string{first, second} {
			if _, ok := p.set.OnSite[element][a]; !ok {
				p.t.fail(key, "remove it, or give the orbital an energy in [onsite."+element+"]", "%s needs %s of %s, which the set does not have", key, a, element)
				return
			}
		}
	}
	sl := p.slot(first, a, b, symmetry)
	if _, twice := p.found[sl]; twice {
		p.t.fail(key, "keep one of the two", "%s gives an integral that is given already", key)
		return
	}
	name := a.String() + b.String() + "_" + [...]string{"sigma", "pi", "delta"}[symmetry]
	eta, ok := p.law[name]
	if !ok {
		eta = p.law["default"]
	}
	p.found[sl] = Parameter{Shell: p.shell, First: first, Second: second, L1: a, L2: b, Symmetry: symmetry, Value: value, Eta: eta, Published: published}
}

func (p *pairReader) slot(first string, l1, l2 Shell, symmetry Symmetry) slot {
	if p.x == p.y || l1 == l2 {
		first = ""
	}
	return slot{first, l1, l2, symmetry}
}

func (p *pairReader) read() {
	for _, key := range p.t.keys() {
		if strings.HasPrefix(key, "V_") {
			p.sum(key)
			continue
		}
		a, b, symmetry, ok := splitKey(key)
		if !ok {
			p.unknown(key)
			return
		}
		value, _ := p.t.number(key)
		p.put(key, a, b, symmetry, value, "")
	}
}

func (p *pairReader) unknown(key string) {
	p.t.fail(key, "use the name of a two-centre integral such as ss_sigma, ps_sigma or pp_pi; the README of the sets lists them", "%q is no bond parameter", key)
}

// sum reads a sum over the four bonds of a tetrahedral crystal.
func (p *pairReader) sum(key string) {
	name := strings.TrimPrefix(key, "V_")
	if name == "xy" {
		if !p.t.has("V_xx") {
			p.t.fail(key, "add V_xx", "V_xy stands without V_xx")
		}
		return // read with V_xx
	}
	var a, b Shell
	if name != "xx" {
		var ok bool
		if a, name, ok = cutShell(name); !ok || a.Degree() > 1 {
			p.unknown(key)
			return
		}
		if b, name, ok = cutShell(name); !ok || name != "" || b.Degree() > 1 || a.Degree()+b.Degree() > 1 {
			p.unknown(key)
			return
		}
	}
	if p.shell != 1 || p.set.Prototype != "diamond" && p.set.Prototype != "zincblende" {
		p.t.fail(key, "give the two-centre integrals themselves, such as ss_sigma", "%s is a sum over four tetrahedral bonds, which shell %d of this crystal is not", key, p.shell)
		return
	}
	value, _ := p.t.number(key)
	if name == "xx" {
		if !p.t.has("V_xy") {
			p.t.fail(key, "add V_xy", "V_xx stands without V_xy")
			return
		}
		xy, _ := p.t.number("V_xy")
		published := fmt.Sprintf("V_xx = %g, V_xy = %g", value, xy)
		p.put(key, hamiltonian.P, hamiltonian.P, Sigma, (value+2*xy)/4, published)
		p.put(key, hamiltonian.P, hamiltonian.P, Pi, (value-xy)/4, published)
		return
	}
	published := fmt.Sprintf("%s = %g", key, value)
	if a.Degree()+b.Degree() == 1 {
		p.put(key, a, b, Sigma, math.Sqrt(3)/4*value, published)
	} else {
		p.put(key, a, b, Sigma, value/4, published)
	}
}

// complete reports the first integral that is missing. The s* shell may stay
// uncoupled to s, s* and d, as in Vogl, Hjalmarson and Dow 1983; but a set
// that gives one of these must give all.
func (p *pairReader) complete() {
	optional := func(sl slot) bool {
		return sl.l1 == hamiltonian.SStar && sl.l2 != hamiltonian.P || sl.l2 == hamiltonian.SStar
	}
	starred := false
	for sl := range p.found {
		starred = starred || optional(sl)
	}
	for _, a := range p.set.Basis(p.x) {
		for _, b := range p.set.Basis(p.y) {
			first, l1, l2 := p.x, a, b
			if rank(a) > rank(b) {
				first, l1, l2 = p.y, b, a
			}
			for symmetry := Sigma; int(symmetry) <= min(a.Degree(), b.Degree()); symmetry++ {
				sl := p.slot(first, l1, l2, symmetry)
				if _, ok := p.found[sl]; ok || optional(sl) && !starred {
					continue
				}
				p.t.r.fail(p.t.path, "add it, 0 if it is meant to vanish", "the parameter %s is missing in %s", p.key(sl), dotted(p.t.path))
				return
			}
		}
	}
}
