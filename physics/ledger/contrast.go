package ledger

import "math"

// ContrastRow compares one row of two entries.
type ContrastRow struct {
	Quantity   Quantity
	Subject    string  // of both; "Si1 s | Sn1 s" when they differ
	A, B       float64 // eV or shares; 0 for a term that the side does not have
	InA, InB   bool    // whether the side has this row
	Difference float64 // B − A; NaN when a share is undefined
}

// Contrast compares two entries row by row, in the order of a, then what only
// b has, quantity by quantity. Rows of different crystals or sets correspond
// when they are the same shell on the site of the same number, or the same
// channel between neighbours of the same shell. Of the rows that are terms
// (Quantity.IsTerm), the A sum to the energy of a, the B to that of b. A term
// that a side does not have contributes nothing there, and counts as 0.
func Contrast(a, b Entry) []ContrastRow {
	left, right := a.Table(), b.Table()
	index := make(map[role]int, len(right))
	for i, row := range right {
		index[row.role] = i
	}
	taken := make([]bool, len(right))
	var out []ContrastRow
	for _, q := range [...]Quantity{WeightOf, OnSite, SpinOrbit, Bond, NetBond, BondingShare} {
		for _, row := range left {
			if row.Quantity != q {
				continue
			}
			c := ContrastRow{Quantity: q, Subject: row.Subject, A: row.Value, InA: !row.Undefined}
			if i, ok := index[row.role]; ok {
				taken[i] = true
				c.B, c.InB = right[i].Value, !right[i].Undefined
				if right[i].Subject != row.Subject {
					c.Subject = row.Subject + " | " + right[i].Subject
				}
			}
			out = append(out, c)
		}
		for i, row := range right {
			if row.Quantity == q && !taken[i] {
				out = append(out, ContrastRow{Quantity: q, Subject: row.Subject, B: row.Value, InB: !row.Undefined})
			}
		}
	}
	for i := range out {
		c := &out[i]
		c.Difference = c.B - c.A
		if q := c.Quantity; q == BondingShare && !(c.InA && c.InB) {
			c.Difference = math.NaN()
		}
	}
	return out
}
