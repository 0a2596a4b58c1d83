package session

import (
	"fmt"
	"math"
	"path/filepath"
	"strings"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/ledger"
	"bandwright/physics/zone"
	"bandwright/ui/doc"
)

// solvePin builds the model of a pin and solves it at its k point.
func solvePin(p *doc.Pin) *Pinned {
	out := &Pinned{Pin: *p, SetID: p.Model.Set, pin: p}
	if p.Model.File != "" {
		out.SetID = filepath.Base(p.Model.File)
	}
	out.Name = out.SetID
	d := doc.New()
	d.Crystal, d.Model, d.Mesh = p.Crystal, p.Model, [3]int{1, 1, 1}
	d.Path = doc.Path{}
	b, err := d.Build("")
	if err != nil {
		out.Err = err
		return out
	}
	out.Formula = b.Crystal.Formula()
	if out.KLabel = pointLabel(b, b.Group.Star(p.K, true)); out.KLabel == "" {
		// The name of a line or plane does not tell where on it.
		out.KLabel = strings.TrimSpace(zone.SymmetryName(b.Crystal.Setting, p.K) + " " + coordinates(b, p.K))
	}
	out.Name = fmt.Sprintf("%s %s, %s", out.Formula, out.KLabel, out.SetID)
	if out.Ledger, out.Err = ledger.At(hamiltonian.NewStates(b.Model), p.K); out.Err != nil {
		return out
	}
	if out.Entry = out.Ledger.EntryOf(p.Level); out.Entry == nil {
		out.Err = fmt.Errorf("there is no level %d at this k point: the model has levels 1 to %d", p.Level+1, len(out.Ledger.Levels))
		return out
	}
	out.Name = fmt.Sprintf("%s %s, %s, %s, %s", out.Formula, out.KLabel, levelNumbers(out.Entry.Set), energy(out.Entry.Set.Energy), out.SetID)
	if p.Model.SpinOrbit {
		out.Name += " with spin–orbit"
	}
	if len(b.Model.Altered()) > 0 {
		out.Name += ", altered"
	}
	return out
}

// coordinates writes k in units of 2π/a, or in primitive fractions when the
// lattice has no cubic cell.
func coordinates(b *doc.Built, k lattice.FracK) string {
	frame, unit := lattice.TwoPiOverA, "·2π/a"
	if b.Crystal.Setting.Bravais == "" {
		frame, unit = lattice.Primitive, ""
	}
	x := b.Crystal.Setting.FromFrac(frame, k)
	var parts []string
	for _, v := range x {
		parts = append(parts, trueMinus(fmt.Sprintf("%.4g", math.Round(v*1e4)/1e4+0)))
	}
	return "(" + strings.Join(parts, ", ") + ")" + unit
}

// levelNumbers numbers the levels of a set from 1, as people do.
func levelNumbers(s hamiltonian.Set) string {
	if s.Size == 1 {
		return fmt.Sprintf("level %d", s.First+1)
	}
	return fmt.Sprintf("levels %d–%d", s.First+1, s.First+s.Size)
}

func energy(e float64) string {
	return trueMinus(fmt.Sprintf("%.3f", math.Round(e*1e3)/1e3+0)) + " eV"
}

func trueMinus(s string) string { return strings.ReplaceAll(s, "-", "−") }

// of reports whether p was solved for this pin of a document. Documents share
// their pins, so this is a question of identity.
func (p *Pinned) of(pin *doc.Pin) bool { return p.pin == pin }
