package tightbinding

import (
	"sort"

	"bandwright/physics/lattice"
)

// termSums holds H(k) split by bond terms, summed over bonds: for each place
// (row, col) of the lower triangle, one entry per term. Many bonds share an
// entry, and all levels of a k point share the entries.
type termSums struct {
	cells  []cell
	term   []int   // of each entry
	shares []share // ordered by block
}

// cell is a place of the lower triangle and its entries.
type cell struct {
	row, col    int
	first, last int // entries
}

// share adds re·cos k·d + i·im·sin k·d of a block to an entry.
type share struct {
	block, entry int
	re, im       float64
}

func sumByTerms(blocks []block) termSums {
	type place struct{ row, col, term int }
	values := make(map[place]map[int]*share) // by block
	for n := range blocks {
		b := &blocks[n]
		for _, p := range b.parts {
			row, col := b.row+int(p.element)/b.cols, b.col+int(p.element)%b.cols
			// On the diagonal, the other end of the bond gives the adjoint:
			// e^{iφ}V + e^{−iφ}Vᵀ. An element above the diagonal enters below
			// it with the conjugate phase.
			im := p.value
			if row < col {
				row, col, im = col, row, -im
			}
			at := place{row, col, int(p.term)}
			if values[at] == nil {
				values[at] = make(map[int]*share)
			}
			s := values[at][n]
			if s == nil {
				s = &share{block: n}
				values[at][n] = s
			}
			s.re += p.value
			s.im += im
			if row == col && b.onAtom {
				s.re += p.value
				s.im -= im
			}
		}
	}
	places := make([]place, 0, len(values))
	for at := range values {
		places = append(places, at)
	}
	sort.Slice(places, func(i, j int) bool {
		a, b := places[i], places[j]
		if a.row != b.row {
			return a.row < b.row
		}
		if a.col != b.col {
			return a.col < b.col
		}
		return a.term < b.term
	})
	var out termSums
	for entry, at := range places {
		if n := len(out.cells); n == 0 || out.cells[n-1].row != at.row || out.cells[n-1].col != at.col {
			out.cells = append(out.cells, cell{row: at.row, col: at.col, first: entry})
		}
		out.cells[len(out.cells)-1].last = entry + 1
		out.term = append(out.term, at.term)
		for _, s := range values[at] {
			if s.re != 0 || s.im != 0 {
				s.entry = entry
				out.shares = append(out.shares, *s)
			}
		}
	}
	sort.Slice(out.shares, func(i, j int) bool {
		a, b := out.shares[i], out.shares[j]
		if a.block != b.block {
			return a.block < b.block
		}
		return a.entry < b.entry
	})
	return out
}

// at stores the entries at k.
func (t *termSums) at(k lattice.FracK, blocks []block, re, im []float64) {
	clear(re)
	clear(im)
	block, cos, sin := -1, 0.0, 0.0
	for i := range t.shares {
		s := &t.shares[i]
		if s.block != block {
			block = s.block
			cos, sin = blocks[block].phase(k)
		}
		re[s.entry] += cos * s.re
		im[s.entry] += sin * s.im
	}
}
