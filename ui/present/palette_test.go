package present

import (
	"fmt"
	"image/color"
	"math"
	"testing"
)

// linear is an sRGB colour as linear light, 0 … 1 (IEC 61966-2-1).
func linear(c color.NRGBA) (v [3]float64) {
	for i, b := range []uint8{c.R, c.G, c.B} {
		x := float64(b) / 255
		if x <= 0.04045 {
			v[i] = x / 12.92
		} else {
			v[i] = math.Pow((x+0.055)/1.055, 2.4)
		}
	}
	return v
}

// lab is linear light in CIELAB, white point D65 (CIE 15).
func lab(v [3]float64) (l, a, b float64) {
	xyz := [3]float64{
		(0.4124564*v[0] + 0.3575761*v[1] + 0.1804375*v[2]) / 0.95047,
		0.2126729*v[0] + 0.7151522*v[1] + 0.0721750*v[2],
		(0.0193339*v[0] + 0.1191920*v[1] + 0.9503041*v[2]) / 1.08883,
	}
	var f [3]float64
	for i, t := range xyz {
		if t > 216.0/24389 {
			f[i] = math.Cbrt(t)
		} else {
			f[i] = (24389.0/27*t + 16) / 116
		}
	}
	return 116*f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])
}

// ciede2000 is the colour difference of G. Sharma, W. Wu, E. N. Dalal, Color
// Res. Appl. 30, 21 (2005), eqs. 2–22, all weights 1.
func ciede2000(l1, a1, b1, l2, a2, b2 float64) float64 {
	rad := math.Pi / 180
	c7 := math.Pow((math.Hypot(a1, b1)+math.Hypot(a2, b2))/2, 7)
	g := 0.5 * (1 - math.Sqrt(c7/(c7+math.Pow(25, 7))))
	a1, a2 = (1+g)*a1, (1+g)*a2
	c1, c2 := math.Hypot(a1, b1), math.Hypot(a2, b2)
	hue := func(a, b float64) float64 {
		if a == 0 && b == 0 {
			return 0
		}
		h := math.Atan2(b, a) / rad
		if h < 0 {
			h += 360
		}
		return h
	}
	h1, h2 := hue(a1, b1), hue(a2, b2)
	dh := 0.0
	if c1*c2 != 0 {
		dh = h2 - h1
		if dh > 180 {
			dh -= 360
		} else if dh < -180 {
			dh += 360
		}
	}
	dL, dC, dH := l2-l1, c2-c1, 2*math.Sqrt(c1*c2)*math.Sin(dh/2*rad)
	lm, cm := (l1+l2)/2, (c1+c2)/2
	hm := h1 + h2
	if c1*c2 != 0 {
		switch {
		case math.Abs(h1-h2) <= 180:
			hm = (h1 + h2) / 2
		case h1+h2 < 360:
			hm = (h1 + h2 + 360) / 2
		default:
			hm = (h1 + h2 - 360) / 2
		}
	}
	t := 1 - 0.17*math.Cos((hm-30)*rad) + 0.24*math.Cos(2*hm*rad) + 0.32*math.Cos((3*hm+6)*rad) - 0.20*math.Cos((4*hm-63)*rad)
	theta := 30 * math.Exp(-math.Pow((hm-275)/25, 2))
	cm7 := math.Pow(cm, 7)
	rc := 2 * math.Sqrt(cm7/(cm7+math.Pow(25, 7)))
	sl := 1 + 0.015*math.Pow(lm-50, 2)/math.Sqrt(20+math.Pow(lm-50, 2))
	sc, sh := 1+0.045*cm, 1+0.015*cm*t
	rt := -math.Sin(2*theta*rad) * rc
	return math.Sqrt(dL*dL/sl/sl + dC*dC/sc/sc + dH*dH/sh/sh + rt*dC/sc*dH/sh)
}

// Pairs of table 1 of Sharma, Wu, Dalal 2005, from memory.
func TestColourDifference(t *testing.T) {
	for _, c := range [][7]float64{
		{50, 2.6772, -79.7751, 50, 0, -82.7485, 2.0425},
		{50, 3.1571, -77.2803, 50, 0, -82.7485, 2.8615},
		{50, 0, 0, 50, -1, 2, 2.3669},
		{50, 2.5, 0, 50, 0, -2.5, 4.3065},
		{50, 2.5, 0, 73, 25, -18, 27.1492},
		{50, 2.5, 0, 58, 24, 15, 19.4535},
		{60.2574, -34.0099, 36.2677, 60.4626, -34.1751, 39.4387, 1.2644},
		{2.0776, 0.0795, -1.1350, 0.9033, -0.0636, -0.5514, 0.9082},
	} {
		if got := ciede2000(c[0], c[1], c[2], c[3], c[4], c[5]); math.Abs(got-c[6]) > 1e-4 {
			t.Errorf("%v: %.4f", c, got)
		}
	}
}

