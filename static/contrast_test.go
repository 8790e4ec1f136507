package static

import (
	"fmt"
	"math"
	"regexp"
	"strings"
	"testing"
)

// Least contrasts of Web Content Accessibility Guidelines 2.1, success criteria 1.4.3 and 1.4.11.
const (
	leastText  = 4.5
	leastCurve = 3.0
)

// schemes reads the colours of style.css, light first; what dark does not change is as in light.
func schemes(t *testing.T) map[string]map[string]string {
	t.Helper()
	text := own(t)["style.css"]
	light, dark, ok := strings.Cut(text, "@media (prefers-color-scheme: dark)")
	if !ok {
		t.Fatal("style.css has no dark scheme")
	}
	dark, _, _ = strings.Cut(dark, "\n}\n")
	all := map[string]map[string]string{"light": {}, "dark": {}}
	pattern := regexp.MustCompile(`--([a-z0-9-]+): (#[0-9a-f]{6});`)
	for _, found := range pattern.FindAllStringSubmatch(light, -1) {
		all["light"][found[1]], all["dark"][found[1]] = found[2], found[2]
	}
	for _, found := range pattern.FindAllStringSubmatch(dark, -1) {
		all["dark"][found[1]] = found[2]
	}
	return all
}

// contrast is the ratio of the relative luminances, from 1 to 21, as WCAG 2.1 defines them.
func contrast(a, b string) float64 {
	x, y := luminance(a), luminance(b)
	return (max(x, y) + 0.05) / (min(x, y) + 0.05)
}

func luminance(colour string) float64 {
	var c [3]int
	if _, err := fmt.Sscanf(colour, "#%02x%02x%02x", &c[0], &c[1], &c[2]); err != nil {
		panic(colour + ": " + err.Error())
	}
	weights := [3]float64{0.2126, 0.7152, 0.0722}
	sum := 0.0
	for i, v := range c {
		s := float64(v) / 255
		if s <= 0.03928 {
			s /= 12.92
		} else {
			s = math.Pow((s+0.055)/1.055, 2.4)
		}
		sum += weights[i] * s
	}
	return sum
}

// mix is the colour at a share of the way from a to b.
func mix(a, b string, share float64) string {
	mixed := "#"
	for i := 1; i < 7; i += 2 {
		var from, to int
		if _, err := fmt.Sscanf(a[i:i+2]+" "+b[i:i+2], "%02x %02x", &from, &to); err != nil {
			panic(a + ", " + b + ": " + err.Error())
		}
		mixed += fmt.Sprintf("%02x", int(math.Round(float64(from)+share*float64(to-from))))
	}
	return mixed
}

func TestContrastFormula(t *testing.T) {
	// 21 by definition; 4.48 and 4.54 for the two greys around 4.5, from memory and well known.
	for _, test := range []struct {
		a, b string
		want float64
	}{{"#000000", "#ffffff", 21}, {"#777777", "#ffffff", 4.48}, {"#767676", "#ffffff", 4.54}} {
		if got := contrast(test.a, test.b); math.Abs(got-test.want) > 0.005 {
			t.Errorf("%s on %s: %.3f, want %.2f", test.a, test.b, got, test.want)
		}
	}
}

func TestContrast(t *testing.T) {
	for scheme, colours := range schemes(t) {
		check := func(front, back string, least float64) {
			t.Helper()
			f, ok := colours[front]
			if !ok {
				f = front
			}
			b, ok := colours[back]
			if !ok {
				b = back
			}
			if got := contrast(f, b); got < least {
				t.Errorf("%s: %s on %s has a contrast of %.2f, want %.1f", scheme, front, back, got, least)
			}
		}
		for _, back := range []string{"paper", "panel", "field"} {
			check("ink", back, leastText)
			check("soft", back, leastText)
			check("focus", back, leastCurve)
		}
		for _, state := range []string{"waiting", "settling", "averaging", "enough", "stop", "look", "paused"} {
			check("#ffffff", state, leastText)
		}
		check("caution-ink", "caution-paper", leastText)
		check("old-ink", "old-paper", leastText)
		check("old-ink", "#ffd000", leastText) // the other stripe
		check("paper", "ink", leastText)       // the line of a run that has ended
		check("panel", "ink", leastText)       // the strong button
		check("plot-text", "panel", leastText)
		check("plot-worst", "panel", leastText) // also the word of a raised event

		check("flag", "panel", leastCurve)
		for shade := range 11 { // of the map, in tenths, and the stroke on it: see heatpaint.js
			stroke := "heat-over"
			if shade > 5 {
				stroke = "plot-text"
			}
			check(stroke, mix(colours["heat-low"], colours["heat-high"], float64(shade)/10), leastCurve)
		}

		curves := 0
		for name := range colours {
			if strings.HasPrefix(name, "plot-") && name != "plot-grid" {
				check(name, "panel", leastCurve)
				curves++
			}
		}
		if curves < 25 {
			t.Errorf("%s: only %d colours of plots were found", scheme, curves)
		}
	}
}
