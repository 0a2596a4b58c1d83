package ledger

import (
	"fmt"
	"math"

	"bandwright/physics/crystal"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
)

// SumTolerance is the difference, eV, that the sum of the terms may have from
// the energy of a set.
const SumTolerance = 1e-9

// ShareThreshold is the sum of |bond energies|, eV, below which the sign
// share of a set has no meaning.
const ShareThreshold = 1e-3

// Ledger is the breakdown of all levels at one k point.
type Ledger struct {
	K       lattice.FracK
	Levels  []float64 // ascending, eV
	Entries []Entry   // one for each set of equal levels, ascending
}

// Entry is the breakdown of one set of levels.
type Entry struct {
	Set     hamiltonian.Set
	Weights []Weight    // by atom and shell; they sum to 1
	Terms   []TermValue // one for each term of the model
	Rows    []Row       // terms gathered for reading: onsite, spin_orbit, bond; they sum to Sum

	NetBond      float64 // eV, the sum of the bond terms; negative is bonding
	BondingShare float64 // Σ|e<0| / Σ|e| over the energies e of single bonds
	ShareDefined bool    // false when Σ|e| < ShareThreshold
	Sum          float64 // eV, of all terms: the energy of the set
	DEdlnD       float64 // eV, dE/d ln d when all bonds change in proportion
}

// Weight is the share of one shell of one atom in a set.
type Weight struct {
	Site    int
	L       hamiltonian.AngularMomentum
	Subject string // "Si1 p"
	Value   float64
}

// TermValue is the energy of one term of the model.
type TermValue struct {
	Term  hamiltonian.Term
	Value float64 // eV
}

// Quantity is what a row tells, as written in files.
type Quantity string

// The quantities of a Ledger. OnSite, SpinOrbit and Bond rows sum to the
// energy of the set.
const (
	WeightOf     Quantity = "weight"
	OnSite       Quantity = "onsite"
	SpinOrbit    Quantity = "spin_orbit"
	Bond         Quantity = "bond"
	NetBond      Quantity = "net_bond"
	BondingShare Quantity = "bonding_share"
)

// IsTerm says whether rows of this quantity are parts of the energy.
func (q Quantity) IsTerm() bool { return q == OnSite || q == SpinOrbit || q == Bond }

// Row is one line of a Ledger.
type Row struct {
	Quantity  Quantity
	Subject   string  // "Si1 p" of weight, onsite, spin_orbit; "shell1 ppσ" of bond; else ""
	Value     float64 // eV; a share of 1 for weight and bonding_share
	Undefined bool    // a bonding_share without meaning; Value is then NaN

	Parameter float64 // eV, of a row that stands for a single term; else 0
	Details   []Detail

	role role
}

// Detail is a part of a bond row whose channel has several parameters.
type Detail struct {
	Text      string  // "As s – Ga p"
	Value     float64 // eV
	Parameter float64 // eV
}

// role tells which rows of two crystals correspond: the same shell of the
// site of the same number, the same channel of the same shell of neighbours.
type role struct {
	quantity Quantity
	site     int
	l        hamiltonian.AngularMomentum
	shell    int
	channel  string
}

// At solves the model of st at k and breaks its levels down. The basis must be
// orthogonal.
func At(st *hamiltonian.States, k lattice.FracK) (*Ledger, error) {
	m := st.Model()
	if m.Overlapping() {
		return nil, hamiltonian.ErrOverlapping
	}
	e, v, err := st.Solve(k)
	if err != nil {
		return nil, fmt.Errorf("levels at k = %v: %w", [3]float64(k), err)
	}
	l := &Ledger{K: k, Levels: append([]float64(nil), e...)}
	var (
		terms  = m.Terms()
		sites  = m.Crystal().Sites
		values = make([]float64, len(terms))
		bonds  = make([]float64, len(m.Bonds()))
		groups = st.Groups()
		weight = make([]float64, len(groups))
		plan   = gather(terms, sites)
	)
	for _, set := range hamiltonian.Sets(e, hamiltonian.SetTolerance) {
		st.Evaluator().TermEnergies(k, v, set.First, set.Size, values)
		st.Evaluator().BondEnergies(k, v, set.First, set.Size, bonds)
		entry := Entry{Set: set, Weights: make([]Weight, len(groups))}
		for g, group := range groups {
			entry.Weights[g] = Weight{Site: group.Site, L: group.L, Subject: group.Label(sites)}
		}
		for n := set.First; n < set.First+set.Size; n++ {
			if err := st.GroupWeights(n, weight); err != nil {
				return nil, err
			}
			for g := range weight {
				entry.Weights[g].Value += weight[g] / float64(set.Size)
			}
		}
		entry.fill(terms, values, plan)
		entry.share(bonds)
		if !(math.Abs(entry.Sum-set.Energy) <= SumTolerance*max(1, math.Abs(set.Energy))) {
			return nil, fmt.Errorf("the terms of level %d at k = %v sum to %.12g eV, not to its energy %.12g eV: this is a fault of the program, not of the input",
				set.First+1, [3]float64(k), entry.Sum, set.Energy)
		}
		l.Entries = append(l.Entries, entry)
	}
	return l, nil
}

