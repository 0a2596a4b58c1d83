package present

import (
	"fmt"
	"math"
	"strings"

	"bandwright/physics/hamiltonian"
	"bandwright/physics/ledger"
	"bandwright/render/picture"
	"bandwright/render/typeset"
	"bandwright/ui/session"
)

const ledgerRow = 17.0

// RowName is a Ledger row's quantity and subject in words: "on-site Si1 p",
// "bonds ppσ".
func RowName(sn *session.Snapshot, q ledger.Quantity, subject string) string {
	switch q {
	case ledger.WeightOf:
		return subject
	case ledger.OnSite:
		return "on-site " + subject
	case ledger.SpinOrbit:
		return "spin–orbit " + subject
	case ledger.NetBond:
		return "net bond energy"
	case ledger.BondingShare:
		return "bonding share"
	}
	name := strings.TrimPrefix(subject, "shell1 ")
	if shell, rest, ok := strings.Cut(name, " "); ok && strings.HasPrefix(shell, "shell") {
		return "bonds " + rest + ", shell " + strings.TrimPrefix(shell, "shell")
	}
	if sn.Built != nil && sn.Built.Set != nil && sn.Built.Set.Shells > 1 {
		return "bonds " + name + ", shell 1"
	}
	return "bonds " + name
}

// FactorKey is the name under which a term of a row is scaled; "" for rows
// that are no terms.
func FactorKey(r ledger.Row) string {
	switch r.Quantity {
	case ledger.OnSite:
		return "onsite " + r.Subject
	case ledger.SpinOrbit:
		return "spin_orbit " + r.Subject
	case ledger.Bond:
		return r.Subject
	}
	return ""
}

// ledgerParts are the places of the Ledger's three parts.
type ledgerParts struct {
	terms, facts, contrast picture.Rect
	stacked                bool
}

func partsFor(w, h float64, pinned bool) ledgerParts {
	top := 34.0
	if w < 640 {
		return ledgerParts{terms: picture.Span(edgePad, top, w-edgePad, h), stacked: true}
	}
	a, b := 0.48, 0.72
	if pinned {
		a, b = 0.36, 0.53
	}
	return ledgerParts{
		terms:    picture.Span(edgePad, top, w*a-10, h),
		facts:    picture.Span(w*a+10, top, w*b-10, h),
		contrast: picture.Span(w*b+10, top, w-edgePad, h),
	}
}

// Ledger draws the breakdown of the focused level and, when two levels are
// pinned, their Contrast. The second value is the height of all there is, to
// bound the scrolling.
func Ledger(sn *session.Snapshot, v *View, w, h float64) (*picture.Picture, float64) {
	t := v.Theme
	s := newSheet(t, w, h, marked(sn, "Ledger"), ledgerRemark(sn))
	if sn.Focus == nil {
		reason := "Hold a k point and focus a level to see what its energy is made of."
		if sn.HeldErr != nil {
			reason = sn.HeldErr.Error()
		}
		s.message(reason, picture.Span(0, 34, w, max(35, h)), t.Soft)
		return s.Picture, h
	}
	p := partsFor(w, h, sn.PinA != nil && sn.PinB != nil)
	s.PushClip(picture.Span(0, 30, w, max(31, h)))
	shift := -v.Scroll
	bottom := s.terms(sn, p.terms.Shift(0, shift))
	if p.stacked {
		p.facts = picture.Span(p.terms.X0, bottom+14-shift, p.terms.X1, bottom+14-shift)
	}
	end := s.facts(sn, p.facts.Shift(0, shift))
	bottom = max(bottom, end)
	if p.stacked {
		p.contrast = picture.Span(p.terms.X0, end+18-shift, p.terms.X1, end+18-shift)
	}
	bottom = max(bottom, s.contrast(sn, p.contrast.Shift(0, shift)))
	s.PopClip()
	if !p.stacked {
		for _, x := range []float64{p.facts.X0 - 10, p.contrast.X0 - 10} {
			s.Line(x, 36, x, h-8, picture.Stroke{Color: t.Rule, Width: 1, Crisp: true})
		}
	}
	full := bottom + 6 + v.Scroll
	s.scrollMark(v.Scroll, full, w, h)
	return s.Picture, full
}