// visions are the matrices for complete protanopia, deuteranopia and
// tritanopia, on linear light: G. M. Machado, M. M. Oliveira, L. A. F.
// Fernandes, IEEE Trans. Vis. Comput. Graph. 15, 1291 (2009), severity 1.0,
// from memory.
var visions = map[string][3][3]float64{
	"full":   {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}},
	"protan": {{0.152286, 1.052583, -0.204868}, {0.114503, 0.786281, 0.099216}, {-0.003882, -0.048116, 1.051998}},
	"deutan": {{0.367322, 0.860646, -0.227968}, {0.280085, 0.672501, 0.047413}, {-0.011820, 0.042940, 0.968881}},
	"tritan": {{1.255528, -0.076749, -0.178779}, {-0.078411, 0.930809, 0.147602}, {0.004733, 0.691367, 0.303900}},
}

// Each row of the matrices leaves grey as it is.
func TestVisionsKeepGrey(t *testing.T) {
	for name, m := range visions {
		for i, row := range m {
			if s := row[0] + row[1] + row[2]; math.Abs(s-1) > 2e-5 {
				t.Errorf("%s, row %d sums to %g", name, i, s)
			}
		}
	}
}

func seen(c color.NRGBA, vision string) (out [3]float64) {
	v, m := linear(c), visions[vision]
	for i := range out {
		out[i] = max(0, min(1, m[i][0]*v[0]+m[i][1]*v[1]+m[i][2]*v[2]))
	}
	return out
}

// apart is the least difference of two colours over all kinds of vision.
func apart(a, b color.NRGBA) (least float64, vision string) {
	least = math.Inf(1)
	for name := range visions {
		l1, a1, b1 := lab(seen(a, name))
		l2, a2, b2 := lab(seen(b, name))
		if d := ciede2000(l1, a1, b1, l2, a2, b2); d < least {
			least, vision = d, name
		}
	}
	return least, vision
}

func lightness(c color.NRGBA) float64 {
	l, _, _ := lab(linear(c))
	return l
}

// contrast is the ratio of WCAG 2.
func contrast(a, b color.NRGBA) float64 {
	lum := func(c color.NRGBA) float64 {
		v := linear(c)
		return 0.2126*v[0] + 0.7152*v[1] + 0.0722*v[2] + 0.05
	}
	x, y := lum(a), lum(b)
	return max(x, y) / min(x, y)
}

// The bounds of the design: ΔE₀₀ ≥ 20 for every kind of vision and 12 in
// lightness between the colours of shells, and between those of bonding and
// antibonding; WCAG 2, level AA, for text.
func TestPalettes(t *testing.T) {
	for name, theme := range map[string]*Theme{"light": Light(), "dark": Night()} {
		t.Run(name, func(t *testing.T) {
			pair := func(what string, a, b color.NRGBA, difference, grey float64) {
				t.Helper()
				if d, vision := apart(a, b); d < difference {
					t.Errorf("%s: ΔE₀₀ %.1f for %s vision", what, d, vision)
				}
				if d := math.Abs(lightness(a) - lightness(b)); d < grey {
					t.Errorf("%s: %.1f apart in lightness", what, d)
				}
			}
			for i, a := range theme.Orbital {
				for j := range i {
					pair(fmt.Sprintf("shells %d and %d", j, i), a, theme.Orbital[j], 20, 12)
				}
				if r := contrast(theme.OrbitInk[i], a); r < 3 {
					t.Errorf("text on shell %d: contrast %.2f", i, r)
				}
				if r := contrast(theme.Panel, a); r < 1.9 {
					t.Errorf("shell %d on its panel: contrast %.2f", i, r)
				}
			}
			pair("bonding and antibonding", theme.Bonding, theme.Against, 20, 12)
			for what, c := range map[string]color.NRGBA{"ink": theme.Ink, "soft": theme.Soft, "good": theme.Good, "caution": theme.Caution, "bad": theme.Bad} {
				for where, paper := range map[string]color.NRGBA{"panel": theme.Panel, "paper": theme.Paper} {
					if r := contrast(c, paper); r < 4.5 {
						t.Errorf("%s on %s: contrast %.2f", what, where, r)
					}
				}
			}
		})
	}
}