// line is a row to be and the terms that it gathers.
type line struct {
	row   Row
	terms []int
}

// gather puts the terms of one atom and shell, or one channel, into one line.
func gather(terms []hamiltonian.Term, sites []crystal.Site) []line {
	var lines []line
	index := make(map[role]int)
	for i, t := range terms {
		r := role{quantity: Quantity(t.Kind.String())}
		if t.Kind == hamiltonian.Bond {
			r.shell, r.channel = t.Shell, t.Channel
		} else {
			r.site, r.l = t.Site, t.L
		}
		n, ok := index[r]
		if !ok {
			n = len(lines)
			index[r] = n
			lines = append(lines, line{row: Row{Quantity: r.quantity, Subject: t.Subject(sites), role: r}})
		}
		lines[n].terms = append(lines[n].terms, i)
	}
	return lines
}

func (e *Entry) fill(terms []hamiltonian.Term, values []float64, plan []line) {
	e.Terms = make([]TermValue, len(terms))
	for i, t := range terms {
		e.Terms[i] = TermValue{t, values[i]}
		e.Sum += values[i]
		if t.Kind == hamiltonian.Bond {
			e.NetBond += values[i]
			e.DEdlnD -= t.Eta * values[i]
		}
	}
	e.Rows = make([]Row, len(plan))
	for i, l := range plan {
		row := l.row
		for _, t := range l.terms {
			row.Value += values[t]
			if len(l.terms) > 1 {
				row.Details = append(row.Details, Detail{terms[t].Detail, values[t], terms[t].Parameter})
			} else {
				row.Parameter = terms[t].Parameter
			}
		}
		e.Rows[i] = row
	}
}

// share computes the sign share from the energies of the single bonds.
func (e *Entry) share(bonds []float64) {
	var all, bonding float64
	for _, x := range bonds {
		all += math.Abs(x)
		if x < 0 {
			bonding -= x
		}
	}
	e.ShareDefined = all >= ShareThreshold
	if e.ShareDefined {
		e.BondingShare = bonding / all
	}
}

// Table returns the whole entry as rows, in the order of a file: weights,
// on-site, spin–orbit and bond terms, net bond energy, bonding share.
func (e *Entry) Table() []Row {
	rows := make([]Row, 0, len(e.Weights)+len(e.Rows)+2)
	for _, w := range e.Weights {
		rows = append(rows, Row{Quantity: WeightOf, Subject: w.Subject, Value: w.Value, role: role{quantity: WeightOf, site: w.Site, l: w.L}})
	}
	rows = append(rows, e.Rows...)
	rows = append(rows, Row{Quantity: NetBond, Value: e.NetBond, role: role{quantity: NetBond}})
	share := Row{Quantity: BondingShare, Value: e.BondingShare, role: role{quantity: BondingShare}}
	if !e.ShareDefined {
		share.Value, share.Undefined = math.NaN(), true
	}
	return append(rows, share)
}

// EntryOf returns the entry that holds level n, counted from 0, or nil.
func (l *Ledger) EntryOf(n int) *Entry {
	for i := range l.Entries {
		if l.Entries[i].Set.Contains(n) {
			return &l.Entries[i]
		}
	}
	return nil
}