// scrollMark shows which part of a taller content is seen.
func (s *sheet) scrollMark(scroll, full, w, h float64) {
	if full <= h {
		return
	}
	top, room := 34.0, h-40
	y := top + room*scroll/full
	s.FillRect(picture.Span(w-5, y, w-2, y+room*min(1, h/full)), picture.Fill{Color: s.t.Faint, Crisp: true})
}

func ledgerRemark(sn *session.Snapshot) string {
	f := sn.Focus
	if f == nil {
		return ""
	}
	parts := []string{number(f.Set.Energy, 4) + " eV in the model's zero"}
	if f.Set.Size == 1 {
		parts = append(parts, fmt.Sprintf("level %d", f.Set.First+1))
	} else {
		parts = append(parts, fmt.Sprintf("levels %d–%d", f.Set.First+1, f.Set.First+f.Set.Size))
	}
	if sn.HeldLabel != "" {
		parts = append(parts, "at "+sn.HeldLabel)
	}
	if sn.FermiKnown {
		if f.Set.Energy <= sn.Fermi+hamiltonian.SetTolerance {
			parts = append(parts, "filled")
		} else {
			parts = append(parts, "empty")
		}
	}
	if unreliable(sn, f.Set.Energy) {
		parts = append(parts, "outside what the set was fitted to")
	}
	return strings.Join(parts, " · ")
}

// terms draws the rows that sum to the energy.
func (s *sheet) terms(sn *session.Snapshot, r picture.Rect) float64 {
	t, e := s.t, sn.Focus
	largest := 1e-6
	wide := 96.0
	for _, row := range e.Rows {
		largest = max(largest, math.Abs(row.Value))
		wide = max(wide, typeset.Plain(RowName(sn, row.Quantity, row.Subject), textSize, typeset.Style{}).Width)
		for _, d := range row.Details {
			wide = max(wide, 12+typeset.Plain(d.Text, smallSize, typeset.Style{}).Width)
		}
	}
	wide = min(wide, max(60, r.W()-140))
	value := r.X0 + wide + 64
	bars := picture.Span(value+12, 0, r.X1, 0)
	middle := bars.X0 + bars.W()/2
	reach := max(8, bars.W()/2-2)
	y := r.Y0 + 9
	s.Begin("terms")
	defer s.End()
	s.write("term", r.X0, y, smallSize, t.Soft, picture.Middle)
	s.write("eV", value, y, smallSize, t.Soft, picture.Right|picture.Middle)
	s.write("lowers *E*", middle-6, y, smallSize, t.Soft, picture.Right|picture.Middle)
	s.write("raises *E*", middle+6, y, smallSize, t.Soft, picture.Middle)
	top := y + 9
	for i, row := range e.Rows {
		y += ledgerRow
		s.SetID(Target{Kind: Row, I: i}.id())
		s.FillRect(picture.Span(r.X0-4, y-ledgerRow/2, r.X1, y+ledgerRow/2), picture.Fill{})
		name := RowName(sn, row.Quantity, row.Subject)
		s.fitMiddle(name, r.X0, y, textSize, t.Ink, wide)
		if f, altered := sn.Doc.Model.Factors[FactorKey(row)]; altered && f != 1 {
			beside := typeset.Plain(name, textSize, typeset.Style{}).Width
			s.write("×"+number(f, 2), r.X0+min(beside, wide)+7, y, smallSize, t.Caution, picture.Middle)
		}
		s.write(signed(row.Value, 4), value, y, textSize, t.Ink, picture.Right|picture.Middle)
		if row.Quantity == ledger.Bond {
			s.signedBar(middle, y, row.Value/largest*reach, 5, false)
		} else {
			bar := picture.Span(middle, y-5, middle+row.Value/largest*reach, y+5)
			s.FillRect(bar, picture.Fill{Color: t.OnSite, Crisp: true})
		}
		for _, d := range row.Details {
			y += ledgerRow - 3
			s.fitMiddle(d.Text, r.X0+12, y, smallSize, t.Soft, wide-12)
			s.write(signed(d.Value, 4), value, y, smallSize, t.Soft, picture.Right|picture.Middle)
			s.signedBar(middle, y, d.Value/largest*reach, 2.5, true)
		}
		s.SetID(0)
	}
	s.Line(middle, top, middle, y+9, picture.Stroke{Color: t.Faint, Width: 1, Crisp: true})
	y += 11
	s.Line(r.X0, y, value, y, picture.Stroke{Color: t.Ink, Width: 1, Crisp: true})
	y += 12
	s.bold("sum = *E*", r.X0, y, textSize, t.Ink, picture.Middle)
	s.bold(signed(e.Sum, 4), value, y, textSize, t.Ink, picture.Right|picture.Middle)
	if off := math.Abs(e.Sum - e.Set.Energy); off > ledger.SumTolerance {
		s.write(fmt.Sprintf("misses the level by %.1e eV", off), value+12, y, smallSize, t.Bad, picture.Middle)
	}
	return y + 12
}

