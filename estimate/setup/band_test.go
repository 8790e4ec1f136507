package setup

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// TestOctaveEdges compares with IEC 61260-1:2014 (from memory): exact middle and edge frequencies of
// the bands that are called 31.5 Hz to 16 kHz.
func TestOctaveEdges(t *testing.T) {
	for _, test := range []struct {
		nominal, lower, middle, upper float64
	}{
		{31.5, 22.387, 31.623, 44.668},
		{63, 44.668, 63.096, 89.125},
		{125, 89.125, 125.89, 177.83},
		{250, 177.83, 251.19, 354.81},
		{500, 354.81, 501.19, 707.95},
		{1000, 707.95, 1000, 1412.5},
		{2000, 1412.5, 1995.3, 2818.4},
		{16000, 11220, 15849, 22387},
	} {
		x := math.Round(math.Log10(test.nominal/1000) / 0.3)
		lower, upper := octaveEdge(x), octaveEdge(x+1)
		for _, pair := range [][2]float64{{lower, test.lower}, {math.Sqrt(lower * upper), test.middle}, {upper, test.upper}} {
			if math.Abs(pair[0]/pair[1]-1) > 5e-5 { // five digits are given
				t.Errorf("band of %v Hz: %.6g Hz, want %v", test.nominal, pair[0], pair[1])
			}
		}
	}
}

func TestOctaves(t *testing.T) {
	for _, test := range []struct {
		name        string
		first, last int
		spacingHz   float64
		want        [][2]int
	}{
		{"lines 2.5 Hz apart from 20 to 1000 Hz", 8, 400, 2.5, [][2]int{{8, 17}, {18, 35}, {36, 71}, {72, 141}, {142, 283}, {284, 400}}},
		{"short ones at both ends join", 17, 73, 2.5, [][2]int{{17, 35}, {36, 73}}},
		{"lines far apart", 3, 16, 62.5, [][2]int{{3, 11}, {12, 16}}},
		{"fewer than four lines in all", 3, 5, 100, [][2]int{{3, 5}}},
		{"one line", 7, 7, 1, [][2]int{{7, 7}}},
	} {
		t.Run(test.name, func(t *testing.T) {
			var got [][2]int
			for _, b := range octaves(test.first, test.last, test.spacingHz) {
				got = append(got, [2]int{b.first, b.last})
			}
			if len(got) != len(test.want) {
				t.Fatalf("bands %v, want %v", got, test.want)
			}
			for i := range got {
				if got[i] != test.want[i] {
					t.Errorf("bands %v, want %v", got, test.want)
				}
			}
		})
	}
}

// TestOctavesHoldEveryLineOnce goes through all kinds of grids.
func TestOctavesHoldEveryLineOnce(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		first := rapid.IntRange(1, 3000).Draw(t, "first")
		last := first + rapid.IntRange(0, 3000).Draw(t, "lines")
		spacingHz := rapid.Float64Range(1e-3, 500).Draw(t, "spacing")
		next := first
		bands := octaves(first, last, spacingHz)
		for _, b := range bands {
			n := b.last - b.first + 1
			if b.first != next || n < 1 || n < minBandLines && len(bands) > 1 {
				t.Fatalf("bands %v of lines %d to %d", bands, first, last)
			}
			if b.hz[0] != float64(b.first)*spacingHz || b.hz[1] != float64(b.last)*spacingHz {
				t.Fatalf("band %v lies at %v Hz", b, b.hz)
			}
			next = b.last + 1
		}
		if next != last+1 {
			t.Fatalf("bands end at line %d of %d", next-1, last)
		}
	})
}

func TestRunsOfLines(t *testing.T) {
	c := newCheck(parseRig(t, madeRig), nil)
	low := map[int]bool{8: true, 10: true, 13: true, 17: true, 400: true}
	var got [][2]int
	for _, b := range c.runs(func(k int) bool { return low[k] }) {
		got = append(got, [2]int{b.first, b.last})
	}
	// Hann smears two lines far: 10 and 13 are one stretch, 13 and 17 are two.
	want := [][2]int{{8, 13}, {17, 17}, {400, 400}}
	if len(got) != len(want) || got[0] != want[0] || got[1] != want[1] || got[2] != want[2] {
		t.Errorf("bands %v, want %v", got, want)
	}
}
