package main

import (
	"bufio"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"sort"
	"strconv"
	"strings"

	"github.com/spf13/pflag"

	"bandwright/physics/bands"
	"bandwright/physics/catalog"
	"bandwright/physics/dos"
	"bandwright/physics/edges"
	"bandwright/physics/hamiltonian"
	"bandwright/physics/lattice"
	"bandwright/physics/ledger"
	"bandwright/ui/doc"
)

func commands() []command {
	return []command{
		{"levels", "STUDY --at \"0.1 0.2 0.3; L\"", "the levels at k points, as CSV",
			`Prints point,k1,k2,k3,level,energy_eV: points and levels are counted from 1,
levels ascend, and k stands in the frame of --frame. With spin–orbit coupling
every state counts once, without it every level holds two electrons.

  bandcalc levels si.bandstudy --at "Γ; X; L"
  bandcalc levels si.bandstudy --at "0.85 0 0" --frame 2pi/a`, levelsCommand},
		{"ledger", "STUDY --at \"0.1 0.2 0.3; L\"", "what the levels are made of, as CSV",
			`Prints point,set,first_level,size,energy_eV,quantity,subject,value for each set
of levels that share an energy. The quantities:

  weight         share of a shell of an atom ("Si1 p"); they sum to 1
  onsite         orbital energy times weight, eV
  spin_orbit     spin–orbit energy of a shell, eV
  bond           energy of a channel of a shell of neighbours ("shell1 ppσ"), eV
  net_bond       sum of the bond terms, eV; negative is bonding
  bonding_share  share of the bonds that bind; empty where it has no meaning

onsite, spin_orbit and bond sum to energy_eV. All are means over the set.

  bandcalc ledger si.bandstudy --at L`, ledgerCommand},
		{"bands", "STUDY", "the levels along the study's path, as CSV",
			`Prints leg,distance,k1,k2,k3,level,energy_eV and one column of weight for each
shell of each atom ("Si1 p"). Legs are counted from 1 and each has both its
ends, so that the point where two legs meet is printed for both. distance is
along the whole path in Å⁻¹; breaks have no length. A study without [path]
gets the standard path of its lattice.

  bandcalc bands si.bandstudy > bands.csv
  bandcalc bands si.bandstudy --step 0.01 --frame 2pi/a`, bandsCommand},
		{"dos", "STUDY [--from E --to E --step E]", "the density of states, as CSV",
			`Prints energy_eV,total, one column for each shell of each atom, and electrons:
the number of electrons per cell in states below that energy. Densities are in
states per eV and cell, both spins. Without --from and --to the range covers
all bands.

  bandcalc dos si.bandstudy --from -13 --to 5 --step 0.02`, dosCommand},
		{"edges", "STUDY", "gap and band edges of the whole zone, as JSON",
			`Prints gap_eV, kind ("direct", "indirect", "semimetal", "metal"), fermi_eV, and
vbm, cbm and direct: energy_eV, k_primitive, k_2pi_over_a, where, size (levels
that share the energy) and valleys. What a metal does not have is null. The
energy of direct is the smallest vertical gap.

  bandcalc edges si.bandstudy`, edgesCommand},
		{"check", "FILE", "every problem of a study or a parameter set",
			`Prints each problem with line, column and remedy, and exits with status 1 if
there is any. It also reads the parameter sets that the study names, and says
when one is used for another structure than it was made for, which the other
commands only note.

  bandcalc check si.bandstudy
  bandcalc check own-set.toml`, checkCommand},
		{"sets", "", "the parameter sets that come with the program",
			`Prints each set with its source, what it was fitted to, how its values were
obtained, and its limits.

  bandcalc sets | less`, setsCommand},
	}
}

// atFlags are the flags of commands that take k points.
func atFlags(f *pflag.FlagSet) (at, frame *string) {
	at = f.String("at", "", "k points, separated by ; (three numbers or a label each)")
	frame = f.String("frame", "primitive", "frame of the numbers: primitive, conventional, 2pi/a or 1/Å")
	return at, frame
}

// table writes CSV and keeps the first error.
type table struct {
	w   *csv.Writer
	err error
}