// fitMiddle writes plain text about the height of its capitals, shortened.
func (s *sheet) fitMiddle(text string, x, y, size float64, c picture.Color, width float64) {
	s.Text(typeset.Shorten(text, size, typeset.Style{}, width), x, y, picture.TextStyle{Color: c, Align: picture.Middle})
}

// facts draws weights, net bond energy, sign share and sensitivity.
func (s *sheet) facts(sn *session.Snapshot, r picture.Rect) float64 {
	t, e := s.t, sn.Focus
	s.Begin("facts")
	defer s.End()
	y := r.Y0 + 9
	s.write("weights", r.X0, y, smallSize, t.Soft, picture.Middle)
	parts := composition(sn, e.Weights)
	name := 16.0
	for _, p := range parts {
		name = max(name, typeset.Plain(p.label, textSize, typeset.Style{}).Width)
	}
	room := max(10, r.W()-name-60)
	for _, p := range parts {
		y += ledgerRow
		s.bold(typeset.Escape(p.label), r.X0, y, textSize, t.Ink, picture.Middle)
		x := r.X0 + name + 8
		s.FillRect(picture.Span(x, y-5, x+room, y+5), picture.Fill{Color: alpha(t.Faint, 40), Crisp: true})
		s.FillRect(picture.Span(x, y-5, x+room*max(0, min(1, p.value)), y+5), picture.Fill{Color: t.Orbital[p.l], Crisp: true})
		s.write(number(p.value, 3), x+room+6, y, textSize, t.Ink, picture.Middle)
	}
	y += 24
	line := func(label, value string) {
		width := typeset.Plain(value, textSize, typeset.Style{}).Width
		if typeset.Plain(label, textSize, typeset.Style{}).Width+width+10 > r.W() {
			s.fitMiddle(label, r.X0, y, textSize, t.Soft, r.W())
			y += ledgerRow - 2
		} else {
			s.fitMiddle(label, r.X0, y, textSize, t.Soft, r.W())
		}
		s.write(value, r.X1, y, textSize, t.Ink, picture.Right|picture.Middle)
		y += ledgerRow
	}
	line("net bond energy", signed(e.NetBond, 3)+" eV")
	if e.ShareDefined {
		line("bonding share", number(100*e.BondingShare, 1)+" %")
		x, width := r.X0, r.W()
		cut := x + width*e.BondingShare
		y -= 3
		s.FillRect(picture.Span(x, y-4, cut, y+4), picture.Fill{Color: t.Bonding, Crisp: true})
		s.FillRect(picture.Span(cut, y-4, x+width, y+4), picture.Fill{Hatch: picture.Hatch{Color: t.Against, Angle: 45, Spacing: 3.6, Width: 0.9}, Crisp: true})
		s.StrokeRect(picture.Span(x, y-4, x+width, y+4), picture.Stroke{Color: t.Faint, Width: 1, Crisp: true})
		y += ledgerRow
	} else {
		line("bonding share", "not defined: no bonds")
	}
	line("all bonds +1 %", signed(10*e.DEdlnD, 1)+" meV")
	return y
}

