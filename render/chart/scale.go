package chart

import (
	"math"
	"strconv"
	"strings"
)

// Scale maps data from Lo … Hi linearly to points At0 … At1.
type Scale struct{ Lo, Hi, At0, At1 float64 }

// At is the place of a value.
func (s Scale) At(v float64) float64 {
	if s.Hi == s.Lo {
		return (s.At0 + s.At1) / 2
	}
	return s.At0 + (v-s.Lo)/(s.Hi-s.Lo)*(s.At1-s.At0)
}

// Inv is the value at a place.
func (s Scale) Inv(p float64) float64 {
	if s.At1 == s.At0 {
		return (s.Lo + s.Hi) / 2
	}
	return s.Lo + (p-s.At0)/(s.At1-s.At0)*(s.Hi-s.Lo)
}

// Tick is a mark on an axis.
type Tick struct {
	Value float64
	Label string // "" for a minor tick
	Major bool
}

// Ticks are the round values within lo … hi, at most the given number of major
// ones, with minor ones between, ascending. Labels have one number of decimals
// and a true minus. There are none when the range is empty or not finite.
func Ticks(lo, hi float64, most int) []Tick {
	if lo > hi {
		lo, hi = hi, lo
	}
	span := hi - lo
	if !(span > 0) || math.IsInf(span, 0) || most < 1 || span < 1e-12*max(math.Abs(lo), math.Abs(hi)) {
		return nil
	}
	step, minors := niceStep(span / float64(most))
	decimals := max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	minor := step / float64(minors)
	first, last := math.Ceil(lo/minor-1e-9), math.Floor(hi/minor+1e-9)
	if last-first > 1000 {
		return nil
	}
	var list []Tick
	for i := first; i <= last; i++ {
		t := Tick{Value: i * minor}
		if math.Mod(i, float64(minors)) == 0 {
			t.Major = true
			t.Value = i / float64(minors) * step
			t.Label = label(t.Value, decimals)
		}
		list = append(list, t)
	}
	return list
}

// niceStep is the smallest of 1, 2, 5 times a power of ten that is not below
// the wish, and into how many minor steps it is divided.
func niceStep(wish float64) (step float64, minors int) {
	power := math.Pow(10, math.Floor(math.Log10(wish)))
	for _, s := range []struct {
		step   float64
		minors int
	}{{1, 5}, {2, 4}, {5, 5}, {10, 5}} {
		if s.step*power >= wish*(1-1e-9) {
			return s.step * power, s.minors
		}
	}
	return 10 * power, 5
}

// label writes a value with a fixed number of decimals and never as −0.
func label(v float64, decimals int) string {
	text := strconv.FormatFloat(v, 'f', decimals, 64)
	if rest, negative := strings.CutPrefix(text, "-"); negative {
		if strings.Trim(rest, "0.") == "" {
			return rest
		}
		return "−" + rest
	}
	return text
}
