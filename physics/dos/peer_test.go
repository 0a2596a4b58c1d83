package dos

import (
	"bufio"
	"bytes"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// TestPeerDensity computes the density of silicon with projections on 48³ at
// 2000 energies, symmetry and mesh included, in turns with the numpy script,
// and fails above a tenth of its time.
func TestPeerDensity(t *testing.T) {
	if os.Getenv("BANDWRIGHT_BENCH") != "1" {
		t.Skip("set BANDWRIGHT_BENCH=1 to measure against numpy")
	}
	const needed = 10
	m := model(t, "vogl1983/Si", false)
	energies := evenly(-13, 13, 2000)
	ours, theirs := math.Inf(1), math.Inf(1)
	for round := range 5 {
		start := time.Now()
		d := computed(t, m, 48, Options{Projections: true})
		c, err := d.Evaluate(energies)
		if err != nil {
			t.Fatal(err)
		}
		ours = min(ours, time.Since(start).Seconds())
		seconds, lines := numpy(t, "dos_numpy.py", "48", "-13", "13", "2000")
		theirs = min(theirs, seconds)
		if round == 0 {
			compare(t, d, c, lines)
		}
	}
	fmt.Printf("Density of states with projections, 48³, 2000 energies: ours %.1f ms, numpy %.1f ms, ratio %.1f (needed %d); fastest of several rounds in turns\n",
		1e3*ours, 1e3*theirs, theirs/ours, needed)
	if theirs/ours < needed {
		t.Errorf("%.1f times as fast as numpy, %d is needed", theirs/ours, needed)
	}
}

// compare checks lines of energy, total, s, p, s* against every 20th energy.
// Ours spreads tetrahedra narrower than 1 meV over the spacing, here 13 meV: at
// an energy beside such ones, as next to the flat band at X, up to 1 % may differ.
func compare(t *testing.T, d *DOS, c *Curve, lines [][5]float64) {
	t.Helper()
	if len(lines) != 100 {
		t.Fatalf("numpy gave %d energies, want 100", len(lines))
	}
	beside := 0
	for n, line := range lines {
		i := 20 * n
		got := [5]float64{c.E[i], c.Total[i]}
		for g, group := range d.Groups {
			switch group.L.String() {
			case "s":
				got[2] += c.Groups[g][i]
			case "p":
				got[3] += c.Groups[g][i]
			case "s*":
				got[4] += c.Groups[g][i]
			}
		}
		largest := 0.0
		for j := range got {
			largest = max(largest, math.Abs(got[j]-line[j])/(1+c.Total[i]))
		}
		if largest > 1e-5 {
			if beside++; largest > 0.01 || beside > 2 {
				t.Fatalf("energy %d: energy, total, s, p, s* are %.9g, numpy has %.9g", i, got, line)
			}
		}
	}
}

func numpy(t *testing.T, script string, args ...string) (seconds float64, lines [][5]float64) {
	t.Helper()
	path, err := filepath.Abs(filepath.Join("../../testdata/peers", script))
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("/usr/bin/python3", append([]string{path}, args...)...)
	for _, v := range os.Environ() {
		// These would choose kernels for another processor.
		if !strings.HasPrefix(v, "OPENBLAS_CORETYPE=") && !strings.HasPrefix(v, "OPENBLAS_L2_SIZE=") {
			cmd.Env = append(cmd.Env, v)
		}
	}
	var stderr bytes.Buffer
	cmd.Stderr = &stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("%s: %v\n%s(python3 with numpy is needed)", script, err, &stderr)
	}
	scanner := bufio.NewScanner(bytes.NewReader(out))
	for scanner.Scan() {
		text := scanner.Text()
		if _, err := fmt.Sscanf(text, "seconds %g", &seconds); err == nil {
			continue
		}
		var line [5]float64
		if _, err := fmt.Sscan(text, &line[0], &line[1], &line[2], &line[3], &line[4]); err != nil {
			t.Fatalf("%s: %q: %v", script, text, err)
		}
		lines = append(lines, line)
	}
	return seconds, lines
}