// contrast draws the difference of the two pinned levels term by term, or how
// to pin them.
func (s *sheet) contrast(sn *session.Snapshot, r picture.Rect) float64 {
	t := s.t
	s.Begin("contrast")
	defer s.End()
	y := r.Y0 + 9
	s.bold("Contrast", r.X0, y, textSize, t.Ink, picture.Middle)
	for _, p := range []struct {
		name string
		pin  *session.Pinned
	}{{"A", sn.PinA}, {"B", sn.PinB}} {
		y += ledgerRow
		s.bold(p.name, r.X0, y, textSize, t.Held, picture.Middle)
		switch {
		case p.pin == nil:
			s.fitMiddle("no level pinned: key "+p.name+" pins the focused one", r.X0+16, y, textSize, t.Soft, r.W()-16)
		case p.pin.Err != nil:
			s.fitMiddle(p.pin.Err.Error(), r.X0+16, y, textSize, t.Bad, r.W()-16)
		default:
			s.fitMiddle(p.pin.Name, r.X0+16, y, textSize, t.Ink, r.W()-16)
		}
	}
	if sn.PinA == nil || sn.PinB == nil {
		y += 24
		return s.paragraph("Pin two levels to see which terms hold them apart: of one crystal, or of two (the gap of one against that of the other).",
			r.X0, y, textSize, r.W(), t.Soft)
	}
	if len(sn.Contrast) == 0 {
		return y + ledgerRow
	}
	// Columns.
	wide, largest := 80.0, 1e-6
	for _, row := range sn.Contrast {
		if row.Quantity.IsTerm() && !nothing(row) {
			wide = max(wide, typeset.Plain(contrastName(sn, row), textSize, typeset.Style{}).Width)
			largest = max(largest, math.Abs(row.Difference))
		}
	}
	const column = 58.0
	wide = min(wide, max(60, r.W()-3*column-30))
	a, b := r.X0+wide+column, r.X0+wide+2*column
	d := b + column
	bars := picture.Span(d+8, 0, r.X1, 0)
	middle, reach := bars.X0+bars.W()/2, bars.W()/2-1
	y += 20
	for _, c := range []struct {
		text string
		x    float64
	}{{"A / eV", a}, {"B / eV", b}, {"B − A", d}} {
		s.write(c.text, c.x, y, smallSize, t.Soft, picture.Right|picture.Middle)
	}
	figure := func(x float64, v float64, in bool, decimals int, soft bool) {
		c, text := t.Ink, signed(v, decimals)
		if soft {
			c = t.Soft
		}
		if !in {
			text, c = "–", t.Soft
		}
		if math.IsNaN(v) {
			text = "undefined"
		}
		s.write(text, x, y, textSize, c, picture.Right|picture.Middle)
	}
	sumA, sumB := 0.0, 0.0
	for _, row := range sn.Contrast {
		if !row.Quantity.IsTerm() || nothing(row) {
			continue
		}
		sumA, sumB = sumA+row.A, sumB+row.B
		y += ledgerRow
		s.fitMiddle(contrastName(sn, row), r.X0, y, textSize, t.Ink, wide)
		figure(a, row.A, row.InA, 3, true)
		figure(b, row.B, row.InB, 3, true)
		figure(d, row.Difference, true, 3, false)
		if reach > 10 {
			s.signedBar(middle, y, row.Difference/largest*reach, 4.5, false)
		}
	}
	y += 11
	s.Line(r.X0, y, d, y, picture.Stroke{Color: t.Ink, Width: 1, Crisp: true})
	y += 12
	s.bold("*E*", r.X0, y, textSize, t.Ink, picture.Middle)
	figure(a, sumA, true, 3, false)
	figure(b, sumB, true, 3, false)
	s.bold(signed(sumB-sumA, 3), d, y, textSize, t.Ink, picture.Right|picture.Middle)
	y += 8
	for _, row := range sn.Contrast {
		if row.Quantity != ledger.WeightOf && row.Quantity != ledger.BondingShare || nothing(row) {
			continue
		}
		y += ledgerRow
		name := "weight " + contrastName(sn, row)
		if row.Quantity == ledger.BondingShare {
			name = "bonding share"
		}
		s.fitMiddle(name, r.X0, y, textSize, t.Soft, wide)
		figure(a, row.A, row.InA, 3, true)
		figure(b, row.B, row.InB, 3, true)
		figure(d, row.Difference, true, 3, true)
	}
	if sn.PinA.Formula != sn.PinB.Formula || sn.PinA.SetID != sn.PinB.SetID {
		y += 20
		y = s.paragraph("Two parameter sets have no common energy zero: compare differences within each, not absolute energies.",
			r.X0, y, smallSize, r.W(), t.Caution)
	}
	return y + 10
}

