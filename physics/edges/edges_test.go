package edges

import (
	"context"
	"fmt"
	"testing"

	"bandwright/physics/catalog"
	"bandwright/physics/crystal"
	"bandwright/physics/symmetry"
	"bandwright/physics/tightbinding"
)

func find(tb testing.TB, id string, spinOrbit bool, n int) *Edges {
	tb.Helper()
	set, err := catalog.Lookup(id)
	if err != nil {
		tb.Fatal(err)
	}
	c, err := crystal.FromPrototype(set.Prototype, set.Elements, set.A)
	if err != nil {
		tb.Fatal(err)
	}
	m, err := tightbinding.New(c, set, tightbinding.Options{SpinOrbit: spinOrbit})
	if err != nil {
		tb.Fatal(err)
	}
	g, err := symmetry.Find(c, symmetry.DefaultTolerance)
	if err != nil {
		tb.Fatal(err)
	}
	mesh, err := g.Mesh([3]int{n, n, n})
	if err != nil {
		tb.Fatal(err)
	}
	e, err := Find(context.Background(), m, g, mesh, Options{})
	if err != nil {
		tb.Fatal(err)
	}
	return e
}

func TestShow(t *testing.T) {
	for _, s := range catalog.Shipped() {
		for _, so := range []bool{false, true} {
			if so && len(s.SpinOrbit) == 0 {
				continue
			}
			e := find(t, s.ID, so, 24)
			fmt.Printf("%-20s so=%-5v %-10s gap %.6f fermi %.5f overlap %.5f\n", s.ID, so, e.Kind, e.Gap, e.Fermi, e.Overlap)
			if e.VBM != nil {
				fmt.Printf("    VBM %v set %d\n    CBM %v set %d\n    direct %v\n", e.VBM, e.VBM.Set, e.CBM, e.CBM.Set, e.Direct)
			}
		}
	}
}
