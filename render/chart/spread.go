package chart

import "math"

// SpreadLabels moves labels of the given heights as little as possible (least
// squares) from their wished middles, which ascend, so that they keep their
// order, stay gap apart, and lie within lo … hi where they fit at all. What
// does not fit is packed evenly over the range.
//
// With offsets that make neighbours touch when equal, the task is isotonic
// regression, solved exactly by pooling blocks that violate the order; the
// bounds then clamp the solution.
func SpreadLabels(wished, heights []float64, lo, hi, gap float64) []float64 {
	n := len(wished)
	out := make([]float64, n)
	if n == 0 {
		return out
	}
	// offset[i]: where label i stands when all are packed without a space.
	offset := make([]float64, n)
	total := heights[0]
	for i := 1; i < n; i++ {
		offset[i] = offset[i-1] + heights[i-1]/2 + gap + heights[i]/2
		total += gap + heights[i]
	}
	if total > hi-lo {
		// They do not fit: share the range out in proportion.
		squeeze := (hi - lo) / total
		for i := range out {
			out[i] = lo + squeeze*(heights[0]/2+offset[i])
		}
		return out
	}
	type block struct {
		sum   float64
		count int
	}
	var blocks []block
	for i := range wished {
		w := wished[i]
		if math.IsNaN(w) {
			w = lo
		}
		w = max(lo, min(hi, w))
		b := block{w - offset[i], 1}
		for len(blocks) > 0 {
			last := blocks[len(blocks)-1]
			if last.sum*float64(b.count) < b.sum*float64(last.count) {
				break
			}
			b.sum, b.count = b.sum+last.sum, b.count+last.count
			blocks = blocks[:len(blocks)-1]
		}
		blocks = append(blocks, b)
	}
	least, most := lo+heights[0]/2, hi-heights[n-1]/2-offset[n-1]
	i := 0
	for _, b := range blocks {
		at := max(least, min(most, b.sum/float64(b.count)))
		for range b.count {
			out[i] = at + offset[i]
			i++
		}
	}
	return out
}
