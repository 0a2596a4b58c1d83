package tightbinding

import (
	"fmt"
	"math"
	"sort"
	"strings"
)

// factors holds the scaling factors that the user gave to terms.
type factors struct {
	value map[string]float64 // by subject
	as    map[string]string  // by subject: the key as the user wrote it
	used  map[string]bool
	known map[string]bool // subjects that exist, for the error message
	bonds map[int]float64 // by index of the set's bond parameter
}

// maxFactor is the largest factor of a term.
const maxFactor = 2

func readFactors(given map[string]float64) (*factors, error) {
	f := &factors{value: make(map[string]float64), as: make(map[string]string), used: make(map[string]bool),
		known: make(map[string]bool), bonds: make(map[int]float64)}
	keys := make([]string, 0, len(given))
	for key := range given {
		keys = append(keys, key)
	}
	sort.Strings(keys)
	for _, key := range keys {
		x := given[key]
		if !(x >= 0 && x <= maxFactor) {
			return nil, fmt.Errorf("factor of %q is %g: give a number from 0 to %d", key, x, maxFactor)
		}
		subject := normal(key)
		if other, twice := f.as[subject]; twice {
			return nil, fmt.Errorf("factors %q and %q mean the same term: keep one", other, key)
		}
		f.value[subject], f.as[subject] = x, key
	}
	return f, nil
}

// normal lets a hyphen stand for the dash between two orbitals.
func normal(key string) string {
	return strings.ReplaceAll(strings.Join(strings.Fields(key), " "), " - ", " – ")
}

// of returns the factor of a term from its subjects, the general one first.
func (f *factors) of(subjects ...string) float64 {
	out := 1.0
	for _, s := range subjects {
		s = strings.TrimSpace(s)
		f.known[s] = true
		if x, ok := f.value[s]; ok {
			f.used[s] = true
			out = x
		}
	}
	return out
}

func (f *factors) bond(i int, x float64) { f.bonds[i] = x }

// unused refuses factors of terms that the model does not have.
func (f *factors) unused() error {
	for _, subject := range f.sorted() {
		if f.used[subject] {
			continue
		}
		var known []string
		for s := range f.known {
			known = append(known, s)
		}
		sort.Strings(known)
		return fmt.Errorf("factor of %q: the model has no such term; it has %s", f.as[subject], strings.Join(known, ", "))
	}
	return nil
}

func (f *factors) sorted() []string {
	var out []string
	for s := range f.value {
		out = append(out, s)
	}
	sort.Strings(out)
	return out
}

// report says which terms are scaled.
func (f *factors) report() []string {
	var out []string
	for _, s := range f.sorted() {
		if x := f.value[s]; math.Abs(x-1) > 1e-12 {
			out = append(out, fmt.Sprintf("%s × %g", s, x))
		}
	}
	return out
}
