package watch

import (
	"math"
	"slices"
	"testing"
)

func TestCorrelatedBands(t *testing.T) {
	step := func(bands ...[3]float64) func(k int) float64 {
		return func(k int) float64 {
			for _, b := range bands {
				if k >= int(b[0]) && k <= int(b[1]) {
					return b[2]
				}
			}
			return 0
		}
	}
	for _, test := range []struct {
		name   string
		common func(k int) float64
		want   [][2]int // lines
		cause  Cause
	}{
		{"none", step(), nil, ""},
		{"0.25 everywhere", func(int) float64 { return 0.25 }, nil, ""},
		{"0.8 on 40 lines", step([3]float64{100, 139, 0.8}), [][2]int{{100, 139}}, ""},
		{"0.7 on 10, 0.95 on 6 lines", step([3]float64{50, 59, 0.7}, [3]float64{200, 205, 0.95}), [][2]int{{50, 59}, {200, 205}}, ""},
		{"two lines", step([3]float64{100, 101, 0.95}), nil, ""},
		{"hum at 50 Hz", step([3]float64{19, 21, 0.95}), [][2]int{{19, 21}}, CauseMains},
		{"six lines at 50 Hz", step([3]float64{17, 22, 0.95}), [][2]int{{17, 22}}, ""},
	} {
		t.Run(test.name, func(t *testing.T) {
			for seed := range 2 * *manySeeds {
				d := newDrawn(uint64(*firstSeed+seed), 2, 2, 300)
				d.common = test.common
				var got [][2]int
				for _, f := range d.look(16, 24, 36, 54, 80) {
					if f.kind != ForcesCorrelated {
						continue
					}
					if f.cause != test.cause {
						t.Errorf("cause %q, want %q", f.cause, test.cause)
					}
					for _, b := range f.bandsHz {
						got = append(got, [2]int{int(b[0]/drawnSpacingHz + 0.5), int(b[1]/drawnSpacingHz + 0.5)})
					}
				}
				slices.SortFunc(got, func(a, b [2]int) int { return a[0] - b[0] })
				if !slices.EqualFunc(got, test.want, func(a, b [2]int) bool {
					return max(a[0]-b[0], b[0]-a[0], a[1]-b[1], b[1]-a[1]) <= sameEdge
				}) {
					t.Errorf("lines %v, want %v", got, test.want)
				}
			}
		})
	}
}

// TestHumIsNarrow: the middle of a wider band that is all that few averages show is no hum, and hum is.
func TestHumIsNarrow(t *testing.T) {
	for _, test := range []struct {
		name   string
		common func(k int) float64
		mains  bool
	}{
		{"a band around 50 Hz", func(k int) float64 { return max(0, 0.97-0.08*math.Abs(float64(k)-20)) }, false},
		{"hum at 50 Hz", func(k int) float64 {
			if k >= 19 && k <= 21 {
				return 0.95
			}
			return 0
		}, true},
	} {
		hum, band := 0, 0
		for seed := range 20 {
			for _, n := range []int{16, 18, 20} {
				d := newDrawn(uint64(*firstSeed+seed), 2, 2, 300)
				d.common = test.common
				for _, f := range d.look(n) {
					switch {
					case f.kind == ForcesCorrelated && f.cause == CauseMains:
						hum++
					case f.kind == ForcesCorrelated:
						band++
					}
				}
			}
		}
		if (hum > 0) != test.mains || (band > 0) == test.mains {
			t.Errorf("%s: hum %d times, a band %d times", test.name, hum, band)
		}
	}
}
