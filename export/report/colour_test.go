package report_test

import (
	"math"
	"os"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// themes reads the colours of both themes from the style sheet.
func themes(t *testing.T) map[string]map[string][3]float64 {
	t.Helper()
	sheet, err := os.ReadFile("style.css")
	if err != nil {
		t.Fatal(err)
	}
	light, dark, ok := strings.Cut(string(sheet), "@media screen and (prefers-color-scheme: dark)")
	if !ok {
		t.Fatal("the style sheet has no dark theme")
	}
	dark, _, _ = strings.Cut(dark, "\n}\n")
	return map[string]map[string][3]float64{"light": colours(t, light), "dark": colours(t, dark)}
}

var colour = regexp.MustCompile(`--([a-z]+): #([0-9a-f]{6});`)

func colours(t *testing.T, sheet string) map[string][3]float64 {
	t.Helper()
	out := map[string][3]float64{}
	for _, m := range colour.FindAllStringSubmatch(sheet, -1) {
		v, err := strconv.ParseUint(m[2], 16, 32)
		if err != nil {
			t.Fatal(err)
		}
		for k := range 3 {
			out[m[1]] = set(out[m[1]], k, linearLight(float64(v>>(16-8*k)&255)/255))
		}
	}
	return out
}

func set(c [3]float64, k int, v float64) [3]float64 {
	c[k] = v
	return c
}

// linearLight undoes the transfer function of sRGB (IEC 61966-2-1).
func linearLight(v float64) float64 {
	if v <= 0.04045 {
		return v / 12.92
	}
	return math.Pow((v+0.055)/1.055, 2.4)
}

// contrast is that of the Web Content Accessibility Guidelines 2.2.
func contrast(a, b [3]float64) float64 {
	x, y := luminance(a), luminance(b)
	return (max(x, y) + 0.05) / (min(x, y) + 0.05)
}

func luminance(c [3]float64) float64 { return 0.2126*c[0] + 0.7152*c[1] + 0.0722*c[2] }

// Text has a contrast of 4.5 and marks one of 3, as the guidelines ask, in both
// themes and on both grounds.
func TestContrast(t *testing.T) {
	for name, theme := range themes(t) {
		for _, ground := range []string{"paper", "panel"} {
			for text, least := range map[string]float64{"ink": 4.5, "quiet": 4.5, "link": 4.5, "harm": 4.5, "recorded": 3, "synthetic": 3, "gain": 3} {
				c, ok := theme[text]
				if got := contrast(c, theme[ground]); !ok || got < least {
					t.Errorf("%s: %s on %s has a contrast of %.2f, want %.1f", name, text, ground, got, least)
				}
			}
		}
		for _, line := range []string{"recorded", "synthetic"} {
			if got := contrast(theme[line], theme["between"]); got < 2.5 {
				t.Errorf("%s: %s beside the area between has a contrast of %.2f", name, line, got)
			}
		}
	}
}

// sights are linear maps of linear light as dichromats see it: severity 1.0 of
// G. M. Machado, M. M. Oliveira, L. A. F. Fernandes, "A physiologically-based
// model for simulation of color vision deficiency", IEEE Transactions on
// Visualization and Computer Graphics 15 (2009) 1291–1298, table 1 (from memory).
var sights = map[string][3][3]float64{
	"all cones":    {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}},
	"protanopia":   {{0.152286, 1.052583, -0.204868}, {0.114503, 0.786281, 0.099216}, {-0.003882, -0.048116, 1.051998}},
	"deuteranopia": {{0.367322, 0.860646, -0.227968}, {0.280085, 0.672501, 0.047413}, {-0.011820, 0.042940, 0.968881}},
	"tritanopia":   {{1.255528, -0.076749, -0.178779}, {-0.078411, 0.930809, 0.147602}, {0.004733, 0.691367, 0.303900}},
}

// seen returns a colour in CIELAB (D65) as an eye sees it.
func seen(c [3]float64, sight [3][3]float64) [3]float64 {
	var v [3]float64
	for i, row := range sight {
		v[i] = min(1, max(0, row[0]*c[0]+row[1]*c[1]+row[2]*c[2]))
	}
	f := func(t float64) float64 {
		if t > 216.0/24389 {
			return math.Cbrt(t)
		}
		return (24389.0/27*t + 16) / 116
	}
	x := f((0.4124564*v[0] + 0.3575761*v[1] + 0.1804375*v[2]) / 0.95047)
	y := f(0.2126729*v[0] + 0.7151522*v[1] + 0.0721750*v[2])
	z := f((0.0193339*v[0] + 0.1191920*v[1] + 0.9503041*v[2]) / 1.08883)
	return [3]float64{116*y - 16, 500 * (x - y), 200 * (y - z)}
}

// leastApart is the CIE 1976 difference that colours of marks keep from each
// other, ten times one that is just noticed (about 2.3).
const leastApart = 23

// The colours of marks stay apart for people who lack one kind of cone.
func TestColoursStayApart(t *testing.T) {
	marks := []string{"recorded", "synthetic", "gain", "harm"}
	for name, theme := range themes(t) {
		for eye, sight := range sights {
			for i, a := range marks {
				for _, b := range marks[:i] {
					p, q := seen(theme[a], sight), seen(theme[b], sight)
					if d := math.Sqrt(math.Pow(p[0]-q[0], 2) + math.Pow(p[1]-q[1], 2) + math.Pow(p[2]-q[2], 2)); d < leastApart {
						t.Errorf("%s, %s: %s and %s are %.1f apart, want %d", name, eye, a, b, d, leastApart)
					}
				}
			}
		}
	}
}