// nothing says whether a row is zero on both sides: it takes no part in the
// difference.
func nothing(row ledger.ContrastRow) bool { return math.Abs(row.A) < 5e-7 && math.Abs(row.B) < 5e-7 }

func contrastName(sn *session.Snapshot, row ledger.ContrastRow) string {
	if row.Quantity == ledger.Bond {
		return "bonds " + strings.ReplaceAll(strings.TrimPrefix(row.Subject, "shell1 "), "| shell1 ", "| ")
	}
	return RowName(sn, row.Quantity, row.Subject)
}

// LedgerText is the Ledger of the focused level, and the Contrast if there is
// one, as lines of columns separated by tabs. Its numbers have the minus of a
// keyboard, so that a spreadsheet reads them.
func LedgerText(sn *session.Snapshot) string {
	if sn.Focus == nil || sn.Built == nil {
		return ""
	}
	var b strings.Builder
	typed := func(v float64, decimals int) string { return strings.ReplaceAll(signed(v, decimals), minus, "-") }
	setID := sn.Doc.Model.Set
	if sn.Doc.Model.File != "" {
		setID = sn.Doc.Model.File
	}
	fmt.Fprintf(&b, "%s\t%s\ta = %s Å\tk = %s %s\t%s\n", sn.Built.Crystal.Formula(), setID, number(sn.Built.Crystal.Setting.A, 4),
		Coordinates(sn.Built.Crystal.Setting, sn.Doc.View.Frame, sn.Doc.View.Held), unit(sn.Doc.View.Frame), sn.HeldLabel)
	for _, note := range sn.Built.Model.Altered() {
		fmt.Fprintf(&b, "altered\t%s\n", note)
	}
	fmt.Fprintf(&b, "%s\n", ledgerRemark(sn))
	for _, row := range sn.Focus.Table() {
		if row.Quantity.IsTerm() {
			fmt.Fprintf(&b, "%s\t%s\teV\n", RowName(sn, row.Quantity, row.Subject), typed(row.Value, 6))
		}
	}
	fmt.Fprintf(&b, "sum = E\t%s\teV\n", typed(sn.Focus.Sum, 6))
	for _, row := range sn.Focus.Table() {
		switch {
		case row.Quantity == ledger.WeightOf:
			fmt.Fprintf(&b, "weight %s\t%s\t\n", row.Subject, number(row.Value, 6))
		case row.Quantity == ledger.NetBond:
			fmt.Fprintf(&b, "net bond energy\t%s\teV\n", typed(row.Value, 6))
		case row.Quantity == ledger.BondingShare && row.Undefined:
			b.WriteString("bonding share\tnot defined: no bonds\t\n")
		case row.Quantity == ledger.BondingShare:
			fmt.Fprintf(&b, "bonding share\t%s\t\n", number(row.Value, 6))
		}
	}
	if sn.PinA != nil && sn.PinB != nil && len(sn.Contrast) > 0 {
		fmt.Fprintf(&b, "\nContrast\tA: %s\tB: %s\tB − A\n", sn.PinA.Name, sn.PinB.Name)
		for _, row := range sn.Contrast {
			side := func(v float64, in bool) string {
				if !in {
					return "–"
				}
				return typed(v, 6)
			}
			fmt.Fprintf(&b, "%s\t%s\t%s\t%s\n", contrastName(sn, row), side(row.A, row.InA), side(row.B, row.InB), typed(row.Difference, 6))
		}
	}
	return b.String()
}
