package session

import (
	"fmt"
	"math"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/ledger"
	"bandwright/physics/path"
	"bandwright/physics/symmetry"
	"bandwright/physics/zone"
	"bandwright/ui/doc"
)

// held is the solution at the held k point and what is to be said about it.
type held struct {
	id     int // of the hold job; 0 from a preview
	model  hamiltonian.Model
	k      lattice.FracK
	wish   *wish // answered by level
	level  int
	ledger *ledger.Ledger
	err    error

	label, place, coGroup string
	star                  []lattice.FracK
}

// wish says which level to focus once the levels are known.
type wish struct {
	kind   wishKind
	energy float64 // nearestEnergy, eV
	level  int     // sameKind: the level focused before
	filled int     // sameKind: filled levels of the model before
	holds  int     // sameKind: electrons per level of the model before
}

type wishKind uint8

const (
	valenceTop    wishKind = iota
	nearestEnergy          // to energy
	sameKind               // as far from the valence top as level was
)

// filledLevels returns how many levels per k point the electrons fill, rounded
// down.
func filledLevels(m hamiltonian.Model) int {
	return int(math.Floor(m.Electrons()/float64(m.SpinDegeneracy()) + 1e-9))
}

// choose returns the level that w asks for; without a wish it is the level
// given, or the nearest there is.
func (w *wish) choose(level int, l *ledger.Ledger, m hamiltonian.Model) int {
	filled := filledLevels(m)
	if w != nil {
		switch w.kind {
		case valenceTop:
			level = filled - 1
		case nearestEnergy:
			level = 0
			for n, e := range l.Levels {
				if math.Abs(e-w.energy) < math.Abs(l.Levels[level]-w.energy) {
					level = n
				}
			}
		case sameKind:
			// Counted in electrons from the valence top, so that a level keeps
			// its number when spin–orbit coupling doubles them.
			holds := m.SpinDegeneracy()
			if w.level >= w.filled {
				level = filled + (w.level-w.filled)*w.holds/holds
			} else {
				level = filled - 1 - (w.filled-1-w.level)*w.holds/holds
			}
		}
	}
	return min(max(level, 0), len(l.Levels)-1)
}

// hold solves st's model at k.
func hold(st *hamiltonian.States, b *doc.Built, s *path.Sampling, k lattice.FracK, level int, w *wish) *held {
	h := &held{model: st.Model(), k: k, wish: w, level: level}
	h.ledger, h.err = ledger.At(st, k)
	if h.err == nil {
		h.level = w.choose(level, h.ledger, h.model)
	}
	h.star = b.Group.Star(k, true)
	h.coGroup, h.place = coGroup(b.Group, k, len(h.star))
	h.label = kLabel(b, s, k, h.star)
	return h
}

// coGroup names the little co-group of k and, in one line, what symmetry makes
// of k.
func coGroup(g *symmetry.Group, k lattice.FracK, star int) (name, place string) {
	var little symmetry.Group
	for _, i := range g.LittleCoGroup(k) {
		little.Ops = append(little.Ops, g.Ops[i])
	}
	name, schoenflies := little.PointGroup()
	if name == "" {
		return "", fmt.Sprintf("little co-group of order %d, star of %d", len(little.Ops), star)
	}
	return name, fmt.Sprintf("%s (%s), star of %d", name, schoenflies, star)
}

// kLabel names k: a special point, a place on a leg of the path, a line or
// plane of symmetry, or "" in general position. Members of the star have the
// same name.
func kLabel(b *doc.Built, s *path.Sampling, k lattice.FracK, star []lattice.FracK) string {
	if label := pointLabel(b, star); label != "" {
		return label
	}
	if s != nil {
		for _, leg := range s.Legs {
			for _, q := range star {
				if t, on := onLeg(leg, q); on {
					return fmt.Sprintf("%.4f of %s–%s", t, leg.From.Label, leg.To.Label)
				}
			}
		}
	}
	return zone.SymmetryName(b.Crystal.Setting, k)
}

// onLegTolerance is the distance in fractions up to which a k point counts as
// on a leg: that of a point typed with five digits.
const onLegTolerance = 1e-5

// onLeg reports whether k lies on a leg, up to a reciprocal lattice vector, and
// at which part of its length.
func onLeg(leg path.LegSpan, k lattice.FracK) (t float64, on bool) {
	from := leg.From.K
	var d lattice.FracK
	long := 0
	for i := range d {
		k[i] -= math.Round(k[i])
		d[i] = leg.To.K[i] - from[i]
		if math.Abs(d[i]) > math.Abs(d[long]) {
			long = i
		}
	}
	if d[long] == 0 {
		return 0, false
	}
	// The images whose longest coordinate lies between the ends.
	low, high := min(from[long], leg.To.K[long]), max(from[long], leg.To.K[long])
	for g := math.Ceil(low - k[long] - onLegTolerance); k[long]+g <= high+onLegTolerance; g++ {
		t = (k[long] + g - from[long]) / d[long]
		on = true
		for i := range d {
			off := from[i] + t*d[i] - k[i]
			on = on && math.Abs(off-math.Round(off)) <= onLegTolerance
		}
		if on {
			return min(max(t, 0), 1), true
		}
	}
	return 0, false
}

// pointLabel returns the name of the special point in a star, or "".
func pointLabel(b *doc.Built, star []lattice.FracK) string {
	for _, p := range b.Points {
		for _, q := range star {
			if symmetry.SameK(p.K, q) {
				return p.Label
			}
		}
	}
	return ""
}