func newTable(out io.Writer, header ...string) *table {
	t := &table{w: csv.NewWriter(out)}
	t.row(header...)
	return t
}

func (t *table) row(cells ...string) {
	if t.err == nil {
		t.err = t.w.Write(cells)
	}
}

func (t *table) close() error {
	if t.err != nil {
		return t.err
	}
	t.w.Flush()
	return t.w.Error()
}

// coordinates writes a k point in a frame.
func (s *study) coordinates(f lattice.Frame, k lattice.FracK) []string {
	c := s.Crystal.Setting.FromFrac(f, k)
	return []string{figure(c[0]), figure(c[1]), figure(c[2])}
}

func levelsCommand(f *pflag.FlagSet) func(*call) error {
	at, frame := atFlags(f)
	return func(c *call) error {
		s, list, fr, err := c.studyAt(*at, *frame)
		if err != nil {
			return err
		}
		t := newTable(c.out, "point", "k1", "k2", "k3", "level", "energy_eV")
		states := hamiltonian.NewStates(s.Model)
		e := make([]float64, states.Len())
		for i, k := range list {
			if err := states.Energies(k, e); err != nil {
				return fmt.Errorf("point %d: %w", i+1, err)
			}
			for n, energy := range e {
				t.row(append(append([]string{strconv.Itoa(i + 1)}, s.coordinates(fr, k)...), strconv.Itoa(n+1), figure(energy))...)
			}
		}
		return t.close()
	}
}

// studyAt reads the study and the k points.
func (c *call) studyAt(at, frame string) (*study, []lattice.FracK, lattice.Frame, error) {
	s, err := c.study(false)
	if err != nil {
		return nil, nil, 0, err
	}
	list, err := s.points(at, frame)
	if err != nil {
		return nil, nil, 0, err
	}
	f, err := lattice.ParseFrame(frame)
	return s, list, f, err
}

func ledgerCommand(f *pflag.FlagSet) func(*call) error {
	at, frame := atFlags(f)
	return func(c *call) error {
		s, list, _, err := c.studyAt(*at, *frame)
		if err != nil {
			return err
		}
		t := newTable(c.out, "point", "set", "first_level", "size", "energy_eV", "quantity", "subject", "value")
		states := hamiltonian.NewStates(s.Model)
		for i, k := range list {
			l, err := ledger.At(states, k)
			if err != nil {
				return fmt.Errorf("point %d: %w", i+1, err)
			}
			for j := range l.Entries {
				e := &l.Entries[j]
				for _, row := range e.Table() {
					t.row(strconv.Itoa(i+1), strconv.Itoa(j+1), strconv.Itoa(e.Set.First+1), strconv.Itoa(e.Set.Size), figure(e.Set.Energy),
						string(row.Quantity), row.Subject, figure(row.Value))
				}
			}
		}
		return t.close()
	}
}

// mostSamples bounds the points of a path: with a row for each level, files
// beyond are larger than anything reads.
const mostSamples = 500_000

// defaultStep is the spacing of the samples of a path, Å⁻¹.
const defaultStep = 0.02

