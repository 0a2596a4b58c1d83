package present

import (
	"fmt"
	"math"
	"strings"

	"bandwright/physics/edges"
	"bandwright/physics/lattice"
	"bandwright/ui/session"
)

// Chip is a short fact of the header that leads to a k point.
type Chip struct {
	Text string
	Hint string
	Edge EdgeKind
	Goes bool // whether a click goes somewhere
	// K and Energy are where it goes: the k point and the level to focus.
	K      lattice.FracK
	Energy float64
	Level  int
}

// Chips are the gap and the edges in a line.
func Chips(sn *session.Snapshot) []Chip {
	if sn.EdgesErr != nil {
		return []Chip{{Text: "edges not available", Hint: sn.EdgesErr.Error()}}
	}
	e := sn.Edges
	if e == nil {
		return []Chip{{Text: "searching the zone for edges …"}}
	}
	var list []Chip
	stale := ""
	if sn.EdgesStale {
		stale = " …"
	}
	switch e.Kind {
	case edges.Metal:
		text := "metal · Fermi level " + number(e.Fermi, 3) + " eV"
		hint := "Fermi level in the model's own zero"
		if sn.DOS != nil && !sn.DOSStale {
			_, density := sn.DOS.Count(e.Fermi)
			atoms := float64(len(sn.Built.Crystal.Sites))
			list = append(list, Chip{Text: number(density/atoms, 3) + " eV⁻¹ atom⁻¹ there", Hint: "density of states at the Fermi level, both spins"})
			low, _ := sn.DOS.Range()
			list = append(list, Chip{Text: "filled width " + number(e.Fermi-low, 2) + " eV", Hint: "from the lowest level to the Fermi level"})
		}
		return append([]Chip{{Text: text + stale, Hint: hint}}, list...)
	case edges.Semimetal:
		list = append(list, Chip{Text: "semimetal · overlap " + number(e.Overlap, 3) + " eV" + stale, Hint: "filled and empty bands touch or overlap"})
	default:
		text := fmt.Sprintf("gap %s eV · %s", number(e.Gap, 3), e.Kind)
		list = append(list, Chip{Text: text + stale, Hint: "smallest energy from filled to empty states anywhere in the zone"})
	}
	if m := measuredGap(sn); m != "" {
		list[0].Text += " · measured " + m
	}
	add := func(kind EdgeKind, name string, edge *edges.Edge) {
		if edge == nil {
			return
		}
		text, place := name+" "+edge.Where, ""
		if len([]rune(edge.Where)) >= 18 {
			text, place = name+" at a general k", "at "+edge.Where+": "
		}
		if kind == DirectGap {
			text = "direct " + number(edge.Energy, 3) + " eV"
			if len([]rune(edge.Where)) < 18 {
				text += " at " + edge.Where
			} else {
				place = "the smallest vertical gap, at " + edge.Where + ": "
			}
		} else if edge.Valleys > 1 {
			text += fmt.Sprintf(" ×%d", edge.Valleys)
		}
		hint := place + "click holds this k point and focuses the level"
		if sn.Bands != nil && sn.Bands.Sampling != nil && sn.Built != nil {
			if on, off := edge.OnPath(sn.Built.Crystal.Setting, sn.Bands.Sampling); !on {
				text += " (off path)"
				hint = place + "not on this path, " + number(off, 3) + " Å⁻¹ away: click goes there"
			}
		}
		list = append(list, Chip{Text: text, Hint: hint, Edge: kind, Goes: true, K: edge.K, Energy: edge.Energy, Level: edge.Level})
	}
	add(ValenceTop, "top", e.VBM)
	add(ConductionBottom, "bottom", e.CBM)
	add(DirectGap, "direct", e.Direct)
	return list
}

func measuredGap(sn *session.Snapshot) string {
	if sn.Built == nil || sn.Built.Set == nil || sn.Built.Set.Measured == nil {
		return ""
	}
	m := sn.Built.Set.Measured
	switch {
	case m.Gap0K != nil:
		return number(*m.Gap0K, 2) + " (0 K)"
	case m.Gap300K != nil:
		return number(*m.Gap300K, 2) + " (300 K)"
	}
	return ""
}

// Limits is what to keep in mind about the model, most urgent first.
func Limits(sn *session.Snapshot) []string {
	if sn.Built == nil || sn.Built.Model == nil {
		return nil
	}
	var list []string
	if notes := sn.Built.Model.Altered(); len(notes) > 0 {
		list = append(list, "Altered model: "+strings.Join(notes, "; ")+".")
	}
	set := sn.Built.Set
	if set == nil {
		return list
	}
	if problem, _ := sn.Built.Stretch(); problem != "" {
		list = append(list, "Stretched set: "+problem+".")
	}
	if a := sn.Built.Crystal.Setting.A; set.A > 0 {
		if off := a/set.A - 1; math.Abs(off) > 0.05+1e-9 {
			list = append(list, fmt.Sprintf("Lattice constant %s %% from that of the set: the d⁻² law is an extrapolation beyond ±5 %%.", signed(100*off, 1)))
		}
	}
	list = append(list, set.Limits...)
	list = append(list, "Model error is not numerical error: a semi-empirical level can be off by tenths of an eV where nothing was fitted.")
	return list
}

// marked is the title of a panel of results, which says when they are not those
// of the set as published.
func marked(sn *session.Snapshot, title string) string {
	if sn.Built != nil && sn.Built.Model != nil && len(sn.Built.Model.Altered()) > 0 {
		title += " · altered"
	}
	return title
}

// About says whose numbers the model uses.
func About(sn *session.Snapshot) string {
	if sn.Built == nil || sn.Built.Set == nil {
		return ""
	}
	set := sn.Built.Set
	text := set.BasisName() + " two-centre model, " + set.Source.String()
	if set.Fit.To != "" {
		text += "; fitted to " + set.Fit.To
	}
	return text
}

// Sampling says how finely path and zone are sampled.
func Sampling(sn *session.Snapshot) string {
	text := ""
	if d := sn.Doc.Mesh; d[0] == d[1] && d[1] == d[2] {
		text = fmt.Sprintf("mesh %d%s", d[0], superscript(3))
	} else {
		text = fmt.Sprintf("mesh %d × %d × %d", d[0], d[1], d[2])
	}
	if sn.Bands != nil && sn.Bands.Sampling != nil {
		text += fmt.Sprintf(" · %d points on the path", len(sn.Bands.Sampling.K))
	}
	return text
}