func bandsCommand(f *pflag.FlagSet) func(*call) error {
	step := f.Float64("step", 0, fmt.Sprintf("spacing of the samples, Å⁻¹ (default that of the study, or %g)", defaultStep))
	frame := f.String("frame", "primitive", "frame of k: primitive, conventional, 2pi/a or 1/Å")
	return func(c *call) error {
		fr, err := lattice.ParseFrame(*frame)
		if err != nil {
			return &usageError{fmt.Sprintf("--frame %s: give primitive, conventional, 2pi/a or 1/Å", *frame)}
		}
		if f.Changed("step") && !(*step > 0 && *step < math.Inf(1)) {
			return &usageError{fmt.Sprintf("--step %g: give a length above 0 Å⁻¹", *step)}
		}
		s, err := c.study(false)
		if err != nil {
			return err
		}
		if s.PathErr != nil {
			return fmt.Errorf("the path: %w", s.PathErr)
		}
		d := defaultStep
		if s.doc.Path.Step > 0 {
			d = s.doc.Path.Step
		}
		if f.Changed("step") {
			d = *step
		}
		for _, leg := range s.Path.Legs() {
			if far(leg.From.K) || far(leg.To.K) {
				return fmt.Errorf("the leg %s–%s: so far out rounding hides the phases; give points near the first zone", leg.From.Label, leg.To.Label)
			}
		}
		sampling := s.Path.Sample(s.Crystal.Lattice(), d)
		if n := sampling.X[len(sampling.X)-1] / d; n > mostSamples {
			return fmt.Errorf("a step of %g Å⁻¹ makes %.3g points of the path, and at most %d are computed; give a larger step", d, n, mostSamples)
		}
		b, err := bands.Compute(c.ctx, s.Model, sampling, bands.Options{Weights: true})
		if err != nil {
			return err
		}
		header := []string{"leg", "distance", "k1", "k2", "k3", "level", "energy_eV"}
		for _, g := range b.Groups {
			header = append(header, g.Label(s.Crystal.Sites))
		}
		t := newTable(c.out, header...)
		for n, leg := range sampling.Legs {
			for i := leg.First; i <= leg.Last; i++ {
				k := s.coordinates(fr, sampling.K[i])
				for level := range b.N {
					row := append([]string{strconv.Itoa(n + 1), figure(sampling.X[i])}, k...)
					row = append(row, strconv.Itoa(level+1), figure(b.E[i*b.N+level]))
					for _, w := range b.Weights(i, level) {
						row = append(row, figure(w))
					}
					t.row(row...)
				}
			}
		}
		return t.close()
	}
}

// mostEnergies bounds the rows of a density of states.
const mostEnergies = 2_000_000

func dosCommand(f *pflag.FlagSet) func(*call) error {
	from := f.Float64("from", 0, "lowest energy, eV (default: below all bands)")
	to := f.Float64("to", 0, "highest energy, eV (default: above all bands)")
	step := f.Float64("step", 0.05, "spacing of the energies, eV")
	return func(c *call) error {
		finite := func(v float64) bool { return v-v == 0 }
		if !(*step > 0) || !finite(*step) || !finite(*from) || !finite(*to) {
			return &usageError{"--from, --to and --step: give finite energies and a step above 0"}
		}
		s, err := c.study(true)
		if err != nil {
			return err
		}
		d, err := dos.Compute(c.ctx, s.Model, s.Group, s.Mesh, dos.Options{Projections: true})
		if err != nil {
			return err
		}
		lo, hi := d.Range()
		lo, hi = math.Floor(lo / *step - 2)**step, math.Ceil(hi / *step + 2)**step
		if f.Changed("from") {
			lo = *from
		}
		if f.Changed("to") {
			hi = *to
		}
		if hi < lo {
			return &usageError{fmt.Sprintf("the energies run from %g to %g eV: give --from below --to", lo, hi)}
		}
		n := math.Floor((hi-lo) / *step + 1e-9) + 1
		if n > mostEnergies {
			return &usageError{fmt.Sprintf("%.0f energies are too many: give a larger --step", n)}
		}
		energies := make([]float64, int(n))
		for i := range energies {
			energies[i] = lo + float64(i)**step
		}
		curve, err := d.Evaluate(energies)
		if err != nil {
			return err
		}
		header := []string{"energy_eV", "total"}
		for _, g := range d.Groups {
			header = append(header, g.Label(s.Crystal.Sites))
		}
		t := newTable(c.out, append(header, "electrons")...)
		for i, e := range curve.E {
			row := []string{figure(e), figure(curve.Total[i])}
			for g := range d.Groups {
				row = append(row, figure(curve.Groups[g][i]))
			}
			t.row(append(row, figure(curve.Integrated[i]))...)
		}
		return t.close()
	}
}

// number is a figure of JSON with 12 significant digits.
type number float64

// MarshalJSON implements json.Marshaler.
func (n number) MarshalJSON() ([]byte, error) { return []byte(figure(float64(n))), nil }

type edgeJSON struct {
	Energy  number    `json:"energy_eV"`
	K       [3]number `json:"k_primitive"`
	TwoPi   [3]number `json:"k_2pi_over_a"`
	Where   string    `json:"where"`
	Size    int       `json:"size"`
	Valleys int       `json:"valleys"`
}

func (s *study) edge(e *edges.Edge) *edgeJSON {
	if e == nil {
		return nil
	}
	out := &edgeJSON{Energy: number(e.Energy), Where: e.Where, Size: e.Set, Valleys: e.Valleys}
	k := s.Crystal.Setting.FromFrac(lattice.TwoPiOverA, e.K)
	for i := range k {
		out.K[i], out.TwoPi[i] = number(e.K[i]), number(k[i])
	}
	return out
}

func edgesCommand(*pflag.FlagSet) func(*call) error {
	return func(c *call) error {
		s, err := c.study(true)
		if err != nil {
			return err
		}
		e, err := edges.Find(c.ctx, s.Model, s.Group, s.Mesh, edges.Options{})
		if err != nil {
			return err
		}
		out, err := json.MarshalIndent(struct {
			Gap     number    `json:"gap_eV"`
			Kind    string    `json:"kind"`
			Fermi   number    `json:"fermi_eV"`
			Overlap number    `json:"overlap_eV"`
			VBM     *edgeJSON `json:"vbm"`
			CBM     *edgeJSON `json:"cbm"`
			Direct  *edgeJSON `json:"direct"`
		}{number(e.Gap), string(e.Kind), number(e.Fermi), number(e.Overlap), s.edge(e.VBM), s.edge(e.CBM), s.edge(e.Direct)}, "", "  ")
		if err != nil {
			return err
		}
		_, err = c.out.Write(append(out, '\n'))
		return err
	}
}

func checkCommand(*pflag.FlagSet) func(*call) error {
	return func(c *call) error {
		name, dir, data, err := c.input()
		if err != nil {
			return err
		}
		if problems := doc.Check(name, dir, data); len(problems) > 0 {
			// All of them are the output; the message tells the first.
			if _, err := fmt.Fprintln(c.out, (&doc.Problems{List: problems}).Error()); err != nil {
				return err
			}
			if len(problems) > 1 {
				return fmt.Errorf("%d problems, the first: %w", len(problems), problems[0])
			}
			return problems[0]
		}
		_, err = fmt.Fprintf(c.out, "%s: no problem found\n", name)
		return err
	}
}

func setsCommand(*pflag.FlagSet) func(*call) error {
	return func(c *call) error {
		if len(c.args) > 0 {
			return &usageError{"it takes no arguments"}
		}
		w := bufio.NewWriter(c.out)
		for i, set := range catalog.Shipped() {
			if i > 0 {
				fmt.Fprintln(w)
			}
			fmt.Fprintf(w, "%s\n  %s, %s %s, a = %s Å, %d shell(s) of neighbours\n", set.ID, set.BasisName(), strings.Join(set.Elements, " "), set.Prototype, figure(set.A), set.Shells)
			fmt.Fprintf(w, "  source: %s\n", set.Source)
			if set.Fit.To != "" {
				fmt.Fprintf(w, "  fitted to: %s\n", set.Fit.To)
			}
			fmt.Fprintf(w, "  obtained: %s\n", obtained(set.Obtained))
			if len(set.SpinOrbit) > 0 {
				fmt.Fprintf(w, "  spin–orbit: %s\n", spinOrbit(set))
			}
			for _, l := range set.Limits {
				fmt.Fprintf(w, "  limit: %s\n", l)
			}
			for _, n := range set.Notes {
				fmt.Fprintf(w, "  note: %s\n", n)
			}
		}
		return w.Flush()
	}
}

func obtained(m map[string]string) string {
	var list []string
	for what, how := range m {
		list = append(list, what+" "+how)
	}
	sort.Strings(list)
	return strings.Join(list, ", ")
}

func spinOrbit(set *catalog.Set) string {
	var list []string
	for element, so := range set.SpinOrbit {
		list = append(list, fmt.Sprintf("Δ(%s p) = %s eV, λ = Δ/3", element, figure(so.Delta)))
	}
	sort.Strings(list)
	return strings.Join(list, "; ")
}
